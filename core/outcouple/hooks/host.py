"""Finds plugins, asks them once, and keeps what they gave: the typed side of the hooks."""

from __future__ import annotations

import importlib
import inspect
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field
from functools import cached_property
from importlib.metadata import EntryPoint, entry_points
from typing import Any

import pluggy

from outcouple.errors import UserMistake, nearest
from outcouple.geometry import Geometry
from outcouple.hooks import spec
from outcouple.materials import Catalogue, builtin_catalogue
from outcouple.touching import BUILT_IN, Touching

__all__ = ["GeometryEntry", "Host", "LeftOut", "build_host"]


@dataclass(frozen=True)
class LeftOut:
    """A plugin that was left out, and why."""

    plugin: str
    why: str


@dataclass
class GeometryEntry:
    """A geometry by name; imported when first asked for."""

    name: str
    summary: str
    plugin: str
    load: Callable[[], Geometry]

    @cached_property
    def geometry(self) -> Geometry:
        """The geometry itself."""
        return self.load()


@dataclass
class Host:
    """Everything the plugins gave."""

    geometries: dict[str, GeometryEntry] = field(default_factory=dict)
    touching: dict[str, type[Touching]] = field(default_factory=dict)
    catalogue: Catalogue = field(default_factory=builtin_catalogue)
    views: list[Any] = field(default_factory=list)
    plugins: list[str] = field(default_factory=list)
    left_out: list[LeftOut] = field(default_factory=list)

    def geometry(self, name: str) -> Geometry:
        """The geometry of that name; UserMistake with the nearest name where there is none."""
        if name not in self.geometries:
            allowed = ", ".join(sorted(self.geometries))
            raise UserMistake(f"unknown geometry {name!r}{nearest(name, self.geometries)}; there are: {allowed}")
        return self.geometries[name].geometry


def build_host(plugins: Mapping[str, object] | None = None) -> Host:
    """Ask every plugin found by entry point, and those given besides (name -> module or object)."""
    manager = pluggy.PluginManager(spec.GROUP)
    manager.add_hookspecs(spec)
    host = Host(touching={preset.what: preset for preset in BUILT_IN})
    for name, plugin in _found(plugins or {}, host):
        _register(manager, host, name, plugin)
    for name, plugin in manager.list_name_plugin():
        if plugin is not None:
            _take(manager, host, name, plugin)
    return host


def _found(extra: Mapping[str, object], host: Host) -> Iterator[tuple[str, object]]:
    points: list[EntryPoint] = sorted(
        entry_points(group=spec.GROUP), key=lambda point: (point.name != "builtin", point.name)
    )
    for point in points:
        try:
            yield point.name, point.load()
        except Exception as error:  # a stranger's import may raise anything
            host.left_out.append(LeftOut(point.name, f"does not import: {type(error).__name__}: {error}"))
    yield from extra.items()


def _register(manager: pluggy.PluginManager, host: Host, name: str, plugin: object) -> None:
    try:
        manager.register(plugin, name)
        manager.check_pending()
    except Exception as error:
        if manager.has_plugin(name):
            manager.unregister(name=name)
        host.left_out.append(LeftOut(name, f"does not fit the hooks: {error}"))


def _take(manager: pluggy.PluginManager, host: Host, name: str, plugin: object) -> None:
    """Ask one plugin for everything; all of it is kept or none."""
    others = [other for other in manager.get_plugins() if other is not plugin]
    try:
        geometries = [
            entry
            for given in _ask(manager, others, "outcouple_geometries")
            for entry in (_entry(name, one) for one in given)
        ]
        touching = [_preset(one) for given in _ask(manager, others, "outcouple_touching") for one in given]
        materials = {key: row for given in _ask(manager, others, "outcouple_materials") for key, row in given.items()}
        catalogue = host.catalogue.with_materials(materials) if materials else host.catalogue
        views = [view for given in _ask(manager, others, "outcouple_views") for view in given]
        taken = {entry.name for entry in geometries} & set(host.geometries)
        taken |= {preset.what for preset in touching} & set(host.touching)
        if taken:
            raise ValueError(f"gives names that are taken: {', '.join(sorted(taken))}")
    except Exception as error:
        host.left_out.append(LeftOut(name, f"breaks the contract: {error}"))
        return
    host.geometries.update({entry.name: entry for entry in geometries})
    host.touching.update({preset.what: preset for preset in touching})
    host.catalogue = catalogue
    host.views.extend(views)
    host.plugins.append(name)


def _ask(manager: pluggy.PluginManager, others: list[Any], hook: str) -> list[Any]:
    return list(manager.subset_hook_caller(hook, others)())


def _entry(plugin: str, given: type[Geometry] | str) -> GeometryEntry:
    if isinstance(given, str):
        name, _, rest = given.partition(" = ")
        target, _, summary = rest.partition(" | ")
        return GeometryEntry(name.strip(), summary.strip(), plugin, lambda: _loaded(target.strip())())
    _check_geometry(given)
    return GeometryEntry(given.name, given.summary, plugin, given)


def _loaded(target: str) -> type[Geometry]:
    module, _, attribute = target.partition(":")
    try:
        found = getattr(importlib.import_module(module), attribute)
        _check_geometry(found)
    except Exception as error:
        raise UserMistake(f"the plugin at {target} cannot be used: {type(error).__name__}: {error}") from error
    return found  # type: ignore[no-any-return]


def _check_geometry(given: object) -> None:
    if not (inspect.isclass(given) and issubclass(given, Geometry)):
        raise TypeError(f"{given!r} is not a Geometry")
    missing = [attribute for attribute in ("name", "summary", "Parameters", "wetted") if not hasattr(given, attribute)]
    if missing:
        raise TypeError(f"geometry {given.__name__} lacks {', '.join(missing)}")
    if inspect.isabstract(given):
        raise TypeError(f"geometry {given.__name__} does not lay out light")


def _preset(given: object) -> type[Touching]:
    if not (inspect.isclass(given) and issubclass(given, Touching) and hasattr(given, "what")):
        raise TypeError(f"{given!r} is not a contact preset")
    return given
