"""``outcouple levers``: what would move the worst margin, and how far each input may go."""

from __future__ import annotations

import click

from outcouple.cli.shared import check_ending, design_argument, echo_json, json_option, pool, workers_option, write_file

__all__ = ["command"]


@click.command("levers")
@design_argument
@click.option("--csv", type=click.Path(), default=None, help="Write all inputs as a table.")
@click.option("--out", type=click.Path(), default=None, help="Write a page.html with the strongest inputs.")
@click.option("--dark", is_flag=True, help="Dark colours for --out.")
@workers_option
@json_option
def command(file: str, csv: str | None, out: str | None, dark: bool, workers: int, as_json: bool) -> int:
    """Rank every numeric input by what it does to the margin that decides, and tell how far each may go, alone, before
    the verdict turns.

    Exit code 0 where every requirement is met, 3 on anything else.
    """
    from outcouple.cli.progress import progress_line
    from outcouple.design import load_design
    from outcouple.report import levers_text
    from outcouple.studies.levers import levers

    check_ending("--out", out, ".html")
    check_ending("--csv", csv, ".csv")
    with progress_line("levers") as progress, pool(workers) as executor:
        found = levers(load_design(file), executor=executor, progress=progress)
    if as_json:
        echo_json(levers_text.levers_data(found))
    else:
        click.echo(levers_text.format_levers(found), nl=False)
    if csv is not None:
        from outcouple.report.cells import csv_text

        write_file("--csv", csv, csv_text(levers_text.levers_rows(found)))
    if out is not None:
        from outcouple.report import figures
        from outcouple.report.levers_page import levers_page

        write_file("--out", out, levers_page(found, look=figures.DARK if dark else figures.LIGHT))
    return 0 if found.stated and found.verdict == "pass" else 3
