"""The file a person writes, checked: parse, validate, name every mistake by file, line and column.

``load_design`` gives a :class:`Design`: typed, immutable, SI inside, any numeric leaf ready to carry samples.
"""

from __future__ import annotations

from outcouple.design.design import Design, Tolerance
from outcouple.design.load import design_from_mapping, design_model, load_design, parse_design
from outcouple.design.states import ObjectPlace, Requirement, State

__all__ = [
    "Design",
    "ObjectPlace",
    "Requirement",
    "State",
    "Tolerance",
    "design_from_mapping",
    "design_model",
    "load_design",
    "parse_design",
]
