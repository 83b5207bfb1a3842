"""Cautions: statements that travel with a number and survive a batch of samples."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field, replace

import numpy as np
from numpy.typing import NDArray

__all__ = ["Note", "merge_notes"]


@dataclass(frozen=True)
class Note:
    """One caution.

    code      stable name, lower case with hyphens, e.g. "material-range"
    text      one or two plain sentences
    severity  "info" (good to know), "caution" (may be wrong or unsafe here), "danger" (can hurt somebody)
    trigger   what set it off, in numbers where there are any
    decides   what decides instead (a standard, a measurement, a licensed person); empty where nothing does
    where     which samples it holds for, shape (S,) of bool; None means all
    """

    code: str
    text: str
    severity: str = "caution"
    trigger: str = ""
    decides: str = ""
    where: NDArray[np.bool_] | None = field(default=None, compare=False)

    def holds(self) -> bool:
        """True where the caution holds for at least one sample."""
        return self.where is None or bool(np.any(self.where))


def merge_notes(notes: Iterable[Note]) -> tuple[Note, ...]:
    """The notes that hold, one per (code, text), their sample masks joined; first come, first listed.

    >>> [n.code for n in merge_notes([Note("a", "x"), Note("a", "x"), Note("b", "y")])]
    ['a', 'b']
    """
    found: dict[tuple[str, str], Note] = {}
    for note in notes:
        if not note.holds():
            continue
        key = (note.code, note.text)
        old = found.get(key)
        if old is None:
            found[key] = note
        elif old.where is not None:
            where = None if note.where is None else old.where | note.where
            found[key] = replace(old, where=where)
    return tuple(found.values())
