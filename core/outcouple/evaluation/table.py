"""All states of a design over samples: readings, noise and the decision on them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import partial

import numpy as np
from numpy.typing import NDArray

from outcouple.decision.decide import Decided, Score, decide
from outcouple.design import Design, State
from outcouple.evaluation.overlay import UNTOUCHED, Samples, View, samples_count, view_of
from outcouple.evaluation.replies import arrivals_of, reply_of
from outcouple.evaluation.saturation import saturation_notes
from outcouple.evaluation.signals import LaidState, lay_state, setting_of
from outcouple.fields import leaves
from outcouple.geometry import Setting, StateResult
from outcouple.light import Light
from outcouple.notes import Note, merge_notes
from outcouple.readout.chain import Reading, read
from outcouple.touching.clear import Dry

__all__ = ["StateRow", "Table", "tabulate"]

Floats = NDArray[np.float64]

SMOOTH_NODES = 3
"""Wavelength nodes where no face holds an even film."""
FRINGE_NODES = 7
"""Wavelength nodes where an even film may show fringes."""
SLOW = 0.5
"""Turn of a round trip's phase over the line's full width [rad] below which a film counts as smooth: between three and
seven nodes a gap pair then differs by 2e-6."""
DENSE = 2.0
"""Index no film here exceeds by much."""
TAIL = 5.0
"""Largest gap a continuous sensor may stand at, over the largest its states name."""


@dataclass(frozen=True)
class StateRow:
    """One state: its light followed to the read-out, and the reading."""

    laid: LaidState
    reading: Reading
    result: StateResult
    score: Score | None


@dataclass(frozen=True)
class Table:
    """States by name over S samples."""

    design: Design
    view: View
    samples: int
    rows: tuple[StateRow, ...]
    untouched: StateRow | None
    decided: Decided | None
    notes: tuple[Note, ...]
    lights: dict[object, Light]
    media_breaks: tuple[str, ...]
    overlaid: Samples
    setting: Setting

    @property
    def light(self) -> Light:
        """The light of the design as it stands, no state's changes applied."""
        return self.lights[()]

    def row(self, name: str) -> StateRow:
        """The row of that state."""
        return next(row for row in self.rows if row.laid.state.name == name)

    @property
    def binary(self) -> tuple[StateRow, ...]:
        """Rows of states that expect absent or present and are not faults."""
        return tuple(
            row for row in self.rows if isinstance(row.laid.state.expect, str) and row.laid.state.role == "normal"
        )


def tabulate(design: Design, samples: Samples | None = None, *, states: Sequence[State] | None = None) -> Table:
    """Follow every state of a design; ``samples`` lays arrays (S,) over numeric inputs (checked by the caller)."""
    samples = samples or {}
    count = samples_count(samples)
    chosen = tuple(design.states if states is None else states)
    base = view_of(design, samples)
    breaks = _media_of(design, chosen, base)
    lights: dict[object, Light] = {}
    views: dict[object, View] = {(): base}
    setting = setting_of(design, base, samples=count, nodes=SMOOTH_NODES, breaks_of=breaks)[0]
    lights[()] = design.geometry.light(setting)
    nodes = _nodes_for(design, chosen, base, setting)
    laid = [_lay(design, state, samples, count, breaks, lights, views, nodes) for state in chosen]
    untouched_laid = _untouched(design, samples, count, breaks, lights, views, nodes)
    untouched = None if untouched_laid is None else _row(untouched_laid, None, design)
    rows = tuple(_row(one, untouched, design) for one in laid)
    scores = [row.score for row in rows if row.score is not None and row.laid.state.role == "normal"]
    standing = _standing_level(design, samples, chosen) if base.decision.calibration == "none" else None
    decided = decide(scores, base.decision, _given_level(design, base, rows), standing=standing)
    notes = merge_notes(
        [
            *saturation_notes(rows, count),
            *design.geometry.notes(setting),
            *(note for row in rows for note in (*row.laid.notes, *row.reading.notes)),
            *(
                note
                for row in rows
                for preset in row.laid.state.touching.values()
                for note in type(preset).notes(preset)
            ),
        ]
    )
    return Table(design, base, count, rows, untouched, decided, notes, lights, breaks, samples, setting)


def _standing_level(design: Design, samples: Samples, states: Sequence[State]) -> Floats | None:
    """Where the design as written has its level; None where no sample lies over anything but the decision."""
    own = {path: values for path, values in samples.items() if path[0] == "decision"}
    if len(own) == len(samples):
        return None
    decided = tabulate(design, own, states=states).decided
    return None if decided is None else decided.level


def _media_of(design: Design, states: Sequence[State], view: View) -> tuple[str, ...]:
    """Materials whose critical angles matter to the quadrature of the light."""
    media: dict[str, None] = {"air": None}
    for state in states:
        for cover in state.covers(view).values():
            media.update(dict.fromkeys(cover.media()))
    return tuple(media)


