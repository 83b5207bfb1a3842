"""A state's light made by hand, for readers that are given nothing else."""

from dataclasses import dataclass, field
from types import SimpleNamespace

import numpy as np

from outcouple.design.sections import READOUTS, Emitter, Environment
from outcouple.fields import overlaid

__all__ = ["lit"]


@dataclass
class StubLit:
    p: object
    wavelengths: np.ndarray
    weights: np.ndarray
    etendue: np.ndarray
    slot: np.ndarray | None = None
    share: np.ndarray = field(default_factory=lambda: np.ones((1, 1, 1)))


def lit(kind, *, readout=None, emitter=None, environment=None, samples=None, share=0.01, etendue=0.0, slot=None):
    """One wavelength, one channel unless ``share`` lists several; ``samples`` lays arrays over "section.leaf"."""
    laid = {}
    for key, values in (samples or {}).items():
        section, leaf = key.split(".")
        laid.setdefault(section, {})[(leaf,)] = np.asarray(values, dtype=float)
    made = {
        "readout": READOUTS[kind](**(readout or {})),
        "emitter": Emitter(**(emitter or {})),
        "environment": Environment(**(environment or {})),
    }
    p = SimpleNamespace(**{name: overlaid(model, laid.get(name, {})) for name, model in made.items()})
    shares = np.atleast_1d(np.asarray(share, dtype=float))
    return StubLit(
        p=p,
        wavelengths=np.asarray(p.emitter.wavelength)[:, None],
        weights=np.ones(1),
        etendue=np.full((1, len(shares)), etendue),
        slot=None if slot is None else np.array([slot]),
        share=shares[None, None, :],
    )
