"""Variants side by side: one table of metrics against requirements, who misses by most, and what would rescue whom."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from concurrent.futures import Executor
from dataclasses import replace
from pathlib import PurePath

import numpy as np

from outcouple.design import Design, Requirement
from outcouple.errors import UserMistake
from outcouple.evaluation import evaluate
from outcouple.evaluation.batch import Batch, evaluate_batch
from outcouple.evaluation.judge import value_for, verdict_of
from outcouple.geometry import MetricValue, Missing
from outcouple.metrics import metrics_of
from outcouple.outcome import Verdict
from outcouple.studies.compared import Cell, Comparison, Row, Variant
from outcouple.studies.corners import CORNERS, evaluate_corners
from outcouple.studies.differences import differences, under_conditions_of
from outcouple.studies.margins import label_of, scale_of
from outcouple.studies.rescue import Rescue, rescue
from outcouple.studies.sweep import NEEDS_MAP

__all__ = ["Comparison", "compare"]

SIGMA = "margin_sigma"


Told = Callable[[str], Callable[[int, int], None] | None]


def compare(
    designs: Sequence[Design],
    *,
    same_conditions: bool = False,
    rescues: bool = True,
    maps: bool = False,
    most_corners: int = CORNERS,
    executor: Executor | None = None,
    told: Told | None = None,
) -> Comparison:
    """Compare designs, each by its own requirements, nominal and at the corners it declares.

    same_conditions  judge all under the first one's environment, decision and requirements
    rescues          search a single change that rescues each one that fails
    maps             also metrics that cost a map
    told             gives a progress callback for a piece of work by its name
    """
    if len(designs) < 2:
        raise UserMistake("a comparison needs two designs at least")
    if same_conditions:
        designs = [designs[0], *(under_conditions_of(designs[0], one) for one in designs[1:])]
    labels = _labels(designs)
    asked = _requirements(designs)
    say = told or (lambda what: None)
    columns = [
        _Column(design, asked, maps, most_corners, executor, say(f"corners of {label}"))
        for design, label in zip(designs, labels, strict=True)
    ]
    rows = tuple(_row(one, at, columns) for at, one in enumerate(asked))
    variants = []
    for at, (design, column) in enumerate(zip(designs, columns, strict=True)):
        cells = [row.cells[at] for row in rows]
        verdict = verdict_of([cell for cell in cells if cell.asked])  # type: ignore[misc]
        search = rescues and verdict == "fail"
        found = rescue(design, executor=executor, progress=say(f"rescue of {labels[at]}")) if search else None
        rivals = [other for other in range(len(designs)) if other != at and _same_question(designs[other], design)]
        variants.append(_variant(design, labels, at, rows, verdict, column, found, rivals))
    return Comparison(tuple(variants), rows, tuple(differences(designs)), same_conditions)


def _same_question(one: Design, other: Design) -> bool:
    """True where two designs stand in one environment, serve one demand and tell the same states apart."""

    def question(design: Design) -> object:
        sections = design.sections.model_dump()
        states = sorted((state.name, str(state.expect)) for state in design.states)
        return sections["environment"], sections["decision"].get("demand"), states

    return question(one) == question(other)


def _labels(designs: Sequence[Design]) -> list[str]:
    """Short names: stems of the files where they differ, else the files, else numbers before them."""
    stems = [PurePath(one.file).stem for one in designs]
    if len(set(stems)) == len(stems):
        return stems
    files = [one.file for one in designs]
    return files if len(set(files)) == len(files) else [f"{at}: {name}" for at, name in enumerate(stems, 1)]


def _key(one: Requirement) -> tuple[str, str, str, bool]:
    return one.metric, one.state, one.over, one.at_least is not None


def _requirements(designs: Sequence[Design]) -> list[Requirement]:
    """Every requirement that any design states, once."""
    found: dict[tuple[str, str, str, bool], Requirement] = {}
    for design in designs:
        for one in design.requirements:
            found.setdefault(_key(one), one)
    return list(found.values())


class _Column:
    """One design's answers to all requirements."""

    def __init__(
        self,
        design: Design,
        asked: Sequence[Requirement],
        maps: bool,
        most: int,
        executor: Executor | None,
        progress: Callable[[int, int], None] | None,
    ) -> None:
        self.design = design
        self.known = metrics_of(design.geometry)
        own = {_key(one): one for one in design.requirements}
        self.own = [own.get(_key(one)) for one in asked]
        self.limits = [mine or one for mine, one in zip(self.own, asked, strict=True)]
        self.evaluated = [one for one in self.limits if self._affordable(one, maps)]
        want = tuple(dict.fromkeys([*(one.metric for one in self.evaluated), SIGMA]))
        with np.errstate(all="ignore"):
            self.batch: Batch = evaluate_batch(design, {}, want)
            outcome = evaluate(design, want=(), advice=False, views=False)
        told, self.notes = outcome.headline, outcome.notes
        self.why = told.removeprefix("FAIL: ").rstrip(".") if told.startswith("FAIL: ") else ""
        self.corners = evaluate_corners(design, self.evaluated, most=most, executor=executor, progress=progress)
        self.states = [(state.name, state.family) for state in design.states]

    def _affordable(self, one: Requirement, maps: bool) -> bool:
        metric = self.known.get(one.metric)
        return metric is not None and (maps or metric.cost == "scalar")

    def cell(self, at: int) -> Cell:
        """The answer to one requirement."""
        one = self.limits[at]
        found = self._found(one)
        value = float(found.values[0]) if isinstance(found, MetricValue) else None
        why, status = ("", "value") if isinstance(found, MetricValue) else (found.why, found.kind)
        if value is not None and np.isnan(value):
            value, why, status = None, "has no value for this design", "not applicable"
        corner = self.corners.worst[self.evaluated.index(one)] if one in self.evaluated else None
        corner = None if self.corners.method == "none" else corner
        nominal_margin = None if value is None else float(one.margin(value)) / scale_of(one)
        corner_margin = None
        if corner is not None and corner.value is not None:
            corner_margin = float(one.margin(corner.value)) / scale_of(one)
        margin = {"nominal": nominal_margin, "corners": corner_margin}.get(one.over)
        if one.over == "yield":
            why, status = "asked for over a yield, which a comparison does not run", "open"
        elif one.over == "corners" and margin is None:
            why = corner.why if corner is not None else "asked for over corners, but the design declares no tolerances"
            status = "open"
        return Cell(
            asked=self.own[at] is not None,
            limit=one.limit,
            limit_text=one.text,
            value=value,
            at=found.at if isinstance(found, MetricValue) else "",
            status=status,
            why=why,
            corner=corner,
            margin=margin,
            nominal_margin=nominal_margin,
            corner_margin=corner_margin,
            verdict="open" if margin is None else "pass" if margin >= 0 else "fail",
        )

    def _found(self, one: Requirement) -> MetricValue | Missing:
        if one.metric not in self.known:
            return Missing(f"a {self.design.geometry.name} has no such metric")
        if one not in self.evaluated:
            return NEEDS_MAP
        if one.state and one.state not in {name for pair in self.states for name in pair}:
            return Missing(f"has no state {one.state!r}")
        return value_for(one, self.batch.metrics[one.metric], self.states)


