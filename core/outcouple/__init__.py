"""outcouple: a design calculator for sensors that work by total internal reflection and its frustration.

    from outcouple import load_design, evaluate, optics, materials
    outcome = evaluate(load_design("tank.toml"))
    outcome.metrics["worst_ratio"].value

Everything is SI inside, angles in radians, wavelengths and indices those of vacuum. Names are imported when first used,
so that the command line starts fast.
"""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from outcouple import materials, optics
    from outcouple.design import load_design
    from outcouple.evaluation import evaluate, evaluate_batch
    from outcouple.hooks import hookimpl

__all__ = ["evaluate", "evaluate_batch", "hookimpl", "load_design", "materials", "optics"]

_HOMES = {
    "evaluate": "outcouple.evaluation",
    "evaluate_batch": "outcouple.evaluation",
    "hookimpl": "outcouple.hooks",
    "load_design": "outcouple.design",
}


def __getattr__(name: str) -> Any:
    if name in _HOMES:
        return getattr(importlib.import_module(_HOMES[name]), name)
    if name in ("materials", "optics"):
        return importlib.import_module(f"outcouple.{name}")
    raise AttributeError(f"module 'outcouple' has no attribute {name!r}")
