"""How plugins are found and asked.

``spec`` is the page a plugin author reads; ``host`` finds plugins by entry point and keeps what they gave.
"""

from __future__ import annotations

from outcouple.hooks.host import GeometryEntry, Host, LeftOut, build_host
from outcouple.hooks.spec import hookimpl

__all__ = ["GeometryEntry", "Host", "LeftOut", "build_host", "hookimpl"]
