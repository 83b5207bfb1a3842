"""What must hold for every stack: energy, reciprocity, layers that are none, limits, shapes, refusals."""

from __future__ import annotations

import mpmath
import numpy as np
import pytest
import tmm
from hypothesis import given, settings
from hypothesis import strategies as st

from outcouple import optics

INDEX = st.floats(1.0, 2.5)
DEPTH = st.floats(0, 3e-6)
ANGLE = st.floats(0, np.pi / 2)
FADING = st.floats(0, 3)
LINE = 850e-9


@settings(max_examples=150, deadline=None)
@given(INDEX, st.lists(st.tuples(INDEX, FADING, DEPTH), max_size=4), INDEX, ANGLE)
def test_energy_is_kept(guide, layers, contact, angle):
    indices = (guide, *(complex(n, k) for n, k, _ in layers), contact)
    found = optics.stack_response(indices, tuple(d for *_, d in layers), angle, LINE)
    for R, T, A in ((found.Rs, found.Ts, found.As), (found.Rp, found.Tp, found.Ap)):
        assert -1e-12 <= R <= 1 + 1e-12
        assert -1e-12 <= T <= 1 + 1e-12
        assert -1e-9 <= A <= 1 + 1e-12
        if not any(k for _, k, _ in layers):
            assert float(R + T) == pytest.approx(1, abs=1e-11)


@settings(max_examples=100, deadline=None)
@given(INDEX, st.lists(st.tuples(INDEX, FADING, DEPTH), min_size=1, max_size=4), INDEX, st.floats(0, 1.5))
def test_transmission_is_the_same_both_ways(guide, layers, contact, angle):
    sine = guide * np.sin(angle) / contact
    if sine >= 1:
        return
    media, depths = [complex(n, k) for n, k, _ in layers], [d for *_, d in layers]
    there = optics.stack_response((guide, *media, contact), depths, angle, LINE)
    back = optics.stack_response((contact, *media[::-1], guide), depths[::-1], np.arcsin(sine), LINE)
    assert float(there.Ts) == pytest.approx(float(back.Ts), abs=1e-11)
    assert float(there.Tp) == pytest.approx(float(back.Tp), abs=1e-11)


@settings(max_examples=100, deadline=None)
@given(INDEX, INDEX, FADING, DEPTH, st.floats(0.01, 0.99), INDEX, ANGLE)
def test_splitting_a_layer_changes_nothing(guide, film, fading, depth, part, contact, angle):
    n = complex(film, fading)
    whole = optics.stack_response((guide, n, contact), (depth,), angle, LINE)
    split = optics.stack_response((guide, n, n, contact), (part * depth, (1 - part) * depth), angle, LINE)
    for name in ("Rs", "Rp", "Ts", "Tp"):
        assert float(getattr(whole, name)) == pytest.approx(float(getattr(split, name)), abs=1e-10)


@settings(max_examples=60, deadline=None)
@given(INDEX, INDEX, INDEX, ANGLE)
def test_a_layer_of_no_thickness_is_none(guide, film, contact, angle):
    thin = optics.stack_response((guide, film, contact), (0.0,), angle, LINE)
    bare = optics.interface(guide, contact, angle)
    assert float(thin.Rs) == pytest.approx(float(bare.Rs), abs=1e-12)
    assert float(thin.Rp) == pytest.approx(float(bare.Rp), abs=1e-12)


@settings(max_examples=60, deadline=None)
@given(INDEX, INDEX, FADING, DEPTH, INDEX)
def test_s_is_p_at_normal_incidence(guide, film, fading, depth, contact):
    found = optics.stack_response((guide, complex(film, fading), contact), (depth,), 0.0, LINE)
    assert complex(found.rp) == pytest.approx(-complex(found.rs), abs=1e-12)
    assert float(found.Ts) == pytest.approx(float(found.Tp), abs=1e-12)


@settings(max_examples=60, deadline=None)
@given(st.floats(1.3, 2), st.floats(1.0, 1.2), st.floats(1.0, 2), st.floats(0, 1e-5), st.floats(0, 1.57))
def test_the_fast_gap_is_the_stack(guide, gap, contact, width, angle):
    Ts, Tp = optics.gap_transmittance(guide, gap, contact, width, angle, LINE)
    whole = optics.stack_response((guide, gap, contact), (width,), angle, LINE)
    assert float(Ts) == pytest.approx(float(whole.Ts), abs=1e-11)
    assert float(Tp) == pytest.approx(float(whole.Tp), abs=1e-11)


