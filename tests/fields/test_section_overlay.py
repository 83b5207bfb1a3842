"""Arrays of samples over a section."""

from __future__ import annotations

import pickle

import numpy as np
import pytest

from outcouple.errors import UserMistake
from outcouple.fields import check_overlay, overlaid

from .sample_sections import Row, Sensor


def sensor() -> Sensor:
    return Sensor(rows=(Row(share="40 %", cover="oil"),))  # type: ignore[arg-type]


def test_numbers_are_arrays_and_the_rest_is_as_it_was() -> None:
    p = overlaid(sensor(), {("plate", "thickness"): np.array([0.004, 0.005, 0.006])})
    assert p.plate.thickness.tolist() == [0.004, 0.005, 0.006]
    assert p.lamp.power.tolist() == [0.02]
    assert p.lamp.exponent.shape == (1,)
    assert (p.plate.material, p.plate.sides, p.plate.polished, p.plate.haze, p.notes) == ("acrylic", 4, True, None, "")
    assert p.rows[0].share.tolist() == [0.4]
    assert p.rows[0].cover == "oil"


def test_samples_lie_over_unset_numbers_and_rows_too() -> None:
    p = overlaid(sensor(), {("plate", "haze"): [0.01, 0.02], ("rows", "0", "share"): [0.1, 0.2]})  # type: ignore[dict-item]
    assert p.plate.haze.tolist() == [0.01, 0.02]
    assert p.rows[0].share.tolist() == [0.1, 0.2]


def test_nothing_can_be_written() -> None:
    given = np.array([0.004, 0.005])
    p = overlaid(sensor(), {("plate", "thickness"): given})
    with pytest.raises(AttributeError, match="thickness: a design's parameters are read-only"):
        p.plate.thickness = 3
    for array in (p.plate.thickness, p.lamp.power):
        with pytest.raises(ValueError, match="read-only"):
            array[0] = 1.0
    given[0] = 0.003  # the caller's own array stays the caller's
    assert p.plate.thickness is p.plate.thickness


def test_attributes_that_are_not_there() -> None:
    p = overlaid(sensor(), {})
    with pytest.raises(AttributeError, match="Plate has no 'thicknes'"):
        p.plate.thicknes  # noqa: B018
    assert not hasattr(p, "model_dump")
    assert dir(p) == sorted(["plate", "lamp", "rows", "notes"])


def test_an_overlay_can_be_sent_to_another_process() -> None:
    p = overlaid(sensor(), {("plate", "thickness"): np.array([0.004, 0.005])})
    again = pickle.loads(pickle.dumps(p.plate))
    assert again.thickness.tolist() == [0.004, 0.005]


def test_samples_within_their_bounds_pass() -> None:
    check_overlay(sensor(), {("plate", "thickness"): np.array([0.0005, 0.05]), ("plate", "gap"): np.array([1e-9])})


@pytest.mark.parametrize(
    ("path", "values", "message"),
    [
        (
            ("plate", "thickness"),
            [0.004, 0.06, 0.005, 0.07],
            "plate.thickness: sample 2 of 4, 60 mm, is too large, and 1 more (0.5 to 50 mm, thickness of the plate)",
        ),
        (
            ("plate", "thickness"),
            [0.0001],
            "plate.thickness: sample 1 of 1, 0.1 mm, is too small (0.5 to 50 mm, thickness of the plate)",
        ),
        (
            ("plate", "gap"),
            [1e-7, 0.0],
            "plate.gap: sample 2 of 2, 0 nm, is too small (above 0, below 1 um, air under the plate)",
        ),
        (
            ("plate", "gap"),
            [1e-6],
            "plate.gap: sample 1 of 1, 1000 nm, is too large (above 0, below 1 um, air under the plate)",
        ),
        (
            ("plate", "tilt"),
            [0.0, np.nan],
            "plate.tilt: sample 2 of 2, nan, is not a finite number (at least -1 deg, tilt of the plate)",
        ),
        (("plate", "tilt"), [[0.0]], "plate.tilt: samples are a row of numbers, not an array of 2 dimensions"),
        (("plate", "sides"), [1.0, 2.0], "plate.sides: a count cannot vary over samples"),
        (("plate", "material"), [1.0, 2.0], "plate.material: a material cannot vary over samples"),
        (("plate", "thicknes"), [1.0], "plate.thicknes: no such input (did you mean 'plate.thickness'?)"),
        (
            ("rows", "0", "share"),
            [1.5],
            "rows.0.share: sample 1 of 1, 150 %, is too large (0 to 100 %, share of the face)",
        ),
    ],
)
def test_samples_that_cannot_be_taken(path: tuple[str, ...], values: list[float], message: str) -> None:
    with pytest.raises(UserMistake) as mistake:
        check_overlay(sensor(), {path: np.array(values)})
    assert mistake.value.lines == (message,)


def test_every_path_is_checked() -> None:
    with pytest.raises(UserMistake) as mistake:
        check_overlay(sensor(), {("lamp", "power"): np.array([2.0]), ("nothing",): np.array([1.0])})
    assert mistake.value.lines == (
        "lamp.power: sample 1 of 1, 2000 mW, is too large (0 to 1 W, optical power)",
        "nothing: no such input",
    )
