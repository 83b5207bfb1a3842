"""The look shared by every picture: a few colours that colour-blind readers can tell apart, light and dark."""

from __future__ import annotations

import math
import textwrap
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from outcouple import quantities
from outcouple.quantities import format_number, in_unit, is_kind, kind_of

__all__ = [
    "CONFIG",
    "DARK",
    "LIGHT",
    "Look",
    "axis",
    "base_layout",
    "best_unit",
    "log_ticks",
    "ramp",
    "state_colours",
    "wrapped",
]

CONFIG: Mapping[str, Any] = {
    "showSendToCloud": False,
    "displaylogo": False,
    "responsive": True,
    "modeBarButtonsToRemove": ["lasso2d", "select2d", "autoScale2d"],
}
"""Plotly options of every picture; nothing is ever sent anywhere."""


@dataclass(frozen=True)
class Look:
    """Colours of one theme.

    states  by order; the set of Okabe and Ito (2008), told apart with every common colour blindness
    ramp    one hue from faint to strong, for power and maps
    """

    paper: str
    ink: str
    faint: str
    grid: str
    guide: str
    good: str
    bad: str
    states: tuple[str, ...]
    ramp: tuple[str, ...]


LIGHT = Look(
    paper="#ffffff",
    ink="#22303c",
    faint="#65727e",
    grid="#e4e8ec",
    guide="#dbe7ee",
    good="#00745a",
    bad="#b7410e",
    states=("#0072b2", "#d55e00", "#009e73", "#cc79a7", "#b58900", "#56b4e9", "#7f7f7f"),
    ramp=("#e8eef3", "#b9d3df", "#82b3c6", "#4a90a8", "#1f6b86", "#0b4560"),
)
DARK = Look(
    paper="#16202a",
    ink="#e6ebef",
    faint="#9aa8b4",
    grid="#2c3945",
    guide="#24384a",
    good="#3ec9a0",
    bad="#ff9466",
    states=("#56b4e9", "#ff9f5a", "#3ec9a0", "#e6a1c6", "#f0cf57", "#9fd3f5", "#b0b0b0"),
    ramp=("#22303d", "#2a566b", "#377d97", "#55a3bb", "#8fcadb", "#d6f1f7"),
)


def base_layout(look: Look, title: str = "", *, height: int = 340) -> dict[str, Any]:
    """Layout every picture starts from."""
    return {
        "title": {"text": title, "x": 0, "xanchor": "left", "font": {"size": 15, "color": look.ink}},
        "font": {"family": "system-ui, sans-serif", "size": 13, "color": look.ink},
        "paper_bgcolor": look.paper,
        "plot_bgcolor": look.paper,
        "margin": {"l": 60, "r": 20, "t": 44 if title else 16, "b": 48},
        "height": height,
        "showlegend": False,
        "hoverlabel": {"font": {"family": "system-ui, sans-serif"}},
    }


def axis(look: Look, title: str = "", **more: Any) -> dict[str, Any]:
    """An axis with its title."""
    return {
        "title": {"text": title, "font": {"size": 13}},
        "gridcolor": look.grid,
        "zerolinecolor": look.grid,
        "linecolor": look.faint,
        "tickcolor": look.faint,
        "automargin": True,
        **more,
    }


def ramp(look: Look) -> list[list[Any]]:
    """The one-hue ramp as a colour scale."""
    last = len(look.ramp) - 1
    return [[at / last, colour] for at, colour in enumerate(look.ramp)]


def state_colours(look: Look, names: Sequence[str]) -> dict[str, str]:
    """A colour per state, by order."""
    return {name: look.states[at % len(look.states)] for at, name in enumerate(names)}


def best_unit(values: Sequence[float], kind: str, unit: str = "") -> tuple[str, list[float]]:
    """Display unit for a set of SI values, and the values in it; an unknown unit leaves them as they are."""
    if not is_kind(kind) or (unit and unit not in kind_of(kind).units):
        return unit, [float(value) for value in values]
    top = max((abs(value) for value in values if value == value), default=0.0)
    chosen = unit or quantities.best_unit(top, kind)
    return chosen, [float(in_unit(float(value), kind, chosen)) for value in values]


def log_ticks(values: Sequence[float]) -> dict[str, Any]:
    """Ticks of an axis over positive values: at 1, 2 and 5 of every decade; over more than two decades at their
    beginnings alone, nine at most."""
    low, high = math.log10(min(values)), math.log10(max(values))
    steps = (1.0,) if high - low > 2.01 else (1.0, 2.0, 5.0)
    decades = range(math.floor(low), math.ceil(high) + 1, max(1, math.ceil((high - low) / 8)))
    places = [step * 10.0**decade for decade in decades for step in steps]
    return {"tickvals": places, "ticktext": [format_number(place) for place in places]}


def wrapped(text: str, width: int = 34) -> str:
    """A label broken into lines."""
    return "<br>".join(textwrap.wrap(text, width)) or text
