"""Studies above the evaluation of one design: sweeps, comparison, sensitivity.

They know no geometry: everything goes through ``evaluate_batch`` with arrays laid over a design's numbers, in chunks on
any executor of ``concurrent.futures``.
"""

from __future__ import annotations

from outcouple.studies.axes import Axis, read_axes
from outcouple.studies.just_met import Crossing, Span, crossings, spans
from outcouple.studies.sweep import sweep
from outcouple.studies.swept import Limit, Sweep, SweptMetric

__all__ = ["Axis", "Crossing", "Limit", "Span", "Sweep", "SweptMetric", "crossings", "read_axes", "spans", "sweep"]
