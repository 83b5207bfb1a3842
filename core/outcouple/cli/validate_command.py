"""``outcouple validate``: every mistake of a design file."""

from __future__ import annotations

import click

from outcouple.cli.shared import design_argument, echo_json, json_option

__all__ = ["command"]


@click.command("validate")
@design_argument
@json_option
@click.option("--schema", is_flag=True, help="Print the JSON Schema of the design's geometry, for editors, instead.")
def command(file: str, as_json: bool, schema: bool) -> int:
    """Check a design file and name every mistake with its line and column."""
    from outcouple.design import load_design

    design = load_design(file)
    if schema:
        from outcouple.design.file_schema import file_schema

        echo_json(file_schema(design.geometry))
    elif as_json:
        echo_json(
            {
                "file": file,
                "geometry": design.geometry.name,
                "valid": True,
                "states": [s.name for s in design.states],
            }
        )
    else:
        held = f"{len(design.states)} states, {len(design.requirements)} requirements"
        click.echo(f"{file}: fine ({design.geometry.name}, {held})")
        click.echo(f"next: outcouple budget {file}")
    return 0
