"""Which way failures err, what tells them, and how a verdict says so."""

from __future__ import annotations

import numpy as np
import pytest

from outcouple.evaluation import evaluate, evaluate_batch
from outcouple.evaluation.faults import DEAD
from outcouple.report.text import format_outcome

from .tanks import DRY, WET, tank

DEAD_EMITTER = "emitter dead, cable open, supply lost"
STUCK = "detector output stuck bright, amplifier saturated"


def rows(**sections):
    return {row.cause: row for row in evaluate(tank(**sections), advice=False, views=False).failures}


@pytest.mark.parametrize(
    ("demand", "dead", "stuck"),
    [
        ("high level", "spurious", "dangerous"),
        ("leak", "spurious", "dangerous"),
        ("low level", "dangerous", "spurious"),
        ("", "open", "open"),
    ],
)
def test_the_demand_turns_the_table(demand, dead, stuck):
    """Light lost means wet: harmless where wet is the demand, dangerous where dry is; argued by hand."""
    found = rows(decision={"demand": demand})
    assert (found[DEAD_EMITTER].direction, found[STUCK].direction) == (dead, stuck)
    assert found[DEAD_EMITTER].reads == "wet"
    assert found["clear flat residual film"].direction == "none"


def test_dangerous_rows_come_first_and_the_uncovered_before_the_covered():
    found = list(rows(decision={"demand": "low level", "diagnostics": {"drive_monitor": True}}).values())
    directions = [row.direction for row in found]
    assert directions == sorted(directions, key=["dangerous", "open", "spurious", "none"].index)
    dangerous = [bool(row.covered_by) for row in found if row.direction == "dangerous"]
    assert dangerous == sorted(dangerous)


def test_a_dead_emitter_is_red_until_something_tells_it():
    low = {"demand": "low level"}
    blind = evaluate(tank(decision=low, requirements=[{"metric": "dead_emitter_unnoticed", "at_most": 1e-6}]))
    assert blind.verdict == "fail"
    assert blind.headline.startswith("FAIL: a dead emitter reads wet (dangerous: the pump runs dry)")
    assert "dead-emitter" in [note.code for note in blind.notes if note.severity == "danger"]
    for mend in (
        {"readout": {"reference_channel": "yes"}, "decision": low},
        {"decision": {**low, "diagnostics": {"drive_monitor": True}}},
        {"decision": {**low, "fault_low": "0.5 %"}},
    ):
        told = evaluate(tank(**mend, requirements=[{"metric": "dead_emitter_unnoticed", "at_most": 1e-6}]))
        assert told.verdict == "pass"
        assert "dead-emitter" not in [note.code for note in told.notes]
        assert next(row for row in told.failures if row.cause == DEAD_EMITTER).covered_by


def test_a_verdict_that_passes_still_says_what_a_dead_emitter_does():
    stated = [{"metric": "worst_ratio", "at_least": 5}]
    found = evaluate(tank(decision={"demand": "low level"}, requirements=stated), advice=False, views=False)
    assert found.verdict == "pass"
    assert "a dead emitter reads wet (dangerous: the pump runs dry), and nothing tells it" in found.headline
    text = format_outcome(found, width=100)
    assert "Failure directions (demand: low level)" in text
    assert "nothing; reference or drive monitor would" in text
    assert "Beside the verdict:" in text


def test_where_wet_is_the_demand_a_dead_emitter_is_safe():
    metrics = evaluate(tank(decision={"demand": "high level"}), advice=False, views=False).metrics
    assert metrics["dead_emitter_unnoticed"].value == 0
    assert metrics["dangerous_probability"].value < 1e-12


def test_without_a_demand_nothing_dangerous_is_known():
    found = evaluate(tank(requirements=[{"metric": "undetected_dangerous_causes", "at_most": 0}]))
    assert found.verdict == "open"
    assert "Unknown is not a pass" in found.headline
    assert "demand-open" in [note.code for note in found.notes]


def test_a_fault_band_covers_what_falls_into_it_and_no_more():
    """Dead reads the dark current, stuck reads full scale; what creeps in passes through healthy readings first."""
    low = rows(decision={"demand": "low level", "fault_low": "0.5 %"})
    assert low[DEAD_EMITTER].covered_by == ("fault band",)
    assert low["emitter aged or hot"].covered_by == ()
    high = rows(decision={"demand": "high level", "fault_high": "110 %"})
    assert high[STUCK].covered_by == ("fault band",)
    useless = rows(decision={"demand": "high level", "fault_high": "900 %"})
    assert useless[STUCK].covered_by == ()


