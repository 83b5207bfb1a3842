"""Which emitter sees which detector, and along which ways."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.errors import UserMistake
from outcouple.geometry import Setting
from outcouple_plugins.plate.edge import Port
from outcouple_plugins.plate.fan import Fan, fan_of, port_of
from outcouple_plugins.plate.parameters import edges_of
from outcouple_plugins.plate.ways import Pairs, Ways, pairs_of, tiles_of, ways_of

__all__ = ["Chords", "chords_of", "detector_port", "emitter_port"]

Floats = NDArray[np.float64]

TURNING = 1.45
"""Index below which light may pass between neighbouring edges in air: sqrt(2), and some room for its drift."""


@dataclass(frozen=True)
class Chords:
    """The chords of a design and the fan of one emitter; shared by light, maps and drawings.

    width, height  of the plate, (S,)
    beams          widths of an emitter and of a detector along their edges, (S,) each
    """

    pairs: Pairs
    ways: Ways
    fan: Fan
    emitter: Port
    detector: Port
    width: Floats
    height: Floats
    beams: tuple[Floats, Floats]


def emitter_port(setting: Setting) -> Port:
    """The emitters' end of the chords."""
    p, spread = setting.p, setting.spread
    return port_of(
        index=setting.index(p.plate.material),
        thickness=spread(p.plate.thickness),
        height=spread(p.emitters.height),
        offset=spread(p.emitters.offset),
        gap=spread(p.emitters.gap),
        half_angle=spread(p.emitter.half_angle),
        bonded=p.emitters.coupling == "bonded",
        exponent=spread(p.emitter.exponent),
    )


def detector_port(setting: Setting) -> Port:
    """The detectors' end of the chords."""
    p, spread = setting.p, setting.spread
    return port_of(
        index=setting.index(p.plate.material),
        thickness=spread(p.plate.thickness),
        height=spread(p.detectors.height),
        offset=spread(p.detectors.offset),
        gap=spread(p.detectors.gap),
        half_angle=spread(p.detectors.half_angle),
        bonded=p.detectors.coupling == "bonded",
    )


def chords_of(setting: Setting) -> Chords:
    """Every pair of an emitter and a detector that may see each other; those beyond the azimuth limit stay, blind.

    Raises UserMistake where no edge with detectors faces one with emitters.
    """
    p, spread = setting.p, setting.spread
    emitter, detector = emitter_port(setting), detector_port(setting)
    width, height = spread(p.plate.width), spread(p.plate.height)
    pairs = pairs_of(
        edges_of(p.emitters.edges),
        p.emitters.per_edge,
        edges_of(p.detectors.edges),
        p.detectors.per_edge,
        adjacent=emitter.bonded or detector.bonded or bool(np.min(emitter.index) < TURNING),
    )
    if not pairs.count:
        raise UserMistake(
            f"no emitter faces a detector: emitters.edges = {p.emitters.edges!r}, detectors.edges = "
            f"{p.detectors.edges!r}; in air, light passes only between edges that face each other"
        )
    steepest = np.minimum(emitter.highest, detector.highest)
    tiles = tiles_of(pairs, p.plate.edges, width=width, height=height, steepest=steepest)
    breaks = (*setting.breaks, setting.index(p.plate.back), setting.index(p.plate.rim_material))
    return Chords(
        pairs,
        ways_of(pairs, tiles, width=width, height=height),
        fan_of(emitter, breaks),
        emitter,
        detector,
        width,
        height,
        (spread(p.emitters.width), spread(p.detectors.width)),
    )
