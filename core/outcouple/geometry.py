"""What a sensor geometry is: the contract between a plugin and everything else.

A geometry describes a sensor's light and nothing more: its parameters, the ways from emitter to read-out, the metrics
it adds. States, read-out, decision, sweeps, comparison, pictures and the dashboard come free. Axes of arrays: S
samples, C channels, K rays, H hit columns (see ``outcouple.light.Light``).
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any, ClassVar, Literal

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cover import Cover
from outcouple.light import Light
from outcouple.notes import Note

if TYPE_CHECKING:
    from outcouple.fields import Section

__all__ = [
    "ContinuousCurve",
    "Curve",
    "FailureRow",
    "Geometry",
    "Metric",
    "MetricValue",
    "Missing",
    "Outline",
    "RayPath",
    "ResponseAxis",
    "Results",
    "Setting",
    "StateResult",
    "Surface",
    "View",
]

Floats = NDArray[np.float64]
Scope = Literal["design", "state", "pair", "channel", "position"]


@dataclass(frozen=True)
class Metric:
    """One number a design is judged by.

    name     as written in a requirement, lower case with underscores
    label    for people
    kind     kind of quantity (see ``outcouple.quantities``), for reading limits and for display
    unit     preferred display unit
    better   which way is better; "none" for numbers that only inform
    scope    what one value belongs to
    cost     "scalar" comes with every evaluation, "map" only when something asks for it
    meaning  one sentence
    """

    name: str
    label: str
    kind: str
    unit: str
    better: Literal["higher", "lower", "none"]
    meaning: str
    scope: Scope = "design"
    cost: Literal["scalar", "map"] = "scalar"


@dataclass(frozen=True)
class MetricValue:
    """A metric over the samples.

    values  (S,) in SI; nan where it is not applicable to a sample
    at      name of the state, pair or channel that the worst value belongs to, where there is one
    states  values per state, (S,) each, for metrics of scope "state"
    """

    values: Floats
    at: str = ""
    states: Mapping[str, Floats] = field(default_factory=dict)


@dataclass(frozen=True)
class Missing:
    """A metric that has no value here: "not applicable" (never will) or "open" (not evaluated)."""

    why: str
    kind: Literal["not applicable", "open"] = "not applicable"


@dataclass(frozen=True)
class Surface:
    """A map or curve that is part of an outcome: values over one or two axes, with units.

    axes    (label, unit text, values in SI) per dimension, slowest first
    values  array over the axes, SI
    kind    kind of quantity of the values; unit is the preferred display unit
    limit   value a contour is drawn at, where one has a meaning
    marks   named points of a curve: (name, x, y) in SI
    """

    name: str
    label: str
    axes: tuple[tuple[str, str, Floats], ...]
    values: Floats
    kind: str = "number"
    unit: str = ""
    limit: float | None = None
    marks: tuple[tuple[str, float, float], ...] = ()


Curve = Surface


@dataclass(frozen=True)
class Outline:
    """A closed or open line of a drawing, metres; role names what it is for its colour and legend."""

    role: Literal["guide", "emitter", "detector", "face", "medium", "overlay", "object", "wall", "axis"]
    label: str
    points: Floats
    closed: bool = True


@dataclass(frozen=True)
class RayPath:
    """A drawn ray.

    points   vertices (M, 2) in metres
    columns  per vertex: h where the ray is reflected at hit column h, -2 - h where it crosses into what lies there, -1
             elsewhere
    angles   per vertex the angle of incidence [rad]
    """

    points: Floats
    columns: tuple[int, ...]
    angles: tuple[float, ...]


@dataclass(frozen=True)
class View:
    """One drawing to scale of the nominal design: a cross-section or a plan."""

    name: str
    outlines: tuple[Outline, ...]
    rays: tuple[RayPath, ...] = ()


@dataclass(frozen=True)
class ResponseAxis:
    """What the sensor's main response curve runs over.

    medium  "immersed": the index of a clear liquid on the wetted faces runs; "parameter": ``path`` runs
    """

    label: str
    kind: str
    unit: str
    start: float
    stop: float
    medium: Literal["immersed", "parameter"] = "immersed"
    path: tuple[str, ...] = ()
    logarithmic: bool = False


@dataclass(frozen=True)
class FailureRow:
    """One row of the failure-direction table that a geometry adds.

    light_lost  True: the cause makes the reading fall; False: it makes it rise; None: no change
    covered_by  names of diagnostics that reveal it ("reference", "dark test", "fault band", ...)
    """

    cause: str
    effect: str
    light_lost: bool | None
    covered_by: tuple[str, ...] = ()
    slow: bool = False


@dataclass(frozen=True)
class Setting:
    """What a geometry is given to lay out light or to measure: one state's parameters over the samples.

    p        the whole design as attributes (``p.emitter.power``, ``p.prism.base`` ...): every float leaf an array
             (S,) or (1,), everything else as in the file
    samples  S
    index    (material name) -> real absolute index at the emitter's centre wavelength, (S,)
    breaks   indices (S,) of the media the states hold: where the light's quadrature wants edges, and for nothing else
    absorption  (material name) -> absorption coefficient at the emitter's centre wavelength [1/m], (S,); for measures
             and maps only: the light's own absorption follows from its lengths
    """

    p: Any
    samples: int
    index: Callable[[str], Floats]
    breaks: tuple[Floats, ...] = ()
    absorption: Callable[[str], Floats] = lambda name: np.zeros(1)

    def spread(self, value: Floats | float) -> Floats:
        """A value as an array (S,)."""
        return np.broadcast_to(np.asarray(value, dtype=float), (self.samples,))


@dataclass(frozen=True)
class StateResult:
    """One state over samples and channels.

    expect   "absent", "present" or a number (SI) for continuous sensors
    share    optical share of the emitter's power at the read-out, (S, C)
    signal   mean reading, (S, C), in ``unit``
    noise    standard deviation of the reading, (S, C)
    covers   what lies on each face (of the first build-up where coarse patches make several)
    change, change_noise  where readings are changes: relative change against the untouched sensor, present always
             positive, and its standard deviation (infinite where a channel is blind), (S, C); else None
    place    diameter, x and y of the object, each (S,), or None
    role     "normal" or "fault"
    reply    (face, incidence (S, K)) -> how what lies there answers at other angles: per build-up (coarse patches make
             several) its share (S,) and the reflectances for s and p, each (S, K), mean over the emitter's line
    arrivals () -> share of the emitter's power on every ray at every channel, (S, C, K), mean over the line
    """

    name: str
    expect: str | float
    setting: Setting
    light: Light
    share: Floats
    signal: Floats
    noise: Floats
    unit: str
    covers: Mapping[str, Cover]
    change: Floats | None = None
    change_noise: Floats | None = None
    place: Mapping[str, Floats] | None = None
    role: str = "normal"
    reply: Callable[[str, Floats], tuple[tuple[Floats, Floats, Floats], ...]] | None = None
    arrivals: Callable[[], Floats] | None = None


@dataclass(frozen=True)
class ContinuousCurve:
    """Reading against the measurand of a continuous sensor, over the span of the states' numbers.

    values  of the measurand [SI], (N,)
    share   optical share, (S, N); signal and noise of the reading, (S, N), of the first channel
    slope   d signal / d measurand, (S, N)
    """

    values: Floats
    share: Floats
    signal: Floats
    noise: Floats
    slope: Floats


@dataclass(frozen=True)
class Results:
    """What a geometry's own metrics are measured on.

    decision      level and statistics of the decision (see ``outcouple.decision``)
    requirements  what the design must meet, for metrics that depend on it
    curve         of a continuous sensor, else None
    trial         (face -> cover, index (S,) by the name of a trial medium) -> optical share (S, C): the nominal light
                  answered by a cover no state has
    metric        value of another metric by name
    untouched     the sensor with nothing on it, where readings are changes against it; else None
    memo          room for what several measures and surfaces share
    """

    setting: Setting
    light: Light
    states: Sequence[StateResult]
    decision: Any
    requirements: Sequence[Any]
    curve: ContinuousCurve | None
    trial: Callable[[Mapping[str, Cover], Mapping[str, Floats]], Floats]
    metric: Callable[[str], MetricValue | Missing]
    untouched: StateResult | None = None
    memo: dict[str, Any] = field(default_factory=dict)

    def expecting(self, expect: str) -> list[StateResult]:
        """The states that expect "absent" or "present"."""
        return [state for state in self.states if state.expect == expect]


class Geometry(ABC):
    """A sensor geometry. Subclass it, fill the class attributes, lay out the light."""

    name: ClassVar[str]
    summary: ClassVar[str]
    Parameters: ClassVar[type[Section]]
    """pydantic model whose fields are the geometry's own sections of the design file."""
    wetted: ClassVar[Mapping[str, str]]
    """Faces that something can touch, each with a few words; ``touching`` of a state covers all of them."""
    spot_face: ClassVar[str] = ""
    """Face that an object of limited size lies on; a state with ``object`` covers this face only."""
    words: ClassVar[tuple[str, str]] = ("dry", "wet")
    """Display words for expect = "absent" and "present"."""
    present_reads: ClassVar[Literal["low", "high"]] = "low"
    """Which way the reading goes when something is there."""
    reading: ClassVar[Literal["level", "change"]] = "level"
    """"level": a channel's own signal is compared; "change": its relative change against the untouched sensor."""
    readout: ClassVar[Literal["photodiode", "camera"]] = "photodiode"
    metrics: ClassVar[tuple[Metric, ...]] = ()
    measurand: ClassVar[tuple[str, ...]] = ()
    """Path of the parameter that states with a numeric ``expect`` set; empty where there is none."""
    jobs: ClassVar[tuple[str, ...]] = ()
    """Jobs it serves, for ``outcouple new``: overfill, dry-run, leak, touch, rain, displacement ..."""

    @classmethod
    def faces_for(cls, *, has_object: bool) -> tuple[str, ...]:
        """Faces that ``touching`` covers: the spot of an object, or every other wetted face."""
        if has_object and cls.spot_face:
            return (cls.spot_face,)
        return tuple(face for face in cls.wetted if face != cls.spot_face)

    @abstractmethod
    def light(self, setting: Setting) -> Light:
        """All ways from emitter to read-out."""

    def covers(self, setting: Setting, touching: Mapping[str, Cover]) -> Mapping[str, Cover]:
        """What lies on each face; for dimensions that define contacts. Default: what the state says."""
        return touching

    def measure(self, names: Sequence[str], results: Results) -> Mapping[str, MetricValue | Missing]:
        """The geometry's own metrics among ``names``."""
        return {}

    def surfaces(self, names: Sequence[str], results: Results) -> tuple[Surface, ...]:
        """Maps that belong to the outcome; called only when something asks."""
        return ()

    def views(self, setting: Setting) -> tuple[View, ...]:
        """Drawings of the nominal design (samples = 1)."""
        return ()

    def response(self, setting: Setting) -> ResponseAxis | None:
        """What the main response curve runs over."""
        return None

    def curve(self, results: Results) -> Curve | None:
        """The main response curve of a nominal design where it is no reading along one axis."""
        return None

    def remarks(self, results: Results) -> tuple[Note, ...]:
        """Cautions that follow from the results of a nominal design."""
        return ()

    def failures(self, setting: Setting) -> tuple[FailureRow, ...]:
        """Rows the geometry adds to the failure-direction table."""
        return ()

    def notes(self, setting: Setting) -> tuple[Note, ...]:
        """Cautions that follow from the parameters alone."""
        return ()

    def starter(self, job: str) -> str:
        """States and requirements of a starter file for a job, as TOML."""
        return ""
