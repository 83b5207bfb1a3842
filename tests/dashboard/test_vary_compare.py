"""Vary and Compare without a browser: sentences, points taken over, pins, exports."""

from __future__ import annotations

import tomllib

import pytest

from outcouple.design import parse_design
from outcouple.errors import UserMistake
from outcouple.report.figures import DARK, LIGHT
from outcouple.studies import sweep
from outcouple_dashboard import work
from outcouple_dashboard.documents import MOST_PINS, document
from outcouple_dashboard.pages import compare, vary
from outcouple_dashboard.pictures import WORST, clicked_at, sweep_picture
from outcouple_dashboard.ranges import find_varying, span_of

from .conftest import DEMOS


def swept(tank, *axes):
    return sweep(parse_design(tank), list(axes))


def test_every_number_of_the_design_can_run(tank):
    design = parse_design(tank)
    one = find_varying(design, "states.drained film.touching.thickness")
    assert one is not None
    assert one.entry.text == "30 um"
    assert span_of(one) == ("15 um", "60 um")
    assert span_of(find_varying(design, "environment.temperature")) == ("-10 degC", "50 degC")
    axes = vary.axes_of(design, [("prism.base", "4 mm", "16 mm"), (None, "", "")])
    assert axes == ["prism.base from 4 mm to 16 mm in 33"]


def test_what_every_state_sets_for_itself_does_not_run():
    design = parse_design((DEMOS / "force_cell.toml").read_text(encoding="utf-8"))
    assert find_varying(design, "gap.distance") is None
    assert find_varying(design, "gap.roughness") is not None


def test_a_point_of_a_curve_is_taken_over(app, tank):
    found = swept(tank, "prism.crosstalk from 1 % to 40 % in 5")
    click = {"points": [{"curveNumber": 1, "pointNumber": 3}]}
    at = clicked_at(found, click)
    assert at == [3]
    point = vary.picked_at(found, at, WORST)
    assert point["values"] == {"prism.crosstalk": "30.25 %"}
    assert "missed" in point["told"]
    new = vary.take_over(app.desk, tank, point["values"])
    assert tomllib.loads(new)["prism"]["crosstalk"] == "30.25 %"
    columns, rows = vary.points_of(found, WORST)
    assert [row["verdict"] for row in rows][:1] == ["all met"]
    assert {column["field"] for column in columns} <= set(rows[0])


def test_a_point_of_a_map_is_taken_over(app, tank):
    axes = ["prism.base from 6 mm to 10 mm in 4", "states.drained film.touching.thickness from 10 um to 50 um in 3"]
    found = swept(tank, *axes)
    figure = sweep_picture(found, WORST, [0.008, 30e-6], LIGHT)
    heat = figure["data"][0]
    assert (len(heat["z"]), len(heat["z"][0])) == (len(heat["y"]), len(heat["x"])) == (3, 4)
    assert figure["data"][-1]["marker"]["symbol"] == "diamond"
    assert (figure["data"][-1]["x"], figure["data"][-1]["y"]) == ([8.0], [pytest.approx(30.0)])
    at = clicked_at(found, {"points": [{"curveNumber": 0, "pointNumber": [2, 1]}]})
    assert at == [1, 2]
    data = tomllib.loads(vary.take_over(app.desk, tank, vary.picked_at(found, at, WORST)["values"]))
    assert float(data["prism"]["base"].split()[0]) == pytest.approx(7.3333, abs=1e-4)
    assert data["states"][1]["touching"]["thickness"] == "50 um"


@pytest.mark.parametrize(
    "click",
    [None, {}, {"points": []}, *({"points": [row]} for row in ({}, {"pointNumber": 99}, {"pointNumber": [0, 0]}))],
)
def test_a_click_beside_the_points_is_nothing(tank, click):
    assert clicked_at(swept(tank, "prism.base from 6 mm to 10 mm in 3"), click) is None


def test_the_present_design_stands_in_the_picture(tank):
    figure = sweep_picture(swept(tank, "prism.base from 6 mm to 10 mm in 3"), "worst_ratio", [0.008], DARK)
    assert [shape["x0"] for shape in figure["layout"]["shapes"] if shape.get("label")] == [8.0]


def test_words_run_over_a_list(app, tank):
    design = parse_design(tank)
    one = find_varying(design, "prism.material")
    assert not one.numeric
    axes = vary.axes_of(design, [("prism.material", "polysulfone, polycarbonate", "")])
    found = sweep(design, axes)
    assert clicked_at(found, {"points": [{"curveNumber": 0, "pointNumber": 1}]}) == [1]
    new = vary.take_over(app.desk, tank, vary.picked_at(found, [1], WORST)["values"])
    assert tomllib.loads(new)["prism"]["material"] == "polycarbonate"


def test_pins_have_names_of_their_own_and_an_end(app, tank):
    doc = document(tank)
    pins = compare.pinned(app.desk, [], doc, " first ")
    assert [pin["name"] for pin in pins] == ["first"]
    with pytest.raises(UserMistake, match="there is a variant called 'first' already"):
        compare.pinned(app.desk, pins, doc, "first")
    for at in range(MOST_PINS - 1):
        pins = compare.pinned(app.desk, pins, doc, f"more {at}")
    with pytest.raises(UserMistake, match="8 variants are pinned"):
        compare.pinned(app.desk, pins, doc, "one too many")


def test_variants_side_by_side(tank):
    leaky = tank.replace('crosstalk = "2 %"', 'crosstalk = "30 %"')
    parts = list(
        work.compare(
            lambda share, text: None, names=["1.5 thick", "leaky"], texts=[tank, leaky], same=False, maps=False
        )
    )
    found, last = parts[0], parts[-1]
    assert [one.label for one in found.variants] == ["1.5 thick", "leaky"]
    assert [one.verdict for one in found.variants] == ["pass", "fail"]
    assert last.variants[1].rescue is not None
    assert [part[0] for part in parts[1:-1]] == ["1.5 thick", "leaky"]
    drawn = compare.body(last, parts[1:-1], "dark", False)
    text = str(drawn)
    for piece in ("leaky misses by most", "prism.crosstalk", "What differs", "Rescue:", "compare-responses"):
        assert piece in text


def test_nothing_to_compare_is_said():
    assert "Pin a variant" in str(compare.body(None, [], "light", False))
