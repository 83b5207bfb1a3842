"""Level, margins and error rates from readings and their noise."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.decision.detection import equal_error_level, hysteresis_levels, per_year, threshold_for
from outcouple.decision.score import Score, absent_chance, kth, present_chance

__all__ = ["Decided", "Score", "decide"]

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Decided:
    """What the decision makes of the states.

    level         middle of the dead band on the decision's axis, (S, C) or (S, 1)
    on, off       levels that switch to present and back to absent, same shape
    span          between the nearest absent and present states, (S,)
    sigma         per state: margin in standard deviations, (S,); negative on the wrong side
    of_span       per state: the same as a share of the span, (S,)
    miss          per present state: chance that one confirmed decision misses, (S,)
    alarm         per absent state: chance that one confirmed decision says present, (S,)
    false_alarms  per year, all channels, worst absent state, (S,)
    worst_absent  name of the absent state that alarms most at the first sample
    seen          per state: channels beyond the level, (S,)
    """

    level: Floats
    on: Floats
    off: Floats
    span: Floats
    sigma: Mapping[str, Floats]
    of_span: Mapping[str, Floats]
    miss: Mapping[str, Floats]
    alarm: Mapping[str, Floats]
    false_alarms: Floats
    worst_absent: str
    seen: Mapping[str, Floats] = field(default_factory=dict)

    def worst(self) -> str:
        """Name of the state with the least margin at the first sample."""
        return min(self.sigma, key=lambda name: float(self.sigma[name][0]))


def decide(
    scores: Sequence[Score], settings: Any, given: Floats | None = None, *, standing: Floats | None = None
) -> Decided | None:
    """Decide between states; None where absent or present states are missing.

    settings  the [decision] section over samples
    given     level on the decision's axis for ``level = "given"``, (S, C)
    standing  level that stands whatever these states read, (S | 1, C | 1); wins over all
    """
    absent = [score for score in scores if score.expect == "absent"]
    present = [score for score in scores if score.expect == "present"]
    if not absent or not present:
        return None
    need = int(settings.channels)
    top = _stack([kth(score.seeing, need) for score in absent]).max(axis=0)
    foot = _stack([kth(score.seeing, need) for score in present]).min(axis=0)
    seeing = np.isfinite(foot) & np.isfinite(top)
    span = np.where(seeing, np.abs(np.where(seeing, foot, 0.0) - np.where(seeing, top, 0.0)), 0.0)
    level = _level(absent, present, settings, need, given) if standing is None else standing
    on, off = hysteresis_levels(level, band=(settings.hysteresis * span)[:, None])
    sigma, of_span = {}, {}
    for score in scores:
        side, limit = (1.0, on) if score.expect == "present" else (-1.0, off)
        sigma[score.name] = side * kth(score.beyond(limit), need)
        with np.errstate(divide="ignore", invalid="ignore"):
            of_span[score.name] = np.where(span > 0, side * kth(score.seeing - limit, need) / span, 0.0)
    alarm = {score.name: present_chance(score, on, settings) for score in absent}
    alarms = _stack([per_year(chance, rate=settings.rate) for chance in alarm.values()])
    return Decided(
        level=level,
        on=on,
        off=off,
        span=span,
        sigma=sigma,
        of_span=of_span,
        miss={score.name: absent_chance(score, on, settings) for score in present},
        alarm=alarm,
        false_alarms=alarms.max(axis=0),
        worst_absent=list(alarm)[int(np.argmax(alarms[:, 0]))],
        seen={score.name: np.sum(score.seeing > on, axis=1).astype(float) for score in scores},
    )


def _stack(arrays: Sequence[Floats]) -> Floats:
    return np.stack(np.broadcast_arrays(*arrays))


def _level(absent: Sequence[Score], present: Sequence[Score], settings: Any, need: int, given: Floats | None) -> Floats:
    """Level on the decision's axis, (S, C) or (S, 1)."""
    if settings.level == "given" and given is not None:
        return given
    if settings.level == "noise":
        return _noise_level(absent, settings)
    tops = _stack([kth(score.seeing, need) for score in absent])
    feet = _stack([kth(score.seeing, need) for score in present])
    top, foot = tops.max(axis=0), feet.min(axis=0)
    if settings.level == "midpoint":
        return np.asarray((top + foot) / 2)[:, None]
    rows = np.arange(top.shape[0])
    level = equal_error_level(
        absent=top,
        absent_noise=_stack([_noisiest(score) for score in absent])[tops.argmax(axis=0), rows],
        present=foot,
        present_noise=_stack([_noisiest(score) for score in present])[feet.argmin(axis=0), rows],
    )
    return np.asarray(level[:, None])


def _noise_level(absent: Sequence[Score], settings: Any) -> Floats:
    """As many standard deviations above every absent state as the false alarms per year allow, per channel."""
    means = _stack([score.mean for score in absent])
    noises = _stack([np.where(score.blind, 0.0, score.noise) for score in absent])
    z = threshold_for(
        events_per_year=settings.false_alarms,
        rate=settings.rate,
        channels=np.maximum(np.sum(~absent[0].blind, axis=1), 1),
        confirm=settings.confirm,
        window=settings.window,
    )
    return np.asarray(np.max(means + np.reshape(z, (-1, 1)) * noises, axis=0))


def _noisiest(score: Score) -> Floats:
    return np.asarray(np.where(score.blind, 0.0, score.noise).max(axis=1))
