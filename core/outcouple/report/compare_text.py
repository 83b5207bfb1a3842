"""A comparison as a colleague would tell it: who meets all, who misses by most and why, then the table."""

from __future__ import annotations

import shutil
import textwrap

from outcouple.notes import Note
from outcouple.quantities import format_quantity
from outcouple.report.text import table
from outcouple.studies.compared import Cell, Comparison, Row, Variant
from outcouple.studies.flips import Flip

__all__ = [
    "caution_lines",
    "compare_lead",
    "corner_line",
    "corner_table",
    "difference_table",
    "format_comparison",
    "requirement_table",
    "variant_lines",
    "wide_difference_table",
]

MARK = {"pass": "ok", "fail": "MISSED", "open": "open"}
ROUNDING = 1e-9
"""Share of a limit below which a value is rounding, and zero is shown."""
LONGEST = 44
"""Characters of an input's text that the terminal shows."""


def format_comparison(found: Comparison, *, width: int | None = None) -> str:
    """The whole answer as text."""
    width = width or min(shutil.get_terminal_size((100, 24)).columns, 120)
    blocks = [
        _wrap(compare_lead(found), width, "", ""),
        "\n".join(_variant(found, at, width) for at in range(len(found.variants))),
        "Requirements, nominal (margins as a share of the limit)\n" + table(requirement_table(found)),
        _corners(found),
        _differences(found, condition=True),
        _differences(found, condition=False),
        _cautions(found, width),
    ]
    return "\n\n".join(block for block in blocks if block) + "\n"


def compare_lead(found: Comparison) -> str:
    """Who meets all requirements, and who misses by most."""
    passing = [one.label for one in found.variants if one.verdict == "pass"]
    verb = "meets all its" if len(passing) == 1 else "meet all their"
    count = f"{len(passing)} of {len(found.variants)} variants {verb} requirements"
    lines = [f"{count}: {', '.join(passing)}." if passing else f"{count}."]
    losers = [one for one in found.variants if one.misses is not None]
    if losers:
        worst = min(losers, key=lambda one: _margin_of(found, one))
        lines.append(f"{worst.label} misses by most: {_deciding(found, worst)}.")
    still = [one.label for one in found.variants if one.verdict == "open"]
    if still:
        lines.append(f"Open, which is not a pass: {', '.join(still)}.")
    if len({len(one.unverified) for one in found.variants}) > 1 or found.variants[0].unverified:
        many = [f"{one.label} {len(one.unverified)}" for one in found.variants if one.unverified]
        lines.append(f"Decisive inputs left at unverified defaults: {', '.join(many)}.")
    return " ".join(lines)


def _margin_of(found: Comparison, one: Variant) -> float:
    at = found.variants.index(one)
    return min(cell.margin for row in found.rows if (cell := row.cells[at]).asked and cell.margin is not None)


def _deciding(found: Comparison, one: Variant) -> str:
    """The requirement with the least margin, its value and how far it is from the limit."""
    if one.closest is None:
        return "nothing is known of its requirements"
    row = found.rows[one.closest]
    cell = row.cells[found.variants.index(one)]
    value = cell.value if row.over == "nominal" else (cell.corner.value if cell.corner else None)
    at = cell.at if row.over == "nominal" else (cell.corner.at if cell.corner else "")
    where = f" ({at})" if at else ""
    margin = cell.margin if cell.margin is not None else 0.0
    distance = f"short by {_share(-margin)} of the limit" if margin < 0 else f"{_share(margin)} to spare"
    return f"{row.label} {_shown(row, value)}{where}, needs {_limit(row, cell)}: {distance}"


def _share(value: float) -> str:
    if value == float("inf"):
        return "without end"
    return f"{value * 100:.3g} %" if value < 10 else f"{value:.3g} times"


def variant_lines(found: Comparison, at: int) -> list[str]:
    """What there is to say about one variant, the verdict apart: why, by how much, dominated by whom, rescued how."""
    one = found.variants[at]
    lines = [one.why] if one.why and one.misses is not None else []
    if one.misses is None:
        lines.append(f"closest: {_deciding(found, one)}")
    else:
        lines.append(f"misses, most first: {_missed(found, at)}")
        row = found.rows[one.misses]
        lines.append(f"{row.metric.label}: {row.metric.meaning}")
    if one.sigma is not None:
        shown = f"{one.sigma:+.3g}" if abs(one.sigma) > ROUNDING else "0"
        lines.append(f"least margin in sigma: {shown} ({one.sigma_at})")
    cells = [(row, row.cells[at]) for row in found.rows]
    still = [f"{row.label}: {cell.why}" for row, cell in cells if cell.asked and not cell.known]
    lines += [f"open, not a pass: {line}" for line in still]
    dangers = sum(note.severity == "danger" for note in one.notes)
    if dangers:
        lines.append(f"beside the verdict: {dangers} danger{'' if dangers == 1 else 's'}, told among the cautions")
    if one.dominated_by:
        lines.append(f"dominated by {', '.join(one.dominated_by)}: nowhere better in any requirement, somewhere worse")
    if one.rescue is not None:
        lines.append(_rescue(one))
    return lines


