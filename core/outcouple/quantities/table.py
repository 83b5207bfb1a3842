"""The table of units: every kind of quantity, the units it may be written in, and those it is shown in."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache
from types import MappingProxyType
from typing import Any

__all__ = ["KINDS", "Kind", "Unit", "is_kind", "kind_of"]


@dataclass(frozen=True, slots=True)
class Unit:
    """How a number in this unit becomes SI: number * multiply / divide + offset, or 10^(number / 10).

    Factors below one are kept as divisors: 850 / 1e9 is the double nearest to 8.5e-7, 850 * 1e-9 is not.
    """

    multiply: float = 1.0
    divide: float = 1.0
    offset: float = 0.0
    decibel: bool = False

    def to_si(self, number: Any) -> Any:
        """A number (or array) in this unit in SI."""
        if self.decibel:
            return 10.0 ** (number / 10.0)
        return number * self.multiply / self.divide + self.offset

    def from_si(self, value: Any) -> Any:
        """The reverse of :meth:`to_si`."""
        if self.decibel:
            return _decibels(value)
        return (value - self.offset) * self.divide / self.multiply


@dataclass(frozen=True)
class Kind:
    """One kind of quantity.

    name     as used in code, lower case with underscores
    label    in a sentence, without its article: "temperature difference"
    si_unit  unit of the values inside
    unit     unit suggested where one is missing
    shown    units a value is shown in, smallest first; the largest that leaves a number of at least one is taken
    units    every unit it may be written in; "" where a plain number will do
    """

    name: str
    label: str
    si_unit: str
    unit: str
    shown: tuple[str, ...]
    units: Mapping[str, Unit]

    @property
    def plain(self) -> bool:
        """True where a number without a unit is a full answer."""
        return "" in self.units

    @property
    def a_label(self) -> str:
        """The label with its article: "a length", "an angle"."""
        return f"{'an' if self.label[0] in 'aeiou' else 'a'} {self.label}"


def _decibels(value: Any) -> Any:
    if isinstance(value, int | float):
        return 10.0 * math.log10(value) if value > 0.0 else -math.inf
    import numpy as np  # only where an array is given: this room starts without it

    with np.errstate(divide="ignore"):
        return 10.0 * np.log10(value)


PREFIXES = {"a": -18, "f": -15, "p": -12, "n": -9, "u": -6, "m": -3, "c": -2, "": 0, "k": 3, "M": 6, "G": 9}


def _power(exponent: int) -> Unit:
    return Unit(multiply=10.0**exponent) if exponent >= 0 else Unit(divide=10.0**-exponent)


def _metric(base: str, prefixes: str, tail: str = "") -> dict[str, Unit]:
    """``base`` with each prefix, "-" standing for none: _metric("m", "um-") gives um, mm, m."""
    names = ["" if prefix == "-" else prefix for prefix in prefixes]
    return {f"{name}{base}{tail}": _power(PREFIXES[name]) for name in names}


def _powers(**exponents: int) -> dict[str, Unit]:
    """Units by their power of ten in SI: _powers(mm2=-6)."""
    return {name: _power(exponent) for name, exponent in exponents.items()}


PER_DECIBEL = math.log(10.0) / 10.0
"""Attenuation of optical power per decibel: P ~ exp(-a z), and 10 log10 of the power ratio in dB."""

# One row a kind: name, label, SI unit, unit suggested, units shown, units taken. Where two kinds share a unit, the
# first names it in messages ("5 K" is a temperature).
_ROWS: tuple[tuple[str, str, str, str, str, Mapping[str, Unit]], ...] = (
    ("length", "length", "m", "mm", "pm nm um mm m", _metric("m", "pnumc-k")),
    ("area", "area", "m2", "mm2", "um2 mm2 cm2 m2", _powers(um2=-12, mm2=-6, cm2=-4, m2=0)),
    ("volume", "volume", "m3", "mL", "nL uL mL L m3", _powers(nL=-12, uL=-9, mL=-6, L=-3, m3=0, mm3=-9, cm3=-6)),
    (
        "angle", "angle", "rad", "deg", "urad mrad deg",
        {"deg": Unit(math.pi, 180.0), "arcmin": Unit(math.pi, 10800.0), "arcsec": Unit(math.pi, 648000.0)}
        | _metric("rad", "um-"),
    ),
    ("solid_angle", "solid angle", "sr", "sr", "usr msr sr", _metric("sr", "um-")),
    (
        "temperature", "temperature", "K", "degC", "degC",
        {"K": Unit(), "degC": Unit(offset=273.15), "degF": Unit(5.0, 9.0, 459.67 * 5.0 / 9.0)},
    ),
    ("temperature_difference", "temperature difference", "K", "K", "mK K", _metric("K", "m-")),
    (
        "time", "time", "s", "ms", "ps ns us ms s",
        _metric("s", "pnum-") | {"min": Unit(60.0), "h": Unit(3600.0), "d": Unit(86400.0), "yr": Unit(31557600.0)},
    ),
    ("frequency", "frequency", "Hz", "Hz", "mHz Hz kHz MHz GHz", _metric("Hz", "m-kMG")),
    (
        "rate", "rate", "1/s", "1/s", "1/s",
        {"1/s": Unit(), "1/min": Unit(divide=60.0), "1/h": Unit(divide=3600.0), "1/d": Unit(divide=86400.0)}
        | {"1/yr": Unit(divide=31557600.0)},
    ),
    ("power", "power", "W", "mW", "fW pW nW uW mW W", _metric("W", "fpnum-k")),
    ("energy", "energy", "J", "mJ", "fJ pJ nJ uJ mJ J", _metric("J", "fpnum-k")),
    ("current", "current", "A", "uA", "aA fA pA nA uA mA A", _metric("A", "afpnum-")),
    ("voltage", "voltage", "V", "V", "nV uV mV V kV", _metric("V", "num-k")),
    ("resistance", "resistance", "ohm", "kohm", "mohm ohm kohm Mohm Gohm", _metric("ohm", "m-kMG")),
    ("capacitance", "capacitance", "F", "pF", "fF pF nF uF F", _metric("F", "fpnum-")),
    (
        "irradiance", "irradiance", "W/m2", "W/m2", "nW/m2 uW/m2 mW/m2 W/m2 kW/m2",
        _metric("W", "num-k", "/m2")
        | {"uW/cm2": Unit(divide=100.0), "mW/cm2": Unit(10.0), "W/cm2": Unit(1e4), "mW/mm2": Unit(1e3)},
    ),
    (
        "radiance", "radiance", "W/m2/sr", "W/m2/sr", "nW/m2/sr uW/m2/sr mW/m2/sr W/m2/sr kW/m2/sr",
        _metric("W", "num-k", "/m2/sr") | {"mW/cm2/sr": Unit(10.0), "W/cm2/sr": Unit(1e4)},
    ),
    ("radiant_intensity", "radiant intensity", "W/sr", "mW/sr", "nW/sr uW/sr mW/sr W/sr", _metric("W", "num-", "/sr")),
    ("illuminance", "illuminance", "lx", "lx", "lx klx", _metric("lx", "m-k")),
    ("ratio", "ratio", "", "%", "%", {"": Unit(), "%": Unit(divide=100.0), "ppm": Unit(divide=1e6)}),
    (
        "attenuation", "attenuation", "1/m", "dB/m", "dB/m",
        {"dB/mm": Unit(1e3 * PER_DECIBEL), "dB/cm": Unit(1e2 * PER_DECIBEL), "dB/m": Unit(PER_DECIBEL)}
        | {"dB/km": Unit(PER_DECIBEL, 1e3), "1/m": Unit(), "1/cm": Unit(1e2), "1/mm": Unit(1e3)}
        | {"%/m": Unit(divide=1e2), "%/cm": Unit()},
    ),
    (
        "pressure", "pressure", "Pa", "kPa", "mPa Pa kPa MPa GPa",
        _metric("Pa", "m-kMG") | {"hPa": Unit(1e2), "mbar": Unit(1e2), "bar": Unit(1e5)},
    ),
    ("force", "force", "N", "N", "nN uN mN N kN", _metric("N", "num-k")),
    ("mass", "mass", "kg", "g", "ug mg g kg", _powers(ug=-9, mg=-6, g=-3, kg=0)),
    (
        "density", "density", "kg/m3", "kg/m3", "kg/m3",
        {"kg/m3": Unit(), "g/L": Unit(), "g/mL": Unit(1e3), "g/cm3": Unit(1e3), "kg/L": Unit(1e3)},
    ),
    ("viscosity", "viscosity", "Pa.s", "mPa.s", "uPa.s mPa.s Pa.s", _metric("Pa.s", "um-") | _powers(cP=-3)),
    ("surface_tension", "surface tension", "N/m", "mN/m", "mN/m N/m", _metric("N", "m-", "/m")),
    (
        "speed", "speed", "m/s", "mm/s", "nm/s um/s mm/s m/s",
        _metric("m", "numc-", "/s")
        | {"mm/min": Unit(divide=6e4), "m/min": Unit(divide=60.0), "mm/h": Unit(divide=3.6e6)}
        | {"m/h": Unit(divide=3600.0)},
    ),
    (
        "flow", "flow", "m3/s", "L/h", "mL/h L/h m3/h",
        {"m3/s": Unit(), "m3/h": Unit(divide=3600.0), "L/s": Unit(divide=1e3), "mL/s": Unit(divide=1e6)}
        | {"L/min": Unit(divide=6e4), "mL/min": Unit(divide=6e7), "L/h": Unit(divide=3.6e6)}
        | {"mL/h": Unit(divide=3.6e9)},
    ),
    (
        "stiffness", "stiffness", "N/m", "N/um", "N/m N/mm N/um",
        _metric("N", "m-k", "/m")
        | {"N/mm": Unit(1e3), "N/um": Unit(1e6), "mN/um": Unit(1e3), "uN/nm": Unit(1e3)},
    ),
    (
        # variance of P / mean P per bandwidth; in dB as 10 log10 of that variance, i.e. of electrical power
        "relative_intensity_noise", "relative intensity noise", "1/Hz", "dB/Hz", "dB/Hz",
        {"1/Hz": Unit(), "dB/Hz": Unit(decibel=True)},
    ),
    ("responsivity", "responsivity", "A/W", "A/W", "uA/W mA/W A/W", _metric("A", "um-", "/W")),
    ("gain", "gain", "DN/e-", "DN/e-", "DN/e-", {"DN/e-": Unit()}),
    ("conversion", "conversion gain", "V/e-", "uV/e-", "uV/e-", _metric("V", "num-", "/e-")),
    ("electrons", "number of electrons", "e-", "e-", "e- ke- Me-", _metric("e-", "-kM")),
    ("electron_rate", "number of electrons per second", "e-/s", "e-/s", "e-/s ke-/s Me-/s", _metric("e-", "-kM", "/s")),
    ("digital_number", "digital number", "DN", "DN", "DN", {"DN": Unit()}),
    ("decibel", "level in decibels", "dB", "dB", "dB", {"dB": Unit()}),
    ("number", "plain number", "", "", "", {"": Unit()}),
    ("count", "whole number", "", "", "", {"": Unit()}),
)  # fmt: skip

_BASE = {
    name: Kind(name, label, si, unit, tuple(shown.split()), MappingProxyType(units))
    for name, label, si, unit, shown, units in _ROWS
}


def _inverse_units(kind: Kind) -> dict[str, Unit]:
    return {f"1/{name}": Unit(unit.divide, unit.multiply) for name, unit in kind.units.items() if name}


def _inverse(kind: Kind) -> Kind:
    shown = tuple(f"1/{name}" for name in reversed(kind.shown))
    return Kind(
        f"1/{kind.name}", f"inverse {kind.label}", f"1/{kind.si_unit}", f"1/{kind.unit}", shown, _inverse_units(kind)
    )


def _over(kind: Kind, tail: str, words: str) -> Kind:
    def named(unit: str) -> str:
        return f"{unit or 1}/{tail}"

    units = {named(name): unit for name, unit in kind.units.items()}
    shown = tuple(named(name) for name in kind.shown) or (named(""),)
    return Kind(f"{kind.name}/{tail}", f"{kind.label} per {words}", named(kind.si_unit), named(kind.unit), shown, units)


TAILS = {"rtHz": "root hertz", "K": "kelvin", "s": "second"}
NAMED = {
    "inverse_length": "1/length",
    "per_kelvin": "ratio/K",
    "length_per_kelvin": "length/K",
    "voltage_noise": "voltage/rtHz",
    "current_noise": "current/rtHz",
}
"""Derived kinds with a name of their own."""


@lru_cache(maxsize=256)
def kind_of(name: str) -> Kind:
    """The kind of that name: of the table, or derived from it as "1/<kind>", "<kind>/K", "<kind>/rtHz", "<kind>/s".

    Of a temperature the derived kinds are those of a temperature difference. Raises KeyError for any other name.

    >>> kind_of("angle").a_label
    'an angle'
    >>> sorted(kind_of("1/length").units)[:2], kind_of("current/rtHz").unit
    (['1/cm', '1/km'], 'uA/rtHz')
    """
    if name in _BASE:
        return _BASE[name]
    if name in NAMED:
        return kind_of(NAMED[name])
    head, slash, tail = name.partition("/")
    inner = tail if head == "1" else head
    if not slash or inner not in _BASE or (head != "1" and tail not in TAILS):
        raise KeyError(f"there is no kind of quantity {name!r}; there are: {', '.join(KINDS)}")
    base = _BASE["temperature_difference" if inner == "temperature" else inner]
    if head != "1":
        return _over(base, tail, TAILS[tail])
    return _BASE["number"] if base.plain else _inverse(base)


def is_kind(name: str) -> bool:
    """True where :func:`kind_of` knows the name."""
    try:
        kind_of(name)
    except KeyError:
        return False
    return True


KINDS: tuple[str, ...] = (*_BASE, *NAMED)
"""Names of the kinds, derived ones without a name of their own left out."""
