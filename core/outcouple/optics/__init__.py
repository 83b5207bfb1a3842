"""Plane waves at faces: interfaces, layers, gaps, the coherence of layers, and quadrature over lines and angles.

Absolute indices n + i k with k >= 0 (fields go as exp(-i omega t)), angles in radians from the face's normal, vacuum
wavelengths in metres. p is d x s before and after a reflection, so rp = -rs at normal incidence. Everything broadcasts.
"""

from __future__ import annotations

from outcouple.optics.coherence import coherence_length, incoherent_layers, mixed_response
from outcouple.optics.evanescent import (
    beam_shift,
    brewster_angle,
    critical_angle,
    effective_thickness,
    penetration_depth,
)
from outcouple.optics.gap import gap_transmittance
from outcouple.optics.quadrature import gauss_legendre, segments, spectrum_nodes
from outcouple.optics.spread import thickness_average
from outcouple.optics.stack import StackResponse, interface, reflectance, stack_response

__all__ = [
    "StackResponse",
    "beam_shift",
    "brewster_angle",
    "coherence_length",
    "critical_angle",
    "effective_thickness",
    "gap_transmittance",
    "gauss_legendre",
    "incoherent_layers",
    "interface",
    "mixed_response",
    "penetration_depth",
    "reflectance",
    "segments",
    "spectrum_nodes",
    "stack_response",
    "thickness_average",
]
