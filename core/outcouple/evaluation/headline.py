"""What a colleague would say first: the verdict as a consequence, the state that decides it, and what limits."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from outcouple.decision.failure_modes import DEMANDS
from outcouple.design import Design
from outcouple.evaluation.decision_measures import DECISION_MEASURES
from outcouple.evaluation.failures import consequence, dangerous_uncovered
from outcouple.evaluation.faults import DEAD
from outcouple.evaluation.ledger import ledger_of
from outcouple.evaluation.table import StateRow, Table
from outcouple.geometry import MetricValue, Missing
from outcouple.outcome import Judged, Verdict
from outcouple.quantities import format_quantity
from outcouple.readout.noise import CAUSES

__all__ = ["headline_of", "limiting_of", "worst_state_of"]

DEAD_EMITTER = ("dead_emitter_unnoticed", "fault_band_coverage")
"""Metrics that a dead emitter decides."""
OF_LIGHT = ("worst_ratio", "margin_span")
"""Metrics that stray light limits and noise does not."""
OF_NOISE = (
    "signal_to_noise",
    "noise",
    "margin_sigma",
    "margin_at_end_of_life",
    "false_alarms_per_year",
    "miss_probability",
    "dangerous_probability",
    "spurious_per_year",
    "resolution",
    "best_resolution",
    "resolution_density",
    "noise_equivalent_power",
)
TIED = 1e-6
"""Standard deviations below which a state lies on the level but for rounding."""


def worst_state_of(table: Table, judged: Sequence[Judged]) -> str:
    """The state that decides: of the requirement missed by most, else the one with the least margin, else the first."""
    names = {row.laid.state.name for row in table.rows}
    missed = [one for one in judged if one.verdict == "fail" and one.shortfall is not None]
    for one in sorted(missed, key=lambda found: -float(found.shortfall or 0)):
        for part in reversed(one.at.split(" : ")):
            if part in names:
                return _dark_twin(table, part)
    if table.decided is not None:
        return table.decided.worst()
    return table.rows[0].laid.state.name


def _dark_twin(table: Table, state: str) -> str:
    """Of states that cannot be told apart the one that should be dark: the light it still gets says why."""
    sigma = table.decided.sigma if table.decided is not None else {}
    if state not in sigma or abs(float(sigma[state][0])) >= TIED:
        return state
    dark = "present" if table.design.geometry.present_reads == "low" else "absent"
    tied = [name for name, value in sigma.items() if abs(float(value[0])) < TIED]
    return next((name for name in tied if table.row(name).laid.state.expect == dark), state)


def limiting_of(table: Table, state: str) -> str:
    """What keeps the deciding state from doing better, in a few words."""
    row = table.row(state)
    floor = _floor(table, row)
    if floor:
        return floor
    total = row.reading.variance[0]
    at = int(np.argmax(total))
    shares = {
        cause: float(np.broadcast_to(variance, row.reading.variance.shape)[0, at] / total[at])
        for cause, variance in row.reading.variances.items()
        if total[at] > 0
    }
    if not shares:
        return ""
    cause = max(shares, key=lambda name: shares[name])
    return f"limited by {CAUSES.get(cause, cause)}, {shares[cause]:.0%} of the noise power"


def _floor(table: Table, row: StateRow) -> str:
    """Where a state should be dark: what the light it still gets consists of."""
    dark = "present" if table.design.geometry.present_reads == "low" else "absent"
    if row.laid.state.expect != dark or table.design.geometry.reading != "level":
        return ""
    ledger = ledger_of(row.laid)
    parts = dict(ledger.returned)
    parts["reflection at the faces"] = ledger.received - sum(ledger.returned.values())
    label = max(parts, key=lambda name: parts[name])
    if ledger.received <= 0:
        return ""
    words = {
        "reaches the detector beside the faces": "crosstalk beside the faces",
        "reflection at the faces": "what the faces still reflect",
    }
    what = words.get(label, "light sent back diffusely" if "diffusely" in label else label)
    return f"limited by {what}, {parts[label] / ledger.received:.0%} of the light in {row.laid.state.name!r}"


def headline_of(
    design: Design,
    table: Table,
    verdict: Verdict,
    judged: Sequence[Judged],
    found: Mapping[str, MetricValue | Missing],
    limiting: str,
) -> str:
    """One sentence: the verdict as a consequence."""
    missed = sorted(
        (one for one in judged if one.verdict == "fail"),
        key=lambda one: -float(one.shortfall if one.shortfall is not None else 0),
    )
    if missed:
        first = missed[0]
        why = _why(table, first) or _limits(table, first, limiting)
        return f"FAIL: {_misread(design, table, first)}{_against(first)}{f'; {why}' if why else ''}."
    if verdict == "open":
        waiting = ", ".join(f"{one.label} ({one.why})" for one in judged if one.verdict == "open")
        return (
            f"OPEN: nothing is missed, but not everything was evaluated: {waiting}. Unknown is not a pass."
            f"{_unasked(design, table)}"
        )
    dead = _dead(design, table, found)
    rest = _unasked(design, table) + (f" But {dead}, and nothing tells it." if dead else "")
    if verdict == "none stated":
        return f"NO VERDICT: the design states no requirements{_least_margin(found)}.{rest}"
    tight = min(judged, key=lambda one: float(one.margin or 0) / (abs(one.limit) or 1.0))
    return f"PASS: {_all_met(len(judged))}; closest is {_against(tight)}.{rest}"


def _unasked(design: Design, table: Table) -> str:
    """States on the wrong side of the level that no requirement missed."""
    if table.decided is None:
        return ""
    absent, present = design.geometry.words
    wrong = [
        f"{row.laid.state.name} reads {present if row.laid.state.expect == 'absent' else absent}"
        for row in table.binary
        if row.laid.state.role == "normal" and float(table.decided.sigma[row.laid.state.name][0]) < -TIED
    ]
    return f" But {', '.join(wrong)}: no requirement asks about it." if wrong else ""


def _all_met(count: int) -> str:
    return "the one requirement is met" if count == 1 else f"all {count} requirements are met"


def _least_margin(found: Mapping[str, MetricValue | Missing]) -> str:
    margin = found.get("margin_sigma")
    if not isinstance(margin, MetricValue):
        return ""
    return f"; the least margin is {float(margin.values[0]):.3g} sigma ({margin.at})"


def _why(table: Table, one: Judged) -> str:
    """What keeps a requirement that is not about light from being met."""
    if one.metric in DEAD_EMITTER or one.at == DEAD:
        return "no reference channel, drive monitor or fault band tells it"
    if one.metric == "undetected_dangerous_causes":
        would = list(dict.fromkeys(name for row in dangerous_uncovered(table) for name in row.missing))
        return f"the diagnostics that would tell more are {', '.join(would)}" if would else ""
    return ""


def _limits(table: Table, one: Judged, limiting: str) -> str:
    """What limits the metric that is missed: stray light, noise, or neither of them."""
    if one.metric in OF_NOISE:
        return limiting
    if one.metric in OF_LIGHT:
        return _floor(table, table.row(worst_state_of(table, (one,))))
    return ""


def _dead(design: Design, table: Table, found: Mapping[str, MetricValue | Missing]) -> str:
    """ "a dead emitter reads wet (dangerous: ...)" where that passes for a healthy sensor."""
    unnoticed = found.get("dead_emitter_unnoticed")
    if not isinstance(unnoticed, MetricValue) or float(unnoticed.values[0]) < 0.5:
        return ""
    wrong = "present" if DEMANDS[str(table.view.decision.demand)] == "absent" else "absent"
    word = dict(zip(("absent", "present"), design.geometry.words, strict=True))[wrong]
    return f"a dead emitter reads {word}{consequence(design, table, wrong)}"


def _against(one: Judged) -> str:
    where = f" ({one.at.strip('()')})" if one.at else ""
    value = "unknown" if one.value is None else format_quantity(one.value, one.kind, unit=one.unit or None)
    return (
        f"{one.label} {value}{where}, needs {one.sense} {format_quantity(one.limit, one.kind, unit=one.unit or None)}"
    )


def _misread(design: Design, table: Table, one: Judged) -> str:
    """ "milk reads dry (dangerous: ...); " where the state named lies on the wrong side of the level."""
    if table.decided is None:
        return ""
    if one.metric in DEAD_EMITTER or one.at == DEAD:
        dead = _dead(design, table, {"dead_emitter_unnoticed": DECISION_MEASURES["dead_emitter_unnoticed"](table)})
        return f"{dead}; " if dead else ""
    absent, present = design.geometry.words
    for part in reversed(one.at.split(" : ")):
        sigma = table.decided.sigma.get(part)
        if sigma is None or float(sigma[0]) >= TIED:
            continue
        if abs(float(sigma[0])) < TIED:
            part = _dark_twin(table, part)
        expect = table.row(part).laid.state.expect
        if abs(float(sigma[0])) < TIED:
            return f"{part} cannot be told from {present if expect == 'absent' else absent}; "
        reads, kind = (absent, "absent") if expect == "present" else (present, "present")
        return f"{part} reads {reads}{consequence(design, table, kind)}; "
    return ""
