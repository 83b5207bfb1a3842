"""Showing quantities: units that suit the size, and texts that read back as the value they show."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from outcouple.quantities import (
    KINDS,
    best_unit,
    format_number,
    format_quantity,
    from_unit,
    in_unit,
    kind_of,
    parse,
    si_unit,
    symbol,
)


@pytest.mark.parametrize(
    ("value", "kind", "text"),
    [
        (0.006, "length", "6 mm"),
        (850e-9, "length", "850 nm"),
        (0.0, "length", "0 mm"),
        (-0.0, "length", "0 mm"),
        (999.96e-6, "length", "1 mm"),  # rounded before the unit is chosen
        (999.94e-6, "length", "999.9 um"),
        (-0.0025, "length", "-2.5 mm"),
        (3e-15, "length", "0.003 pm"),
        (253.14999999999998, "temperature", "-20 degC"),
        (-20 + 273.15, "temperature", "-20 degC"),
        (0.35, "ratio", "35 %"),
        (2.5e-6, "ratio", "0.00025 %"),
        (math.radians(30), "angle", "30 deg"),
        (math.radians(0.5), "angle", "8.727 mrad"),
        (0.69077552789821, "attenuation", "3 dB/m"),
        (12345.6, "number", "12350"),
        (1.5e-7, "number", "1.5e-7"),
        (3e9, "number", "3e9"),
        (9999999.0, "number", "1e7"),
        (10_000.0, "electrons", "10 ke-"),
        (1e-15, "relative_intensity_noise", "-150 dB/Hz"),
        (0.0, "relative_intensity_noise", "0 1/Hz"),
        (5e-9, "voltage_noise", "5 nV/rtHz"),
        (12e-9, "length_per_kelvin", "12 nm/K"),
        (3.1e6, "1/length", "3.1 1/um"),
        (None, "length", "-"),
        (math.nan, "length", "-"),
        (math.inf, "length", "unlimited"),
        (-math.inf, "length", "-unlimited"),
    ],
)
def test_shown(value: float | None, kind: str, text: str) -> None:
    assert format_quantity(value, kind) == text


def test_a_preferred_unit_is_kept_while_it_can_be_read() -> None:
    assert format_quantity(0.0012, "length", "um") == "1200 um"
    assert format_quantity(0.12, "length", "um") == "120 mm"
    assert format_quantity(1.2e-9, "length", "um") == "1.2 nm"
    assert format_quantity(0.0, "length", "um") == "0 um"
    assert format_quantity(280.0, "temperature", "K") == "280 K"


def test_a_plain_number_may_carry_a_label() -> None:
    assert format_quantity(12.0, "number", "chords") == "12 chords"
    with pytest.raises(KeyError):
        format_quantity(12.0, "length", "chords")


def test_digits() -> None:
    assert format_quantity(1 / 3, "number", digits=2) == "0.33"
    assert format_quantity(0.0061234567891, "length", digits=10) == "6.123456789 mm"
    assert format_number(123456.0, 6) == "123456"
    assert format_number(-1234567.0, 3) == "-1.23e6"


def test_arrays_convert() -> None:
    values = np.array([0.001, 0.002])
    assert in_unit(values, "length", "mm") == pytest.approx([1.0, 2.0])
    assert from_unit(np.array([1.0, 2.0]), "length", "mm") == pytest.approx(values)
    assert in_unit(np.array([1e-15, 0.0]), "relative_intensity_noise", "dB/Hz") == pytest.approx([-150.0, -np.inf])
    assert from_unit(np.array([-150.0]), "relative_intensity_noise", "dB/Hz") == pytest.approx([1e-15])


def test_names_of_units() -> None:
    assert (si_unit("length"), si_unit("ratio"), si_unit("1/length")) == ("m", "", "1/m")
    assert best_unit(math.nan, "length") == "mm"
    assert best_unit(0.25, "number") == ""
    shown = {"um": "µm", "deg": "°", "degC": "°C", "mW/cm2": "mW/cm²", "nV/rtHz": "nV/√Hz", "Mohm": "MΩ", "%": "%"}
    assert {unit: symbol(unit) for unit in shown} == shown
    assert (symbol("e-/s"), symbol("DN/e-"), symbol("1/um"), symbol("")) == ("e⁻/s", "DN/e⁻", "1/µm", "")


@given(
    kind=st.sampled_from([*KINDS, "1/length", "length/rtHz"]),
    size=st.floats(1.0, 10.0),
    exponent=st.integers(-12, 9),
    negative=st.booleans(),
)
def test_what_is_shown_reads_back(kind: str, size: float, exponent: int, negative: bool) -> None:
    value = size * 10.0**exponent * (-1 if negative else 1)
    assume(not (negative and kind in ("temperature", "relative_intensity_noise")))
    if kind == "count":
        value = float(round(value))
    back = parse(format_quantity(value, kind, digits=15), kind)
    absolute = 1e-12 if kind == "temperature" else 0.0
    assert back == pytest.approx(value, rel=1e-13, abs=absolute)


@given(kind=st.sampled_from(KINDS), size=st.floats(1e-9, 1e6), data=st.data())
def test_a_preferred_unit_changes_nothing_but_the_unit(kind: str, size: float, data: st.DataObject) -> None:
    unit = data.draw(st.sampled_from(sorted(kind_of(kind).units)))
    value = float(round(size)) if kind == "count" else size
    back = parse(format_quantity(value, kind, unit, digits=15), kind)
    assert back == pytest.approx(value, rel=1e-12, abs=1e-12 if kind == "temperature" else 0.0)
