"""The command line: thin commands over the public functions, each imported when it runs."""

from __future__ import annotations

from outcouple.cli.main import main

__all__ = ["main"]
