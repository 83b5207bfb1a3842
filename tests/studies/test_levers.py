"""Levers: elasticities against differences of single evaluations, and bounds against the verdict on either side."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest

from outcouple.design import load_design, parse_design
from outcouple.evaluation import evaluate
from outcouple.fields import leaf_at
from outcouple.report.levers_text import format_levers, levers_data, levers_rows
from outcouple.studies.flips import Input, ladder
from outcouple.studies.levers import Levers, all_inputs, levers

DEMOS = Path(__file__).parents[2] / "demo_configs"
TEXT = (DEMOS / "dewar_ladder_silica.toml").read_text()


@pytest.fixture(scope="module")
def found() -> Levers:
    return levers(load_design(DEMOS / "dewar_ladder_silica.toml"))


def outcome(old: str, new: str) -> Any:
    assert old in TEXT
    return evaluate(parse_design(TEXT.replace(old, new)), advice=False, views=False)


def test_the_closest_requirement_decides(found: Levers) -> None:
    assert found.requirement.metric == "dry_angle_margin"
    assert found.verdict == "pass"
    assert found.value == pytest.approx(np.radians(1.38), rel=2e-3)


def test_the_face_angle_moves_the_margin_degree_by_degree(found: Levers) -> None:
    """The second face is met at 90 degrees less the face angle: one percent of 45 degrees takes 0.45 of the 1 degree
    that is asked for (plane geometry)."""
    lever = found.levers[0]
    assert lever.input.name == "prism.face_angle"
    assert lever.effect == pytest.approx(-0.45, rel=0.01)
    assert lever.elasticity == pytest.approx(-0.45 / 0.0138, rel=0.01)
    assert lever.above is not None
    assert lever.above.value == pytest.approx(np.radians(45 + 0.38 / 3), rel=2e-2)


def test_elasticities_equal_differences_of_single_evaluations(found: Levers) -> None:
    lever = next(one for one in found.levers if one.input.name == "emitter.wavelength")
    low, high = (outcome('"850 nm"', f'"{nm!r} nm"').metrics["dry_angle_margin"].value for nm in (841.5, 858.5))
    slope = (np.log(high) - np.log(low)) / (np.log(858.5) - np.log(841.5))
    assert lever.elasticity == pytest.approx(slope, rel=0.02)


def test_the_verdict_holds_up_to_the_bounds_and_turns_there(found: Levers) -> None:
    power = next(one for one in found.levers if one.input.name == "emitter.power")
    for flip, inwards in ((power.below, 1.03), (power.above, 0.97)):
        assert flip is not None
        assert flip.value is not None
        assert outcome('power = "2 mW"', f'power = "{flip.value * 1e3!r} mW"').verdict == "fail"
        assert outcome('power = "2 mW"', f'power = "{flip.value * 1e3 * inwards!r} mW"').verdict == "pass"


def test_every_number_is_there_those_of_contacts_too(found: Levers) -> None:
    names = [one.input.name for one in found.levers]
    assert len(names) == len(set(names)) == len(all_inputs(load_design(DEMOS / "dewar_ladder_silica.toml")))
    oil = [one.name for one in all_inputs(load_design(DEMOS / "oil_tank_overfill.toml"))]
    assert "states.drained film.thickness" in oil
    strongest = [abs(one.effect) for one in found.levers if one.moves]
    assert strongest == sorted(strongest, reverse=True)


def test_text_table_and_data(found: Levers) -> None:
    assert "dry angle margin decides: 1.38 deg, needs at least 1 deg" in format_levers(found)
    assert len(levers_rows(found)) == 1 + len(found.levers)
    assert levers_data(found)["decides"]["metric"] == "dry_angle_margin"


def test_without_requirements_the_margin_in_sigma_decides() -> None:
    bare = levers(parse_design(TEXT.split("[[requirements]]")[0]))
    assert not bare.stated
    assert bare.metric.name == "margin_sigma"
    assert "No requirements are stated" in format_levers(bare)


@pytest.mark.parametrize(
    "path", [("prism", "base"), ("readout", "feedback_resistance"), ("layout", "emitter_position")]
)
@pytest.mark.parametrize("upwards", [True, False])
def test_a_ladder_goes_to_the_bound_in_growing_steps(path: tuple[str, ...], upwards: bool) -> None:
    leaf, value = leaf_at(load_design(DEMOS / "oil_tank_overfill.toml").sections, path)
    steps = ladder(Input(leaf, path, value), upwards=upwards)
    moves = np.diff([value, *steps]) * (1 if upwards else -1)
    assert np.all(moves > 0)
    assert steps[-1] == pytest.approx(leaf.high if upwards else leaf.low, rel=1e-6)


def test_a_ladder_of_an_input_at_its_bound_is_empty() -> None:
    leaf, value = leaf_at(load_design(DEMOS / "oil_tank_overfill.toml").sections, ("emitter", "age_left"))
    assert len(ladder(Input(leaf, ("emitter", "age_left"), value), upwards=True)) == 0
