"""A sweep as a page of its own."""

from __future__ import annotations

import numpy as np

from outcouple.report import figures
from outcouple.report.figures.sweep import margin_figure, metric_figure, picture_axes, verdict_figure
from outcouple.report.page import Picture, page_of
from outcouple.report.sweep_text import sweep_lines
from outcouple.studies import Sweep

__all__ = ["sweep_page", "sweep_pictures"]


def sweep_pictures(found: Sweep, *, look: figures.Look = figures.LIGHT) -> list[Picture]:
    """Every picture a sweep has: margins together, then each metric."""
    _, upward = picture_axes(found)
    pictures = []
    if found.limits and upward is not None:
        text = "The line is where the last requirement is just met; crosses mark points that miss one or leave it open."
        pictures.append(Picture("worst", "Worst margin", verdict_figure(found, look=look), text + _slices(found)))
    elif found.limits and len(found.axes) == 1:
        text = "Above zero a requirement is met. Where the ground is shaded, all are."
        pictures.append(Picture("margins", "How far from the limits", margin_figure(found, look=look), text))
    for name, one in found.metrics.items():
        if np.any(np.isfinite(one.values)):
            heading = one.metric.label.capitalize()
            pictures.append(Picture(f"metric-{name}", heading, metric_figure(found, name, look=look), _slices(found)))
    return pictures


def _slices(found: Sweep) -> str:
    across, upward = picture_axes(found)
    if upward is None:
        return ""
    rest = [one for at, one in enumerate(found.axes) if at not in (across, upward)]
    return " Drawn at " + ", ".join(f"{one.name} = {one.texts()[len(one.values) // 2]}" for one in rest) if rest else ""


def sweep_page(found: Sweep, *, look: figures.Look = figures.LIGHT) -> str:
    """One self-contained HTML page."""
    lead, tables, cautions = sweep_lines(found)
    return page_of(
        found.title, sweep_pictures(found, look=look), lead=lead, tables=tables, cautions=cautions, look=look
    )
