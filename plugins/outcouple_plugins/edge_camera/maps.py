"""Maps of a camera-read plate: light on the face, and what an object would read wherever it lies."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields, replace

import numpy as np
from numpy.typing import NDArray

from outcouple.evaluation.transport import mean_power
from outcouple.geometry import Curve, MetricValue, Missing, Results, StateResult, Surface
from outcouple.readout.camera_reader import camera_of
from outcouple.readout.emitted import emitted_power
from outcouple_plugins.edge_camera.lens import pixel_side, sight_of
from outcouple_plugins.edge_camera.light import SPOT, STRIP_WEIGHTS, hop_of, strips_of
from outcouple_plugins.edge_camera.measures import (
    background,
    by_state,
    centroid_error,
    face_irradiance,
    object_pixels,
    own_electrons,
    place_of,
    rise,
    rows_shared,
    touches,
)
from outcouple_plugins.plate.edge import Port
from outcouple_plugins.plate.fan import Fan
from outcouple_plugins.plate.flux import Flux, Rows, flux_at

__all__ = ["measured_on_maps", "middle_line", "surfaces_of"]

Floats = NDArray[np.float64]

BLOCK = 200
"""Places followed at a time."""
POINTS = 61


@dataclass(frozen=True)
class _Field:
    """One object moved over places (P,) of one sample.

    gain   rise there over the rise at the object's own place
    snr    per reading; whole per object
    error  of the position [m]
    """

    gain: Floats
    snr: Floats
    whole: Floats
    error: Floats


def _grid(results: Results, sample: int) -> tuple[Floats, Floats]:
    """Middles of the cells over the whole plate: along x, and along y."""
    p, spread = results.setting.p, results.setting.spread
    x = ((np.arange(p.field.columns) + 0.5) / p.field.columns - 0.5) * spread(p.plate.width)[sample]
    y = ((np.arange(p.field.rows) + 0.5) / p.field.rows - 0.5) * spread(p.plate.height)[sample]
    return x, y


def _inside(results: Results, sample: int) -> NDArray[np.bool_]:
    """Cells within the margin, (P,)."""
    p, spread = results.setting.p, results.setting.spread
    gx, gy = _grid(results, sample)
    margin = spread(p.field.margin)[sample]
    within = [
        np.abs(middles) <= spread(side)[sample] / 2 - margin
        for middles, side in ((gx, p.plate.width), (gy, p.plate.height))
    ]
    return np.asarray(within[1][:, None] & within[0][None, :]).ravel()


def _cells(results: Results, sample: int) -> tuple[Floats, Floats, list[Flux]]:
    """Every cell's x and y, and the light that crosses it, followed once for all maps."""
    key = f"cells {sample}"
    if key not in results.memo:
        gx, gy = _grid(results, sample)
        x, y = np.tile(gx, len(gy)), np.repeat(gy, len(gx))
        results.memo[key] = x, y, _blocks(_one(rows_shared(results), sample), x, y)
    found: tuple[Floats, Floats, list[Flux]] = results.memo[key]
    return found


def _one(rows: Rows, sample: int) -> Rows:
    """The rows of one sample."""

    def row(array: Floats) -> Floats:
        return np.asarray(array[min(sample, array.shape[0] - 1)][None])

    port, fan = rows.port, rows.fan
    one = Port(
        row(port.index),
        thickness=row(port.thickness),
        height=row(port.height),
        offset=row(port.offset),
        gap=row(port.gap),
        half_angle=row(port.half_angle),
        bonded=port.bonded,
        exponent=row(port.exponent),
    )
    part = Fan(*(row(getattr(fan, field.name)) for field in fields(fan)))
    return replace(
        rows, port=one, fan=part, size=row(rows.size), width=row(rows.width), height=row(rows.height),
        mirror=row(rows.mirror), haze=row(rows.haze),
    )  # fmt: skip


def _blocks(rows: Rows, x: Floats, y: Floats) -> list[Flux]:
    return [flux_at(rows, x[at : at + BLOCK], y[at : at + BLOCK]) for at in range(0, len(x), BLOCK)]


