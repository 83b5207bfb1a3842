"""An outcome as a colleague would tell it: verdict first, then why, then the ledger."""

from __future__ import annotations

import shutil
import textwrap
from collections.abc import Iterator, Sequence

from outcouple.outcome import FailureDirection, Judged, MetricResult, Outcome, StateOutcome
from outcouple.quantities import format_quantity
from outcouple.readout.noise import CAUSES

__all__ = ["format_outcome", "table"]

MARK = {"pass": "ok", "fail": "MISSED", "open": "open", "none stated": "-"}
SEVERITY = {"danger": "DANGER", "caution": "caution", "info": "note"}


def format_outcome(outcome: Outcome, *, width: int | None = None, every_metric: bool = False) -> str:
    """The whole answer as text, wrapped to the terminal."""
    width = min(width or shutil.get_terminal_size((100, 24)).columns, 110)
    blocks = [
        _head(outcome, width),
        _requirements(outcome),
        _states(outcome),
        _change(outcome, width),
        _ledger(outcome),
        _noise(outcome),
        _failures(outcome, width),
        _metrics(outcome, every_metric),
        _cautions(outcome, width),
        _tail(outcome, width),
    ]
    return "\n\n".join(block for block in blocks if block) + "\n"


def table(rows: Sequence[Sequence[str]], *, right: Sequence[int] = (), indent: int = 2) -> str:
    """Rows in columns wide enough for them; columns in ``right`` flush right."""
    widths = [max(len(row[at]) for row in rows) for at in range(len(rows[0]))]
    lines = []
    for row in rows:
        cells = [
            cell.rjust(size) if at in right else cell.ljust(size)
            for at, (cell, size) in enumerate(zip(row, widths, strict=True))
        ]
        lines.append((" " * indent + "  ".join(cells)).rstrip())
    return "\n".join(lines)


def _wrap(text: str, width: int, first: str = "  ", rest: str = "  ") -> str:
    return textwrap.fill(text, width, initial_indent=first, subsequent_indent=rest, break_long_words=False)


def _head(outcome: Outcome, width: int) -> str:
    lines = [
        f"{outcome.title}  ({outcome.geometry}, {outcome.file})",
        _wrap(outcome.headline, width, "", "  "),
    ]
    if outcome.worst_state:
        why = f": {outcome.limiting}" if outcome.limiting else ""
        lines.append(_wrap(f"Deciding state: {outcome.worst_state}{why}", width, "", "  "))
    if outcome.defaults:
        lines.append(
            _wrap(
                f"{_many(len(outcome.defaults), 'decisive input')} left at an unverified default: "
                f"{', '.join(outcome.defaults)}",
                width,
                "",
                "  ",
            )
        )
    return "\n".join(lines)


def _shown(value: float | None, kind: str, unit: str) -> str:
    return "-" if value is None else format_quantity(value, kind, unit=unit or None, digits=4)


def _requirements(outcome: Outcome) -> str:
    if not outcome.requirements:
        return "Requirements: none stated"
    rows = [("", "requirement", "limit", "value", "at")]
    for one in outcome.requirements:
        rows.append(
            (
                MARK[one.verdict],
                one.label + (f" [{one.state}]" if one.state else ""),
                f"{one.sense} {_shown(one.limit, one.kind, one.unit)}",
                _shown(one.value, one.kind, one.unit) if one.value is not None else f"open: {one.why}",
                _where(one, outcome),
            )
        )
    return "Requirements\n" + table(rows)


def _where(one: Judged, outcome: Outcome) -> str:
    return one.at or one.state


def _states(outcome: Outcome) -> str:
    sigma, span = outcome.metrics.get("margin_sigma"), outcome.metrics.get("margin_span")
    rows = [("state", "expected", "reading", "noise", "of emitter", "margin", "of span")]
    for state in outcome.states:
        kind = "current" if state.unit == "A" else "electrons"
        rows.append(
            (
                state.name,
                state.word,
                format_quantity(state.signal, kind),
                format_quantity(state.noise, kind),
                f"{state.share:.3%}" if state.share >= 1e-5 else f"{state.share:.2e}",
                _of(sigma, state, "{:+.3g} sigma"),
                _of(span, state, "{:+.1%}"),
            )
        )
    level = ""
    if outcome.level is not None:
        if outcome.level_kind == "relative change":
            level = f"\n  level: a relative change of {outcome.level:.3%}"
        else:
            kind = "current" if outcome.level_kind == "A" else "electrons"
            level = f"\n  level: {format_quantity(outcome.level, kind)}"
    return "States\n" + table(rows, right=(2, 3, 4, 5, 6)) + level


def _of(metric: MetricResult | None, state: StateOutcome, form: str) -> str:
    if metric is None or state.name not in metric.states:
        return ""
    return form.format(metric.states[state.name])


