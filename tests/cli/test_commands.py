"""The commands as a user calls them: answers, exit codes, messages, and no traceback for a mistake."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

from outcouple.cli.main import COMMANDS, main

ROOT = Path(__file__).parents[2]
TANK = ROOT / "demo_configs" / "oil_tank_overfill.toml"


def run(capsys, *args):
    """(exit code, stdout, stderr) of one call."""
    with pytest.raises(SystemExit) as left:
        main([str(arg) for arg in args])
    captured = capsys.readouterr()
    return left.value.code, captured.out, captured.err


def test_alone_it_prints_three_next_commands(capsys):
    code, out, _ = run(capsys)
    assert code == 0
    assert out.count("  outcouple ") == 3


@pytest.mark.parametrize("command", [*COMMANDS])
def test_every_command_has_help(capsys, command):
    code, out, _ = run(capsys, command, "--help")
    assert code == 0
    assert out.startswith(f"Usage: outcouple {command}")


def test_budget_answers_like_a_colleague(capsys):
    code, out, _ = run(capsys, "budget", TANK)
    lines = out.splitlines()
    assert code == 0
    assert lines[1].startswith("PASS")
    assert out.rstrip().endswith("Verdict: PASS")
    for heading in ("Requirements", "States", "Where the light goes", "Noise power", "Cautions"):
        assert heading in out


def test_budget_json_holds_what_is_promised(capsys):
    code, out, _ = run(capsys, "budget", TANK, "--json")
    answer = json.loads(out)
    assert code == 0
    assert answer["verdict"] == "pass"
    promised = {
        "design",
        "geometry",
        "verdict",
        "metrics",
        "states",
        "stages",
        "requirements",
        "noise",
        "cautions",
        "version",
    }
    assert promised <= set(answer)
    assert {"value", "unit", "label", "scope", "at"} <= set(answer["metrics"]["worst_ratio"])
    assert {"name", "expect", "signal", "unit", "channels", "metrics", "stages"} <= set(answer["states"][0])
    assert {"label", "factor", "power", "unit"} <= set(answer["stages"][0])
    assert {"metric", "limit", "value", "margin", "verdict"} <= set(answer["requirements"][0])
    assert {"code", "text"} <= set(answer["cautions"][0])
    assert abs(sum(answer["noise"].values()) - 1) < 1e-9


def test_budget_exits_with_3_unless_all_is_met(capsys, tmp_path):
    missed = tmp_path / "missed.toml"
    missed.write_text(
        TANK.read_text().replace('metric = "worst_ratio"\nat_least = 10', 'metric = "worst_ratio"\nat_least = 1000')
    )
    assert run(capsys, "budget", missed)[0] == 3
    none = tmp_path / "none.toml"
    none.write_text(TANK.read_text().split("[[requirements]]")[0])
    code, out, _ = run(capsys, "budget", none)
    assert code == 3
    assert "NO VERDICT" in out


@pytest.mark.parametrize(
    ("change", "message"),
    [
        (('half_angle = "15 deg"', 'half_angle = "15"'), "emitter.half_angle"),
        (('base = "8 mm"', 'base = "nan mm"'), "prism.base"),
        (('base = "8 mm"', 'base = "8 deg"'), "prism.base"),
        (('base = "8 mm"', 'bse = "8 mm"'), "prism.bse"),
        (("[prism]", "[prisma]"), "prisma"),
        (('name = "drained film"', 'name = "dry"'), "states[dry].name"),
        (('metric = "worst_ratio"', 'metric = "wrost_ratio"'), "worst_ratio"),
        (('touching = "heating oil"', 'touching = "heating oyl"'), "heating oyl"),
        (('material = "polysulfone"', 'material = "polysulphone"'), "polysulphone"),
        (("[prism]", "[prism"), "not TOML"),
    ],
)
def test_a_mistake_is_named_with_its_place_and_no_traceback(tmp_path, change, message):
    file = tmp_path / "tank.toml"
    file.write_text(TANK.read_text().replace(*change, 1))
    done = subprocess.run(
        [sys.executable, "-m", "outcouple", "budget", file], capture_output=True, text=True, check=False
    )
    assert done.returncode == 2, done.stdout
    assert "Traceback" not in done.stderr
    assert message in done.stderr
    assert f"{file}:" in done.stderr
    assert done.stdout == ""


def test_all_mistakes_are_told_in_one_go(capsys, tmp_path):
    file = tmp_path / "tank.toml"
    text = TANK.read_text().replace('base = "8 mm"', 'base = "8"').replace('power = "8 mW"', 'power = "8 mV"')
    file.write_text(text.replace('expect = "present"', 'expect = "persent"', 1))
    code, _, err = run(capsys, "budget", file)
    assert code == 2
    assert len(err.strip().splitlines()) == 3
    assert "unit missing" in err


def test_a_file_that_is_not_there(capsys):
    code, _, err = run(capsys, "budget", "nowhere.toml")
    assert code == 2
    assert "nowhere.toml" in err


def test_new_writes_a_design_that_runs_and_never_overwrites(capsys, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    code, out, _ = run(capsys, "new", "overfill")
    assert code == 0
    assert "outcouple budget overfill.toml" in out
    assert run(capsys, "budget", "overfill.toml")[0] in (0, 3)
    code, _, err = run(capsys, "new", "overfill")
    assert code == 2
    assert "there already" in err
    code, _, err = run(capsys, "new", "overfil")
    assert code == 2
    assert "overfill" in err


def test_list_shows_materials_at_a_wavelength_and_like_an_index(capsys):
    code, out, _ = run(
        capsys, "list", "materials", "--at", "850 nm", "--temperature", "60 degC", "--like", "1.47", "--json"
    )
    rows = json.loads(out)
    assert code == 0
    assert abs(rows[0]["index"] - 1.47) < 0.01
    assert all(row["source"] for row in rows)
    assert run(capsys, "list", "materials", "--at", "850 parsec")[0] == 2


def test_budget_imports_nothing_slow():
    """No scipy.optimize, scipy.stats, scipy.special, plotly or dash on the way of the main job."""
    slow = ("scipy.optimize", "scipy.stats", "scipy.special", "plotly", "dash", "rich", "pandas")
    code = (
        "import sys\nfrom outcouple.cli import main\n"
        f"sys.argv = ['outcouple', 'budget', {str(TANK)!r}]\n"
        "try:\n    main()\nexcept SystemExit:\n    pass\n"
        f"print([name for name in {slow!r} if name in sys.modules], file=sys.stderr)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stderr.strip() == "[]"