def _absorption(results: Results, sample: int) -> Floats:
    found = results.setting.spread(results.setting.absorption(results.setting.p.plate.material))[sample : sample + 1]
    return np.asarray(found)


def _taken(results: Results, state: StateResult, sample: int) -> Floats:
    """Share of every ray of one bundle that the object takes, (2, E), mean over its strips."""
    assert state.reply is not None
    light, diameter = state.light, place_of(results, state)[0]
    rows = rows_shared(results)
    nodes = rows.fan.elevation.shape[1]
    hop = hop_of(rows, 1)[:, None, :]
    hits = strips_of(diameter, diameter, diameter).lengths[:, 0, 0, :, None] / hop
    s_ray = light.polarization[:, : 2 * nodes][:, None, :] > 0
    lost: Floats = np.zeros((1, 1))
    for share, Rs, Rp in state.reply("spot", light.angle[:, : 2 * nodes, SPOT]):
        bounce = np.where(s_ray, Rs[:, None, :], Rp[:, None, :])
        lost = lost + np.asarray(share).reshape(-1, 1) * np.sum(
            STRIP_WEIGHTS[:, None] * (1 - mean_power(bounce, hits)), axis=1
        )
    return np.asarray(lost[min(sample, lost.shape[0] - 1)].reshape(2, nodes))


def _strength(flux: Flux, rows: Rows, taken: Floats, absorption: Floats) -> Floats:
    """Light an object draws out at every place, per power and width, (P,)."""
    kept = np.exp(-absorption[:, None, None] * flux.length[:, :, None] / np.cos(rows.fan.elevation)[:, None, :])
    return np.asarray(np.sum((flux.s * taken[0] + flux.p * taken[1]) * kept, axis=(1, 2)))


def _gathered(results: Results, sample: int, x: Floats, y: Floats) -> Floats:
    """Share the lens gets of a full Lambertian, (P,)."""
    setting = results.setting
    if setting.samples > 1:
        whole = [
            sight_of(setting, np.full(setting.samples, a), np.full(setting.samples, b)).lambertian[sample]
            for a, b in zip(x, y, strict=True)
        ]
        return np.asarray(whole)
    lambertian: Floats = sight_of(setting, x, y).lambertian
    return lambertian


def _drawn(
    results: Results, state: StateResult, sample: int, x: Floats, y: Floats, light: list[Flux] | None = None
) -> Floats:
    """What an object at every place sends to its pixel, in one unit for all, (P,).

    light  that crosses the places, where it is known already
    """
    rows, absorption = _one(rows_shared(results), sample), _absorption(results, sample)
    taken = _taken(results, state, sample)
    drawn = [_strength(flux, rows, taken, absorption) for flux in light or _blocks(rows, x, y)]
    return np.asarray(np.concatenate(drawn) * _gathered(results, sample, x, y))


def _field(results: Results, state: StateResult, sample: int) -> _Field:
    """What the object would read over the plate, a place of full pixels taken as if they were not."""
    x, y, light = _cells(results, sample)
    diameter, x0, y0 = (part[sample : sample + 1] for part in place_of(results, state))
    own = _drawn(results, state, sample, x0, y0)[0]
    gain = _drawn(results, state, sample, x, y, light) / own if own > 0 else np.zeros(len(x))
    here = rise(results, state)[sample]
    noise = np.broadcast_to(state.noise[:, 0], (results.setting.samples,))[sample]
    # The shot noise of the object's own light grows and falls with it; the rest of the noise stays.
    variance = np.maximum(noise**2 + (gain - 1) * here, np.maximum(gain * here, 1e-12))
    snr = gain * here / np.sqrt(variance)
    pixels = object_pixels(results, place_of(results, state)[0])[sample]
    side = pixel_side(results.setting)[sample] * np.sqrt(float(results.setting.p.readout.pixels))
    return _Field(gain, snr, snr * np.sqrt(pixels), centroid_error(diameter, np.asarray(side), snr))


def _shared(results: Results, state: StateResult, sample: int) -> _Field:
    name = f"field {state.name} {sample}"
    if name not in results.memo:
        results.memo[name] = _field(results, state, sample)
    found: _Field = results.memo[name]
    return found


