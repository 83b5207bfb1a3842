"""Contact presets: ordinary covers, ranges in order, limits, numbers of the trade, refusals."""

from __future__ import annotations

import numpy as np
import pytest

from outcouple.contact.media import Media
from outcouple.contact.response import answer
from outcouple.design import parse_design
from outcouple.errors import UserMistake
from outcouple.evaluation import evaluate_batch
from outcouple.evaluation.table import tabulate
from outcouple.hooks import build_host
from outcouple.touching import BUILT_IN

PLAIN = [preset for preset in BUILT_IN if preset.what != "patches"]
RANGED = ["fingertip", "wet-finger", "greasy-finger", "child-finger", "palm", "glove", "cloth", "gasket"]


@pytest.fixture(scope="module")
def host():
    return build_host()


def preset(host, what, **numbers):
    return host.touching[what].model_validate(numbers)


def taken(host, cover, degrees=(50.0, 55.0, 60.0, 66.0, 72.0), guide="PMMA"):
    """Mean share that a face takes of light at these angles from a PMMA guide, 850 nm."""
    media = Media(
        host.catalogue,
        wavelengths=np.array([[850e-9]]),
        temperature=np.array([293.15]),
        linewidth=np.array([40e-9]),
    )
    reply = answer(cover, guide, np.radians([degrees]), media, acceptance=np.array([np.radians(5)]))
    return float(np.mean(1 - (reply.Rs + reply.Rp) / 2))


def covers(host, what, **numbers):
    one = preset(host, what, **numbers)
    return type(one).build(one)


@pytest.mark.parametrize("kind", PLAIN, ids=lambda kind: kind.what)
def test_shares_of_every_cover_sum_to_one(host, kind):
    for cover in covers(host, kind.what).values():
        assert float(sum(np.asarray(patch.share) for patch in cover.patches)) == pytest.approx(1.0, abs=1e-12)
        assert all(np.all(np.asarray(patch.share) >= 0) for patch in cover.patches)
        assert all(np.all(np.asarray(patch.albedo) <= 1) for patch in cover.patches)


@pytest.mark.parametrize("what", RANGED)
def test_ranges_take_more_from_low_to_high(host, what):
    found = covers(host, what)
    assert list(found) == ["low", "mid", "high"]
    low, mid, high = (taken(host, found[level]) for level in found)
    assert 0 < low < mid < high < 1


@pytest.mark.parametrize(
    ("what", "numbers"),
    [
        ("fingertip", {"contact": "30 %", "skin": "epidermis mid"}),
        ("glove", {"contact": "25 %"}),
        ("gasket", {"contact": "60 %"}),
    ],
)
def test_numbers_of_a_user_end_the_range(host, what, numbers):
    assert list(covers(host, what, **numbers)) == [""]


def test_a_finger_of_full_contact_is_immersion_in_skin(host):
    full = covers(host, "fingertip", contact="100 %", skin="epidermis mid")[""]
    immersed = covers(host, "immersed", liquid="epidermis mid")[""]
    assert taken(host, full) == pytest.approx(taken(host, immersed), abs=1e-12)


@pytest.mark.parametrize(
    ("what", "numbers"),
    [
        ("droplets", {"coverage": "0 %"}),
        ("scratch", {"share": "0 %"}),
        ("ink", {"coverage": "0 %"}),
        ("deposit", {"coverage": "0 %"}),
        ("deposit", {"nature": "clear"}),
        ("ice", {"contact": "0 %"}),
        ("bubbles", {"share": "100 %"}),
        ("glove", {"contact": "0 %"}),
    ],
)
def test_no_contact_is_dry(host, what, numbers):
    """A clear flat film counts as well: beyond the guide's critical angle to air it changes nothing."""
    assert taken(host, covers(host, what, **numbers)[""]) == pytest.approx(0.0, abs=2e-3)


@pytest.mark.parametrize(
    ("what", "numbers", "like"),
    [("foam", {"gas_share": "50 %"}, "water"), ("bubbles", {"share": "0 %"}, "water"), ("milky", {}, "water")],
)
def test_full_contact_takes_what_the_liquid_takes(host, what, numbers, like):
    found = taken(host, covers(host, what, **numbers)[""])
    assert found == pytest.approx(taken(host, covers(host, "immersed", liquid=like)[""]), abs=1e-12)


