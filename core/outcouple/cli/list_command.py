"""``outcouple list``: what there is to choose from."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

import click

from outcouple.cli.shared import echo_json, json_option

__all__ = ["command"]

Rows = list[dict[str, Any]]


@click.command("list")
@click.argument("what", type=click.Choice(["materials", "geometries", "touching", "metrics", "plugins"]))
@click.argument("name", required=False)
@click.option("--at", "at", default="850 nm", show_default=True, help="Wavelength for materials.")
@click.option("--temperature", default="20 degC", show_default=True, help="Temperature for materials.")
@click.option("--like", type=float, default=None, help="Materials nearest to this index first.")
@json_option
def command(what: str, name: str | None, at: str, temperature: str, like: float | None, as_json: bool) -> int:
    """Materials, geometries, contacts (touching), metrics or plugins; NAME narrows metrics to one geometry."""
    from outcouple.report.text import table

    rows = LISTS[what](name=name, at=at, temperature=temperature, like=like)
    if as_json:
        echo_json(rows)
    elif not rows:
        click.echo("nothing to list")
    else:
        heads = [key for key in rows[0] if not key.startswith("_")]
        cells = [tuple(heads)] + [tuple(_cell(row[key]) for key in heads) for row in rows]
        click.echo(table(cells, indent=0))
    return 0


def _cell(value: Any) -> str:
    if value is None:
        return "-"
    return f"{value:.6g}" if isinstance(value, float) else str(value)


def _materials(*, name: str | None, at: str, temperature: str, like: float | None) -> Rows:
    from outcouple.errors import UserMistake
    from outcouple.hooks import build_host
    from outcouple.materials import search, table
    from outcouple.quantities import parse

    try:
        where: dict[str, Any] = {"wavelength": parse(at, "length"), "temperature": parse(temperature, "temperature")}
    except UserMistake as mistake:
        raise UserMistake(f"--at / --temperature: {mistake}") from None
    catalogue = build_host().catalogue
    rows = table(catalogue, **where) if like is None else search(like=like, catalogue=catalogue, **where)
    return [
        {
            "material": row.name,
            "kind": row.kind,
            "index": round(row.index, 5),
            "uncertainty": row.uncertainty,
            "absorption 1/m": row.absorption,
            "standing": row.verified,
            "caution": ", ".join(note.code for note in row.notes if note.severity != "info"),
            "source": row.source,
        }
        for row in rows
        if name is None or name.lower() in " ".join((row.name, *row.aliases)).lower()
    ]


def _geometries(**_: Any) -> Rows:
    from outcouple.hooks import build_host

    return [
        {"geometry": entry.name, "what it is": entry.summary, "from": entry.plugin}
        for entry in build_host().geometries.values()
    ]


def _touching(**_: Any) -> Rows:
    from outcouple.fields import leaves
    from outcouple.hooks import build_host

    return [
        {
            "contact": preset.what,
            "what it is": preset.summary,
            "numbers": ", ".join(f"{leaf.path[-1]} ({leaf.default_text or 'unset'})" for leaf in leaves(preset)) or "-",
        }
        for preset in build_host().touching.values()
    ]


def _metrics(*, name: str | None, **_: Any) -> Rows:
    from outcouple.hooks import build_host
    from outcouple.metrics import metrics_of

    host = build_host()
    names = [name] if name else list(host.geometries)
    found: Rows = []
    seen = set()
    for one in names:
        for metric in metrics_of(host.geometry(one)).values():
            if (metric.name, metric.unit) in seen:
                continue
            seen.add((metric.name, metric.unit))
            common = metric.name in _common_names(host, one)
            found.append(
                {
                    "metric": metric.name,
                    "unit": metric.unit or "-",
                    "better": metric.better,
                    "of": "every sensor" if common else one,
                    "meaning": metric.meaning + (" (map)" if metric.cost == "map" else ""),
                }
            )
    return found


def _common_names(host: Any, geometry: str) -> set[str]:
    from outcouple.metrics import COMMON

    return {metric.name for metric in COMMON}


def _plugins(**_: Any) -> Rows:
    from outcouple.hooks import build_host

    host = build_host()
    rows: Rows = [{"plugin": name, "state": "in use"} for name in host.plugins]
    rows += [{"plugin": out.plugin, "state": f"left out: {out.why}"} for out in host.left_out]
    return rows


LISTS: Mapping[str, Callable[..., Rows]] = {
    "materials": _materials,
    "geometries": _geometries,
    "touching": _touching,
    "metrics": _metrics,
    "plugins": _plugins,
}
