"""Solutions in water: index from mass share, and mass share from index.

Method. Measured tables give the index at 20 degC for the sodium D line. Other wavelengths and temperatures go by
Lorentz-Lorenz refraction L: that of the tabled solution times the relative change of its parts, weighted by mass,

    L(w, wavelength, T) = L(w, D, 20 degC) [(1 - w) Lw / Lw0 + w Ls / Ls0],

Lw of water, Ls of the pure solute where it is a liquid. Solids dissolved (sugar, salt) are given water's dispersion
and a warming d ln L / dT fitted to published corrections (``solutes``). A pure solute comes out as its table has it.

Uncertainty. The tables: sugar 1e-5, others 1e-4. Away from the D line about 3e-4 at 850 nm for 50 % sugar (its
dispersion is taken as water's), less where both parts are known; away from 20 degC about 1e-5 per kelvin.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from outcouple.errors import UserMistake
from outcouple.materials.material import Material
from outcouple.materials.rows import SODIUM_D
from outcouple.materials.solutes import REFERENCE, Lookup, find_solute
from outcouple.notes import Note

__all__ = ["Concentration", "concentration", "solution_index"]

Floats = NDArray[np.float64]


def solution_index(
    solute: str,
    *,
    share: ArrayLike,
    wavelength: ArrayLike = SODIUM_D,
    temperature: ArrayLike = REFERENCE,
    lookup: Lookup | None = None,
) -> Floats:
    """Real absolute index of a solution in water.

    solute       a name or alias of ``solutes.SOLUTES``: "sugar", "salt", "sea water", "ethylene glycol" ...
    share        mass of the solute over that of the solution; UserMistake outside what is known
    wavelength   in vacuum [m]; temperature [K]; all broadcast
    lookup       where the pure liquid comes from; the shipped materials where not given

    >>> float(solution_index("sugar", share=0.5)) / 1.000272
    1.42009
    """
    known = find_solute(solute)
    mass, across, warm = np.broadcast_arrays(
        *(np.asarray(value, dtype=float) for value in (share, wavelength, temperature))
    )
    low, high = known.limits
    if np.any((mass < low) | (mass > high)):
        raise UserMistake(f"{solute}: shares from {low * 100:.4g} to {high * 100:.4g} % by mass are known")
    return known.index(mass, across, warm, lookup or _shipped)


@dataclass(frozen=True, eq=False)
class Concentration:
    """Mass share that belongs to an index.

    share  the smallest share of that index; NaN where there is none
    other  a second share of the same index; NaN where there is only one
    notes  cautions: "concentration-ambiguous", "concentration-range"
    """

    share: Floats
    other: Floats
    notes: tuple[Note, ...]


def concentration(
    solute: str, index: ArrayLike, *, wavelength: float = SODIUM_D, temperature: float = REFERENCE
) -> Concentration:
    """The mass share of a solute whose solution has this real absolute index.

    index        any shape; wavelength [m] and temperature [K] are single numbers

    Alcohols in water pass a maximum, so that two shares may have one index: both are given, with a caution. Steps of
    0.05 % of share, straight lines between: errors of the inversion stay below 1e-6 in index.

    >>> round(float(concentration("sugar", solution_index("sugar", share=0.5)).share), 4)
    0.5
    """
    wanted = np.asarray(index, dtype=float)
    low, high = find_solute(solute).limits
    shares = np.linspace(low, high, 2001)
    curve = solution_index(solute, share=shares, wavelength=wavelength, temperature=temperature)
    top = int(np.argmax(curve))
    rising = np.interp(wanted, curve[: top + 1], shares[: top + 1], left=np.nan, right=np.nan)
    falling = np.interp(wanted, curve[top:][::-1], shares[top:][::-1], left=np.nan, right=np.nan)
    if top == shares.size - 1:
        falling = np.full_like(rising, np.nan)
    both = np.isfinite(rising) & np.isfinite(falling)
    share = np.where(np.isnan(rising), falling, rising)
    other = np.where(both, falling, np.nan)
    return Concentration(share, other, _concentration_notes(solute, shares, curve, both, np.isnan(share)))


def _concentration_notes(
    solute: str, shares: Floats, curve: Floats, both: NDArray[np.bool_], none: NDArray[np.bool_]
) -> tuple[Note, ...]:
    top = int(np.argmax(curve))
    first = float(shares[int(np.argmax(curve >= curve[-1]))])
    ambiguous = (
        f"The index of {solute} in water has a maximum of {curve[top]:.4f} near {shares[top]:.0%}: "
        f"from {first:.0%} to {shares[-1]:.0%} it does not tell the concentration."
    )
    outside = f"Solutions of {solute} have indices from {curve.min():.4f} to {curve.max():.4f} here."
    notes = (
        Note("concentration-ambiguous", ambiguous, decides="a second quantity, such as density", where=both),
        Note("concentration-range", outside, where=none),
    )
    return tuple(note for note in notes if note.holds())


def _shipped(name: str) -> Material:
    from outcouple.materials.catalogue import builtin_catalogue

    return builtin_catalogue().lookup(name)
