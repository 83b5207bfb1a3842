"""A sensor from outside: one beam, one hit, and a view of its own. Nothing here knows that there is a page."""

from __future__ import annotations

import numpy as np

from outcouple import hookimpl
from outcouple.fields import Section, name, quantity
from outcouple.geometry import Geometry, Outline, RayPath, View
from outcouple.light import Light


class Window(Section):
    """A window that the beam meets once."""

    material: str = name("crown glass", describe="material of the window", deciding=True)
    slope: float = quantity(
        "60 deg", "angle", ge="10 deg", le="85 deg", describe="angle of incidence at the wetted face", deciding=True
    )


class Parameters(Section):
    """A window in a wall."""

    window: Window = Window()


class SlopeWindow(Geometry):
    """One hit at a chosen angle."""

    name = "slope-window"
    summary = "one beam that meets a wetted window once"
    Parameters = Parameters
    wetted = {"window": "the window"}  # noqa: RUF012
    words = ("clear", "flooded")
    jobs = ("flood",)

    def light(self, setting):
        slope = setting.spread(setting.p.window.slope)[:, None, None]
        return Light(
            guide=setting.p.window.material,
            faces=("window",),
            launch=np.ones((1, 1)),
            reach=np.ones((1, 1, 1)),
            angle=slope,
            hits=np.ones((1, 1, 1, 1)),
            turn=np.zeros((1, 1, 1)),
            length=np.zeros((1, 1, 1)),
            polarization=np.zeros((1, 1)),
        )

    def views(self, setting):
        slope = float(setting.p.window.slope[0])
        wall = Outline("guide", "window", np.array([[-0.01, 0], [0.01, 0], [0.01, 0.01], [-0.01, 0.01]]))
        reach = 0.008 * np.tan(slope) if slope < 0.9 else 0.009
        beam = np.array([[-reach, 0.008], [0.0, 0.0], [reach, 0.008]])
        return (View("cross-section", (wall,), (RayPath(beam, (-1, 0, -1), (0.0, slope, 0.0)),)),)

    def starter(self, job):
        return """\
[[states]]
name = "clear"
expect = "absent"
touching = "dry"

[[states]]
name = "flooded"
expect = "present"
touching = "water"

[[requirements]]
metric = "optical_share"
state = "flooded"
at_most = "30 %"
"""


class Tally:
    """A view of the page: how many states there are."""

    name = "tally"
    title = "Tally of states"

    def figure(self, outcome):
        return {"data": [{"type": "bar", "x": ["states"], "y": [len(outcome.states)]}], "layout": {"height": 200}}


class Broken:
    """A view that fails."""

    name = "broken"
    title = "A broken view"

    def figure(self, outcome):
        raise RuntimeError("out of ink")


@hookimpl
def outcouple_geometries():
    return [SlopeWindow]


@hookimpl
def outcouple_views():
    return [Tally(), Broken()]
