"""Headings of inputs within a section, which also say how advice may treat them."""

from __future__ import annotations

from typing import Final

__all__ = ["CONDITIONS", "IMPERFECTIONS"]

IMPERFECTIONS: Final = "imperfections"
"""What a better part has less of; advice may lower it, never raise it."""
CONDITIONS: Final = "conditions"
"""What the design meets rather than chooses; advice leaves it alone."""
