"""``outcouple draw``: pictures of one design."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import click

from outcouple.cli.shared import design_argument
from outcouple.errors import UserMistake

if TYPE_CHECKING:
    from outcouple.report.page import Picture

__all__ = ["command"]

IMAGES = (".svg", ".png")


@click.command("draw")
@design_argument
@click.option(
    "--out", type=click.Path(), required=True, help="page.html, or a name.svg / name.png for single pictures."
)
@click.option("--state", "states", multiple=True, help="State to draw the rays of; twice for two side by side.")
@click.option("--maps", is_flag=True, help="Also maps over the surface.")
@click.option("--dark", is_flag=True, help="Dark colours.")
def command(file: str, out: str, states: tuple[str, ...], maps: bool, dark: bool) -> int:
    """Draw a design: cross-section with rays, ledger, readings, noise, response, maps.

    An HTML page holds all pictures; .svg and .png write one file per picture and need the extra "figures".
    """
    from outcouple.design import load_design
    from outcouple.evaluation import evaluate
    from outcouple.report.figures import DARK, LIGHT
    from outcouple.report.page import outcome_pictures, page_of, write_atomically

    target = Path(out)
    if target.suffix not in (".html", *IMAGES):
        raise UserMistake(f"--out {out}: the name must end in .html, .svg or .png")
    outcome = evaluate(load_design(file), maps=maps, advice=False)
    known = [state.name for state in outcome.states]
    for state in states:
        if state not in known:
            raise UserMistake(f"--state {state}: no such state; there are: {', '.join(known)}")
    look = DARK if dark else LIGHT
    pictures = outcome_pictures(outcome, states=states, look=look)
    if target.suffix in IMAGES:
        for path in _images(target, pictures):
            click.echo(f"wrote {path}")
        return 0
    cautions = [note.text + (f" Decides: {note.decides}." if note.decides else "") for note in outcome.notes]
    try:
        write_atomically(target, page_of(outcome.title, pictures, lead=outcome.headline, cautions=cautions, look=look))
    except OSError as error:
        raise UserMistake(f"--out {out}: cannot be written: {error.strerror or error}") from None
    click.echo(f"wrote {target} ({len(pictures)} pictures)")
    return 0


def _images(target: Path, pictures: list[Picture]) -> list[Path]:
    try:
        import kaleido  # noqa: F401
        import plotly.io
    except ImportError:
        raise UserMistake('.svg and .png need the extra "figures": pip install "outcouple[figures]"') from None
    written = []
    for picture in pictures:
        path = target.with_name(f"{target.stem}-{picture.name}{target.suffix}")
        try:
            plotly.io.write_image(dict(picture.figure), path, width=1000, height=picture.figure["layout"]["height"])
        except Exception as error:
            raise UserMistake(f"{path}: cannot be drawn as an image: {error}; an .html page always works") from None
        written.append(path)
    return written
