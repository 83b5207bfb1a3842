"""Corners: how many there are, groups that move together, worst values as single evaluations find them."""

from __future__ import annotations

import tomllib
from itertools import product
from pathlib import Path
from typing import Any

import pytest

from outcouple.design import Design, design_from_mapping, parse_design
from outcouple.evaluation import evaluate
from outcouple.studies.corners import corner_groups, evaluate_corners

DEMO = (Path(__file__).parents[2] / "demo_configs" / "dewar_ladder_silica.toml").read_text()
TOLERANCE = """
[tolerance]
"prism.crosstalk" = { low = "0.5 %", high = "1.5 %" }
"prism.face_angle" = "0.05 deg"
"layout.emitter_position" = { plus_minus = "0.1 mm", group = "assembly" }
"layout.detector_position" = { plus_minus = "0.1 mm", group = "assembly" }
"""
QUADRATURE = 1e-4
"""A batch cuts a prism's lobe at the critical angles of all its samples, a single evaluation at its own: two sums over
the lobe that differ by their quadrature's error (7e-5 here)."""
LIMITS = {
    "crosstalk": ("0.5 %", "1.5 %"),
    "face_angle": ("44.95 deg", "45.05 deg"),
    "assembly": (("-1.6 mm", "1.4 mm"), ("-1.4 mm", "1.6 mm")),
}


def toleranced(more: str = "") -> Design:
    return parse_design(DEMO + TOLERANCE + more)


def by_hand(crosstalk: str, face_angle: str, assembly: tuple[str, str]) -> Any:
    """One corner written into the file and evaluated alone."""
    data = tomllib.loads(DEMO)
    data["prism"].update(crosstalk=crosstalk, face_angle=face_angle)
    data["layout"].update(emitter_position=assembly[0], detector_position=assembly[1])
    return evaluate(design_from_mapping(data), advice=False, views=False)


def test_groups_move_together() -> None:
    groups = corner_groups(toleranced())
    assert list(groups) == ["prism.crosstalk", "prism.face_angle", "assembly"]
    assert [one.path[-1] for one in groups["assembly"]] == ["emitter_position", "detector_position"]


def test_all_corners_where_there_are_few_and_the_worst_is_what_single_evaluations_find() -> None:
    design = toleranced()
    found = evaluate_corners(design, design.requirements)
    assert found.method == "all"
    assert found.evaluated == 2**3
    every = [by_hand(*corner) for corner in product(*LIMITS.values())]  # type: ignore[arg-type]
    for one, worst in zip(design.requirements, found.worst, strict=True):
        values = [outcome.metrics[one.metric].value for outcome in every]
        expected = min(values) if one.at_least is not None else max(values)
        assert worst.value == pytest.approx(expected, rel=QUADRATURE), one.metric
    ratio = next(w for one, w in zip(design.requirements, found.worst, strict=True) if one.metric == "worst_ratio")
    assert ratio.where["prism.crosstalk"] == "high"


def test_too_many_corners_are_searched_by_steps_and_said_so() -> None:
    design = toleranced()
    every = evaluate_corners(design, design.requirements)
    steps = evaluate_corners(design, design.requirements, most=4)
    assert steps.method == "steps"
    assert steps.evaluated == 2 * 3 + len(design.requirements)
    for one, all_of_them, by_steps in zip(design.requirements, every.worst, steps.worst, strict=True):
        assert one.margin(by_steps.value) >= one.margin(all_of_them.value), "steps find no worse than all corners"
        assert by_steps.value == pytest.approx(all_of_them.value, rel=1e-3)


def test_without_tolerances_nothing_is_known_of_corners() -> None:
    design = parse_design(DEMO)
    found = evaluate_corners(design, design.requirements)
    assert (found.method, found.evaluated) == ("none", 0)
    assert all(worst.value is None for worst in found.worst)
    assert "no tolerances" in found.worst[0].why


def test_more_groups_than_can_be_run_fall_back_to_steps() -> None:
    names = ["power", "half_angle", "linewidth", "wavelength", "exponent", "drive"]
    rows = [f'"emitter.{name}" = "1 %"' for name in names if name != "exponent"] + ['"emitter.exponent" = 0.01']
    rows[rows.index('"emitter.drive" = "1 %"')] = '"emitter.drive" = { low = "99 %", high = "101 %" }'
    more = ["prism.base", "layout.emitter_radius", "layout.detector_radius", "readout.bandwidth"]
    rows += [f'"{name}" = "1 %"' for name in more]
    design = toleranced("\n".join(rows))
    assert len(corner_groups(design)) == 13
    assert evaluate_corners(design, design.requirements).method == "steps"
