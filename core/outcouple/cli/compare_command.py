"""``outcouple compare``: variants side by side."""

from __future__ import annotations

import click

from outcouple.cli.progress import Progress, progress_line
from outcouple.cli.shared import check_ending, echo_json, json_option, pool, workers_option, write_file

__all__ = ["command"]


@click.command("compare")
@click.argument("files", nargs=-1, required=True, type=click.Path())
@click.option(
    "--same-conditions",
    is_flag=True,
    help="Judge all by the first one's environment, decision and requirements.",
)
@click.option("--no-rescue", is_flag=True, help="Do not search which single change would rescue a variant that fails.")
@click.option("--maps", is_flag=True, help="Also requirements that cost a map over the surface.")
@click.option("--csv", type=click.Path(), default=None, help="Write the table of requirements and variants.")
@click.option("--out", type=click.Path(), default=None, help="Write a page.html.")
@click.option("--dark", is_flag=True, help="Dark colours for --out.")
@workers_option
@json_option
def command(
    files: tuple[str, ...],
    same_conditions: bool,
    no_rescue: bool,
    maps: bool,
    csv: str | None,
    out: str | None,
    dark: bool,
    workers: int,
    as_json: bool,
) -> int:
    """Compare two or more design FILES against their requirements, nominal and at the corners their tolerances declare.

    Tells who misses by most and why, who is dominated, in what the designs and their conditions differ, and which
    change of a single input would rescue one that fails. Exit code 0 where every variant meets all its requirements,
    3 otherwise.
    """
    from contextlib import ExitStack

    from outcouple.design import load_design
    from outcouple.report import figures
    from outcouple.studies.compare import compare

    check_ending("--out", out, ".html")
    check_ending("--csv", csv, ".csv")
    designs = [load_design(file) for file in files]
    with ExitStack() as stack, pool(workers) as executor:

        def told(what: str) -> Progress:
            return stack.enter_context(progress_line(what))

        found = compare(
            designs,
            same_conditions=same_conditions,
            rescues=not no_rescue,
            maps=maps,
            executor=executor,
            told=told,
        )
    if as_json:
        from outcouple.report.compare_files import comparison_data

        echo_json(comparison_data(found))
    else:
        from outcouple.report.compare_text import format_comparison

        click.echo(format_comparison(found), nl=False)
    if csv is not None:
        from outcouple.report.cells import csv_text
        from outcouple.report.compare_files import comparison_rows

        write_file("--csv", csv, csv_text(comparison_rows(found)))
    if out is not None:
        from outcouple.report.compare_page import comparison_page

        write_file("--out", out, comparison_page(found, look=figures.DARK if dark else figures.LIGHT))
    return 0 if all(one.verdict == "pass" for one in found.variants) else 3
