"""Steady, on-off and synchronous reading: what each keeps of noise, of ambient light, of its ripple and its
drift.

A reading is a weighted mean of the photocurrent over an integration time T, scaled so that the emitter's
full-on photocurrent comes out with gain 1:

    steady   the mean; the emitter is always on
    on-off   mean while on minus mean while off, one pair per reading
    square   the same over N pairs (square drive, square reference)
    sine     drive (1 + sin) / 2, sine reference, N periods

For white noise of one-sided density S the variance is S times the noise bandwidth: 1/(2T), 2/T, 2/T and
4/T. Through a stage of second order, white and rising noise have correlations that are sums of two
exponentials, so the variance is exact in closed form (`receiver.stage_moments`); no band edge is assumed.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

__all__ = [
    "KINDS",
    "RIPPLE_DEPTH",
    "Modulation",
    "boxcar_bandwidth",
    "lamp_ripple",
    "lockin_bandwidth",
    "pole_noise_ratio",
    "slot_time",
    "slots_per_frame",
]

Floats = NDArray[np.float64]

KINDS: Final = ("steady", "on-off", "square", "sine")


@dataclass(frozen=True)
class Modulation:
    """How one reading is taken.

    kind       one of `KINDS`
    duration   integration time T of one reading [s]; for the modulated kinds the whole periods in it count
    frequency  of the modulation [Hz]; for "on-off" it follows from the duration, 1/T
    """

    kind: str
    duration: ArrayLike
    frequency: ArrayLike = 0.0

    def __post_init__(self) -> None:
        if self.kind not in KINDS:
            raise ValueError(f"kind must be one of {', '.join(KINDS)}; got {self.kind!r}")
        if self.kind in ("square", "sine") and np.any(self.periods < 1):
            raise ValueError("the integration time holds less than one period of the modulation")

    @property
    def periods(self) -> Floats:
        """Whole periods N in one reading (1 for on-off, 0 for steady)."""
        if self.kind == "steady":
            return np.zeros(())
        if self.kind == "on-off":
            return np.ones(())
        return np.asarray(np.floor(np.asarray(self.duration, dtype=float) * np.asarray(self.frequency) + 1e-9))

    @property
    def time(self) -> Floats:
        """Time that counts in one reading [s]: the duration, or its whole periods."""
        if self.kind in ("steady", "on-off"):
            return np.asarray(self.duration, dtype=float)
        return np.asarray(self.periods / np.asarray(self.frequency, dtype=float))

    @property
    def period(self) -> Floats:
        """Period of the modulation [s]; the whole reading for steady and on-off."""
        return np.asarray(self.time / np.maximum(self.periods, 1))

    def noise_bandwidth(self) -> Floats:
        """Variance of the reading per one-sided density of white noise [Hz]."""
        factor = {"steady": 0.5, "on-off": 2.0, "square": 2.0, "sine": 4.0}[self.kind]
        return np.asarray(factor / self.time)

    def ambient_share(self) -> float:
        """Share of steady ambient light that stays in the reading: 1 for steady, else 0 (its shot noise
        stays).
        """
        return 1.0 if self.kind == "steady" else 0.0

    def signal_duty(self) -> float:
        """Mean of the emitter's light over a reading, as a share of full on (for shot noise and heat)."""
        return 1.0 if self.kind == "steady" else 0.5

    def intensity_bandwidth(self) -> Floats:
        """Variance of the reading per white intensity noise of the emitter [Hz]: weights times the drive,
        squared.
        """
        factor = {"steady": 0.5, "on-off": 1.0, "square": 1.0, "sine": 1.75}[self.kind]
        return np.asarray(factor / self.time)

    def sample_weight(self) -> float:
        """Variance of a reading over that of the plain mean of its samples, for noise that is new in every
        sample.
        """
        return {"steady": 1.0, "on-off": 4.0, "square": 4.0, "sine": 8.0}[self.kind]

    def leak(self, frequency: ArrayLike) -> Floats:
        """Reading per amplitude of a sinusoidal ripple of ambient light at a frequency [Hz], at the worst
        phase.

        steady          |sinc(f T)|
        on-off, square  2 |tan(pi f P / 2) sinc(f T)|, 4/(pi m) at odd multiples m of 1/P
        sine            4 |sin(pi f T)| / (pi N |1 - (f P)^2|), 2 at 1/P
        """
        f = np.asarray(frequency, dtype=float)
        if self.kind == "steady":
            return np.asarray(np.abs(np.sinc(f * self.time)))
        cycles = f * self.period
        odd = 2 * np.round((cycles - 1) / 2) + 1 if self.kind != "sine" else np.ones_like(cycles)
        at_pole = np.abs(cycles - odd) < 1e-7
        safe = np.where(at_pole, 0.5, cycles)
        if self.kind == "sine":
            wave = np.abs(np.sin(np.pi * safe * self.periods))
            return np.asarray(np.where(at_pole, 2.0, 4 * wave / (np.pi * self.periods * np.abs(1 - safe**2))))
        plain = 2 * np.abs(np.tan(np.pi * safe / 2) * np.sinc(safe * self.periods))
        return np.asarray(np.where(at_pole, 4 / (np.pi * np.abs(odd)), plain))

    def ripple_variance(
        self, ambient: ArrayLike, *, depth: ArrayLike, mains: float = 50.0, tolerance: float = 0.01
    ) -> Floats:
        """Variance [A^2] that the ripple of mains lamps leaves in a reading, its phase being random.

        ambient    mean photocurrent of the lamps [A]
        depth      amplitude of the first harmonic over that mean (see `lamp_ripple`)
        mains      frequency of the mains [Hz]; light ripples at twice that and its harmonics
        tolerance  relative range of the mains frequency over which the leak is averaged

        A reading whose duration is a multiple of the mains period nulls the ripple only as well as the
        mains keeps its frequency, hence the average.
        """
        if not np.any(depth) or not np.any(ambient):
            return np.zeros(np.broadcast_shapes(np.shape(ambient), np.shape(depth), np.shape(self.time)))
        total = np.zeros(())
        for frequency, amplitude in lamp_ripple(mains=mains):
            spread = frequency * (1 + tolerance * np.linspace(-1, 1, 9))
            square = np.mean([self.leak(one) ** 2 for one in spread], axis=0)
            total = total + amplitude**2 / 2 * square
        return np.asarray(total * (np.asarray(ambient, dtype=float) * np.asarray(depth)) ** 2)

    def ramp_leak(self) -> Floats:
        """Reading [A] per slope of the ambient photocurrent [A/s]; P/2 for square, 2P/pi for sine.

        For a steady reading the ramp is followed, and T/2 is how far it lags behind.
        """
        if self.kind == "sine":
            return np.asarray(2 * self.period / np.pi)
        return np.asarray(self.period / 2)

    def flicker_number(self, memory: ArrayLike = 3600.0) -> Floats:
        """Variance of the reading per density of 1/f noise at 1 Hz: integral of G(f)/f, G the response to
        noise power.

        memory  time [s] over which a steady reading must keep its zero; 1/memory is the lower limit of the
                integral. Modulated readings need none.
        """
        if self.kind == "steady":
            x = np.pi * self.time / np.asarray(memory, dtype=float)
            return np.asarray(np.maximum(1.5 - np.euler_gamma - np.log(2 * x), 0.0))
        number = _flicker_sine if self.kind == "sine" else _flicker_square
        counts = np.atleast_1d(self.periods)
        found = {count: number(int(count)) for count in np.unique(counts)}
        return np.asarray(np.vectorize(found.__getitem__, otypes=[float])(self.periods))


