"""The outcome says which way an even film was taken."""

from __future__ import annotations

import pytest

from outcouple.design import design_from_mapping
from outcouple.evaluation import evaluate


def notes(thickness, **emitter):
    touching = {"what": "film", "liquid": "water", "thickness": thickness, "spread": "none"}
    design = design_from_mapping(
        {
            "geometry": "prism-switch",
            "emitter": emitter,
            "states": [{"name": "film", "expect": "absent", "touching": touching}],
        }
    )
    return [note.text for note in evaluate(design, advice=False).notes if note.code == "film-coherence"]


@pytest.mark.parametrize(("thickness", "says"), [("0.3 mm", "intensities add"), ("2 um", "fields add")])
def test_thick_films_add_intensities_thin_ones_fields(thickness, says):
    """Coherence length 850^2 / 40 nm = 18.1 um: wavelength^2 over width."""
    (text,) = notes(thickness)
    assert says in text
    assert "Coherence length 18.1 um" in text


def test_a_narrow_line_keeps_a_thick_film_coherent():
    (text,) = notes("0.3 mm", linewidth="0.1 nm")
    assert "fields add" in text
