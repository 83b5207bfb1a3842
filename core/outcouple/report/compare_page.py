"""A comparison as a page of its own."""

from __future__ import annotations

from outcouple.report import figures
from outcouple.report.compare_text import (
    caution_lines,
    compare_lead,
    corner_line,
    corner_table,
    requirement_table,
    variant_lines,
    wide_difference_table,
)
from outcouple.report.figures.compare import margins_figure, readings_figure, values_figure
from outcouple.report.page import Picture, page_of
from outcouple.studies.compared import Comparison

__all__ = ["comparison_page", "comparison_pictures"]


def comparison_pictures(found: Comparison, *, look: figures.Look = figures.LIGHT) -> list[Picture]:
    """Margins per variant, values per requirement, readings per state."""
    text = "Bars to the left of zero are missed. What lies beyond one and a half limits ends at the edge."
    pictures = []
    if found.rows:
        pictures.append(Picture("margins", "How far from each limit", margins_figure(found, look=look), text))
        text = "Dashed: the limit. Open circles: the worst at the corners, where tolerances are declared."
        pictures.append(Picture("values", "Requirement by requirement", values_figure(found, look=look), text))
    text = "Each variant's readings as a share of its own largest: the farther apart absent and present, the better."
    pictures.append(Picture("readings", "Readings per state", readings_figure(found, look=look), text))
    return pictures


def comparison_page(found: Comparison, *, look: figures.Look = figures.LIGHT) -> str:
    """One self-contained HTML page."""
    variants = [["variant", "verdict", "why"]]
    for at, one in enumerate(found.variants):
        why = "\n".join(_sentence(line) for line in variant_lines(found, at))
        variants.append([one.label, one.verdict.upper(), why])
    tables = [("Variants", variants), ("Requirements, nominal", requirement_table(found))]
    corners = corner_table(found)
    if corners:
        tables.append((f"Requirements, worst at the corners ({corner_line(found)})", corners))
    both = (("Conditions and states differ", True), ("Inputs differ", False))
    unlike = [(heading, wide_difference_table(found, condition=condition)) for heading, condition in both]
    details = [(heading, rows) for heading, rows in unlike if rows]
    title = "Comparison: " + ", ".join(one.label for one in found.variants)
    cautions = caution_lines(found)
    pictures = comparison_pictures(found, look=look)
    lead = compare_lead(found)
    return page_of(title, pictures, lead=lead, tables=tables, cautions=cautions, details=details, look=look)


def _sentence(line: str) -> str:
    return line[:1].upper() + line[1:]