def _nodes_for(design: Design, states: Sequence[State], view: View, setting: Setting) -> int:
    """Wavelength nodes of a design: more where a film may show fringes.

    All states share them, and no thickness decides, only what kinds of films there are: two sums over the line that
    differ in nodes differ in their error, which would look like an effect of the film. A film of varying thickness has
    slow fringes while it is thin, and averages them out over the face when it is thick. Of a gap that is measured, the
    widths that the states name decide.
    """
    line = float(np.max(view.emitter.linewidth)) / float(np.min(view.emitter.wavelength)) ** 2
    gap = _measured_gap(design)
    if gap is not None and 4 * np.pi * DENSE * gap * line > SLOW:
        return FRINGE_NODES
    for state in states:
        given = state.covers(view)
        covers = given if gap is not None else design.geometry.covers(setting, given)
        patches = (patch for cover in covers.values() for patch in cover.patches)
        if any(film.spread == "none" for patch in patches for film in patch.films):
            return FRINGE_NODES
    return SMOOTH_NODES


def _measured_gap(design: Design) -> float | None:
    """Largest gap a continuous sensor may stand at [m], a few times what its states name; None where it has none."""
    if not design.geometry.measurand:
        return None
    leaf = next(leaf for leaf in leaves(design.geometry.Parameters) if leaf.path == design.geometry.measurand)
    numbers = [state.expect for state in design.states if isinstance(state.expect, float)]
    return TAIL * max(numbers) if leaf.kind == "length" and numbers else None


def _lay(
    design: Design,
    state: State,
    samples: Samples,
    count: int,
    breaks: Sequence[str],
    lights: dict[object, Light],
    views: dict[object, View],
    nodes: int,
) -> LaidState:
    if state.changes_key not in views:
        views[state.changes_key] = view_of(design, samples, state.changes)
    return lay_state(
        design,
        state,
        views[state.changes_key],
        samples=count,
        nodes=nodes,
        breaks_of=breaks,
        lights=lights,
    )


def _untouched(
    design: Design,
    samples: Samples,
    count: int,
    breaks: Sequence[str],
    lights: dict[object, Light],
    views: dict[object, View],
    nodes: int,
) -> LaidState | None:
    """The sensor with nothing on it, where readings are changes against it."""
    if design.geometry.reading != "change":
        return None
    dry = Dry()
    state = State(UNTOUCHED, UNTOUCHED, "absent", dict.fromkeys(design.geometry.wetted, dry))
    return _lay(design, state, samples, count, breaks, lights, views, nodes)


def _row(laid: LaidState, untouched: StateRow | None, design: Design) -> StateRow:
    reading = read(design.geometry.readout, laid, laid.share)
    score = _score(laid, reading, untouched, design)
    changes = design.geometry.reading == "change" and score is not None
    result = StateResult(
        name=laid.state.name,
        expect=laid.state.expect,
        setting=laid.setting,
        light=laid.light,
        share=np.sum(laid.weights[:, None] * laid.share, axis=1),
        signal=reading.mean,
        noise=reading.noise,
        unit=reading.unit,
        covers=laid.ways[0].covers,
        change=score.mean if score is not None and changes else None,
        change_noise=score.noise if score is not None and changes else None,
        place=None if laid.state.object is None else laid.state.place(laid.p, laid.setting.samples),
        role=laid.state.role,
        reply=partial(reply_of, laid),
        arrivals=partial(arrivals_of, laid),
    )
    return StateRow(laid, reading, result, score)


def _score(laid: LaidState, reading: Reading, untouched: StateRow | None, design: Design) -> Score | None:
    """The state on the decision's axis: the reading itself, or its relative change; present always high."""
    if not isinstance(laid.state.expect, str) or (design.geometry.reading == "change" and untouched is None):
        return None
    sign = -1.0 if design.geometry.present_reads == "low" else 1.0
    mean, noise = reading.mean, reading.noise
    if untouched is not None:
        with np.errstate(divide="ignore", invalid="ignore"):
            base = untouched.reading.mean
            # A channel that no light reaches may still read the ambient light: it is blind all the same.
            lit = (base > 0) & (untouched.result.share > 0)
            mean = np.where(lit, mean / base - 1, 0.0)
            noise = np.where(lit, noise / base, np.inf)
    return Score(laid.state.name, laid.state.expect, sign * mean, noise)


def _given_level(design: Design, view: View, rows: Sequence[StateRow]) -> Floats | None:
    share = np.asarray(view.decision.share)
    sign = -1.0 if design.geometry.present_reads == "low" else 1.0
    if design.geometry.reading == "change":
        return np.asarray(np.abs(share)[:, None])
    for row in rows:
        if row.laid.state.expect == "absent" and row.laid.state.role == "normal":
            return sign * share[:, None] * row.reading.mean
    return None
