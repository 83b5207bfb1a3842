"""The transimpedance stage: bandwidth, stability, noise gain, settling and headroom of a real second-order
loop.

The amplifier is an integrator, A = 2 pi GBW / s (one dominant pole far below, no second pole in reach); the
feedback is R parallel C_f; everything at the input is one capacitance C_in. Then the closed loop is exactly
of second order:

    Z(s) = R / D(s),  D = 1 + s / (w0 Q) + s^2 / w0^2
    w0^2 = 2 pi GBW / (R (C_in + C_f)),  1 / (w0 Q) = R C_f + 1 / (2 pi GBW)

and amplifier voltage noise appears at the input as a current e_n (1 + s R (C_in + C_f)) / R, also behind 1/D.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from outcouple.readout.noise import thermal_current_density

__all__ = [
    "Transimpedance",
    "compensation_for",
    "compensation_intercept",
    "compensation_rule",
]

Floats = NDArray[np.float64]
Complexes = NDArray[np.complex128]


@dataclass(frozen=True)
class Transimpedance:
    """One stage; every number may be an array over samples and channels.

    resistance            feedback R [ohm]
    feedback_capacitance  parallel to it, C_f [F], strays included
    gain_bandwidth        of the amplifier, GBW [Hz]
    input_capacitance     diode + amplifier (differential and common mode) + wiring, C_in [F]
    voltage_noise         white density e_n [V/sqrt(Hz)]
    current_noise         white density i_n [A/sqrt(Hz)]
    voltage_corner        frequency where 1/f voltage noise equals the white [Hz]
    current_corner        the same for current noise [Hz]
    temperature           of the resistor [K]
    swing                 largest output voltage [V]
    """

    resistance: ArrayLike
    feedback_capacitance: ArrayLike
    gain_bandwidth: ArrayLike
    input_capacitance: ArrayLike
    voltage_noise: ArrayLike = 0.0
    current_noise: ArrayLike = 0.0
    voltage_corner: ArrayLike = 0.0
    current_corner: ArrayLike = 0.0
    temperature: ArrayLike = 293.15
    swing: ArrayLike = 3.0

    @property
    def natural_frequency(self) -> Floats:
        """w0 / (2 pi) [Hz]."""
        return np.asarray(
            np.sqrt(
                np.asarray(self.gain_bandwidth, dtype=float)
                / (2 * np.pi * np.asarray(self.resistance) * self.total_capacitance)
            )
        )

    @property
    def total_capacitance(self) -> Floats:
        """C_in + C_f [F]."""
        return np.asarray(np.asarray(self.input_capacitance, dtype=float) + np.asarray(self.feedback_capacitance))

    @property
    def quality(self) -> Floats:
        """Q of the closed loop; above 0.707 the response peaks, above 0.5 the step rings."""
        lag = np.asarray(self.resistance, dtype=float) * np.asarray(self.feedback_capacitance)
        lag = lag + 1 / (2 * np.pi * np.asarray(self.gain_bandwidth))
        return np.asarray(1 / (2 * np.pi * self.natural_frequency * lag))

    @property
    def noise_gain_zero(self) -> Floats:
        """Frequency [Hz] from which amplifier voltage noise rises: 1 / (2 pi R (C_in + C_f))."""
        return np.asarray(1 / (2 * np.pi * np.asarray(self.resistance, dtype=float) * self.total_capacitance))

    @property
    def noise_gain_pole(self) -> Floats:
        """Frequency [Hz] at which it stops rising: 1 / (2 pi R C_f)."""
        with np.errstate(divide="ignore"):
            lag = np.asarray(self.resistance, dtype=float) * np.asarray(self.feedback_capacitance)
            return np.asarray(1 / (2 * np.pi * lag))

    @property
    def noise_gain_plateau(self) -> Floats:
        """Noise gain above the pole: 1 + C_in / C_f."""
        with np.errstate(divide="ignore"):
            ratio = np.asarray(self.input_capacitance, dtype=float) / np.asarray(self.feedback_capacitance)
        return np.asarray(1 + ratio)

    @property
    def intercept(self) -> Floats:
        """Where the plateau meets the amplifier's gain [Hz]: GBW C_f / (C_in + C_f)."""
        share = np.asarray(self.feedback_capacitance, dtype=float) / self.total_capacitance
        return np.asarray(np.asarray(self.gain_bandwidth) * share)

    def noise_gain(self, frequency: ArrayLike) -> Floats:
        """|1 + s R (C_in + C_f)| / |1 + s R C_f|: amplifier voltage noise to output, the amplifier being
        fast.
        """
        f = np.asarray(frequency, dtype=float)
        return np.asarray(np.abs(1 + 1j * f / self.noise_gain_zero) / np.abs(1 + 1j * f / self.noise_gain_pole))

    def response(self, frequency: ArrayLike) -> Complexes:
        """Z / R at a frequency [Hz], complex (convention exp(+j w t) of circuit theory)."""
        x = np.asarray(frequency, dtype=float) / self.natural_frequency
        return np.asarray(1 / (1 + 1j * x / self.quality - x**2))

    def bandwidth(self) -> Floats:
        """Frequency [Hz] at which |Z| is 3 dB (half the power) down."""
        bend = 1 - 1 / (2 * self.quality**2)
        return np.asarray(self.natural_frequency * np.sqrt(bend + np.sqrt(bend**2 + 1)))

    def noise_bandwidth(self) -> Floats:
        """Equivalent noise bandwidth [Hz] of |Z|^2 for white current noise: (pi/2) f0 Q, exact."""
        return np.asarray(np.pi / 2 * self.natural_frequency * self.quality)

    def phase_margin(self) -> Floats:
        """Phase margin [rad], exact: 90 deg - atan(w b) + atan(w a) where the loop gain is 1.

        a = R C_f, b = R (C_in + C_f); |loop| = 1 gives b^2 x^2 + (1 - g^2 a^2) x - g^2 = 0 with x = w^2 and
        g = 2 pi GBW.
        """
        return _margin(self.resistance, self.feedback_capacitance, self.gain_bandwidth, self.input_capacitance)

    def settling_time(self, error: ArrayLike) -> Floats:
        """Time [s] after which a step stays within a relative ``error``: an upper bound, tight to a few
        percent.

        The error of a second-order step never exceeds exp(-d t) times the smaller of 1 + d' t and a
        constant; d is the decay of the slower pole.
        """
        slow, fast = self.poles()
        decay = np.real(slow)
        ring = np.abs(slow.imag) > 1e-9 * decay
        with np.errstate(divide="ignore", over="ignore"):
            sine = np.where(ring, np.abs(slow.imag) / np.abs(slow), 1.0)
            spread = np.where(ring, 1 / sine, np.real(fast) / np.maximum(np.real(fast) - decay, 1e-300))
        goal = np.asarray(error, dtype=float)
        envelope = np.log(np.maximum(spread / goal, 1.0))
        linear = np.log(1 / goal)
        for _ in range(60):
            linear = np.log((1 + linear) / goal)
        return np.asarray(np.minimum(envelope, linear) / decay)

    def poles(self) -> tuple[Complexes, Complexes]:
        """Decay constants p of the closed loop [1/s], slower first: D(s) = (1 + s/p1)(1 + s/p2).

        Equal poles are split by 1e-5 of their size (an error of 1e-10), so that partial fractions stay
        finite.
        """
        w0 = 2 * np.pi * self.natural_frequency
        half = 1 / (2 * self.quality)
        square = half**2 - 1
        square = np.where(np.abs(square) < 1e-10, 1e-10, square)
        root = np.sqrt(square.astype(complex))
        fast = w0 * (half + root)
        return np.asarray(w0**2 / fast), np.asarray(fast)

    def full_scale(self) -> Floats:
        """Photocurrent [A] that drives the output to its swing: swing / R."""
        return np.asarray(np.asarray(self.swing, dtype=float) / np.asarray(self.resistance))

    def headroom(self, current: ArrayLike) -> Floats:
        """Full scale over the largest total current (signal + ambient + dark) [A]; below 1 the stage
        saturates.
        """
        with np.errstate(divide="ignore"):
            return np.asarray(self.full_scale() / np.asarray(current, dtype=float))

    def white_densities(self) -> dict[str, Floats]:
        """White input-referred noise power densities by cause [A^2/Hz]."""
        voltage = np.asarray(self.voltage_noise, dtype=float) / np.asarray(self.resistance)
        return {
            "resistor thermal": thermal_current_density(self.resistance, temperature=self.temperature) ** 2,
            "amplifier voltage": np.asarray(voltage**2),
            "amplifier current": np.asarray(self.current_noise, dtype=float) ** 2,
        }

    def rising_density(self) -> Floats:
        """Factor of f^2 in the input-referred density of amplifier voltage noise [A^2/Hz^3]: (2 pi e_n
        C)^2.
        """
        return np.asarray((2 * np.pi * np.asarray(self.voltage_noise, dtype=float) * self.total_capacitance) ** 2)

    def output_noise(self, frequency: ArrayLike) -> dict[str, Floats]:
        """Output noise densities by cause [V/sqrt(Hz)] at a frequency [Hz], 1/f parts in with their
        amplifier.
        """
        f = np.asarray(frequency, dtype=float)
        gain = np.abs(self.response(f)) * np.asarray(self.resistance)
        white = self.white_densities()
        voltage = (white["amplifier voltage"] + self.rising_density() * f**2) * (
            1 + np.asarray(self.voltage_corner) / f
        )
        current = white["amplifier current"] * (1 + np.asarray(self.current_corner) / f)
        parts = {
            "resistor thermal": white["resistor thermal"],
            "amplifier voltage": voltage,
            "amplifier current": current,
        }
        return {cause: np.asarray(np.sqrt(density) * gain) for cause, density in parts.items()}


