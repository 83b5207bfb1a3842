"""The metrics every sensor has, beside those its geometry adds."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from outcouple.fields import leaves
from outcouple.geometry import Geometry, Metric
from outcouple.quantities import kind_of

__all__ = ["COMMON", "CONTINUOUS", "metrics_of"]

COMMON: tuple[Metric, ...] = (
    Metric(
        "signal",
        "signal",
        "current",
        "uA",
        "none",
        "mean reading of a state; of its faintest channel",
        "state",
    ),
    Metric("noise", "noise", "current", "nA", "lower", "standard deviation of the reading", "state"),
    Metric(
        "signal_to_noise",
        "signal over noise",
        "number",
        "",
        "higher",
        "reading over its standard deviation",
        "state",
    ),
    Metric(
        "optical_share",
        "optical share",
        "ratio",
        "%",
        "none",
        "light at the read-out as a share of the emitter's power",
        "state",
    ),
    Metric(
        "worst_ratio",
        "worst ratio",
        "number",
        "",
        "higher",
        "smallest reading of the states on the bright side over the largest of those on the dark side",
        "pair",
    ),
    Metric(
        "margin_sigma",
        "margin in sigma",
        "number",
        "",
        "higher",
        "distance of a state's reading from the level, towards its own side, in standard deviations",
        "state",
    ),
    Metric(
        "margin_span",
        "margin in span",
        "ratio",
        "%",
        "higher",
        "the same distance as a share of the span between the nearest absent and present states",
        "state",
    ),
    Metric(
        "false_alarms_per_year",
        "false alarms per year",
        "number",
        "",
        "lower",
        "decisions per year that say present while nothing is there, over all channels",
    ),
    Metric(
        "miss_probability",
        "miss probability",
        "number",
        "",
        "lower",
        "chance that one decision says absent while something is there",
        "state",
    ),
    Metric(
        "saturation_headroom",
        "saturation headroom",
        "number",
        "",
        "higher",
        "full scale of the read-out over the largest signal with its ambient light",
        "state",
    ),
    Metric(
        "ambient_ratio",
        "ambient over signal",
        "number",
        "",
        "lower",
        "ambient light at the read-out over the largest signal",
        "state",
    ),
    Metric(
        "noise_equivalent_power",
        "noise-equivalent power",
        "power",
        "pW",
        "lower",
        "optical power that equals the noise of the darkest state",
    ),
    Metric(
        "stage_bandwidth",
        "bandwidth of the stage",
        "frequency",
        "kHz",
        "higher",
        "frequency at which the transimpedance stage passes half the power",
    ),
    Metric(
        "phase_margin",
        "phase margin",
        "angle",
        "deg",
        "higher",
        "of the transimpedance stage; below 45 deg it rings",
    ),
    Metric(
        "stage_settling",
        "settling of the stage",
        "time",
        "us",
        "lower",
        "time after which a step of light stays within a thousandth",
    ),
    Metric(
        "bits_used",
        "converter bits used",
        "number",
        "",
        "higher",
        "bits of the converter that the brightest state makes use of",
    ),
    Metric(
        "dangerous_probability",
        "dangerous error per decision",
        "number",
        "",
        "lower",
        "largest chance that a decision misses the demand unnoticed, over the states, the faults and a dead emitter",
    ),
    Metric(
        "spurious_per_year",
        "spurious trips per year",
        "number",
        "",
        "lower",
        "decisions per year of one healthy state that act without demand or tell a fault that is none",
    ),
    Metric(
        "dead_emitter_unnoticed",
        "dead emitter unnoticed",
        "number",
        "",
        "lower",
        "chance that a decision on a dead emitter misses the demand and is not told as a fault",
    ),
    Metric(
        "undetected_dangerous_causes",
        "dangerous causes unnoticed",
        "number",
        "",
        "lower",
        "dangerous rows of the failure table that no diagnostic of the design reveals",
    ),
    Metric(
        "fault_band_coverage",
        "faults told as such",
        "ratio",
        "%",
        "higher",
        "least chance that a dead emitter or a stated fault is told by the fault bands or by what watches the emitter",
    ),
    Metric(
        "margin_at_end_of_life",
        "margin at end of life",
        "number",
        "",
        "higher",
        "margin in sigma with 70 % of the light left and the level where it was set when new",
    ),
    Metric(
        "response_time",
        "response time",
        "time",
        "ms",
        "lower",
        "longest time from a clear change to the confirmed decision",
    ),
    Metric(
        "release_time",
        "release time",
        "time",
        "ms",
        "lower",
        "longest time from the end of a clear change to the cleared decision",
    ),
    Metric(
        "slowest_touch",
        "slowest touch",
        "time",
        "s",
        "higher",
        "longest rise of a change that still reaches the level through the tracked baseline; slower ones are swallowed",
    ),
    Metric(
        "held_time",
        "time a touch is held",
        "time",
        "s",
        "higher",
        "time a resting object stays beyond the level until the tracked baseline has swallowed it",
    ),
)

CONTINUOUS: tuple[Metric, ...] = (
    Metric(
        "slope",
        "slope",
        "1/{kind}",
        "1/{unit}",
        "higher",
        "largest change of the relative reading with {label}",
    ),
    Metric(
        "best_bias",
        "best bias point",
        "{kind}",
        "{unit}",
        "none",
        "{label} at which the reading changes most",
    ),
    Metric(
        "resolution",
        "resolution",
        "{kind}",
        "{unit}",
        "lower",
        "noise over slope at the state that resolves least",
        "state",
    ),
    Metric(
        "best_resolution",
        "best resolution",
        "{kind}",
        "{unit}",
        "lower",
        "noise over slope at the best bias point",
    ),
    Metric(
        "resolution_density",
        "resolution per root bandwidth",
        "{kind}/rtHz",
        "{unit}/rtHz",
        "lower",
        "resolution at the best bias point divided by the square root of the noise bandwidth",
    ),
    Metric(
        "monotonic_span",
        "monotonic span",
        "{kind}",
        "{unit}",
        "higher",
        "range of {label} about the states over which one reading means one value",
    ),
)


def metrics_of(geometry: Geometry) -> Mapping[str, Metric]:
    """Every metric of a geometry by name: the common ones in the units of its read-out, then its own."""
    electrons = geometry.readout == "camera"
    found = {}
    for metric in COMMON:
        if electrons and metric.kind == "current":
            metric = replace(metric, kind="electrons", unit="e-")
        found[metric.name] = metric
    if geometry.measurand:
        found.update(_continuous(geometry))
    found.update({metric.name: metric for metric in geometry.metrics})
    return found


def _continuous(geometry: Geometry) -> dict[str, Metric]:
    leaf = next(leaf for leaf in leaves(geometry.Parameters) if leaf.path == geometry.measurand)
    words = {"unit": leaf.unit, "kind": leaf.kind, "label": leaf.path[-1].replace("_", " ")}
    return {metric.name: _worded(metric, words) for metric in CONTINUOUS}


def _worded(metric: Metric, words: Mapping[str, str]) -> Metric:
    """The metric for one measurand; where its own unit makes no derived unit (1/degC), the derived kind's own."""
    kind = kind_of(metric.kind.format(**words))
    unit = metric.unit.format(**words)
    return replace(
        metric, kind=kind.name, unit=unit if unit in kind.units else kind.unit, meaning=metric.meaning.format(**words)
    )
