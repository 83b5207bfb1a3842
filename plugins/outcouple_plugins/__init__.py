"""The sensor geometries that come with outcouple, given like anyone's through the hooks."""

from __future__ import annotations

from outcouple.hooks.spec import hookimpl

__all__ = ["GEOMETRIES"]

GEOMETRIES: tuple[str, ...] = (
    "prism-switch = outcouple_plugins.prism_switch:PrismSwitch | two-face prism that loses its light into a liquid",
    "round-tip = outcouple_plugins.round_tip:RoundTip | cone, dome or truncated cone that loses its light to a liquid",
    "leak-puck = outcouple_plugins.leak_puck:LeakPuck | prism over a capillary gap on the floor: finds leaks",
    "droplet-plate = outcouple_plugins.droplet_plate:DropletPlate | plate whose light bounces under drops: rain, dew",
    "gap-pair = outcouple_plugins.gap_pair:GapPair | two prisms whose narrow gap passes light: displacement or force",
    "edge-perimeter = outcouple_plugins.edge_perimeter:EdgePerimeter | plate read around its perimeter: objects shadow "
    "chords of guided light",
    "edge-camera = outcouple_plugins.edge_camera:EdgeCamera | plate lit at its edges, read by a camera behind it: "
    "touches glow",
    "soft-overlay = outcouple_plugins.soft_overlay:SoftOverlay | soft skin over an edge-lit plate, read by a camera: "
    "pressure makes it glow",
)


@hookimpl
def outcouple_geometries() -> tuple[str, ...]:
    """Every built-in geometry; each is imported only when a design asks for it."""
    return GEOMETRIES
