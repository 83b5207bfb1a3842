"""From noise and levels to false alarms, misses and times.

Everything is exact for Gaussian noise. Real noise is not Gaussian at six or seven standard deviations, so
small rates are design floors, not promises.
"""

from __future__ import annotations

import math
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

__all__ = [
    "SECONDS_PER_YEAR",
    "any_of",
    "at_least_channels",
    "confirmed_probability",
    "correlated_probability",
    "crossing_rate",
    "crossing_threshold",
    "equal_error_level",
    "hysteresis_levels",
    "inverse_confirmed",
    "inverse_tail",
    "minimum_error_level",
    "needed_separation",
    "noise_level",
    "onset_probability",
    "per_decision",
    "per_year",
    "release_time",
    "response_time",
    "tail_probability",
    "threshold_for",
]

Floats = NDArray[np.float64]

SECONDS_PER_YEAR: Final = 365.25 * 86400.0

FARTHEST: Final = 40.0
"""Standard deviations beyond which Gaussian chances are zero or one in double precision."""
_erfc = np.frompyfunc(math.erfc, 1, 1)


def tail_probability(z: ArrayLike) -> Floats:
    """Chance that Gaussian noise exceeds z standard deviations: Q(z) = erfc(z / sqrt 2) / 2.

    Any shape; zero beyond about 38. Reference: Abramowitz and Stegun, Handbook of Mathematical Functions,
    26.2.3.

    >>> float(tail_probability(3.0))
    0.0013498980316300957
    """
    return np.asarray(0.5 * np.asarray(_erfc(np.asarray(z, dtype=float) / math.sqrt(2.0)), dtype=float))


def inverse_tail(probability: ArrayLike) -> Floats:
    """The z that Gaussian noise exceeds with a given probability, Q(z) = p; any shape.

    Start: the rational fit 26.2.23 of Abramowitz and Stegun (error below 4.5e-4); then Newton's rule on log
    Q, good to 1e-12 from p = 1e-300 up. 0 gives infinity, 1 minus infinity, anything outside is nan.

    >>> round(float(inverse_tail(1e-9)), 12)
    5.997807015008
    """
    p = np.asarray(probability, dtype=float)
    upper = p > 0.5
    tail = np.where(upper, 1 - p, p)
    inside = (tail > 0) & (tail <= 0.5)
    q = np.where(inside, tail, 0.5)
    t = np.sqrt(-2 * np.log(q))
    z = t - (2.515517 + t * (0.802853 + t * 0.010328)) / (1 + t * (1.432788 + t * (0.189269 + t * 0.001308)))
    for _ in range(3):
        q_now = tail_probability(z)
        z = z + (np.log(q_now) - np.log(q)) * q_now / (np.exp(-(z**2) / 2) / math.sqrt(2 * math.pi))
    z = np.where(inside, z, np.where(tail == 0, np.inf, np.nan))
    return np.asarray(np.where(upper, -z, z))


def needed_separation(*, false_alarm: ArrayLike, detection: ArrayLike) -> Floats:
    """Distance between two states in standard deviations for given chances per reading: Q^-1(P_fa) -
    Q^-1(P_d).
    """
    return np.asarray(inverse_tail(false_alarm) - inverse_tail(detection))


def any_of(probability: ArrayLike, count: ArrayLike) -> Floats:
    """Chance that at least one of ``count`` independent readings fires: 1 - (1 - p)^count, exact for tiny p.

    >>> float(any_of(1e-20, 1000))
    1e-17
    """
    with np.errstate(divide="ignore"):
        return np.asarray(-np.expm1(np.asarray(count) * np.log1p(-np.asarray(probability, dtype=float))))


