"""Capillarity against reference rows, shapes integrated from Laplace's law and flows integrated in time."""

from __future__ import annotations

import csv
import math
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from outcouple.contact import film_dynamics, wetting

TABLE = Path(__file__).parents[1] / "reference" / "wetting.csv"
ROWS = list(csv.DictReader(TABLE.read_text(encoding="utf-8").splitlines()))
WATER = {"surface_tension": 0.0728, "density": 998.2}  # 20 degrees Celsius, handbook values from memory
SCALE = {"mm": 1e-3, "um": 1e-6, "-": 1.0}


def compute(row: dict[str, str]) -> float:
    gamma, rho, mu = (float(row[key]) for key in ("surface_tension_N_m", "density_kg_m3", "viscosity_Pa_s"))
    surface = {"surface_tension": gamma, "density": rho}
    quantity = row["quantity"]
    if quantity.startswith("capillary length"):
        return float(wetting.capillary_length(**surface))
    if quantity.startswith("Jurin"):
        return float(wetting.tube_rise(**surface, radius=0.5e-3))
    if quantity.startswith("wall meniscus"):
        return float(wetting.wall_rise(**surface))
    if quantity.startswith("Jeffreys"):
        return float(film_dynamics.drained_thickness(viscosity=mu, density=rho, height=0.05, time=10.0))
    if quantity.startswith("Ca "):
        return float(wetting.capillary_number(viscosity=mu, speed=0.01, surface_tension=gamma))
    if quantity.startswith("LLD"):
        return float(film_dynamics.drawn_thickness(viscosity=mu, speed=0.01, **surface))
    assert quantity.startswith("fibre/tube film")
    return float(film_dynamics.tube_film_thickness(viscosity=mu, surface_tension=gamma, speed=0.01, radius=0.5e-3))


@pytest.mark.parametrize("row", ROWS, ids=lambda row: f"{row['quantity'][:20]} {row['liquid']}")
def test_reference_rows(row: dict[str, str]) -> None:
    assert compute(row) == pytest.approx(float(row["value"]) * SCALE[row["unit"]], rel=1e-9)


def test_there_are_28_reference_rows() -> None:
    assert len(ROWS) == 28


def profile_depth(length: float, end: float) -> float:
    """Depth below a level surface where it has tilted so far: d(psi)/ds = z/l^2, dz/ds = sin(psi)."""
    psi, depth = 1e-7, 1e-7 * length
    step = 1e-3
    while psi < end:
        middle = psi + step / 2 * depth / length
        depth_middle = depth + step / 2 * length * math.sin(psi)
        turn = step * depth_middle / length
        if psi + turn > end:
            share = (end - psi) / turn
            return depth + share * step * length * math.sin(middle)
        psi, depth = psi + turn, depth + step * length * math.sin(middle)
    return depth


@pytest.mark.parametrize("degrees", [10.0, 60.0, 90.0, 140.0])
def test_puddle_depth_is_the_integrated_profile(degrees: float) -> None:
    # Computed independently: Laplace's law integrated along the surface from its level middle to the rim.
    angle = math.radians(degrees)
    length = float(wetting.capillary_length(**WATER))
    assert wetting.puddle_depth(**WATER, contact_angle=angle) == pytest.approx(profile_depth(length, angle), rel=1e-4)


@pytest.mark.parametrize("degrees", [0.0, 30.0, 70.0])
def test_wall_meniscus_is_the_integrated_profile(degrees: float) -> None:
    # Computed independently: at the wall the surface has tilted by 90 degrees less the contact angle.
    angle = math.radians(degrees)
    length = float(wetting.capillary_length(**WATER))
    rise = wetting.wall_rise(**WATER, contact_angle=angle)
    assert rise == pytest.approx(profile_depth(length, math.pi / 2 - angle), rel=1e-4)
    assert wetting.wall_rise(**WATER, contact_angle=math.pi - angle) == pytest.approx(-rise, rel=1e-9)


def test_design_figures_of_a_floor_sensor() -> None:
    # Computed for the design of such sensors: 0.47 mm puddle of water at 10 degrees, 2.7 mm at 60; a 0.8 mm
    # gap lifts water 18 to 19 mm and a glycol mix (0.048 N/m, 1070 kg/m3) 11 mm.
    assert wetting.puddle_depth(**WATER, contact_angle=math.radians(10)) == pytest.approx(0.47e-3, abs=0.01e-3)
    assert wetting.puddle_depth(**WATER, contact_angle=math.radians(60)) == pytest.approx(2.7e-3, abs=0.05e-3)
    assert wetting.gap_rise(**WATER, gap=0.8e-3) == pytest.approx(18.6e-3, abs=0.1e-3)
    assert wetting.gap_rise(surface_tension=0.048, density=1070, gap=0.8e-3) == pytest.approx(11.4e-3, abs=0.1e-3)
    per_area = wetting.leaked_volume(**WATER, contact_angle=math.radians(10), area=0.5)
    assert per_area == pytest.approx(0.5 * 0.475e-3, rel=0.01)