FEW_PERIODS: Final = 256
"""Up to so many periods the flicker numbers are integrated; beyond, their limit for many is good to 1 %."""


@cache
def _flicker_square(periods: int) -> float:
    """Integral of 4 tan^2(pi u/2) sinc^2(u N) / u over u = f P; (14 zeta(3)/pi^2)/N for many periods."""
    if periods > FEW_PERIODS:
        return 14 * 1.2020569031595942 / np.pi**2 / periods
    u = (np.arange(400_000) + 0.5) * (40.0 / 400_000)
    power = (2 * np.tan(np.pi * u / 2) * np.sinc(u * periods)) ** 2
    return float(np.sum(power / u) * (40.0 / 400_000))


@cache
def _flicker_sine(periods: int) -> float:
    """Integral of the sine kind's response over u; 4/N for many periods."""
    if periods > FEW_PERIODS:
        return 4.0 / periods
    u = (np.arange(400_000) + 0.5) * (40.0 / 400_000)
    power = (4 * np.sin(np.pi * u * periods) / (np.pi * periods * (1 - u**2))) ** 2
    return float(np.sum(power / u) * (40.0 / 400_000))


def boxcar_bandwidth(duration: ArrayLike) -> Floats:
    """Noise bandwidth [Hz] of a plain mean over a time [s]: 1 / (2 T)."""
    return Modulation("steady", duration).noise_bandwidth()


