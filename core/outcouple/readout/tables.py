"""Small tables shipped with the package, read once."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cache
from importlib.resources import files

import numpy as np
from numpy.typing import NDArray

__all__ = ["columns"]


@cache
def columns(name: str) -> Mapping[str, NDArray[np.float64]]:
    """Columns by header of a table in ``data/spectra``; lines that start with # state where its values come
    from.
    """
    text = (files("outcouple") / "data" / "spectra" / name).read_text(encoding="utf-8")
    lines = [line for line in text.splitlines() if line and not line.startswith("#")]
    header = lines[0].split(",")
    values = np.array([[float(cell) for cell in line.split(",")] for line in lines[1:]])
    values.setflags(write=False)
    return {name: values[:, at] for at, name in enumerate(header)}
