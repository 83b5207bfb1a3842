"""Changes to a design's text: the value changes, everything else stays letter by letter."""

from __future__ import annotations

import tomllib

import pytest

from outcouple.design import parse_design
from outcouple.errors import UserMistake
from outcouple_dashboard import changes
from outcouple_dashboard.edits import set_value

TEXT = """\
# A tank.
title = "Tank"   # its name
geometry = "prism-switch"

[prism]
base = "8 mm"  # from the drawing

[[states]]
name = "dry"
expect = "absent"
touching = "dry"

[[states]]
name = "wet"
expect = "present"
touching = "film"   # drained
"""


def lines_that_differ(old, new):
    return [line for line in new.splitlines() if line not in old.splitlines()]


def test_one_value_changes_and_its_comment_stays():
    new = set_value(TEXT, ("prism", "base"), "9 mm")
    assert lines_that_differ(TEXT, new) == ['base = "9 mm"  # from the drawing']
    assert set_value(new, ("prism", "base"), "8 mm") == TEXT


def test_a_missing_section_is_added():
    data = tomllib.loads(set_value(TEXT, ("emitter", "power"), "5 mW"))
    assert data["emitter"] == {"power": "5 mW"}
    assert len(data["states"]) == 2


def test_a_named_contact_becomes_a_table_when_a_number_of_it_is_set():
    data = tomllib.loads(set_value(TEXT, ("states", "1", "touching", "thickness"), "20 um"))
    assert data["states"][1]["touching"] == {"what": "film", "thickness": "20 um"}


def test_what_is_taken_out_leaves_the_rest():
    assert lines_that_differ(TEXT, set_value(TEXT, ("prism", "base"), None)) == []
    assert set_value(TEXT, ("prism", "nothing"), None) == TEXT


@pytest.mark.parametrize(
    ("path", "given", "message"),
    [
        ("prism/base", "eight", 'no number; a length is wanted, as text such as "1 mm"'),
        ("prism/base", "8", 'unit missing; write "8 mm"'),
        ("prism/base", "8 m", "too large"),
        ("prism/material", "unobtainium", "unobtainium"),
        ("readout/bits", "12.5", "whole number"),
        ("states/1/touching", "watr", "neither a contact nor a material"),
        ("states/1/expect", "perhaps", "unknown expectation"),
        ("prism/nothing", "1", "no such input"),
    ],
)
def test_what_cannot_be_is_told(path, given, message):
    design = parse_design(TEXT)
    with pytest.raises(UserMistake, match=message):
        parse_design(changes.put(design, TEXT, path, given))


def test_an_empty_field_takes_the_default_again():
    design = parse_design(TEXT)
    assert "base" not in changes.put(design, TEXT, "prism/base", "  ")


def test_states_and_requirements_come_and_go():
    design = parse_design(TEXT)
    more = changes.add_state(design, TEXT)
    assert [row["name"] for row in tomllib.loads(more)["states"]] == ["dry", "wet", "state 1"]
    parse_design(more)
    assert tomllib.loads(more)["states"][2]["touching"] == "film"
    assert changes.remove_row(more, "states/2").rstrip() == TEXT.rstrip()
    asked = changes.add_requirement(TEXT, "worst_ratio", "at least 20")
    assert parse_design(asked).requirements[0].at_least == 20
    assert "requirements" not in tomllib.loads(changes.remove_row(asked, "requirements/0"))
    with pytest.raises(UserMistake, match='write the limit as "at least 20"'):
        changes.add_requirement(TEXT, "worst_ratio", "20")


def test_the_last_state_stays():
    one = changes.remove_row(TEXT, "states/1")
    with pytest.raises(UserMistake, match="the last state stays"):
        changes.remove_row(one, "states/0")


def test_another_sensor_keeps_what_both_share():
    text = set_value(TEXT, ("emitter", "wavelength"), "880 nm")
    new = parse_design(changes.other_geometry(parse_design(text), text, "gap-pair"))
    assert new.geometry.name == "gap-pair"
    assert new.title == "Tank"
    assert new.text(("emitter", "wavelength")) == "880 nm"
