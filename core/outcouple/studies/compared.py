"""What a comparison found: variants, requirements, and a cell where they meet."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from outcouple.geometry import Metric
from outcouple.notes import Note
from outcouple.outcome import Verdict
from outcouple.studies.corners import Cornered, Worst
from outcouple.studies.differences import Difference
from outcouple.studies.rescue import Rescue

__all__ = ["Cell", "Comparison", "Row", "Variant"]


@dataclass(frozen=True)
class Cell:
    """One requirement at one variant.

    asked     False where this variant does not ask for it; the value is shown all the same
    limit     its limit (SI) here
    value     nominal, SI; None where there is none, ``why`` says why not, ``status`` whether that is for good
    at        state the value belongs to
    corner    worst at the corners; None where no corners were run
    margin    distance to the limit in units of the limit, at the scope the requirement asks for; None where unknown
    nominal_margin, corner_margin  the same at either scope
    """

    asked: bool
    limit: float
    limit_text: str
    value: float | None
    at: str
    status: str
    why: str
    corner: Worst | None
    margin: float | None
    nominal_margin: float | None
    corner_margin: float | None
    verdict: str

    @property
    def known(self) -> bool:
        """True where it can be compared."""
        return self.margin is not None


@dataclass(frozen=True)
class Row:
    """One requirement over all variants: the metric, the state it is about, the scope it asks for."""

    metric: Metric
    state: str
    over: str
    at_least: bool
    label: str
    cells: tuple[Cell, ...]


@dataclass(frozen=True)
class Variant:
    """One design among others.

    misses        row and cell of the requirement it misses by most, in units of the limit; None where it misses none
    closest       row and cell of the least margin, missed or not
    sigma         its least margin in sigma, and the state
    dominated_by  labels of variants that answer the same question and are nowhere worse and somewhere better
    why           what is wrong with one that fails, as its own evaluation tells it; empty for others
    rescue        only for one that fails; None where it was not searched
    """

    label: str
    title: str
    file: str
    geometry: str
    verdict: Verdict
    misses: int | None
    closest: int | None
    sigma: float | None
    sigma_at: str
    dominated_by: tuple[str, ...]
    why: str
    corners: Cornered
    rescue: Rescue | None
    notes: tuple[Note, ...]
    signals: Mapping[str, float]
    unverified: tuple[str, ...]


@dataclass(frozen=True)
class Comparison:
    """What came of it; cells of a row stand in the order of the variants."""

    variants: tuple[Variant, ...]
    rows: tuple[Row, ...]
    differences: tuple[Difference, ...]
    frozen: bool