def measured_on_maps(names: Sequence[str], results: Results) -> dict[str, MetricValue | Missing]:
    """Those of ``names`` that need maps, over every sample and touch with a place."""
    states = [state for state in touches(results) if state.place is not None]
    found: dict[str, MetricValue | Missing] = {}
    if not states or background(results) is None:
        return dict.fromkeys(names, Missing("needs an object that must trigger and a state where nothing does"))
    inside = [_inside(results, at) for at in range(results.setting.samples)]
    if not all(np.any(one) for one in inside):
        return dict.fromkeys(names, Missing("the margin leaves no field on the plate"))
    for name in names:
        area = max((one.area for one in results.requirements if one.metric == name), default=1.0)
        values = {}
        for state in states:
            each = [(_shared(results, state, at), cells) for at, cells in enumerate(inside)]
            values[state.name] = np.array([_worst(name, field, cells, area) for field, cells in each])
        found[name] = by_state(values, results.setting.samples, highest=name == "worst_position_error")
    return found


def _worst(name: str, field: _Field, cells: NDArray[np.bool_], area: float) -> float:
    """The value that a share of the cells keeps."""
    cut = 1 - area
    if name == "uniformity":
        most = float(np.max(field.gain[cells]))
        return float(np.quantile(field.gain[cells], cut)) / most if most > 0 else 0.0
    if name == "least_object_snr":
        return float(np.quantile(field.whole[cells], cut))
    return float(np.quantile(field.error[cells], area, method="higher"))


def surfaces_of(results: Results) -> tuple[Surface, ...]:
    """Irradiance of the touched face, signal over noise and position error of the first object."""
    gx, gy = _grid(results, 0)
    axes = (("y", "mm", gy), ("x", "mm", gx))
    shape = (len(gy), len(gx))
    rows, absorption = _one(rows_shared(results), 0), _absorption(results, 0)
    light = np.concatenate([face_irradiance(flux, rows, absorption) for flux in _cells(results, 0)[2]])
    power = float(np.atleast_1d(emitted_power(results.setting.p))[0])
    found = [
        Surface("irradiance_map", "irradiance of the touched face", axes, (light * power).reshape(shape),
                "irradiance", "W/m2")
    ]  # fmt: skip
    states = [state for state in touches(results) if state.place is not None]
    if states and background(results) is not None:
        field, name = _shared(results, states[0], 0), states[0].name
        certainty = float(np.atleast_1d(results.setting.p.field.certainty)[0])
        found += [
            Surface("object_snr_map", f"signal over noise of {name!r}", axes, field.whole.reshape(shape),
                    limit=certainty),
            Surface("position_error_map", f"position error of {name!r}", axes, field.error.reshape(shape),
                    "length", "um"),
        ]  # fmt: skip
    return tuple(found)


def middle_line(results: Results) -> Curve | None:
    """Reading under the first object moved along the plate, up to where the pixel is full."""
    states = [state for state in touches(results) if state.place is not None]
    if not states or background(results) is None:
        return None
    state = states[0]
    diameter, x0, y0 = (part[:1] for part in place_of(results, state))
    half = float(results.setting.spread(results.setting.p.plate.width)[0]) / 2 - float(diameter[0]) / 2
    x = np.linspace(-half, half, POINTS)
    drawn = _drawn(results, state, 0, np.concatenate([x0, x]), np.concatenate([y0, 0 * x + y0]))
    own = float(own_electrons(results, state)[0])
    reading = float(state.signal[0, 0])
    rest = background(results)
    assert rest is not None
    beside = reading - own if reading > own else float(rest.signal[0, 0])
    gain = drawn[1:] / drawn[0] if drawn[0] > 0 else 0 * x
    values = np.minimum(beside + own * gain, float(camera_of(state.setting.p).capacity()[0, 0]))
    return Curve(
        name="response",
        label=f"reading under {state.name!r} along the plate",
        axes=(("place along x", "mm", x),),
        values=values,
        kind="electrons",
        unit="ke-",
        marks=((state.name, float(x0[0]), reading),),
    )
