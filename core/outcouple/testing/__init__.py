"""For authors of geometries: the conformance kit.

from outcouple.testing import check_geometry
report = check_geometry(MyGeometry())
assert not report.failed, report
"""

from __future__ import annotations

from outcouple.testing.conformance import Report, check_geometry

__all__ = ["Report", "check_geometry"]
