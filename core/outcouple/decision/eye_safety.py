"""Screening of the bare emitter for the eye: figures after the IEC 62471 family, never a classification."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from outcouple.notes import Note

__all__ = [
    "EyeScreening",
    "axial_intensity",
    "bare_emitter_irradiance",
    "burn_hazard_weight",
    "corneal_irradiance_limit",
    "eye_notes",
    "eye_screening",
    "retinal_share",
    "weak_stimulus_radiance_limit",
]

Floats = NDArray[np.float64]

EYE_DISTANCE: Final = 0.2
"""Distance [m] at which lamps are assessed (200 mm, usual after the IEC 62471 family; from memory)."""
EYE_TIME: Final = 1000.0
"""Exposure [s] beyond which the limit for the cornea no longer falls."""
EYE_DECIDES: Final = "an assessment of the finished product after the IEC 62471 family"


def corneal_irradiance_limit(time: ArrayLike) -> Floats:
    """Infrared irradiance limit for the cornea and lens [W/m2], 780 to 3000 nm: 18000 t^-0.75.

    time  exposure [s]. Range: up to 1000 s by formula; longer exposures keep the value at 1000 s (101 W/m2, where the
    standard rounds to 100, from memory), which is the lowest.
    Reference: IEC 62471:2006, clause 4.3.7 (formula read in public copies, not in the standard).

    >>> round(float(corneal_irradiance_limit(100.0)))
    569
    """
    seconds = np.minimum(np.asarray(time, dtype=float), EYE_TIME)
    return np.asarray(18000.0 * seconds**-0.75)


def burn_hazard_weight(wavelength: ArrayLike) -> Floats:
    """Weight of the retinal burn hazard between 700 and 1050 nm: 10^((700 - nm) / 500); wavelength [m].

    Outside that range nan. Reference: IEC 62471:2006, table 4.2 (formula read in a public copy).

    >>> round(float(burn_hazard_weight(850e-9)), 4)
    0.5012
    """
    nm = np.asarray(wavelength, dtype=float) * 1e9
    return np.asarray(np.where((nm >= 700) & (nm <= 1050), 10 ** ((700 - nm) / 500), np.nan))


def weak_stimulus_radiance_limit(subtense: ArrayLike) -> Floats:
    """Weighted radiance limit for the retina [W/(m2 sr)] where the lamp shows no light: 6300 / alpha, from 100 s on.

    subtense  of the source, alpha [rad], 0.011 to 0.1 (from memory); outside nan: the rules there differ
    Reference: ICNIRP, Health Phys. 105, 74 (2013), with its erratum to the equation.

    >>> float(weak_stimulus_radiance_limit(0.011))
    572727.27
    """
    alpha = np.asarray(subtense, dtype=float)
    with np.errstate(divide="ignore"):
        return np.asarray(np.where((alpha >= 0.011) & (alpha <= 0.1), 6300.0 / alpha, np.nan))


def axial_intensity(*, power: ArrayLike, exponent: ArrayLike = 1.0, half_angle: ArrayLike = np.pi / 2) -> Floats:
    """Radiant intensity [W/sr] on the axis of a lobe cos^m cut at ``half_angle`` [rad].

    P (m + 1) / (2 pi (1 - cos^(m+1) of the half-angle)): all of the power goes into the cut lobe.
    """
    m = np.asarray(exponent, dtype=float) + 1
    inside = 1 - np.cos(np.asarray(half_angle, dtype=float)) ** m
    return np.asarray(np.asarray(power, dtype=float) * m / (2 * np.pi * inside))


def bare_emitter_irradiance(
    *,
    power: ArrayLike,
    exponent: ArrayLike = 1.0,
    half_angle: ArrayLike = np.pi / 2,
    distance: ArrayLike = EYE_DISTANCE,
    duty: ArrayLike = 1.0,
) -> Floats:
    """Mean irradiance [W/m2] on the axis of a bare emitter: duty times `axial_intensity` over d^2.

    The worst case of a broken plate or an open housing: all emitters [W] taken as one point, aimed at one eye.
    Range: distance [m] well beyond the size of the emitter or row.
    """
    intensity = axial_intensity(power=power, exponent=exponent, half_angle=half_angle)
    return np.asarray(np.asarray(duty) * intensity / np.asarray(distance, dtype=float) ** 2)


@dataclass(frozen=True)
class EyeScreening:
    """A screening figure, never a classification.

    irradiance  at the eye [W/m2]
    limit       for the cornea at the exposure time [W/m2]
    share       irradiance over limit; below 1 says only that this one figure stays below
    """

    irradiance: Floats
    limit: Floats

    @property
    def share(self) -> Floats:
        """Irradiance over limit."""
        return np.asarray(self.irradiance / self.limit)


def eye_screening(
    *,
    power: ArrayLike,
    exponent: ArrayLike = 1.0,
    half_angle: ArrayLike = np.pi / 2,
    duty: ArrayLike = 1.0,
    distance: ArrayLike = EYE_DISTANCE,
    time: ArrayLike = EYE_TIME,
) -> EyeScreening:
    """The corneal figure for the bare emitter; arguments of `bare_emitter_irradiance` and an exposure time [s]."""
    irradiance = bare_emitter_irradiance(
        power=power, exponent=exponent, half_angle=half_angle, distance=distance, duty=duty
    )
    return EyeScreening(irradiance, corneal_irradiance_limit(time))


def retinal_share(
    *,
    power: ArrayLike,
    size: ArrayLike,
    wavelength: ArrayLike,
    exponent: ArrayLike = 1.0,
    half_angle: ArrayLike = np.pi / 2,
    duty: ArrayLike = 1.0,
) -> Floats:
    """Weighted radiance of a round bright area over the limit for a lamp that shows no light, seen from 200 mm.

    power  of this one area while on [W]; size its diameter [m]; wavelength [m]

    nan where the area subtends less than 0.011 or more than 0.1 rad, or the wavelength has no weight: the rules there
    differ, see `weak_stimulus_radiance_limit` and `burn_hazard_weight`.
    """
    diameter = np.asarray(size, dtype=float)
    intensity = np.asarray(duty) * axial_intensity(power=power, exponent=exponent, half_angle=half_angle)
    radiance = intensity / (np.pi / 4 * diameter**2) * burn_hazard_weight(wavelength)
    return np.asarray(radiance / weak_stimulus_radiance_limit(diameter / EYE_DISTANCE))


def eye_notes(
    *,
    kind: str,
    wavelength: ArrayLike,
    power: ArrayLike,
    exponent: ArrayLike = 1.0,
    half_angle: ArrayLike = np.pi / 2,
    duty: ArrayLike = 1.0,
    size: ArrayLike | None = None,
) -> tuple[Note, ...]:
    """Eye safety of the emitter.

    kind        "led" or "laser"
    wavelength  peak [m]; power all emitters together while on [W]; duty share of time on
    size        diameter of the bright area [m]; None where it is not stated and the retina is not screened
    """
    if kind == "laser":
        return (
            Note(
                "eye-laser",
                "The emitter is a laser: it is not screened here, other rules and limits hold.",
                severity="danger",
                decides="IEC 60825-1 and a laser safety officer",
            ),
        )
    if kind != "led":
        raise ValueError(f"kind must be 'led' or 'laser'; got {kind!r}")
    found = eye_screening(power=power, exponent=exponent, half_angle=half_angle, duty=duty)
    notes = [_corneal_note(found)]
    if np.any(np.asarray(wavelength) > 700e-9):
        retina, words = None, "the retina (radiance) is not assessed: state emitter.source_size"
        if size is not None:
            retina = retinal_share(
                power=power, size=size, wavelength=wavelength, exponent=exponent, half_angle=half_angle, duty=duty
            )
            known = np.isfinite(retina)
            words = (
                f"the retinal figure is {np.max(retina[known]):.2g} of 6300 / alpha"
                if np.any(known)
                else "the retina is not assessed: the source lies outside the range of the simple limit"
            )
            notes.append(_retinal_note(retina))
        notes.append(
            Note(
                "eye-infrared",
                "Infrared is invisible and nobody blinks. These figures screen the bare emitter and classify nothing; "
                f"{words}.",
                severity="caution",
                trigger=f"{np.max(found.share):.2g} of the corneal limit at 200 mm and 1000 s",
                decides=EYE_DECIDES,
            )
        )
    return tuple(note for note in notes if note.holds())


def _corneal_note(found: EyeScreening) -> Note:
    return Note(
        "eye-cornea",
        "A bare emitter at 200 mm exceeds the long-exposure infrared limit for the cornea: shield it, lower the drive, "
        "and consider a broken plate and an open housing.",
        severity="danger",
        trigger=f"up to {np.max(found.share):.2g} times 18000 t^-0.75 at 1000 s",
        decides=EYE_DECIDES,
        where=np.atleast_1d(found.share >= 1),
    )


def _retinal_note(share: Floats) -> Note:
    safe = np.nan_to_num(np.atleast_1d(share))
    return Note(
        "eye-retina",
        "The bare emitter's weighted radiance exceeds the limit for a lamp that shows no light: spread it, lower the "
        "drive, or shield it.",
        severity="danger",
        trigger=f"up to {np.max(safe):.2g} times 6300 / alpha at 200 mm",
        decides=EYE_DECIDES,
        where=safe >= 1,
    )
