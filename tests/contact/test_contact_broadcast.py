"""Every pure law of the contact room answers a batch as it answers one by one, and shows its units."""

from __future__ import annotations

import inspect
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest

from outcouple.contact import diffuse, film_dynamics, mechanics, wetting

# Plausible spans of every parameter these laws take, by name.
SPANS: dict[str, tuple[float, float]] = {
    "absorption": (1.0, 30.0),
    "adhesion": (0.01, 0.1),
    "advancing": (1.2, 2.0),
    "angle": (0.1, 1.0),
    "area": (0.01, 1.0),
    "base_radius": (1e-4, 1e-3),
    "contact_angle": (0.1, 1.5),
    "contact_area": (1e-8, 1e-6),
    "cosine": (0.3, 1.0),
    "counter_modulus": (1e6, 1e9),
    "counter_poisson": (0.1, 0.49),
    "deepest": (1e-3, 5e-3),
    "density": (700.0, 1300.0),
    "diameter": (2e-3, 1e-2),
    "distance": (1e-3, 1e-1),
    "end": (0.3, 0.6),
    "force": (0.1, 10.0),
    "fraction": (0.6, 0.75),
    "gap": (1e-4, 1e-3),
    "gas_share": (0.5, 0.999),
    "half_angle": (0.05, 1.0),
    "half_force": (0.5, 3.0),
    "height": (1e-3, 0.1),
    "largest": (1e-4, 3e-4),
    "least": (0.02, 0.1),
    "length": (1e-3, 1e-2),
    "modulus": (1e5, 3e6),
    "most": (0.3, 0.7),
    "n_contact": (1.3, 1.5),
    "n_from": (1.0, 1.8),
    "n_guide": (1.35, 1.8),
    "n_medium": (1.3, 1.45),
    "n_outside": (1.0, 1.1),
    "n_to": (1.0, 1.8),
    "offset": (0.0, 5e-3),
    "period": (4e-4, 6e-4),
    "pitch": (5e-5, 2e-4),
    "poisson": (0.1, 0.49),
    "pressure": (1e3, 1e5),
    "radius": (1e-4, 1e-2),
    "receding": (0.3, 1.1),
    "reflectance": (0.1, 0.7),
    "scattering": (300.0, 3000.0),
    "slope": (0.05, 0.5),
    "speed": (1e-4, 1e-2),
    "start": (0.05, 0.2),
    "surface_tension": (0.02, 0.07),
    "thickness": (1e-6, 1e-4),
    "time": (0.1, 20.0),
    "time_constant": (0.1, 10.0),
    "tip_radius": (1e-3, 4e-3),
    "viscosity": (1e-3, 0.1),
    "volume": (1e-10, 1e-8),
    "width": (1e-4, 3e-4),
}
LAWS = [
    getattr(room, name)
    for room in (mechanics, wetting, film_dynamics, diffuse)
    for name in room.__all__
    if callable(getattr(room, name)) and not name.endswith("notes")
]


def arguments(law: Callable[..., Any]) -> list[str]:
    return [name for name, p in inspect.signature(law).parameters.items() if p.annotation != "bool"]


@pytest.mark.parametrize("law", LAWS, ids=lambda law: law.__name__)
def test_a_batch_is_a_loop(law: Callable[..., Any]) -> None:
    rng = np.random.default_rng(7)
    names = arguments(law)
    shapes = [(3, 1) if at % 2 else (4,) for at in range(len(names))]
    batch = {name: rng.uniform(*SPANS[name], shape) for name, shape in zip(names, shapes, strict=True)}
    found = law(**batch)
    shape = np.broadcast_shapes(*shapes)
    assert found.shape == shape
    spread = {name: np.broadcast_to(values, shape) for name, values in batch.items()}
    for place in np.ndindex(shape):
        alone = law(**{name: float(values[place]) for name, values in spread.items()})
        assert np.shape(alone) == ()
        assert found[place] == pytest.approx(float(alone), rel=1e-12)


@pytest.mark.parametrize("law", LAWS, ids=lambda law: law.__name__)
def test_laws_take_named_arguments_and_say_what_they_are(law: Callable[..., Any]) -> None:
    parameters = inspect.signature(law).parameters.values()
    assert all(p.kind is inspect.Parameter.KEYWORD_ONLY for p in parameters)
    assert law.__doc__
