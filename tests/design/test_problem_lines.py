"""Every mistake of a file in one go: place, path, what was given, what is allowed."""

from __future__ import annotations

from typing import Any, Self

import pytest
from pydantic import ValidationError, model_validator

from outcouple.design.problems import Problem, collect, raise_problems
from outcouple.design.toml_source import TomlSource
from outcouple.errors import UserMistake
from outcouple.fields import Section, choice, count, flag, name, quantity


class Layer(Section):
    """A layer."""

    material: str = name(..., describe="material of the layer")
    thickness: float = quantity(..., "length", ge="1 um", le="1 mm", describe="its thickness")
    order: int = count(..., ge=1, le=9, describe="place in the stack")


class Prism(Section):
    """The prism."""

    base: float = quantity("8 mm", "length", ge="1 mm", le="60 mm", describe="width of the base")
    sides: int = count(2, ge=1, le=4, describe="polished sides")
    finish: str = choice("clear", ["clear", "matt"], describe="finish")
    bonded: bool = flag(False, describe="glued on")
    layers: tuple[Layer, ...] = ()

    @model_validator(mode="after")
    def _sides(self) -> Self:
        if self.bonded and self.sides == 4:
            raise ValueError("a bonded prism has a side that cannot be polished")
        return self


class Emitter(Section):
    """The emitter."""

    half_angle: float = quantity("15 deg", "angle", ge="0 deg", le="90 deg", describe="measured from the axis")
    power: float = quantity("10 mW", "power", gt="0 W", describe="optical power")


class Sensor(Section):
    """A sensor."""

    prism: Prism = Prism()
    emitter: Emitter = Emitter()


def lines(text: str, model: type[Section] = Sensor, *, file: str = "tank.toml") -> tuple[str, ...]:
    source = TomlSource(text, file)
    with pytest.raises(ValidationError) as refusal:
        model.model_validate(source.data)
    with pytest.raises(UserMistake) as mistake:
        raise_problems(collect(refusal.value, model), source, file)
    return mistake.value.lines


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        (
            '[emitter]\nhalf_angle = "30"\n',
            'tank.toml:2:14 emitter.half_angle = "30": unit missing; write "30 deg" '
            "(0 to 90 deg, measured from the axis)",
        ),
        (
            "[emitter]\nhalf_angle = 30\n",
            'tank.toml:2:14 emitter.half_angle = 30: unit missing; write "30 deg" '
            "(0 to 90 deg, measured from the axis)",
        ),
        (
            '[emitter]\nhalf_angle = "6 nm"\n',
            'tank.toml:2:14 emitter.half_angle = "6 nm": "6 nm" is a length; an angle is wanted '
            "(0 to 90 deg, measured from the axis)",
        ),
        (
            '[emitter]\npower = "0 mW"\n',
            'tank.toml:2:9 emitter.power = "0 mW": too small (above 0 W, optical power)',
        ),
        (
            '[prism]\nbase = "80 mm"\n',
            'tank.toml:2:8 prism.base = "80 mm": too large (1 to 60 mm, width of the base)',
        ),
        (
            '[prism]\nbas = "8 mm"\n',
            "tank.toml:2:1 prism.bas: unknown key (did you mean 'base'?); allowed: base, sides, finish, bonded, layers",
        ),
        (
            '[prism]\nhalf_angle = "8 deg"\n',
            "tank.toml:2:1 prism.half_angle: unknown key (it belongs in [emitter]); "
            "allowed: base, sides, finish, bonded, layers",
        ),
        (
            '[prism]\n"bad key" = 1\n',
            'tank.toml:2:1 prism."bad key": unknown key; allowed: base, sides, finish, bonded, layers',
        ),
        (
            "[prsm]\nbase = 1\n",
            "tank.toml:1:1 prsm: unknown section (did you mean 'prism'?); allowed: prism, emitter",
        ),
        ("prism = 3\n", "tank.toml:1:9 prism = 3: a table is wanted"),
        ("prism.layers = 3\n", "tank.toml:1:16 prism.layers = 3: a list is wanted, in [brackets]"),
        (
            "prism = { sides = 2.5 }\n",
            "tank.toml:1:19 prism.sides = 2.5: a whole number is wanted (1 to 4, polished sides)",
        ),
        (
            "prism.bonded = 'yes'\n",
            'tank.toml:1:16 prism.bonded = "yes": write true or false, without quotes (glued on)',
        ),
        (
            "prism.base = { a = 1 }\n",
            'tank.toml:1:14 prism.base = { ... }: a length is wanted, as text such as "1 mm" '
            "(1 to 60 mm, width of the base)",
        ),
        (
            "prism.base = [1]\n",
            'tank.toml:1:14 prism.base = [ ... ]: a length is wanted, as text such as "1 mm" '
            "(1 to 60 mm, width of the base)",
        ),
        (
            f'prism.base = "{"x" * 100}"\n',
            f'tank.toml:1:14 prism.base = "{"x" * 56}...: no number; a length is wanted, as text such as "1 mm" '
            "(1 to 60 mm, width of the base)",
        ),
        (
            "[prism]\nbonded = true\nsides = 4\n",
            "tank.toml:1:1 prism: a bonded prism has a side that cannot be polished",
        ),
    ],
    ids=range(17),
)
def test_one_mistake(text: str, expected: str) -> None:
    assert lines(text) == (expected,)


