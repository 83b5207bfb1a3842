"""Levers as a page of its own."""

from __future__ import annotations

from outcouple.report import figures
from outcouple.report.figures.levers import levers_figure
from outcouple.report.levers_text import levers_lead, levers_table
from outcouple.report.page import Picture, page_of
from outcouple.studies.levers import Levers

__all__ = ["levers_page"]


def levers_page(found: Levers, *, look: figures.Look = figures.LIGHT) -> str:
    """One self-contained HTML page."""
    text = "What one percent more of an input does to the margin that decides, as a share of its limit."
    picture = Picture("levers", "Strongest inputs", levers_figure(found, look=look), text)
    details = [("Inputs", levers_table(found))]
    return page_of(found.title, [picture], lead=levers_lead(found), details=details, look=look)
