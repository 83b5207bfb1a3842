"""A checked section with arrays of samples laid over some of its numbers."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np
from numpy.typing import NDArray
from pydantic import BaseModel

from outcouple.errors import UserMistake
from outcouple.fields.leaves import Leaf
from outcouple.fields.models import leaf_at

__all__ = ["Overlay", "check_overlay", "overlaid"]

Floats = NDArray[np.float64]
Path = tuple[str, ...]


class Overlay:
    """Read-only attributes of a section: numbers with a unit as arrays, (1,) or (S,), all else as the section holds it.

    Attributes are made when they are first asked for. An unset optional number stays None, unless samples lie over it.
    """

    __slots__ = ("__dict__", "_model", "_samples")

    def __init__(self, model: BaseModel, samples: Mapping[Path, Floats]) -> None:
        object.__setattr__(self, "_model", model)
        object.__setattr__(self, "_samples", samples)

    def __getattr__(self, key: str) -> Any:
        if key.startswith("_") or key not in type(self._model).model_fields:
            raise AttributeError(f"{type(self._model).__name__} has no {key!r}")
        value = _laid(getattr(self._model, key), key, self._samples)
        self.__dict__[key] = value
        return value

    def __setattr__(self, key: str, value: Any) -> None:
        raise AttributeError(f"{key}: a design's parameters are read-only")

    def __reduce__(self) -> tuple[Any, ...]:
        return Overlay, (self._model, self._samples)

    def __dir__(self) -> list[str]:
        return list(type(self._model).model_fields)


def _laid(value: Any, key: str, samples: Mapping[Path, Floats]) -> Any:
    if isinstance(value, BaseModel | tuple):
        inner = {path[1:]: array for path, array in samples.items() if path[0] == key and len(path) > 1}
        if isinstance(value, BaseModel):
            return Overlay(value, inner)
        return tuple(_laid(one, str(at), inner) for at, one in enumerate(value))
    sample = samples.get((key,))
    if sample is None and not isinstance(value, float):
        return value
    array = np.array([value]) if sample is None else np.asarray(sample, dtype=float).view()
    array.flags.writeable = False
    return array


def overlaid(model: BaseModel, samples: Mapping[Path, Floats]) -> Overlay:
    """Lay arrays (S,) over the numbers of a section; paths it does not have are passed over.

    >>> from outcouple.fields import Section, quantity
    >>> class Plate(Section):
    ...     thickness: float = quantity("6 mm", "length", describe="thickness")
    >>> overlaid(Plate(), {("thickness",): [0.004, 0.005]}).thickness
    array([0.004, 0.005])
    """
    return Overlay(model, samples)


def check_overlay(model: BaseModel, samples: Mapping[Path, Floats]) -> None:
    """Raise UserMistake, a line per path, where it is no number of the section or a sample leaves its bounds."""
    lines: list[str] = []
    for path, values in samples.items():
        try:
            leaf, _ = leaf_at(model, path)
            message = _finding(leaf, np.asarray(values, dtype=float))
        except UserMistake as mistake:
            lines.extend(mistake.lines)
        else:
            lines.extend(message)
    if lines:
        raise UserMistake(*lines)


def _finding(leaf: Leaf, values: Floats) -> list[str]:
    if leaf.structural:
        return [f"{leaf.name}: a {leaf.what} cannot vary over samples"]
    if values.ndim != 1:
        return [f"{leaf.name}: samples are a row of numbers, not an array of {values.ndim} dimensions"]
    small, large = leaf.below(values), leaf.above(values)
    for wrong, words in (
        (~np.isfinite(values), "is not a finite number"),
        (small, "is too small"),
        (large, "is too large"),
    ):
        if np.any(wrong):
            at = int(np.argmax(wrong))
            shown = leaf.text(values[at]) if np.isfinite(values[at]) else str(values[at])
            more = int(np.sum(wrong)) - 1
            others = f", and {more} more" if more else ""
            return [f"{leaf.name}: sample {at + 1} of {len(values)}, {shown}, {words}{others} ({leaf.allowed})"]
    return []
