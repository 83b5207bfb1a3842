"""Light to electrons: detectors, amplifiers, converters, cameras, ambient light and drift.

The room knows no optics, and but for its readers no design file: plain functions and small frozen records on arrays
over samples and channels. `photodiode`, `transimpedance`, `modulation` and `converter` meet in `receiver`, whose
`NoiseBudget` says what limits a reading; `camera` is the other road. `ambient` gives outside light as photocurrent,
`drift` what changes slowly. `chain` joins them to optical shares for `outcouple.evaluation`: `photodiode_reader` and
`camera_reader` read a design's sections with the help of `emitted` (power after drift and filter), `outside` (ambient
light), `stage`, `timing` and `reference_channel`.
"""

from outcouple.readout.ambient import band_irradiance, current_density
from outcouple.readout.camera import Camera, photon_transfer_fit, photons_per_pixel
from outcouple.readout.converter import Converter
from outcouple.readout.modulation import Modulation
from outcouple.readout.noise import NoiseBudget
from outcouple.readout.photodiode import dark_current, quantum_ceiling, responsivity
from outcouple.readout.receiver import receiver_budget, stage_moments
from outcouple.readout.transimpedance import Transimpedance, compensation_for

__all__ = [
    "Camera",
    "Converter",
    "Modulation",
    "NoiseBudget",
    "Transimpedance",
    "band_irradiance",
    "compensation_for",
    "current_density",
    "dark_current",
    "photon_transfer_fit",
    "photons_per_pixel",
    "quantum_ceiling",
    "receiver_budget",
    "responsivity",
    "stage_moments",
]