def lockin_bandwidth(time_constant: ArrayLike, *, poles: int = 1) -> Floats:
    """Noise bandwidth [Hz] of a cascade of equal RC low-passes: 1/4, 1/8, 3/32, 5/64 over RC for 1 to 4
    poles.

    The integral of (1 + (2 pi f RC)^2)^-n. Of a lock-in's output this counts the noise on one side of the
    reference only; both sidebands fold in, which the calibration of the lock-in's gain takes up.
    """
    factor = 0.25
    for n in range(1, poles):
        factor *= (2 * n - 1) / (2 * n)
    return np.asarray(factor / np.asarray(time_constant, dtype=float))


def pole_noise_ratio(poles: int = 1) -> float:
    """Noise bandwidth over 3 dB frequency of a cascade of equal poles: pi/2, 1.2203, ..."""
    corner = np.sqrt(2 ** (1 / poles) - 1) / (2 * np.pi)
    return float(lockin_bandwidth(1.0, poles=poles) / corner)


RIPPLE_END: Final = 2500.0
"""Highest harmonic of mains lamps that matters [Hz]; read in an excerpt of a handbook on photodetection
(2004).
"""

RIPPLE_DEPTH: Mapping[str, float] = {
    "none": 0.0,
    "daylight": 0.0,
    "sun": 0.0,
    "incandescent": 0.1,
    "fluorescent": 0.4,
    "led lamps": 1.0,
}
"""First-harmonic amplitude over the mean by kind of light, at the bad end of usual; from memory."""


def lamp_ripple(*, mains: float = 50.0) -> tuple[tuple[float, float], ...]:
    """Harmonics of mains lamps: (frequency [Hz], amplitude relative to the first), 1/k up to 2.5 kHz.

    The fall with 1/k is common practice for rectified waveforms, no source.
    """
    first = 2 * mains
    return tuple((k * first, 1.0 / k) for k in range(1, int(RIPPLE_END / first) + 1))


def slot_time(*, rate: ArrayLike, channels: ArrayLike, share: ArrayLike = 1.0) -> Floats:
    """Time [s] for one reading when ``channels`` take turns in every report at ``rate`` [Hz].

    share  of the report time left for reading after settling, switching and computing

    >>> float(slot_time(rate=100, channels=200))
    5e-05
    """
    return np.asarray(np.asarray(share, dtype=float) / (np.asarray(rate, dtype=float) * np.asarray(channels)))


def slots_per_frame(*, rate: ArrayLike, reading: ArrayLike, settling: ArrayLike = 0.0) -> NDArray[np.int64]:
    """Readings that fit into one report at ``rate`` [Hz] when each takes its time and settling [s]."""
    each = np.asarray(reading, dtype=float) + np.asarray(settling, dtype=float)
    return np.asarray(np.floor(1 / (np.asarray(rate, dtype=float) * each) + 1e-9), dtype=np.int64)
