"""A sweep as a page of its own."""

from __future__ import annotations

import numpy as np

from outcouple.report import figures
from outcouple.report.figures.sweep import SERIES, margin_figure, metric_figure, picture_axes, slices, verdict_figure
from outcouple.report.page import Picture, page_of
from outcouple.report.sweep_text import sweep_lines
from outcouple.studies import Sweep

__all__ = ["sweep_page", "sweep_pictures"]

SHORT = 14
"""Rows up to which a table stands above the pictures."""


def sweep_pictures(found: Sweep, *, look: figures.Look = figures.LIGHT) -> list[Picture]:
    """Every picture a sweep has: margins together, then each metric."""
    _, upward = picture_axes(found)
    pictures = []
    if found.limits and upward is None and len(found.axes) == 1:
        text = "Above zero a requirement is met; on shaded ground all are. Drawn to three limits either side."
        pictures.append(Picture("margins", "How far from the limits", margin_figure(found, look=look), text))
    for number, place in enumerate(slices(found)):
        where = _where(found, place)
        if found.limits and upward is not None:
            text = "The line is where the last requirement is just met; crosses mark points that miss one or are open."
            figure = verdict_figure(found, at=place, look=look)
            pictures.append(Picture(f"worst-{number}", f"Worst margin{where}", figure, text))
        for name, one in found.metrics.items():
            if np.any(np.isfinite(one.values)):
                heading = f"{one.metric.label.capitalize()}{where}"
                figure = metric_figure(found, name, at=place, look=look)
                pictures.append(Picture(f"metric-{name}-{number}", heading, figure, _left_out(found)))
    return pictures


def _where(found: Sweep, place: tuple[int | None, ...]) -> str:
    """The place on the axes that are not drawn."""
    rest = [f"{one.name} = {one.texts()[at]}" for one, at in zip(found.axes, place, strict=True) if at is not None]
    return f" at {', '.join(rest)}" if rest else ""


def _left_out(found: Sweep) -> str:
    """Says so where a picture cannot hold all curves."""
    across, upward = picture_axes(found)
    lines = int(found.done.size / len(found.axes[across].values))
    if upward is not None or lines <= SERIES:
        return ""
    return f"The first {SERIES} of {lines} curves; the table (--csv) holds all."


def sweep_page(found: Sweep, *, look: figures.Look = figures.LIGHT) -> str:
    """One self-contained HTML page."""
    lead, tables, cautions = sweep_lines(found)
    short = [one for one in tables if len(one[1]) <= SHORT]
    long = [one for one in tables if len(one[1]) > SHORT]
    pictures = sweep_pictures(found, look=look)
    return page_of(found.title, pictures, lead=lead, tables=short, cautions=cautions, details=long, look=look)
