"""The form is made of the parameter models: every input of every installed sensor has its control."""

from __future__ import annotations

import json

import pytest

from outcouple.design import design_model, parse_design
from outcouple.design.starter import starter_text
from outcouple.fields import leaves, parse_leaf
from outcouple.hooks import build_host
from outcouple_dashboard.controls import folds, form
from outcouple_dashboard.entries import STEPS, join, section_groups, slider_position, slider_text
from outcouple_dashboard.ranges import sentence, span_of, varying

HOST = build_host()


def design_for(name):
    geometry = HOST.geometry(name)
    return parse_design(starter_text(geometry, geometry.jobs[0] if geometry.jobs else name), host=HOST)


def ids(component):
    """Ids of all parts of a form."""
    return [json.loads(text) for text in {json.dumps(one.id) for one in component._traverse_ids()}]


@pytest.mark.parametrize("name", list(HOST.geometries))
def test_every_input_has_a_control(name):
    from dash import html

    design = design_for(name)
    found = {
        one["path"]
        for one in ids(html.Div(form(design, {}, opened=folds(design))))
        if isinstance(one, dict) and one["kind"] == "value"
    }
    assert {join(leaf.path) for leaf in leaves(design_model(type(design.geometry)))} <= found


@pytest.mark.parametrize("name", list(HOST.geometries))
def test_sliders_stand_where_the_value_is_and_give_values_that_are_taken(name):
    for group in section_groups(design_for(name)):
        for entry in group.entries:
            position = slider_position(entry)
            if position is None:
                continue
            for at in (0, 1, position, STEPS // 2, STEPS - 1, STEPS):
                parse_leaf(entry.leaf, slider_text(entry.leaf, at))
            back = parse_leaf(entry.leaf, slider_text(entry.leaf, position))
            assert abs(slider_position(entry) - position) <= 1
            assert type(back) is (int if entry.leaf.what == "count" else float)


@pytest.mark.parametrize("name", list(HOST.geometries))
def test_everything_that_can_vary_has_ends_a_study_takes(name):
    from outcouple.studies.axes import read_axis

    design = design_for(name)
    for one in varying(design):
        start, stop = span_of(one)
        if one.entry.leaf.what == "quantity":  # counts may depend on each other, which a study says
            read_axis(design, sentence(one, start, stop, 9))
