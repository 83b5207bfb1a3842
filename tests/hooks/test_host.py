"""Plugins: found, asked, checked; a broken one is named and left out, the rest goes on."""

from __future__ import annotations

import inspect
from importlib.metadata import EntryPoint
from typing import ClassVar

import pytest

from outcouple.errors import UserMistake
from outcouple.geometry import Geometry
from outcouple.hooks import build_host, hookimpl, host, spec
from outcouple.touching.clear import Dry


class Materials:
    """Gives a material."""

    @hookimpl
    def outcouple_materials(self):
        return {"test resin": {"index": 1.55, "source": "invented for this test", "kind": "solid"}}


class Touching:
    """Gives a contact."""

    @hookimpl
    def outcouple_touching(self):
        class Smoke(Dry):
            """Smoke."""

            what = "smoke"
            summary = "smoke around the faces"

        return [Smoke]


class NotAGeometry:
    """Breaks the contract."""

    @hookimpl
    def outcouple_geometries(self):
        return [int]


class Abstract:
    """Gives a geometry that lays out no light."""

    @hookimpl
    def outcouple_geometries(self):
        class Half(Geometry):
            name = "half"
            summary = "half a geometry"
            Parameters = Dry
            wetted: ClassVar[dict[str, str]] = {}

        return [Half]


class Stranger:
    """Has a hook of an unknown name."""

    @hookimpl
    def outcouple_no_such_hook(self):
        return []


class Taken:
    """Gives a name that is taken."""

    @hookimpl
    def outcouple_touching(self):
        return [Dry]


class Raises:
    """Falls over when it is asked."""

    @hookimpl
    def outcouple_views(self):
        raise RuntimeError("no screen")


def test_built_ins_come_through_the_entry_point_like_anyones():
    found = build_host()
    assert found.plugins[0] == "builtin"
    assert {"prism-switch", "gap-pair"} <= set(found.geometries)
    assert not found.left_out
    assert found.geometry("prism-switch").name == "prism-switch"


def test_materials_and_contacts_of_a_plugin_are_there():
    found = build_host({"materials": Materials(), "touching": Touching()})
    assert found.catalogue.lookup("test resin").index(850e-9).real == pytest.approx(1.55)
    assert "smoke" in found.touching


@pytest.mark.parametrize(
    ("plugin", "why"),
    [
        (NotAGeometry(), "is not a Geometry"),
        (Abstract(), "does not lay out light"),
        (Stranger(), "does not fit the hooks"),
        (Taken(), "names that are taken: dry"),
        (Raises(), "no screen"),
    ],
)
def test_a_broken_plugin_is_named_and_left_out(plugin, why):
    found = build_host({"broken": plugin, "materials": Materials()})
    assert [out.plugin for out in found.left_out] == ["broken"]
    assert why in found.left_out[0].why
    assert "test resin" in found.catalogue.names()
    assert "prism-switch" in found.geometries


def test_a_plugin_that_does_not_import_is_named_and_left_out(monkeypatch):
    real = host.entry_points

    def points(group):
        return [*real(group=group), EntryPoint("missing", "no_such_module_at_all", group)]

    monkeypatch.setattr(host, "entry_points", points)
    found = build_host()
    assert [out.plugin for out in found.left_out] == ["missing"]
    assert "does not import" in found.left_out[0].why
    assert "prism-switch" in found.geometries


def test_every_hook_is_documented_with_its_answer():
    hooks = [value for name, value in vars(spec).items() if name.startswith("outcouple_")]
    assert len(hooks) >= 4
    for hook in hooks:
        assert inspect.getdoc(hook)
        assert inspect.signature(hook).return_annotation is not inspect.Signature.empty


class LateBreaker:
    """Names a geometry whose module is not there."""

    @hookimpl
    def outcouple_geometries(self):
        return ("late = no_such_module_at_all:Thing | breaks when it is asked for",)


def test_a_geometry_that_fails_when_asked_for_is_named_without_a_traceback():
    found = build_host({"late": LateBreaker()})
    assert "prism-switch" in found.geometries
    with pytest.raises(UserMistake, match="no_such_module_at_all:Thing cannot be used: ModuleNotFoundError"):
        found.geometry("late")
