"""Mistakes in given values: where, what was given, what is wrong, what is allowed."""

from __future__ import annotations

import json
import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any, get_args

from pydantic import BaseModel, ValidationError

from outcouple.errors import nearest
from outcouple.fields.leaves import Leaf
from outcouple.fields.models import declared, leaves
from outcouple.quantities import from_unit

__all__ = ["Problem", "collect", "dotted"]

Path = tuple[str, ...]

LONGEST = 60
"""Characters of a given value that a message repeats."""


@dataclass(frozen=True)
class Problem:
    """One mistake.

    path     of the input, or of the table it is missing from
    given    what stands there; None where nothing does, or where the key itself is wrong
    message  what is wrong and what to write instead
    hint     what is allowed
    """

    path: Path
    given: Any
    message: str
    hint: str = ""

    def line(self, named: str = "") -> str:
        """The mistake as one line of text; ``named`` stands for the dotted path where there is a better name."""
        given = "" if self.given is None else f" = {_shown(self.given)}"
        hint = f"; {self.hint}" if self.hint else ""
        where = f"{named or dotted(self.path)}{given}"
        return f"{where}: {self.message}{hint}" if where else f"{self.message}{hint}"


def dotted(path: Sequence[str]) -> str:
    """A path as it stands in a file: bare keys as they are, others in quotes."""
    return ".".join(key if re.fullmatch(r"[A-Za-z0-9_-]+", key) else f'"{key}"' for key in path)


def _shown(value: Any) -> str:
    if isinstance(value, str | bool):
        text = json.dumps(value, ensure_ascii=False)
    elif isinstance(value, Mapping):
        text = "{ ... }"
    elif isinstance(value, list | tuple):
        text = "[ ... ]"
    else:
        text = str(value)
    return text if len(text) <= LONGEST else f"{text[: LONGEST - 3]}..."


def collect(error: ValidationError, model: type[BaseModel], before: Path = ()) -> list[Problem]:
    """pydantic's findings as problems, in our words; ``before`` is the path of the section in its file."""
    found = []
    for row in error.errors(include_url=False):
        path = tuple(str(part) for part in row["loc"])
        given, message, hint = _said(row, path, model)
        found.append(Problem((*before, *path), given, message, hint))
    return found


def _said(row: Any, path: Path, model: type[BaseModel]) -> tuple[Any, str, str]:
    """Given value, message and hint of one finding."""
    section = _section(model, path[:-1])
    kind = row["type"]
    if kind == "extra_forbidden":
        return None, *_unknown(path, section, model)
    info = section.model_fields.get(path[-1]) if section is not None and path else None
    leaf = declared(info) if info is not None else None
    if kind == "missing":
        return None, _missing(path[-1], leaf), ""
    if kind in ("model_type", "model_attributes_type", "dict_type"):
        return row["input"], "a table is wanted", ""
    if kind in ("tuple_type", "list_type"):
        return row["input"], "a list is wanted, in [brackets]", ""
    if kind == "value_error":
        own = isinstance(row["input"], Mapping | BaseModel)
        return None if own else row["input"], str(row["ctx"]["error"]), ""
    message = str(row["msg"])
    return row["input"], message if kind == "outcouple" else message[:1].lower() + message[1:], ""


def _missing(key: str, leaf: Leaf | None) -> str:
    return "missing" if leaf is None else f"missing; write {key} = {_example(leaf)} ({leaf.allowed})"


def _example(leaf: Leaf) -> str:
    """A value that would be taken, as a file holds it."""
    if leaf.what == "quantity":
        text = leaf.text(leaf.clip(float(from_unit(1.0, leaf.kind, leaf.unit))))
        return f'"{text}"' if leaf.unit else text
    if leaf.what == "count":
        return leaf.text(int(leaf.clip(1)))
    if leaf.what == "flag":
        return "true"
    return f'"{leaf.choices[0] if leaf.choices else "..."}"'


def _unknown(path: Path, section: type[BaseModel] | None, model: type[BaseModel]) -> tuple[str, str]:
    """Message and hint for a key nobody knows: the nearest, the section it belongs in, all that are allowed."""
    allowed = list(section.model_fields) if section is not None else []
    tables = bool(allowed) and section is not None and all(_inner(section, key) for key in allowed)
    homes = [leaf.path[:-1] for leaf in leaves(model) if leaf.path[-1] == path[-1] and leaf.path[:-1]]
    near = nearest(path[-1], allowed)
    if not near and homes:
        near = f" (it belongs in [{dotted(homes[0])}])"
    return f"unknown {'section' if tables else 'key'}{near}", f"allowed: {', '.join(allowed)}"


def _section(model: type[BaseModel], path: Path) -> type[BaseModel] | None:
    """The section at a path below a section; counts of rows are passed over."""
    here: type[BaseModel] | None = model
    for key in path:
        if here is not None and not key.isdigit():
            here = _inner(here, key)
    return here


def _inner(model: type[BaseModel], key: str) -> type[BaseModel] | None:
    info = model.model_fields.get(key)
    if info is None:
        return None
    kinds = (info.annotation, *get_args(info.annotation))
    return next((one for one in kinds if isinstance(one, type) and issubclass(one, BaseModel)), None)
