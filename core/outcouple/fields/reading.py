"""From what a person gives for an input to what the model holds, or a message that says what to write instead."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from outcouple.errors import UserMistake, nearest
from outcouple.fields.leaves import Leaf
from outcouple.quantities import parse

__all__ = ["parse_leaf"]


def parse_leaf(leaf: Leaf, given: Any, *, si: bool = False) -> Any:
    """A leaf's value (numbers in SI) from what a person gives.

    si  take a plain number for a quantity as SI; a design file may not, a program may

    Raises UserMistake with what is wrong, what is allowed and what the input means; the path is the caller's to say.
    """
    if given is None and leaf.optional:
        return None
    read: Callable[[Leaf, Any, bool], Any] = _READERS.get(leaf.what, _name)
    return read(leaf, given, si)


def _quantity(leaf: Leaf, given: Any, si: bool) -> float:
    plain = isinstance(given, int | float) and not isinstance(given, bool)
    try:
        value = parse(float(given), "number") if si and plain else parse(given, leaf.kind, unit=leaf.unit)
    except UserMistake as mistake:
        raise UserMistake(_with_allowed(str(mistake), leaf)) from None
    _check_bounds(leaf, value)
    return value


def _count(leaf: Leaf, given: Any, si: bool) -> int:
    try:
        value = int(parse(given, "count"))
    except UserMistake as mistake:
        raise UserMistake(_with_allowed(str(mistake), leaf)) from None
    _check_bounds(leaf, value)
    return value


def _check_bounds(leaf: Leaf, value: float) -> None:
    if leaf.below(value):
        raise UserMistake(_with_allowed("too small", leaf))
    if leaf.above(value):
        raise UserMistake(_with_allowed("too large", leaf))


def _choice(leaf: Leaf, given: Any, si: bool) -> str:
    if isinstance(given, str) and given in leaf.choices:
        return given
    hint = nearest(given, leaf.choices) if isinstance(given, str) else ""
    words = ", ".join(f'"{word}"' for word in leaf.choices)
    raise UserMistake(f"not one of the words allowed{hint}; one of: {words}")


def _flag(leaf: Leaf, given: Any, si: bool) -> bool:
    if isinstance(given, bool):
        return given
    raise UserMistake(_with_allowed("write true or false, without quotes", leaf))


def _name(leaf: Leaf, given: Any, si: bool) -> str:
    if isinstance(given, str) and given.strip():
        return given
    raise UserMistake(_with_allowed(f"the name of a {leaf.what} is wanted, in quotes", leaf))


def _with_allowed(message: str, leaf: Leaf) -> str:
    return f"{message} ({leaf.allowed})" if leaf.allowed else message


_READERS: Mapping[str, Callable[[Leaf, Any, bool], Any]] = {
    "quantity": _quantity,
    "count": _count,
    "choice": _choice,
    "flag": _flag,
}
