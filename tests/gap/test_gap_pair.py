"""The two-prism gap sensor against the closed form of S. Zhu et al., Am. J. Phys. 54, 601 (1986)."""

from __future__ import annotations

import numpy as np
import pytest

from outcouple.design import parse_design
from outcouple.evaluation import evaluate
from outcouple.evaluation.table import tabulate
from outcouple.testing import check_geometry
from outcouple_plugins.gap_pair import GapPair

LINE, INDEX = 850e-9, 1.51


def closed_form(gap, degrees, polarisation):
    """T of an air gap between equal prisms, written out anew: 1/T = 1 + a sinh^2 y."""
    n2, sine2 = INDEX**2, np.sin(np.radians(degrees)) ** 2
    y = 2 * np.pi * gap / LINE * np.sqrt(n2 * sine2 - 1)
    a = (n2 - 1) ** 2 / (4 * n2 * (1 - sine2) * (n2 * sine2 - 1))
    if polarisation == "p":
        a *= ((n2 + 1) * sine2 - 1) ** 2
    return 1 / (1 + a * np.sinh(y) ** 2)


def design(gaps, degrees=45, polarisation="s", roughness="0 nm"):
    states = "".join(f'[[states]]\nname = "{gap} nm"\nexpect = "{gap} nm"\n' for gap in gaps)
    return parse_design(f"""
geometry = "gap-pair"
[materials.crown]
index = {INDEX}
source = "invented"
[materials.void]
index = 1.0
source = "invented"
[emitter]
wavelength = "850 nm"
linewidth = "0.02 nm"
half_angle = "0.02 deg"
polarization = "{polarisation}"
[pair]
material = "crown"
second_material = "crown"
incidence = "{degrees} deg"
[gap]
medium = "void"
roughness = "{roughness}"
tilt = "0 deg"
{states}""")


def transmission(gaps, degrees, polarisation):
    """Share per gap over the share of a closed gap."""
    table = tabulate(design([0, *gaps], degrees, polarisation))
    shares = [float(row.result.share[0, 0]) for row in table.rows]
    return np.array(shares[1:]) / shares[0]


@pytest.mark.parametrize("polarisation", ["s", "p"])
@pytest.mark.parametrize("degrees", [45, 60])
def test_transmission_is_the_closed_form(degrees, polarisation):
    gaps = [50, 100, 200, 300, 600]
    found = transmission(gaps, degrees, polarisation)
    assert found == pytest.approx(closed_form(np.array(gaps) * 1e-9, degrees, polarisation), rel=2e-3)


def test_claimed_values_of_crown_glass_at_45_degrees():
    """0.95/0.83/0.54/0.31/0.057 at 50/100/200/300/600 nm for s: claims of a design case, recomputed above."""
    found = transmission([50, 100, 200, 300, 600], 45, "s")
    assert found == pytest.approx([0.95, 0.83, 0.54, 0.31, 0.057], abs=0.006)


@pytest.mark.parametrize(
    ("degrees", "polarisation", "half"), [(45, "s", 214), (45, "p", 313), (60, "s", 141), (60, "p", 103)]
)
def test_half_transmission_swaps_order_between_45_and_60_degrees(degrees, polarisation, half):
    grid = np.arange(0, 500)
    exact = grid[np.argmin(np.abs(closed_form(grid * 1e-9, degrees, polarisation) - 0.5))]
    assert exact == pytest.approx(half, abs=1)
    metric = evaluate(design([1, 200, 400], degrees, polarisation), advice=False).metrics["gap_at_half"]
    assert metric.value == pytest.approx(exact * 1e-9, abs=3e-9)


def test_best_bias_and_slope():
    """Peak slope 0.0031 per nm near 139 nm (s, 45 degrees): claims, recomputed by the closed form here."""
    grid = np.linspace(0, 400e-9, 4001)
    slope = np.abs(np.gradient(closed_form(grid, 45, "s"), grid))
    assert slope.max() * 1e-9 == pytest.approx(0.0031, abs=5e-5)
    assert grid[slope.argmax()] == pytest.approx(139e-9, abs=1.5e-9)
    found = evaluate(design([1, 139, 300]), advice=False).metrics
    assert found["slope"].value * 1e-9 == pytest.approx(slope.max() * 1e-9, rel=0.02)
    assert found["best_bias"].value == pytest.approx(139e-9, abs=6e-9)


def test_roughness_moves_the_best_bias():
    """50 nm of roughness averages over a curve that is not straight: the steepest place moves outwards."""
    smooth, rough = (
        evaluate(design([1, 139, 300], roughness=roughness), advice=False).metrics["best_bias"].value
        for roughness in ("0 nm", "50 nm")
    )
    assert rough > smooth + 8e-9


def test_below_the_critical_angle_one_reading_has_several_gaps():
    """40 degrees, s: 0.86/0.61/0.42/0.24/0.17/0.54 at 0.1/0.2/0.3/0.5/1/2 um: claims, confirmed."""
    found = transmission([100, 200, 300, 500, 1000, 2000], 40, "s")
    assert found == pytest.approx([0.86, 0.61, 0.42, 0.24, 0.17, 0.54], abs=0.01)
    outcome = evaluate(design([100, 1000, 2000], 40), advice=False)
    assert any(note.code == "gap-not-monotonic" for note in outcome.notes)
    assert outcome.metrics["monotonic_span"].value < 1.9e-6


def test_keeps_the_contract():
    report = check_geometry(GapPair())
    print(report)
    assert report.ran > 50
    assert not report.failed, str(report)
