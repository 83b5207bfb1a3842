"""The ``[environment]`` section: where the sensor stands and what shines into it."""

from __future__ import annotations

from outcouple.fields import Section, choice, quantity

__all__ = ["Environment"]


class Environment(Section):
    """Where the sensor works."""

    temperature: float = quantity(
        "20 degC",
        "temperature",
        ge="2 K",
        le="800 K",
        describe="temperature of the sensor and of what touches it",
        deciding=True,
    )
    ambient: str = choice(
        "none",
        ["none", "daylight", "sun", "incandescent", "led lamps", "fluorescent"],
        describe="kind of light from outside",
    )
    illuminance: float = quantity(
        "0 lx", "illuminance", ge="0 lx", le="200 klx", describe="of that light on the sensor", unit="lx"
    )
    irradiance: float | None = quantity(
        None,
        "irradiance",
        ge="0 W/m2",
        le="2000 W/m2",
        optional=True,
        describe="of that light within the band the read-out sees, filter included; wins over the illuminance",
    )
    ambient_change: float = quantity(
        "0 %/s",
        "ratio/s",
        ge="0 %/s",
        le="10000 %/s",
        unit="%/s",
        describe="change of that light in a second; a modulated reading keeps what changes within it",
    )
    explosive: str = choice(
        "no", ["no", "yes"], describe="an explosive atmosphere may be present (fuel, solvent, oxygen, dust)"
    )
    fouling: float = quantity(
        "0 %",
        "ratio",
        ge="0 %",
        lt="100 %",
        describe="light an even deposit on the windows takes at each of two passes; what it scatters back is a state",
    )
    service: str = choice(
        "none",
        ["none", "fuel", "solvent", "oxygen", "dust", "food"],
        describe="what the sensor is used on, for the cautions; fuels and solvents among the states are noticed anyway",
    )
    overpressure: float = quantity(
        "0 bar", "pressure", ge="0 bar", le="1000 bar", unit="bar", describe="above the air's, on the wetted part"
    )
    optical_limit: float | None = quantity(
        None,
        "power",
        optional=True,
        gt="0 W",
        le="100 W",
        describe="certified limit of optical power for an explosive atmosphere; this tool holds none of its own",
    )
