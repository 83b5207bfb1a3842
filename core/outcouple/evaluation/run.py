"""design -> Outcome: the one place where it all meets."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from outcouple.design import Design
from outcouple.evaluation.advice import advise
from outcouple.evaluation.batch import measure, results_of, wanted
from outcouple.evaluation.curves import continuous_curve, response_curve
from outcouple.evaluation.failures import failure_table
from outcouple.evaluation.headline import headline_of, limiting_of, worst_state_of
from outcouple.evaluation.judge import judge, verdict_of
from outcouple.evaluation.ledger import ledger_of
from outcouple.evaluation.notes import design_notes
from outcouple.evaluation.rays import ray_powers
from outcouple.evaluation.table import StateRow, Table, tabulate
from outcouple.evaluation.tunnelling import tunnelling_map
from outcouple.fields import leaves
from outcouple.geometry import Curve, Metric, MetricValue, Missing, Results, View
from outcouple.metrics import metrics_of
from outcouple.notes import merge_notes
from outcouple.outcome import MetricResult, Outcome, Stage, StateOutcome
from outcouple.quantities import format_quantity
from outcouple.version import VERSION

__all__ = ["evaluate"]


def evaluate(
    design: Design,
    *,
    want: Sequence[str] | None = None,
    maps: bool = False,
    advice: bool = True,
    views: bool = True,
    curve: bool | None = None,
) -> Outcome:
    """Evaluate one design as it stands.

    want    names of metrics; all scalar ones where None; those a requirement names always
    maps    also the metrics and surfaces that cost a map; without it they stay open
    advice  also which few inputs would move the worst margin most
    views   also the drawings, with how much of each ray survives in every state
    curve   also the main response curve; as ``views`` where None
    """
    known = metrics_of(design.geometry)
    names = _names(design, known, want, maps)
    table = tabulate(design)
    results = results_of(table, continuous_curve(table))
    found = measure(table, names, results)
    states = [(row.laid.state.name, row.laid.state.family) for row in table.rows]
    judged = judge(design.requirements, known, found, states)
    verdict = verdict_of(judged)
    worst = worst_state_of(table, judged)
    limiting = limiting_of(table, worst)
    drawn = design.geometry.views(table.setting) if views else ()
    surfaces = design.geometry.surfaces(names, results) if maps else ()
    return Outcome(
        title=design.title,
        geometry=design.geometry.name,
        file=design.file,
        words=design.geometry.words,
        verdict=verdict,
        headline=headline_of(design, table, verdict, judged, found, limiting),
        limiting=limiting,
        worst_state=worst,
        states=tuple(_state(row, table, drawn) for row in table.rows),
        metrics={name: _metric(known[name], found.get(name)) for name in known},
        requirements=judged,
        noise=_shares(table, worst),
        noise_state=worst,
        level=_level(table),
        level_kind="relative change" if design.geometry.reading == "change" else table.rows[0].reading.unit,
        notes=merge_notes([*design_notes(design, table), *table.notes, *design.geometry.remarks(results)]),
        failures=failure_table(design, table),
        advice=advise(design, table, judged, found) if advice else (),
        curve=_curve(table, results) if (views if curve is None else curve) else None,
        surfaces=surfaces,
        tunnelling=tunnelling_map(table) if (views if curve is None else curve) else None,
        views=drawn,
        defaults=design.unverified(),
        demand=str(table.view.decision.demand),
        version=VERSION,
    )


def _names(design: Design, known: Mapping[str, Metric], want: Sequence[str] | None, maps: bool) -> tuple[str, ...]:
    chosen = dict.fromkeys(wanted(design, want))
    for one in design.requirements:
        if maps or known[one.metric].cost == "scalar":
            chosen[one.metric] = None
    if maps and want is None:
        chosen.update(dict.fromkeys(known))
    return tuple(chosen)


def _level(table: Table) -> float | None:
    if table.decided is None:
        return None
    sign = -1.0 if table.design.geometry.present_reads == "low" else 1.0
    return float(sign * table.decided.level[0, 0])


def _curve(table: Table, results: Results) -> Curve | None:
    axis = table.design.geometry.response(table.setting)
    return table.design.geometry.curve(results) if axis is None else response_curve(table, axis)


def _shares(table: Table, state: str) -> dict[str, float]:
    """Share of each cause in the noise power of one state's noisiest channel."""
    row = table.row(state)
    total = row.reading.variance[0]
    at = int(np.argmax(total)) if total.size > 1 else 0
    found = {}
    for cause, variance in row.reading.variances.items():
        value = np.broadcast_to(variance, row.reading.variance.shape)[0, at]
        if value > 0:
            found[cause] = float(value / total[at])
    return dict(sorted(found.items(), key=lambda item: -item[1]))


