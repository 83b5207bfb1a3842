"""Reading quantities: what is taken, what is refused, and in which words."""

from __future__ import annotations

import math
import string
from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from outcouple.errors import UserMistake
from outcouple.quantities import KINDS, kind_of, parse


@pytest.mark.parametrize(
    ("text", "kind", "value"),
    [
        # the double nearest to the decimal number, not one unit in the last place beside it
        ("6 mm", "length", 0.006),
        ("850 nm", "length", 850e-9),
        ("6mm", "length", 0.006),
        ("  6   mm ", "length", 0.006),
        ("1e-3 mm", "length", 1e-6),
        ("+.5 mm", "length", 0.0005),
        ("5. mm", "length", 0.005),
        ("-20 degC", "temperature", 253.15),
        ("−20 °C", "temperature", 253.15),
        ("293.15 K", "temperature", 293.15),
        ("35 %", "ratio", 0.35),
        ("35%", "ratio", 0.35),
        ("0.35", "ratio", 0.35),
        (0.35, "ratio", 0.35),
        (2, "number", 2.0),
        ("50 ppm", "ratio", 5e-5),
        ("180 deg", "angle", math.pi),
        ("45°", "angle", math.pi / 4),
        ("5 µm", "length", 5e-6),  # U+00B5
        ("5 μm", "length", 5e-6),  # U+03BC
        ("5 um", "length", 5e-6),
        ("3 kΩ", "resistance", 3000.0),  # U+03A9
        ("3 k\u2126", "resistance", 3000.0),
        ("3 kOhm", "resistance", 3000.0),
        ("12 W/m²", "irradiance", 12.0),
        ("12 W/m^2", "irradiance", 12.0),
        ("12 W / m2", "irradiance", 12.0),
        ("1 mW/cm²", "irradiance", 10.0),
        ("1 mPa·s", "viscosity", 1e-3),
        ("1 mPa*s", "viscosity", 1e-3),
        ("5 nV/√Hz", "voltage_noise", 5e-9),
        ("5 nV/rtHz", "voltage_noise", 5e-9),
        ("5 nV/sqrt(Hz)", "voltage_noise", 5e-9),
        ("5 ml/min", "flow", 5e-6 / 60),
        ("5 l/h", "flow", 5e-3 / 3600),
        ("10 ke-", "electrons", 10_000.0),
        ("10ke-", "electrons", 10_000.0),
        ("100 e-", "electrons", 100.0),
        ("100 e−", "electrons", 100.0),
        ("1e3 e-", "electrons", 1000.0),
        ("0.1 DN/e-", "gain", 0.1),
        ("-150 dB/Hz", "relative_intensity_noise", 1e-15),
        ("3 1/cm", "inverse_length", 300.0),
        ("12", "count", 12.0),
    ],
)
def test_taken(text: object, kind: str, value: float) -> None:
    assert parse(text, kind) == pytest.approx(value, rel=1e-15)


