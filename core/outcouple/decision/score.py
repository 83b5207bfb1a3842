"""One state on the decision's axis, and the chances that it reads present or absent."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.decision.detection import (
    at_least_channels,
    confirmed_probability,
    correlated_probability,
    tail_probability,
)

__all__ = ["Score", "absent_chance", "kth", "present_chance"]

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Score:
    """One state on the decision's axis, on which "present" always lies high.

    mean, noise  (S, C); a channel of infinite noise is blind and takes no part
    """

    name: str
    expect: str
    mean: Floats
    noise: Floats

    @property
    def blind(self) -> NDArray[np.bool_]:
        """Channels that get no light to judge by, (S, C)."""
        return np.broadcast_to(np.isinf(self.noise), self.mean.shape)

    @property
    def seeing(self) -> Floats:
        """The mean, -inf where a channel is blind."""
        return np.where(self.blind, -np.inf, self.mean)

    def beyond(self, level: Floats) -> Floats:
        """Distance above a level in standard deviations, -inf where a channel is blind."""
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.where(self.blind, -np.inf, (self.mean - level) / self.noise)


def kth(values: Floats, need: int) -> Floats:
    """The need-th largest over channels, (S,): at least so many channels lie at or above it."""
    channels = values.shape[1]
    if need > channels:
        return np.full(values.shape[0], -np.inf)
    if channels == 1:
        return values[:, 0]
    return np.partition(values, channels - need, axis=1)[:, channels - need]


def present_chance(score: Score, level: Floats, settings: Any) -> Floats:
    """Chance that one confirmed decision says present, (S,): at least ``settings.channels`` channels confirm.

    level     from below which a channel switches on, (S, C) or (S, 1)
    settings  the [decision] section

    Channels are independent; what they share (a reel of emitters, a warm plate) is no noise and belongs to the states.
    """
    each = _confirmed(-score.beyond(level), settings.confirm, settings)
    return at_least_channels(each, int(settings.channels))


def absent_chance(score: Score, level: Floats, settings: Any) -> Floats:
    """Chance that it says absent, (S,), exact where it is tiny."""
    each = _confirmed(score.beyond(level), settings.window - settings.confirm + 1, settings)
    if settings.channels == 1:
        return np.asarray(np.prod(each, axis=1))
    return np.asarray(1 - at_least_channels(1 - each, int(settings.channels)))


def _confirmed(z: Floats, need: int, settings: Any) -> Floats:
    """Chance that ``need`` readings of the window lie z standard deviations out."""
    if settings.window == 1:
        return tail_probability(z)
    correlation = np.asarray(settings.correlation, dtype=float)
    rows = np.broadcast_to(z, (max(len(z), len(correlation)), z.shape[1]))
    found = np.empty(rows.shape)
    for value in np.unique(correlation):
        own = np.broadcast_to(correlation == value, len(rows))
        found[own] = (
            correlated_probability(rows[own], need, settings.window, correlation=float(value))
            if value > 0
            else confirmed_probability(tail_probability(rows[own]), need, settings.window)
        )
    return found
