"""A sweep as a colleague would tell it: where all requirements are met, where each is just met, the points."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from outcouple.quantities import format_quantity
from outcouple.report.text import table
from outcouple.studies import Axis, Crossing, Span, Sweep, crossings, spans

__all__ = ["format_sweep", "sweep_lines"]

ROWS = 40
"""Points that are listed; a longer sweep shows every so-manieth and says so."""
LINES = 12
"""Lines of the lists of places."""
MARKS = {"pass": "ok", "fail": "MISSED", "open": "open", "none stated": "-", "": "not run"}


def format_sweep(found: Sweep) -> str:
    """The whole answer as text."""
    cautions = [f"  - {line}" for line in _cautions(found)]
    blocks = [
        _head(found),
        _met(found),
        _crossed(found),
        _points(found),
        "\n".join(["Cautions", *cautions]) if cautions else "",
    ]
    return "\n\n".join(block for block in blocks if block) + "\n"


def sweep_lines(found: Sweep) -> tuple[str, list[tuple[str, list[list[str]]]], list[str]]:
    """Lead, tables and cautions for a page."""
    tables = []
    for heading, lines in (("All requirements are met", _span_lines(found)), ("Just met", _crossing_lines(found))):
        if lines:
            tables.append((heading, [["interpolated between points"], *([line] for line in lines)]))
    lead = f"{_axes(found)}: {_count(found)}." + ("" if _span_lines(found) else f" {_met(found)}.")
    return lead, tables, _cautions(found)


def _head(found: Sweep) -> str:
    return f"{found.title}  ({found.geometry}, {found.file})\n{_axes(found)}: {_count(found)}"


def _axes(found: Sweep) -> str:
    return " x ".join(f"{axis.name} ({len(axis.values)})" for axis in found.axes)


def _count(found: Sweep) -> str:
    done = int(np.sum(found.done))
    if not found.limits:
        return f"{done} points; no requirements are stated, so there is no verdict"
    passing, unknown = int(np.sum(found.verdicts == "pass")), int(np.sum(found.verdicts == "open"))
    tail = f", {unknown} open" if unknown else ""
    part = "" if found.finished else f" ({found.done.size - done} more were not run)"
    return f"all requirements are met at {passing} of {done} points{tail}{part}"


def _met(found: Sweep) -> str:
    """Stretches of the first numeric axis on which everything is met, else the point that comes nearest."""
    lines = _span_lines(found)
    if lines:
        return "All requirements are met\n" + _listed(lines)
    worst = np.where(np.isnan(found.worst), -np.inf, found.worst)
    if not found.limits or not np.any(np.isfinite(worst)):
        return "\n".join(f"open: {limit.label}: {limit.why}" for limit in found.limits if limit.why)
    at = tuple(int(one) for one in np.unravel_index(int(np.argmax(worst)), found.shape))
    missed = min(found.limits, key=lambda limit: float(limit.scaled[at]))
    word = "Nearest to all being met" if worst[at] < 0 else "Best point"
    return f"{word}: {_point(found.axes, at)}; {missed.label} decides there"


def _first_numeric(found: Sweep) -> list[int]:
    return [along for along, axis in enumerate(found.axes) if axis.numeric][:1]


def _span_lines(found: Sweep) -> list[str]:
    return [_span(found, found.axes[along], one) for along in _first_numeric(found) for one in spans(found, along)]


def _crossing_lines(found: Sweep) -> list[str]:
    return [_crossing(found, one) for along in _first_numeric(found) for one in crossings(found, along)]


def _span(found: Sweep, axis: Axis, span: Span) -> str:
    low, high = axis.shown(span.low, digits=4), axis.shown(span.high, digits=4)
    reach = {(True, True): ", the whole sweep", (True, False): ", from where the sweep begins"}.get(
        span.opens, ", to where the sweep ends" if span.opens[1] else ""
    )
    if low == high:
        return f"{axis.name} = {low} alone{_beside(found.axes, span.others)}"
    return f"{axis.name} from {low} to {high}{reach}{_beside(found.axes, span.others)}"


def _crossed(found: Sweep) -> str:
    lines = _crossing_lines(found)
    return "Just met (between points, interpolated)\n" + _listed(lines) if lines else ""


def _crossing(found: Sweep, one: Crossing) -> str:
    where = "above" if one.rises else "below"
    place = one.axis.shown(one.value, digits=4)
    return f"{one.label}: met {where} {one.axis.name} = {place}{_beside(found.axes, one.others)}"


def _beside(axes: Sequence[Axis], at: Sequence[int | None]) -> str:
    rest = [f"{axis.name} = {axis.texts()[one]}" for axis, one in zip(axes, at, strict=True) if one is not None]
    return f" ({', '.join(rest)})" if rest else ""


def _point(axes: Sequence[Axis], at: Sequence[int]) -> str:
    return ", ".join(f"{axis.name} = {axis.shown(axis.values[int(one)])}" for axis, one in zip(axes, at, strict=True))


def _listed(lines: Sequence[str]) -> str:
    more = f"\n  ... and {len(lines) - LINES} more (--csv, --out and --json hold all)" if len(lines) > LINES else ""
    return "\n".join(f"  - {line}" for line in lines[:LINES]) + more


def _points(found: Sweep) -> str:
    done = np.flatnonzero(found.done.ravel())
    verdicts, dangers = found.verdicts, found.dangers
    step = -(-len(done) // ROWS)
    shown = [one.metric for one in found.metrics.values() if not one.why or np.any(np.isfinite(one.values))]
    rows = [(*(axis.name for axis in found.axes), *(metric.label for metric in shown), "")]
    for flat in done[::step]:
        at = tuple(int(one) for one in np.unravel_index(flat, found.shape))
        cells = [
            format_quantity(float(found.metrics[metric.name].values[at]), metric.kind, metric.unit or None)
            for metric in shown
        ]
        places = [axis.shown(axis.values[one]) for axis, one in zip(found.axes, at, strict=True)]
        mark = MARKS[str(verdicts[at])] + (" !" if dangers[flat] else "")
        rows.append((*places, *cells, mark))
    heading = "Points" if step == 1 else f"Points (every {step}th of {len(done)}; --csv holds all)"
    danger = "\n  ! a danger holds there; the cautions tell it" if any(row[-1].endswith("!") for row in rows) else ""
    right = range(len(found.axes), len(found.axes) + len(shown))
    return f"{heading}\n{table(rows, right=tuple(right))}{danger}" if len(rows) > 1 else ""


def _cautions(found: Sweep) -> list[str]:
    total = int(np.sum(found.done))
    lines = []
    for note in sorted(found.notes, key=lambda one: one.severity != "danger"):
        if note.severity == "info":
            continue
        held = total if note.where is None else int(np.sum(note.where))
        where = "" if held >= total else f" (at {held} of {total} points)"
        decides = f" Decides: {note.decides}." if note.decides else ""
        lines.append(f"{note.severity}: {note.text}{where}{decides}")
    for note in sorted(found.standing, key=lambda one: one.severity != "danger"):
        decides = f" Decides: {note.decides}." if note.decides else ""
        lines.append(f"{note.severity}: {note.text}{decides} (told of the design as it stands)")
    return lines
