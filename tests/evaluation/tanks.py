"""A prism switch in a tank, to decide about."""

from __future__ import annotations

from functools import cache

from outcouple.design import design_from_mapping
from outcouple.hooks import build_host

__all__ = ["DRY", "WET", "tank"]

DRY = {"name": "dry", "expect": "absent", "touching": "dry"}
WET = {"name": "wet", "expect": "present", "touching": "water"}


@cache
def _host():
    return build_host()


def tank(*, states=(DRY, WET), **sections):
    """A polysulfone prism with 2 % crosstalk and 8 mW; ``sections`` add to or replace keys of its sections."""
    data = {
        "geometry": "prism-switch",
        "emitter": {"power": "8 mW", "half_angle": "10 deg", "wavelength": "940 nm"},
        "prism": {"material": "polysulfone", "crosstalk": "2 %"},
        "readout": {"feedback_resistance": "500 ohm", "bandwidth": "500 Hz", "dark_current": "2 nA"},
        "states": list(states),
    }
    for name, keys in sections.items():
        data[name] = {**data[name], **keys} if isinstance(data.get(name), dict) else keys
    return design_from_mapping(data, host=_host())