def _change(outcome: Outcome, width: int) -> str:
    if not outcome.advice:
        return ""
    lines = [_wrap(one.text, width, "  - ", "    ") for one in outcome.advice]
    return (
        "What would move the worst margin most (one input at a time, by a fifth; wavelengths to the next usual one)\n"
        + "\n".join(lines)
    )


def _ledger(outcome: Outcome) -> str:
    shown = _ledger_states(outcome)
    labels = list(dict.fromkeys(stage.label for state in shown for stage in state.stages[1:]))
    rows = [("of the light sent out", *(state.name for state in shown))]
    for label in labels:
        cells = []
        for state in shown:
            lost = next((stage.lost for stage in state.stages if stage.label == label), 0.0)
            cells.append("" if abs(lost) < 5e-7 else f"{-lost:+.3%}")
        if any(cells):
            rows.append((label, *cells))
    rows.append(("reaches the read-out", *(f"{state.stages[-1].share:.4%}" for state in shown)))
    return "Where the light goes\n" + table(rows, right=tuple(range(1, len(shown) + 1)))


def _ledger_states(outcome: Outcome) -> list[StateOutcome]:
    """The deciding state and the first of the other expectations, four at most."""
    worst = next((state for state in outcome.states if state.name == outcome.worst_state), outcome.states[0])
    chosen = [outcome.states[0], worst, *outcome.states]
    return list({state.name: state for state in chosen}.values())[:4]


def _noise(outcome: Outcome) -> str:
    if not outcome.noise:
        return ""
    rows = [(f"{share:.1%}", CAUSES.get(cause, cause)) for cause, share in outcome.noise.items() if share >= 0.005]
    return f"Noise power in {outcome.noise_state!r}\n" + table(rows, right=(0,))


def _failures(outcome: Outcome, width: int) -> str:
    if not outcome.failures:
        return ""
    rows = [("", "cause", "reads", "told by")]
    rows += [
        (
            row.direction.upper() if row.direction == "dangerous" else row.direction,
            textwrap.shorten(row.cause, 60, placeholder=" ...") + (" (creeps in)" if row.slow else ""),
            row.reads,
            _told_by(row),
        )
        for row in outcome.failures
    ]
    demand = f" (demand: {outcome.demand})" if outcome.demand else " (no demand stated: every direction is open)"
    return f"Failure directions{demand}\n" + table(rows)


def _told_by(row: FailureDirection) -> str:
    if row.covered_by:
        return ", ".join(row.covered_by)
    if row.direction != "dangerous":
        return "-"
    return "nothing" + (f"; {' or '.join(row.missing[:2])} would" if row.missing else "")


def _metrics(outcome: Outcome, every: bool) -> str:
    asked = {one.metric for one in outcome.requirements}
    rows = []
    for metric in outcome.metrics.values():
        if metric.name in asked or metric.name in (
            "margin_sigma",
            "margin_span",
            "signal",
            "noise",
            "optical_share",
        ):
            continue
        if metric.status != "value" and not every:
            continue
        value = (
            _shown(metric.value, metric.kind, metric.unit)
            if metric.value is not None
            else f"{metric.status}: {metric.why}"
        )
        rows.append((metric.label, value, metric.at))
    return "Metrics\n" + table(rows) if rows else ""


def _cautions(outcome: Outcome, width: int) -> str:
    lines = list(_caution_lines(outcome, width))
    return "Cautions\n" + "\n".join(lines) if lines else ""


def _caution_lines(outcome: Outcome, width: int) -> Iterator[str]:
    order = {"danger": 0, "caution": 1, "info": 2}
    for note in sorted(outcome.notes, key=lambda one: order.get(one.severity, 1)):
        rest = f" [{note.trigger}]" if note.trigger else ""
        decides = f" Decides: {note.decides}." if note.decides else ""
        yield _wrap(f"{SEVERITY.get(note.severity, 'caution')}: {note.text}{rest}{decides}", width, "  - ", "    ")


def _tail(outcome: Outcome, width: int) -> str:
    lines = [_beside(outcome), f"Verdict: {outcome.verdict.upper()}"]
    return "\n".join(line for line in lines if line)


def _beside(outcome: Outcome) -> str:
    """What stands beside the verdict: inputs nobody has confirmed, and dangers."""
    parts = []
    if outcome.defaults:
        parts.append(_many(len(outcome.defaults), "unverified decisive input"))
    dangers = sum(note.severity == "danger" for note in outcome.notes)
    if dangers:
        parts.append(_many(dangers, "danger"))
    return f"Beside the verdict: {' and '.join(parts)}, told above" if parts else ""


def _many(count: int, word: str) -> str:
    return f"{count} {word}{'' if count == 1 else 's'}"
