"""Cone, dome and truncated cone: tips of revolution that lose their light into a liquid.

Skew rays turn the plane of incidence from hit to hit, so a set of rays is traced through the real shape; the directions
do not depend on what touches.
"""

from __future__ import annotations

from outcouple_plugins.round_tip.geometry import RoundTip

__all__ = ["RoundTip"]
