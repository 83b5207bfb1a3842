"""Where keys and values stand in a TOML text that is known to be valid."""

from __future__ import annotations

import re

__all__ = ["Places", "places_of"]

Path = tuple[str, ...]
Places = dict[str, tuple[int, int]]
"""Dotted path -> offsets of the key and of its value. A quoted key with dots in it reads like the dotted path it
spells, which is how a design file means it."""

SPACE = re.compile(r"(?:[ \t\r\n]+|#[^\n]*)*")
BLANK = re.compile(r"[ \t]*")
BARE = re.compile(r"[A-Za-z0-9_-]+")
# long strings first; a quote that ends a long string may be followed by one or two that belong to it
STRING = re.compile(
    r'"""(?:[^\\]|\\.)*?"{3,5}|\'\'\'.*?\'{3,5}|"(?:[^"\\\n]|\\.)*"|\'[^\'\n]*\'',
    re.DOTALL,
)
PLAIN = re.compile(r"[^,\]}#\n]+")


def places_of(text: str) -> Places:
    """The place of every table, key and element of an array."""
    return _Scanner(text).run()


class _Scanner:
    def __init__(self, text: str) -> None:
        self.text = text
        self.at = 0
        self.places: Places = {}
        self.rows: dict[Path, int] = {}

    def run(self) -> Places:
        table: Path = ()
        self._skip(SPACE)
        while self.at < len(self.text):
            if self.text[self.at] == "[":
                table = self._header()
            else:
                self._pair(table)
            self._skip(SPACE)
        return self.places

    def _skip(self, pattern: re.Pattern[str]) -> None:
        found = pattern.match(self.text, self.at)
        if found is not None:
            self.at = found.end()

    def _note(self, path: Path, key: int, value: int) -> None:
        self.places.setdefault(".".join(path), (key, value))

    def _header(self) -> Path:
        """``[a.b]`` or ``[[a.b]]``: the path of the table, with the running row of every array of tables on it."""
        start = self.at
        is_row = self.text.startswith("[[", start)
        self.at += 2 if is_row else 1
        keys = self._keys()
        self.at = self.text.index("]", self.at) + (2 if is_row else 1)
        path: Path = ()
        for at, (key, _) in enumerate(keys):
            path = (*path, key)
            if is_row and at == len(keys) - 1:
                self._note(path, start, start)
                self.rows[path] = self.rows.get(path, -1) + 1
            if path in self.rows:
                path = (*path, str(self.rows[path]))
        self._note(path, start, start)
        return path

    def _keys(self) -> list[tuple[str, int]]:
        """The parts of a dotted key, each with its offset."""
        parts: list[tuple[str, int]] = []
        while True:
            self._skip(BLANK)
            start = self.at
            quoted = self.text[start] in "\"'"
            self._skip(STRING if quoted else BARE)
            word = self.text[start : self.at]
            parts.append((word[1:-1] if quoted else word, start))
            self._skip(BLANK)
            if self.text[self.at] != ".":
                return parts
            self.at += 1

    def _pair(self, table: Path) -> None:
        keys = self._keys()
        self.at += 1  # the equals sign
        self._skip(BLANK)
        path = table
        for key, start in keys:
            path = (*path, key)
            self._note(path, start, self.at)
        self._value(path)

    def _value(self, path: Path) -> None:
        mark = self.text[self.at]
        if mark == "[":
            self._elements(path)
        elif mark == "{":
            self._inline(path)
        else:
            self._skip(STRING if mark in "\"'" else PLAIN)

    def _elements(self, path: Path) -> None:
        self.at += 1
        row = 0
        self._skip(SPACE)
        while self.text[self.at] != "]":
            inner = (*path, str(row))
            self._note(inner, self.at, self.at)
            self._value(inner)
            row += 1
            self._next()
        self.at += 1

    def _inline(self, path: Path) -> None:
        self.at += 1
        self._skip(SPACE)
        while self.text[self.at] != "}":
            self._pair(path)
            self._next()
        self.at += 1

    def _next(self) -> None:
        """Past a comma, where there is one, and the space around it."""
        self._skip(SPACE)
        if self.text[self.at] == ",":
            self.at += 1
            self._skip(SPACE)
