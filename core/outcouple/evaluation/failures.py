"""The failure-direction table of a design."""

from __future__ import annotations

from outcouple.design import Design
from outcouple.evaluation.table import Table
from outcouple.outcome import FailureDirection

__all__ = ["consequence", "failure_directions"]


def failure_directions(design: Design, table: Table) -> tuple[FailureDirection, ...]:
    """Cause, effect and direction, made for this design."""
    return ()


def consequence(design: Design, table: Table, reads: str) -> str:
    """ " (dangerous: ...)" where reading ``absent`` or ``present`` falsely is the direction the demand must not miss."""
    return ""
