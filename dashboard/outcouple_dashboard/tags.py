"""Small helpers for elements of a page."""

from __future__ import annotations

from typing import Any

from dash import ClientsideFunction, Dash

__all__ = ["aria", "local"]


def aria(**names: str) -> dict[str, Any]:
    """Attributes for readers of the screen: ``aria(label="Close")`` gives ``aria-label``."""
    return {f"aria-{name}": value for name, value in names.items()}


def local(app: Dash, function: str, *wires: Any, **options: Any) -> None:
    """A callback that runs in the browser alone; its function stands in ``assets/clientside.js``."""
    app.clientside_callback(ClientsideFunction("outcouple", function), *wires, **options)  # type: ignore[no-untyped-call]
