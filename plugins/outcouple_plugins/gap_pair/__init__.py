"""Two prisms with a narrow gap between them: light that crosses measures the gap, and a spring makes it a force."""

from __future__ import annotations

from outcouple_plugins.gap_pair.geometry import GapPair

__all__ = ["GapPair"]
