"""What worker processes do: the heavy parts of every page, each reporting as it goes."""

from __future__ import annotations

import logging
import signal
from collections.abc import Callable, Iterator
from dataclasses import replace
from functools import cache
from multiprocessing.connection import Connection
from typing import Any

from outcouple.design import Design, parse_design
from outcouple.errors import UserMistake
from outcouple.evaluation import evaluate
from outcouple.hooks import Host, build_host
from outcouple.metrics import metrics_of
from outcouple.outcome import Outcome
from outcouple.studies import Sweep, sweep
from outcouple.studies.compare import Comparison
from outcouple.studies.compare import compare as compare_variants

__all__ = ["TASKS", "follow", "has_maps", "serve"]

Step = Callable[[float, str], None]


@cache
def _host() -> Host:
    return build_host()


def design_of(text: str) -> Design:
    """The design of a text, under the plugins installed here."""
    return parse_design(text, file="design", host=_host())


def has_maps(design: Design) -> bool:
    """True where some of the design's metrics cost a map."""
    return any(metric.cost == "map" for metric in metrics_of(design.geometry).values())


def follow(step: Step, *, text: str) -> Iterator[Outcome]:
    """What comes after the verdict: the response curve, then advice and maps."""
    design = design_of(text)
    step(0.1, "response curve")
    yield evaluate(design, advice=False)
    maps = has_maps(design)
    step(0.3, "what would help, and maps" if maps else "what would help")
    yield evaluate(design, maps=maps)


def vary(step: Step, *, text: str, axes: list[str], metric: str) -> Iterator[Sweep]:
    """A sweep over one or two inputs."""
    design = design_of(text)
    known = metrics_of(design.geometry)
    wanted = [metric] if metric in known else []
    yield sweep(
        design, axes, metrics=wanted, progress=lambda done, total: step(done / total, f"{done} of {total} points")
    )


def compare(
    step: Step, *, names: list[str], texts: list[str], same: bool, maps: bool
) -> Iterator[Comparison | tuple[str, Outcome]]:
    """Variants side by side: the comparison, every outcome, then the comparison with what rescues whom."""
    designs = [replace(design_of(text), file=f"{at}.toml") for at, text in enumerate(texts)]
    shown = {str(at): name for at, name in enumerate(names)}
    step(0.1, "requirements and corners")
    yield _named(compare_variants(designs, same_conditions=same, rescues=False), shown)
    for at, (name, design) in enumerate(zip(names, designs, strict=True)):
        step(0.3 + 0.2 * at / len(names), f"cautions and response of {name}")
        yield name, evaluate(design, want=(), advice=False, views=False, curve=True)
    step(0.5, "what would rescue those that fail" + (", and maps" if maps else ""))
    yield _named(compare_variants(designs, same_conditions=same, maps=maps), shown)


def _named(found: Comparison, names: dict[str, str]) -> Comparison:
    """The comparison under the names people gave."""
    variants = tuple(
        replace(one, label=names[one.label], dominated_by=tuple(names[other] for other in one.dominated_by))
        for one in found.variants
    )
    return replace(found, variants=variants)


TASKS: dict[str, Callable[..., Iterator[Any]]] = {"follow": follow, "vary": vary, "compare": compare}
"""Task -> what does it; every answer it yields is a part, the last one the whole."""


def serve(pipe: Connection) -> None:
    """Do what comes through the pipe until it closes."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    try:
        while True:
            task, arguments = pipe.recv()
            _one(pipe, task, arguments)
    except (EOFError, OSError):
        return


def _one(pipe: Connection, task: str, arguments: dict[str, Any]) -> None:
    def step(share: float, text: str) -> None:
        pipe.send(("step", share, text))

    try:
        for part in TASKS[task](step, **arguments):
            pipe.send(("part", part))
    except UserMistake as mistake:
        pipe.send(("failed", mistake.lines))
    except Exception as error:
        logging.getLogger(__name__).exception("%s failed", task)
        pipe.send(("failed", (f"This could not be computed: {type(error).__name__}: {error}",)))
    else:
        pipe.send(("done",))
