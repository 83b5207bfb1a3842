"""How much light a face covered with drops keeps, turns and loses, read from a table of traced drops."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from importlib import resources

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cautions import caution
from outcouple.contact.fresnel import fresnel_amplitudes
from outcouple.notes import Note

__all__ = [
    "LEVELS",
    "TABLE_FILE",
    "DropTable",
    "drop_answer",
    "drop_notes",
    "drop_powers",
    "reflection_spread",
    "zone_angle",
]

Floats = NDArray[np.float64]
Number = float | Floats

TABLE_FILE = "drop_returns.npz"
LEVELS = 2047  # of a share in the stored table
GUIDE_RANGE = (1.3, 1.9)


@dataclass(frozen=True)
class DropTable:
    """Share of the light entering a drop that comes back within an angle of the specular direction.

    The variables are scaled so that kinks fall on nodes and flat drops of every contact angle look alike.

    n_drop         index of the drop, shape (A,)
    ratio          n_guide / n_drop, shape (B,); total reflection at the base starts at 1, a node
    contact_angle  [rad], shape (C,); interpolated in its logarithm
    zone           position of the angle inside the drop, shape (D,): see `zone_angle`
    reach          acceptance over the spread of a flat drop's reflections, shape (E,); the last node stands
                   for any
    kept           shape (A, B, C, D, E, 2); last axis: incident s, p
    """

    n_drop: Floats
    ratio: Floats
    contact_angle: Floats
    zone: Floats
    reach: Floats
    kept: NDArray[np.float32]


@cache
def _table() -> DropTable:
    with (resources.files("outcouple") / "data" / TABLE_FILE).open("rb") as file, np.load(file) as stored:
        axes = {name: np.asarray(stored[name], dtype=float) for name in stored.files if name != "kept"}
        return DropTable(**axes, kept=(stored["kept"] / np.float32(LEVELS)).astype(np.float32))


def drop_answer(
    *, n_guide: Number, n_drop: Number, angle: Floats, contact_angle: Number, acceptance: Number
) -> tuple[Floats, Floats]:
    """Unpolarised light kept within the acceptance, and returned outside it, by a face covered with drops.

    The mean of s and p of `drop_powers`, whose arguments it takes; both answers have shape (S, K), and
    1 - kept - turned is lost through the drops.

    >>> import numpy as np
    >>> kept, turned = drop_answer(
    ...     n_guide=1.484, n_drop=1.327, angle=np.radians([[45.0]]), contact_angle=np.radians(10),
    ...     acceptance=np.radians(5))
    >>> kept.round(2), (1 - kept - turned).round(2)
    (array([[0.16]]), array([[0.24]]))
    """
    kept, returned = drop_powers(
        n_guide=n_guide, n_drop=n_drop, angle=angle, contact_angle=contact_angle, acceptance=acceptance
    )
    return kept.mean(axis=-1), (returned - kept).mean(axis=-1)


def drop_powers(
    *, n_guide: Number, n_drop: Number, angle: Floats, contact_angle: Number, acceptance: Number
) -> tuple[Floats, Floats]:
    """Share kept within the acceptance and share returned at all, for incident s and p, shape (S, K, 2).

    Spherical caps cover the whole patch; light that comes back is summed over both outgoing polarisations.
    Formula: R_base + (1 - R_base) K, R_base by Fresnel, K interpolated from rays traced by
    `outcouple.contact.droptrace`; multilinear in scaled variables. Of fresh traces drawn over the whole range half lie
    within 0.001, 98 of 100 within 0.025, all within 0.04; up to 0.1 off where guide and drop differ by less than about
    10 % in index, since a small change of it moves the critical angle at the base by much (tests).
    Range: n_guide 1.3 to 1.9, n_drop 1.2 to 1.6, contact_angle up to 120 degrees, any angle; drops much
    larger than the wavelength and small against the capillary length; no absorption. `drop_notes` says what
    lies outside; the answer there is that of the edge.

    n_guide, n_drop, contact_angle [rad], acceptance [rad]  each a float or shape (S,)
    angle        incidence inside the guide [rad], shape (S, K)
    acceptance   half-angle of a cone about the specular direction, inside the guide
    """
    samples = np.broadcast_shapes(*(np.shape(v) for v in (n_guide, n_drop, contact_angle, acceptance)), (1,))
    guide, drop, phi, cone = (
        np.broadcast_to(np.asarray(v, dtype=float), samples)[:, None]
        for v in (n_guide, n_drop, contact_angle, acceptance)
    )
    sine = guide * np.sin(angle) / drop
    base = np.abs(fresnel_amplitudes(n_from=guide, n_to=drop, cosine=np.cos(angle))) ** 2
    inside = np.arcsin(np.minimum(sine, 1))
    table = _table()
    phi = np.maximum(phi, 1e-9)
    zone = _zone(inside, n_drop=drop, ratio=guide / drop, contact_angle=phi)
    reach = cone / reflection_spread(ratio=guide / drop, inside=inside, contact_angle=phi)
    block = _blocks(table, drop[:, 0], (guide / drop)[:, 0], phi[:, 0])
    returned = np.broadcast_to(_at(block[..., -1, :], table.zone, zone), (*zone.shape, 2))
    within = _within(block, table, zone, reach)
    entered = 1 - base
    return base + entered * np.minimum(within, returned), base + entered * returned


def drop_notes(*, n_guide: Number, n_drop: Number, contact_angle: Number) -> tuple[Note, ...]:
    """Cautions about drops outside the range of the table."""
    table = _table()
    checks = (
        ("index of the drop", n_drop, table.n_drop[0], table.n_drop[-1], 1.0, ""),
        ("index of the guide", n_guide, *GUIDE_RANGE, 1.0, ""),
        ("contact angle of the drop", contact_angle, 0.0, table.contact_angle[-1], 180 / np.pi, " deg"),
    )
    notes: list[Note] = []
    for what, value, low, high, scale, unit in checks:
        outside = (np.asarray(value) < low - 1e-9) | (np.asarray(value) > high + 1e-9)
        text = (
            f"The {what} lies outside the table of traced drops "
            f"({low * scale:.4g} to {high * scale:.4g}{unit}); the answer is that of the edge."
        )
        notes.extend(caution("drop-range", text, outside))
    return tuple(notes)


def reflection_spread(*, ratio: Number, inside: Number, contact_angle: Number) -> Floats:
    """Angle [rad] in the guide between the specular ray and the one reflected at the drop's far rim.

    A surface tilted by the contact angle returns the ray 2 contact_angle steeper; single reflections of a flat
    drop stay within that, so acceptance over this scale is alike for all of them.
    """
    turned = np.sin(np.maximum(np.asarray(inside) - 2 * np.asarray(contact_angle), -np.pi / 2))
    specular = np.minimum(np.sin(inside) / ratio, 1.0)
    spread = np.arcsin(specular) - np.arcsin(np.clip(turned / ratio, -1.0, 1.0))
    return np.asarray(np.maximum(spread, 1e-12))


def zone_angle(zone: Number, *, n_drop: Number, ratio: Number, contact_angle: Number) -> Floats:
    """Angle inside the drop [rad] at a position 0 to 4: inverse of the table's angular variable.

    2 is the critical angle of drop to air; 1 and 3 stand one contact angle before and after it (less for
    steep drops), where a flat drop starts to keep and stops to lose; 0 is normal incidence and 4 grazing
    incidence.
    """
    edges = _zone_edges(n_drop=n_drop, ratio=ratio, contact_angle=contact_angle)
    steps = np.clip(np.asarray(zone)[..., None] - np.arange(5), 0, 1)
    return np.asarray((steps * np.diff(edges, axis=-1)).sum(axis=-1))


def _zone_edges(*, n_drop: Number, ratio: Number, contact_angle: Number) -> Floats:
    critical = np.arcsin(1 / np.asarray(n_drop))
    grazing = np.maximum(np.arcsin(np.minimum(ratio, 1.0)), critical + 1e-6)
    before = critical - np.minimum(contact_angle, critical / 2)
    step = np.minimum(contact_angle, (grazing - critical) / 3)
    return np.stack(np.broadcast_arrays(0.0, before, critical, critical + step, grazing - step, grazing), axis=-1)


def _zone(inside: Floats, *, n_drop: Floats, ratio: Floats, contact_angle: Floats) -> Floats:
    edges = _zone_edges(n_drop=n_drop, ratio=ratio, contact_angle=contact_angle)
    steps = (inside[..., None] - edges[..., :-1]) / np.diff(edges, axis=-1)
    return np.asarray(np.clip(steps, 0, 1).sum(axis=-1))


def _blocks(table: DropTable, n_drop: Floats, ratio: Floats, contact_angle: Floats) -> Floats:
    """The table at each sample's drop, shape (S, D, E, 2)."""
    total: Floats | None = None
    spots = (
        _bracket(table.n_drop, n_drop),
        _bracket(table.ratio, ratio),
        _bracket(np.log(table.contact_angle), np.log(contact_angle)),
    )
    for corner in np.ndindex(2, 2, 2):
        weight = np.ones_like(n_drop)
        place = []
        for (low, share), upper in zip(spots, corner, strict=True):
            weight = weight * (share if upper else 1 - share)
            place.append(low + upper)
        part = weight[:, None, None, None] * table.kept[tuple(place)]
        total = part if total is None else total + part
    assert total is not None
    return total


