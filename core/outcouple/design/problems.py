"""Mistakes in a design file, each with its place, told all in one go."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, NoReturn

from pydantic import BaseModel, ValidationError

from outcouple.design.toml_source import TomlSource
from outcouple.errors import UserMistake, nearest
from outcouple.fields import leaves

__all__ = ["Problem", "collect", "raise_problems"]

Path = tuple[str, ...]


@dataclass(frozen=True)
class Problem:
    """One mistake: where, what was given, what is wrong, what is allowed."""

    path: Path
    given: Any
    message: str
    hint: str = ""

    def line(self, place: str, named: str) -> str:
        """The mistake as one line of text."""
        given = "" if self.given is None else f" = {_shown(self.given)}"
        hint = f"; {self.hint}" if self.hint else ""
        return f"{place} {named}{given}: {self.message}{hint}"


def _shown(value: Any) -> str:
    if isinstance(value, str):
        return f'"{value}"'
    if isinstance(value, bool):
        return "true" if value else "false"
    text = str(value)
    return text if len(text) <= 60 else text[:57] + "..."


def collect(error: ValidationError, model: type[BaseModel], before: Path = ()) -> list[Problem]:
    """The findings of pydantic as problems, with bounds and meaning of the field beside them."""
    known = {leaf.path: leaf for leaf in leaves(model)}
    found = []
    for row in error.errors(include_url=False):
        path = tuple(str(part) for part in row["loc"])
        leaf = known.get(path)
        if row["type"] == "extra_forbidden":
            siblings = [one.path[-1] for one in known.values() if one.path[:-1] == path[:-1]]
            siblings += [key for key in _tables(model, path[:-1]) if key not in siblings]
            message, hint = f"unknown key{nearest(path[-1], siblings)}", f"allowed: {', '.join(siblings)}"
            found.append(Problem((*before, *path), None, message, hint))
        elif row["type"] == "missing":
            hint = leaf.describe if leaf else ""
            found.append(Problem((*before, *path), None, "is missing", hint))
        elif row["type"] == "outcouple":
            hint = (
                f"{leaf.bounds}; {leaf.describe}" if leaf and leaf.bounds else leaf.describe if leaf else ""
            )
            found.append(Problem((*before, *path), row["input"], row["msg"], hint))
        elif row["type"] in ("model_type", "model_attributes_type", "dict_type"):
            found.append(Problem((*before, *path), row["input"], "must be a table", ""))
        else:
            found.append(
                Problem((*before, *path), row["input"], row["msg"].lower(), leaf.describe if leaf else "")
            )
    return found


def _tables(model: type[BaseModel], path: Path) -> list[str]:
    here: Any = model
    for key in path:
        info = here.model_fields.get(key)
        here = info.annotation if info is not None else None
        if not (isinstance(here, type) and issubclass(here, BaseModel)):
            return []
    return list(here.model_fields)


def raise_problems(problems: Sequence[Problem], source: TomlSource | None, file: str) -> NoReturn:
    """Raise one UserMistake with a line per problem, in the order of the file."""
    rows = []
    for problem in problems:
        line, column = source.position(problem.path) if source else (0, 0)
        place = f"{file}:{line}:{column}" if source else f"{file}:"
        rows.append(((line, column), problem.line(place, _named(problem.path, source))))
    raise UserMistake(*dict.fromkeys(text for _, text in sorted(rows, key=lambda row: row[0])))


def _named(path: Path, source: TomlSource | None) -> str:
    """The dotted path, states and requirements by name where they have one."""
    parts = list(path)
    if source is not None and len(parts) > 1 and parts[1].isdigit():
        rows = source.data.get(parts[0])
        at = int(parts[1])
        row = rows[at] if isinstance(rows, list) and at < len(rows) and isinstance(rows[at], dict) else {}
        name = row.get("name") or row.get("metric")
        parts[1] = str(name) if isinstance(name, str) and name else f"number {at + 1}"
    return ".".join(parts)