def test_a_milky_liquid_sends_back_three_quarters():
    """mu_s' 10/cm and mu_a 0.1/cm: 0.76 by the formula of Flock et al. (1989) for matched indices."""
    (patch,) = build_host().touching["milky"].build(build_host().touching["milky"]())[""].patches
    assert float(patch.albedo) == pytest.approx(0.76, abs=0.02)


def test_skin_sends_back_more_inside_than_is_seen_in_air(host):
    """A reflectance of 0.55 in air is an albedo of about 0.70 inside (Saunderson 1942)."""
    patches = covers(host, "fingertip")["mid"].patches
    assert float(patches[0].albedo) == pytest.approx(0.70, abs=0.03)


def test_foam_wets_less_the_drier_it_is(host):
    """About a third of the wall at 99 % gas: H. M. Princen, A. D. Kiss, Langmuir 3, 36 (1987)."""
    dry = covers(host, "foam", gas_share="99 %")[""].patches[0].share
    assert float(dry) == pytest.approx(0.31, abs=0.01)


def test_an_elastomer_tip_touches_more_when_pressed_harder(host):
    shares = [float(covers(host, "elastomer-tip", force=f)[""].patches[0].share) for f in ("0.1 N", "1 N", "10 N")]
    assert 0 < shares[0] < shares[1] < shares[2] <= 1


def test_a_finger_settles(host):
    """Contact on a hard plate grows for some 20 s: B. Dzidek et al., PNAS 114, 10864 (2017)."""
    at = [taken(host, covers(host, "fingertip", time=t)["mid"]) for t in ("0.1 s", "5 s", "30 s")]
    assert at[0] < at[1] < at[2]


STATE = """
geometry = "prism-switch"
[[states]]
name = "dry"
expect = "absent"
[[states]]
name = "trial"
expect = "present"
touching = {text}
"""


@pytest.mark.parametrize("kind", PLAIN, ids=lambda kind: kind.what)
def test_every_contact_makes_states_of_a_design(kind):
    design = parse_design(STATE.replace("{text}", f'"{kind.what}"'))
    table = tabulate(design)
    trial = [row for row in table.rows if row.laid.state.family == "trial"]
    assert len(trial) in (1, 3)
    assert all(np.all(np.isfinite(row.reading.mean)) for row in trial)


@pytest.mark.parametrize(
    ("text", "path", "values"),
    [
        ('{ what = "milky" }', "scattering", [500.0, 1000.0, 4000.0]),
        ('{ what = "fingertip" }', "force", [0.1, 0.5, 5.0]),
        ('{ what = "elastomer-tip" }', "force", [0.1, 0.5, 5.0]),
        ('{ what = "wall" }', "distance", [0.001, 0.01, 0.1]),
        ('{ what = "foam" }', "gas_share", [0.5, 0.9, 0.99]),
    ],
)
def test_a_batch_is_its_samples(text, path, values):
    design = parse_design(STATE.replace("{text}", text))
    key = ("states", "trial", path)
    whole = evaluate_batch(design, {key: np.array(values)}, ["worst_ratio"])
    ratio = whole.metrics["worst_ratio"].values
    for at, value in enumerate(values):
        single = evaluate_batch(design, {key: np.array([value])}, ["worst_ratio"])
        assert single.metrics["worst_ratio"].values[0] == pytest.approx(ratio[at], rel=1e-9)


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ('"fingre"', "did you mean 'fingertip'"),
        ('{ what = "fingertip", forces = "1 N" }', "did you mean 'force'"),
        ('{ what = "fingertip", force = "1 kg" }', "is a mass; a force is wanted"),
        ('{ what = "milky", scattering = "-1 1/cm" }', "too small"),
        ('{ what = "glove", material = "nitril rubber" }', "did you mean 'nitrile rubber'"),
        ('{ what = "fingertip", skin = "bark" }', "unknown material"),
    ],
)
def test_refused_by_name(text, says):
    with pytest.raises(UserMistake, match=says):
        parse_design(STATE.replace("{text}", text))
