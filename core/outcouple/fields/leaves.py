"""The leaves of a model: what forms, sweeps, tolerances and documentation need to know about each input."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from pydantic import BaseModel
from pydantic_core import PydanticUndefined

from outcouple.fields.models import bounds_text, checked, meta_of
from outcouple.quantities import format_quantity, parse, si_unit

__all__ = ["Leaf", "leaf_text", "leaves", "parse_leaf"]

Path = tuple[str, ...]


@dataclass(frozen=True)
class Leaf:
    """One input.

    path          of section and key
    what          "quantity", "count", "choice", "flag", or what a name stands for ("material")
    kind, unit, si_unit  of a quantity
    default_text  as a person writes it; "" where required or unset
    low, high     bounds in SI (open bounds included), None where there is none
    bounds        the bounds as a text
    structural    True for everything that does not vary over samples
    """

    path: Path
    what: str
    kind: str
    unit: str
    default_text: str
    low: float | None
    high: float | None
    bounds: str
    describe: str
    reference: str
    section: str
    deciding: bool
    optional: bool
    choices: tuple[str, ...]
    slider: str
    meta: dict[str, Any]

    @property
    def structural(self) -> bool:
        """True where the leaf cannot vary over samples."""
        return self.what != "quantity"

    @property
    def si_unit(self) -> str:
        """SI unit text."""
        return si_unit(self.kind) if self.kind else ""

    @property
    def name(self) -> str:
        """Dotted path."""
        return ".".join(self.path)

    def clip(self, value: float) -> float:
        """The value moved into the bounds; strictly inside an open one."""
        low, high = self.low, self.high
        if low is not None and value <= low:
            value = low if self.meta.get("gt") is None else low + 1e-9 * (abs(low) or abs(high or 1.0))
        if high is not None and value >= high:
            value = high if self.meta.get("lt") is None else high - 1e-9 * (abs(high) or 1.0)
        return value

    def small_step(self) -> float:
        """A step for an input that stands at zero: a hundredth of its range, one unit where it has none."""
        if self.low is not None and self.high is not None and math.isfinite(self.high - self.low):
            return (self.high - self.low) / 100
        return 1.0

    def text(self, value: Any) -> str:
        """A value of this leaf as a person writes it in a design file."""
        if value is None:
            return ""
        if self.what in ("quantity", "count"):
            return format_quantity(float(value), self.kind, unit=self.unit or None, digits=10)
        return "true" if value is True else "false" if value is False else str(value)


@lru_cache(maxsize=256)
def leaves(model: type[BaseModel]) -> tuple[Leaf, ...]:
    """All leaves of a model and of the sections in it, in the order of the file."""
    return tuple(_walk(model, ()))


def _walk(model: type[BaseModel], before: Path) -> Iterator[Leaf]:
    for key, info in model.model_fields.items():
        meta = meta_of(model, key)
        if meta is not None:
            yield _leaf((*before, key), meta, info.default, (model.__doc__ or "").split("\n")[0])
        elif isinstance(info.annotation, type) and issubclass(info.annotation, BaseModel):
            yield from _walk(info.annotation, (*before, key))


def _leaf(path: Path, meta: dict[str, Any], default: Any, section: str) -> Leaf:
    kind = meta["kind"]
    low = meta.get("ge") if meta.get("ge") is not None else meta.get("gt")
    high = meta.get("le") if meta.get("le") is not None else meta.get("lt")
    unset = default is PydanticUndefined or default is None or default is ...
    return Leaf(
        path=path,
        what=meta["what"],
        kind=kind,
        unit=meta.get("unit", ""),
        default_text="" if unset else str(default).lower() if isinstance(default, bool) else str(default),
        low=None if low is None else parse(low, kind),
        high=None if high is None else parse(high, kind),
        bounds=bounds_text(meta) if kind else "",
        describe=meta["describe"],
        reference=meta["reference"],
        section=section,
        deciding=meta["deciding"],
        optional=meta.get("optional", False),
        choices=tuple(meta.get("choices", ())),
        slider=meta.get("slider", "linear"),
        meta=meta,
    )


def parse_leaf(leaf: Leaf, given: Any) -> Any:
    """A leaf's value (SI) from what a person gives; UserMistake where it cannot be taken."""
    return checked(given, leaf.meta)


def leaf_text(model: BaseModel, path: Path) -> str:
    """The value a model holds at a path, as a person writes it."""
    leaf = next(one for one in leaves(type(model)) if one.path == path)
    value: Any = model
    for key in path:
        value = getattr(value, key)
    return leaf.text(value)
