"""Tables for spreadsheets and manifests: units in the header, nothing that runs as a formula, hashes of the inputs."""

from __future__ import annotations

import csv
import io
import json
from pathlib import Path

import pytest

from outcouple.design import load_design, parse_design
from outcouple.report.cells import csv_text, digest
from outcouple.report.sweep_files import sweep_manifest, sweep_rows
from outcouple.report.sweep_page import sweep_page
from outcouple.report.sweep_text import format_sweep
from outcouple.studies import sweep

DEMO = Path(__file__).parents[2] / "demo_configs" / "dewar_ladder_silica.toml"


def read(text: str) -> list[list[str]]:
    return list(csv.reader(io.StringIO(text)))


@pytest.mark.parametrize("start", ["=", "+", "-", "@", "\t", "\r"])
def test_no_text_begins_like_a_formula(start: str) -> None:
    rows = read(csv_text([[f"{start}cmd|' /C calc'!A0", -1.5, 3, None, float("nan"), float("inf"), float("-inf")]]))
    assert rows[0][0].startswith("'")
    assert rows[0][1:] == ["-1.5", "3", "", "", "inf", "'-inf"]


def test_quotes_commas_and_lines_stay_in_their_cell() -> None:
    text = 'a "b", c\nd'
    assert read(csv_text([[text, "x"]])) == [[text, "x"]]


def test_states_with_hostile_names_are_harmless_in_the_header() -> None:
    text = DEMO.read_text().replace('name = "cold vapour"', 'name = "=1+1"')
    found = sweep(parse_design(text), ["states.=1+1.touching in air, nitrogen vapour"])
    cells = [cell for row in read(csv_text(sweep_rows(found))) for cell in row]
    assert any("=1+1" in cell for cell in cells)
    assert not any(cell.startswith(("=", "+", "@")) for cell in cells)


def test_every_column_has_its_unit_and_every_point_its_row() -> None:
    found = sweep(load_design(DEMO), ["prism.base from 4 mm to 8 mm in 3", "prism.material in PMMA, sapphire"])
    head, *rows = read(csv_text(sweep_rows(found)))
    assert head[:2] == ["prism.base (mm)", "prism.material"]
    assert "dry_angle_margin (deg)" in head
    assert "reading [cold vapour] (uA)" in head
    assert head[-2:] == ["dangers", "verdict"]
    assert len(rows) == 6
    assert [row[0] for row in rows] == ["4", "4", "6", "6", "8", "8"]
    angle = float(rows[0][head.index("dry_angle_margin (deg)")])
    assert angle == pytest.approx(found.metrics["dry_angle_margin"].values[0, 0] * 180 / 3.141592653589793)


def test_the_manifest_is_plain_data_with_a_hash_of_the_inputs() -> None:
    one = sweep_manifest(sweep(load_design(DEMO), ["prism.base at 4 mm, 5 mm"]))
    same = sweep_manifest(sweep(load_design(DEMO), ["prism.base at 4 mm, 5 mm"]))
    other = sweep_manifest(sweep(load_design(DEMO), ["prism.base at 4 mm, 6 mm"]))
    changed = sweep_manifest(sweep(parse_design(DEMO.read_text() + "\n# a remark"), ["prism.base at 4 mm, 5 mm"]))
    assert json.loads(json.dumps(one, allow_nan=False)) == one
    assert one["schema"] == 1
    assert one["finished"]
    assert one["inputs_sha256"] == same["inputs_sha256"] == changed["inputs_sha256"]
    assert one["inputs_sha256"] != other["inputs_sha256"]
    assert one["axes"][0]["values"] == [0.004, 0.005]
    assert one["metrics"]["dry_angle_margin"]["unit"] == "rad"


def test_a_digest_does_not_depend_on_the_order_of_keys() -> None:
    assert digest({"a": 1, "b": [1, 2]}) == digest({"b": [1, 2], "a": 1}) != digest({"a": 1, "b": [2, 1]})


def test_the_text_says_where_all_is_met_and_where_just() -> None:
    text = format_sweep(sweep(load_design(DEMO), ["prism.crosstalk from 1 % to 20 % in 60"]))
    assert "all requirements are met at" in text
    assert "worst ratio: met below prism.crosstalk" in text
    assert "every 2nd" not in text
    assert "of 60; --csv holds all" in text


def test_points_that_pass_in_danger_are_marked() -> None:
    """A saturated stage hides what lies beyond full scale; the requirements of the strip do not see it."""
    found = sweep(load_design(DEMO.parent / "cooktop_strip.toml"), ["emitter.power at 5 mW, 60 mW"])
    assert found.dangers[0] == ""
    assert "saturat" in found.dangers[1]
    lines = format_sweep(found).splitlines()
    assert next(line for line in lines if line.startswith("  60 mW")).endswith("!")
    assert not next(line for line in lines if line.startswith("  5 mW")).endswith("!")


@pytest.mark.parametrize(
    "axes",
    [
        ["prism.crosstalk from 1 % to 20 % in 5 log"],
        ["prism.material in PMMA, sapphire"],
        ["prism.crosstalk from 1 % to 20 % in 4 log", "prism.base from 4 mm to 8 mm in 3"],
        [
            "prism.base from 4 mm to 8 mm in 3",
            "prism.material in PMMA, sapphire",
            "emitter.power from 1 mW to 9 mW in 4",
        ],
    ],
)
def test_pages_hold_all_they_need(axes: list[str]) -> None:
    found = sweep(load_design(DEMO), axes)
    page = sweep_page(found)
    assert "Plotly.newPlot" in page
    assert "NaN" not in page[page.index('id="pictures"') :]
