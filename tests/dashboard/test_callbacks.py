"""The page's callbacks as a browser calls them, without one."""

from __future__ import annotations

import json
import tomllib
from concurrent.futures import ThreadPoolExecutor
from urllib.parse import quote

import pytest

from outcouple_dashboard import create_app
from outcouple_dashboard.documents import document, from_link, link_of, with_text

from .calls import Calls
from .conftest import TANK


def field(path, kind="value"):
    return {"kind": kind, "path": path}


def key(id_, prop="value"):
    return f"{json.dumps(id_, sort_keys=True, separators=(',', ':'))}.{prop}"


def words(component):
    """All text of a drawn component."""
    if isinstance(component, dict):
        props = component.get("props", {})
        if "data-table" in props:
            return cells(json.loads(props["data-table"]))
        return " ".join(words(props[name]) for name in ("children", "value") if props.get(name) is not None)
    if isinstance(component, list):
        return " ".join(words(one) for one in component)
    return "" if component is None else str(component)


def cells(table):
    """All text of a table that the browser draws."""
    found = []
    for cell in (cell for row in table["rows"] for cell in row):
        if isinstance(cell, dict):
            found += [*(cell["mark"] or ())[:2], cell["text"]]
        else:
            found.append(str(cell))
    return " ".join(found)


def change(calls, doc, path, text, kind="value", prop="value"):
    id_ = field(path, kind)
    return calls.fire("doc.data", id_, prop, {"doc.data": doc, key(id_, prop): text})


def form(calls, doc):
    found = calls.fire("form.children", "form-key", "data", {"doc.data": doc, "form-key.data": {"key": 1}})
    return found["form.children"]


def start(calls, job):
    values = {"welcome-go.n_clicks": 1, "welcome-start.value": job}
    return calls.fire("doc.data", "welcome-go", "n_clicks", values)["doc.data"]


def opened(calls, name):
    id_ = {"kind": "open", "name": name}
    return calls.fire("doc.data", id_, "n_clicks", {key(id_, "n_clicks"): 1})


def screen(calls, doc, **more):
    return calls.fire("verdict.children", "doc", "data", {"doc.data": doc, "shown-states.value": [], **more})


def test_opening_a_file_gives_its_document(calls, tank):
    found = opened(calls, TANK)
    assert found["doc.data"]["text"] == tank
    assert found["doc.data"]["file"] == TANK
    assert found["shelf.opened"] is False


def test_a_changed_value_reaches_the_document_the_verdict_and_the_drawing(calls, tank):
    doc = document(tank)
    before = screen(calls, doc)
    assert "Pass" in words(before["verdict.children"])
    found = change(calls, doc, "prism/crosstalk", "30 %")
    new = found["doc.data"]
    assert tomllib.loads(new["text"])["prism"]["crosstalk"] == "30 %"
    assert new["origin"] == "control"
    assert "# Overfill switch" in new["text"]
    after = screen(calls, new)
    assert "Fail" in words(after["verdict.children"])
    assert "Crosstalk beside the faces" in words(after["verdict.children"])
    wide = change(calls, doc, "prism/base", "12 mm")["doc.data"]
    assert screen(calls, wide)["section.figure"] != before["section.figure"]


def test_a_bad_value_is_told_and_changes_nothing(calls, tank):
    found = change(calls, document(tank), "prism/base", "-3 mm")
    assert "doc.data" not in found
    message = found[key(field("prism/base"), "error")]
    assert message.startswith("too small (1 to 60 mm")
    assert message.endswith("Everything shown keeps 8 mm.")


JUNK = ["", "   ", "NaN", "1e999 mm", "8 mm; drop", "µ" * 500, "8\nmm", "'\"", "[[states]]", "∞ mm"]
INPUTS = ["prism/base", "prism/material", "decision/demand", "readout/bits", "states/1/touching"]


@pytest.mark.parametrize("junk", JUNK)
@pytest.mark.parametrize("path", INPUTS)
def test_no_junk_stops_the_page(calls, tank, path, junk):
    doc = document(tank)
    found = change(calls, doc, path, junk)
    new = found.get("doc.data", doc)
    assert "verdict.children" in screen(calls, new)


def test_slider_field_and_back_to_file_follow_each_other(calls, tank):
    doc = document(tank)
    found = change(calls, doc, "prism/base", 500, kind="slider")
    new = found["doc.data"]
    text = tomllib.loads(new["text"])["prism"]["base"]
    assert found[key(field("prism/base"))] == text == "30.5 mm"
    assert found[key(field("prism/base", "back"), "hidden")] is False
    found = change(calls, new, "prism/base", 1, kind="back", prop="n_clicks")
    assert found["doc.data"]["text"] == tank
    assert found[key(field("prism/base"))] == "8 mm"
    assert found[key(field("prism/base", "back"), "hidden")] is True


