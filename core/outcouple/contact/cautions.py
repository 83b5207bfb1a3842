"""One way to say a caution that holds for some of the samples."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from outcouple.notes import Note

__all__ = ["caution"]


def caution(code: str, text: str, where: NDArray[np.bool_] | np.bool_) -> tuple[Note, ...]:
    """A note with the samples a condition holds for, nothing where it holds for none."""
    if not np.any(where):
        return ()
    mask = np.asarray(where)
    return (Note(code, text, where=None if mask.ndim == 0 else mask),)