def _margin(
    resistance: ArrayLike, feedback: ArrayLike, gain_bandwidth: ArrayLike, input_capacitance: ArrayLike
) -> Floats:
    r, g = np.asarray(resistance, dtype=float), 2 * np.pi * np.asarray(gain_bandwidth, dtype=float)
    a = r * np.asarray(feedback)
    b = a + r * np.asarray(input_capacitance)
    middle = 1 - (g * a) ** 2
    # The positive root of the quadratic, in the form that cancels nowhere.
    large = np.abs(middle) + np.sqrt(middle**2 + 4 * (b * g) ** 2)
    square = np.where(middle >= 0, 2 * g**2 / large, large / (2 * b**2))
    w = np.sqrt(square)
    return np.asarray(np.pi / 2 - np.arctan(w * b) + np.arctan(w * a))


def compensation_rule(*, resistance: ArrayLike, gain_bandwidth: ArrayLike, input_capacitance: ArrayLike) -> Floats:
    """Rule-of-thumb C_f [F] for about 45 deg of phase margin, C_f well below C_in: sqrt(C_in / (2 pi R
    GBW)).
    """
    return np.asarray(
        np.sqrt(
            np.asarray(input_capacitance, dtype=float)
            / (2 * np.pi * np.asarray(resistance) * np.asarray(gain_bandwidth))
        )
    )


