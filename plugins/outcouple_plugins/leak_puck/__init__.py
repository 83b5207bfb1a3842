"""Leak puck: a prism whose base lies over a capillary gap that a puddle fills."""

from __future__ import annotations

from outcouple_plugins.leak_puck.geometry import LeakPuck

__all__ = ["LeakPuck"]
