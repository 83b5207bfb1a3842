"""Inputs: pydantic sections whose numbers carry units, bounds, descriptions and references.

Sections of a design file, parameters of geometries and contact presets are all made of these; forms, sweeps, tolerances and the
documentation read them through :func:`leaves`.
"""

from __future__ import annotations

from outcouple.fields.leaves import Leaf, leaf_text, leaves, parse_leaf
from outcouple.fields.models import Section, choice, count, flag, name, quantity
from outcouple.fields.overlay import Overlay, check_overlay, overlaid

__all__ = [
    "Leaf",
    "Overlay",
    "Section",
    "check_overlay",
    "choice",
    "count",
    "flag",
    "leaf_text",
    "leaves",
    "name",
    "overlaid",
    "parse_leaf",
    "quantity",
]
