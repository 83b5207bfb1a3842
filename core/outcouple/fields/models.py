"""Sections as pydantic models, and the declarations their fields are written with."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import lru_cache
from typing import Any, Literal

from pydantic import BaseModel, ConfigDict, Field, ValidationInfo, field_validator
from pydantic.fields import FieldInfo
from pydantic_core import PydanticCustomError, PydanticUndefined

from outcouple.errors import UserMistake, nearest
from outcouple.fields.leaves import Leaf, bound, unit_for
from outcouple.fields.reading import parse_leaf
from outcouple.fields.schema import leaf_schema
from outcouple.quantities import format_number

__all__ = [
    "SI",
    "Section",
    "choice",
    "count",
    "declared",
    "flag",
    "leaf_at",
    "leaf_text",
    "leaves",
    "name",
    "quantity",
]

Path = tuple[str, ...]

SI: Mapping[str, Any] = {"si": True}
"""Validation context under which plain numbers are taken for SI values."""


class Section(BaseModel):
    """A table of a design file. Frozen; unknown keys are refused; quantities are SI floats inside, texts outside.

    >>> class Plate(Section):
    ...     thickness: float = quantity("6 mm", "length", ge="0.5 mm", le="50 mm", describe="thickness of the plate")
    >>> Plate().thickness, Plate(thickness="8 mm").thickness
    (0.006, 0.008)
    """

    model_config = ConfigDict(frozen=True, extra="forbid", validate_default=True, defer_build=True)

    @field_validator("*", mode="before")
    @classmethod
    def _read(cls, given: Any, info: ValidationInfo) -> Any:
        leaf = declared(cls.model_fields[info.field_name or ""])
        if leaf is None:
            return given
        try:
            return parse_leaf(leaf, given, si=info.context is SI)
        except UserMistake as mistake:
            raise PydanticCustomError("outcouple", "{text}", {"text": str(mistake)}) from None


@dataclass(frozen=True)
class _Carrier:
    """Carries a leaf on its pydantic field, and writes its JSON Schema when pydantic asks for it."""

    leaf: Leaf

    def __call__(self, schema: dict[str, Any]) -> None:
        schema.clear()
        schema.update(leaf_schema(self.leaf))


def declared(info: FieldInfo) -> Leaf | None:
    """The leaf a field was declared as (its path is still empty), or None for sections and plain fields."""
    carrier = info.json_schema_extra
    return carrier.leaf if isinstance(carrier, _Carrier) else None


def _field(default: Any, leaf: Leaf) -> Any:
    """The pydantic field of a leaf. A default that its own leaf refuses is a mistake of whoever wrote the section."""
    if default is ...:
        leaf = replace(leaf, required=True)
    else:
        try:
            value = parse_leaf(leaf, default)
        except UserMistake as mistake:
            raise ValueError(f"default {default!r}: {mistake}") from None
        leaf = replace(leaf, default=value, default_text=_default_text(default))
    return Field(default, description=leaf.describe, json_schema_extra=_Carrier(leaf))


def _default_text(default: Any) -> str:
    if default is None:
        return ""
    if isinstance(default, bool):
        return "true" if default else "false"
    return default if isinstance(default, str) else format_number(float(default), 12)


def quantity(
    default: Any,
    kind: str,
    *,
    describe: str,
    ge: str | float | None = None,
    gt: str | float | None = None,
    le: str | float | None = None,
    lt: str | float | None = None,
    unit: str = "",
    reference: str = "",
    group: str = "",
    deciding: bool = False,
    optional: bool = False,
    slider: Literal["linear", "log"] = "linear",
) -> Any:
    """A number with a unit: annotate the field ``float`` (``float | None`` where optional).

    default         text as a person writes it (a number where the kind has no unit), ``...`` where required, None where
                    optional and unset
    kind            name of a kind (see ``outcouple.quantities.kind_of``)
    ge, gt, le, lt  limits, texts like the default
    unit            unit it is shown and asked for in; that of the default, else of a limit

    ``describe`` and what follows are explained at :class:`outcouple.fields.Leaf`.
    """
    leaf = Leaf(
        what="quantity",
        describe=describe,
        kind=kind,
        unit=unit or unit_for(kind, default, ge, gt, le, lt),
        lowest=bound(ge, gt, kind),
        highest=bound(le, lt, kind),
        reference=reference,
        group=group,
        deciding=deciding,
        optional=optional,
        slider=slider,
    )
    return _field(default, leaf)


def count(
    default: Any,
    *,
    describe: str,
    ge: int = 0,
    le: int | None = None,
    reference: str = "",
    group: str = "",
    deciding: bool = False,
    optional: bool = False,
) -> Any:
    """A whole number; it does not vary over samples. Annotate ``int`` (``int | None`` where optional)."""
    leaf = Leaf(
        what="count",
        describe=describe,
        kind="count",
        lowest=bound(ge, None, "count"),
        highest=bound(le, None, "count"),
        reference=reference,
        group=group,
        deciding=deciding,
        optional=optional,
    )
    return _field(default, leaf)


def choice(
    default: Any,
    allowed: Sequence[str],
    *,
    describe: str,
    reference: str = "",
    group: str = "",
    deciding: bool = False,
) -> Any:
    """One of a few words. Annotate ``str``."""
    leaf = Leaf("choice", describe, choices=tuple(allowed), reference=reference, group=group, deciding=deciding)
    return _field(default, leaf)


def flag(default: Any, *, describe: str, reference: str = "", group: str = "", deciding: bool = False) -> Any:
    """true or false. Annotate ``bool``."""
    return _field(default, Leaf("flag", describe, reference=reference, group=group, deciding=deciding))


def name(
    default: Any,
    *,
    describe: str,
    what: str = "material",
    reference: str = "",
    group: str = "",
    deciding: bool = False,
    optional: bool = False,
) -> Any:
    """The name of something listed elsewhere, checked against that list when the design is loaded. Annotate ``str``."""
    leaf = Leaf(what, describe, reference=reference, group=group, deciding=deciding, optional=optional)
    return _field(default, leaf)


@lru_cache(maxsize=256)
def leaves(model: type[BaseModel]) -> tuple[Leaf, ...]:
    """All leaves of a section and of the sections in it, in the order of the file, each with its path."""
    return tuple(_walk(model, None, ()))


def _walk(model: type[BaseModel], standing: BaseModel | None, before: Path) -> Iterator[Leaf]:
    """``standing`` is the section as a default of the one around it, which may differ from its own defaults."""
    about = (model.__doc__ or "").split("\n")[0]
    for key, info in model.model_fields.items():
        leaf = declared(info)
        path = (*before, key)
        if leaf is not None:
            leaf = replace(leaf, path=path, section=about)
            value = leaf.default if standing is None else getattr(standing, key)
            same = value == leaf.default
            yield leaf if same else replace(leaf, default=value, default_text=leaf.text(value), required=False)
        elif isinstance(info.annotation, type) and issubclass(info.annotation, BaseModel):
            inner = info.default if standing is None else getattr(standing, key)
            yield from _walk(info.annotation, None if inner is PydanticUndefined else inner, path)


def leaf_at(model: BaseModel, path: Path) -> tuple[Leaf, Any]:
    """The leaf at a path of a section and the value it holds; parts of a path may count rows ("patches", "0", "share").

    Raises UserMistake for a path that is not an input, with the nearest one.
    """
    here: Any = model
    for at, key in enumerate(path):
        rows = isinstance(here, tuple) and key.isdigit() and int(key) < len(here)
        if rows:
            here = here[int(key)]
            continue
        info = type(here).model_fields.get(key) if isinstance(here, BaseModel) else None
        if info is None:
            break
        leaf, here = declared(info), getattr(here, key)
        if leaf is not None and at == len(path) - 1:
            return replace(leaf, path=path), here
    given = ".".join(path)
    raise UserMistake(f"{given}: no such input{nearest(given, [leaf.name for leaf in leaves(type(model))])}")


def leaf_text(model: BaseModel, path: Path) -> str:
    """The value a section holds at a path, as a person writes it; a default as its section writes it."""
    leaf, value = leaf_at(model, path)
    return leaf.default_text if value == leaf.default else leaf.text(value)
