"""The table of units against the units library pint, and against itself."""

from __future__ import annotations

import math
import re

import pint
import pytest

from outcouple.quantities import KINDS, is_kind, kind_of

REGISTRY = pint.UnitRegistry(autoconvert_offset_to_baseunit=True)
OUR_OWN = re.compile(r"dB|DN|^$")
"""Units pint does not have, or has with another meaning: checked one by one below."""

SPELLED = (
    (re.compile(r"rtHz"), "Hz**0.5"),
    (re.compile(r"Pa\.s"), "Pa*s"),
    (re.compile(r"(?<=[a-z])([23])"), r"**\1"),
    (re.compile(r"\bk?M?e-"), lambda found: {"e": "1", "k": "1e3", "M": "1e6"}[found[0][0]]),
    (re.compile(r"%"), "percent"),
    (re.compile(r"\bd\b"), "day"),
    (re.compile(r"\byr\b"), "julian_year"),
    (re.compile(r"\bu(?=[A-Za-z])"), "micro"),
    (re.compile(r"\bmicrorad\b"), "microradian"),
)


def in_pint(unit: str) -> str:
    for pattern, spelling in SPELLED:
        unit = pattern.sub(spelling, unit)  # type: ignore[arg-type]
    return unit


ROWS = [(name, unit) for name in KINDS for unit in kind_of(name).units if not OUR_OWN.search(unit)]


@pytest.mark.parametrize(("name", "unit"), ROWS)
def test_factor_agrees_with_pint(name: str, unit: str) -> None:
    """Reference library: pint 0.25 (its own tables follow SI and CODATA)."""
    kind = kind_of(name)
    for number in (1.0, -7.25):
        if "degC" in unit or "degF" in unit:
            expected = REGISTRY.Quantity(number, unit).to("kelvin").magnitude
        else:
            expected = (number * REGISTRY.parse_expression(in_pint(unit))).to(in_pint(kind.si_unit) or "").magnitude
        assert kind.units[unit].to_si(number) == pytest.approx(expected, rel=1e-14)


def test_most_units_are_checked_against_pint() -> None:
    every = [(name, unit) for name in KINDS for unit in kind_of(name).units]
    assert len(ROWS) > 0.9 * len(every)


@pytest.mark.parametrize(
    ("name", "unit", "value"),
    [
        # computed independently: optical decibels, P2 / P1 = 10^(-dB / 10) = exp(-a z)
        ("attenuation", "dB/m", math.log(10) / 10),
        ("attenuation", "dB/cm", 100 * math.log(10) / 10),
        ("attenuation", "dB/mm", 1000 * math.log(10) / 10),
        ("attenuation", "dB/km", math.log(10) / 10 / 1000),
        ("relative_intensity_noise", "dB/Hz", 10**0.1),
        ("decibel", "dB", 1.0),
        ("gain", "DN/e-", 1.0),
        ("digital_number", "DN", 1.0),
        ("ratio", "", 1.0),
        ("number", "", 1.0),
        ("count", "", 1.0),
    ],
)
def test_units_of_our_own(name: str, unit: str, value: float) -> None:
    assert kind_of(name).units[unit].to_si(1.0) == pytest.approx(value, rel=1e-15)


def test_no_unit_escapes_both_checks() -> None:
    own = {unit for name in KINDS for unit in kind_of(name).units if OUR_OWN.search(unit)}
    assert own == {"", "dB/m", "dB/cm", "dB/mm", "dB/km", "dB/Hz", "dB", "DN/e-", "DN"}


def test_half_the_light_of_three_decibels() -> None:
    """3.0103 dB of attenuation over a metre leave half the light (arithmetic: 10 log10 2 = 3.0103)."""
    a = kind_of("attenuation").units["dB/m"].to_si(10 * math.log10(2))
    assert math.exp(-a * 1.0) == pytest.approx(0.5, rel=1e-14)


@pytest.mark.parametrize("name", KINDS)
def test_rows_are_whole(name: str) -> None:
    kind = kind_of(name)
    assert {kind.si_unit, kind.unit, *kind.shown} <= set(kind.units)
    assert kind.units[kind.si_unit].to_si(2.5) == 2.5
    sizes = [kind.units[unit].to_si(1.0) for unit in kind.shown]
    assert sizes == sorted(sizes)


@pytest.mark.parametrize("name", KINDS)
def test_from_si_undoes_to_si(name: str) -> None:
    for unit in kind_of(name).units.values():
        assert unit.from_si(unit.to_si(3.7)) == pytest.approx(3.7, rel=1e-12)


def test_derived_kinds() -> None:
    assert kind_of("1/length").units["1/nm"].to_si(1.0) == 1e9
    assert kind_of("length/rtHz").units["pm/rtHz"].to_si(1.0) == 1e-12
    assert kind_of("temperature/s").name == "temperature_difference/s"
    assert kind_of("1/number").name == "number"
    assert kind_of("ratio/K").unit == "%/K"
    assert (kind_of("1/angle").a_label, kind_of("current_noise").a_label) == (
        "an inverse angle",
        "a current per root hertz",
    )


@pytest.mark.parametrize("name", ["lenght", "2/length", "length/", "length/m", "1/", "", "1/1/length"])
def test_unknown_kinds_are_named(name: str) -> None:
    assert not is_kind(name)
    with pytest.raises(KeyError, match="there is no kind of quantity"):
        kind_of(name)
