"""Materials by name."""

from __future__ import annotations

import json
import re
from collections.abc import Callable, Iterator, Mapping
from functools import cache
from importlib.resources import files
from typing import Any

from outcouple.errors import UserMistake, nearest
from outcouple.materials.material import Material
from outcouple.materials.rows import material_from_mapping

__all__ = ["Catalogue", "builtin_catalogue"]

Entry = Material | Mapping[str, Any]
FILES = ("solids", "liquids", "gases", "skin", "metals")


class Catalogue:
    """Materials by name and alias; capitals, hyphens and spaces do not matter.

    A catalogue does not change: ``with_materials`` gives a new one that looks in the old one for what it lacks. Rows
    become materials when they are first asked for. Solutions in water go by solute and mass share: "sugar 50 %",
    "50 % ethylene glycol", "sea water 3.5 %" (see ``solution_names``).
    """

    def __init__(self, entries: Mapping[str, Entry], beneath: Catalogue | None = None) -> None:
        self._entries = dict(entries)
        self._beneath = beneath
        self._found: dict[str, Material] = {}
        self._keys: dict[str, str] = {}
        for name, entry in self._entries.items():
            aliases = entry.aliases if isinstance(entry, Material) else entry.get("aliases", ())
            for text in (name, *aliases):
                self._keys[_key(text)] = name

    def lookup(self, name: str) -> Material:
        """The material of that name; UserMistake with the nearest name where there is none."""
        if name not in self._found:
            material = self._find(name)
            if material is None:
                raise UserMistake(": ".join((f"{name!r}", self.unknown(name)[0])))
            self._found[name] = material
        return self._found[name]

    def knows(self, name: object) -> bool:
        """True where ``lookup`` would answer."""
        return isinstance(name, str) and self._find(name) is not None

    def unknown(self, name: object) -> tuple[str, str]:
        """What to say about a name that is not known: message and hint."""
        from outcouple.materials.solution_names import named_problem

        problem = named_problem(name) if isinstance(name, str) else None
        if problem:
            return problem
        return f"unknown material{nearest(str(name), self._all_names())}", "outcouple list materials shows them all"

    def names(self) -> tuple[str, ...]:
        """Names of all materials, without aliases and solutions, sorted."""
        own = set(self._entries)
        return tuple(sorted(own | set(self._beneath.names()) if self._beneath else own, key=str.casefold))

    def __iter__(self) -> Iterator[Material]:
        return (self.lookup(name) for name in self.names())

    def with_materials(self, materials: Mapping[str, Entry]) -> Catalogue:
        """This catalogue and more: materials, or mappings as ``material_from_mapping`` takes them.

        A name that is known already hides the older material; ``based_on`` may name the older one. All mistakes are
        collected into one UserMistake.
        """
        above = Catalogue(materials, self)
        problems: list[str] = []
        for name in materials:
            try:
                above.lookup(name)
            except UserMistake as mistake:
                problems.extend(line for line in mistake.lines if line not in problems)
        if problems:
            raise UserMistake(*problems)
        return above

    def _find(self, name: str) -> Material | None:
        proper = self._keys.get(_key(name))
        if proper is None:
            return self._beneath._find(name) if self._beneath else self._solution(name)
        if proper not in self._found:
            entry = self._entries[proper]
            self._found[proper] = entry if isinstance(entry, Material) else self._build(proper, entry)
        return self._found[proper]

    def _build(self, name: str, row: Mapping[str, Any]) -> Material:
        return material_from_mapping(name, row, lookup=self._lookup_for(name, row))

    def _lookup_for(self, name: str, row: Mapping[str, Any]) -> Callable[[str], Material]:
        """Where ``based_on`` looks: the older catalogue for a material's own name, else here."""
        if _key(str(row.get("based_on", ""))) != _key(name):
            return self._lookup_above(name)
        return self._beneath.lookup if self._beneath else self._lookup_above(name)

    def _lookup_above(self, name: str) -> Callable[[str], Material]:
        def find(base: str) -> Material:
            seen, at = [name], base
            while (proper := self._keys.get(_key(at))) is not None:
                if proper in seen:
                    raise UserMistake(f"goes round in a circle: {', '.join([*seen, proper])}")
                seen.append(proper)
                entry = self._entries[proper]
                if isinstance(entry, Material) or "based_on" not in entry:
                    break
                at = str(entry["based_on"])
            return self.lookup(base)

        return find

    def _solution(self, name: str) -> Material | None:
        from outcouple.materials.solution_names import named_solution

        return named_solution(name, self.lookup)

    def _all_names(self) -> list[str]:
        own = [text for name in self._entries for text in (name, *_aliases(self._entries[name]))]
        return own + (self._beneath._all_names() if self._beneath else [])


def _aliases(entry: Entry) -> tuple[str, ...]:
    return tuple(entry.aliases if isinstance(entry, Material) else entry.get("aliases", ()))


def _key(text: str) -> str:
    return re.sub(r"[\s_-]+", " ", text.strip().casefold())


@cache
def builtin_catalogue() -> Catalogue:
    """The materials that come with the package, read on first use."""
    folder = files("outcouple") / "data" / "materials"
    entries: dict[str, Entry] = {}
    for stem in FILES:
        entries.update(json.loads((folder / f"{stem}.json").read_text(encoding="utf-8")))
    return Catalogue(entries)