def confirmed_probability(probability: ArrayLike, confirm: int, window: int) -> Floats:
    """Chance that at least ``confirm`` of ``window`` independent readings fire (upper binomial tail, all
    terms positive).

    probability  per reading, any shape. Range: independent readings; see `correlated_probability` where
                 they are not.

    >>> float(confirmed_probability(0.1, 2, 3))
    0.028
    """
    p = np.asarray(probability, dtype=float)
    if confirm <= 0:
        return np.ones_like(p)
    if confirm > window:
        return np.zeros_like(p)
    with np.errstate(divide="ignore", invalid="ignore"):
        hit, miss = np.log(p), np.log1p(-p)
    total = np.zeros_like(p)
    for hits in range(confirm, window + 1):
        last = 0.0 if hits == window else (window - hits) * miss
        term = np.exp(math.log(math.comb(window, hits)) + hits * hit + last)
        total = total + term
        if hits > window * float(np.max(p, initial=0.0)) and np.all(term <= 1e-18 * total):
            break
    return np.asarray(np.where(p >= 1, 1.0, np.minimum(total, 1.0)))


def inverse_confirmed(probability: ArrayLike, confirm: int, window: int) -> Floats:
    """Chance per reading at which ``confirm`` of ``window`` come true with a given probability.

    Newton's rule in logarithms from (P / C(n, k))^(1/k). The tail is concave in log p, so the steps rise to
    the root and cannot pass it.
    """
    if not 1 <= confirm <= window:
        raise ValueError(f"confirm must lie between 1 and the window, {window}; got {confirm}")
    target = np.asarray(probability, dtype=float)
    ways = math.log(math.comb(window, confirm))
    inner = math.log(window * math.comb(window - 1, confirm - 1))
    goal = np.log(np.clip(target, 1e-300, 1.0))
    log_p = (goal - ways) / confirm
    for _ in range(200):
        p = np.minimum(np.exp(log_p), 1.0)
        now = np.log(confirmed_probability(p, confirm, window))
        with np.errstate(divide="ignore", invalid="ignore"):
            slope = (
                np.exp(inner + confirm * log_p + (window - confirm) * np.log1p(-p) - now)
                if window > confirm
                else confirm
            )
            step = np.where(goal > now, (goal - now) / slope, 0.0)
        step = np.where(np.isfinite(step), step, 0.0)
        log_p = np.minimum(log_p + step, 0.0)
        if np.all(step < 1e-14):
            break
    return np.asarray(np.where(target >= 1, 1.0, np.where(target <= 0, 0.0, np.exp(log_p))))


def correlated_probability(z: ArrayLike, confirm: int, window: int, *, correlation: float) -> Floats:
    """Chance that ``confirm`` of ``window`` equally correlated Gaussian readings exceed z.

    Each reading is sqrt(rho) times a part common to all plus sqrt(1 - rho) times its own (rho =
    ``correlation``, 0 to 1); the chance is averaged over the common part by the trapezoid rule, exact to
    rounding for a smooth integrand. Slow noise and common drift do not average away: at rho = 1 confirming
    is useless and Q(z) comes back.
    """
    threshold = np.clip(np.asarray(z, dtype=float), -FARTHEST, FARTHEST)
    if not 0 <= correlation <= 1:
        raise ValueError(f"correlation must lie between 0 and 1; got {correlation}")
    if correlation == 0:
        return confirmed_probability(tail_probability(threshold), confirm, window)
    if correlation == 1:
        return tail_probability(threshold)
    common, own = math.sqrt(correlation), math.sqrt(1 - correlation)
    step = min(0.1, 0.3 * own / common)
    reach = 9.0 + float(np.max(np.abs(threshold), initial=0.0))
    total = np.zeros_like(threshold)
    for node in np.arange(-reach, reach + step, step):
        weight = step * math.exp(-(node**2) / 2) / math.sqrt(2 * math.pi)
        given = tail_probability((threshold - common * node) / own)
        total = total + weight * confirmed_probability(given, confirm, window)
    return np.asarray(np.minimum(total, 1.0))


