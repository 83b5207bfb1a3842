"""Sweeps: equal to loops of single evaluations, the same with any workers, whole after an interrupt."""

from __future__ import annotations

import tomllib
from concurrent.futures import Executor, ProcessPoolExecutor, ThreadPoolExecutor
from multiprocessing import get_context
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from outcouple.design import Design, design_from_mapping, load_design
from outcouple.errors import UserMistake
from outcouple.evaluation import evaluate
from outcouple.studies import crossings, spans, sweep
from outcouple.studies.just_met import zero_places
from outcouple.studies.work import CHUNK

DEMOS = Path(__file__).parents[2] / "demo_configs"


def demo(name: str) -> Design:
    return load_design(DEMOS / f"{name}.toml")


def single(name: str, changes: dict[tuple[Any, ...], Any]) -> Any:
    """One evaluation of a demo whose file was changed as a person would: an independent road to the same number."""
    data = tomllib.loads((DEMOS / f"{name}.toml").read_text())
    for path, value in changes.items():
        here: Any = data
        for key in path[:-1]:
            here = next(row for row in here if row["name"] == key) if isinstance(here, list) else here[key]
        here[path[-1]] = value
    return evaluate(design_from_mapping(data), advice=False, views=False)


def test_a_sweep_equals_a_loop_of_single_evaluations() -> None:
    found = sweep(demo("oil_tank_overfill"), ["prism.base from 6 mm to 12 mm in 4", "emitter.power at 2 mW, 20 mW"])
    assert found.shape == (4, 2)
    for row, base in enumerate((6, 8, 10, 12)):
        for column, power in enumerate((2, 20)):
            one = single("oil_tank_overfill", {("prism", "base"): f"{base} mm", ("emitter", "power"): f"{power} mW"})
            for name, metric in found.metrics.items():
                assert metric.values[row, column] == pytest.approx(one.metrics[name].value, rel=1e-9), name
            for state in one.states:
                assert found.signals[state.name][row, column] == pytest.approx(state.signal, rel=1e-9)
            assert found.verdicts[row, column] == one.verdict


def test_words_counts_and_states_equal_single_evaluations_too() -> None:
    texts = [
        "prism.material in PMMA, sapphire",
        "readout.bits at 10, 14",
        "states.water.touching in water, ethanol",
        "prism.crosstalk at 1 %, 5 %",
    ]
    found = sweep(demo("acid_bench_fluoropolymer"), texts)
    assert found.shape == (2, 2, 2, 2)
    one = single(
        "acid_bench_fluoropolymer",
        {
            ("prism", "material"): "sapphire",
            ("readout", "bits"): 14,
            ("states", "water", "touching"): "ethanol",
            ("prism", "crosstalk"): "1 %",
        },
    )
    for name, metric in found.metrics.items():
        assert metric.values[1, 1, 1, 0] == pytest.approx(one.metrics[name].value, rel=1e-9), name


def test_numbers_of_a_contact_run_as_an_array() -> None:
    found = sweep(demo("oil_tank_overfill"), ["states.drained film.touching.thickness from 1 um to 100 um in 3 log"])
    thick = {"what": "film", "liquid": "heating oil", "thickness": "100 um", "spread": "exponential"}
    one = single("oil_tank_overfill", {("states", "drained film", "touching"): thick})
    assert found.signals["drained film"][2] == pytest.approx(
        next(s.signal for s in one.states if s.name == "drained film")
    )


def test_a_perimeter_plate_sweeps_like_its_single_evaluations() -> None:
    found = sweep(demo("cooktop_strip"), ["plate.thickness at 3 mm, 5 mm"])
    one = single("cooktop_strip", {("plate", "thickness"): "5 mm"})
    assert found.metrics["immunity_ratio"].values[1] == pytest.approx(one.metrics["immunity_ratio"].value, rel=1e-9)


def same(one: Any, other: Any) -> bool:
    pairs = [(metric.values, other.metrics[name].values) for name, metric in one.metrics.items()]
    pairs += [(values, other.signals[state]) for state, values in one.signals.items()]
    return all(np.array_equal(a, b, equal_nan=True) for a, b in pairs)


TEXTS = [f"prism.base from 6 mm to 12 mm in {CHUNK + 9}", "prism.material in PMMA, polysulfone"]


@pytest.mark.parametrize("workers", [1, 2, 3])
def test_threads_give_the_same_numbers(workers: int) -> None:
    alone = sweep(demo("dewar_ladder_silica"), TEXTS)
    with ThreadPoolExecutor(workers) as executor:
        assert same(alone, sweep(demo("dewar_ladder_silica"), TEXTS, executor=executor))


def test_processes_give_the_same_numbers() -> None:
    alone = sweep(demo("acid_bench_fluoropolymer"), TEXTS)
    executor: Executor
    with ProcessPoolExecutor(2, mp_context=get_context("spawn")) as executor:
        assert same(alone, sweep(demo("acid_bench_fluoropolymer"), TEXTS, executor=executor))


def test_an_interrupt_keeps_what_is_done() -> None:
    def stop(done: int, total: int) -> None:
        if done >= CHUNK:
            raise KeyboardInterrupt

    found = sweep(demo("dewar_ladder_silica"), TEXTS, progress=stop)
    assert not found.finished
    assert int(np.sum(found.done)) == CHUNK
    assert np.all(np.isfinite(found.metrics["worst_ratio"].values[found.done]))
    assert np.all(np.isnan(found.metrics["worst_ratio"].values[~found.done]))
    assert set(found.verdicts[~found.done]) == {""}


def test_a_requirement_is_just_met_where_single_evaluations_say_so() -> None:
    found = sweep(demo("dewar_ladder_silica"), ["prism.crosstalk from 1 % to 20 % in 60"])
    (place,) = crossings(found, 0)
    assert place.label == "worst ratio"
    assert not place.rises
    at = single("dewar_ladder_silica", {("prism", "crosstalk"): f"{place.value * 100!r} %"})
    assert at.metrics["worst_ratio"].value == pytest.approx(10, rel=1e-3)
    (span,) = spans(found, 0)
    assert span.low == pytest.approx(0.01)
    assert span.high == pytest.approx(place.value)
    assert span.opens == (True, False)


def test_zero_places_are_interpolated_and_never_across_a_gap() -> None:
    at = np.array([0.0, 1.0, 2.0, 3.0])
    assert zero_places(at, np.array([-1.0, 3.0, 1.0, -1.0])) == [(0.25, True), (2.5, False)]
    assert zero_places(at, np.array([-1.0, np.nan, 1.0, 2.0])) == []


def test_what_a_sweep_cannot_judge_is_open_and_never_a_pass(tmp_path: Path) -> None:
    text = (DEMOS / "dewar_ladder_silica.toml").read_text()
    file = tmp_path / "corners.toml"
    file.write_text(text.replace('metric = "worst_ratio"\n', 'metric = "worst_ratio"\nover = "corners"\n'))
    found = sweep(load_design(file), ["prism.base at 6 mm, 7 mm"])
    assert set(found.verdicts) == {"open"}
    assert "corners" in next(limit.why for limit in found.limits if limit.why)
    console = sweep(demo("theatre_console"), ["readout.bits at 12, 16"])
    assert "pass" not in console.verdicts
    assert any("map" in limit.why for limit in console.limits)


def test_an_unknown_metric_is_refused_with_the_nearest() -> None:
    with pytest.raises(UserMistake, match="worst_ratio"):
        sweep(demo("dewar_ladder_silica"), ["prism.base at 6 mm"], metrics=["wrost_ratio"])
