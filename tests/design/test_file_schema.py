"""The schema of design files, checked by an independent validator (package jsonschema, draft 2020-12)."""

from __future__ import annotations

import tomllib
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from outcouple.design import load_design
from outcouple.design.file_schema import file_schema
from outcouple.hooks import build_host

DEMOS = sorted((Path(__file__).parents[2] / "demo_configs").glob("*.toml"))
TANK = next(path for path in DEMOS if path.stem == "oil_tank_overfill")


def validator(geometry: str) -> Any:
    return jsonschema.Draft202012Validator(file_schema(build_host().geometry(geometry)))


@pytest.mark.parametrize("geometry", list(build_host().geometries))
def test_it_is_a_schema(geometry: str) -> None:
    jsonschema.Draft202012Validator.check_schema(file_schema(build_host().geometry(geometry)))


@pytest.mark.parametrize("path", DEMOS, ids=lambda path: path.stem)
def test_every_demo_is_valid(path: Path) -> None:
    found = validator(load_design(path).geometry.name).iter_errors(tomllib.loads(path.read_text()))
    assert [error.message for error in found] == []


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ('base = "8 mm"', 'base = "8"'),
        ('base = "8 mm"', 'base = "8 W"'),
        ('base = "8 mm"', "base = 8"),
        ('base = "8 mm"', 'bse = "8 mm"'),
        ("[prism]", "[prisma]"),
        ('expect = "present"', 'expect = "perhaps"'),
        ('metric = "worst_ratio"', 'metric = "wrost_ratio"'),
        ("at_least = 10", "at_least = 10\nat_most = 12"),
        ('what = "film"', 'what = "flim"'),
        ('role = "fault"', 'role = "broken"'),
        ('geometry = "prism-switch"', 'geometry = "prism-swich"'),
    ],
)
def test_what_the_loader_refuses_the_schema_refuses(old: str, new: str) -> None:
    text = TANK.read_text()
    assert old in text
    assert list(validator("prism-switch").iter_errors(tomllib.loads(text.replace(old, new, 1))))
