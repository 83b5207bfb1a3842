"""How much of each drawn ray survives in a state, for pictures."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from outcouple.contact.cover import Cover
from outcouple.contact.response import answer
from outcouple.evaluation.table import StateRow, Table
from outcouple.geometry import RayPath

__all__ = ["ray_powers"]


def ray_powers(table: Table, row: StateRow) -> dict[str, tuple[tuple[float, ...], ...]]:
    """Per view the power left on every segment of every ray, 1 at the start.

    Mean of s and p; of coarse patches the first way.
    """
    covers = row.laid.ways[0].covers
    found = {}
    for view in table.design.geometry.views(table.setting):
        found[view.name] = tuple(_segments(ray, covers, row) for ray in view.rays)
    return found


def _segments(ray: RayPath, covers: Mapping[str, Cover], row: StateRow) -> tuple[float, ...]:
    power, left = [], 1.0
    for column, angle in zip(ray.columns[:-1], ray.angles[:-1], strict=True):
        if column != -1:
            crosses = column < -1
            face = row.laid.light.faces[-2 - column if crosses else column]
            left *= _reply(face, angle, covers, row, crosses)
        power.append(left)
    return tuple(power)


def _reply(face: str, angle: float, covers: Mapping[str, Cover], row: StateRow, crosses: bool) -> float:
    cover = covers.get(face)
    if cover is None:
        return 0.0 if crosses else 1.0
    reply = answer(
        cover, row.laid.light.guide, np.array([[angle]]), row.laid.media, acceptance=row.laid.light.acceptance
    )
    middle = row.laid.weights.size // 2
    pair = (reply.Ts, reply.Tp) if crosses else (reply.Rs, reply.Rp)
    return float(sum(np.broadcast_to(part, (1, row.laid.weights.size, 1))[0, middle, 0] for part in pair) / 2)
