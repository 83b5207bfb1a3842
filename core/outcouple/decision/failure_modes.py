"""Which way each failure errs: dangerous, spurious or not at all, for what the function must not miss.

The table holds optical facts only (does the cause take light away or add it); the direction follows from what a low
reading means and from the demand. With no demand stated every direction is open: nothing is assumed safe.
"""

from __future__ import annotations

from collections.abc import Collection, Iterable, Sequence
from dataclasses import dataclass
from typing import Final, Literal, Protocol

__all__ = [
    "COMMON_FAILURES",
    "DEMANDS",
    "DIAGNOSTICS",
    "WETTED_FAILURES",
    "Direction",
    "Failure",
    "FailureEffect",
    "FailureLike",
    "fails_dangerous",
    "failure_directions",
    "probability_of_failure",
]

Direction = Literal["dangerous", "spurious", "none", "open"]

DEMANDS: Final[dict[str, str]] = {"high level": "present", "leak": "present", "low level": "absent", "": ""}
"""State in which the function must act; blank: not stated."""

DIAGNOSTICS: Final[dict[str, str]] = {
    "reference": "a reference photodiode watches the emitter, or a ratio of two channels is read",
    "drive monitor": "the emitter's current is measured (open and short circuit)",
    "dark test": "the reading is taken with the emitter off and must be dark",
    "fault band": "readings outside what a healthy sensor can give are a fault of their own",
    "second channel": "a second, separate sensor of another kind is compared",
    "lift switch": "a switch or contact tells that the sensor sits in its place",
    "trend": "the bright reading is recorded and its slow fall raises maintenance",
    "proof test": "the sensor is wetted and dried on purpose at intervals",
}
"""Names of diagnostics a design may claim, and what each is."""


class FailureLike(Protocol):
    """What a row must say; a geometry's own rows qualify."""

    @property
    def cause(self) -> str: ...
    @property
    def effect(self) -> str: ...
    @property
    def light_lost(self) -> bool | None: ...
    @property
    def covered_by(self) -> tuple[str, ...]: ...
    @property
    def slow(self) -> bool: ...


@dataclass(frozen=True)
class Failure:
    """One cause and its optical effect.

    light_lost  True: the reading falls; False: it rises, or does not fall when it should; None: no change
    covered_by  diagnostics that can reveal it
    slow        it creeps in
    """

    cause: str
    effect: str
    light_lost: bool | None
    covered_by: tuple[str, ...] = ()
    slow: bool = False


@dataclass(frozen=True)
class FailureEffect:
    """A row of the answer.

    reads       "present", "absent" or "unchanged"
    direction   what it means for the demand
    covered_by  diagnostics of this design that can reveal it
    missing     diagnostics that could and are not there
    """

    cause: str
    effect: str
    reads: str
    direction: Direction
    covered_by: tuple[str, ...] = ()
    missing: tuple[str, ...] = ()
    slow: bool = False

    @property
    def uncovered(self) -> bool:
        """True for a dangerous failure that nothing in this design reveals."""
        return self.direction == "dangerous" and not self.covered_by


COMMON_FAILURES: Final[tuple[Failure, ...]] = (
    Failure(
        "emitter dead, cable open, supply lost",
        "no light at all",
        True,
        ("reference", "drive monitor", "fault band", "second channel", "proof test"),
    ),
    Failure(
        "emitter aged or hot",
        "less light in every state",
        True,
        ("reference", "trend", "second channel", "proof test"),
        slow=True,
    ),
    Failure(
        "detector output stuck bright, amplifier saturated",
        "reading stays high",
        False,
        ("dark test", "fault band", "second channel", "proof test"),
    ),
    Failure(
        "light leaks from emitter to detector inside (crosstalk)",
        "reading does not fall",
        False,
        ("second channel", "proof test"),
        slow=True,
    ),
    Failure(
        "outside light that the read-out does not reject",
        "reading rises",
        False,
        ("dark test", "second channel"),
    ),
    Failure(
        "detector dead or its lead open",
        "reading falls to nothing",
        True,
        ("fault band", "second channel", "proof test"),
    ),
    Failure(
        "optical face scratched, hazed or crazed",
        "bright reading falls slowly",
        True,
        ("trend", "second channel", "proof test"),
        slow=True,
    ),
)
"""Causes every sensor has; what touches the faces adds the rows of `WETTED_FAILURES` or the geometry's own."""

