"""Mistakes in a design file told all in one go, each with its place."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any, NoReturn

from outcouple.design.toml_source import TomlSource
from outcouple.errors import UserMistake
from outcouple.fields import Problem, collect
from outcouple.fields.problems import dotted

__all__ = ["Problem", "collect", "raise_problems"]

Path = tuple[str, ...]


def raise_problems(problems: Sequence[Problem], source: TomlSource | None, file: str) -> NoReturn:
    """Raise one UserMistake with a line per problem, in the order of the file.

    A wrong value is found at the value, a wrong key at the key, something missing at the table it is missing from:
    ``tank.toml:14:14 emitter.half_angle = "30": unit missing; write "30 deg" (...)``.
    """
    rows = []
    for problem in problems:
        place = (0, 0)
        if source is not None:
            place = source.position(problem.path, part="key" if problem.given is None else "value")
        where = f"{file}:{place[0]}:{place[1]} " if source is not None else f"{file}: "
        rows.append((place, where + problem.line(_named(problem.path, source))))
    raise UserMistake(*dict.fromkeys(text for _, text in sorted(rows, key=lambda row: row[0])))


def _named(path: Path, source: TomlSource | None) -> str:
    """The dotted path, states and requirements by name where they have one, by number (from 1) where they have none."""
    parts: list[str] = []
    here: Any = source.data if source is not None else None
    for key in path:
        here = _step(here, key)
        if parts and key.isdigit():
            name = (here.get("name") or here.get("metric")) if isinstance(here, Mapping) else None
            parts[-1] += f"[{name if isinstance(name, str) and name else int(key) + 1}]"
        else:
            parts.append(dotted([key]))
    return ".".join(parts)


def _step(here: Any, key: str) -> Any:
    if isinstance(here, Mapping):
        return here.get(key)
    return here[int(key)] if isinstance(here, list) and key.isdigit() and int(key) < len(here) else None
