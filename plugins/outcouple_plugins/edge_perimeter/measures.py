"""Metrics of a perimeter-read plate that need no map."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cover import Cover, Drops
from outcouple.geometry import MetricValue, Missing, Results, StateResult
from outcouple_plugins.edge_perimeter.chords import Chords, chords_of
from outcouple_plugins.edge_perimeter.contact import spot_loss
from outcouple_plugins.plate.fan import leakable_share

__all__ = [
    "MEASURES",
    "NO_OBJECT",
    "arrivals_shared",
    "blind",
    "chords_shared",
    "crossing_loss",
    "measured",
    "needed",
    "objects",
    "strongest",
]

Floats = NDArray[np.float64]
Found = MetricValue | Missing

NO_OBJECT = Missing('needs a state with an object that expects "present"')


def objects(results: Results, expect: str = "present") -> list[StateResult]:
    """States in which an object lies on the plate, faults left out."""
    return [state for state in results.expecting(expect) if state.place is not None and state.role == "normal"]


def blind(results: Results) -> NDArray[np.bool_]:
    """Chords that carry no light, (S, C)."""
    assert results.untouched is not None
    return np.asarray(results.untouched.share <= 0)


def strongest(state: StateResult, need: int) -> Floats:
    """Loss of the ``need``-th of the chords that lose most, (S,); zero where fewer carry light."""
    assert state.change is not None
    assert state.change_noise is not None
    loss = np.where(np.isinf(state.change_noise), -np.inf, state.change)
    if need > loss.shape[1]:
        return np.zeros(loss.shape[0])
    found = np.partition(loss, loss.shape[1] - need, axis=1)[:, loss.shape[1] - need]
    return np.where(np.isinf(found), 0.0, found)


def needed(results: Results) -> int:
    """Chords that must see an object."""
    return int(results.setting.p.decision.channels)


def chords_shared(results: Results) -> Chords:
    """The chords of the design, laid out once for all measures."""
    if "chords" not in results.memo:
        results.memo["chords"] = chords_of(results.setting)
    chords: Chords = results.memo["chords"]
    return chords


def arrivals_shared(results: Results) -> Floats:
    """Share of the emitters' power on every ray of every untouched chord, (S, C, K), followed once for all measures."""
    if "arrivals" not in results.memo:
        assert results.untouched is not None
        assert results.untouched.arrivals is not None
        results.memo["arrivals"] = results.untouched.arrivals()
    arrivals: Floats = results.memo["arrivals"]
    return arrivals


def _by_state(values: Mapping[str, Floats], samples: int, *, highest: bool) -> MetricValue:
    """The worst state's value per sample, its name at the first, and all of them."""
    names = list(values)
    stack = np.stack([np.broadcast_to(values[name], (samples,)) for name in names])
    pick = np.argmax(stack, axis=0) if highest else np.argmin(stack, axis=0)
    rows = np.arange(samples)
    return MetricValue(stack[pick, rows], names[int(pick[0])], dict(zip(names, stack, strict=True)))


def _per_object(results: Results, of: Callable[[StateResult], Floats], *, highest: bool = False) -> Found:
    found = {state.name: of(state) for state in objects(results)}
    return _by_state(found, results.setting.samples, highest=highest) if found else NO_OBJECT


def _touch_loss(results: Results) -> Found:
    return _per_object(results, lambda state: strongest(state, needed(results)))


def crossing_loss(results: Results, state: StateResult, diameters: Floats) -> Floats:
    """Loss of the straightest chord under the middle of objects of diameters (S, N) with a state's contact, (S, N)."""
    chords = chords_shared(results)
    direct = np.where(blind(results), np.inf, chords.ways.out[:, :, 0])
    pick = np.argmin(np.broadcast_to(direct, (results.setting.samples, direct.shape[1])), axis=1)
    arrivals = arrivals_shared(results)
    rows = np.arange(results.setting.samples)
    weight = np.broadcast_to(arrivals, (results.setting.samples, *arrivals.shape[1:]))[rows, pick]
    total = np.sum(weight, axis=1, keepdims=True)
    share = np.divide(weight, total, out=np.zeros_like(weight), where=total > 0)
    return np.asarray(np.einsum("sk,skn->sn", share, spot_loss(state, diameters)))


