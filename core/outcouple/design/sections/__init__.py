"""Sections that every design file shares; a geometry's own stand in its parameter model."""

from __future__ import annotations

from outcouple.design.sections.decision import Decision
from outcouple.design.sections.emitter import Emitter
from outcouple.design.sections.environment import Environment
from outcouple.design.sections.readout import READOUTS, CameraReadout, PhotodiodeReadout

__all__ = ["READOUTS", "CameraReadout", "Decision", "Emitter", "Environment", "PhotodiodeReadout"]