def _metric(metric: Metric, found: MetricValue | Missing | None) -> MetricResult:
    value, status, why, at, states = None, "value", "", "", {}
    if found is None:
        status, why = (
            "open",
            "needs a map, which was not asked for" if metric.cost == "map" else "was not asked for",
        )
    elif isinstance(found, Missing):
        status, why = found.kind, found.why
    else:
        value, at = float(found.values[0]), found.at
        states = {name: float(np.broadcast_to(v, found.values.shape)[0]) for name, v in found.states.items()}
        if np.isnan(value):
            value, status, why = None, "not applicable", "has no value for this design"
    return MetricResult(
        name=metric.name,
        label=metric.label,
        value=value,
        kind=metric.kind,
        unit=metric.unit,
        better=metric.better,
        scope=metric.scope,
        meaning=metric.meaning,
        at=at,
        why=why,
        status=status,  # type: ignore[arg-type]
        states=states,
    )


def _state(row: StateRow, table: Table, views: Sequence[View]) -> StateOutcome:
    state, reading = row.laid.state, row.reading
    mean, noise = reading.mean[0], np.broadcast_to(reading.noise, reading.mean.shape)[0]
    at = _faintest(row)
    score = row.score
    pick = int(np.argmax(score.mean[0])) if score is not None else 0
    losses, stages = _stages(row, at)
    sign = -1.0 if table.design.geometry.present_reads == "low" else 1.0
    return StateOutcome(
        name=state.name,
        family=state.family,
        expect=state.expect,
        word=_word(table, state.expect),
        signal=float(mean[at]),
        noise=float(noise[at]),
        unit=reading.unit,
        share=float(np.broadcast_to(row.result.share, reading.mean.shape)[0, at]),
        score=None if score is None else float(sign * score.mean[0, pick]),
        spread=None if score is None else float(np.broadcast_to(score.noise, score.mean.shape)[0, pick]),
        stages=stages,
        lost=losses,
        channels={"count": int(mean.size), "worst": at},
        role=state.role,
        rays=ray_powers(table, row, views),
    )


def _word(table: Table, expect: str | float) -> str:
    """What people read for an expectation: the geometry's word, or the measurand's value."""
    geometry = table.design.geometry
    if isinstance(expect, str):
        return geometry.words[("absent", "present").index(expect)]
    leaf = next(leaf for leaf in leaves(geometry.Parameters) if leaf.path == geometry.measurand)
    return format_quantity(expect, leaf.kind, unit=leaf.unit or None)


def _stages(row: StateRow, channel: int) -> tuple[dict[str, float], tuple[Stage, ...]]:
    ledger = ledger_of(row.laid, channel)
    power = float(np.broadcast_to(row.laid.setting.p.emitter.power, (1,))[0])
    stages, left = [Stage("sent out by the emitter", 1.0, 1.0, power, 0.0)], 1.0
    for label, share in (*ledger.losses.items(), *((k, -v) for k, v in ledger.returned.items())):
        after = max(left - share, 0.0) if abs(left - share) < 1e-15 else left - share
        stages.append(Stage(label, after / left if left > 0 else 0.0, after, after * power, share))
        left = after
    return {**ledger.losses, **{k: -v for k, v in ledger.returned.items()}}, tuple(stages)


def _faintest(row: StateRow) -> int:
    """Channel of the faintest reading at the first sample, blind ones left out."""
    mean = row.reading.mean[0]
    if row.score is None or np.all(row.score.blind[0]):
        return int(np.argmin(mean))
    return int(np.argmin(np.where(row.score.blind[0], np.inf, mean)))
