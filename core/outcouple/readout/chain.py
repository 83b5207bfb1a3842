"""Optical shares to readings: the design's [readout] section joined with the detector's physics."""

from __future__ import annotations

from collections.abc import Callable, Mapping

import numpy as np
from numpy.typing import NDArray

from outcouple.readout.camera_reader import read_camera
from outcouple.readout.photodiode_reader import read_photodiode
from outcouple.readout.reading import Lit, Reading

__all__ = ["Lit", "Reading", "read"]

Floats = NDArray[np.float64]

READERS: Mapping[str, Callable[[Lit, Floats], Reading]] = {"photodiode": read_photodiode, "camera": read_camera}


def read(kind: str, lit: Lit, share: Floats) -> Reading:
    """Reading of one state; it ends at the stage's full scale (see `Reading.headroom`).

    share  optical share of the emitter's power per wavelength node, (S, L, C)
    """
    return READERS[kind](lit, share)