def test_a_form_drawn_anew_changes_nothing(calls, tank):
    assert "doc.data" not in change(calls, document(tank), "prism/base", "8 mm")
    assert "doc.data" not in change(calls, document(tank), "states/2/touching", "heating oil")


def test_states_are_added_and_the_form_follows(calls, tank):
    doc = document(tank)
    new = calls.fire("doc.data", "state-add", "n_clicks", {"doc.data": doc, "state-add.n_clicks": 1})["doc.data"]
    assert tomllib.loads(new["text"])["states"][-1]["name"] == "state 1"
    assert "state 1 · wet" in words(form(calls, new))


def test_a_file_with_mistakes_says_where(calls, tank):
    doc = document(tank.replace('base = "8 mm"', 'base = "8"'))
    told = words(screen(calls, doc)["verdict.children"])
    assert "Not readable" in told
    assert 'unit missing; write "8 mm"' in told


def test_the_rest_of_the_page_draws_every_part(calls, tank):
    found = calls.fire("advice.children", "doc", "data", {"doc.data": document(tank), "tab.data": "me"})
    assert "Danger" in words(found["cautions.children"])
    assert "explosive" in words(found["cautions.children"])
    told = words(found["failures.children"])
    assert "▲ dangerous" in told
    assert "◆ spurious" in told
    assert "dry angle margin" in words(found["requirements.children"])
    graphs = ("readings", "ledger", "noise")
    for name in graphs:
        assert found[f"{name}-graph.figure"]["data"]
        assert found[f"{name}-graph.style"]["height"].endswith("px")


def test_a_requirement_that_waits_for_a_map_reads_open(calls):
    from .conftest import DEMOS

    doc = document((DEMOS / "theatre_console.toml").read_text(encoding="utf-8"))
    told = words(screen(calls, doc)["verdict.children"])
    assert "Open" in told
    rest = calls.fire("advice.children", "doc", "data", {"doc.data": doc, "tab.data": "me"})
    assert "◇ open" in words(rest["requirements.children"])


def test_save_save_as_and_conflict(calls, folder, tank):
    doc = change(calls, opened(calls, TANK)["doc.data"], "prism/base", "9 mm")["doc.data"]
    saved = calls.fire("doc.data", "save", "n_clicks", {"doc.data": doc, "save.n_clicks": 1})["doc.data"]
    assert (folder / TANK).read_text() == tank.replace('base = "8 mm"', 'base = "9 mm"')
    assert saved["saved"] == saved["text"]
    (folder / TANK).write_text("theirs")
    found = calls.fire("doc.data", "save", "n_clicks", {"doc.data": saved, "save.n_clicks": 2})
    assert "doc.data" not in found
    assert "was changed by somebody else" in found["message.children"]
    assert found["save-name.value"] == "oil_tank_overfill-2.toml"
    name = {"doc.data": saved, "save-as.n_clicks": 1, "save-name.value": "mine"}
    assert calls.fire("doc.data", "save-as", "n_clicks", name)["doc.data"]["file"] == "mine.toml"
    outside = {"doc.data": saved, "save-as.n_clicks": 2, "save-name.value": "../mine"}
    assert "message.children" in calls.fire("doc.data", "save-as", "n_clicks", outside)
    assert not (folder.parent / "mine.toml").exists()


@pytest.mark.parametrize(
    ("uploaded", "told"),
    [({"error": "too long"}, "too long"), ({"text": "x" * 300_000}, "too long")],
)
def test_uploads_are_refused_in_words(calls, uploaded, told):
    found = calls.fire("doc.data", "uploaded", "data", {"uploaded.data": uploaded})
    assert "doc.data" not in found
    assert told in found["message.children"]


def test_an_upload_opens(calls, tank):
    found = calls.fire("doc.data", "uploaded", "data", {"uploaded.data": {"text": tank}})
    assert found["doc.data"]["file"] == ""


def test_a_start_from_a_job(calls):
    doc = start(calls, "overfill")
    assert 'geometry = "prism-switch"' in doc["text"]
    assert "verdict-word" in json.dumps(screen(calls, doc))


def test_a_link_opens_and_a_damaged_one_is_told(calls, tank):
    doc = with_text(document(tank, file=TANK), tank.replace("8 mm", "9 mm"), origin="control")
    found = calls.fire("doc.data", "url", "search", {"url.search": f"?d={link_of(doc)}"})
    assert found["doc.data"]["text"] == doc["text"]
    found = calls.fire("doc.data", "url", "search", {"url.search": "?d=nonsense"})
    assert "This link is damaged" in found["message.children"]
    link = calls.fire("link.data", "doc", "data", {"doc.data": doc, "pins.data": []})["link.data"]
    assert from_link(link)[0]["text"] == doc["text"]


