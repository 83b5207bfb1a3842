"""How much of each drawn ray survives in a state, for pictures."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from outcouple.contact.cover import Cover
from outcouple.contact.response import answer
from outcouple.evaluation.table import StateRow, Table
from outcouple.geometry import RayPath, View

__all__ = ["ray_powers"]

Powers = tuple[tuple[float, ...], ...]


def ray_powers(table: Table, row: StateRow, views: Sequence[View]) -> dict[str, Powers]:
    """Per view the power left on every segment of every ray, 1 at the start.

    Mean of s and p; of coarse patches the first way.
    """
    covers = row.laid.ways[0].covers
    return {view.name: _powers(view.rays, covers, row) for view in views}


def _powers(rays: Sequence[RayPath], covers: Mapping[str, Cover], row: StateRow) -> Powers:
    """All hits of all rays on one face are answered in one go."""
    factors = [np.ones(max(len(ray.points) - 1, 0)) for ray in rays]
    hits: dict[tuple[str, bool], list[tuple[int, int]]] = {}
    for number, ray in enumerate(rays):
        for at, column in enumerate(ray.columns[:-1]):
            if column != -1:
                crosses = column < -1
                face = row.laid.light.faces[-2 - column if crosses else column]
                hits.setdefault((face, crosses), []).append((number, at))
    for (face, crosses), places in hits.items():
        angles = np.array([rays[number].angles[at] for number, at in places])
        for (number, at), power in zip(places, _reply(covers.get(face), angles, row, crosses), strict=True):
            factors[number][at] = power
    return tuple(tuple(np.cumprod(factor).tolist()) for factor in factors)


def _reply(cover: Cover | None, angles: np.ndarray, row: StateRow, crosses: bool) -> np.ndarray:
    """Share that a face reflects, or lets across, at each angle."""
    if cover is None:
        return np.full(angles.shape, 0.0 if crosses else 1.0)
    reply = answer(cover, row.laid.light.guide, angles[None, :], row.laid.media, acceptance=row.laid.light.acceptance)
    middle = row.laid.weights.size // 2
    shape = (1, row.laid.weights.size, angles.size)
    s, p = (reply.Ts, reply.Tp) if crosses else (reply.Rs, reply.Rp)
    return np.asarray(np.broadcast_to((s + p) / 2, shape)[0, middle])
