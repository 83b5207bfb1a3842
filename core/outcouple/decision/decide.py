"""Level, margins and error rates from readings and their noise."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.decision.detection import confirmed_probability, inverse_tail, tail_probability

__all__ = ["Decided", "Score", "decide"]

Floats = NDArray[np.float64]

SECONDS_PER_YEAR = 365.25 * 86400.0


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
        return np.where(self.blind, -np.inf, (self.mean - level) / self.noise)


@dataclass(frozen=True)
class Decided:
    """What the decision makes of the states.

    level         on the decision's axis, (S, C)
    span          between the nearest absent and present states, (S,)
    sigma         per state: margin in standard deviations, (S,); negative on the wrong side
    of_span       per state: the same as a share of the span, (S,)
    miss          per present state: chance that one confirmed decision misses, (S,)
    false_alarms  per year, all channels, worst absent state, (S,)
    worst_absent  name of the absent state that alarms most at the first sample
    seen          per state: channels beyond the level, (S,)
    """

    level: Floats
    span: Floats
    sigma: Mapping[str, Floats]
    of_span: Mapping[str, Floats]
    miss: Mapping[str, Floats]
    false_alarms: Floats
    worst_absent: str
    seen: Mapping[str, Floats] = field(default_factory=dict)

    def worst(self) -> str:
        """Name of the state with the least margin at the first sample."""
        return min(self.sigma, key=lambda name: float(self.sigma[name][0]))


def decide(scores: Sequence[Score], settings: Any, given: Floats | None = None) -> Decided | None:
    """Decide between states; None where absent or present states are missing.

    settings  the [decision] section over samples
    given     level on the decision's axis for ``level = "given"``, (S, C)
    """
    absent = [score for score in scores if score.expect == "absent"]
    present = [score for score in scores if score.expect == "present"]
    if not absent or not present:
        return None
    need = int(settings.channels)
    level = _level(absent, present, settings, need, given)
    top = _stack([_kth(score.seeing, need) for score in absent]).max(axis=0)
    foot = _stack([_kth(score.seeing, need) for score in present]).min(axis=0)
    span = np.abs(foot - top)
    sigma, of_span, seen = {}, {}, {}
    for score in scores:
        side = 1.0 if score.expect == "present" else -1.0
        sigma[score.name] = side * _kth(score.beyond(level), need)
        with np.errstate(divide="ignore", invalid="ignore"):
            of_span[score.name] = side * _kth(score.seeing - level, need) / span
        seen[score.name] = np.sum(score.seeing > level, axis=1).astype(float)
    miss = {
        score.name: 1 - confirmed_probability(tail_probability(-sigma[score.name]), settings.confirm, settings.window)
        for score in present
    }
    alarms = _stack([_alarms(score, level, settings) for score in absent])
    return Decided(
        level=level,
        span=span,
        sigma=sigma,
        of_span=of_span,
        miss=miss,
        false_alarms=alarms.max(axis=0),
        worst_absent=absent[int(np.argmax(alarms[:, 0]))].name,
        seen=seen,
    )


def _stack(arrays: Sequence[Floats]) -> Floats:
    return np.stack(np.broadcast_arrays(*arrays))


def _kth(values: Floats, need: int) -> Floats:
    """The need-th largest over channels, (S,): at least so many channels lie at or above it."""
    channels = values.shape[1]
    if need > channels:
        return np.full(values.shape[0], -np.inf)
    if channels == 1:
        return values[:, 0]
    return np.partition(values, channels - need, axis=1)[:, channels - need]


def _level(absent: Sequence[Score], present: Sequence[Score], settings: Any, need: int, given: Floats | None) -> Floats:
    """Level on the decision's axis, (S, C) or (S, 1)."""
    if settings.level == "given" and given is not None:
        return given
    if settings.level == "noise":
        means = _stack([s.mean for s in absent])
        noises = _stack([np.where(s.blind, 0.0, s.noise) for s in absent])
        seeing = np.sum(~absent[0].blind, axis=1)
        per_decision = settings.false_alarms / (SECONDS_PER_YEAR * settings.rate * np.maximum(seeing, 1))
        z = inverse_tail(np.clip(per_decision, 1e-300, 0.5))
        return np.max(means + np.reshape(z, (-1, 1)) * noises, axis=0)
    tops = _stack([_kth(score.seeing, need) for score in absent])
    feet = _stack([_kth(score.seeing, need) for score in present])
    top, foot = tops.max(axis=0), feet.min(axis=0)
    if settings.level == "midpoint":
        return ((top + foot) / 2)[:, None]
    rows = np.arange(top.shape[0])
    noise_top = _stack([_noisiest(score) for score in absent])[tops.argmax(axis=0), rows]
    noise_foot = _stack([_noisiest(score) for score in present])[feet.argmin(axis=0), rows]
    # Equal error on both sides: as many sigma from either neighbour.
    return ((top * noise_foot + foot * noise_top) / (noise_top + noise_foot))[:, None]


def _noisiest(score: Score) -> Floats:
    return np.asarray(np.where(score.blind, 0.0, score.noise).max(axis=1))


def _alarms(score: Score, level: Floats, settings: Any) -> Floats:
    """False alarms per year of one absent state: rate times the chance that any channel confirms."""
    one = confirmed_probability(tail_probability(-score.beyond(level)), settings.confirm, settings.window)
    any_channel = -np.expm1(np.sum(np.log1p(-np.minimum(one, 1 - 1e-16)), axis=1))
    return np.asarray(any_channel * settings.rate * SECONDS_PER_YEAR)