REFUSED = [
    ("30", "angle", 'unit missing; write "30 deg"'),
    (30, "angle", 'unit missing; write "30 deg"'),
    (0.5, "length", 'unit missing; write "0.5 mm"'),
    ("-3", "temperature", 'unit missing; write "-3 degC"'),
    ("6 nm", "angle", '"6 nm" is a length; an angle is wanted'),
    ("6 mm", "number", '"6 mm" is a length; a plain number is wanted'),
    ("35 %", "length", '"35 %" is a ratio; a length is wanted'),
    (
        "5 degC",
        "temperature_difference",
        '"5 degC" is a temperature; a temperature difference is wanted',
    ),
    (
        "6 nmm",
        "length",
        "unknown unit \"nmm\" (did you mean 'nm'?); units of a length: pm, nm, um, mm, cm, m, km",
    ),
    (
        "5 mPA",
        "pressure",
        "unknown unit \"mPA\" (did you mean 'mPa' or 'MPa'?); "
        "units of a pressure: mPa, Pa, kPa, MPa, GPa, hPa, mbar, bar",
    ),
    ("20 C", "temperature", 'unknown unit "C"; units of a temperature: K, degC, degF'),
    (
        "1 mPa s",
        "viscosity",
        "unknown unit \"mPa s\" (did you mean 'mPa.s'?); units of a viscosity: uPa.s, mPa.s, Pa.s, cP",
    ),
    ("5 foo", "number", 'unknown unit "foo"; a plain number is wanted'),
    ("1,5 mm", "length", 'comma in the number; write "1.5 mm"'),
    ("1,5", "number", 'comma in the number; write "1.5"'),
    ("1,000 mm", "length", 'comma in the number; write "1.000 mm" or "1000 mm"'),
    ("1 000 mm", "length", 'not one number with a unit; a length is wanted, as text such as "1 mm"'),
    ("1.2.3 mm", "length", 'not one number with a unit; a length is wanted, as text such as "1 mm"'),
    ("5-10 mm", "length", 'not one number with a unit; a length is wanted, as text such as "1 mm"'),
    ("6 mm ± 1 mm", "length", 'not one number with a unit; a length is wanted, as text such as "1 mm"'),
    ("", "length", 'empty; a length is wanted, as text such as "1 mm"'),
    ("mm", "length", 'no number; a length is wanted, as text such as "1 mm"'),
    ("many", "count", "no number; a whole number is wanted"),
    ("nan mm", "length", "not a finite number"),
    ("-inf", "number", "not a finite number"),
    (math.nan, "number", "not a finite number"),
    (math.inf, "length", "not a finite number"),
    ("1e400 m", "length", "too large to be a number"),
    ("1e308 km", "length", "too large to be a number"),
    ("1e5 dB/Hz", "relative_intensity_noise", "too large to be a number"),
    ("-300 degC", "temperature", "below absolute zero (-273.15 degC)"),
    ("2.5", "count", "a whole number is wanted"),
    (2.5, "count", "a whole number is wanted"),
    (True, "number", "a plain number is wanted"),
    (True, "length", 'a length is wanted, as text such as "1 mm"'),
    ([6], "length", 'a length is wanted, as text such as "1 mm"'),
    ({}, "ratio", 'a ratio is wanted, as text such as "1 %"'),
    (None, "angle", 'an angle is wanted, as text such as "1 deg"'),
    (10**400, "number", "too large to be a number"),
]


@pytest.mark.parametrize(("given_value", "kind", "message"), REFUSED, ids=range(len(REFUSED)))
def test_refused(given_value: object, kind: str, message: str) -> None:
    with pytest.raises(UserMistake) as refusal:
        parse(given_value, kind)
    assert refusal.value.lines == (message,)


def test_the_suggested_unit_can_be_chosen() -> None:
    with pytest.raises(UserMistake) as refusal:
        parse("850", "length", unit="nm")
    assert str(refusal.value) == 'unit missing; write "850 nm"'


UNITS = [(name, unit) for name in KINDS for unit in kind_of(name).units]


@given(row=st.sampled_from(UNITS), mantissa=st.integers(-(10**9), 10**9), exponent=st.integers(-6, 6))
def test_any_decimal_number_in_any_unit(row: tuple[str, str], mantissa: int, exponent: int) -> None:
    """Exact rational arithmetic on the table's factors is the reference."""
    kind, name = kind_of(row[0]), row[1]
    unit = kind.units[name]
    if unit.decibel or kind.name == "count":
        return
    number = Fraction(mantissa) * Fraction(10) ** exponent
    exact = number * Fraction(unit.multiply) / Fraction(unit.divide) + Fraction(unit.offset)
    if kind.name == "temperature" and exact < 0:
        return
    scale = abs(float(exact)) + abs(unit.offset)
    assert parse(f"{mantissa}e{exponent} {name}", kind) == pytest.approx(float(exact), rel=1e-15, abs=4e-16 * scale)


@settings(max_examples=300)
@given(text=st.text(string.printable + "µμ−°²√±Ω٣", max_size=12), kind=st.sampled_from(KINDS))
def test_any_text_is_a_finite_number_or_a_mistake(text: str, kind: str) -> None:
    refused: tuple[str, ...] = ("taken",)
    value = 0.0
    try:
        value = parse(text, kind)
    except UserMistake as mistake:
        refused = mistake.lines
    assert math.isfinite(value)
    assert len(refused) == 1
    assert refused[0]
