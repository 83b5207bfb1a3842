"""Make the table of traced drops: ``python -m outcouple.contact.droptable`` (some minutes on one core)."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.droplet import LEVELS, TABLE_FILE, reflection_spread, zone_angle
from outcouple.contact.droptrace import trace_drop

__all__ = ["make_table"]

Floats = NDArray[np.float64]

N_DROP = np.array([1.2, 1.3, 1.43, 1.6])
RATIO = np.array([0.8, 0.88, 0.94, 0.975, 1.0, 1.02, 1.06, 1.13, 1.3, 1.6])
CONTACT_ANGLE = np.radians([0.5, 1.2, 2.5, 5, 8, 11, 14, 18, 22, 27, 33, 40, 48, 58, 70, 80, 90, 105, 120])
ZONE = np.concatenate(
    (
        [0, 0.4, 0.65, 0.83, 0.93, 0.98],
        [1, 1.25, 1.5, 1.75, 1.9],
        [2, 2.06, 2.15, 2.3, 2.5, 2.75],
        [3, 3.2, 3.4, 3.6, 3.8],
        [4, 4.2, 4.4, 4.6, 4.8, 4.99],
    )
)
LEAST_GUIDE = 1.05
REACH = np.array([0.06, 0.12, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1.0, 1.15, 1.4, 1.8, 2.5, np.inf])


def make_table(*, rays: int = 3000) -> dict[str, NDArray[Any]]:
    """Trace every node; arrays as `DropTable` names them, ``kept`` in whole numbers up to LEVELS."""
    shape = (len(N_DROP), len(RATIO), len(CONTACT_ANGLE), len(ZONE), len(REACH), 2)
    kept = np.zeros(shape)
    for place in np.ndindex(shape[:4]):
        kept[place] = _node(*(axis[at] for axis, at in zip(_AXES, place, strict=True)), rays=rays)
    reach = np.where(np.isfinite(REACH), REACH, 2 * REACH[-2])
    return {
        "n_drop": N_DROP,
        "ratio": RATIO,
        "contact_angle": CONTACT_ANGLE,
        "zone": ZONE,
        "reach": reach,
        "kept": np.round(np.clip(kept, 0, 1) * LEVELS).astype(np.uint16),
    }


_AXES = (N_DROP, RATIO, CONTACT_ANGLE, ZONE)


def _node(n_drop: float, ratio: float, contact_angle: float, zone: float, *, rays: int) -> Floats:
    """Returned share of what entered the drop within each reach, shape (E, 2)."""
    ratio = max(ratio, LEAST_GUIDE / n_drop)  # no guide is thinner; the corner node only completes the grid
    inside = float(zone_angle(zone, n_drop=n_drop, ratio=ratio, contact_angle=contact_angle))
    angle = float(np.arcsin(np.sin(inside) / ratio))
    cap = trace_drop(n_guide=ratio * n_drop, n_drop=n_drop, angle=angle, contact_angle=contact_angle, rays=rays)
    order = np.argsort(cap.deviation)
    total = np.concatenate((np.zeros((1, 2)), np.cumsum(cap.power[order], axis=0)))
    spread = float(reflection_spread(ratio=ratio, inside=inside, contact_angle=contact_angle))
    counted = np.searchsorted(cap.deviation[order], REACH * spread, side="right")
    return np.asarray(total[counted] / (1 - cap.base))


def main() -> None:
    """Write the table beside the other data files."""
    target = Path(__file__).parents[1] / "data" / TABLE_FILE
    np.savez_compressed(target, allow_pickle=False, **make_table())
    print(f"{target}: {target.stat().st_size / 1024:.0f} KiB")


if __name__ == "__main__":
    main()
