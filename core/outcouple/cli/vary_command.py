"""``outcouple vary``: sweeps."""

from __future__ import annotations

from pathlib import Path

import click

from outcouple.cli.shared import check_ending, design_argument, echo_json, json_option, pool, workers_option, write_file

__all__ = ["command"]


@click.command("vary")
@design_argument
@click.argument("axes", nargs=-1)
@click.option("--metric", "metrics", multiple=True, help="A metric beside those that requirements name.")
@click.option("--maps", is_flag=True, help="Also requirements that cost a map over the surface, at every point.")
@click.option("--csv", type=click.Path(), default=None, help="Write all points as a table, with NAME.json beside it.")
@click.option("--out", type=click.Path(), default=None, help="Write a page.html with curves or maps.")
@click.option("--dark", is_flag=True, help="Dark colours for --out.")
@workers_option
@json_option
def command(
    file: str,
    axes: tuple[str, ...],
    metrics: tuple[str, ...],
    maps: bool,
    csv: str | None,
    out: str | None,
    dark: bool,
    workers: int,
    as_json: bool,
) -> int:
    """Evaluate a design over one, two or more AXES, each a sentence:

    \b
      "plate.thickness from 2 mm to 10 mm in 17"
      "emitter.power from 1 mW to 100 mW in 9 log"
      "prism.material in PMMA, polycarbonate"
      "states.water.touching.liquid in water, ethanol"

    Exit code 0 where at least one point meets every requirement, 3 where none does. Ctrl+C ends it early and keeps
    what is done.
    """
    from outcouple.cli.progress import progress_line
    from outcouple.design import load_design
    from outcouple.studies import sweep

    check_ending("--out", out, ".html")
    check_ending("--csv", csv, ".csv")
    design = load_design(file)
    with progress_line("sweep") as progress, pool(workers) as executor:
        found = sweep(design, axes, metrics=metrics, maps=maps, executor=executor, progress=progress)
    if as_json:
        from outcouple.report.sweep_files import sweep_manifest

        echo_json(sweep_manifest(found))
    else:
        from outcouple.report.sweep_text import format_sweep

        click.echo(format_sweep(found), nl=False)
    if csv is not None:
        import json

        from outcouple.report.cells import csv_text
        from outcouple.report.sweep_files import sweep_manifest, sweep_rows

        write_file("--csv", csv, csv_text(sweep_rows(found)))
        manifest = json.dumps(sweep_manifest(found, values=False), indent=2, ensure_ascii=False, allow_nan=False)
        write_file("--csv", str(Path(csv).with_suffix(".csv.json")), manifest)
    if out is not None:
        from outcouple.report import figures
        from outcouple.report.sweep_page import sweep_page

        write_file("--out", out, sweep_page(found, look=figures.DARK if dark else figures.LIGHT))
    if not found.finished:
        click.echo("interrupted: what was done is above and in the files; the rest was not run", err=True)
        return 130
    return 0 if "pass" in found.verdicts else 3
