"""Comparisons: who misses by most, dominated variants, what is not known, and single changes that rescue."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from outcouple.design import Design, load_design, parse_design
from outcouple.errors import UserMistake
from outcouple.evaluation import evaluate
from outcouple.evaluation.advice import changeable
from outcouple.report.compare_files import comparison_data, comparison_rows
from outcouple.report.compare_page import comparison_page
from outcouple.report.compare_text import format_comparison
from outcouple.studies.compare import Comparison, compare
from outcouple.studies.rescue import rescue
from outcouple.studies.sweep import sweep

DEMOS = Path(__file__).parents[2] / "demo_configs"
ACID = ["acid_bench_fluoropolymer", "acid_bench_silica_skin"]
DEWAR = ["dewar_ladder_silica", "dewar_ladder_sapphire"]


def demo(name: str) -> Design:
    return load_design(DEMOS / f"{name}.toml")


@pytest.fixture(scope="module")
def acid() -> Comparison:
    return compare([demo(name) for name in ACID])


@pytest.fixture(scope="module")
def dewar() -> Comparison:
    return compare([demo(name) for name in DEWAR])


def test_it_says_at_once_who_misses_by_most_and_why(acid: Comparison, dewar: Comparison) -> None:
    """Sapphire in liquid nitrogen stays beyond its critical angle (asin(1.2/1.75) = 43 deg, handbook indices from
    memory), so the wet face reflects; solid fluoropolymer in air does not reach its own (asin(1/1.3) = 50 deg)."""
    first = format_comparison(acid, width=400).splitlines()[0]
    assert "acid_bench_fluoropolymer misses by most: dry angle margin" in first
    text = format_comparison(dewar, width=400)
    assert "dewar_ladder_sapphire misses by most: margin in sigma 0" in text.splitlines()[0]
    assert "liquid nitrogen cannot be told from dry" in text
    assert "limited by what the faces still reflect" in text


def test_verdicts_and_values_are_those_of_single_evaluations(acid: Comparison) -> None:
    for at, name in enumerate(ACID):
        one = evaluate(demo(name), advice=False, views=False)
        assert acid.variants[at].verdict == one.verdict
        for row in acid.rows:
            assert row.cells[at].value == pytest.approx(one.metrics[row.metric.name].value, rel=1e-9)


def test_dominated_variants_are_named(acid: Comparison, dewar: Comparison) -> None:
    assert acid.variants[0].dominated_by == ("acid_bench_silica_skin",)
    assert acid.variants[1].dominated_by == ()
    assert [one.dominated_by for one in dewar.variants] == [(), ()], "sapphire keeps the better dry angle margin"


def test_variants_under_other_conditions_do_not_dominate_each_other() -> None:
    found = compare([demo("acid_bench_fluoropolymer"), demo("dewar_ladder_silica")], rescues=False)
    assert all(not one.dominated_by for one in found.variants)


def test_differences_are_told_and_conditions_can_be_made_the_same(dewar: Comparison) -> None:
    names = {one.name: one for one in dewar.differences}
    assert names["prism.material"].texts == ("fused silica", "sapphire")
    assert not names["prism.material"].condition
    assert names["decision.fault_low"].condition
    frozen = compare([demo(name) for name in DEWAR], same_conditions=True, rescues=False)
    assert [one.name for one in frozen.differences] == ["prism.material"]
    assert all(cell.asked for row in frozen.rows for cell in row.cells)


def test_what_is_not_asked_is_shown_and_not_judged(dewar: Comparison) -> None:
    row = next(row for row in dewar.rows if row.metric.name == "dead_emitter_unnoticed")
    assert [cell.asked for cell in row.cells] == [True, False]
    assert row.cells[1].value is not None
    assert "not asked" in format_comparison(dewar)


def test_what_a_sensor_does_not_have_is_said_and_never_a_pass() -> None:
    found = compare([demo("dewar_ladder_silica"), demo("theatre_console")], rescues=False)
    row = next(row for row in found.rows if row.metric.name == "dry_angle_margin")
    assert row.cells[1].value is None
    assert "no such metric" in row.cells[1].why
    console = found.variants[1]
    assert console.verdict != "pass"
    chords = next(row for row in found.rows if row.metric.name == "least_chords")
    assert chords.cells[1].status == "open"
    assert "map" in chords.cells[1].why
    assert not console.dominated_by


def test_requirements_over_corners_are_judged_there_and_open_without_tolerances() -> None:
    text = (DEMOS / "dewar_ladder_silica.toml").read_text()
    over = text.replace(
        'metric = "worst_ratio"\nat_least = 10', 'metric = "worst_ratio"\nat_least = 60\nover = "corners"'
    )
    with_limits = parse_design(
        over + '\n[tolerance]\n"prism.crosstalk" = { low = "0.5 %", high = "2 %" }\n', file="a.toml"
    )
    found = compare([parse_design(over, file="b.toml"), with_limits], rescues=False)
    row = next(row for row in found.rows if row.over == "corners")
    assert [cell.verdict for cell in row.cells] == ["open", "fail"]
    assert [one.verdict for one in found.variants] == ["open", "fail"]
    corner = row.cells[1].corner
    assert corner is not None
    assert corner.where == {"prism.crosstalk": "high"}
    assert "all 2 corners of 1 groups" in format_comparison(found).replace("\n  ", " ")


@pytest.mark.parametrize("name", ["acid_bench_fluoropolymer", "dewar_ladder_sapphire"])
def test_no_single_change_rescues_these_and_a_dense_sweep_agrees(name: str) -> None:
    """The losers of both comparisons: their material is wrong, and no number mends it."""
    design = demo(name)
    found = rescue(design)
    assert found.found == ()
    assert found.searched == len(changeable(design))
    for text in (
        "prism.face_angle from 20 deg to 70 deg in 120",
        "emitter.wavelength from 400 nm to 1100 nm in 60",
        "prism.crosstalk from 0 % to 20 % in 40",
        "layout.emitter_position from -6 mm to 6 mm in 60",
    ):
        assert "pass" not in sweep(design, [text]).verdicts, text


def test_the_smallest_change_that_rescues_is_found_where_single_evaluations_turn() -> None:
    """Crosstalk of 15 % leaves too small a ratio; bisection on single evaluations finds where it is enough."""
    text = (DEMOS / "dewar_ladder_silica.toml").read_text()

    def passes(crosstalk: float) -> bool:
        data = text.replace('crosstalk = "1 %"', f'crosstalk = "{crosstalk!r} %"')
        return evaluate(parse_design(data), advice=False, views=False).verdict == "pass"

    low, high = 1.0, 15.0
    assert passes(low)
    assert not passes(high)
    for _ in range(20):
        middle = (low + high) / 2
        low, high = (middle, high) if passes(middle) else (low, middle)
    found = rescue(parse_design(text.replace('crosstalk = "1 %"', 'crosstalk = "15 %"')))
    change = next(flip for flip in found.found if flip.input.name == "prism.crosstalk")
    assert change.value is not None
    assert change.value * 100 <= low
    assert change.value * 100 == pytest.approx(low, rel=0.05)
    assert passes(change.value * 100)
    relatives = [flip.relative for flip in found.found]
    assert relatives == sorted(relatives)


def test_a_blind_sensor_is_no_rescue() -> None:
    """An emitter beside its plate leaves nothing to confuse, so both requirements of the strip would be met by it."""
    design = demo("cooktop_strip")
    blind = sweep(design, ["emitters.offset at 5 mm"])
    assert set(blind.verdicts) == {"pass"}
    assert blind.metrics["margin_sigma"].values[0] < 0
    found = rescue(design)
    assert found.few, "a plate with many channels is searched in longer steps, and says so"
    assert "emitters.offset" not in [flip.input.name for flip in found.found]


def test_tables_and_data_hold_every_variant_and_requirement(acid: Comparison) -> None:
    rows = comparison_rows(acid)
    assert len(rows) == 1 + 2 * len(acid.rows)
    data = comparison_data(acid)
    assert [one["verdict"] for one in data["variants"]] == ["fail", "pass"]
    assert data["variants"][0]["misses_by_most"] == "dry_angle_margin"
    assert data["variants"][0]["rescue"]["found"] == []


def test_the_page_escapes_what_users_wrote_and_fetches_nothing(acid: Comparison) -> None:
    text = (DEMOS / "acid_bench_fluoropolymer.toml").read_text().replace('name = "water"', 'name = "<b>water"')
    page = comparison_page(
        compare([parse_design(text, file="<i>.toml"), demo("acid_bench_silica_skin")], rescues=False)
    )
    body = page[page.index("</head>") :]
    assert "<i>" not in body
    assert "<b>water" not in body
    assert "src=" not in body.partition("<script")[0]


def test_one_design_is_no_comparison() -> None:
    with pytest.raises(UserMistake, match="two designs"):
        compare([demo("dewar_ladder_silica")])


def test_margins_are_in_units_of_their_limits(acid: Comparison) -> None:
    row = next(row for row in acid.rows if row.metric.name == "dry_angle_margin")
    value = row.cells[0].value
    assert value is not None
    assert row.cells[0].margin == pytest.approx((value - np.radians(1)) / np.radians(1))