@pytest.mark.parametrize("angle", [0.0, 0.3, 0.8, 1.2, np.pi / 2])
@pytest.mark.parametrize("width", [0.0, 1e-9, 1e-6, 1.0, 1e3])
def test_thick_gaps_and_ends_stay_finite(angle, width):
    found = optics.stack_response((1.5, 1.0, 1.5), (width,), angle, LINE)
    Ts, Tp = optics.gap_transmittance(1.5, 1.0, 1.5, width, angle, LINE)
    values = [found.Rs, found.Rp, found.Ts, found.Tp, Ts, Tp]
    assert np.all(np.isfinite(values))
    if angle == np.pi / 2:
        assert values[:4] == pytest.approx([1, 1, 0, 0], abs=1e-12)


def exact_gap_at_its_critical_angle(guide: str, contact: str, phase: str) -> tuple[float, float]:
    """(Ts, Tp) of an air gap at exactly its critical angle, where the field in it is linear, to 40 digits.

    phase is 2 pi gap / wavelength. s: M = [[1, -i phase], [0, 1]] in (E, H); p: the lower left entry carries e = 1.
    """
    with mpmath.workdps(40):
        e0, e2, d = mpmath.mpf(guide) ** 2, mpmath.mpf(contact) ** 2, mpmath.mpf(phase)
        q0, q2 = mpmath.sqrt(e0 - 1), mpmath.sqrt(e2 - 1)
        found = []
        for y0, y2 in ((q0, q2), (q0 / e0, q2 / e2)):
            # B = 1 - i d y2, C = y2 (the other entry of the layer carries w^2 = 0).
            found.append(float(4 * y0 * y2 / abs(y0 * (1 - 1j * d * y2) + y2) ** 2))
        return found[0], found[1]


@pytest.mark.parametrize("width", [1e-9, 2e-7, 1e-6, 2e-5])
def test_exactly_at_the_critical_angle_of_the_gap(width):
    """Packages return 0 / 0 or R = 1 here; the limit is a field that is linear across the gap."""
    angle = np.arcsin(1 / 1.5)
    exact = exact_gap_at_its_critical_angle("1.5", "1.43", repr(2 * np.pi * width / LINE))
    found = optics.stack_response((1.5, 1.0, 1.43), (width,), angle, LINE)
    fast = optics.gap_transmittance(1.5, 1.0, 1.43, width, angle, LINE)
    assert (float(found.Ts), float(found.Tp)) == pytest.approx(exact, rel=1e-9)
    assert (float(fast[0]), float(fast[1])) == pytest.approx(exact, rel=1e-9)


def test_against_the_package_tmm():
    rng = np.random.default_rng(4)
    for _ in range(60):
        count = rng.integers(1, 5)
        n = [1.5, *(rng.uniform(1, 2.4, count) + 1j * rng.choice([0, 0.01, 2], count)), rng.uniform(1, 2)]
        d, angle = rng.uniform(1e-8, 1e-6, count), rng.uniform(0, 1.5)
        found = optics.stack_response(n, list(d), angle, LINE)
        for polarisation, R, T in (("s", found.Rs, found.Ts), ("p", found.Rp, found.Tp)):
            oracle = tmm.coh_tmm(polarisation, n, [np.inf, *d, np.inf], angle, LINE)
            assert float(R) == pytest.approx(oracle["R"], abs=1e-9)
            assert float(T) == pytest.approx(oracle["T"], abs=1e-9)


def test_a_batch_is_its_points():
    rng = np.random.default_rng(0)
    guide, film, depth = (
        rng.uniform(1.3, 1.7, (7, 1, 1)),
        rng.uniform(1, 1.5, (1, 3, 1)),
        rng.uniform(0, 2e-6, (7, 1, 1)),
    )
    angle = rng.uniform(0, 1.57, (7, 1, 2001))
    whole = optics.stack_response((guide, film, 1.4 + 0.01j), (depth,), angle, LINE)
    assert whole.Rs.shape == (7, 3, 2001)
    for at in ((0, 0, 0), (3, 2, 1000), (6, 1, 2000)):
        one = optics.stack_response(
            (guide[at[0], 0, 0], film[0, at[1], 0], 1.4 + 0.01j), (depth[at[0], 0, 0],), angle[at[0], 0, at[2]], LINE
        )
        assert float(one.Rs) == pytest.approx(float(whole.Rs[at]), rel=1e-13)
        assert complex(one.rp) == pytest.approx(complex(whole.rp[at]), rel=1e-12)


def test_refusals():
    with pytest.raises(ValueError, match="need 1 thicknesses"):
        optics.stack_response((1.5, 1.0, 1.5), (), 0.1, LINE)
    with pytest.raises(ValueError, match="k >= 0"):
        optics.stack_response((1.5, 1.0 - 0.1j, 1.5), (1e-6,), 0.1, LINE)
    with pytest.raises(ValueError, match="radians"):
        optics.interface(1.5, 1.0, 45.0)
    assert np.isnan(optics.critical_angle(1.0, 1.5))
