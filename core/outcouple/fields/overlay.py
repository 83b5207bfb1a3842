"""A checked scalar model with arrays of samples laid over some of its numbers."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np
from numpy.typing import NDArray
from pydantic import BaseModel

from outcouple.errors import UserMistake
from outcouple.fields.leaves import Leaf, leaves
from outcouple.quantities import format_quantity

__all__ = ["Overlay", "check_overlay", "overlaid"]

Floats = NDArray[np.float64]
Path = tuple[str, ...]


class Overlay:
    """Read-only attributes of a model: every number with a unit is an array, (1,) or (S,), all else as the model holds it."""

    __slots__ = ("__dict__",)

    def __init__(self, values: dict[str, Any]) -> None:
        self.__dict__.update(values)

    def __setattr__(self, key: str, value: Any) -> None:
        raise AttributeError(f"{key}: a design's parameters are read-only")


def overlaid(model: BaseModel, samples: Mapping[Path, Floats]) -> Overlay:
    """Lay arrays over the numbers of a model; paths the model does not have are passed over."""
    numbers = {leaf.path for leaf in leaves(type(model)) if not leaf.structural}
    return _overlay(model, samples, numbers, ())


def _overlay(model: BaseModel, samples: Mapping[Path, Floats], numbers: set[Path], before: Path) -> Overlay:
    values: dict[str, Any] = {}
    for key in type(model).model_fields:
        value = getattr(model, key)
        path = (*before, key)
        if path in numbers:
            laid = samples.get(path)
            if laid is not None:
                value = np.asarray(laid, dtype=float)
            elif value is not None:
                value = np.array([value], dtype=float)
        elif isinstance(value, BaseModel):
            value = _overlay(value, samples, numbers, path)
        values[key] = value
    return Overlay(values)


def check_overlay(model: BaseModel, samples: Mapping[Path, Floats]) -> None:
    """Raise UserMistake where a path is not a number of the model or a sample leaves its bounds."""
    known = {leaf.path: leaf for leaf in leaves(type(model))}
    for path, values in samples.items():
        leaf = known.get(path)
        if leaf is None or leaf.structural:
            raise UserMistake(f"{'.'.join(path)} is not a number of this design and cannot vary")
        _check_bounds(leaf, np.asarray(values, dtype=float))


def _check_bounds(leaf: Leaf, values: Floats) -> None:
    if not np.all(np.isfinite(values)):
        raise UserMistake(f"{leaf.name}: a sample is not a finite number")
    low = -np.inf if leaf.low is None else leaf.low
    high = np.inf if leaf.high is None else leaf.high
    above = values > low if leaf.meta.get("gt") is not None else values >= low
    below = values < high if leaf.meta.get("lt") is not None else values <= high
    if not np.all(above & below):
        first = float(values[~(above & below)][0])
        shown = format_quantity(first, leaf.kind, unit=leaf.unit or None)
        raise UserMistake(f"{leaf.name}: {shown} is outside {leaf.bounds}")
