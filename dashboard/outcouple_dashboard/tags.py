"""Small helpers for elements of a page."""

from __future__ import annotations

import json
from typing import Any

from dash import ClientsideFunction, Dash, ctx

__all__ = ["aria", "changed_inputs", "local", "pressed"]


def aria(**names: str) -> dict[str, Any]:
    """Attributes for readers of the screen: ``aria(label="Close")`` gives ``aria-label``."""
    return {f"aria-{name}": value for name, value in names.items()}


def local(app: Dash, function: str, *wires: Any, **options: Any) -> None:
    """A callback that runs in the browser alone; its function stands in ``assets/clientside.js``."""
    app.clientside_callback(ClientsideFunction("outcouple", function), *wires, **options)  # type: ignore[no-untyped-call]


def changed_inputs() -> list[tuple[Any, Any]]:
    """(id, value) of every input that set off the callback being answered; ids of patterns as dicts."""
    found = []
    for row in ctx.triggered:
        name = row["prop_id"].rpartition(".")[0]
        found.append((json.loads(name) if name.startswith("{") else name, row["value"]))
    return found


def pressed() -> tuple[Any, Any]:
    """(id, value) of what the user pressed or filled; (None, None) where parts of the page merely appeared."""
    return next(((name, value) for name, value in changed_inputs() if value), (None, None))
