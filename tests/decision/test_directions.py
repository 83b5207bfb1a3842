"""Fault bands, failure directions and cautions."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from outcouple.decision import cautions as c
from outcouple.decision import eye_safety as eyes
from outcouple.decision import failure_modes as f
from outcouple.decision.three_way import Bands, band_probabilities, dark_fault_limit, fault_coverage

BANDS = Bands(low=0.02, level=0.2, high=1.2)


@given(st.floats(-2, 3), st.floats(1e-3, 1))
def test_band_chances_sum_to_one(mean: float, noise: float) -> None:
    got = band_probabilities(BANDS, mean=mean, noise=noise)
    assert sum(float(part) for part in got.values()) == pytest.approx(1.0)
    assert all(part >= 0 for part in got.values())


def test_band_chances_do_not_cancel_far_out() -> None:
    got = band_probabilities(Bands(0.0, 10.0, 11.0), mean=0.5, noise=1.0)
    assert float(got["bright"]) == pytest.approx(1.05e-21, rel=0.01)  # Q(9.5) = 1.0495e-21, Abramowitz & Stegun law


def test_a_dead_lamp_is_seen_only_above_its_own_reading() -> None:
    limit = dark_fault_limit(mean=np.array([0.05, 0.004]), noise=0.002, z=5.0)
    assert limit == pytest.approx([0.04, -0.006])
    bands = Bands(low=limit, level=0.2, high=1.2)
    assert fault_coverage(bands, mean=0.0, noise=0.002) == pytest.approx([1.0, 1.35e-3], rel=0.01)


def test_bands_must_rise() -> None:
    with pytest.raises(ValueError, match="must rise"):
        Bands(low=0.3, level=0.2, high=1.0)


EXPECTED = {
    "emitter dead, cable open, supply lost": ("spurious", "dangerous"),
    "emitter aged or hot": ("spurious", "dangerous"),
    "detector output stuck bright, amplifier saturated": ("dangerous", "spurious"),
    "light leaks from emitter to detector inside (crosstalk)": ("dangerous", "spurious"),
    "outside light that the read-out does not reject": ("dangerous", "spurious"),
    "detector dead or its lead open": ("spurious", "dangerous"),
    "optical face scratched, hazed or crazed": ("spurious", "dangerous"),
    "white or pigmented deposit, milky liquid, bright wall or floor close to the face": ("dangerous", "spurious"),
    "retained drop, sticky or oily deposit, condensation": ("spurious", "dangerous"),
    "bubble or foam trapped on the face under liquid": ("dangerous", "spurious"),
    "clear flat residual film": ("none", "none"),
    "index of the liquid outside the switching window (cryogens, fluorinated liquids)": ("dangerous", "spurious"),
    "bracket loose, sensor out of place": ("dangerous", "spurious"),
}
"""Direction for high level (or leak) and for low level, light lost meaning wet; argued by hand, row by row."""

ALL = (*f.COMMON_FAILURES, *f.WETTED_FAILURES)


def directions(demand: str, present_reads: str = "low") -> dict[str, str]:
    effects = f.failure_directions(ALL, demand=demand, present_reads=present_reads)  # type: ignore[arg-type]
    return {effect.cause: effect.direction for effect in effects}


def test_directions_where_light_lost_means_wet() -> None:
    assert directions("high level") == {cause: pair[0] for cause, pair in EXPECTED.items()}
    assert directions("leak") == {cause: pair[0] for cause, pair in EXPECTED.items()}
    assert directions("low level") == {cause: pair[1] for cause, pair in EXPECTED.items()}


def test_directions_turn_with_the_principle() -> None:
    swap = {"dangerous": "spurious", "spurious": "dangerous", "none": "none"}
    turned = directions("high level", "high")
    assert turned == {cause: swap[direction] for cause, direction in directions("high level").items()}


def test_no_demand_leaves_everything_open() -> None:
    found = directions("")
    assert found.pop("clear flat residual film") == "none"
    assert set(found.values()) == {"open"}


def test_diagnostics_cover_and_what_is_missing_is_named() -> None:
    effects = f.failure_directions(ALL, demand="low level", present_reads="low", diagnostics=("drive monitor",))
    dead = effects[0]
    assert dead.covered_by == ("drive monitor",)
    assert "fault band" in dead.missing
    assert not dead.uncovered
    assert {effect.cause for effect in f.fails_dangerous(effects)} == {
        "emitter aged or hot",
        "detector dead or its lead open",
        "optical face scratched, hazed or crazed",
        "retained drop, sticky or oily deposit, condensation",
    }
    assert next(effect for effect in effects if effect.cause.startswith("optical face")).slow


def test_every_named_diagnostic_is_known() -> None:
    assert {name for row in ALL for name in row.covered_by} <= set(f.DIAGNOSTICS)
    with pytest.raises(ValueError, match="unknown diagnostics: magic"):
        f.failure_directions(ALL, demand="leak", present_reads="low", diagnostics=("magic",))
    with pytest.raises(ValueError, match="demand must be one of"):
        f.failure_directions(ALL, demand="fire", present_reads="low")


def test_probability_of_failure_illustration() -> None:
    # by hand: 1e-6/h, yearly proof test that finds 90 %, 15 years of life
    got = f.probability_of_failure(dangerous_rate=1e-6, interval=8760, life=131_400, proof_coverage=0.9)
    assert got == pytest.approx(0.9 * 4.38e-3 + 0.1 * 6.57e-2)


def codes(notes: object) -> list[str]:
    return [note.code for note in notes]  # type: ignore[attr-defined]


def test_eye_limit_falls_and_stays() -> None:
    time = np.array([10.0, 100.0, 1000.0, 10_000.0])
    got = eyes.corneal_irradiance_limit(time)
    assert got[:3] == pytest.approx([3200, 570, 100], rel=0.013)  # rounded values of the standard, from memory
    assert got[3] == got[2]


def test_burn_weight_and_retinal_figure_refuse_outside() -> None:
    assert np.isnan(eyes.burn_hazard_weight(1100e-9))
    assert float(eyes.burn_hazard_weight(700e-9)) == 1.0
    assert np.isnan(eyes.weak_stimulus_radiance_limit(0.5))
    assert float(eyes.weak_stimulus_radiance_limit(0.1)) == pytest.approx(63_000)


def test_bare_emitter_on_axis() -> None:
    # Lambertian: I0 = P / pi
    assert float(eyes.bare_emitter_irradiance(power=0.04)) == pytest.approx(0.04 / np.pi / 0.04)


def test_eye_notes() -> None:
    weak = eyes.eye_notes(kind="led", wavelength=850e-9, power=10e-3)
    assert codes(weak) == ["eye-infrared"]
    strong = eyes.eye_notes(kind="led", wavelength=850e-9, power=np.array([0.01, 20.0]))
    assert codes(strong) == ["eye-cornea", "eye-infrared"]
    assert strong[0].where is not None
    assert strong[0].where.tolist() == [False, True]
    assert codes(eyes.eye_notes(kind="laser", wavelength=850e-9, power=1e-3)) == ["eye-laser"]
    assert codes(eyes.eye_notes(kind="led", wavelength=525e-9, power=1e-3)) == []
    with pytest.raises(ValueError, match="'led' or 'laser'"):
        eyes.eye_notes(kind="torch", wavelength=1e-6, power=1.0)


def test_explosive_notes_never_pass_anything() -> None:
    assert c.explosive_notes(explosive=False, power=1e-2) == ()
    for given_limit in (None, 1.0, 1e-6):
        (note,) = c.explosive_notes(explosive=True, power=1e-2, limit_power=given_limit)
        assert note.severity == "danger"
        assert "certified" in note.decides
        assert "IEC 60079-28" in note.decides
    assert codes(c.explosive_notes(explosive=False, power=1e-2, service="fuel")) == ["explosive-atmosphere"]


def test_demand_notes() -> None:
    assert codes(c.demand_notes("", dark_is_present=True)) == ["demand-open"]
    assert codes(c.demand_notes("high level", dark_is_present=True)) == ["overfill"]
    assert codes(c.demand_notes("low level", dark_is_present=True, uncovered=2)) == [
        "dry-run-light-loss",
        "dangerous-uncovered",
    ]
    assert codes(c.demand_notes("low level", dark_is_present=False)) == []


def test_every_danger_says_what_decides() -> None:
    notes = [
        *eyes.eye_notes(kind="led", wavelength=940e-9, power=50.0),
        *c.explosive_notes(explosive=True, power=1.0),
        *c.demand_notes("leak", dark_is_present=True, uncovered=1),
        *c.service_notes("food", "oxygen", "pressure"),
        c.touch_note(),
        c.skin_note(index=(1.35, 1.55), reflectance=(0.4, 0.65)),
        c.skin_note(),
    ]
    assert len(notes) == 11
    assert all(note.decides for note in notes)
    assert len({note.code for note in notes}) == 10  # the two notes on skin share theirs
    with pytest.raises(ValueError, match="unknown services: salad"):
        c.service_notes("salad")


def test_ageing_note_keeps_its_samples() -> None:
    assert c.ageing_note(margin_at_end=np.array([3.0, 4.0])) == ()
    (note,) = c.ageing_note(margin_at_end=np.array([3.0, -0.5]))
    assert note.where is not None
    assert note.where.tolist() == [False, True]
    assert replace(note, where=None).holds()
