"""The ``[tolerance]`` table: relative and absolute limits, groups, and what is refused."""

from __future__ import annotations

import pytest

from outcouple.design import parse_design
from outcouple.errors import UserMistake

BASE = """
title = "Tank"
geometry = "prism-switch"
[prism]
base = "8 mm"
crosstalk = "2 %"
"""


def tolerances(text: str) -> dict[str, tuple[float, float, str]]:
    design = parse_design(BASE + text)
    return {".".join(one.path): (one.low, one.high, one.group) for one in design.tolerances}


def test_relative_absolute_and_limits():
    found = tolerances(
        """
[tolerance]
"prism.base" = "2 %"
"environment.temperature" = { plus_minus = "10 K", group = "heat" }
"emitter.wavelength" = { low = "840 nm", high = "860 nm", group = "heat" }
"prism.crosstalk" = "0.5 %"
"""
    )
    assert found["prism.base"] == (pytest.approx(7.84e-3), pytest.approx(8.16e-3), "")
    assert found["environment.temperature"] == (pytest.approx(283.15), pytest.approx(303.15), "heat")
    assert found["emitter.wavelength"] == (pytest.approx(840e-9), pytest.approx(860e-9), "heat")
    # A share deviates by percentage points, not by a part of itself.
    assert found["prism.crosstalk"][:2] == pytest.approx((0.015, 0.025))


@pytest.mark.parametrize(
    ("row", "says"),
    [
        ('"prism.base" = "7.5 mm"', "reaches beyond what this input may be"),
        ('"prism.base" = { low = "9 mm", high = "7 mm" }', "reaches beyond what this input may be"),
        ('"prism.basis" = "1 mm"', "did you mean 'prism.base'"),
        ('"prism.material" = "1 mm"', "not a number of this design"),
        ('"prism.base" = { plus_minus = "1 mm", grop = "a" }', "unknown key (did you mean 'group'?)"),
        ('"prism.base" = { low = "7 mm" }', "needs plus_minus, or low and high"),
        ('"readout.responsivity" = "5 %"', "is not set, so it cannot deviate"),
        ('"prism.base" = "1 nmm"', "unit"),
    ],
)
def test_refused_by_name(row: str, says: str):
    with pytest.raises(UserMistake) as caught:
        parse_design(f"{BASE}\n[tolerance]\n{row}\n")
    assert says in str(caught.value)
    assert ":9:" in str(caught.value)
