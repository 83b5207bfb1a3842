"""Inputs: sections of a design file whose leaves know their unit, bounds, meaning and reference.

Sections of a design file, parameters of geometries and contact presets are all made of these; forms, sweeps, tolerances
and the documentation read them through :func:`leaves`. Inside, every number is an SI float; outside, it is a text with
its unit.
"""

from __future__ import annotations

from outcouple.fields.change import changed
from outcouple.fields.leaves import Leaf
from outcouple.fields.models import Section, choice, count, flag, leaf_at, leaf_text, leaves, name, quantity
from outcouple.fields.overlay import Overlay, check_overlay, overlaid
from outcouple.fields.problems import Problem, collect
from outcouple.fields.reading import parse_leaf
from outcouple.fields.schema import json_schema

__all__ = [
    "Leaf",
    "Overlay",
    "Problem",
    "Section",
    "changed",
    "check_overlay",
    "choice",
    "collect",
    "count",
    "flag",
    "json_schema",
    "leaf_at",
    "leaf_text",
    "leaves",
    "name",
    "overlaid",
    "parse_leaf",
    "quantity",
]
