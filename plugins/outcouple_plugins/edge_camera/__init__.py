"""A plate lit at its edges and read by a camera behind it."""

from __future__ import annotations

from outcouple_plugins.edge_camera.geometry import EdgeCamera

__all__ = ["EdgeCamera"]
