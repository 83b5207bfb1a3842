"""What the first sentence says beside the verdict."""

from __future__ import annotations

from outcouple.design import parse_design
from outcouple.evaluation import evaluate

SAPPHIRE = """
geometry = "prism-switch"
[prism]
material = "sapphire"
[decision]
level = "given"
share = "50 %"
[[states]]
name = "dry"
expect = "absent"
[[states]]
name = "nitrogen"
expect = "present"
touching = "liquid nitrogen"
[[states]]
name = "oil"
expect = "present"
touching = "heating oil"
[[requirements]]
metric = "dry_angle_margin"
at_least = "1 deg"
"""


def test_a_state_on_the_wrong_side_is_told_though_no_requirement_asks():
    found = evaluate(parse_design(SAPPHIRE), advice=False, views=False)
    assert found.verdict == "pass"
    assert "But nitrogen reads dry: no requirement asks about it." in found.headline


def test_a_requirement_about_it_fails_instead():
    asked = SAPPHIRE + '[[requirements]]\nmetric = "margin_sigma"\nat_least = 3\n'
    found = evaluate(parse_design(asked), advice=False, views=False)
    assert found.verdict == "fail"
    assert "nitrogen reads dry" in found.headline
    assert "no requirement asks" not in found.headline


DRY_RUN = """
geometry = "prism-switch"
[decision]
demand = "low level"
[[states]]
name = "dry"
expect = "absent"
[[states]]
name = "water"
expect = "present"
touching = "water"
[[requirements]]
metric = "dead_emitter_unnoticed"
at_most = 0
"""


def test_where_no_number_helps_a_diagnostic_is_advised_and_does_help():
    found = evaluate(parse_design(DRY_RUN), views=False)
    assert found.verdict == "fail"
    (one,) = found.advice
    assert one.path == "decision.diagnostics.reference"
    mended = parse_design(DRY_RUN.replace('demand = "low level"', 'demand = "low level"\ndiagnostics.reference = true'))
    assert evaluate(mended, advice=False, views=False).verdict == "pass"