def compensation_intercept(*, resistance: ArrayLike, gain_bandwidth: ArrayLike, input_capacitance: ArrayLike) -> Floats:
    """C_f [F] that puts the noise-gain pole on the intercept with the amplifier's gain.

    C_f = (1 + sqrt(1 + 8 pi R C_in GBW)) / (4 pi R GBW), the root of 2 pi R GBW C_f^2 = C_in + C_f.
    Reference: straight-line (Bode) construction, handbooks on photodiode amplifiers. The exact margin there
    lies above 45 deg.
    """
    product = np.asarray(resistance, dtype=float) * np.asarray(gain_bandwidth)
    root = np.sqrt(1 + 8 * np.pi * product * np.asarray(input_capacitance))
    return np.asarray((1 + root) / (4 * np.pi * product))


def compensation_for(
    margin: ArrayLike, *, resistance: ArrayLike, gain_bandwidth: ArrayLike, input_capacitance: ArrayLike
) -> Floats:
    """Smallest C_f [F] with a given phase margin [rad], by halving on the exact margin; 0 where none is
    needed.

    The margin grows with C_f towards 90 deg, so any margin below that can be had.
    """
    r, g, c = np.broadcast_arrays(
        np.asarray(resistance, dtype=float),
        np.asarray(gain_bandwidth, dtype=float),
        np.asarray(input_capacitance, dtype=float),
    )
    goal = np.asarray(margin, dtype=float)
    if np.any((goal <= 0) | (goal >= np.pi / 2)):
        raise ValueError("a phase margin lies between 0 and 90 deg")
    start = np.log(compensation_intercept(resistance=r, gain_bandwidth=g, input_capacitance=c))
    low, high = start - 30.0 + 0 * goal, start + 30.0 + 0 * goal
    for _ in range(60):
        middle = (low + high) / 2
        enough = _margin(r, np.exp(middle), g, c) >= goal
        low, high = np.where(enough, low, middle), np.where(enough, middle, high)
    return np.asarray(np.where(_margin(r, np.zeros_like(r), g, c) >= goal, 0.0, np.exp(high)))
