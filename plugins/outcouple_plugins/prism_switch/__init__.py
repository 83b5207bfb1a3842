"""A two-face prism that returns its light dry and loses it into a liquid.

``parameters`` are the sections of its design file; ``directions`` and ``ways`` trace the lobe through the two faces;
``light`` assembles them for the contract; ``geometry`` is what the host sees.
"""

from __future__ import annotations

from outcouple_plugins.prism_switch.geometry import PrismSwitch

__all__ = ["PrismSwitch"]
