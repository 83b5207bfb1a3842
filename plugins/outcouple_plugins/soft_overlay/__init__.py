"""An elastomer skin over a plate lit at its edges: pressure makes it touch, and a camera sees where."""

from __future__ import annotations

from outcouple_plugins.soft_overlay.geometry import SoftOverlay

__all__ = ["SoftOverlay"]
