"""Films drawn and drained: design figures, an integrated flow, inverses and ranges."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from outcouple.contact import film_dynamics as films

WATER = {"viscosity": 1.0016e-3, "density": 998.2, "surface_tension": 0.07275}
SIZE = st.floats(1e-6, 1e-3)


@pytest.mark.parametrize(
    ("viscosity", "density", "thickness", "seconds"),
    [
        (1.0016e-3, 998.2, 30e-6, 0.6),
        (1.0016e-3, 998.2, 10e-6, 5.0),
        (0.05, 870.0, 30e-6, 33.0),
        (0.05, 870.0, 10e-6, 290.0),
        (1.0, 1270.0, 30e-6, 450.0),
        (1.0, 1270.0, 10e-6, 4000.0),
    ],
)
def test_draining_times_of_a_probe(viscosity: float, density: float, thickness: float, seconds: float) -> None:
    # Computed for the design of rod probes, 5 mm below the film's edge; oil and syrup densities from memory.
    time = films.draining_time(viscosity=viscosity, density=density, height=5e-3, thickness=thickness)
    assert time == pytest.approx(seconds, rel=0.06)


def test_speeds_that_draw_thick_films() -> None:
    # Computed independently: 30 um of water is drawn out above 91 mm/s and 10 um above 18 mm/s.
    assert films.drawing_speed(**WATER, thickness=30e-6) == pytest.approx(91e-3, abs=0.5e-3)
    assert films.drawing_speed(**WATER, thickness=10e-6) == pytest.approx(17.5e-3, abs=0.5e-3)


def test_drained_film_solves_the_draining_equation() -> None:
    # Computed independently: dh/dt + (rho g / mu) h^2 dh/dz = 0, by central differences.
    base = {"viscosity": 0.02, "density": 900.0}
    height, time = 0.03, 12.0
    film = films.drained_thickness(**base, height=height, time=time)
    thinning = (
        films.drained_thickness(**base, height=height, time=time * 1.0001)
        - films.drained_thickness(**base, height=height, time=time * 0.9999)
    ) / (2e-4 * time)
    slope = (
        films.drained_thickness(**base, height=height * 1.0001, time=time)
        - films.drained_thickness(**base, height=height * 0.9999, time=time)
    ) / (2e-4 * height)
    assert thinning == pytest.approx(-900.0 * films.GRAVITY / 0.02 * film**2 * slope, rel=1e-6)


@given(thickness=SIZE, height=st.floats(1e-3, 1.0))
def test_inverses(thickness: float, height: float) -> None:
    time = films.draining_time(viscosity=0.05, density=870.0, height=height, thickness=thickness)
    back = films.drained_thickness(viscosity=0.05, density=870.0, height=height, time=time)
    assert back == pytest.approx(thickness, rel=1e-9)
    speed = films.drawing_speed(**WATER, thickness=thickness)
    assert films.drawn_thickness(**WATER, speed=speed) == pytest.approx(thickness, rel=1e-9)


def test_fast_drawing_leaves_the_range() -> None:
    surface = {"viscosity": 0.934, "surface_tension": 0.0625}
    (note,) = films.drawn_notes(speed=np.array([1e-4, 1e-2]), **surface)
    assert note.code == "drawn-fast"
    assert note.where is not None
    assert note.where.tolist() == [False, True]
    assert films.drawn_notes(speed=1e-4, **surface) == ()


def test_a_film_drawn_thin_does_not_wait_for_drainage() -> None:
    (note,) = films.draining_notes(drawn=5e-6, drained=22e-6)
    assert note.code == "film-drawn-thin"
    assert films.draining_notes(drawn=50e-6, drained=22e-6) == ()
