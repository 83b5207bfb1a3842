"""Long work beside the page: a few worker processes, each job with progress, each cancelled at once.

Workers are processes, not threads: the page stays quick beside them, and a cancelled job frees its worker because the
process is ended and another takes its place. A new job of the same owner and task takes over from the one before.
"""

from __future__ import annotations

import itertools
import multiprocessing as mp
import threading
import time
from collections import OrderedDict
from dataclasses import dataclass, field
from multiprocessing.connection import Connection
from typing import Any, Literal

from outcouple_dashboard import work

__all__ = ["Job", "Jobs"]

State = Literal["waiting", "running", "done", "failed", "cancelled"]
KEPT = 100
"""Jobs that are remembered."""
LISTEN = 0.05
"""Seconds between looks at a running job."""


@dataclass
class Job:
    """One piece of work.

    owner   the browser tab it belongs to; nobody else can see or cancel it
    parts   what it has found so far, newest last; the last one is the whole answer when it is done
    why     sentences for the user where it failed
    replaced  True where a newer job of the same owner and task took over
    """

    number: str
    owner: str
    task: str
    arguments: dict[str, Any]
    state: State = "waiting"
    share: float = 0.0
    step: str = ""
    parts: list[Any] = field(default_factory=list)
    why: tuple[str, ...] = ()
    replaced: bool = False
    started: float = field(default_factory=time.monotonic)
    cancelled: threading.Event = field(default_factory=threading.Event)

    @property
    def over(self) -> bool:
        """True when nothing more will come."""
        return self.state in ("done", "failed", "cancelled")


class Jobs:
    """A registry of jobs and the workers that do them."""

    def __init__(self, workers: int = 2) -> None:
        methods = mp.get_all_start_methods()
        self._context = mp.get_context("forkserver" if "forkserver" in methods else "spawn")
        if "forkserver" in methods:
            self._context.set_forkserver_preload([work.__name__])
        self._workers = workers
        self._names = (f"{number}-{time.time_ns():x}" for number in itertools.count(1))
        self._jobs: OrderedDict[str, Job] = OrderedDict()
        self._ready = threading.Condition()
        self._closed = False
        self._threads: list[threading.Thread] = []

    def start(self, owner: str, task: str, **arguments: Any) -> Job:
        """Queue a job; what the same owner had of the same task before is cancelled."""
        job = Job(next(self._names), owner, task, arguments)
        with self._ready:
            for other in self._jobs.values():
                if other.owner == owner and other.task == task:
                    other.replaced = True
                    if not other.over:
                        self._cancel(other)
            self._jobs[job.number] = job
            self._forget()
            while len(self._threads) < self._workers:
                thread = threading.Thread(target=self._attend, name="outcouple-jobs", daemon=True)
                self._threads.append(thread)
                thread.start()
            self._ready.notify()
        return job

    def find(self, number: str | None, owner: str) -> Job | None:
        """The owner's job of that number."""
        job = self._jobs.get(number or "")
        return job if job is not None and job.owner == owner else None

    def current(self, number: str | None, owner: str) -> Job | None:
        """The owner's job of that number, None where a newer one took over: what it says no longer counts."""
        job = self.find(number, owner)
        return None if job is None or job.replaced else job

    def cancel(self, number: str | None, owner: str) -> bool:
        """Cancel the owner's job; False where there is none or it is over."""
        with self._ready:
            job = self.find(number, owner)
            if job is None or job.over:
                return False
            self._cancel(job)
            return True

    def close(self) -> None:
        """End all work; workers are gone when this returns."""
        with self._ready:
            self._closed = True
            for job in self._jobs.values():
                if not job.over:
                    self._cancel(job)
            self._ready.notify_all()
        for thread in self._threads:
            thread.join(timeout=10)

    def _cancel(self, job: Job) -> None:
        job.cancelled.set()
        if job.state == "waiting":
            job.state = "cancelled"

    def _forget(self) -> None:
        while len(self._jobs) > KEPT:
            number = next((name for name, job in self._jobs.items() if job.over), None)
            if number is None:
                return
            del self._jobs[number]

    def _next(self) -> Job | None:
        with self._ready:
            while not self._closed:
                for job in self._jobs.values():
                    if job.state == "waiting":
                        job.state = "running"
                        return job
                self._ready.wait()
        return None

    def _attend(self) -> None:
        """One worker's life: a process that is replaced whenever a job had to be cut off."""
        worker: _Worker | None = None
        while (job := self._next()) is not None:
            if worker is None or not worker.alive():
                worker = _Worker(self._context)
            if not worker.do(job):
                worker.end()
                worker = None
        if worker is not None:
            worker.end()


class _Worker:
    """A process that does one job after the other."""

    def __init__(self, context: Any) -> None:
        self._pipe, theirs = context.Pipe()
        self._process = context.Process(target=work.serve, args=(theirs,), daemon=True)
        self._process.start()
        theirs.close()

    def alive(self) -> bool:
        return bool(self._process.is_alive())

    def end(self) -> None:
        self._process.kill()
        self._process.join(5)
        self._pipe.close()

    def do(self, job: Job) -> bool:
        """Run a job to its end. False where the process cannot be used again."""
        pipe: Connection = self._pipe
        try:
            pipe.send((job.task, job.arguments))
            while not job.cancelled.is_set():
                if pipe.poll(LISTEN):
                    self._take(job, *pipe.recv())
                    if job.over:
                        return True
        except (EOFError, OSError):
            job.why = ("The work ended unexpectedly; it may have needed more memory than there is.",)
            job.state = "failed"
            return False
        job.state = "cancelled"
        return False

    @staticmethod
    def _take(job: Job, what: str, *news: Any) -> None:
        if what == "step":
            job.share, job.step = news
        elif what == "part":
            job.parts.append(news[0])
        elif what == "failed":
            job.why = tuple(news[0])
            job.state = "failed"
        else:
            job.share = 1.0
            job.state = "done"
