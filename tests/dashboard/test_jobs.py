"""Jobs: progress, cancel, newest wins, and nobody sees another's."""

from __future__ import annotations

import time

import pytest

from outcouple_dashboard.jobs import Jobs

from .conftest import DEMOS

SLOW = (DEMOS / "force_cell.toml").read_text(encoding="utf-8")
AXES = ["gap.roughness from 10 nm to 60 nm in 200", "gap.tilt from 0 urad to 6 urad in 200"]
PATIENCE = 120


@pytest.fixture
def jobs():
    made = Jobs(1)
    yield made
    made.close()


def until(look):
    end = time.monotonic() + PATIENCE
    while not look():
        assert time.monotonic() < end, "waited in vain"
        time.sleep(0.02)


def test_a_job_reports_parts_and_ends(jobs, tank):
    job = jobs.start("me", "follow", text=tank)
    until(lambda: job.over)
    assert (job.state, job.why) == ("done", ())
    assert job.parts[0].curve is not None
    assert job.parts[-1].verdict == "pass"


def test_a_cancelled_job_frees_its_worker(jobs, tank):
    long = jobs.start("me", "vary", text=SLOW, axes=AXES, metric="best_resolution")
    until(lambda: long.state == "running")
    waiting = jobs.start("you", "follow", text=tank)
    assert jobs.cancel(long.number, "me")
    until(lambda: long.over and waiting.over)
    assert long.state == "cancelled"
    assert waiting.state == "done"
    assert not jobs.cancel(long.number, "me")


def test_the_newest_of_a_kind_takes_over(jobs, tank):
    old = jobs.start("me", "vary", text=SLOW, axes=AXES, metric="best_resolution")
    new = jobs.start("me", "vary", text=tank, axes=["prism.base from 6 mm to 9 mm in 3"], metric="worst_ratio")
    until(lambda: old.over and new.over)
    assert (old.state, new.state) == ("cancelled", "done")
    assert new.parts[-1].metrics["worst_ratio"].values.shape == (3,)
    assert jobs.current(old.number, "me") is None
    assert jobs.current(new.number, "me") is new


def test_nobody_touches_anothers_job(jobs):
    job = jobs.start("me", "vary", text=SLOW, axes=AXES, metric="best_resolution")
    assert jobs.find(job.number, "you") is None
    assert not jobs.cancel(job.number, "you")
    assert jobs.cancel(job.number, "me")


def test_a_mistake_is_told_and_the_worker_goes_on(jobs, tank):
    wrong = jobs.start("me", "vary", text=tank, axes=["prism.bse from 1 mm to 2 mm in 3"], metric="worst_ratio")
    until(lambda: wrong.over)
    assert wrong.state == "failed"
    assert "prism.bse: no such input" in wrong.why[0]
    right = jobs.start("me", "follow", text=tank)
    until(lambda: right.over)
    assert right.state == "done"
