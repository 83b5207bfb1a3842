"""Changes to the text of a design file: one value at a time, everything else (comments, order) left as it stands."""

from __future__ import annotations

from collections.abc import Mapping, MutableMapping
from typing import Any

import tomlkit

from outcouple.fields import Leaf
from outcouple.quantities import format_number, parse

__all__ = ["file_value", "get_value", "set_value"]

Path = tuple[str, ...]


def get_value(data: Any, path: Path) -> Any:
    """What stands at a path of parsed TOML (rows of arrays by number), None where nothing does."""
    here = data
    for key in path:
        if isinstance(here, Mapping):
            here = here.get(key)
        elif isinstance(here, list) and key.isdigit() and int(key) < len(here):
            here = here[int(key)]
        else:
            return None
    return here


def set_value(text: str, path: Path, value: Any) -> str:
    """The text with a value set, or taken out where ``value`` is None; missing tables are added.

    A contact written as a name becomes a table when one of its numbers is set.
    """
    document = tomlkit.parse(text)
    if value is None:
        _remove(document, path)
    else:
        _put(document, path, value)
    return tomlkit.dumps(document)


def _remove(document: Any, path: Path) -> None:
    table = get_value(document, path[:-1])
    if isinstance(table, MutableMapping) and path[-1] in table:
        del table[path[-1]]


def _put(document: Any, path: Path, value: Any) -> None:
    here = document
    for at, key in enumerate(path[:-1]):
        inner = here[int(key)] if isinstance(here, list) else here.get(key)
        if isinstance(inner, str):  # touching = "film" becomes touching = { what = "film" }
            inner = None
            here[key] = _named(str(here[key]))
        if inner is None and key not in here:
            here[key] = tomlkit.table() if at == 0 else tomlkit.inline_table()
        here = here[int(key)] if isinstance(here, list) else here[key]
    old = here.get(path[-1]) if isinstance(here, Mapping) else None
    fresh = tomlkit.item(value)
    if old is not None and hasattr(old, "trivia") and hasattr(fresh, "trivia"):
        fresh.trivia.comment_ws, fresh.trivia.comment = old.trivia.comment_ws, old.trivia.comment
        fresh.trivia.trail = old.trivia.trail
    here[path[-1]] = fresh


def _named(what: str) -> Any:
    table = tomlkit.inline_table()
    table["what"] = what
    return table


def file_value(leaf: Leaf, text: str) -> Any:
    """What a file holds for the text of a control: the text itself, a number where the leaf has no unit, a flag.

    A number that does not read is left as text; the design's own check says what is wrong with it.
    """
    text = text.strip()
    if leaf.what == "flag":
        return {"true": True, "false": False}.get(text.lower(), text)
    if leaf.what == "count" or (leaf.what == "quantity" and not leaf.unit):
        try:
            number = parse(text, leaf.kind or "number")
        except Exception:
            return text
        return int(number) if leaf.what == "count" and number == int(number) else float(format_number(number, 12))
    return text
