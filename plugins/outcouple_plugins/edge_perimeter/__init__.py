"""A plate read around its perimeter: every object shadows the chords of light that pass under it.

``parameters`` are the sections of its design file; ``chords`` lays out which emitter sees which detector and ``light``
follows the light along them; ``measures`` are the numbers that need no map; ``bands`` and ``maps`` move an object over
the whole plate; ``drawing`` draws it; ``geometry`` is what the host sees.
"""

from __future__ import annotations

from outcouple_plugins.edge_perimeter.geometry import EdgePerimeter

__all__ = ["EdgePerimeter"]