def _crossing(results: Results) -> Found:
    def of(state: StateResult) -> Floats:
        assert state.place is not None
        return crossing_loss(results, state, state.place["diameter"][:, None])[:, 0]

    return _per_object(results, of)


def _media(cover: Cover) -> list[str]:
    """What lies on a face behind its films: the media that may take guided light."""
    backings = (patch.backing for patch in cover.patches)
    return [backing.material if isinstance(backing, Drops) else backing for backing in backings]


def _contact_index(state: StateResult) -> Floats:
    """Largest index of what lies on the touched spot, (S,)."""
    setting = state.setting
    indices = [np.where(setting.index(name) < 1.01, 1.0, setting.index(name)) for name in _media(state.covers["spot"])]
    return np.asarray(np.max(np.stack(indices), axis=0))


def _leakable(results: Results) -> Found:
    index = results.setting.index(results.setting.p.plate.material)
    fan = chords_shared(results).fan
    return _per_object(results, lambda state: leakable_share(fan, index=index, contact=_contact_index(state)))


def _dead_azimuth(results: Results) -> Found:
    chords = chords_shared(results)
    sine = np.minimum(np.minimum(chords.emitter.limit, chords.detector.limit), 1.0)
    # The least conserved index on a chord at azimuth a is n cos(limit) / cos(a).
    least = chords.emitter.index * np.sqrt(1 - sine**2)

    def of(state: StateResult) -> Floats:
        dead_from = np.arccos(np.clip(least / _contact_index(state), 0, 1))
        return np.asarray(np.maximum(np.arcsin(sine) - dead_from, 0.0))

    return _per_object(results, of, highest=True)


def _hop(results: Results) -> Found:
    fan = chords_shared(results).fan
    power = fan.s + fan.p
    hop = 2 * results.setting.spread(results.setting.p.plate.thickness)[:, None] / np.tan(fan.elevation)
    order = np.argsort(hop, axis=1)
    below = np.cumsum(np.take_along_axis(power, order, axis=1), axis=1)
    middle = np.argmax(below >= below[:, -1:] / 2, axis=1)[:, None]
    return MetricValue(np.take_along_axis(np.take_along_axis(hop, order, axis=1), middle, axis=1)[:, 0])


def _chord_count(results: Results) -> Found:
    return MetricValue(np.sum(~blind(results), axis=1).astype(float))


def _dynamic_range(results: Results) -> Found:
    assert results.untouched is not None
    share = results.untouched.share
    strong = np.max(share, axis=1)
    weak = np.min(np.where(share > 0, share, np.inf), axis=1)
    seen = strong > 0
    return MetricValue(np.where(seen, 10 * np.log10(np.where(seen, strong, 1.0) / np.where(seen, weak, 1.0)), np.nan))


def _scan_rate(results: Results) -> Found:
    slot = results.setting.spread(results.setting.p.scan.slot)
    return MetricValue(1 / (slot * chords_shared(results).pairs.emitters))


def _drift(results: Results) -> Floats:
    """Relative change of a chord's reading that the baseline does not follow, (S,)."""
    baseline = results.setting.p.baseline
    return results.setting.spread(baseline.drift * baseline.change)


def _drift_over_touch(results: Results) -> Found:
    def of(state: StateResult) -> Floats:
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(_drift(results) / strongest(state, needed(results)))

    return _per_object(results, of, highest=True)


def _drift_over_level(results: Results) -> Found:
    if results.decision is None:
        return Missing("needs states that expect both absent and present")
    level = np.min(np.where(blind(results), np.inf, results.decision.level), axis=1)
    with np.errstate(divide="ignore", invalid="ignore"):
        return MetricValue(np.where(level > 0, _drift(results) / level, np.inf))


