"""A commented starter design for a geometry and a job."""

from __future__ import annotations

from outcouple.design.load import design_model
from outcouple.fields import Leaf, leaves
from outcouple.geometry import Geometry

__all__ = ["starter_text"]


def starter_text(geometry: Geometry, job: str) -> str:
    """The text of a starter design: the inputs that decide, commented, then states and requirements."""
    sections: dict[str, list[Leaf]] = {}
    for leaf in leaves(design_model(type(geometry))):
        if leaf.deciding and leaf.default_text:
            sections.setdefault(leaf.path[0], []).append(leaf)
    lines = [
        f"# {geometry.name}: {geometry.summary}.",
        "# Every value below is a default; change what you know. `outcouple budget` reads this file.",
        "",
        f'title = "{job.capitalize()}, first draft"',
        f'geometry = "{geometry.name}"',
        "",
    ]
    for section, found in sections.items():
        lines.append(f"[{section}]")
        for leaf in found:
            value = (
                leaf.default_text
                if leaf.what in ("count", "flag") or (leaf.kind == "number")
                else f'"{leaf.default_text}"'
            )
            bounds = (
                f" ({leaf.bounds})" if leaf.bounds else f" (one of: {', '.join(leaf.choices)})" if leaf.choices else ""
            )
            lines.append(f"{leaf.path[-1]} = {value}  # {leaf.describe}{bounds}")
        lines.append("")
    return "\n".join(lines) + "\n" + geometry.starter(job)
