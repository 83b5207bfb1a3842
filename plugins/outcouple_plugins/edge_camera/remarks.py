"""Cautions and failure directions of a camera-read plate."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import FailureRow, MetricValue, Results, Setting
from outcouple.notes import Note
from outcouple_plugins.edge_camera.lens import pixel_side, sight_of
from outcouple_plugins.edge_camera.measures import MEASURES
from outcouple_plugins.plate.remarks import place_notes

__all__ = ["failure_rows", "remarks_on", "setting_notes"]

Floats = NDArray[np.float64]


def remarks_on(results: Results) -> tuple[Note, ...]:
    """Saturated pixels and what to do, and outside light brighter than a touch."""
    found = []
    headroom = results.metric("saturation_headroom")
    if isinstance(headroom, MetricValue) and headroom.values[0] < 1:
        exposure = float(np.atleast_1d(results.setting.p.readout.exposure)[0])
        fitting = 0.8 * exposure * float(headroom.values[0])
        found.append(
            Note(
                "shorten-exposure",
                f"Pixels are full in {headroom.at!r}: what they read means nothing. Shorten the exposure to about "
                f"{fitting * 1e3:.2g} ms or close the pupil.",
                trigger="saturation headroom below 1",
            )
        )
    touch, outside = MEASURES["touch_radiance"](results), MEASURES["outside_radiance"](results)
    if isinstance(touch, MetricValue) and isinstance(outside, MetricValue) and outside.values[0] > touch.values[0]:
        found.append(
            Note(
                "outside-outshines-touch",
                f"Outside light makes what hovers up to {outside.values[0] / max(touch.values[0], 1e-12):.2g} times as "
                f"bright as the weakest touch: {outside.at!r} looks like a touch. A frame without emitters to "
                "subtract, a narrower filter with brighter pulses, or shade could help.",
                trigger="radiance from outside above that of the weakest touch",
            )
        )
    return tuple(found)


def setting_notes(setting: Setting) -> tuple[Note, ...]:
    """What the model leaves out, and inputs that do not fit together."""
    p = setting.p
    index = setting.index(p.plate.material)
    view = pixel_side(setting) * p.lens.columns
    return (
        Note(
            "edge-light-not-guided",
            "At this index light that enters through the edge does not all stay in the plate: below 1.414 even a plate "
            "in air leaks.",
            trigger="index of the plate below 1.414",
            where=index < np.sqrt(2),
        ),
        Note(
            "bonded-emitters-shed",
            "Bonded emitters put light into the plate that the faces do not guide; it leaves near the edge as glow.",
            severity="info",
            where=np.full(setting.samples, p.emitters.coupling == "bonded"),
        ),
        Note(
            "view-misses-plate",
            "The camera does not see the whole width of the plate.",
            trigger="lens.view below plate.width",
            where=view < setting.spread(p.plate.width) * (1 - 1e-9),
        ),
        Note(
            "frames-overlap",
            "The exposure is longer than the time between two decisions.",
            trigger="readout.exposure above one over decision.rate",
            where=setting.spread(p.readout.exposure * p.decision.rate) > 1,
        ),
        Note(
            "back-not-air",
            "The camera is taken to look through a back face in air; a layer there changes what escapes.",
            where=np.full(setting.samples, p.plate.back != "air"),
        ),
        Note(
            "unpolarised-emitters",
            "Emitters along edges are taken as unpolarised.",
            where=np.full(setting.samples, p.emitter.polarization != "none"),
        ),
        *place_notes(setting),
        *_camera_notes(setting),
    )


def _camera_notes(setting: Setting) -> tuple[Note, ...]:
    """What the camera's place and the room around the plate bring with them."""
    p = setting.p
    return (
        Note(
            "filter-shifts-off-axis",
            "Towards the corners of the field the filter's band moves to the blue and passes less than half of the "
            "line. A wider filter, or one centred further to the red, evens it out.",
            trigger="line through the filter at the field's farthest corner below half of that on the axis",
            where=sight_of(setting, *_farthest_corner(setting)).shifted < 0.5,
        ),
        Note(
            "palm-in-its-own-shade",
            "The camera looks at the shaded palm while the sun lights the back of the hand: outside.lit says what "
            "reaches the palm from the sky beside and through the hand. Set it state by state.",
            severity="info",
            decides="a measurement on site",
            where=np.full(setting.samples, p.environment.ambient == "sun"),
        ),
        Note(
            "large-objects-uneven",
            "An object larger than the shortest hop takes its light first where the light comes from and glows less "
            "beyond; the pixel is given the mean over the object.",
            severity="info",
            trigger="diameter above the shortest hop, 2 thickness sqrt(index^2 - 1)",
            where=_largest(setting) > _shortest_hop(setting),
        ),
        Note(
            "trapped-light-not-followed",
            "What a touch sends back and the back face keeps travels on in the plate; the little it adds to other "
            "places is left out.",
            severity="info",
        ),
        Note(
            "broken-plate-bares-lamps",
            "A broken or lifted plate no longer guides the lamps' light: it leaves the rows openly, towards eyes.",
            trigger="lamps along the edges",
            decides="an assessment of the finished product after the IEC 62471 family",
            where=setting.spread(p.emitter.power) > 0,
        ),
    )


def _farthest_corner(setting: Setting) -> tuple[Floats, Floats]:
    """Corner of the field farthest from the lens's axis, (S,) each."""
    p, spread = setting.p, setting.spread
    x, y = (
        -np.copysign(np.maximum(spread(side) / 2 - spread(p.field.margin), 0.0), spread(axis))
        for side, axis in ((p.plate.width, p.lens.x), (p.plate.height, p.lens.y))
    )
    return x, y


def _largest(setting: Setting) -> Floats:
    """Diameter of the largest object of all states, (S,)."""
    sizes = [setting.spread(state.object.diameter) for state in setting.p.states.values() if state.object is not None]
    return np.max(sizes, axis=0) if sizes else np.zeros(setting.samples)


def _shortest_hop(setting: Setting) -> Floats:
    """Way between two hits on one face of the steepest light from an edge in air: it rises by asin(1/n), (S,)."""
    thickness, index = setting.spread(setting.p.plate.thickness), setting.index(setting.p.plate.material)
    return np.asarray(2 * thickness * np.sqrt(np.maximum(index**2 - 1, 0.0)))


def failure_rows(setting: Setting) -> tuple[FailureRow, ...]:
    """Rows of the failure-direction table."""
    return (
        FailureRow("scratch or chip", "glows for good like a small touch", False, ("trend",), slow=True),
        FailureRow("fingerprint grease", "a flat film does nothing, its ridges glow", False, ("trend",)),
        FailureRow("gasket or label on a face", "glows and takes light from what lies behind it", None, ("trend",)),
        FailureRow("dust on the plate", "its few contact points glow", False, ("trend",), slow=True),
        FailureRow("sun on hands or sleeves", "hovering things look like touches", False, ("dark test",)),
        FailureRow("one emitter dead", "its side of the plate grows dim", True, ("reference",)),
        FailureRow("warming up", "emitters fade together and leave the filter's band", True, ("reference",), slow=True),
        FailureRow("lens fogged or moved", "touches blur and grow dim", True, ("trend",), slow=True),
        FailureRow("plate bowed or wedged", "rays steepen on the way and leak early", None, (), slow=True),
    )
