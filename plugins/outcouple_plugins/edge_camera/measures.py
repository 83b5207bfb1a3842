"""A camera-read plate's own metrics that need no map."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cover import Drops
from outcouple.contact.diffuse import escape_share
from outcouple.geometry import MetricValue, Missing, Results, StateResult
from outcouple.readout.constants import LIGHT_SPEED, PLANCK
from outcouple.readout.emitted import emitted_power, passed, peak
from outcouple_plugins.edge_camera.lens import Sight, pixel_side, sight_of
from outcouple_plugins.plate.fan import leakable_share
from outcouple_plugins.plate.flux import Flux, Rows, flux_at, rows_of

__all__ = [
    "NO_TOUCH",
    "Found",
    "background",
    "by_state",
    "centroid_error",
    "face_irradiance",
    "glow_share",
    "measured",
    "object_pixels",
    "own_electrons",
    "place_of",
    "rise",
    "rows_shared",
    "smallest_diameter",
    "touches",
]

Floats = NDArray[np.float64]
Found = MetricValue | Missing

NO_TOUCH = Missing("needs an object that must trigger and a state where nothing does")


def touches(results: Results) -> list[StateResult]:
    """States that must trigger; of a continuous sensor all of them."""
    return [state for state in results.states if state.expect != "absent"]


def background(results: Results) -> StateResult | None:
    """The untouched plate: the first state that must not trigger."""
    return next(iter(results.expecting("absent")), None)


def rise(results: Results, state: StateResult) -> Floats:
    """What the state adds to the untouched reading [electrons], (S,)."""
    rest = background(results)
    return np.asarray(state.signal[:, 0] - (0.0 if rest is None else rest.signal[:, 0]))


def glow_share(results: Results, state: StateResult) -> Floats:
    """Share of the emitters' light that the untouched plate sends to the pixel at the state's place, (S,).

    The glow of the untouched state follows the light on the face and what the lens gets of it.
    """
    rest = background(results)
    if rest is None or not np.any(rest.share):
        return np.zeros(results.setting.samples)
    here, there = (_face_light(results, one) * _sight(results, one).lambertian for one in (rest, state))
    return np.asarray(np.divide(rest.share[:, 0] * there, here, out=np.zeros_like(there), where=here > 0))


def own_electrons(results: Results, state: StateResult) -> Floats:
    """Electrons that a touch's own light brings, however full the pixel is, (S,); line taken at its peak."""
    p = state.setting.p
    share = state.share[:, 0] - glow_share(results, state)
    lit = p.readout.exposure if p.readout.strobe is None else np.minimum(p.readout.strobe, p.readout.exposure)
    per_joule = p.readout.quantum_efficiency * peak(p) / (PLANCK * LIGHT_SPEED)
    return np.asarray(share * emitted_power(p) * passed(p) * lit * per_joule)


def rows_shared(results: Results) -> Rows:
    """The plate's rows, laid out once for all measures."""
    if "rows" not in results.memo:
        results.memo["rows"] = rows_of(results.setting)
    rows: Rows = results.memo["rows"]
    return rows


def place_of(results: Results, state: StateResult) -> tuple[Floats, Floats, Floats]:
    """Diameter, x and y of the state's object, (S,); the pixel's own footprint in the middle where it has none."""
    spread = results.setting.spread
    if state.place is None:
        side = pixel_side(results.setting)
        return side, 0 * side, 0 * side
    return spread(state.place["diameter"]), spread(state.place["x"]), spread(state.place["y"])


def by_state(values: Mapping[str, Floats], samples: int, *, highest: bool = False) -> Found:
    """The worst state's value per sample, its name at the first, and all of them."""
    if not values:
        return NO_TOUCH
    names = list(values)
    stack = np.stack([np.broadcast_to(values[name], (samples,)) for name in names])
    pick = np.argmax(stack, axis=0) if highest else np.argmin(stack, axis=0)
    return MetricValue(stack[pick, np.arange(samples)], names[int(pick[0])], dict(zip(names, stack, strict=True)))


def _over(results: Results, of: Callable[[StateResult], Floats], *, highest: bool = False) -> Found:
    found = {state.name: of(state) for state in touches(results)}
    return by_state(found, results.setting.samples, highest=highest)