WETTED_FAILURES: Final[tuple[Failure, ...]] = (
    Failure(
        "white or pigmented deposit, milky liquid, bright wall or floor close to the face",
        "light returns although the face is wet",
        False,
        ("second channel", "proof test"),
    ),
    Failure(
        "retained drop, sticky or oily deposit, condensation",
        "light is drawn out although the face is dry",
        True,
        ("second channel", "trend"),
    ),
    Failure("bubble or foam trapped on the face under liquid", "face stays dry", False, ("second channel",)),
    Failure("clear flat residual film", "no change: a flat film keeps total reflection", None),
    Failure(
        "index of the liquid outside the switching window (cryogens, fluorinated liquids)",
        "total reflection persists under liquid",
        False,
        ("second channel", "proof test"),
    ),
    Failure(
        "bracket loose, sensor out of place", "liquid does not reach the face", False, ("lift switch", "second channel")
    ),
)
"""Further causes for sensors whose wetted face is to be touched by a liquid."""


def failure_directions(
    rows: Iterable[FailureLike],
    *,
    demand: str,
    present_reads: Literal["low", "high"],
    diagnostics: Collection[str] = (),
) -> tuple[FailureEffect, ...]:
    """The direction of every row for a design.

    rows           `COMMON_FAILURES`, `WETTED_FAILURES`, a geometry's own
    demand         a key of `DEMANDS`
    present_reads  "low" where what is to be found takes light away, "high" where it brings light
    diagnostics    keys of `DIAGNOSTICS` the design has

    A failure is dangerous when it makes the sensor read the state in which the function does not act.

    >>> effects = failure_directions(COMMON_FAILURES[:1], demand="low level", present_reads="low")
    >>> effects[0].direction, effects[0].reads, effects[0].uncovered
    ('dangerous', 'present', True)
    """
    if demand not in DEMANDS:
        raise ValueError(f"demand must be one of {', '.join(map(repr, DEMANDS))}; got {demand!r}")
    unknown = sorted(set(diagnostics) - set(DIAGNOSTICS))
    if unknown:
        raise ValueError(f"unknown diagnostics: {', '.join(unknown)}; known: {', '.join(DIAGNOSTICS)}")
    return tuple(_effect(row, demand, present_reads, diagnostics) for row in rows)


def _effect(row: FailureLike, demand: str, present_reads: str, diagnostics: Collection[str]) -> FailureEffect:
    if row.light_lost is None:
        reads = "unchanged"
    else:
        reads = "present" if row.light_lost == (present_reads == "low") else "absent"
    return FailureEffect(
        cause=row.cause,
        effect=row.effect,
        reads=reads,
        direction=_direction(reads, demand),
        covered_by=tuple(name for name in row.covered_by if name in diagnostics),
        missing=tuple(name for name in row.covered_by if name not in diagnostics),
        slow=row.slow,
    )


def _direction(reads: str, demand: str) -> Direction:
    if reads == "unchanged":
        return "none"
    if not demand:
        return "open"
    return "spurious" if reads == DEMANDS[demand] else "dangerous"


def fails_dangerous(effects: Sequence[FailureEffect]) -> tuple[FailureEffect, ...]:
    """The dangerous rows that no diagnostic of the design covers."""
    return tuple(effect for effect in effects if effect.uncovered)


def probability_of_failure(
    *,
    dangerous_rate: float,
    interval: float,
    life: float,
    proof_coverage: float = 1.0,
    diagnostic_coverage: float = 0.0,
) -> float:
    """Average probability of failure on demand, an illustration from rates the user states: no rating.

    (1 - DC) rate (C interval + (1 - C) life) / 2: what a proof test of coverage C finds is mended every
    ``interval`` [h], the rest only after ``life`` [h]. dangerous_rate [1/h], small against 1/life. Fouling, foam
    and wrong liquids are systematic and have no rate. Reference: simplified one-channel form used with IEC 61508
    (from memory).
    """
    undetected = (1 - diagnostic_coverage) * dangerous_rate
    return undetected * (proof_coverage * interval + (1 - proof_coverage) * life) / 2
