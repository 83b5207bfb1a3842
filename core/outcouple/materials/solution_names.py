"""Names of solutions as a design file writes them: "sugar 50 %", "50 % ethylene glycol", "sea water 3.5 %".

Per cent are by mass, after or before the solute; "in water" or "mix" behind it is allowed.
"""

from __future__ import annotations

import re

import numpy as np

from outcouple.errors import nearest
from outcouple.materials.material import Absorption, Material
from outcouple.materials.solutes import SOLUTES, Lookup, Solute, find_solute, is_solute

__all__ = ["named_problem", "named_solution"]

NAME = re.compile(r"(?:(?P<before>[^%]*[^%\s])\s+)?(?P<share>\d+(?:\.\d+)?)\s*%\s*(?P<after>[^\d%]*)")
TRAILING = re.compile(r"\s*(in water|/ ?water|mix(ture)?|solution|by mass)$")


def named_solution(name: str, lookup: Lookup) -> Material | None:
    """The solution a name means, or None."""
    parsed = _parse(name)
    if parsed is None or named_problem(name) is not None:
        return None
    solute, share = find_solute(parsed[0]), parsed[1]
    return Material(
        name=f"{solute.name} {share * 100:.6g} %",
        kind="liquid",
        summary=f"{share * 100:.6g} % by mass of {solute.name} in water",
        source=solute.source,
        verified=solute.verified,
        real=lambda across, warm: solute.index(np.asarray(share), across, warm, lookup),
        wavelength_range=solute.wavelength_range,
        temperature_range=solute.temperature_range,
        uncertainty=solute.uncertainty,
        absorbs=_absorption(solute, share, lookup),
    )


def named_problem(name: str) -> tuple[str, str] | None:
    """Message and hint where a name looks like a solution but cannot be one; None otherwise."""
    parsed = _parse(name)
    if parsed is None:
        return None
    text, share = parsed
    if not is_solute(text):
        known = [one.name for one in SOLUTES]
        return f"no table of {text!r} in water{nearest(text, known)}", f"solutes: {', '.join(known)}"
    low, high = find_solute(text).limits
    if low <= share <= high:
        return None
    return f"{text} in water is known from {low * 100:.4g} to {high * 100:.4g} %", "per cent are by mass"


def _parse(name: str) -> tuple[str, float] | None:
    """Text of the solute and mass share."""
    match = NAME.fullmatch(name.strip())
    if match is None:
        return None
    text = f"{match['before'] or ''} {match['after'] or ''}".strip()
    for candidate in (text, TRAILING.sub("", text)):
        if is_solute(candidate):
            return candidate, float(match["share"]) / 100
    return text, float(match["share"]) / 100


def _absorption(solute: Solute, share: float, lookup: Lookup) -> Absorption | None:
    """That of the parts by mass share; solids dissolved are taken as clear."""
    water = lookup("water").absorbs
    if water is None:
        return None
    values = (1 - share) * water.values
    if solute.liquid:
        values = values + share * lookup(solute.liquid).absorption(water.wavelengths)
    return Absorption(water.wavelengths, values, f"by mass share, water's from {water.source}")
