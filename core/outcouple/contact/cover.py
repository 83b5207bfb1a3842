"""What lies on a face: patches, each a stack of films over a backing.

Plain data. Every number may be a float or an array over the sample axis (S,).
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace
from typing import Literal

import numpy as np
from numpy.typing import NDArray

__all__ = ["Cover", "Drops", "Film", "Patch", "immersed"]

Floats = NDArray[np.float64]
Number = float | Floats
Spread = Literal["none", "normal", "exponential", "lognormal", "uniform"]


@dataclass(frozen=True)
class Film:
    """One layer between the face and what backs it.

    material   name
    thickness  mean [m]
    spread     how the thickness is distributed over the face
    deviation  standard deviation [m]; an exponential spread needs none
    """

    material: str
    thickness: Number
    spread: Spread = "none"
    deviation: Number = 0.0


@dataclass(frozen=True)
class Drops:
    """Spherical caps that cover the whole patch.

    material       name of the liquid
    contact_angle  [rad]
    """

    material: str
    contact_angle: Number


@dataclass(frozen=True)
class Patch:
    """A share of the face with one build-up.

    share     share of the face's area; the shares of a cover sum to 1
    backing   name of the material behind the films, or drops sitting on the face
    films     from the face outwards
    albedo    share of the light entering the backing that comes back diffusely
    diffuser  name of the material whose index limits what comes back; the backing where empty
    """

    share: Number
    backing: str | Drops
    films: tuple[Film, ...] = ()
    albedo: Number = 0.0
    diffuser: str = ""

    @property
    def scatterer(self) -> str:
        """Name of the medium that sends light back."""
        if self.diffuser:
            return self.diffuser
        return self.backing.material if isinstance(self.backing, Drops) else self.backing

    def media(self) -> Iterator[str]:
        """Names of every material the patch holds."""
        for film in self.films:
            yield film.material
        yield self.backing.material if isinstance(self.backing, Drops) else self.backing
        if self.diffuser:
            yield self.diffuser


@dataclass(frozen=True)
class Cover:
    """The patches of a face.

    finer  True: patches are finer than the beam, so every hit sees their mean; False: coarser, so a ray's whole way
           sees one of them (a half-wet two-face prism keeps 0.5, not 0.25)
    """

    patches: tuple[Patch, ...]
    finer: bool = True

    def media(self) -> tuple[str, ...]:
        """Names of every material the cover holds, each once."""
        return tuple(dict.fromkeys(name for patch in self.patches for name in patch.media()))

    def alone(self, index: int) -> Cover:
        """A cover that is patch ``index`` all over."""
        return Cover((replace(self.patches[index], share=1.0),))


def immersed(material: str) -> Cover:
    """A face with one clear medium all over it."""
    return Cover((Patch(1.0, material),))
