"""A design file's text: its data, and the place of every key and value in it."""

from __future__ import annotations

import re
import tomllib
from bisect import bisect_right
from functools import cached_property
from typing import Any, Literal, NoReturn

from outcouple.design.toml_places import Places, places_of
from outcouple.errors import UserMistake
from outcouple.quantities import KINDS, parse

__all__ = ["TomlSource"]

Path = tuple[str, ...]

BARE_VALUE = re.compile(r"([\w.\"'-]+)\s*=\s*([+-]?[0-9.]+(?:,[0-9]+)?[^,}#=\n]*?)\s*(?=[,}#\n]|$)")
"""A value without quotes that begins like a number."""


class TomlSource:
    """The parsed data of a design file, and where everything stands.

    text, name  content and name of the file
    data        what tomllib reads

    Raises UserMistake ``name:line:column not TOML: ...`` for text that is not TOML. Places are looked for only when one
    is asked for, so a good file costs no more than parsing.
    """

    def __init__(self, text: str, name: str) -> None:
        self.text = text.removeprefix("\ufeff")
        self.name = name
        try:
            self.data: dict[str, Any] = tomllib.loads(self.text)
        except RecursionError:
            raise UserMistake(f"{name}: not TOML that can be read: nested too deeply") from None
        except ValueError as error:  # TOMLDecodeError, and Python's own limit on digits
            self._refuse(str(error))

    def position(self, path: Path, *, part: Literal["key", "value"] = "key") -> tuple[int, int]:
        """Line and column (from 1) of a key or of its value, or of the nearest table around a path that is not there.

        Rows of arrays count from 0: ("states", "1", "name").
        """
        for size in range(len(path), 0, -1):
            place = self._places.get(".".join(path[:size]))
            if place is not None:
                return self._line_column(place[part == "value" and size == len(path)])
        return (1, 1)

    def line_text(self, line: int) -> str:
        """The text of a line (from 1), empty past the end."""
        lines = self.text.splitlines()
        return lines[line - 1] if 0 < line <= len(lines) else ""

    @cached_property
    def _places(self) -> Places:
        return places_of(self.text)

    @cached_property
    def _starts(self) -> list[int]:
        return [0, *(match.end() for match in re.finditer("\n", self.text))]

    def _line_column(self, offset: int) -> tuple[int, int]:
        line = bisect_right(self._starts, offset)
        return (line, offset - self._starts[line - 1] + 1)

    def _refuse(self, message: str) -> NoReturn:
        found = re.search(r"\(at line (\d+), column (\d+)\)", message)
        line, column = (int(found[1]), int(found[2])) if found else self._line_column(len(self.text))
        said = re.sub(r"\s*\(at .*\)$", "", message)
        said = said[:1].lower() + said[1:]
        raise UserMistake(f"{self.name}:{line}:{column} not TOML: {said}{self._repair(line)}")

    def _repair(self, line: int) -> str:
        """The usual slip, a quantity without its quotes, with its repaired text."""
        for found in BARE_VALUE.finditer(self.line_text(line)):
            value = found[2].replace(",", ".")
            if not _reads(value, "number") and any(_reads(value, kind) for kind in KINDS):
                return f'; a quantity is written in quotes: {found[1]} = "{value}"'
        return ""


def _reads(text: str, kind: str) -> bool:
    try:
        parse(text, kind)
    except UserMistake:
        return False
    return True
