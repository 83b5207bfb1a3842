"""Levers as text and as plain data."""

from __future__ import annotations

from typing import Any

import numpy as np

from outcouple.quantities import format_quantity, si_unit
from outcouple.report.cells import finite, headed, shown_number
from outcouple.report.text import table
from outcouple.studies.flips import Flip
from outcouple.studies.levers import Lever, Levers
from outcouple.version import VERSION

SEEN = 5e-5
"""Smallest effect that is shown as a number."""

__all__ = ["format_levers", "levers_data", "levers_lead", "levers_rows", "levers_table"]


def levers_lead(found: Levers) -> str:
    """What decides, and what the bounds keep."""
    one, metric = found.requirement, found.metric
    sense = "at least" if one.at_least is not None else "at most"
    shown = format_quantity(found.value, metric.kind, metric.unit or None)
    limit = format_quantity(one.limit, metric.kind, metric.unit or None)
    state = f" ({one.state})" if one.state else ""
    if np.isnan(found.worst):
        return f"Open: {', '.join(found.unknown)} has no value here, so there is nothing to move."
    word = {"pass": "All requirements are met", "fail": "Not all requirements are met", "open": "Nothing is missed"}
    stated = "" if found.stated else "No requirements are stated; judged by the margin in sigma. "
    unknown = f" Open here: {', '.join(found.unknown)}." if found.unknown else ""
    return f"{stated}{word[found.verdict]}; {metric.label}{state} decides: {shown}, needs {sense} {limit}.{unknown}"


def levers_table(found: Levers) -> list[list[str]]:
    """A header and a row per input that does something, the strongest first."""
    rows = [["input", "value", "margin per +1 %", "elasticity", f"{_holds(found)} from", "to"]]
    rows += [_row(one) for one in found.levers if one.moves]
    return rows


def format_levers(found: Levers) -> str:
    """The whole answer as text."""
    idle = [one.input.name for one in found.levers if not one.moves]
    parts = [
        f"{found.title}  ({found.geometry}, {found.file})",
        levers_lead(found),
        "",
        table(levers_table(found), right=(1, 2, 3, 4, 5), indent=2),
        "",
        f"margin per +1 %: change of that margin as a share of its limit ({_limit(found)})",
        "elasticity: percent of the metric per percent of the input",
        "from, to: one input at a time; - where the verdict holds as far as the input may go",
    ]
    if found.few:
        parts.append("evaluations are dear here: bounds are sought in long steps, of inputs that move something alone")
    if idle:
        parts += ["", f"Without any effect on the verdict ({len(idle)}): {', '.join(idle)}"]
    return "\n".join(parts) + "\n"


def _limit(found: Levers) -> str:
    return format_quantity(found.requirement.limit, found.metric.kind, found.metric.unit or None)


def _holds(found: Levers) -> str:
    return {"pass": "passes", "fail": "fails"}.get(found.verdict, "stays open")


def _row(one: Lever) -> list[str]:
    leaf = one.input.leaf
    effect = "0" if abs(one.effect) < SEEN else f"{one.effect:+.2%}"
    if effect != "0" and not one.input.value:
        effect += f" per {format_quantity(one.high - one.low, leaf.kind, digits=2)}"
    return [
        one.input.name,
        format_quantity(one.input.value, leaf.kind, unit=leaf.unit or None),
        effect if np.isfinite(one.effect) else "-",
        f"{one.elasticity:+.2f}" if np.isfinite(one.elasticity) and effect != "0" else "-",
        _turn(one.below),
        _turn(one.above),
    ]


def _turn(flip: Flip | None) -> str:
    if flip is None or flip.value is None:
        return "-"
    return format_quantity(flip.value, flip.input.leaf.kind, unit=flip.input.leaf.unit or None)


def levers_rows(found: Levers) -> list[list[str | float | int | None]]:
    """Rows for a spreadsheet: every input, numbers in the unit that stands in its own column."""
    rows: list[list[str | float | int | None]] = [
        [
            "input",
            "unit",
            "value",
            headed("margin per +1 %", "share of the limit"),
            "elasticity",
            "turns below",
            "turns above",
        ]
    ]
    for one in found.levers:
        leaf = one.input.leaf
        turns = [
            None if flip is None or flip.value is None else shown_number(flip.value, leaf.kind, leaf.unit)
            for flip in (one.below, one.above)
        ]
        value = shown_number(one.input.value, leaf.kind, leaf.unit)
        rows.append([one.input.name, leaf.unit, value, one.effect, one.elasticity, *turns])
    return rows


def levers_data(found: Levers) -> dict[str, Any]:
    """Plain data for JSON, values in SI."""
    return {
        "kind": "levers",
        "schema": 1,
        "version": VERSION,
        "design": found.title,
        "file": found.file,
        "geometry": found.geometry,
        "verdict": found.verdict if found.stated else "none stated",
        "decides": {
            "metric": found.requirement.metric,
            "state": found.requirement.state,
            "value": finite(found.value),
            "limit": finite(found.requirement.limit),
            "unit": si_unit(found.metric.kind),
            "margin": finite(found.worst),
        },
        "open": list(found.unknown),
        "coarse": found.few,
        "levers": [_data(one) for one in found.levers],
    }


def _data(one: Lever) -> dict[str, Any]:
    return {
        "path": one.input.name,
        "unit": one.input.leaf.si_unit,
        "value": one.input.value,
        "effect_per_percent": finite(one.effect),
        "elasticity": finite(one.elasticity),
        "turns_below": None if one.below is None else one.below.value,
        "turns_above": None if one.above is None else one.above.value,
    }
