"""The mistakes a user can make, said so that they can be mended."""

from __future__ import annotations

import difflib
from collections.abc import Iterable

__all__ = ["UserMistake", "nearest"]


class UserMistake(Exception):
    """Something the user gave cannot be taken; every finding is one line of text.

    Commands print the lines and leave with exit code 2; nothing else in the project is reported without a
    traceback. ``lines`` holds one complete sentence per finding, so that all mistakes show in one go.
    """

    def __init__(self, *lines: str) -> None:
        super().__init__("\n".join(lines))
        self.lines: tuple[str, ...] = lines


def nearest(given: str, allowed: Iterable[str]) -> str:
    """A " (did you mean 'x'?)" for the nearest allowed name, or an empty text.

    >>> nearest("watr", ["water", "air"])
    " (did you mean 'water'?)"
    >>> nearest("zzz", ["water", "air"])
    ''
    """
    names = {name.lower(): name for name in allowed}
    found = difflib.get_close_matches(given.lower(), names, n=1, cutoff=0.6)
    return f" (did you mean {names[found[0]]!r}?)" if found else ""
