"""Readings to verdicts: levels, error rates, failure directions, cautions.

The room knows no optics and no design file. `detection` turns margins in standard deviations into false alarms, misses
and times; `three_way` adds fault bands; `failure_modes` tells which way each failure errs for a demand; `cautions`
holds what a result must say about explosive atmospheres, overfill and people, `eye_safety` about eyes, `service_media`
what the media and the tip's material set off. `decide` joins levels and states
for `outcouple.evaluation`.
"""

from outcouple.decision.detection import (
    SECONDS_PER_YEAR,
    confirmed_probability,
    crossing_rate,
    equal_error_level,
    inverse_tail,
    minimum_error_level,
    per_year,
    tail_probability,
    threshold_for,
)
from outcouple.decision.failure_modes import FailureEffect, failure_directions
from outcouple.decision.three_way import Bands, band_probabilities, fault_coverage

__all__ = [
    "SECONDS_PER_YEAR",
    "Bands",
    "FailureEffect",
    "band_probabilities",
    "confirmed_probability",
    "crossing_rate",
    "equal_error_level",
    "failure_directions",
    "fault_coverage",
    "inverse_tail",
    "minimum_error_level",
    "per_year",
    "tail_probability",
    "threshold_for",
]
