"""The map of light through a gap."""

from __future__ import annotations

import numpy as np
import pytest

from outcouple.design import parse_design
from outcouple.evaluation import evaluate

PRISM = 'geometry = "prism-switch"\n[prism]\nmaterial = "PMMA"\n[emitter]\nhalf_angle = "0.5 deg"\n'


def test_single_hit_table_of_a_45_degree_face():
    """PMMA at 45 degrees, 850 nm, skin of 1.43 behind: mean T 1.00, 0.97, 0.895, 0.68 at 0, 50, 100, 200 nm. A claimed
    table; the closed form behind it is checked against 40 digits in tests/optics."""
    surface = evaluate(parse_design(PRISM), advice=False).tunnelling
    assert surface is not None
    (_, _, index), (_, _, gap) = surface.axes
    row = int(np.argmin(np.abs(index - 1.43)))
    for width, expected in ((0, 1.0), (50e-9, 0.97), (100e-9, 0.895), (200e-9, 0.68)):
        found = np.interp(width, gap, surface.values[row])
        assert found == pytest.approx(expected, abs=0.03)
    assert np.all(np.diff(surface.values[row]) < 0)


def test_nothing_crosses_into_less_than_the_light_needs():
    """A ray at 60 degrees in crown glass needs an index above 1.51 sin 60 = 1.308."""
    text = (
        'geometry = "gap-pair"\n[pair]\nmaterial = "crown glass"\nincidence = "60 deg"\n'
        '[emitter]\nhalf_angle = "0.5 deg"\n'
    )
    surface = evaluate(parse_design(text), advice=False).tunnelling
    assert surface is not None
    (_, _, index), _ = surface.axes
    assert np.all(surface.values[index < 1.51 * np.sin(np.radians(60)) - 0.02] < 1e-3)
    assert np.all(surface.values[index > 1.4][:, 0] > 0.9)