def at_least_channels(probability: ArrayLike, need: int) -> Floats:
    """Chance that at least ``need`` of the channels fire, each with its own chance, independently.

    probability  (..., C); the answer is (...). The tail is built channel by channel, so all terms are
                 positive:
    tail_j <- tail_j + p (P(exactly j - 1 so far)).
    """
    p = np.asarray(probability, dtype=float)
    if need <= 0:
        return np.ones(p.shape[:-1])
    if need == 1:
        with np.errstate(divide="ignore"):
            return np.asarray(-np.expm1(np.sum(np.log1p(-p), axis=-1)))
    exactly = np.zeros((need, *p.shape[:-1]))
    exactly[0] = 1.0
    reached = np.zeros(p.shape[:-1])
    for channel in range(p.shape[-1]):
        one = p[..., channel]
        reached = reached + one * exactly[need - 1]
        exactly[1:] = exactly[1:] * (1 - one) + exactly[:-1] * one
        exactly[0] = exactly[0] * (1 - one)
    return np.asarray(reached)


def onset_probability(probability: ArrayLike, confirm: int, window: int) -> Floats:
    """Chance that a new reading starts an alarm in a sliding window: C(n-1, k-1) p^k (1-p)^(n-k+1).

    The window before must hold k - 1 hits in the n - 1 readings both share and lose a miss, the new reading
    must hit. Times the rate of readings it is the rate of distinct alarms; `confirmed_probability` counts
    every alarmed window.
    """
    p = np.asarray(probability, dtype=float)
    ways = float(math.comb(window - 1, confirm - 1))
    return np.asarray(ways * p**confirm * (1 - p) ** (window - confirm + 1))


def per_year(probability: ArrayLike, *, rate: ArrayLike) -> Floats:
    """Events per year of a chance per decision at a rate of decisions [Hz]; mean time between them [years]
    is 1 over it.
    """
    return np.asarray(np.asarray(probability, dtype=float) * np.asarray(rate, dtype=float) * SECONDS_PER_YEAR)


def per_decision(events_per_year: ArrayLike, *, rate: ArrayLike, channels: ArrayLike = 1) -> Floats:
    """Chance per decision of one channel that gives so many events per year when any of ``channels`` may
    fire.

    Inverse of `per_year` and `any_of`; at most 1.
    """
    each = np.minimum(np.asarray(events_per_year, dtype=float) / (np.asarray(rate) * SECONDS_PER_YEAR), 1.0)
    with np.errstate(divide="ignore"):
        return np.asarray(-np.expm1(np.log1p(-each) / np.asarray(channels)))


def threshold_for(
    *, events_per_year: ArrayLike, rate: ArrayLike, channels: ArrayLike = 1, confirm: int = 1, window: int = 1
) -> Floats:
    """Standard deviations between a quiet state and the level for so many false alarms per year.

    rate  decisions per second and channel [Hz]

    >>> round(float(threshold_for(events_per_year=1, rate=100, channels=200)), 1)
    7.0
    """
    decision = per_decision(events_per_year, rate=rate, channels=channels)
    return inverse_tail(inverse_confirmed(decision, confirm, window))


def crossing_rate(z: ArrayLike, *, bandwidth: ArrayLike) -> Floats:
    """Upward crossings per second of z standard deviations by noise that is flat up to ``bandwidth`` [Hz].

    (B / sqrt 3) exp(-z^2 / 2). Reference: S. O. Rice, Bell Syst. Tech. J. 24, 46 (1945), doi
    10.1002/j.1538-7305.1945.tb00453.x. Range: a comparator that watches all the time, and a steep band
    edge; noise behind a single pole has no finite rate.
    """
    return np.asarray(
        np.asarray(bandwidth, dtype=float) / math.sqrt(3) * np.exp(-(np.asarray(z, dtype=float) ** 2) / 2)
    )


