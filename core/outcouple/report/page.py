"""Self-contained HTML pages of pictures and tables: one file, plotly inlined, nothing fetched."""

from __future__ import annotations

import json
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from importlib import resources
from pathlib import Path
from typing import Any

from outcouple.outcome import Outcome
from outcouple.report import figures

__all__ = ["Picture", "outcome_pictures", "page_of", "write_atomically"]


@dataclass(frozen=True)
class Picture:
    """A figure with its heading; ``text`` stands below it."""

    name: str
    heading: str
    figure: Mapping[str, Any]
    text: str = ""


def outcome_pictures(
    outcome: Outcome, *, states: Sequence[str] = (), look: figures.Look = figures.LIGHT
) -> list[Picture]:
    """Every picture an outcome has."""
    found = [
        Picture(
            view.name.replace(" ", "-"),
            f"{view.name.capitalize()}, rays coloured by the power they still carry",
            figures.section_figure(outcome, states, view=view.name, look=look),
            _legend_of(outcome),
        )
        for view in outcome.views
    ]
    found.append(Picture("ledger", "Where the light goes", figures.ledger_figure(outcome, look=look)))
    found.append(Picture("signals", "Readings and the level", figures.signals_figure(outcome, look=look)))
    if outcome.noise:
        found.append(Picture("noise", "What the noise is made of", figures.noise_figure(outcome, look=look)))
    if outcome.curve is not None:
        heading = outcome.curve.label.capitalize()
        found.append(Picture("response", heading, figures.response_figure(outcome, look=look)))
    found += [
        Picture(surface.name, surface.label.capitalize(), figures.surface_figure(surface, look=look))
        for surface in (*outcome.surfaces, *((outcome.tunnelling,) if outcome.tunnelling else ()))
    ]
    return found


def _legend_of(outcome: Outcome) -> str:
    return "Dark and thick: all of the power; thin and dotted: less than 0.1 % left."


@cache
def _plotly_js() -> str:
    return (resources.files("plotly") / "package_data" / "plotly.min.js").read_text(encoding="utf-8")


def page_of(
    title: str,
    pictures: Sequence[Picture],
    *,
    lead: str = "",
    tables: Sequence[tuple[str, Sequence[Sequence[str]]]] = (),
    cautions: Sequence[str] = (),
    details: Sequence[tuple[str, Sequence[Sequence[str]]]] = (),
    look: figures.Look = figures.LIGHT,
) -> str:
    """One HTML page: title, lead, tables, pictures, cautions, more tables. Everything a user wrote is escaped."""
    from jinja2 import Environment, PackageLoader, select_autoescape

    environment = Environment(loader=PackageLoader("outcouple.report", "templates"), autoescape=select_autoescape())
    return environment.get_template("page.html").render(
        title=title,
        lead=lead,
        pictures=pictures,
        tables=tables,
        cautions=cautions,
        details=details,
        plotly=_plotly_js(),
        data=json.dumps({picture.name: picture.figure for picture in pictures}).replace("<", "\\u003c"),
        config=json.dumps(dict(figures.CONFIG)),
        look=look,
        dark=look is figures.DARK,
    )


def write_atomically(path: Path, text: str) -> None:
    """Write a file whole or not at all."""
    import os
    import tempfile

    handle, temporary = tempfile.mkstemp(dir=path.parent or Path(), prefix=f".{path.name}.")
    try:
        with os.fdopen(handle, "w", encoding="utf-8", newline="") as file:
            file.write(text)
        os.chmod(temporary, 0o644)
        os.replace(temporary, path)
    except BaseException:
        os.unlink(temporary)
        raise
