"""The one page of hooks: what a plugin may give, and when each hook is called.

A plugin is a module (or object) with functions marked ``@outcouple.hookimpl``, named by an entry point in the group
``outcouple``. Every hook is optional. Each is called once, when a :class:`~outcouple.hooks.host.Host` is built, except
where said otherwise. What comes back is checked; a plugin that fails is named and left out, the rest goes on.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any

import pluggy

if TYPE_CHECKING:
    from outcouple.geometry import Geometry
    from outcouple.touching import Touching

__all__ = ["GROUP", "hookimpl", "hookspec"]

GROUP = "outcouple"
"""Entry-point group and project name of the hooks."""

hookspec = pluggy.HookspecMarker(GROUP)
hookimpl = pluggy.HookimplMarker(GROUP)


@hookspec
def outcouple_geometries() -> Sequence[type[Geometry] | str]:
    """Sensor geometries: subclasses of :class:`outcouple.geometry.Geometry`.

    A text "name = package.module:Class | summary" stands for a class that is imported only when a design asks for it.
    """
    raise NotImplementedError


@hookspec
def outcouple_materials() -> Mapping[str, Mapping[str, Any]]:
    """Materials by name, each a mapping as ``[materials.<name>]`` of a design file takes it, numbers in SI."""
    raise NotImplementedError


@hookspec
def outcouple_touching() -> Sequence[type[Touching]]:
    """Contact presets: subclasses of :class:`outcouple.touching.Touching`."""
    raise NotImplementedError


@hookspec
def outcouple_views() -> Sequence[Any]:
    """Dashboard views: ``name``, ``title``, ``figure(outcome) -> figure dict``; called when a dashboard opens."""
    raise NotImplementedError
