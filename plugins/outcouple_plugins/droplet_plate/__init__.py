"""Droplet plate: light that bounces along a plate and loses itself into drops on its outer face."""

from __future__ import annotations

from outcouple_plugins.droplet_plate.geometry import DropletPlate

__all__ = ["DropletPlate"]