def _row(one: Requirement, at: int, columns: Sequence[_Column]) -> Row:
    metric = next(column.known[one.metric] for column in columns if one.metric in column.known)
    cells = tuple(column.cell(at) for column in columns)
    return Row(metric, one.state, one.over, one.at_least is not None, label_of(one, metric), cells)


def _variant(
    design: Design,
    labels: Sequence[str],
    at: int,
    rows: Sequence[Row],
    verdict: Verdict,
    column: _Column,
    found: Rescue | None,
    rivals: Sequence[int],
) -> Variant:
    known = [(row.cells[at].margin, place) for place, row in enumerate(rows) if row.cells[at].asked]
    ranked = sorted((margin, place) for margin, place in known if margin is not None)
    closest = ranked[0][1] if ranked else None
    sigma = column.batch.metrics[SIGMA]
    value = float(sigma.values[0]) if isinstance(sigma, MetricValue) else None
    return Variant(
        label=labels[at],
        title=design.title,
        file=design.file,
        geometry=design.geometry.name,
        verdict=verdict,
        misses=closest if ranked and ranked[0][0] < 0 else None,
        closest=closest,
        sigma=value,
        sigma_at=sigma.at if isinstance(sigma, MetricValue) else "",
        dominated_by=tuple(labels[other] for other in rivals if _beats(rows, other, at)),
        why=column.why,
        corners=column.corners,
        rescue=found,
        notes=tuple(replace(note, where=None) for note in column.notes),
        signals={state: float(values[0]) for state, values in column.batch.signals.items()},
        unverified=design.unverified(),
    )


def _beats(rows: Sequence[Row], one: int, other: int) -> bool:
    """True where one variant is nowhere worse than another and somewhere better, and everything is known of both."""
    better = []
    for row in rows:
        a, b = _standing(row, one), _standing(row, other)
        if a is None or b is None:
            return False
        better.append(a - b if a != b else 0.0)
    return bool(better) and min(better) >= 0 and max(better) > 0


def _standing(row: Row, at: int) -> float | None:
    """A variant's value in a row, larger is better, at the scope the row asks for."""
    cell = row.cells[at]
    value = cell.value
    if row.over == "corners":
        value = cell.corner.value if cell.corner is not None else None
    if value is None:
        return None
    return value if row.at_least else -value
