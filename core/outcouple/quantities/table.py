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
            return 10.0 * math.log10(value)
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


PREFIXES = {"a": -18, "f": -15, "p": -12, "n": -9, "u": -6, "m": -3, "c": -2, "": 0, "k": 3, "M": 6, "G": 9}


def _power(exponent: int) -> Unit:
    return Unit(multiply=10.0**exponent) if exponent >= 0 else Unit(divide=10.0**-exponent)


def _metric(base: str, prefixes: str, tail: str = "") -> dict[str, Unit]:
    """``base`` with each prefix, "-" standing for none: _metric("m", "um-") gives um, mm, m."""
    names = ["" if prefix == "-" else prefix for prefix in prefixes]
    return {f"{name}{base}{tail}": _power(PREFIXES[name]) for name in names}


PER_DECIBEL = math.log(10.0) / 10.0
"""Attenuation of optical power per decibel: P ~ exp(-a z), and 10 log10 of the power ratio in dB."""

RATIO = {"": Unit(), "%": Unit(divide=100.0), "ppm": Unit(divide=1e6)}
LITRE_PER_HOUR = Unit(divide=3.6e6)


def _kind(name: str, label: str, si: str, unit: str, shown: str, *units: Mapping[str, Unit]) -> tuple[str, Kind]:
    table: dict[str, Unit] = {}
    for part in units:
        table.update(part)
    return name, Kind(name, label, si, unit, tuple(shown.split()), MappingProxyType(table))


