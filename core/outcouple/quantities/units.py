"""Kinds of quantities and the units each may be written in: one table, nothing else."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

__all__ = ["KINDS", "Kind", "kind_of"]


@dataclass(frozen=True)
class Kind:
    """One kind of quantity.

    name     as used in models and metrics
    label    with its article, for messages: "a length"
    si       SI unit text
    units    unit text -> (factor, offset): SI = factor * value + offset
    shown    units for display, largest first; the one giving a number from 1 to 1000 is taken
    bare     True where a plain number is allowed
    """

    name: str
    label: str
    si: str
    units: dict[str, tuple[float, float]]
    shown: tuple[str, ...]
    bare: bool = False


def _table(pairs: dict[str, float]) -> dict[str, tuple[float, float]]:
    return {unit: (factor, 0.0) for unit, factor in pairs.items()}


DB = math.log(10) / 10
"""1 dB (optical, 10 log10) per metre is this many 1/m."""

KINDS: dict[str, Kind] = {
    kind.name: kind
    for kind in (
        Kind("number", "a plain number", "", _table({"": 1.0}), ("",), True),
        Kind("count", "a whole number", "", _table({"": 1.0}), ("",), True),
        Kind("ratio", "a ratio", "", _table({"": 1.0, "%": 0.01, "ppm": 1e-6}), ("%",), True),
        Kind(
            "length",
            "a length",
            "m",
            _table({"m": 1.0, "cm": 1e-2, "mm": 1e-3, "um": 1e-6, "nm": 1e-9, "pm": 1e-12, "km": 1e3}),
            ("m", "mm", "um", "nm", "pm"),
        ),
        Kind(
            "area",
            "an area",
            "m2",
            _table({"m2": 1.0, "cm2": 1e-4, "mm2": 1e-6, "um2": 1e-12}),
            ("m2", "cm2", "mm2", "um2"),
        ),
        Kind(
            "volume",
            "a volume",
            "m3",
            _table({"m3": 1.0, "L": 1e-3, "l": 1e-3, "mL": 1e-6, "ml": 1e-6, "uL": 1e-9, "mm3": 1e-9}),
            ("m3", "L", "mL", "uL"),
        ),
        Kind(
            "angle",
            "an angle",
            "rad",
            _table({"rad": 1.0, "mrad": 1e-3, "urad": 1e-6, "deg": math.pi / 180, "°": math.pi / 180}),
            ("deg",),
        ),
        Kind(
            "temperature",
            "a temperature",
            "K",
            {"K": (1.0, 0.0), "degC": (1.0, 273.15), "°C": (1.0, 273.15), "degF": (5 / 9, 273.15 - 160 / 9)},
            ("degC",),
        ),
        Kind(
            "temperature_difference",
            "a temperature difference",
            "K",
            _table({"K": 1.0, "mK": 1e-3}),
            ("K", "mK"),
        ),
        Kind(
            "time",
            "a time",
            "s",
            _table(
                {
                    "s": 1.0,
                    "ms": 1e-3,
                    "us": 1e-6,
                    "ns": 1e-9,
                    "min": 60.0,
                    "h": 3600.0,
                    "d": 86400.0,
                    "yr": 31557600.0,
                }
            ),
            ("s", "ms", "us", "ns"),
        ),
        Kind(
            "frequency",
            "a frequency",
            "Hz",
            _table({"Hz": 1.0, "kHz": 1e3, "MHz": 1e6, "GHz": 1e9, "mHz": 1e-3}),
            ("GHz", "MHz", "kHz", "Hz", "mHz"),
        ),
        Kind(
            "power",
            "a power",
            "W",
            _table({"W": 1.0, "mW": 1e-3, "uW": 1e-6, "nW": 1e-9, "pW": 1e-12, "fW": 1e-15, "kW": 1e3}),
            ("W", "mW", "uW", "nW", "pW", "fW"),
        ),
        Kind(
            "energy",
            "an energy",
            "J",
            _table({"J": 1.0, "mJ": 1e-3, "uJ": 1e-6, "nJ": 1e-9, "pJ": 1e-12}),
            ("J", "mJ", "uJ", "nJ", "pJ"),
        ),
        Kind(
            "current",
            "a current",
            "A",
            _table({"A": 1.0, "mA": 1e-3, "uA": 1e-6, "nA": 1e-9, "pA": 1e-12, "fA": 1e-15}),
            ("A", "mA", "uA", "nA", "pA", "fA"),
        ),
        Kind(
            "voltage",
            "a voltage",
            "V",
            _table({"V": 1.0, "mV": 1e-3, "uV": 1e-6, "nV": 1e-9, "kV": 1e3}),
            ("V", "mV", "uV", "nV"),
        ),
        Kind(
            "resistance",
            "a resistance",
            "ohm",
            _table({"ohm": 1.0, "kohm": 1e3, "Mohm": 1e6, "Gohm": 1e9, "Ω": 1.0, "kΩ": 1e3, "MΩ": 1e6}),
            ("Gohm", "Mohm", "kohm", "ohm"),
        ),
        Kind(
            "capacitance",
            "a capacitance",
            "F",
            _table({"F": 1.0, "mF": 1e-3, "uF": 1e-6, "nF": 1e-9, "pF": 1e-12, "fF": 1e-15}),
            ("uF", "nF", "pF", "fF"),
        ),
        Kind(
            "irradiance",
            "an irradiance",
            "W/m2",
            _table(
                {
                    "W/m2": 1.0,
                    "mW/m2": 1e-3,
                    "kW/m2": 1e3,
                    "mW/cm2": 10.0,
                    "W/cm2": 1e4,
                    "mW/mm2": 1e3,
                    "uW/cm2": 1e-2,
                }
            ),
            ("kW/m2", "W/m2", "mW/m2"),
        ),
        Kind(
            "radiance",
            "a radiance",
            "W/m2/sr",
            _table({"W/m2/sr": 1.0, "mW/m2/sr": 1e-3, "W/cm2/sr": 1e4}),
            ("W/m2/sr", "mW/m2/sr"),
        ),
        Kind(
            "illuminance", "an illuminance", "lx", _table({"lx": 1.0, "klx": 1e3, "mlx": 1e-3}), ("klx", "lx")
        ),
        Kind(
            "attenuation",
            "an attenuation",
            "1/m",
            _table(
                {
                    "1/m": 1.0,
                    "1/cm": 100.0,
                    "1/mm": 1e3,
                    "dB/m": DB,
                    "dB/cm": 100 * DB,
                    "dB/mm": 1e3 * DB,
                    "dB/km": DB / 1e3,
                }
            ),
            ("dB/m",),
        ),
        Kind(
            "inverse_length",
            "an inverse length",
            "1/m",
            _table({"1/m": 1.0, "1/cm": 100.0, "1/mm": 1e3}),
            ("1/cm",),
        ),
        Kind(
            "pressure",
            "a pressure",
            "Pa",
            _table({"Pa": 1.0, "hPa": 100.0, "kPa": 1e3, "MPa": 1e6, "GPa": 1e9, "bar": 1e5, "mbar": 100.0}),
            ("GPa", "MPa", "kPa", "Pa"),
        ),
        Kind(
            "force",
            "a force",
            "N",
            _table({"N": 1.0, "mN": 1e-3, "uN": 1e-6, "nN": 1e-9, "kN": 1e3}),
            ("kN", "N", "mN", "uN", "nN"),
        ),
        Kind("density", "a density", "kg/m3", _table({"kg/m3": 1.0, "g/cm3": 1e3, "kg/L": 1e3}), ("kg/m3",)),
        Kind(
            "viscosity",
            "a viscosity",
            "Pa.s",
            _table({"Pa.s": 1.0, "mPa.s": 1e-3, "cP": 1e-3}),
            ("Pa.s", "mPa.s"),
        ),
        Kind("surface_tension", "a surface tension", "N/m", _table({"N/m": 1.0, "mN/m": 1e-3}), ("mN/m",)),
        Kind(
            "speed",
            "a speed",
            "m/s",
            _table(
                {"m/s": 1.0, "cm/s": 1e-2, "mm/s": 1e-3, "um/s": 1e-6, "m/h": 1 / 3600, "mm/min": 1e-3 / 60}
            ),
            ("m/s", "mm/s", "um/s"),
        ),
        Kind(
            "flow",
            "a flow",
            "m3/s",
            _table(
                {
                    "m3/s": 1.0,
                    "m3/h": 1 / 3600,
                    "L/h": 1e-3 / 3600,
                    "L/min": 1e-3 / 60,
                    "mL/min": 1e-6 / 60,
                    "mL/h": 1e-6 / 3600,
                    "mL/s": 1e-6,
                }
            ),
            ("L/h", "mL/h"),
        ),
        Kind(
            "stiffness",
            "a stiffness",
            "N/m",
            _table({"N/m": 1.0, "N/mm": 1e3, "N/um": 1e6, "mN/um": 1e3, "kN/m": 1e3}),
            ("N/um", "N/mm", "N/m"),
        ),
        Kind(
            "per_kelvin",
            "a temperature coefficient",
            "1/K",
            _table({"1/K": 1.0, "%/K": 0.01, "ppm/K": 1e-6}),
            ("%/K", "ppm/K"),
        ),
        Kind(
            "length_per_kelvin",
            "a length per kelvin",
            "m/K",
            _table({"m/K": 1.0, "mm/K": 1e-3, "um/K": 1e-6, "nm/K": 1e-9, "pm/K": 1e-12}),
            ("mm/K", "um/K", "nm/K", "pm/K"),
        ),
        Kind(
            "voltage_noise",
            "a voltage noise density",
            "V/rtHz",
            _table({"V/rtHz": 1.0, "uV/rtHz": 1e-6, "nV/rtHz": 1e-9}),
            ("uV/rtHz", "nV/rtHz"),
        ),
        Kind(
            "current_noise",
            "a current noise density",
            "A/rtHz",
            _table({"A/rtHz": 1.0, "nA/rtHz": 1e-9, "pA/rtHz": 1e-12, "fA/rtHz": 1e-15, "aA/rtHz": 1e-18}),
            ("nA/rtHz", "pA/rtHz", "fA/rtHz", "aA/rtHz"),
        ),
        Kind("intensity_noise", "a relative intensity noise", "1/Hz", _table({"1/Hz": 1.0}), ("1/Hz",)),
        Kind("responsivity", "a responsivity", "A/W", _table({"A/W": 1.0, "mA/W": 1e-3}), ("A/W",)),
        Kind(
            "electrons",
            "a number of electrons",
            "e-",
            _table({"e-": 1.0, "ke-": 1e3, "Me-": 1e6}),
            ("Me-", "ke-", "e-"),
        ),
        Kind(
            "electron_rate",
            "electrons per second",
            "e-/s",
            _table({"e-/s": 1.0, "ke-/s": 1e3}),
            ("ke-/s", "e-/s"),
        ),
        Kind("gain", "a camera gain", "DN/e-", _table({"DN/e-": 1.0}), ("DN/e-",)),
        Kind("decibel", "a level difference in decibels", "dB", _table({"dB": 1.0}), ("dB",)),
    )
}
"""Every kind of quantity by name."""


@lru_cache(maxsize=None)
def kind_of(name: str) -> Kind:
    """The kind of that name; KeyError names the kinds there are."""
    if name not in KINDS:
        raise KeyError(f"no kind of quantity {name!r}; there are: {', '.join(KINDS)}")
    return KINDS[name]