def _within(block: Floats, table: DropTable, zone: Floats, reach: Floats) -> Floats:
    """Kept share at each ray's angle and acceptance; below the first node it goes with the solid angle."""
    low, share = _bracket(table.reach, np.maximum(reach, table.reach[0]))
    small = np.minimum(reach / table.reach[0], 1) ** 2
    row = np.arange(block.shape[0])[:, None]
    near, along = _bracket(table.zone, zone)
    total = np.zeros((*np.broadcast_shapes(zone.shape, reach.shape), 2))
    for step in (0, 1):
        angular = along if step else 1 - along
        for more in (0, 1):
            weight = angular * (share if more else 1 - share) * small
            total = total + weight[..., None] * block[row, near + step, low + more]
    return total


def _at(values: Floats, nodes: Floats, where: Floats) -> Floats:
    """Linear interpolation of (S, D, 2) values at positions (S, K)."""
    low, share = _bracket(nodes, where)
    row = np.arange(values.shape[0])[:, None]
    part = share[..., None]
    return np.asarray((1 - part) * values[row, low] + part * values[row, low + 1])


def _bracket(nodes: Floats, value: Floats) -> tuple[NDArray[np.intp], Floats]:
    """Node below each value and the share of the way to the next; held at the ends (see `drop_notes`)."""
    low = np.clip(np.searchsorted(nodes, value, side="right") - 1, 0, len(nodes) - 2)
    share = (value - nodes[low]) / (nodes[low + 1] - nodes[low])
    return low, np.clip(share, 0, 1)