# Where two kinds share a unit, the first names it in messages ("5 K" is a temperature).
_BASE: dict[str, Kind] = dict(
    [
        _kind("length", "length", "m", "mm", "pm nm um mm m", _metric("m", "pnumc-k")),
        _kind(
            "area",
            "area",
            "m2",
            "mm2",
            "um2 mm2 cm2 m2",
            {"um2": _power(-12), "mm2": _power(-6), "cm2": _power(-4), "m2": Unit()},
        ),
        _kind(
            "volume",
            "volume",
            "m3",
            "mL",
            "nL uL mL L m3",
            {"nL": _power(-12), "uL": _power(-9), "mL": _power(-6), "L": _power(-3), "m3": Unit()},
            {"mm3": _power(-9), "cm3": _power(-6)},
        ),
        _kind(
            "angle",
            "angle",
            "rad",
            "deg",
            "urad mrad deg",
            {"deg": Unit(math.pi, 180.0), "arcmin": Unit(math.pi, 10800.0), "arcsec": Unit(math.pi, 648000.0)},
            _metric("rad", "um-"),
        ),
        _kind("solid_angle", "solid angle", "sr", "sr", "usr msr sr", _metric("sr", "um-")),
        _kind(
            "temperature",
            "temperature",
            "K",
            "degC",
            "degC",
            {"K": Unit(), "degC": Unit(offset=273.15), "degF": Unit(5.0, 9.0, 459.67 * 5.0 / 9.0)},
        ),
        _kind("temperature_difference", "temperature difference", "K", "K", "mK K", _metric("K", "m-")),
        _kind(
            "time",
            "time",
            "s",
            "ms",
            "ps ns us ms s",
            _metric("s", "pnum-"),
            {"min": Unit(60.0), "h": Unit(3600.0), "d": Unit(86400.0), "yr": Unit(31557600.0)},
        ),
        _kind("frequency", "frequency", "Hz", "Hz", "mHz Hz kHz MHz GHz", _metric("Hz", "m-kMG")),
        _kind("rate", "rate", "1/s", "1/s", "1/s", {
            "1/s": Unit(), "1/min": Unit(divide=60.0), "1/h": Unit(divide=3600.0), "1/d": Unit(divide=86400.0),
            "1/yr": Unit(divide=31557600.0),
        }),
        _kind("power", "power", "W", "mW", "fW pW nW uW mW W", _metric("W", "fpnum-k")),
        _kind("energy", "energy", "J", "mJ", "fJ pJ nJ uJ mJ J", _metric("J", "fpnum-k")),
        _kind("current", "current", "A", "uA", "aA fA pA nA uA mA A", _metric("A", "afpnum-")),
        _kind("voltage", "voltage", "V", "V", "nV uV mV V kV", _metric("V", "num-k")),
        _kind("resistance", "resistance", "ohm", "kohm", "mohm ohm kohm Mohm Gohm", _metric("ohm", "m-kMG")),
        _kind("capacitance", "capacitance", "F", "pF", "fF pF nF uF F", _metric("F", "fpnum-")),
        _kind(
            "irradiance",
            "irradiance",
            "W/m2",
            "W/m2",
            "nW/m2 uW/m2 mW/m2 W/m2 kW/m2",
            _metric("W", "num-k", "/m2"),
            {"uW/cm2": Unit(divide=100.0), "mW/cm2": Unit(10.0), "W/cm2": Unit(1e4), "mW/mm2": Unit(1e3)},
        ),
        _kind(
            "radiance",
            "radiance",
            "W/m2/sr",
            "W/m2/sr",
            "nW/m2/sr uW/m2/sr mW/m2/sr W/m2/sr kW/m2/sr",
            _metric("W", "num-k", "/m2/sr"),
            {"mW/cm2/sr": Unit(10.0), "W/cm2/sr": Unit(1e4)},
        ),
        _kind("radiant_intensity", "intensity", "W/sr", "mW/sr", "nW/sr uW/sr mW/sr W/sr", _metric("W", "num-", "/sr")),
        _kind("illuminance", "illuminance", "lx", "lx", "lx klx", _metric("lx", "m-k")),
        _kind("ratio", "ratio", "", "%", "%", RATIO),
        _kind(
            "attenuation",
            "attenuation",
            "1/m",
            "dB/m",
            "dB/m",
            {"dB/mm": Unit(1e3 * PER_DECIBEL), "dB/cm": Unit(100.0 * PER_DECIBEL), "dB/m": Unit(PER_DECIBEL)},
            {"dB/km": Unit(PER_DECIBEL, 1e3), "1/m": Unit(), "1/cm": Unit(100.0), "1/mm": Unit(1e3)},
            {"%/m": Unit(divide=100.0), "%/cm": Unit()},
        ),
        _kind("pressure", "pressure", "Pa", "kPa", "mPa Pa kPa MPa GPa", _metric("Pa", "m-kMG"),
              {"hPa": Unit(100.0), "mbar": Unit(100.0), "bar": Unit(1e5)}),
        _kind("force", "force", "N", "N", "nN uN mN N kN", _metric("N", "num-k")),
        _kind(
            "mass",
            "mass",
            "kg",
            "g",
            "ug mg g kg",
            {"ug": _power(-9), "mg": _power(-6), "g": _power(-3), "kg": Unit()},
        ),
        _kind("density", "density", "kg/m3", "kg/m3", "kg/m3", {
            "kg/m3": Unit(), "g/L": Unit(), "g/mL": Unit(1e3), "g/cm3": Unit(1e3), "kg/L": Unit(1e3),
        }),
        _kind("viscosity", "viscosity", "Pa.s", "mPa.s", "uPa.s mPa.s Pa.s", _metric("Pa.s", "um-"), {
            "cP": _power(-3),
        }),
        _kind("surface_tension", "surface tension", "N/m", "mN/m", "mN/m N/m", _metric("N", "m-", "/m")),
        _kind("speed", "speed", "m/s", "mm/s", "nm/s um/s mm/s m/s", _metric("m", "numc-", "/s"), {
            "mm/min": Unit(divide=6e4), "m/min": Unit(divide=60.0), "mm/h": Unit(divide=3.6e6),
            "m/h": Unit(divide=3600.0),
        }),
        _kind("flow", "flow", "m3/s", "L/h", "mL/h L/h m3/h", {
            "m3/s": Unit(), "m3/h": Unit(divide=3600.0), "L/h": LITRE_PER_HOUR, "mL/h": Unit(divide=3.6e9),
            "L/s": _power(-3), "mL/s": _power(-6), "L/min": Unit(divide=6e4), "mL/min": Unit(divide=6e7),
        }),
        _kind("stiffness", "stiffness", "N/m", "N/um", "N/m N/mm N/um", {
            "N/m": Unit(), "mN/m": _power(-3), "kN/m": Unit(1e3), "N/mm": Unit(1e3), "N/um": Unit(1e6),
            "mN/um": Unit(1e3), "uN/nm": Unit(1e3),
        }),
        _kind(
            "relative_intensity_noise",
            "relative intensity noise",
            "1/Hz",
            "dB/Hz",
            "dB/Hz",
            # variance of P / mean P per bandwidth; in dB as 10 log10 of that variance, i.e. of electrical power
            {"1/Hz": Unit(), "dB/Hz": Unit(decibel=True)},
        ),
        _kind("responsivity", "responsivity", "A/W", "A/W", "uA/W mA/W A/W", _metric("A", "um-", "/W")),
        _kind("gain", "gain", "DN/e-", "DN/e-", "DN/e-", {"DN/e-": Unit()}),
        _kind("conversion", "conversion gain", "V/e-", "uV/e-", "uV/e-", _metric("V", "num-", "/e-")),
        _kind("electrons", "number of electrons", "e-", "e-", "e- ke- Me-", _metric("e-", "-kM")),
        _kind("electron_rate", "electron rate", "e-/s", "e-/s", "e-/s ke-/s Me-/s", _metric("e-", "-kM", "/s")),
        _kind("digital_number", "digital number", "DN", "DN", "DN", {"DN": Unit()}),
        _kind("decibel", "level in decibels", "dB", "dB", "dB", {"dB": Unit()}),
        _kind("number", "plain number", "", "", "", {"": Unit()}),
        _kind("count", "whole number", "", "", "", {"": Unit()}),
    ]
)  # fmt: skip


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
