"""The Vary page."""

from __future__ import annotations

from typing import Any

from dash import Dash, html

from outcouple_dashboard.desk import Desk

__all__ = ["layout", "register"]


def layout() -> Any:
    """All parts, empty."""
    return html.Div()


def register(app: Dash, desk: Desk) -> None:
    """Nothing yet."""
