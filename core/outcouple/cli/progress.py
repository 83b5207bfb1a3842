"""A line of progress on stderr for work that takes more than a second."""

from __future__ import annotations

import sys
import time
from collections.abc import Iterator
from contextlib import contextmanager
from typing import Protocol

import click

__all__ = ["Progress", "progress_line"]

QUIET = 1.0
"""Seconds without a word."""
PAUSE = 0.2
"""Seconds between two looks."""


class Progress(Protocol):
    """Told how much is done of how much."""

    def __call__(self, done: int, total: int) -> None:
        """Say so, where it is time to."""


@contextmanager
def progress_line(what: str) -> Iterator[Progress]:
    """A callback that keeps one line on stderr up to date; the line is wiped at the end. Silent where stderr is no
    terminal, but for one line when the work is long."""
    begun = time.monotonic()
    last = begun
    written = False
    live = sys.stderr.isatty()

    def tell(done: int, total: int) -> None:
        nonlocal last, written
        now = time.monotonic()
        if now - begun < QUIET or now - last < PAUSE or done >= total:
            return
        last = now
        left = (now - begun) / done * (total - done)
        line = f"{what}: {done} of {total}, about {left:.0f} s left"
        if live:
            click.echo(f"\r{line:<70}", err=True, nl=False)
        elif not written:
            click.echo(line, err=True)
        written = True

    try:
        yield tell
    finally:
        if live and written:
            click.echo(f"\r{'':<70}\r", err=True, nl=False)