def _disturbing(results: Results) -> list[StateResult]:
    """States that must not trigger although something lies on the plate, and faults that mimic one."""
    found = []
    for state in results.expecting("absent"):
        covers = [cover for face, cover in state.covers.items() if face in ("front", "spot")]
        touched = any(name != "air" for cover in covers for patch in cover.patches for name in patch.media())
        if touched:
            found.append(state)
    return found


def _immunity(results: Results) -> Found:
    touches, others = objects(results), _disturbing(results)
    if not touches or not others:
        return Missing("needs an object that must trigger and a contact that must not")
    need = needed(results)
    touch = _by_state({s.name: strongest(s, need) for s in touches}, results.setting.samples, highest=False)
    ratios = {}
    for state in others:
        loss = strongest(state, need)
        with np.errstate(divide="ignore", invalid="ignore"):
            ratios[state.name] = np.where(loss > 1e-12, touch.values / loss, np.inf)
    worst = _worst_of(ratios, others, results.setting.samples)
    return MetricValue(worst.values, f"{touch.at} : {worst.at}", worst.states)


def _worst_of(found: Mapping[str, Floats], states: Sequence[StateResult], samples: int) -> MetricValue:
    """The least value among states that are no faults (among faults where there are only those), and all values."""
    normal = {state.name: found[state.name] for state in states if state.role == "normal"}
    worst = _by_state(normal or found, samples, highest=False)
    return MetricValue(worst.values, worst.at, found)


def darkened(state: StateResult, results: Results) -> Floats:
    """Chords whose loss exceeds the level, (S,)."""
    assert state.change is not None
    assert state.change_noise is not None
    seen = (state.change > results.decision.level) & ~np.isinf(state.change_noise)
    return np.asarray(np.sum(seen, axis=1), dtype=float)


def _chords_darkened(results: Results) -> Found:
    if results.decision is None:
        return Missing("needs states that expect both absent and present")
    if not objects(results):
        return NO_OBJECT
    states = [*objects(results), *_disturbing(results)]
    found = {state.name: darkened(state, results) for state in states}
    worst = _by_state({s.name: found[s.name] for s in objects(results)}, results.setting.samples, highest=False)
    return MetricValue(worst.values, worst.at, found)


def _extent_ratio(results: Results) -> Found:
    touches, others = objects(results), _disturbing(results)
    if not touches or not others or results.decision is None:
        return Missing("needs an object that must trigger and a contact that must not")
    most = np.max(np.stack([darkened(state, results) for state in touches]), axis=0)
    least = np.min(np.stack([darkened(state, results) for state in touches]), axis=0)
    found = {}
    for state in others:
        count = darkened(state, results)
        with np.errstate(divide="ignore", invalid="ignore"):
            apart = np.where(count >= most, count / most, np.where(count <= least, least / count, 1.0))
        found[state.name] = np.where(count > 0, apart, np.inf)
    return _worst_of(found, others, results.setting.samples)


MEASURES: Mapping[str, Callable[[Results], Found]] = {
    "touch_loss": _touch_loss,
    "crossing_loss": _crossing,
    "leakable_share": _leakable,
    "dead_azimuth": _dead_azimuth,
    "hop_length": _hop,
    "chords": _chord_count,
    "chords_darkened": _chords_darkened,
    "dynamic_range": _dynamic_range,
    "scan_rate": _scan_rate,
    "drift_over_touch": _drift_over_touch,
    "drift_over_level": _drift_over_level,
    "immunity_ratio": _immunity,
    "extent_ratio": _extent_ratio,
}


def measured(names: Sequence[str], results: Results) -> dict[str, Found]:
    """Those of ``names`` that stand here."""
    return {name: MEASURES[name](results) for name in names if name in MEASURES}
