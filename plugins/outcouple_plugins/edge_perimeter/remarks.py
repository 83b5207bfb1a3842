"""Cautions and failure directions of a perimeter-read plate."""

from __future__ import annotations

import numpy as np

from outcouple.geometry import FailureRow, MetricValue, Results, Setting
from outcouple.notes import Note
from outcouple_plugins.edge_perimeter.measures import MEASURES
from outcouple_plugins.plate.parameters import edges_of
from outcouple_plugins.plate.remarks import place_notes

__all__ = ["failure_rows", "remarks_on", "setting_notes"]

ALIKE = 3.0
"""Ratio of extents from which area tells two contacts apart with something in hand."""
GUIDING = np.sqrt(2)


def remarks_on(results: Results) -> tuple[Note, ...]:
    """Contacts that take as much light as a touch: what else could tell them apart."""
    immunity, extent = MEASURES["immunity_ratio"](results), MEASURES["extent_ratio"](results)
    counts = MEASURES["chords_darkened"](results)
    if not isinstance(immunity, MetricValue) or not isinstance(extent, MetricValue):
        return ()
    assert isinstance(counts, MetricValue)
    found = []
    for name, values in immunity.states.items():
        ratio = float(values[0])
        if ratio > 1:
            continue
        apart = float(extent.states[name][0])
        told = f"it darkens {counts.states[name][0]:.0f} chords, a touch {counts.values[0]:.0f}"
        found.append(
            Note(
                "amplitude-cannot-tell",
                f"{name!r} takes {1 / max(ratio, 1e-9):.3g} times the light of the weakest touch: no level keeps it "
                f"out. What else could tell them apart: area {'can' if apart >= ALIKE else 'hardly'}, {told}. {TIME}",
                trigger="immunity ratio below 1",
            )
        )
    return tuple(found)


TIME = (
    "Time can, if the application allows: a touch comes and goes within seconds, what is spilt stays, spreads or "
    "dries, and a slow baseline takes it in."
)


def setting_notes(setting: Setting) -> tuple[Note, ...]:
    """What the model leaves out, and inputs that do not fit together."""
    p = setting.p
    index = setting.index(p.plate.material)
    scan = 1 / (setting.spread(p.scan.slot) * p.emitters.per_edge * len(edges_of(p.emitters.edges)))
    cell = np.maximum(setting.spread(p.plate.width) / p.field.columns, setting.spread(p.plate.height) / p.field.rows)
    return (
        Note(
            "edge-light-not-guided",
            "At this index light that enters through the edge does not all stay in the plate: below 1.414 even a plate "
            "in air leaks.",
            trigger="index of the plate below 1.414",
            where=index < GUIDING,
        ),
        Note(
            "bonded-emitters-shed",
            "Bonded emitters put light into the plate that the faces do not guide; it leaves near the edge as glow.",
            severity="info",
            where=np.full(setting.samples, p.emitters.coupling == "bonded"),
        ),
        Note(
            "decisions-outrun-scan",
            "Decisions are made faster than the emitters take turns: they share readings and do not average noise.",
            trigger="decision.rate above one over slot times emitters",
            where=setting.spread(p.decision.rate) > scan * 1.001,
        ),
        Note(
            "coarse-map",
            "A cell of the maps is larger than 5 mm; what lies between is not looked at.",
            severity="info",
            trigger="plate over field.columns and field.rows",
            where=cell > 5e-3,
        ),
        Note(
            "unpolarised-emitters",
            "Emitters along edges are taken as unpolarised.",
            where=np.full(setting.samples, p.emitter.polarization != "none"),
        ),
        *place_notes(setting),
    )


def failure_rows(setting: Setting) -> tuple[FailureRow, ...]:
    """Rows of the failure-direction table."""
    return (
        FailureRow("one emitter or detector dead", "its chords carry no light and see nothing", None, ("dark test",)),
        FailureRow("gasket or adhesive on a face", "takes light from chords for good", True, ("trend",), slow=True),
        FailureRow("grease with drops in it", "turns light out of the chords over it", True, ("trend",)),
        FailureRow("cleaning foam", "darkens nearly all chords at once", True, ()),
        FailureRow("scratch or chip", "scatters light out of the chords over it", True, ("trend",), slow=True),
        FailureRow("warming up", "emitters fade together", True, ("reference",), slow=True),
        FailureRow("something leans on the frame", "presses the gasket onto the plate", True, ()),
        FailureRow("strong light outside", "saturates or makes noise: objects are missed", None, ("dark test",)),
    )