def _missed(found: Comparison, at: int) -> str:
    """What is missed, in units of the limits."""
    cells = [(row, row.cells[at]) for row in found.rows if row.cells[at].asked]
    missed = sorted((cell.margin, row.label) for row, cell in cells if cell.margin is not None and cell.margin < 0)
    return ", ".join(f"{label} by {_share(-margin)} of its limit" for margin, label in missed)


def _rescue(one: Variant) -> str:
    assert one.rescue is not None
    coarse = " that move a requirement, in long steps" if one.rescue.few else ""
    if not one.rescue.found:
        return (
            f"rescue: none; none of its {one.rescue.searched} free numeric inputs{coarse}, changed alone within its "
            "bounds, meets every requirement"
        )
    best, *rest = one.rescue.found
    others = f"; or {', or '.join(_change(flip) for flip in rest[:2])}" if rest else ""
    searched = f"nominal; {one.rescue.searched} inputs{coarse} searched"
    return f"rescue: {_change(best)} meets every requirement{others} ({searched})"


def _change(flip: Flip) -> str:
    leaf = flip.input.leaf
    old, new = (format_quantity(value, leaf.kind, unit=leaf.unit or None) for value in (flip.input.value, flip.value))
    return f"{flip.input.name} from {old} to {new}{_by(flip)}"


def _by(flip: Flip) -> str:
    """The relative change; nothing for an input that stands at zero."""
    signed = flip.relative if flip.upwards else -flip.relative
    if not flip.input.value:
        return ""
    return f" ({signed:+.1%})" if flip.relative < 1 else f" ({1 + signed:.3g} times)"


def _variant(found: Comparison, at: int, width: int) -> str:
    one = found.variants[at]
    head = f"{one.verdict.upper():<5} {one.label}: {one.title} ({one.geometry})"
    return "\n".join([head, *(_wrap(line, width, "      ", "        ") for line in variant_lines(found, at))])


def requirement_table(found: Comparison) -> list[list[str]]:
    """A header and a row per requirement: limit, and a cell per variant."""
    rows = [["requirement", "limit", *(one.label for one in found.variants)]]
    for row in found.rows:
        same = len({cell.limit for cell in row.cells if cell.asked}) <= 1
        asked = next((cell for cell in row.cells if cell.asked), row.cells[0])
        limit = _limit(row, asked) if same else "differs"
        over = f" (over {row.over})" if row.over != "nominal" else ""
        rows.append([row.label + over, limit, *(_cell(row, cell, same) for cell in row.cells)])
    return rows


def _cell(row: Row, cell: Cell, same: bool) -> str:
    if cell.value is None:
        return f"{cell.status}: {cell.why}" if cell.asked else f"not asked; {cell.status}: {cell.why}"
    limit = "" if same or not cell.asked else f", needs {_limit(row, cell)}"
    if not cell.asked:
        return f"not asked ({_shown(row, cell.value)})"
    share = f" ({_signed(cell.nominal_margin)})" if cell.nominal_margin is not None else ""
    word = MARK["open" if row.over != "nominal" and not cell.known else _met(cell.nominal_margin)]
    return f"{word} {_shown(row, cell.value)}{share}{limit}"


def _met(margin: float | None) -> str:
    return "open" if margin is None else "pass" if margin >= 0 else "fail"


def _signed(margin: float | None) -> str:
    if margin is None:
        return "-"
    if abs(margin) == float("inf"):
        return "unlimited"
    return f"{margin * 100:+.3g} %" if abs(margin) < 10 else f"{margin:+.3g} times"


def corner_table(found: Comparison) -> list[list[str]]:
    """The worst value at the corners per requirement and variant; empty where no variant declares tolerances."""
    if all(one.corners.method == "none" for one in found.variants):
        return []
    rows = [["requirement", "limit", *(one.label for one in found.variants)]]
    for row in found.rows:
        asked = next((cell for cell in row.cells if cell.asked), row.cells[0])
        rows.append([row.label, _limit(row, asked), *(_corner(row, cell) for cell in row.cells)])
    return rows


