"""Starter states and requirements."""

from __future__ import annotations

__all__ = ["TOUCH"]

TOUCH = """\
[decision]
level = "noise"

[[states]]
name = "untouched"
expect = "absent"
touching = "dry"

# A fingertip: ridges touch 30 % of the footprint, skin of index about 1.42.
[[states]]
name = "finger"
expect = "present"
object = { diameter = "9 mm" }
touching = { patches = [{ share = "30 %", backing = "epidermis mid" }, { share = "70 %", backing = "air" }] }

[[states]]
name = "water drop"
expect = "absent"
object = { diameter = "5 mm" }
touching = { patches = [{ share = "100 %", backing = "water", drops = true, contact_angle = "50 deg" }] }

[[requirements]]
metric = "touch_loss"
at_least = "1 %"

[[requirements]]
metric = "drift_over_touch"
at_most = 0.3

[[requirements]]
metric = "coverage"
at_least = "95 %"
"""
