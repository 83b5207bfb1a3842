"""What the README shows is run."""

from __future__ import annotations

import re
import shlex
from pathlib import Path
from typing import Any

import pytest

from outcouple import evaluate, load_design
from outcouple.cli.main import COMMANDS
from outcouple.design import parse_design

ROOT = Path(__file__).parents[2]
README = (ROOT / "README.md").read_text(encoding="utf-8")
INDENTED = [
    "\n".join(line[4:] for line in block.splitlines() if line.startswith("    ") or not line).strip("\n")
    for block in re.findall(r"(?:^(?:    [^\n]*|)\n)+", README, flags=re.MULTILINE)
]


def block_with(text: str) -> str:
    """The one indented block that holds a text."""
    (found,) = [block for block in INDENTED if text in block]
    return found


def test_the_first_paragraph_states_the_job():
    first = README.split("\n\n")[1]
    assert first.startswith("outcouple is a design calculator for sensors that work by total internal reflection")


def test_two_set_up_commands_and_no_more():
    commands = [block for block in INDENTED if "pip install" in block]
    assert len(commands) == 2
    assert all(len(command.splitlines()) == 1 for command in commands)


def test_the_first_design_runs_and_is_ten_lines_or_so():
    text = block_with('geometry = "prism-switch"')
    design = parse_design(text, file="tank.toml")
    outcome = evaluate(design)
    assert outcome.verdict in ("pass", "fail")
    assert outcome.states


def test_the_python_lines_run(monkeypatch: pytest.MonkeyPatch):
    monkeypatch.chdir(ROOT)
    lines = block_with("from outcouple import")
    space: dict[str, Any] = {}
    exec(lines, space)
    again = evaluate(load_design("demo_configs/oil_tank_overfill.toml"))
    assert eval(lines.splitlines()[-1], space) == (again.verdict, again.metrics["worst_ratio"].value)


def rows() -> list[str]:
    """Commands of the README's table, without `outcouple`."""
    return [shlex.split(row)[1] for row in re.findall(r"^\| `(outcouple [^`]+)`", README, flags=re.MULTILINE)]


def test_the_table_lists_every_command():
    assert sorted(set(rows())) == sorted(COMMANDS)
