"""Sections: what their fields take, what they know about themselves, and what-if edits."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pydantic import ValidationError

from outcouple.errors import UserMistake
from outcouple.fields import Leaf, Section, changed, collect, count, leaf_at, leaf_text, leaves, parse_leaf, quantity

from .sample_sections import Lamp, Plate, Row, Sensor

LEAVES = {leaf.name: leaf for leaf in leaves(Sensor)}


def test_defaults_are_si_and_texts_are_read() -> None:
    plate = Plate(thickness="8 mm", haze="2 %", sides="3", gap="150 nm")  # type: ignore[arg-type]
    assert (Plate().thickness, Plate().warmth, Plate().haze) == (0.006, 253.14999999999998, None)
    assert (plate.thickness, plate.haze, plate.sides, plate.gap) == (0.008, 0.02, 3, 150e-9)
    assert type(Lamp().exponent) is float


def test_a_section_is_frozen() -> None:
    with pytest.raises(ValidationError):
        Plate().thickness = 1.0  # type: ignore[misc]


def test_leaves_stand_in_the_order_of_the_file() -> None:
    assert list(LEAVES) == [
        "plate.material",
        "plate.thickness",
        "plate.gap",
        "plate.tilt",
        "plate.warmth",
        "plate.sides",
        "plate.polished",
        "plate.finish",
        "plate.haze",
        "lamp.power",
        "lamp.exponent",
    ]


def test_a_leaf_knows_its_field() -> None:
    leaf = LEAVES["plate.thickness"]
    assert (leaf.path, leaf.what, leaf.kind, leaf.unit, leaf.si_unit) == (
        ("plate", "thickness"),
        "quantity",
        "length",
        "mm",
        "m",
    )
    assert (leaf.default, leaf.default_text, leaf.low, leaf.high) == (0.006, "6 mm", 0.0005, 0.05)
    assert (leaf.describe, leaf.reference) == ("thickness of the plate", "common practice, no source")
    assert (leaf.section, leaf.group, leaf.slider) == ("The plate. Further words nobody shows.", "size", "log")
    assert (leaf.deciding, leaf.optional, leaf.required, leaf.structural) == (True, False, False, False)


def test_only_quantities_vary() -> None:
    assert [name for name, leaf in LEAVES.items() if leaf.structural] == [
        "plate.material",
        "plate.sides",
        "plate.polished",
        "plate.finish",
    ]
    assert LEAVES["plate.finish"].choices == ("clear", "matt")
    assert [LEAVES[f"plate.{key}"].what for key in ("material", "sides", "polished", "finish")] == [
        "material",
        "count",
        "flag",
        "choice",
    ]


def test_the_default_of_a_section_as_it_stands_wins() -> None:
    """Sensor holds a lamp of 20 mW although a lamp by itself has 10 mW."""
    assert (LEAVES["lamp.power"].default, LEAVES["lamp.power"].default_text) == (0.02, "20 mW")
    assert leaves(Lamp)[0].default_text == "10 mW"


@pytest.mark.parametrize(
    ("key", "text"),
    [
        ("thickness", "0.5 to 50 mm"),
        ("gap", "above 0, below 1 um"),
        ("tilt", "at least -1 deg"),
        ("warmth", "0 K to 100 degC"),
        ("sides", "1 to 4"),
        ("haze", "0 to 5 %"),
        ("finish", ""),
    ],
)
def test_bounds_in_words(key: str, text: str) -> None:
    assert LEAVES[f"plate.{key}"].bounds == text


def test_other_bounds_in_words() -> None:
    class Bounds(Section):
        """Limits of all sorts."""

        a: float = quantity("1 mm", "length", gt="0 mm", describe="")
        b: float = quantity("1 mm", "length", le="2 mm", describe="")
        c: float = quantity("1 mm", "length", lt="2 mm", describe="")
        d: float = quantity("1 mm", "length", ge="1 um", lt="2 mm", describe="")
        e: float = quantity(1, "number", ge=0, le=1e9, describe="")
        f: int = count(1, describe="")

    assert [leaf.bounds for leaf in leaves(Bounds)] == [
        "above 0 mm",
        "at most 2 mm",
        "below 2 mm",
        "at least 1 um, below 2 mm",
        "0 to 1e9",
        "at least 0",
    ]


REFUSED = [
    ("thickness", "8", 'unit missing; write "8 mm" (0.5 to 50 mm, thickness of the plate)'),
    ("thickness", 8, 'unit missing; write "8 mm" (0.5 to 50 mm, thickness of the plate)'),
    ("thickness", "8 nm", "too small (0.5 to 50 mm, thickness of the plate)"),
    ("thickness", "80 mm", "too large (0.5 to 50 mm, thickness of the plate)"),
    ("thickness", None, 'a length is wanted, as text such as "1 mm" (0.5 to 50 mm, thickness of the plate)'),
    ("gap", "0 nm", "too small (above 0, below 1 um, air under the plate)"),
    ("gap", "1 um", "too large (above 0, below 1 um, air under the plate)"),
    ("gap", "200", 'unit missing; write "200 nm" (above 0, below 1 um, air under the plate)'),
    ("sides", 5, "too large (1 to 4, sides that are lit)"),
    ("sides", 2.5, "a whole number is wanted (1 to 4, sides that are lit)"),
    ("sides", True, "a whole number is wanted (1 to 4, sides that are lit)"),
    ("polished", "yes", "write true or false, without quotes (edges are polished)"),
    ("polished", 1, "write true or false, without quotes (edges are polished)"),
    ("finish", "mat", 'not one of the words allowed (did you mean \'matt\'?); one of: "clear", "matt"'),
    ("finish", True, 'not one of the words allowed; one of: "clear", "matt"'),
    ("material", "", "the name of a material is wanted, in quotes (material of the plate)"),
    ("material", 3, "the name of a material is wanted, in quotes (material of the plate)"),
]


@pytest.mark.parametrize(("key", "value", "message"), REFUSED)
def test_refused(key: str, value: object, message: str) -> None:
    with pytest.raises(ValidationError) as refusal:
        Plate.model_validate({key: value})
    (problem,) = collect(refusal.value, Plate)
    assert (problem.path, problem.message, problem.hint) == ((key,), message, "")
    with pytest.raises(UserMistake) as mistake:
        parse_leaf(LEAVES[f"plate.{key}"], value)
    assert str(mistake.value) == message


def test_bounds_themselves_are_allowed() -> None:
    assert Plate.model_validate({"thickness": "0.5 mm"}).thickness == 0.0005
    assert Plate.model_validate({"thickness": "50 mm"}).thickness == 0.05


def test_a_default_its_own_field_refuses_is_the_authors_mistake() -> None:
    with pytest.raises(ValueError, match="default '60 mm': too large"):
        quantity("60 mm", "length", le="50 mm", describe="thickness")
    with pytest.raises(KeyError, match="there is no kind of quantity 'lenght'"):
        quantity("60 mm", "lenght", describe="thickness")


def test_si_numbers_only_where_a_program_says_so() -> None:
    leaf = LEAVES["plate.thickness"]
    assert parse_leaf(leaf, 0.008, si=True) == 0.008
    assert parse_leaf(leaf, "8 mm", si=True) == 0.008
    for wrong, said in ((math.nan, "not a finite number"), (0.08, "too large"), (True, "a length is wanted")):
        with pytest.raises(UserMistake, match=said):
            parse_leaf(leaf, wrong, si=True)


@pytest.mark.parametrize(
    ("key", "value", "text"),
    [
        ("thickness", 0.00612, "6.12 mm"),
        ("warmth", 253.14999999999998, "-20 degC"),
        ("gap", 2.5e-7, "250 nm"),
        ("sides", 3, "3"),
        ("polished", False, "false"),
        ("finish", "matt", "matt"),
        ("haze", None, ""),
    ],
)
def test_values_as_people_write_them(key: str, value: object, text: str) -> None:
    assert LEAVES[f"plate.{key}"].text(value) == text


@given(st.floats(0.0005, 0.05))
def test_a_text_reads_back(value: float) -> None:
    leaf = LEAVES["plate.thickness"]
    clipped = leaf.clip(parse_leaf(leaf, leaf.text(leaf.clip(value)), si=True))
    assert clipped == pytest.approx(value, rel=1e-9)


def test_clip_ends_inside() -> None:
    thick, gap, tilt = (LEAVES[f"plate.{key}"] for key in ("thickness", "gap", "tilt"))
    assert [thick.clip(x) for x in (0.0, 0.01, 1.0)] == [0.0005, 0.01, 0.05]
    assert gap.clip(0.0) == pytest.approx(1e-15, rel=1e-9)
    assert gap.clip(1.0) == pytest.approx(1e-6, rel=1e-8)
    assert not gap.below(gap.clip(0.0))
    assert not gap.above(gap.clip(1.0))
    assert tilt.clip(-1.0) == pytest.approx(math.radians(-1))
    assert tilt.clip(9.0) == 9.0


def test_a_step_for_what_stands_at_zero() -> None:
    assert LEAVES["plate.thickness"].small_step() == pytest.approx(0.000495)
    assert LEAVES["plate.tilt"].small_step() == 1.0


def test_the_leaf_and_value_at_a_path() -> None:
    sensor = Sensor(rows=(Row(share="40 %", cover="oil"),))  # type: ignore[arg-type]
    leaf, value = leaf_at(sensor, ("rows", "0", "share"))
    assert (leaf.name, leaf.unit, value) == ("rows.0.share", "%", 0.4)
    assert leaf_text(sensor, ("rows", "0", "share")) == "40 %"
    assert leaf_text(sensor, ("plate", "warmth")) == "-20 degC"
    assert leaf_text(sensor, ("lamp", "power")) == "20 mW"


@pytest.mark.parametrize(
    ("path", "message"),
    [
        (("plate", "thicknes"), "plate.thicknes: no such input (did you mean 'plate.thickness'?)"),
        (("plate",), "plate: no such input (did you mean 'plate.gap'?)"),
        (("rows", "0", "share"), "rows.0.share: no such input"),
        (("plate", "thickness", "x"), "plate.thickness.x: no such input (did you mean 'plate.thickness'?)"),
        (("notes",), "notes: no such input"),
        ((), ": no such input"),
    ],
)
def test_a_path_that_is_no_input(path: tuple[str, ...], message: str) -> None:
    with pytest.raises(UserMistake) as mistake:
        leaf_at(Sensor(), path)
    assert str(mistake.value) == message


def test_changed() -> None:
    sensor = Sensor(rows=(Row(share="40 %", cover="oil"),))  # type: ignore[arg-type]
    other = changed(
        sensor,
        {
            ("plate", "thickness"): "8 mm",
            ("lamp", "power"): 0.03,
            ("plate", "haze"): "1 %",
            ("plate", "finish"): "matt",
            ("rows", "0", "share"): "50 %",
        },
    )
    assert (other.plate.thickness, other.lamp.power, other.plate.haze) == (0.008, 0.03, 0.01)
    assert (other.plate.finish, other.rows[0].share, other.rows[0].cover) == ("matt", 0.5, "oil")
    assert changed(other, {("plate", "haze"): None}).plate.haze is None
    assert sensor.plate.thickness == 0.006
    assert changed(sensor, {}) == sensor


def test_changed_says_everything_that_is_wrong() -> None:
    with pytest.raises(UserMistake) as mistake:
        changed(Sensor(), {("plate", "thickness"): "8", ("plate", "sides"): 9, ("lamp", "power"): 3.0})
    assert mistake.value.lines == (
        'plate.thickness = "8": unit missing; write "8 mm" (0.5 to 50 mm, thickness of the plate)',
        "plate.sides = 9: too large (1 to 4, sides that are lit)",
        'lamp.power = "3000 mW": too large (0 to 1 W, optical power)',
    )
    with pytest.raises(UserMistake) as mistake:
        changed(Sensor(), {("plate", "thicknes"): "8 mm", ("lamp", "powr"): 3.0})
    assert mistake.value.lines == (
        "plate.thicknes: no such input (did you mean 'plate.thickness'?)",
        "lamp.powr: no such input (did you mean 'lamp.power'?)",
    )


def test_changed_runs_the_checks_that_span_inputs() -> None:
    with pytest.raises(UserMistake) as mistake:
        changed(Sensor(), {("plate", "thickness"): "0.6 mm", ("lamp", "power"): "0.9 W"})
    assert mistake.value.lines == ("a plate this thin melts under this lamp",)


def test_leaves_are_found_once() -> None:
    assert leaves(Sensor) is leaves(Sensor)
    assert all(isinstance(leaf, Leaf) for leaf in leaves(Sensor))
