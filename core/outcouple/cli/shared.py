"""What commands share: arguments, JSON output, files, workers."""

from __future__ import annotations

import json
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from outcouple.errors import UserMistake

if TYPE_CHECKING:
    from concurrent.futures import Executor

__all__ = ["check_ending", "design_argument", "echo_json", "json_option", "pool", "workers_option", "write_file"]

design_argument = click.argument("file", type=click.Path())
json_option = click.option("--json", "as_json", is_flag=True, help="Print one JSON object instead of text.")


def echo_json(value: Any) -> None:
    """Print plain data as JSON; there are no NaNs in it."""
    click.echo(json.dumps(value, indent=2, ensure_ascii=False, allow_nan=False))


workers_option = click.option(
    "--workers",
    type=click.IntRange(1, 256),
    default=1,
    show_default=True,
    help="Threads to share the work among; the numbers are the same.",
)


def check_ending(option: str, name: str | None, ending: str) -> None:
    """Refuse a name of a file to write that ends otherwise."""
    if name is not None and Path(name).suffix != ending:
        raise UserMistake(f"{option} {name}: the name must end in {ending}")


@contextmanager
def pool(workers: int) -> Iterator[Executor | None]:
    """Threads for a study, none for one worker; numpy lets them run beside each other."""
    if workers == 1:
        yield None
        return
    from concurrent.futures import ThreadPoolExecutor

    with ThreadPoolExecutor(workers) as executor:
        yield executor


def write_file(option: str, name: str, text: str) -> None:
    """Write a file whole or not at all, and say so on stderr."""
    from outcouple.report.page import write_atomically

    try:
        write_atomically(Path(name), text)
    except OSError as error:
        raise UserMistake(f"{option} {name}: cannot be written: {error.strerror or error}") from None
    click.echo(f"wrote {name}", err=True)
