"""What commands share: the design argument, JSON output."""

from __future__ import annotations

import json
from typing import Any

import click

__all__ = ["design_argument", "echo_json", "json_option"]

design_argument = click.argument("file", type=click.Path())
json_option = click.option("--json", "as_json", is_flag=True, help="Print one JSON object instead of text.")


def echo_json(value: Any) -> None:
    """Print plain data as JSON; there are no NaNs in it."""
    click.echo(json.dumps(value, indent=2, ensure_ascii=False, allow_nan=False))