def _contrast(results: Results) -> Found:
    rest = background(results)
    if rest is None:
        return NO_TOUCH

    def of(state: StateResult) -> Floats:
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(rise(results, state) / rest.signal[:, 0])

    return _over(results, of)


def pixel_snr(results: Results, state: StateResult) -> Floats:
    """Rise over noise of one reading, (S,)."""
    return np.asarray(rise(results, state) / state.noise[:, 0])


def object_pixels(results: Results, diameter: Floats) -> Floats:
    """Readings that an object covers, at least one."""
    area = np.pi / 4 * diameter**2 / pixel_side(results.setting) ** 2
    return np.asarray(np.maximum(area / float(results.setting.p.readout.pixels), 1.0))


def object_snr(results: Results, state: StateResult) -> Floats:
    """Rise over noise of all readings an object covers, (S,)."""
    diameter = place_of(results, state)[0]
    return np.asarray(pixel_snr(results, state) * np.sqrt(object_pixels(results, diameter)))


def _sight(results: Results, state: StateResult) -> Sight:
    _, x, y = place_of(results, state)
    return sight_of(state.setting, x, y)


def _radiance(results: Results) -> Found:
    def of(state: StateResult) -> Floats:
        diameter, _, _ = place_of(results, state)
        sight, side = _sight(results, state), pixel_side(results.setting)
        area = np.minimum(side**2, np.pi / 4 * diameter**2) if state.place is not None else side**2
        drawn = state.share[:, 0] - glow_share(results, state)
        return np.asarray(drawn * emitted_power(state.setting.p) / (area * sight.gathered * sight.shifted))

    return _over(results, of)


def _outside(results: Results) -> Found:
    irradiance = results.setting.p.environment.irradiance
    if irradiance is None:
        return Missing("the outside light is not stated as an irradiance in the band")

    def of(state: StateResult) -> Floats:
        outside = state.setting.p.outside
        seen = outside.reflectance * outside.lit * state.setting.p.environment.irradiance / np.pi
        return np.asarray(seen * _sight(results, state).crossing ** 2)

    found = {state.name: of(state) for state in results.states}
    return by_state(found, results.setting.samples, highest=True)


def _contact_index(state: StateResult) -> Floats:
    """Largest index of what lies on the touched place, (S,)."""
    setting = state.setting
    cover = state.covers.get("spot")
    found = [np.ones(1)]
    for patch in cover.patches if cover is not None else ():
        name = patch.backing.material if isinstance(patch.backing, Drops) else patch.backing
        found.append(setting.index(name))
    return np.asarray(np.max(np.stack([setting.spread(one) for one in found]), axis=0))


def _leakable(results: Results) -> Found:
    rows, spread = rows_shared(results), results.setting.spread
    found = {
        state.name: spread(leakable_share(rows.fan, index=rows.port.index, contact=_contact_index(state)))
        for state in results.states
        if "spot" in state.covers
    }
    must = {state.name: found[state.name] for state in touches(results) if state.name in found}
    worst = by_state(must, results.setting.samples)
    return replace(worst, states=found) if isinstance(worst, MetricValue) else worst


def _scatterer(state: StateResult) -> str | None:
    cover = state.covers.get("spot")
    patches = cover.patches if cover is not None else ()
    return next((patch.scatterer for patch in patches if np.any(np.asarray(patch.albedo) > 0)), None)


def _escape(results: Results) -> Found:
    found = {}
    for state in touches(results):
        name = _scatterer(state)
        if name is not None:
            guide = state.setting.index(state.setting.p.plate.material)
            found[state.name] = escape_share(n_guide=guide, n_contact=state.setting.index(name))
    if not found:
        return Missing("nothing that must trigger sends light back diffusely: a camera does not see it")
    return by_state(found, results.setting.samples)