def test_something_missing_is_found_at_its_table_with_an_example() -> None:
    text = '[[prism.layers]]\nmaterial = "oil"\nthickness = "1 mm"\norder = 1\n\n[[prism.layers]]\n'
    assert lines(text) == (
        'tank.toml:6:1 prism.layers[2].material: missing; write material = "..." (material of the layer)',
        'tank.toml:6:1 prism.layers[2].thickness: missing; write thickness = "1 um" (1 um to 1 mm, its thickness)',
        "tank.toml:6:1 prism.layers[2].order: missing; write order = 1 (1 to 9, place in the stack)",
    )


class Bare(Section):
    """Required fields of the other sorts."""

    exponent: float = quantity(..., "number", ge=2, describe="m of the lobe")
    finish: str = choice(..., ["clear", "matt"], describe="finish")
    bonded: bool = flag(..., describe="glued on")


def test_examples_of_the_other_sorts() -> None:
    assert lines("", Bare) == (
        "tank.toml:1:1 exponent: missing; write exponent = 2 (at least 2, m of the lobe)",
        'tank.toml:1:1 finish: missing; write finish = "clear" (finish)',
        "tank.toml:1:1 bonded: missing; write bonded = true (glued on)",
    )


def test_mistakes_stand_in_the_order_of_the_file() -> None:
    text = '[emitter]\npower = "1"\nhalf_angle = "1 mm"\n[prism]\nbase = "1 um"\n'
    assert [line.split(":")[1] for line in lines(text)] == ["2", "3", "5"]


def test_the_example_of_something_missing_would_be_taken() -> None:
    with pytest.raises(ValidationError) as refusal:
        Layer.model_validate({"material": "oil", "order": 1})
    (problem,) = collect(refusal.value, Layer)
    assert problem.message == 'missing; write thickness = "1 um" (1 um to 1 mm, its thickness)'
    assert Layer.model_validate({"material": "oil", "order": 1, "thickness": "1 um"}).thickness == 1e-6


def test_the_section_of_a_problem_may_stand_deeper_in_the_file() -> None:
    text = '[[states]]\nname = "wet"\n[states.object]\nbase = "80 mm"\n[[states]]\n[states.object]\nbase = "8"\n'
    source = TomlSource(text, "tank.toml")
    problems: list[Problem] = []
    for row, state in enumerate(source.data["states"]):
        with pytest.raises(ValidationError) as refusal:
            Prism.model_validate(state["object"])
        problems += collect(refusal.value, Prism, ("states", str(row), "object"))
    with pytest.raises(UserMistake) as mistake:
        raise_problems(problems, source, "tank.toml")
    assert mistake.value.lines == (
        'tank.toml:4:8 states[wet].object.base = "80 mm": too large (1 to 60 mm, width of the base)',
        'tank.toml:7:8 states[2].object.base = "8": unit missing; write "8 mm" (1 to 60 mm, width of the base)',
    )


@pytest.mark.parametrize(
    ("given", "shown"),
    [
        ("a", ' = "a"'),
        ('say "a"', ' = "say \\"a\\""'),
        ("µ\n", ' = "µ\\n"'),
        (True, " = true"),
        (1.5, " = 1.5"),
        (None, ""),
    ],
)
def test_given_values_are_shown_as_a_file_holds_them(given: Any, shown: str) -> None:
    assert Problem(("a", "b"), given, "wrong").line() == f"a.b{shown}: wrong"


def test_without_a_file_the_path_says_where() -> None:
    twice = [Problem(("a",), 1, "wrong", "do this"), Problem(("a",), 1, "wrong", "do this"), Problem((), None, "bad")]
    with pytest.raises(UserMistake) as mistake:
        raise_problems(twice, None, "variant B")
    assert mistake.value.lines == ("variant B: a = 1: wrong; do this", "variant B: bad")