def test_a_fault_band_inside_the_healthy_readings_trips_for_nothing():
    """The wet tip returns about 2 % of the dry one, by crosstalk; a band up to 5 % takes it for a fault."""
    low = {"demand": "low level", "rate": "10 Hz"}
    wide, narrow = (
        evaluate(tank(decision={**low, "fault_low": share}), advice=False, views=False).metrics
        for share in ("5 %", "0.5 %")
    )
    assert wide["spurious_per_year"].value == pytest.approx(10 * 365.25 * 86400)
    assert narrow["spurious_per_year"].value < 1e-6
    assert wide["fault_band_coverage"].value == narrow["fault_band_coverage"].value == 1.0


def test_coverage_falls_to_chance_where_the_band_ends_at_the_dead_reading():
    """A limit that equals the dark current: half of the dead readings lie below it."""
    design = tank(
        readout={"dark_current": "20 uA", "electronics_temperature": "25 degC"}, decision={"demand": "low level"}
    )
    table = evaluate(design, advice=False, views=False)
    bright = table.states[0].signal
    limit = f"{100 * 20e-6 / bright:.12f} %"
    found = evaluate(
        tank(
            readout={"dark_current": "20 uA", "electronics_temperature": "25 degC"},
            decision={"demand": "low level", "fault_low": limit},
        ),
        advice=False,
        views=False,
    )
    assert found.metrics["fault_band_coverage"].states[DEAD] == pytest.approx(0.5, abs=0.01)


def test_a_stated_fault_counts_beside_the_dead_emitter():
    half = {
        "name": "half the light",
        "expect": "absent",
        "touching": "dry",
        "role": "fault",
        "set": {"emitter.power": "0.1 mW"},
    }
    found = evaluate(tank(states=[DRY, WET, half], decision={"demand": "low level"}), advice=False, views=False)
    dangerous = found.metrics["dangerous_probability"]
    assert dangerous.states["half the light"] == pytest.approx(1.0)
    assert dangerous.states["dry"] < 1e-12


def test_diagnostics_count_what_is_left():
    some = evaluate_batch(tank(decision={"demand": "low level"}), {}, ["undetected_dangerous_causes"])
    every = dict.fromkeys(("reference", "drive_monitor", "second_channel", "trend"), True)
    none = evaluate_batch(
        tank(decision={"demand": "low level", "diagnostics": every}), {}, ["undetected_dangerous_causes"]
    )
    assert some.metrics["undetected_dangerous_causes"].values[0] == 5
    assert none.metrics["undetected_dangerous_causes"].values[0] == 0


def test_both_directions_survive_a_batch():
    power = np.array([0.0, 1e-3, 8e-3])
    names = ["dangerous_probability", "spurious_per_year", "dead_emitter_unnoticed", "fault_band_coverage"]
    together = evaluate_batch(
        tank(decision={"demand": "low level", "fault_low": "0.5 %"}), {("emitter", "power"): power}, names
    )
    for at, value in enumerate(power):
        alone = evaluate_batch(
            tank(decision={"demand": "low level", "fault_low": "0.5 %"}),
            {("emitter", "power"): np.array([value])},
            names,
        )
        for name in names:
            assert together.metrics[name].values[at] == pytest.approx(alone.metrics[name].values[0], rel=1e-9)


def test_confirm_beyond_its_window_is_refused():
    from outcouple.errors import UserMistake

    with pytest.raises(UserMistake, match="confirm"):
        tank(decision={"confirm": 3, "window": 2})
    with pytest.raises(UserMistake, match="fault_low"):
        tank(decision={"fault_low": "50 %", "fault_high": "20 %"})


def test_without_calibration_spread_of_the_light_moves_readings_past_a_standing_level():
    """60 to 160 % of the light: calibrated, the margins in span stay; else the faint sensor's dry margin shrinks."""
    power = {("emitter", "power"): 8e-3 * np.array([0.6, 1.0, 1.25])}
    given = {"level": "given", "share": "50 %"}
    own, none = (
        evaluate_batch(tank(decision={**given, "calibration": word}), power, ["margin_span"]).metrics["margin_span"]
        for word in ("each sensor", "none")
    )
    assert own.states["dry"] == pytest.approx(np.full(3, own.states["dry"][1]), rel=1e-3)
    assert none.states["dry"][1] == pytest.approx(own.states["dry"][1], rel=1e-12)
    # dry stands at 0.6 of the nominal, the level at 0.5 of it, the span is 0.98 of what is left
    assert none.states["dry"][0] == pytest.approx(0.1 / 0.6 / 0.98, rel=0.02)
    assert none.states["dry"][2] > none.states["dry"][1]


def test_a_standing_level_still_follows_its_own_share():
    design = tank(decision={"level": "given", "calibration": "none"})
    samples = {("decision", "share"): np.array([0.3, 0.6]), ("emitter", "power"): np.array([8e-3, 8e-3])}
    both = evaluate_batch(design, samples, ["margin_span"]).metrics["margin_span"]
    assert both.states["dry"][0] > both.states["dry"][1]
