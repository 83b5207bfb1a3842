"""Cautions a result must carry: eyes, explosive atmospheres, overfill, dry running, food, oxygen, pressure, people.

Screening only: nothing here passes anything. Each caution says what set it off and what decides instead.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from outcouple.notes import Note

__all__ = [
    "EyeScreening",
    "ageing_note",
    "axial_intensity",
    "bare_emitter_irradiance",
    "burn_hazard_weight",
    "corneal_irradiance_limit",
    "demand_notes",
    "explosive_notes",
    "eye_notes",
    "eye_screening",
    "retinal_share",
    "service_notes",
    "skin_note",
    "touch_note",
    "weak_stimulus_radiance_limit",
]

Floats = NDArray[np.float64]

LOCAL: Final = "local codes and a licensed professional"
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


def explosive_notes(
    *,
    explosive: bool,
    power: ArrayLike,
    limit_power: float | None = None,
    service: str = "",
) -> tuple[Note, ...]:
    """Optical radiation where an explosive atmosphere may be present.

    explosive    the design says so
    power        optical, all emitters while on [W]
    limit_power  from the user's own certificate [W]; none is assumed
    service      what the sensor touches; fuel, solvent and oxygen set the caution off by themselves
    """
    triggered = explosive or service in ("fuel", "solvent", "oxygen", "dust")
    if not triggered:
        return ()
    text = (
        "Light can ignite an explosive atmosphere by heating absorbing particles; the electrical side (intrinsic "
        "safety) is a matter of its own. This tool holds no limit of its own"
    )
    above = limit_power is not None and bool(np.any(np.asarray(power) > limit_power))
    if limit_power is None:
        text += ": enter the certified one."
    elif above:
        text += "; the power exceeds the one you entered."
    else:
        text += "; the power stays below the one you entered, which proves nothing about irradiance or faults."
    return (
        Note(
            "explosive-atmosphere",
            text,
            severity="danger",
            trigger=f"optical power up to {np.max(np.asarray(power)) * 1e3:.3g} mW",
            decides=f"IEC 60079-28, a certified body, {LOCAL}",
        ),
    )


def demand_notes(demand: str, *, dark_is_present: bool, uncovered: int = 0, watched: bool = False) -> tuple[Note, ...]:
    """Cautions of a level or leak function.

    demand           "high level", "low level", "leak", or "" where none is stated
    dark_is_present  a low reading means wet
    uncovered        dangerous failures no diagnostic of the design reveals
    watched          a diagnostic of the design tells a dead emitter
    """
    decides = f"IEC 61508 and IEC 61511 where they apply, {LOCAL}"
    notes = []
    if not demand:
        notes.append(
            Note(
                "demand-open",
                "No demand is stated, so the dangerous direction of every failure is open.",
                decides=decides,
            )
        )
    if demand in ("high level", "leak"):
        notes.append(
            Note(
                "overfill",
                "A calculated margin is no safety rating. Overfill and spill prevention needs a device separate from "
                "the gauging, in hardware and in supply.",
                severity="danger",
                trigger=f"demand = {demand}",
                decides=decides,
            )
        )
    if demand == "low level" and dark_is_present:
        notes.append(
            Note(
                "dry-run-light-loss",
                "Light lost reads wet, so a dead emitter, a broken cable or an aged lamp hides a dry run"
                + ("; all rests on the diagnostics that tell it." if watched else "."),
                severity="caution" if watched else "danger",
                trigger="demand = low level, a low reading means wet",
                decides=f"diagnostics that reveal lost light, {decides}",
            )
        )
    if uncovered:
        plural = "failure" if uncovered == 1 else "failures"
        notes.append(
            Note(
                "dangerous-uncovered",
                f"{uncovered} dangerous {plural} would go unnoticed until the demand or a proof test.",
                severity="danger",
                trigger=f"{uncovered} rows of the failure table",
                decides=decides,
            )
        )
    return tuple(notes)


_SERVICES: Final[dict[str, tuple[str, str, str]]] = {
    "food": (
        "food-contact",
        "Materials in contact with food, drinking water or medicines need proof of compliance, and cleaning its own.",
        "material declarations and the food or drinking-water law of the place",
    ),
    "oxygen": (
        "oxygen-service",
        "Oxygen-rich service sets limits to materials, cleanliness and ignition sources that are not computed here.",
        "an oxygen-service specialist",
    ),
    "pressure": (
        "pressure",
        "No strength, seal or thermal shock is computed: a wetted tip is a part of the pressure boundary.",
        "the pressure-equipment code and a competent engineer",
    ),
}


def service_notes(*services: str) -> tuple[Note, ...]:
    """Cautions of a service: any of "food", "oxygen", "pressure"."""
    unknown = sorted(set(services) - set(_SERVICES))
    if unknown:
        raise ValueError(f"unknown services: {', '.join(unknown)}; known: {', '.join(_SERVICES)}")
    return tuple(
        Note(code, text, severity="danger", trigger=f"service = {name}", decides=f"{decides}; {LOCAL}")
        for name, (code, text, decides) in _SERVICES.items()
        if name in services
    )


def touch_note() -> Note:
    """A touch surface is no safety input."""
    return Note(
        "touch-no-safety",
        "A touch surface is not a safety input: no emergency stop, no guard, no enabling switch.",
        trigger="a touch geometry",
        decides="ISO 13849, IEC 62061 and the machine's risk assessment",
    )


def skin_note(*, reflectance: tuple[float, float] | None = None, index: tuple[float, float] | None = None) -> Note:
    """The range of people a touch figure stands for.

    reflectance, index  (low, high) used for skin; None where a single value was used
    """
    parts = []
    if reflectance is not None:
        parts.append(f"reflectance {reflectance[0]:.2f} to {reflectance[1]:.2f}")
    if index is not None:
        parts.append(f"index {index[0]:.2f} to {index[1]:.2f}")
    text = (
        f"Skin is taken as {' and '.join(parts)}: pigmentation, moisture and age of all users must lie inside."
        if parts
        else "One value stands for all skin: pigmentation (below 1 um), moisture and age change it; check the range."
    )
    return Note("skin-range", text, trigger="a finger touches", decides="a trial with the people who will use it")


def ageing_note(*, margin_at_end: ArrayLike) -> tuple[Note, ...]:
    """A caution where the margin in standard deviations turns negative at the end of life."""
    gone = np.atleast_1d(np.asarray(margin_at_end, dtype=float) < 0)
    note = Note(
        "margin-ages-away",
        "The decision fails before the emitter's end of life: read a ratio, track the level, or start brighter.",
        trigger="margin below zero at the end of life",
        where=gone,
    )
    return (note,) if note.holds() else ()
