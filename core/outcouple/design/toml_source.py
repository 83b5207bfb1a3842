"""A design file's text with the place of everything in it."""

from __future__ import annotations

import re
import tomllib
from functools import cached_property
from typing import Any

from outcouple.errors import UserMistake

__all__ = ["TomlSource"]

Path = tuple[str, ...]

HEADER = re.compile(r"\s*(\[\[?)\s*([^\]]+?)\s*\]\]?\s*(#.*)?$")
KEY = re.compile(
    r"\s*((?:\"[^\"]*\"|'[^']*'|[A-Za-z0-9_-]+)(?:\s*\.\s*(?:\"[^\"]*\"|'[^']*'|[A-Za-z0-9_-]+))*)\s*=\s*"
)
PART = re.compile(r"\"([^\"]*)\"|'([^']*)'|([A-Za-z0-9_-]+)")
INLINE = re.compile(
    r"(?<=[{,])\s*((?:\"[^\"]*\"|'[^']*'|[A-Za-z0-9_-]+)(?:\s*\.\s*(?:\"[^\"]*\"|[A-Za-z0-9_-]+))*)\s*=\s*"
)


class TomlSource:
    """Parsed data and places. Raises UserMistake ``file:line:column: ...`` for text that is not TOML.

    Places are found line by line: tables, arrays of tables, dotted and quoted keys, and keys of inline tables written on
    one line. A path that is not in the file takes the place of the nearest table around it.
    """

    def __init__(self, text: str, name: str) -> None:
        self.text = text
        self.name = name
        try:
            self.data: dict[str, Any] = tomllib.loads(text)
        except tomllib.TOMLDecodeError as error:
            raise UserMistake(self._syntax(str(error))) from None

    def _syntax(self, message: str) -> str:
        found = re.search(r"\(at line (\d+), column (\d+)\)", message)
        plain = re.sub(r"\s*\(at .*\)", "", message)
        if found:
            return f"{self.name}:{found[1]}:{found[2]}: not TOML: {plain[:1].lower()}{plain[1:]}"
        lines = self.text.count("\n") + 1
        return f"{self.name}:{lines}:1: not TOML: {plain[:1].lower()}{plain[1:]}"

    def position(self, path: Path) -> tuple[int, int]:
        """Line and column (from 1) of a key, or of the nearest table around it."""
        for size in range(len(path), 0, -1):
            if path[:size] in self._places:
                return self._places[path[:size]]
        return (1, 1)

    @cached_property
    def _places(self) -> dict[Path, tuple[int, int]]:
        places: dict[Path, tuple[int, int]] = {}
        counts: dict[Path, int] = {}
        table: Path = ()
        for number, line in enumerate(self.text.split("\n"), 1):
            header = HEADER.match(line)
            if header:
                table = self._table(_parts(header[2]), header[1] == "[[", counts)
                places.setdefault(table, (number, line.index("[") + 1))
                continue
            key = KEY.match(line)
            if key:
                path = (*table, *_parts(key[1]))
                self._add(places, path, table, number, key.start(1) + 1)
                self._inline(places, path, line, key.end(), number)
        return places

    @staticmethod
    def _table(parts: Path, array: bool, counts: dict[Path, int]) -> Path:
        """The path of a header with the index of the running element of every array of tables on it."""
        path: Path = ()
        for at, part in enumerate(parts):
            path = (*path, part)
            last = at == len(parts) - 1
            if last and array:
                counts[path] = counts.get(path, -1) + 1
            if path in counts:
                path = (*path, str(counts[path]))
        return path

    @staticmethod
    def _add(places: dict[Path, tuple[int, int]], path: Path, table: Path, line: int, column: int) -> None:
        for size in range(len(table) + 1, len(path) + 1):
            places.setdefault(path[:size], (line, column))

    @staticmethod
    def _inline(places: dict[Path, tuple[int, int]], path: Path, line: str, start: int, number: int) -> None:
        if start < len(line) and line[start] in "{[":
            for found in INLINE.finditer(line, start):
                places.setdefault((*path, *_parts(found[1])), (number, found.start(1) + 1))


def _parts(dotted: str) -> Path:
    return tuple(
        next(group for group in match if group is not None)
        for match in (m.groups() for m in PART.finditer(dotted))
    )
