"""What a lens behind the plate gathers from one place of the touched face."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Setting
from outcouple.optics import interface
from outcouple.readout.emitted import peak

__all__ = ["Sight", "pixel_side", "pupil_area", "sight_of"]

Floats = NDArray[np.float64]

WIDTH_TO_DEVIATION = 1 / (2 * np.sqrt(2 * np.log(2)))
LINE = np.linspace(-4.0, 4.0, 161)
"""Places in the emitter's line, in standard deviations."""


@dataclass(frozen=True)
class Sight:
    """A pixel's view of one place; all (S,).

    sine       of the angle from the face's normal, outside
    gathered   projected solid angle of the lens seen from the place, times lens transmission [sr]
    shifted    share of the emitter's line the filter still passes there, over that on the axis
    crossing   transmittance of the back face on the way out
    lambertian share of a full Lambertian inside the plate, at the touched face, that the lens gets
    """

    sine: Floats
    gathered: Floats
    shifted: Floats
    crossing: Floats
    lambertian: Floats


def pupil_area(p: Any) -> Floats:
    """Area of the entrance pupil [m2], (S,)."""
    pupil = p.lens.pupil if p.lens.focal_length is None else p.lens.focal_length / p.lens.f_number
    return np.asarray(np.pi / 4 * pupil**2)


def pixel_side(setting: Setting) -> Floats:
    """Side of one pixel's footprint on the plate [m], (S,)."""
    p = setting.p
    view = p.plate.width if p.lens.view is None else p.lens.view
    return setting.spread(view / p.lens.columns)


def sight_of(setting: Setting, x: Floats, y: Floats) -> Sight:
    """The view of places (P,), P = S or S = 1.

    A diffuse field of radiance L in the plate leaves as T L / n^2; a lens at distance d with pupil area A gathers
    A cos^4 / d^2 of it. What the slanted way inside the plate shifts sideways does not matter to the angle.
    """
    p = setting.p
    away = np.hypot(x - p.lens.x, y - p.lens.y)
    angle = np.arctan2(away, p.lens.distance)
    index = setting.index(p.plate.material)
    face = interface(1.0, index, angle)
    crossing = np.asarray(1 - (face.Rs + face.Rp) / 2)
    gathered = pupil_area(p) * np.cos(angle) ** 4 / p.lens.distance**2 * p.lens.transmission
    shifted = _shifted(p, np.sin(angle))
    lambertian = gathered * shifted * crossing / (np.pi * index**2)
    return Sight(np.sin(angle), gathered, shifted, crossing, lambertian)


def _shifted(p: Any, sine: Floats) -> Floats:
    """Line through the filter at an angle over that on the axis.

    An interference filter's band moves as sqrt(1 - (sin / n_e)^2). Reference: H. A. Macleod, Thin-Film Optical Filters
    (from memory).
    """
    if p.readout.filter_centre is None:
        return np.ones_like(sine)
    off = np.sqrt(1 - (sine / p.lens.filter_index) ** 2)
    return np.asarray(_passed(p, off) / _passed(p, np.ones_like(sine)))


def _passed(p: Any, factor: Floats) -> Floats:
    readout = p.readout
    deviation = np.asarray(p.emitter.linewidth) * WIDTH_TO_DEVIATION
    line = peak(p)[:, None] + deviation[:, None] * LINE
    weight = np.exp(-(LINE**2) / 2)
    away = np.abs(line - (readout.filter_centre * factor)[:, None])
    # A cell of the line that the band's edge cuts counts in part.
    cell = deviation[:, None] * (LINE[1] - LINE[0])
    inside = np.clip((np.asarray(readout.filter_width)[:, None] / 2 - away) / cell + 0.5, 0, 1)
    through = readout.filter_transmission[:, None] * inside + readout.filter_blocking[:, None] * (1 - inside)
    return np.asarray(np.sum(through * weight, axis=1) / np.sum(weight))