@pytest.mark.parametrize(("plates", "size"), [(True, 0.3e-3), (False, 0.4e-3)])
def test_fill_time_is_the_integrated_flow(plates: bool, size: float) -> None:
    # Computed independently: Poiseuille flow under the capillary pressure, stepped in time. Plates: mean
    # speed d^2 p / (12 mu L), pressure 2 gamma cos(phi)/d; tube: r^2 p / (8 mu L), pressure 2 gamma
    # cos(phi)/r.
    gamma, mu, angle, goal = 0.048, 3e-3, math.radians(40), 8e-3
    pressure = 2 * gamma * math.cos(angle) / size
    mobility = size**2 / ((12 if plates else 8) * mu)
    steps = np.linspace(0, goal, 20001)
    middle = (steps[1:] + steps[:-1]) / 2
    time = float(np.sum(np.diff(steps) * middle / (mobility * pressure)))
    given_ = {"surface_tension": gamma, "viscosity": mu, "length": goal, "contact_angle": angle}
    found = wetting.gap_fill_time(gap=size, **given_) if plates else wetting.tube_fill_time(radius=size, **given_)
    assert found == pytest.approx(time, rel=1e-8)


def test_a_gap_that_does_not_wet_never_fills() -> None:
    angle = np.array([0.0, math.pi / 2, 2.0])
    time = wetting.gap_fill_time(surface_tension=0.07, viscosity=1e-3, gap=1e-4, length=0.01, contact_angle=angle)
    assert np.isfinite(time).tolist() == [True, False, False]


@given(angle=st.floats(0.01, 3.1), radius=st.floats(1e-5, 1e-2))
def test_caps(angle: float, radius: float) -> None:
    volume = wetting.cap_volume(base_radius=radius, contact_angle=angle)
    assert wetting.cap_radius(volume=volume, contact_angle=angle) == pytest.approx(radius, rel=1e-9)
    height = float(wetting.cap_height(base_radius=radius, contact_angle=angle))
    ball = (radius**2 + height**2) / (2 * height)
    z = np.linspace(0, height, 4001)
    slices = np.pi * (ball**2 - (z - height + ball) ** 2)
    assert volume == pytest.approx(np.trapezoid(slices, z), rel=1e-5)


def test_a_hemisphere_is_a_cap_of_ninety_degrees() -> None:
    assert wetting.cap_height(base_radius=1e-3, contact_angle=math.pi / 2) == pytest.approx(1e-3)
    assert wetting.cap_volume(base_radius=1.0, contact_angle=math.pi / 2) == pytest.approx(2 * math.pi / 3)


def test_large_drops_are_no_caps() -> None:
    (note,) = wetting.cap_notes(base_radius=np.array([0.5e-3, 3e-3]), **WATER)
    assert note.where is not None
    assert note.where.tolist() == [False, True]
    assert wetting.cap_notes(base_radius=0.5e-3, **WATER) == ()


def test_drops_hang_and_stick() -> None:
    # Tate's ideal drop weighs 2 pi r gamma.
    whole = wetting.hanging_drop_volume(**WATER, tip_radius=1e-3, fraction=1.0)
    assert whole * WATER["density"] * wetting.GRAVITY == pytest.approx(2 * math.pi * 1e-3 * WATER["surface_tension"])
    # Water under a ceiling breaks up about 24 mm apart: 2 pi sqrt(2) times 2.73 mm.
    assert wetting.hanging_spacing(**WATER) == pytest.approx(24.2e-3, abs=0.1e-3)
    sticking = {"advancing": math.radians(95), "receding": math.radians(60)}
    held = wetting.held_drop_volume(**WATER, width=4e-3, slope=np.array([0.0, 0.2, 1.0]), **sticking)
    assert np.isinf(held[0])
    assert held[1] * math.sin(0.2) == pytest.approx(held[2] * math.sin(1.0))
    plug = wetting.held_plug_length(**WATER, gap=0.3e-3, slope=np.array([0.0, math.radians(90)]), **sticking)
    rise = wetting.gap_rise(**WATER, gap=0.3e-3, contact_angle=sticking["receding"])
    fall = wetting.gap_rise(**WATER, gap=0.3e-3, contact_angle=sticking["advancing"])
    assert np.isinf(plug[0])
    assert plug[1] == pytest.approx(rise - fall)


def test_a_pool_on_a_slope_starves_the_uphill_side() -> None:
    depth = wetting.pool_depth_on_slope(deepest=2e-3, slope=math.radians(1), distance=np.array([0.0, 0.05, 0.5]))
    assert depth[0] == 2e-3
    assert depth[1] == pytest.approx(2e-3 - 0.05 * math.tan(math.radians(1)))
    assert depth[2] == 0.0
