"""The metrics a camera-read plate adds."""

from __future__ import annotations

from outcouple.geometry import Metric

__all__ = ["METRICS"]

METRICS: tuple[Metric, ...] = (
    Metric(
        "contrast", "contrast", "number", "", "higher",
        "rise of the pixel's reading by a touch over its reading untouched, outside light included", "state",
    ),
    Metric(
        "pixel_snr", "signal over noise per pixel", "number", "", "higher",
        "rise of one reading by a touch over its noise", "state",
    ),
    Metric(
        "object_snr", "signal over noise per object", "number", "", "higher",
        "the same over all pixels that the object covers, their noise independent", "state",
    ),
    Metric(
        "touch_radiance", "radiance of the touch", "radiance", "W/m2/sr", "higher",
        "brightness of the touched place behind the plate, in the emitter's light", "state",
    ),
    Metric(
        "outside_radiance", "radiance from outside", "radiance", "W/m2/sr", "lower",
        "brightness of what lies above the plate in the outside light, where its irradiance is stated", "state",
    ),
    Metric(
        "leakable_share", "leakable share", "ratio", "%", "higher",
        "part of the guided light that the medium in contact can take at all", "state",
    ),
    Metric(
        "escape_share", "escape share", "ratio", "%", "higher",
        "part of the light sent back at the touched place that leaves through the back face; the rest stays in the "
        "plate and brightens it", "state",
    ),
    Metric(
        "face_irradiance", "irradiance of the face", "irradiance", "W/m2", "higher",
        "light that meets the touched face from inside where the object lies", "state",
    ),
    Metric("pixel_size", "pixel on the plate", "length", "mm", "lower", "side of a pixel's footprint"),
    Metric(
        "smallest_object", "smallest object", "length", "mm", "lower",
        "diameter whose signal over noise per object reaches the certainty asked for, at the object's place", "state",
    ),
    Metric(
        "position_error", "position error", "length", "um", "lower",
        "least standard deviation of the position that the pixels along the object's edge allow", "state",
    ),
    Metric(
        "latency", "latency", "time", "ms", "lower",
        "longest time from a touch to the end of the exposure that holds it whole",
    ),
    Metric(
        "uniformity", "uniformity", "ratio", "%", "higher",
        "least over greatest signal of an object over the field", "state", "map",
    ),
    Metric(
        "least_object_snr", "least signal over noise per object", "number", "", "higher",
        "signal over noise per object wherever it lies in the field", "state", "map",
    ),
    Metric(
        "worst_position_error", "worst position error", "length", "um", "lower",
        "position error wherever the object lies in the field", "state", "map",
    ),
)  # fmt: skip
