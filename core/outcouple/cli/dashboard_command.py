"""``outcouple dashboard``: the local page on a folder of designs."""

from __future__ import annotations

import click

__all__ = ["command"]


@click.command("dashboard")
@click.argument("folder", type=click.Path(), default=".")
@click.option("--port", type=click.IntRange(0, 65535), default=8050, show_default=True, help="0 takes a free one.")
@click.option(
    "--listen",
    default="127.0.0.1",
    show_default=True,
    help="Address to listen on. Any but this machine's own lets others in: they need the token that is printed.",
)
@click.option("--name", "names", multiple=True, help="Host name others call this machine by, with --listen.")
@click.option(
    "--token",
    envvar="OUTCOUPLE_TOKEN",
    default="",
    help="Token for --listen, made up where not given; also OUTCOUPLE_TOKEN, which keeps it out of the process list.",
)
@click.option("--browser", is_flag=True, help="Open a browser.")
def command(folder: str, port: int, listen: str, names: tuple[str, ...], token: str, browser: bool) -> int:
    """Open a page on a FOLDER of design files: explore a design, see why, compare variants side by side.

    It listens to this machine alone and asks nothing of the internet. Ctrl+C ends it.
    """
    from outcouple_dashboard.server import serve

    def announce(address: str) -> None:
        click.echo(f"outcouple is at {address}\nCtrl+C ends it.")
        if browser:
            import webbrowser

            webbrowser.open(address)

    serve(folder, announce=announce, port=port, listen=listen, names=names, token=token)
    return 0
