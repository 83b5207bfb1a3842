"""Sections of a design file as pydantic models whose leaves know their units, bounds and meaning."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, Literal

from pydantic import BaseModel, ConfigDict, Field, ValidationInfo, field_validator
from pydantic_core import PydanticCustomError

from outcouple.errors import UserMistake, nearest
from outcouple.quantities import format_quantity, kind_of, parse

__all__ = ["META", "Section", "checked", "choice", "count", "flag", "name", "quantity"]

META = "outcouple"
"""Key under which a field keeps what is known about it."""


class Section(BaseModel):
    """A table of a design file. Frozen; unknown keys are refused; quantities are SI floats inside, texts outside."""

    model_config = ConfigDict(frozen=True, extra="forbid", validate_default=True)

    @field_validator("*", mode="before")
    @classmethod
    def _take(cls, value: Any, info: ValidationInfo) -> Any:
        meta = meta_of(cls, info.field_name or "")
        if meta is None:
            return value
        try:
            return checked(value, meta)
        except UserMistake as mistake:
            raise PydanticCustomError("outcouple", "{text}", {"text": str(mistake)}) from None


def meta_of(model: type[BaseModel], field: str) -> dict[str, Any] | None:
    """What a field knows about itself, or None for plain fields."""
    extra = model.model_fields[field].json_schema_extra
    return extra.get(META) if isinstance(extra, dict) else None  # type: ignore[return-value]


def _field(default: Any, meta: dict[str, Any]) -> Any:
    return Field(default, description=meta["describe"], json_schema_extra={META: meta})


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
    deciding: bool = False,
    optional: bool = False,
    slider: Literal["linear", "log"] = "linear",
) -> Any:
    """A number with a unit.

    default    text as a person writes it, ``...`` for required, None where ``optional``
    kind       kind of quantity
    ge, gt, le, lt  bounds as texts
    unit       preferred display unit
    reference  where the default comes from; empty for a plain choice
    deciding   shown open in forms; counted when it is left at an unverified default
    """
    kind_of(kind)
    return _field(
        default,
        {
            "what": "quantity",
            "kind": kind,
            "describe": describe,
            "ge": ge,
            "gt": gt,
            "le": le,
            "lt": lt,
            "unit": unit or _unit_of(default, kind),
            "reference": reference,
            "deciding": deciding,
            "optional": optional,
            "slider": slider,
        },
    )


def _unit_of(default: Any, kind: str) -> str:
    """The unit a default is written in."""
    if isinstance(default, str):
        unit = default.strip().partition(" ")[2]
        if unit in kind_of(kind).units:
            return unit
    return kind_of(kind).shown[0] if len(kind_of(kind).shown) == 1 else ""


def count(
    default: Any, *, describe: str, ge: int = 0, le: int = 10**9, reference: str = "", deciding: bool = False
) -> Any:
    """A whole number; structural, so it does not vary over samples."""
    return _field(
        default,
        {
            "what": "count",
            "kind": "count",
            "describe": describe,
            "ge": ge,
            "le": le,
            "reference": reference,
            "deciding": deciding,
        },
    )


def choice(
    default: Any, allowed: Sequence[str], *, describe: str, reference: str = "", deciding: bool = False
) -> Any:
    """One of a few words."""
    return _field(
        default,
        {
            "what": "choice",
            "kind": "",
            "describe": describe,
            "choices": list(allowed),
            "reference": reference,
            "deciding": deciding,
        },
    )


def flag(default: bool, *, describe: str, deciding: bool = False) -> Any:
    """true or false."""
    return _field(
        default, {"what": "flag", "kind": "", "describe": describe, "reference": "", "deciding": deciding}
    )


def name(
    default: Any, *, describe: str, what: str = "material", reference: str = "", deciding: bool = False
) -> Any:
    """The name of something listed elsewhere, a material for one; checked against that list when the design is loaded."""
    return _field(
        default,
        {"what": what, "kind": "", "describe": describe, "reference": reference, "deciding": deciding},
    )


def checked(value: Any, meta: dict[str, Any]) -> Any:
    """A value as the model keeps it (SI), or UserMistake."""
    what = meta["what"]
    if what == "quantity":
        if value is None and meta["optional"]:
            return None
        number = parse(value, meta["kind"])
        _bounds(number, meta)
        return number
    if what == "count":
        whole = int(parse(value, "count"))
        _bounds(whole, meta)
        return whole
    if what == "choice":
        if value not in meta["choices"]:
            allowed = ", ".join(f'"{word}"' for word in meta["choices"])
            hint = nearest(value, meta["choices"]) if isinstance(value, str) else ""
            raise UserMistake(f"not one of the words allowed{hint}; one of: {allowed}")
        return value
    if what == "flag":
        if not isinstance(value, bool):
            raise UserMistake("must be true or false")
        return value
    if not isinstance(value, str):
        raise UserMistake(f"must be the name of a {what}, in quotes")
    return value


def _bounds(number: float, meta: dict[str, Any]) -> None:
    kind = meta["kind"]
    low, high = meta.get("ge", None), meta.get("le", None)
    above, below = meta.get("gt", None), meta.get("lt", None)
    fine = (
        (low is None or number >= parse(low, kind))
        and (high is None or number <= parse(high, kind))
        and (above is None or number > parse(above, kind))
        and (below is None or number < parse(below, kind))
    )
    if not fine:
        raise UserMistake(
            f"{format_quantity(number, kind, unit=meta.get('unit') or None)} is outside {bounds_text(meta)}"
        )


def bounds_text(meta: dict[str, Any]) -> str:
    """The bounds as a person reads them: "1 mm to 60 mm"."""
    low, high = meta.get("ge"), meta.get("le")
    above, below = meta.get("gt"), meta.get("lt")
    left = f"{low}" if low is not None else f"above {above}" if above is not None else ""
    right = f"{high}" if high is not None else f"below {below}" if below is not None else ""
    if left and right:
        return f"{left} to {right}"
    return f"at least {left}" if left else f"at most {right}" if right else "any number"
