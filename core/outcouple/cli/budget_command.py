"""``outcouple budget``: the main job."""

from __future__ import annotations

import click

from outcouple.cli.shared import design_argument, echo_json, json_option

__all__ = ["command"]


@click.command("budget")
@design_argument
@json_option
@click.option("--all", "every", is_flag=True, help="Also metrics that are not applicable or open.")
@click.option("--maps", is_flag=True, help="Also what costs a map over the surface.")
def command(file: str, as_json: bool, every: bool, maps: bool) -> int:
    """Where the light goes (light, not money): signal, noise, decision and verdict of a design.

    Exit code 0 where every requirement is met, 3 on anything else.
    """
    from outcouple.design import load_design
    from outcouple.evaluation import evaluate

    outcome = evaluate(load_design(file), maps=maps, views=False)
    if as_json:
        echo_json(outcome.to_dict())
    else:
        from outcouple.report.text import format_outcome

        click.echo(format_outcome(outcome, every_metric=every), nl=False)
    return 0 if outcome.verdict == "pass" else 3
