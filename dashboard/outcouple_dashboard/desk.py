"""What every callback works with: the folder, the plugins, and answers already computed.

Answers are kept by the text of the design, so that callbacks about the same document share one evaluation, and no
browser tab can see another's unless it already has the same text.
"""

from __future__ import annotations

import threading
from collections import OrderedDict
from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

from outcouple.design import Design, parse_design
from outcouple.evaluation import evaluate
from outcouple.hooks import Host
from outcouple.outcome import Outcome
from outcouple_dashboard.files import Folder
from outcouple_dashboard.jobs import Jobs

__all__ = ["Desk", "Kept"]


class Kept:
    """The last few answers by key; two callbacks that ask for the same at once compute it once."""

    def __init__(self, size: int) -> None:
        self._size = size
        self._lock = threading.Lock()
        self._found: OrderedDict[Any, Any] = OrderedDict()
        self._busy: dict[Any, threading.Lock] = {}

    def get(self, key: Any, make: Callable[[], Any]) -> Any:
        """The answer of a key, made if need be; what raises is not kept."""
        with self._lock:
            if key in self._found:
                self._found.move_to_end(key)
                return self._found[key]
            busy = self._busy.setdefault(key, threading.Lock())
        with busy:
            with self._lock:
                if key in self._found:
                    return self._found[key]
            try:
                made = make()
                self.put(key, made)
            finally:
                with self._lock:
                    self._busy.pop(key, None)
        return made

    def put(self, key: Any, value: Any) -> None:
        """Keep an answer that came from elsewhere."""
        with self._lock:
            self._found[key] = value
            self._found.move_to_end(key)
            while len(self._found) > self._size:
                self._found.popitem(last=False)

    def peek(self, key: Any) -> Any:
        """The answer of a key if it is there, else None."""
        with self._lock:
            return self._found.get(key)


@dataclass
class Desk:
    """Shared by all callbacks of one application."""

    folder: Folder
    host: Host
    jobs: Jobs
    _designs: Kept = field(default_factory=lambda: Kept(128))
    _quick: Kept = field(default_factory=lambda: Kept(128))
    whole: Kept = field(default_factory=lambda: Kept(64))
    """Outcomes with what background jobs found, by text."""
    complete: Kept = field(default_factory=lambda: Kept(64))
    """Texts of which nothing more is to come."""

    def design(self, text: str) -> Design:
        """The design of a text; UserMistake with every mistake and its place."""
        found: Design = self._designs.get(text, lambda: parse_design(text, file="design", host=self.host))
        return found

    def quick(self, text: str) -> Outcome:
        """Verdict, readings, drawings: what is there at once. Whatever a job found out since is included."""
        whole: Outcome | None = self.whole.peek(text)
        if whole is not None:
            return whole
        make = lambda: evaluate(self.design(text), advice=False, curve=False)  # noqa: E731
        found: Outcome = self._quick.get(text, make)
        return found
