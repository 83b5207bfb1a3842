"""Cautions that belong to a design as a whole."""

from __future__ import annotations

from outcouple.design import Design
from outcouple.evaluation.table import Table
from outcouple.notes import Note

__all__ = ["design_notes"]

ESTIMATE = Note(
    "estimate",
    "A calculated estimate under stated assumptions: no certification, no safety case, no substitute for a competent engineer. "
    "Verify it on hardware.",
    severity="info",
    decides="tests on hardware; local codes and licensed practice",
)


def design_notes(design: Design, table: Table) -> tuple[Note, ...]:
    """The estimate's own caution, and those of the design's purpose and conditions."""
    return (ESTIMATE,)