def test_a_callback_that_fails_says_so_and_the_page_goes_on(calls, tank):
    found = calls.fire("verdict.children", "doc", "data", {"doc.data": {"text": 5}, "shown-states.value": []})
    assert "Something went wrong here" in found["message.children"]
    assert "verdict.children" in screen(calls, document(tank))


def test_twenty_users_at_once_do_not_mix(app, tank):
    def visit(number):
        calls, base = Calls(app), f"{6 + number / 10:.1f} mm"
        new = change(calls, document(tank), "prism/base", base)["doc.data"]
        figure = screen(calls, new, **{"tab.data": f"user {number}"})["section.figure"]
        widest = max(x for trace in figure["data"] for x in trace["x"] if x)
        return base, tomllib.loads(new["text"])["prism"]["base"], widest

    with ThreadPoolExecutor(20) as pool:
        found = list(pool.map(visit, range(20)))
    for base, written, widest in found:
        assert written == base
        assert widest == pytest.approx(float(base.split()[0]) / 2)


def test_a_strangers_sensor_and_views_need_no_line_here(folder, stranger):
    app = create_app(folder)
    calls = Calls(app)
    doc = start(calls, "flood")
    assert 'geometry = "slope-window"' in doc["text"]
    assert "angle of incidence at the wetted face" in json.dumps(form(calls, doc))
    assert "Pass" in words(screen(calls, doc)["verdict.children"])
    steep = change(calls, doc, "window/slope", "75 deg")["doc.data"]
    assert "Fail" in words(screen(calls, steep)["verdict.children"])
    rest = calls.fire("advice.children", "doc", "data", {"doc.data": doc, "tab.data": "me"})
    assert "Tally of states" in words(rest["views.children"])
    assert "This view of a plugin failed: RuntimeError: out of ink" in words(rest["views.children"])
    job = app.desk.jobs.start("me", "follow", text=doc["text"])
    while not job.over:
        job.cancelled.wait(0.02)
    assert (job.state, job.why) == ("done", ())
    app.desk.jobs.close()


def test_a_fold_is_filled_when_it_is_opened(calls, tank):
    doc, id_ = document(tank), field("section/layout", "fold")
    found = calls.fire("folds.data", id_, "n_clicks", {"doc.data": doc, "folds.data": [], key(id_, "n_clicks"): 1})
    assert found["folds.data"] == ["section/layout"]
    inside = field("section/layout", "folded")
    assert "detector position" in json.dumps(found[key(inside, "children")])
    assert found[key(inside, "hidden")] is False
    values = {"doc.data": doc, "folds.data": ["section/layout"], key(id_, "n_clicks"): 2}
    found = calls.fire("folds.data", id_, "n_clicks", values)
    assert found["folds.data"] == []
    assert found[key(inside, "children")] == []


def test_a_link_to_a_sweep_brings_it_back(calls, tank):
    setup = json.dumps(["prism.crosstalk", "1 %", "60 %", "", "", "", "worst_ratio"])
    found = calls.fire("doc.data", "url", "search", {"url.search": f"?d={link_of(document(tank))}&v={quote(setup)}"})
    asked = found["vary-asked.data"]
    page = {"doc-vary.data": found["doc.data"], "vary-asked.data": asked}
    chosen = calls.fire("vary-x.value", "doc-vary", "data", page)
    assert (chosen["vary-x.value"], chosen["vary-metric.value"]) == ("prism.crosstalk", "worst_ratio")
    page = {"doc.data": found["doc.data"], "vary-x.value": "prism.crosstalk", "vary-asked.data": asked}
    ends = calls.fire("vary-x-from.value", "vary-x", "value", page)
    assert (ends["vary-x-from.value"], ends["vary-x-to.value"]) == ("1 %", "60 %")
    damaged = calls.fire("doc.data", "url", "search", {"url.search": f"?d={link_of(document(tank))}&v=[[["})
    assert damaged["vary-asked.data"] == {}


def test_late_words_of_an_older_job_change_nothing(app, calls, tank):
    tab = {"tab.data": "me"}
    old = calls.fire("follow-job.data", "doc", "data", {"doc.data": document(tank), **tab})["follow-job.data"]
    doc = document(tank.replace('base = "8 mm"', 'base = "9 mm"'))
    new = calls.fire("follow-job.data", "doc", "data", {"doc.data": doc, **tab})["follow-job.data"]
    late = {"follow-clock.n_intervals": 1, "follow-job.data": old, **tab}
    assert "followed.data" not in calls.fire("followed.data", "follow-clock", "n_intervals", late)
    job = app.desk.jobs.find(new, "me")
    while not job.over:
        job.cancelled.wait(0.02)
    told = calls.fire("followed.data", "follow-clock", "n_intervals", {**late, "follow-job.data": new})
    assert told["followed.data"] == [new, 2, True]
    foreign = {**late, "follow-job.data": new, "tab.data": "somebody else"}
    assert "followed.data" not in calls.fire("followed.data", "follow-clock", "n_intervals", foreign)
