"""``outcouple new``: a commented starter design."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import click

from outcouple.errors import UserMistake, nearest

if TYPE_CHECKING:
    from outcouple.geometry import Geometry
    from outcouple.hooks import Host

__all__ = ["command"]


@click.command("new")
@click.argument("job", required=False)
@click.option("--out", type=click.Path(), default=None, help="File to write; the job's name where not given.")
def command(job: str | None, out: str | None) -> int:
    """Write a commented starter file for a JOB (overfill, dry-run, leak, touch, rain, displacement ...) or a geometry.

    Never overwrites a file; prints the next command.
    """
    from outcouple.design.starter import starter_text
    from outcouple.hooks import build_host

    host = build_host()
    jobs = _jobs(host)
    if job is None:
        click.echo("Jobs: " + ", ".join(sorted(jobs)) + "\nGeometries: " + ", ".join(host.geometries))
        job = click.prompt("Which one", type=str)
    geometry = host.geometry(job) if job in host.geometries else _for_job(job, jobs, host)
    purpose = geometry.jobs[0] if job in host.geometries and geometry.jobs else job
    target = Path(out or f"{job}.toml")
    try:
        with target.open("x", encoding="utf-8") as file:
            file.write(starter_text(geometry, purpose))
    except FileExistsError:
        raise UserMistake(f"{target} is there already and stays as it is; name another with --out") from None
    except OSError as error:
        raise UserMistake(f"{target} cannot be written: {error.strerror or error}") from None
    click.echo(f"wrote {target} ({geometry.name}: {geometry.summary})")
    click.echo(f"next: outcouple budget {target}")
    return 0


def _jobs(host: Host) -> dict[str, Geometry]:
    """Job -> the first geometry that serves it."""
    found: dict[str, Geometry] = {}
    for name in host.geometries:
        geometry = host.geometry(name)
        for job in geometry.jobs:
            found.setdefault(job, geometry)
    return found


def _for_job(job: str, jobs: dict[str, Geometry], host: Host) -> Geometry:
    if job not in jobs:
        names = [*jobs, *host.geometries]
        raise UserMistake(f"unknown job or geometry {job!r}{nearest(job, names)}; there are: {', '.join(names)}")
    return jobs[job]