def _corner(row: Row, cell: Cell) -> str:
    if cell.corner is None:
        return "-"
    if cell.corner.value is None:
        return f"open: {cell.corner.why}"
    where = ", ".join(f"{name} {side}" for name, side in cell.corner.where.items()) or "nominal"
    word = MARK[_met(cell.corner_margin)] if cell.asked else "not asked"
    return f"{word} {_shown(row, cell.corner.value)} ({_signed(cell.corner_margin)}) at {where}"


def corner_line(found: Comparison) -> str:
    """How the corners were found, per variant."""
    parts = []
    for one in found.variants:
        corners = one.corners
        groups = f"{len(corners.groups)} groups of tolerances"
        if corners.method == "none":
            parts.append(f"{one.label}: declares no tolerances, so nothing is known of its corners")
        elif corners.method == "all":
            parts.append(f"{one.label}: all {corners.evaluated} corners of {groups}")
        else:
            parts.append(
                f"{one.label}: {groups} have too many corners; the worst is what {corners.evaluated} one-at-a-time "
                "steps point to, which may miss a worse one"
            )
    return "; ".join(parts)


def _corners(found: Comparison) -> str:
    rows = corner_table(found)
    if not rows:
        return "Corners: no variant declares tolerances"
    return f"Requirements, worst at the corners\n{table(rows)}\n  {corner_line(found)}"


def difference_table(found: Comparison, *, condition: bool, longest: int = LONGEST) -> list[list[str]]:
    """A header and a row per input that differs; empty where none does."""
    mine = [one for one in found.differences if one.condition == condition]
    if not mine:
        return []
    rows = [["input", *(one.label for one in found.variants)]]
    return rows + [[one.name, *(_text(text, longest) for text in one.texts)] for one in mine]


def wide_difference_table(found: Comparison, *, condition: bool) -> list[list[str]]:
    """The same with texts in full."""
    return difference_table(found, condition=condition, longest=10_000)


def _text(text: str | None, longest: int) -> str:
    if not text:
        return "-" if text is None else "unset"
    return text if len(text) <= longest else f"{text[: longest - 3]}..."


def _differences(found: Comparison, *, condition: bool) -> str:
    rows = difference_table(found, condition=condition)
    if condition:
        if found.frozen:
            heading = "Judged under the first one's conditions; what still differs"
        else:
            heading = "Conditions and states differ (--same-conditions judges all under the first one's)"
        return f"{heading}\n{table(rows)}" if rows else "Conditions and states are the same for all"
    return f"Inputs differ\n{table(rows)}" if rows else "No inputs differ"


def _limit(row: Row, cell: Cell) -> str:
    sense = "at least" if row.at_least else "at most"
    return f"{sense} {_shown(row, cell.limit)}"


def _shown(row: Row, value: float | None) -> str:
    limit = max(cell.limit for cell in row.cells)
    if value is not None and abs(value) < ROUNDING * abs(limit):
        value = 0.0
    return format_quantity(value, row.metric.kind, row.metric.unit or None)


def _cautions(found: Comparison, width: int) -> str:
    lines = caution_lines(found)
    return "Cautions\n" + "\n".join(_wrap(line, width, "  - ", "    ") for line in lines) if lines else ""


def caution_lines(found: Comparison) -> list[str]:
    """Cautions as sentences: what decides instead, and the variants they hold for."""
    lines = []
    for note, labels in _shared_notes(found):
        decides = f" Decides: {note.decides}." if note.decides else ""
        lines.append(f"{note.severity}: {note.text}{decides} [{', '.join(labels)}]")
    return lines


def _shared_notes(found: Comparison) -> list[tuple[Note, list[str]]]:
    """Cautions with the variants they hold for, dangers first."""
    rows: dict[tuple[str, str], tuple[Note, list[str]]] = {}
    for one in found.variants:
        for note in one.notes:
            if note.severity != "info" or note.code == "estimate":
                rows.setdefault((note.code, note.text), (note, []))[1].append(one.label)
    order = {"danger": 0, "caution": 1}
    return sorted(rows.values(), key=lambda row: order.get(row[0].severity, 2))


def _wrap(text: str, width: int, first: str, rest: str) -> str:
    return textwrap.fill(text, width, initial_indent=first, subsequent_indent=rest, break_long_words=False)
