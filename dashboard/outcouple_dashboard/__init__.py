"""The local page: explore a design, see why, compare variants.

:func:`create_app` gives the application on a folder of design files, :func:`outcouple_dashboard.server.serve` runs it.
Everything a page shows comes from an Outcome or a study; nothing is computed here. A document (the text of a design)
lives in its browser tab; the server keeps no session.
"""

from __future__ import annotations

from outcouple_dashboard.app import create_app

__all__ = ["create_app"]
