"""Pictures of an outcome as plain plotly dicts: ``{"data": [...], "layout": {...}}``.

Pure functions: an outcome and a look go in, a dict comes out; nothing is computed and plotly is not imported. Pass
:data:`CONFIG` wherever a picture is shown.
"""

from __future__ import annotations

from outcouple.report.figures.budgets import ledger_figure, noise_figure, signals_figure
from outcouple.report.figures.curves import response_figure, surface_figure
from outcouple.report.figures.look import CONFIG, DARK, LIGHT, Look
from outcouple.report.figures.sections import section_figure

__all__ = [
    "CONFIG",
    "DARK",
    "LIGHT",
    "Look",
    "ledger_figure",
    "noise_figure",
    "response_figure",
    "section_figure",
    "signals_figure",
    "surface_figure",
]
