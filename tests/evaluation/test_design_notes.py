"""Cautions that a design sets off, and what decides instead of the tool."""

from __future__ import annotations

import pytest

from outcouple.decision import eye_safety
from outcouple.decision.service_media import ENVELOPE, SERVICE, cracking_notes, envelope_notes, service_of
from outcouple.evaluation import evaluate
from outcouple.materials import builtin_catalogue

from .tanks import DRY, WET, tank


def notes(**sections):
    return {note.code: note for note in evaluate(tank(**sections), advice=False, views=False).notes}


@pytest.mark.parametrize(
    ("sections", "code"),
    [
        ({"environment": {"explosive": "yes"}}, "explosive-atmosphere"),
        ({"states": [DRY, dict(WET, touching="diesel")]}, "explosive-atmosphere"),
        ({"states": [DRY, dict(WET, touching="ethanol 40 %")]}, "explosive-atmosphere"),
        ({"environment": {"service": "dust"}}, "explosive-atmosphere"),
        ({"environment": {"service": "food"}}, "food-contact"),
        ({"states": [DRY, dict(WET, touching="milk serum")]}, "food-contact"),
        ({"environment": {"service": "oxygen"}}, "oxygen-service"),
        ({"environment": {"overpressure": "6 bar"}}, "pressure"),
        ({"decision": {"demand": "high level"}}, "overfill"),
        ({"decision": {"demand": "leak"}}, "overfill"),
        ({"decision": {"demand": "low level"}}, "dry-run-light-loss"),
        ({"emitter": {"kind": "laser"}}, "eye-laser"),
        ({"emitter": {"power": "5 W"}}, "eye-cornea"),
        ({"environment": {"temperature": "170 degC"}}, "envelope-temperature"),
        ({"states": [DRY, dict(WET, touching="gasoline")]}, "stress-cracking"),
        ({"decision": {"level": "given", "share": "85 %"}}, "margin-ages-away"),
    ],
    ids=lambda value: value if isinstance(value, str) else "",
)
def test_triggers(sections, code):
    found = notes(**sections)
    assert code in found
    assert found[code].decides or code == "margin-ages-away"
    assert code not in notes() or code in ("overfill",)


def test_what_is_always_said():
    found = notes()
    assert found["estimate"].decides.endswith("licensed practice")
    assert "eye-infrared" in found
    assert "eye-cornea" not in found


def test_a_certified_limit_is_the_users_and_proves_nothing():
    under = notes(environment={"explosive": "yes", "optical_limit": "15 mW"})["explosive-atmosphere"]
    over = notes(environment={"explosive": "yes", "optical_limit": "5 mW"})["explosive-atmosphere"]
    unknown = notes(environment={"explosive": "yes"})["explosive-atmosphere"]
    assert "proves nothing" in under.text
    assert "exceeds the one you entered" in over.text
    assert "enter the certified one" in unknown.text
    assert {note.severity for note in (under, over, unknown)} == {"danger"}


def test_many_unconfirmed_inputs_are_told_beside_the_verdict():
    from outcouple.design import design_from_mapping
    from outcouple.hooks import build_host

    bare = design_from_mapping({"geometry": "prism-switch", "states": [DRY, WET]}, host=build_host())
    found = evaluate(bare, advice=False, views=False)
    assert "unverified-defaults" in [note.code for note in found.notes]
    assert set(found.defaults) == set(bare.unverified())


def test_a_ratio_does_not_age():
    aged = notes(decision={"level": "given", "share": "85 %"}, readout={"reference_channel": "yes"})
    assert "margin-ages-away" not in aged


def test_end_of_life_is_the_margin_at_seven_tenths_of_the_light():
    """The level stays where it was set when new; read by hand from a design at 70 % with that level given."""
    new = evaluate(tank(decision={"level": "given", "share": "40 %"}), advice=False, views=False)
    old = evaluate(
        tank(decision={"level": "given", "share": f"{100 * 0.4 / 0.7:.10f} %"}, emitter={"age_left": "70 %"}),
        advice=False,
        views=False,
    )
    noise = old.states[0].noise / new.states[0].noise
    expected = old.metrics["margin_sigma"].states["dry"] * noise
    assert new.metrics["margin_at_end_of_life"].states["dry"] == pytest.approx(expected, rel=1e-3)


def test_named_media_and_materials_are_in_the_catalogue():
    known = set(builtin_catalogue().names())
    assert set(ENVELOPE) <= known
    assert {name for names in SERVICE.values() for name in names} <= known


def test_service_by_media():
    assert service_of(["air", "water"]) == ()
    assert set(service_of(["liquid oxygen", "toluene"])) == {"oxygen", "solvent"}


def test_envelope_and_cracking_by_material():
    assert envelope_notes("PMMA", hottest=353.15) == ()
    assert envelope_notes("PMMA", hottest=363.15)[0].severity == "danger"
    assert envelope_notes("sapphire", hottest=700.0) == ()
    assert cracking_notes("fused silica", ["fuel"]) == ()


def test_a_narrow_lobe_is_brighter_on_its_axis():
    """All power in a cone of 10 degrees half-angle: P / (2 pi (1 - cos 10 deg)) per steradian for an even lobe."""
    got = eye_safety.axial_intensity(power=1.0, exponent=0.0, half_angle=0.17453293)
    assert float(got) == pytest.approx(1 / (2 * 3.14159265 * 0.0151922), rel=1e-5)


def test_retina_by_hand():
    """10 mW Lambertian from 3 mm: 3.18 mW/sr over 7.07 mm2 = 450 W/(m2 sr), weight 0.501 at 850 nm, against
    6300 / 0.015 = 420 000 W/(m2 sr)."""
    share = eye_safety.retinal_share(power=10e-3, size=3e-3, wavelength=850e-9)
    assert float(share) == pytest.approx(450.3 * 0.5012 / 420e3, rel=1e-3)
    assert "eye-retina" in [
        note.code for note in eye_safety.eye_notes(kind="led", wavelength=850e-9, power=50.0, size=3e-3)
    ]
