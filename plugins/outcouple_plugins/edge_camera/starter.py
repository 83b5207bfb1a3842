"""Starter states and requirements."""

from __future__ import annotations

__all__ = ["TOUCH"]

TOUCH = """\
[decision]
level = "noise"
rate = "60 Hz"

[[states]]
name = "untouched"
expect = "absent"
touching = "dry"

# A fingertip: ridges touch 30 % of the footprint, skin of index about 1.42 that sends 70 % back.
[[states]]
name = "finger"
expect = "present"
object = { diameter = "10 mm" }
touching.patches = [
  { share = "30 %", backing = "epidermis mid", albedo = "70 %" },
  { share = "70 %", backing = "air" },
]

[[states]]
name = "water drop"
expect = "absent"
object = { diameter = "5 mm" }
touching = { patches = [{ share = "100 %", backing = "water", drops = true, contact_angle = "50 deg" }] }

[[requirements]]
metric = "object_snr"
at_least = 20

[[requirements]]
metric = "saturation_headroom"
at_least = 1.2

[[requirements]]
metric = "uniformity"
at_least = "20 %"
"""
