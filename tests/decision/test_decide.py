"""The decision of a whole set of states, against readings drawn and counted."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest

from outcouple.decision.decide import Score, decide
from outcouple.decision.score import absent_chance, present_chance

YEAR = 365.25 * 86400


@dataclass
class Settings:
    level: str = "midpoint"
    false_alarms: np.ndarray = None
    hysteresis: np.ndarray = None
    rate: np.ndarray = None
    correlation: np.ndarray = None
    confirm: int = 1
    window: int = 1
    channels: int = 1

    def __post_init__(self):
        for name, value in (("false_alarms", 1.0), ("hysteresis", 0.0), ("rate", 10.0), ("correlation", 0.0)):
            if getattr(self, name) is None:
                setattr(self, name, np.array([value]))


def score(name, expect, means, noises):
    return Score(name, expect, np.atleast_2d(np.asarray(means, float)), np.atleast_2d(np.asarray(noises, float)))


def drawn(one, level, settings, count=200_000, seed=3):
    """Share of windows in which enough channels confirm, readings drawn one by one."""
    rng = np.random.default_rng(seed)
    channels = one.mean.shape[1]
    shape = (count, settings.window, channels)
    rho = float(settings.correlation[0])
    noise = np.sqrt(1 - rho) * rng.normal(size=shape) + np.sqrt(rho) * rng.normal(size=(count, 1, channels))
    hit = one.mean[0] + one.noise[0] * noise > level
    sure = hit.sum(axis=1) >= settings.confirm
    return float(np.mean(sure.sum(axis=1) >= settings.channels))


@pytest.mark.parametrize(
    "settings",
    [
        Settings(),
        Settings(confirm=2, window=3),
        Settings(confirm=3, window=4, correlation=np.array([0.4])),
        Settings(channels=2),
        Settings(channels=2, confirm=2, window=2),
    ],
    ids=["one", "2 of 3", "3 of 4 correlated", "two channels", "two channels, 2 of 2"],
)
def test_chances_by_counting(settings):
    """Three channels about one deviation below the level; four standard errors of 200 000 windows."""
    one = score("state", "absent", [0.0, 0.2, -0.1], [1.0, 1.2, 0.8])
    level = np.array([[0.9]])
    counted = drawn(one, 0.9, settings)
    error = 4 * np.sqrt(counted * (1 - counted) / 200_000) + 1e-5
    assert present_chance(one, level, settings)[0] == pytest.approx(counted, abs=error)
    assert absent_chance(one, level, settings)[0] == pytest.approx(1 - counted, abs=error)


def test_tiny_chances_of_absence_do_not_cancel():
    """Ten deviations above the level: Q(10) = 7.62e-24 (tables of the normal law)."""
    one = score("state", "present", [10.0], [1.0])
    assert absent_chance(one, np.array([[0.0]]), Settings())[0] == pytest.approx(7.62e-24, rel=1e-3)


def test_midpoint_margins_and_worst_state():
    found = decide(
        [score("dry", "absent", [0], [0.1]), score("film", "absent", [2], [0.1]), score("wet", "present", [10], [0.5])],
        Settings(),
    )
    assert found.level[0, 0] == 6
    assert found.span[0] == 8
    assert found.sigma["film"][0] == pytest.approx(40)
    assert found.sigma["wet"][0] == pytest.approx(8)
    assert found.of_span["film"][0] == pytest.approx(0.5)
    assert found.worst() == "wet"


def test_optimal_level_lies_as_many_deviations_from_both():
    found = decide(
        [score("dry", "absent", [0], [1.0]), score("wet", "present", [12], [2.0])], Settings(level="optimal")
    )
    assert found.level[0, 0] == pytest.approx(4)
    assert found.sigma["dry"][0] == pytest.approx(found.sigma["wet"][0])


def test_a_dead_band_costs_both_sides_half_of_it():
    states = [score("dry", "absent", [0], [1.0]), score("wet", "present", [10], [1.0])]
    plain, banded = (decide(states, Settings(hysteresis=np.array([h]))) for h in (0.0, 0.2))
    assert banded.on[0, 0] - banded.off[0, 0] == pytest.approx(2)
    for name in ("dry", "wet"):
        assert banded.sigma[name][0] == pytest.approx(plain.sigma[name][0] - 1)
    assert banded.false_alarms[0] < plain.false_alarms[0]
    assert banded.miss["wet"][0] > plain.miss["wet"][0]


@pytest.mark.parametrize(("confirm", "window"), [(1, 1), (2, 3)])
def test_a_level_set_by_noise_gives_the_alarms_it_was_set_for(confirm, window):
    """Once a year over 400 equal channels at 50 Hz."""
    absent = Score("quiet", "absent", np.zeros((1, 400)), np.full((1, 400), 0.01))
    present = Score("touch", "present", np.full((1, 400), 0.2), np.full((1, 400), 0.01))
    found = decide([absent, present], Settings(level="noise", rate=np.array([50.0]), confirm=confirm, window=window))
    assert found.false_alarms[0] == pytest.approx(1.0, rel=1e-6)


def test_more_channels_asked_for_make_alarms_rare_and_touches_harder():
    """Chances per channel p: C(n, 2) p^2 for two of n while p is small."""
    absent = Score("quiet", "absent", np.zeros((1, 50)), np.ones((1, 50)))
    touch = Score("touch", "present", np.array([[9.0, 5.0] + [0.0] * 48]), np.ones((1, 50)))
    given = np.array([[4.0]])
    one, two = (decide([absent, touch], Settings(level="given", channels=n), given) for n in (1, 2))
    p = one.alarm["quiet"][0] / 50
    assert two.alarm["quiet"][0] == pytest.approx(50 * 49 / 2 * p**2, rel=0.01)
    assert one.sigma["touch"][0] == pytest.approx(5)
    assert two.sigma["touch"][0] == pytest.approx(1)


def test_blind_channels_take_no_part():
    absent = Score("quiet", "absent", np.zeros((1, 2)), np.array([[1.0, np.inf]]))
    touch = Score("touch", "present", np.array([[6.0, 99.0]]), np.array([[1.0, np.inf]]))
    found = decide([absent, touch], Settings())
    assert found.level[0, 0] == 3
    assert found.seen["touch"][0] == 1


def test_no_decision_without_both_sides():
    assert decide([score("dry", "absent", [0], [1])], Settings()) is None


def test_correlation_may_differ_from_sample_to_sample():
    one = score("state", "absent", [0.0], [1.0])
    together = present_chance(one, np.array([[1.5]]), Settings(confirm=2, window=3, correlation=np.array([0.0, 0.5])))
    alone = [
        present_chance(one, np.array([[1.5]]), Settings(confirm=2, window=3, correlation=np.array([rho])))[0]
        for rho in (0.0, 0.5)
    ]
    assert together == pytest.approx(alone)
    assert alone[1] > alone[0]
