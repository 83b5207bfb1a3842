"""What an object takes from the light of a chord, by how far the chord runs under it."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from outcouple.evaluation.transport import mean_power
from outcouple.geometry import StateResult
from outcouple_plugins.edge_perimeter.light import SPOT

__all__ = ["spot_loss"]

Floats = NDArray[np.float64]


def spot_loss(state: StateResult, lengths: Floats) -> Floats:
    """Share of every ray that contacts of given lengths take, (S, K, N); discrete hits, mean over the entry phase.

    lengths  of contact along the way [m], (S, N)

    s and p answer apart. Coarse patches give several build-ups, whose losses add by their shares.
    """
    light = state.light
    assert light.spot is not None
    assert state.reply is not None
    hits = lengths[:, None, :] / light.spot.hop[:, :, None]
    s_ray = light.polarization[:, :, None] > 0
    lost: Floats = np.zeros((1, 1, 1))
    for share, Rs, Rp in state.reply("spot", light.angle[:, :, SPOT]):
        bounce = np.where(s_ray, Rs[:, :, None], Rp[:, :, None])
        lost = lost + np.asarray(share).reshape(-1, 1, 1) * (1 - mean_power(bounce, hits))
    return np.asarray(lost)
