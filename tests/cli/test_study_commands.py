"""vary, levers and compare as a user calls them."""

from __future__ import annotations

import csv
import json
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

from outcouple.cli.main import main

DEMOS = Path(__file__).parents[2] / "demo_configs"
SILICA = DEMOS / "dewar_ladder_silica.toml"
SAPPHIRE = DEMOS / "dewar_ladder_sapphire.toml"


def run(capsys, *args):
    """(exit code, stdout, stderr) of one call."""
    with pytest.raises(SystemExit) as left:
        main([str(arg) for arg in args])
    captured = capsys.readouterr()
    return left.value.code, captured.out, captured.err


def test_vary_writes_a_table_with_its_manifest_and_a_page(capsys, tmp_path):
    table, page = tmp_path / "t.csv", tmp_path / "t.html"
    axes = ["prism.crosstalk from 1 % to 20 % in 5", "prism.material in PMMA, fused silica"]
    code, out, err = run(capsys, "vary", SILICA, *axes, "--csv", table, "--out", page)
    assert code == 0
    assert "all requirements are met at" in out
    assert err.count("wrote") == 3
    rows = list(csv.reader(table.read_text().splitlines()))
    manifest = json.loads((tmp_path / "t.csv.json").read_text())
    assert len(rows) == 1 + manifest["points"] == 11
    assert page.read_text().startswith("<!doctype html>")
    assert {path.name for path in tmp_path.iterdir()} == {"t.csv", "t.csv.json", "t.html"}


def test_vary_leaves_with_3_where_no_point_passes(capsys):
    code, out, _ = run(capsys, "vary", SAPPHIRE, "prism.base from 4 mm to 8 mm in 3", "--json")
    assert code == 3
    assert json.loads(out)["points_passing"] == 0


@pytest.mark.parametrize(
    ("args", "words"),
    [
        ((), "say what varies"),
        (("prism.bse at 4 mm",), "prism.base"),
        (("prism.base at 4 mm", "--csv", "table.txt"), "must end in .csv"),
        (("prism.base at 4 mm", "--out", "page.pdf"), "must end in .html"),
        (("prism.base at 4 mm", "--metric", "speed"), "no such metric"),
        (("prism.base at 4 mm", "--csv", "/nowhere/t.csv"), "cannot be written"),
    ],
)
def test_bad_input_is_told_without_a_traceback(capsys, args, words):
    code, _, err = run(capsys, "vary", SILICA, *args)
    assert code == 2
    assert words in err
    assert "Traceback" not in err


def test_workers_change_nothing_in_the_answer(capsys):
    args = ("vary", SILICA, "prism.crosstalk from 1 % to 20 % in 70", "--json")
    assert run(capsys, *args)[1] == run(capsys, *args, "--workers", "2")[1]


def test_levers_rank_and_write(capsys, tmp_path):
    code, out, _ = run(capsys, "levers", SILICA, "--csv", tmp_path / "l.csv", "--out", tmp_path / "l.html")
    assert code == 0
    assert out.index("prism.face_angle") < out.index("emitter.wavelength")
    assert (tmp_path / "l.csv").read_text().startswith("input,unit,value")
    code, out, _ = run(capsys, "levers", SAPPHIRE, "--json")
    assert code == 3
    assert json.loads(out)["verdict"] == "fail"


def test_compare_tells_who_misses_and_leaves_with_3(capsys, tmp_path):
    files = (SILICA, SAPPHIRE)
    code, out, _ = run(capsys, "compare", *files, "--csv", tmp_path / "c.csv", "--out", tmp_path / "c.html")
    assert code == 3
    assert "dewar_ladder_sapphire misses by most" in out.replace("\n", " ")
    assert len((tmp_path / "c.csv").read_text().splitlines()) == 1 + 2 * 4
    code, out, _ = run(capsys, "compare", *files, "--no-rescue", "--json")
    assert [one["verdict"] for one in json.loads(out)["variants"]] == ["pass", "fail"]
    code, _, err = run(capsys, "compare", SILICA)
    assert code == 2
    assert "two designs" in err
    assert run(capsys, "compare", SILICA, SILICA, "--no-rescue")[0] == 0


def test_the_schema_is_printed(capsys):
    code, out, _ = run(capsys, "validate", SILICA, "--schema")
    assert code == 0
    assert json.loads(out)["properties"]["geometry"]["const"] == "prism-switch"


def test_ctrl_c_keeps_what_is_done_and_says_so(tmp_path):
    table = tmp_path / "t.csv"
    axes = ["prism.base from 4 mm to 8 mm in 100", "emitter.half_angle from 1 deg to 8 deg in 200"]
    command = [sys.executable, "-m", "outcouple", "vary", str(SILICA), *axes, "--csv", str(table)]
    begun = subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True, env={**os.environ})
    assert begun.stderr is not None
    progress = begun.stderr.readline()
    assert "about" in progress
    time.sleep(0.2)
    begun.send_signal(signal.SIGINT)
    out, err = begun.communicate(timeout=60)
    assert begun.returncode == 130
    assert "interrupted" in err
    assert "Traceback" not in err
    assert "more were not run" in out
    rows = len(table.read_text().splitlines()) - 1
    manifest = json.loads((tmp_path / "t.csv.json").read_text())
    assert 0 < rows == manifest["points_done"] < manifest["points"] == 20000
    assert not manifest["finished"]
