"""What-if edits: a section with some inputs changed, checked again as a whole."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, TypeVar

from pydantic import BaseModel, ValidationError

from outcouple.errors import UserMistake
from outcouple.fields.models import SI, leaf_at
from outcouple.fields.problems import Problem, collect

__all__ = ["changed"]

Path = tuple[str, ...]
Model = TypeVar("Model", bound=BaseModel)


def changed(model: Model, changes: Mapping[Path, Any]) -> Model:
    """A new section with the inputs at some paths changed.

    changes  path -> text as a person writes it, or a value as the section holds it (numbers in SI)

    Raises UserMistake with a line for every path that is no input and every value that cannot be taken; checks that
    span several inputs run again too.
    """
    data = model.model_dump()
    problems: list[str] = []
    for path, value in changes.items():
        try:
            leaf_at(model, path)
        except UserMistake as mistake:
            problems.extend(mistake.lines)
        else:
            _put(data, path, value)
    if problems:
        raise UserMistake(*problems)
    try:
        return type(model).model_validate(data, context=SI)
    except ValidationError as error:
        raise UserMistake(*(_line(model, found) for found in collect(error, type(model)))) from None


def _put(data: Any, path: Path, value: Any) -> None:
    for key in path[:-1]:
        data = data[int(key)] if isinstance(data, list | tuple) else data[key]
    data[path[-1]] = value


def _line(model: BaseModel, problem: Problem) -> str:
    """A number given in SI is shown in the input's own unit."""
    given = problem.given
    if isinstance(given, float) and problem.path:
        leaf, _ = leaf_at(model, problem.path)
        given = leaf.text(given)
    return Problem(problem.path, given, problem.message, problem.hint).line()