def crossing_threshold(*, events_per_year: ArrayLike, bandwidth: ArrayLike, channels: ArrayLike = 1) -> Floats:
    """The z of `crossing_rate` for so many crossings per year, all channels together.

    >>> [round(float(crossing_threshold(events_per_year=1, bandwidth=b)), 1) for b in (10, 1e3, 1e5)]
    [6.2, 6.9, 7.5]
    """
    allowed = np.asarray(events_per_year, dtype=float) / (SECONDS_PER_YEAR * np.asarray(channels))
    ratio = np.asarray(bandwidth, dtype=float) / math.sqrt(3) / allowed
    return np.asarray(np.sqrt(2 * np.log(np.maximum(ratio, 1.0))))


def equal_error_level(
    *, absent: ArrayLike, absent_noise: ArrayLike, present: ArrayLike, present_noise: ArrayLike
) -> Floats:
    """Level as many standard deviations from either state: (m0 s1 + m1 s0) / (s0 + s1)."""
    s0, s1 = np.asarray(absent_noise, dtype=float), np.asarray(present_noise, dtype=float)
    return np.asarray((np.asarray(absent) * s1 + np.asarray(present) * s0) / (s0 + s1))


def minimum_error_level(
    *,
    absent: ArrayLike,
    absent_noise: ArrayLike,
    present: ArrayLike,
    present_noise: ArrayLike,
    absent_weight: ArrayLike = 1.0,
    present_weight: ArrayLike = 1.0,
) -> Floats:
    """Level with the least weighted sum of false alarms and misses between two Gaussian states.

    The densities, times their weights (how often the state occurs times what the mistake costs), cross there:
    u^2/s0^2 - (u - D)^2/s1^2 = 2 ln(w0 s1 / (w1 s0)), u from the absent mean, D the distance; the root that
    stays finite when both widths agree. nan where the weights are so unequal that the densities never
    cross: always deciding for one state costs least. Reference: likelihood-ratio test, any text on
    detection theory.
    """
    s0, s1 = np.asarray(absent_noise, dtype=float), np.asarray(present_noise, dtype=float)
    distance = np.asarray(present, dtype=float) - np.asarray(absent, dtype=float)
    offset = 2 * np.log(np.asarray(absent_weight) * s1 / (np.asarray(present_weight) * s0))
    a, b = 1 / s0**2 - 1 / s1**2, distance / s1**2
    c = distance**2 / s1**2 + offset
    with np.errstate(invalid="ignore", divide="ignore"):
        u = c / (b + np.copysign(np.sqrt(b**2 + a * c), distance))
    return np.asarray(np.asarray(absent) + u)


def noise_level(*, absent: ArrayLike, absent_noise: ArrayLike, z: ArrayLike, rising: bool = True) -> Floats:
    """Level z standard deviations from the absent state, above it where present reads higher (``rising``)."""
    side = 1.0 if rising else -1.0
    return np.asarray(np.asarray(absent) + side * np.asarray(z) * np.asarray(absent_noise, dtype=float))


def hysteresis_levels(level: ArrayLike, *, band: ArrayLike) -> tuple[Floats, Floats]:
    """Levels for switching on and off about ``level`` with a dead band of full width ``band`` (same unit).

    Noise must climb half of the band to set an alarm off from its middle and all of it to switch back: a
    slow passage chatters at most at ``crossing_rate(band / (2 noise))``.
    """
    half = np.asarray(band, dtype=float) / 2
    return np.asarray(np.asarray(level) + half), np.asarray(np.asarray(level) - half)


def response_time(*, rate: ArrayLike, confirm: int, settling: ArrayLike = 0.0) -> Floats:
    """Longest time [s] from a clear change to the confirmed decision: settling + k / rate, sliding window.

    The change may fall just behind a reading. Release takes n - k + 1 readings: see `release_time`.
    """
    return np.asarray(np.asarray(settling, dtype=float) + confirm / np.asarray(rate, dtype=float))


def release_time(*, rate: ArrayLike, confirm: int, window: int, settling: ArrayLike = 0.0) -> Floats:
    """Longest time [s] from the end of a clear change to the cleared decision: settling + (n - k + 1) /
    rate.
    """
    return response_time(rate=rate, confirm=window - confirm + 1, settling=settling)
