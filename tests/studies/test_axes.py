"""Axes from sentences: what is read, and what is refused with what would be right."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from outcouple.design import load_design
from outcouple.errors import UserMistake
from outcouple.studies import read_axes
from outcouple.studies.axes import read_axis
from outcouple.studies.places import with_values

DEMOS = Path(__file__).parents[2] / "demo_configs"
TANK = load_design(DEMOS / "oil_tank_overfill.toml")


def test_a_linear_span_holds_its_ends_exactly() -> None:
    axis = read_axis(TANK, "prism.base from 6 mm to 12 mm in 7")
    assert axis.values == pytest.approx([0.006, 0.007, 0.008, 0.009, 0.010, 0.011, 0.012], rel=1e-12)
    assert (axis.values[0], axis.values[-1]) == (0.006, 0.012)
    assert axis.runs
    assert axis.texts()[1] == "7 mm"


def test_a_logarithmic_span_has_even_ratios() -> None:
    axis = read_axis(TANK, "emitter.power from 1 mW to 100 mW in 5 log")
    ratios = np.diff(np.log(axis.values))
    assert ratios == pytest.approx(np.log(100) / 4)


def test_a_span_may_run_downwards() -> None:
    axis = read_axis(TANK, "environment.temperature from 60 degC to -20 degC in 3")
    assert axis.values == pytest.approx([333.15, 293.15, 253.15])


@pytest.mark.parametrize("word", ["in", "at"])
def test_a_list_of_numbers_runs_as_an_array(word: str) -> None:
    axis = read_axis(TANK, f"prism.base {word} 4 mm, 6 mm,9 mm")
    assert axis.values == pytest.approx([0.004, 0.006, 0.009])
    assert axis.runs


def test_materials_choices_and_counts_are_other_designs() -> None:
    materials = read_axis(TANK, "prism.material in PMMA, 'fused silica'")
    assert materials.values == ("PMMA", "fused silica")
    counts = read_axis(TANK, "readout.bits from 8 to 16 in 5")
    assert counts.values == (8, 10, 12, 14, 16)
    words = read_axis(TANK, "readout.modulation in steady, difference")
    assert [axis.runs for axis in (materials, counts, words)] == [False] * 3
    assert with_values(TANK, {counts.place: 16}).sections.readout.bits == 16  # type: ignore[attr-defined]


def test_states_by_name_even_with_a_comma_in_it() -> None:
    liquid = read_axis(TANK, 'states.heating oil, cold.touching in "heating oil", water')
    assert liquid.place.raw == ("states", "heating oil, cold", "touching")
    film = read_axis(TANK, "states.drained film.touching.thickness from 1 um to 100 um in 3 log")
    assert film.runs
    assert film.place.path == ("states", "drained film", "thickness")
    assert film.values == pytest.approx([1e-6, 1e-5, 1e-4])


def test_a_contact_given_by_name_can_have_its_liquid_varied() -> None:
    axis = read_axis(TANK, "states.heating oil.touching.liquid in water, ethanol")
    made = with_values(TANK, {axis.place: "ethanol"})
    state = next(one for one in made.states if one.family == "heating oil")
    assert next(iter(state.touching.values())).liquid == "ethanol"  # type: ignore[attr-defined]


def test_what_a_state_changes_and_own_materials_can_vary() -> None:
    cold = read_axis(TANK, "states.heating oil, cold.set.environment.temperature in -20 degC, 0 degC")
    made = with_values(TANK, {cold.place: cold.values[1]})
    state = next(one for one in made.states if one.family == "heating oil, cold")
    assert state.changes == {("environment", "temperature"): pytest.approx(273.15)}
    bench = load_design(DEMOS / "acid_bench_fluoropolymer.toml")
    acid = read_axis(bench, "materials.process acid.index from 1.33 to 1.40 in 8")
    assert len(acid.values) == 8
    assert with_values(bench, {acid.place: 1.4}).raw["materials"]["process acid"]["index"] == 1.4
    assert bench.raw["materials"]["process acid"]["index"] == 1.35


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("prism.bse from 6 mm to 8 mm in 3", ["prism.bse", "did you mean 'prism.base'?"]),
        ("prism.base from 6 to 8 mm in 3", ["'6'", 'write "6 mm"']),
        ("prism.base from 6 mm to 8 W in 3", ["'8 W'", "a length is wanted"]),
        ("prism.base from 6 mm to 8 mm in 1", ["'1' points", "at least 2"]),
        ("prism.base from 6 mm to 8 mm in many", ["'many' points"]),
        ("prism.base from 6 mm to 8 mm", ["write", "prism.base from A to B in N"]),
        ("prism.base from 6 mm to 6 mm in 3", ["begins where it ends"]),
        ("prism.base from 6 mm to 900 m in 3", ["too large"]),
        ("prism.base from 6 mm to 8 mm in 5 cubic", ["'cubic'", '"log"']),
        ("layout.emitter_position from -2 mm to 2 mm in 5 log", ["above zero"]),
        ("prism.material from PMMA to sapphire in 3", ["no between", "prism.material in A, B, C"]),
        ("prism.material in PMMA, unobtainium", ["unobtainium"]),
        ("prism.base at 4 mm, nonsense", ["'nonsense'", "a length is wanted"]),
        ("prism.base at 4 mm, 4 mm", ["twice"]),
        ("prism.base at 4 mm, , 5 mm", ["empty item"]),
        ("prism.base", ["how?", "reads like"]),
        ("readout.bits from 8 to 11 in 3", ["whole numbers", '"in 4"']),
        ("readout.modulation in steady, sometimes", ["sometimes", "synchronous"]),
        ("states.milk.touching in water", ["no state 'milk'", "drained film"]),
        ("states.dry.thickness from 1 um to 2 um in 3", ["a state's inputs are touching"]),
        ("states.drained film.touching.thicknes at 1 um", ["no such input", "thickness"]),
        ("materials.honey.index at 1.5", ["the design has none of its own"]),
        ("", ["reads like"]),
    ],
)
def test_what_cannot_be_taken_is_refused_by_name(text: str, words: list[str]) -> None:
    with pytest.raises(UserMistake) as mistake:
        read_axes(TANK, [text])
    for word in words:
        assert word in str(mistake.value)


def test_what_every_state_sets_itself_is_varied_in_a_state() -> None:
    cell = load_design(DEMOS / "force_cell.toml")
    with pytest.raises(UserMistake, match="every state sets it"):
        read_axes(cell, ["gap.distance from 50 nm to 400 nm in 8"])
    (axis,) = read_axes(cell, ["states.half load.expect from 150 nm to 250 nm in 3"])
    assert axis.unit == "nm"
    made = with_values(cell, {axis.place: axis.values[0]})
    assert next(one for one in made.states if one.name == "half load").expect == pytest.approx(150e-9)


def test_all_mistakes_of_all_axes_come_in_one_go() -> None:
    with pytest.raises(UserMistake) as mistake:
        read_axes(TANK, ["prism.bse at 1 mm", "prism.base from 6 mm to 900 m in 3", "prism.base at 5 mm"])
    assert len(mistake.value.lines) == 2


def test_an_input_stands_on_one_axis_only_and_sweeps_have_an_end() -> None:
    with pytest.raises(UserMistake, match="two axes"):
        read_axes(TANK, ["prism.base at 5 mm", "prism.base at 6 mm"])
    with pytest.raises(UserMistake, match="too many"):
        read_axes(TANK, ["prism.base from 5 mm to 6 mm in 2000", "emitter.power from 1 mW to 2 mW in 2000"])
    with pytest.raises(UserMistake, match="say what varies"):
        read_axes(TANK, [])