def face_irradiance(flux: Flux, rows: Rows, absorption: Floats) -> Floats:
    """Light that meets the touched face per area and power of the emitters [1/m2], (P,).

    Of a flux F per width at elevation e, F tan(e) / (2 t) meets a face per metre of way.
    """
    slant = flux.length[:, :, None] / np.cos(rows.fan.elevation)[:, None, :]
    kept = np.exp(-absorption[:, None, None] * slant)
    per_metre = np.tan(rows.fan.elevation) / (2 * rows.port.thickness[:, None])
    return np.asarray(np.sum((flux.s + flux.p) * kept * per_metre[:, None, :], axis=(1, 2)))


def _face_light(results: Results, state: StateResult) -> Floats:
    """Light on the face at the state's place per power of the emitters [1/m2], (S,)."""
    rows, (_, x, y) = rows_shared(results), place_of(results, state)
    absorption = np.broadcast_to(state.setting.absorption(state.setting.p.plate.material), x.shape)
    return face_irradiance(flux_at(rows, x, y), rows, absorption)


def _irradiance(results: Results) -> Found:
    return _over(results, lambda state: _face_light(results, state) * emitted_power(state.setting.p))


def _pixel(results: Results) -> Found:
    return MetricValue(pixel_side(results.setting))


def smallest_diameter(diameter: Floats, side: Floats, pixel: Floats, whole: Floats, certainty: Floats) -> Floats:
    """Diameter at which signal over noise per object reaches ``certainty`` [m].

    pixel, whole  signal over noise per reading and per object at ``diameter``

    A reading keeps its rise while the object covers the pixel and is smaller than a hop, so the object's signal over
    noise goes with its diameter; below the pixel the rise goes with the area. Infinite where there is no rise.
    """
    with np.errstate(divide="ignore", invalid="ignore"):
        large = diameter * certainty / whole
        small = 2 / np.sqrt(np.pi) * side * np.sqrt(certainty / pixel)
        found = np.where(certainty <= pixel, small, large)
    return np.asarray(np.where(pixel > 0, found, np.inf))


def _smallest(results: Results) -> Found:
    side, certainty = pixel_side(results.setting), results.setting.spread(results.setting.p.field.certainty)

    def of(state: StateResult) -> Floats:
        diameter = place_of(results, state)[0]
        return smallest_diameter(diameter, side, pixel_snr(results, state), object_snr(results, state), certainty)

    return _over(results, of, highest=True)


def centroid_error(diameter: Floats, side: Floats, snr: Floats) -> Floats:
    """Cramer-Rao bound on either coordinate of an evenly bright disc [m].

    Formula: sqrt(2 a^3 / (pi d)) / snr, a the pixel's side: only pixels on the edge change when the disc moves, each by
    rise / a times the cosine of the edge's normal; pi d / a of them, noise alike and independent.
    Range: diameter at least the pixel's side. Reference: H. Cramer, Mathematical Methods of Statistics (1946), ch. 32.
    """
    with np.errstate(divide="ignore", invalid="ignore"):
        bound = np.sqrt(2 * side**3 / (np.pi * np.maximum(diameter, side))) / snr
    return np.asarray(np.where(snr > 0, bound, np.inf))


def _position(results: Results) -> Found:
    side = pixel_side(results.setting) * np.sqrt(float(results.setting.p.readout.pixels))

    def of(state: StateResult) -> Floats:
        return centroid_error(place_of(results, state)[0], side, pixel_snr(results, state))

    return _over(results, of, highest=True)


def _latency(results: Results) -> Found:
    p, spread = results.setting.p, results.setting.spread
    return MetricValue(spread(p.readout.exposure + 1 / p.decision.rate))


MEASURES: Mapping[str, Callable[[Results], Found]] = {
    "contrast": _contrast,
    "pixel_snr": lambda results: _over(results, lambda state: pixel_snr(results, state)),
    "object_snr": lambda results: _over(results, lambda state: object_snr(results, state)),
    "touch_radiance": _radiance,
    "outside_radiance": _outside,
    "leakable_share": _leakable,
    "escape_share": _escape,
    "face_irradiance": _irradiance,
    "pixel_size": _pixel,
    "smallest_object": _smallest,
    "position_error": _position,
    "latency": _latency,
}


def measured(names: Sequence[str], results: Results) -> dict[str, Found]:
    """Those of ``names`` that stand here."""
    return {name: MEASURES[name](results) for name in names if name in MEASURES}
