"""The lists and tables of a design file: states, requirements, tolerances, materials."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any

from pydantic import ValidationError

from outcouple.design.design import Path, Tolerance
from outcouple.design.problems import Problem, collect
from outcouple.design.states import ObjectPlace, Requirement, State
from outcouple.errors import UserMistake, nearest
from outcouple.fields import Leaf, Section, leaves, parse_leaf
from outcouple.geometry import Geometry
from outcouple.hooks import Host
from outcouple.materials import Catalogue
from outcouple.metrics import metrics_of
from outcouple.quantities import parse
from outcouple.touching import Touching

__all__ = ["Parts", "read_requirements", "read_states", "read_tolerances"]

STATE_KEYS = ("name", "expect", "touching", "faces", "object", "set", "role", "describe")
REQUIREMENT_KEYS = ("metric", "at_least", "at_most", "state", "over", "area", "share", "describe")
TOLERANCE_KEYS = ("plus_minus", "low", "high", "distribution", "group")


@dataclass
class Parts:
    """What the readers share."""

    geometry: Geometry
    host: Host
    catalogue: Catalogue
    sections: Section | None
    problems: list[Problem]

    def wrong(self, path: Path, given: Any, message: str, hint: str = "") -> None:
        """Note a mistake."""
        self.problems.append(Problem(path, given, message, hint))

    def unknown_keys(self, table: Mapping[str, Any], allowed: Iterable[str], path: Path) -> None:
        """Note every key that is not allowed."""
        allowed = list(allowed)
        for key in table:
            if key not in allowed:
                self.wrong(
                    (*path, key),
                    None,
                    f"unknown key{nearest(key, allowed)}",
                    f"allowed: {', '.join(allowed)}",
                )

    @property
    def leaves(self) -> Mapping[Path, Leaf]:
        """Every leaf of the design's sections by path."""
        from outcouple.design.load import design_model

        return {leaf.path: leaf for leaf in leaves(design_model(type(self.geometry)))}


def read_states(given: Any, parts: Parts) -> tuple[State, ...]:
    """The states, contacts known as ranges expanded to low, mid and high."""
    if given is None:
        given = [{"name": parts.geometry.words[0], "expect": "absent", "touching": "dry"}]
    if not isinstance(given, list) or not all(isinstance(row, Mapping) for row in given):
        parts.wrong(("states",), given, "states are written as [[states]] tables", "")
        return ()
    found: list[State] = []
    seen: set[str] = set()
    for at, row in enumerate(given):
        path = ("states", str(at))
        name = row.get("name")
        if not isinstance(name, str) or not name:
            parts.wrong(path, name, "a state needs a name", 'write name = "dry"')
            continue
        if name in seen:
            parts.wrong((*path, "name"), name, "there is another state of this name", "names of states must differ")
        seen.add(name)
        found.extend(_state(row, name, path, parts))
    return tuple(found)


def _state(row: Mapping[str, Any], name: str, path: Path, parts: Parts) -> list[State]:
    parts.unknown_keys(row, STATE_KEYS, path)
    expect = _expect(row.get("expect"), (*path, "expect"), parts)
    touching = _faces(row, path, parts)
    changes = _changes(row.get("set", {}), (*path, "set"), parts)
    if isinstance(expect, float):
        changes = {parts.geometry.measurand: expect, **changes}
    thing = None
    if "object" in row and not parts.geometry.spot_face:
        parts.wrong((*path, "object"), None, f"objects have no place on a {parts.geometry.name}", "leave it out")
    elif "object" in row:
        try:
            thing = ObjectPlace.model_validate(row["object"])
        except ValidationError as error:
            parts.problems.extend(collect(error, ObjectPlace, (*path, "object")))
    role = row.get("role", "normal")
    if role not in ("normal", "fault"):
        parts.wrong((*path, "role"), role, "unknown role", 'one of: "normal", "fault"')
    levels = _levels(touching.values())
    return [
        State(
            name=f"{name} ({level})" if level else name,
            family=name,
            expect=expect,
            touching=touching,
            level=level,
            object=thing,
            changes=changes,
            role="fault" if role == "fault" else "normal",
            describe=str(row.get("describe", "")),
        )
        for level in levels
    ]


def _levels(presets: Iterable[Touching]) -> tuple[str, ...]:
    """The levels a state stands for: those of the first preset that is known as a range."""
    for preset in presets:
        found = tuple(type(preset).build(preset))
        if found != ("",):
            return found
    return ("",)


def _expect(given: Any, path: Path, parts: Parts) -> str | float:
    measurand = parts.geometry.measurand
    number = f" or a quantity for {'.'.join(measurand)}" if measurand else ""
    if given in ("absent", "present"):
        return str(given)
    if given is None:
        parts.wrong(path[:-1], None, "a state needs expect", f'write expect = "absent" or "present"{number}')
        return "absent"
    if measurand and isinstance(given, str):
        leaf = parts.leaves[measurand]
        try:
            return float(parse_leaf(leaf, given))
        except UserMistake as error:
            parts.wrong(
                path,
                given,
                str(error),
                f'or one of: "absent", "present"{nearest(given, ["absent", "present"])}',
            )
            return "absent"
    hint = nearest(given, ["absent", "present"]) if isinstance(given, str) else ""
    parts.wrong(path, given, f"unknown expectation{hint}", f'one of: "absent", "present"{number}')
    return "absent"


def _faces(row: Mapping[str, Any], path: Path, parts: Parts) -> dict[str, Touching]:
    """Preset per face: ``touching`` on all wetted faces, ``faces`` on those it names."""
    wetted = tuple(parts.geometry.wetted)
    found: dict[str, Touching] = {}
    base = _preset(row.get("touching", "dry"), (*path, "touching"), parts)
    if base is not None:
        found = dict.fromkeys(parts.geometry.faces_for(has_object="object" in row), base)
        rest = _preset("dry", (*path, "touching"), parts)
        if rest is not None:
            found = {face: found.get(face, rest) for face in wetted}
    own = row.get("faces", {})
    if not isinstance(own, Mapping):
        parts.wrong((*path, "faces"), own, "faces is a table: face = what touches it", f"faces: {', '.join(wetted)}")
        return found
    for face, given in own.items():
        if face not in wetted:
            parts.wrong(
                (*path, "faces", face),
                None,
                f"unknown face{nearest(face, wetted)}",
                f"faces: {', '.join(wetted)}",
            )
            continue
        preset = _preset(given, (*path, "faces", face), parts)
        if preset is not None:
            found[face] = preset
    return found


def _preset(given: Any, path: Path, parts: Parts) -> Touching | None:
    """A preset from its name, from a material's name (immersed in it), or from a table."""
    known = parts.host.touching
    if isinstance(given, str):
        if given in known:
            given = {"what": given}
        elif parts.catalogue.knows(given):
            given = {"what": "immersed", "liquid": given}
        else:
            names = [*known, *parts.catalogue.names()]
            parts.wrong(
                path,
                given,
                f"neither a contact nor a material{nearest(given, names)}",
                f"contacts: {', '.join(known)}",
            )
            return None
    if not isinstance(given, Mapping):
        parts.wrong(path, given, "what touches is a name or a table", 'write "dry", "water" or { what = "droplets" }')
        return None
    what = given.get("what", "patches" if "patches" in given else None)
    if what not in known:
        hint = nearest(str(what), known) if what else ""
        parts.wrong((*path, "what"), what, f"unknown contact{hint}", f"contacts: {', '.join(known)}")
        return None
    values = {key: value for key, value in given.items() if key != "what"}
    try:
        preset = known[what].model_validate(values)
    except ValidationError as error:
        parts.problems.extend(collect(error, known[what], path))
        return None
    return preset if _materials_known(preset, path, parts) else None


def _materials_known(preset: Touching, path: Path, parts: Parts) -> bool:
    good = True
    for leaf in leaves(type(preset)):
        if leaf.what == "material" and len(leaf.path) == 1:
            value = getattr(preset, leaf.path[0])
            if value is not None and not parts.catalogue.knows(value):
                parts.wrong((*path, *leaf.path), value, *parts.catalogue.unknown(value))
                good = False
    for cover in type(preset).build(preset).values() if good else ():
        for medium in cover.media():
            if not parts.catalogue.knows(medium):
                parts.wrong(path, medium, *parts.catalogue.unknown(medium))
                good = False
    return good


def _changes(given: Any, path: Path, parts: Parts) -> dict[Path, float]:
    """What differs in a state: dotted paths of numbers."""
    if not isinstance(given, Mapping):
        parts.wrong(path, given, 'set is a table: "emitter.power" = "0 mW"', "")
        return {}
    found: dict[Path, float] = {}
    for dotted, value in _flat(given):
        leaf = parts.leaves.get(dotted)
        if leaf is None or leaf.structural:
            names = [".".join(key) for key, one in parts.leaves.items() if not one.structural]
            parts.wrong((*path, *dotted), None, f"not a number of this design{nearest('.'.join(dotted), names)}", "")
            continue
        try:
            found[dotted] = parse_leaf(leaf, value)
        except UserMistake as error:
            parts.wrong((*path, *dotted), value, str(error))
    return found


def _flat(table: Mapping[str, Any], before: Path = ()) -> Iterable[tuple[Path, Any]]:
    for key, value in table.items():
        path = (*before, *str(key).split("."))
        if isinstance(value, Mapping):
            yield from _flat(value, path)
        else:
            yield path, value


def read_requirements(given: Any, parts: Parts, states: tuple[State, ...]) -> tuple[Requirement, ...]:
    """The requirements; a metric or state nobody knows is named."""
    if not isinstance(given, list) or not all(isinstance(row, Mapping) for row in given):
        parts.wrong(("requirements",), given, "requirements are written as [[requirements]] tables", "")
        return ()
    rows = (_requirement(row, ("requirements", str(at)), parts, states) for at, row in enumerate(given))
    return tuple(row for row in rows if row is not None)


def _requirement(row: Mapping[str, Any], path: Path, parts: Parts, states: tuple[State, ...]) -> Requirement | None:
    parts.unknown_keys(row, REQUIREMENT_KEYS, path)
    known = metrics_of(parts.geometry)
    name = row.get("metric")
    if not isinstance(name, str) or name not in known:
        hint = nearest(str(name), known)
        parts.wrong((*path, "metric"), name, f"unknown metric{hint}", f"metrics: {', '.join(known)}")
        return None
    limits = {key: row[key] for key in ("at_least", "at_most") if key in row}
    if len(limits) != 1:
        parts.wrong(path, None, "a requirement needs one limit", "write at_least = ... or at_most = ...")
        return None
    ((key, text),) = limits.items()
    try:
        limit = parse(text, known[name].kind)
    except UserMistake as error:
        parts.wrong((*path, key), text, str(error))
        return None
    state = row.get("state", "")
    names = [name for state in states for name in (state.name, state.family)]
    if state and state not in names:
        parts.wrong(
            (*path, "state"),
            state,
            f"no such state{nearest(str(state), names)}",
            f"states: {', '.join(dict.fromkeys(names))}",
        )
    over = row.get("over", "nominal")
    if over not in ("nominal", "corners", "yield"):
        parts.wrong((*path, "over"), over, "unknown scope", 'one of: "nominal", "corners", "yield"')
        return None
    shares = {}
    for part in ("area", "share"):
        try:
            shares[part] = parse(row[part], "ratio") if part in row else 1.0
        except UserMistake as error:
            parts.wrong((*path, part), row[part], str(error))
    return Requirement(
        metric=name,
        at_least=limit if key == "at_least" else None,
        at_most=limit if key == "at_most" else None,
        state=str(state),
        over=over,
        text=str(text),
        **shares,
    )


def read_tolerances(given: Any, parts: Parts) -> tuple[Tolerance, ...]:
    """``[tolerance]``: dotted path -> { plus_minus = "2 %" } or limits, with an optional group."""
    if not isinstance(given, Mapping):
        parts.wrong(("tolerance",), given, "tolerance is a table of paths", "")
        return ()
    found = []
    for dotted, row in _tolerance_rows(given):
        path = ("tolerance", *dotted)
        leaf = parts.leaves.get(dotted)
        if leaf is None or leaf.structural:
            names = [".".join(key) for key, one in parts.leaves.items() if not one.structural]
            parts.wrong(path, None, f"not a number of this design{nearest('.'.join(dotted), names)}", "")
            continue
        parts.unknown_keys(row, TOLERANCE_KEYS, path)
        one = _tolerance(leaf, row, path, parts)
        if one is not None:
            found.append(one)
    return tuple(found)


def _tolerance_rows(table: Mapping[str, Any], before: Path = ()) -> Iterable[tuple[Path, Mapping[str, Any]]]:
    for key, value in table.items():
        path = (*before, *str(key).split("."))
        if isinstance(value, Mapping) and not any(word in value for word in TOLERANCE_KEYS):
            yield from _tolerance_rows(value, path)
        elif isinstance(value, Mapping):
            yield path, value
        else:
            yield path, {"plus_minus": value}


def _tolerance(leaf: Leaf, row: Mapping[str, Any], path: Path, parts: Parts) -> Tolerance | None:
    if parts.sections is None:
        return None
    centre: Any = parts.sections
    for key in leaf.path:
        centre = getattr(centre, key)
    if centre is None:
        parts.wrong(path, None, "this value is not set, so it cannot deviate", "")
        return None
    try:
        if "plus_minus" in row:
            text = str(row["plus_minus"])
            relative = text.strip().endswith("%") and leaf.kind != "ratio"
            span = abs(centre) * parse(text, "ratio") if relative else parse(text, _difference(leaf.kind))
            low, high = centre - span, centre + span
        else:
            low, high = parse_leaf(leaf, row["low"]), parse_leaf(leaf, row["high"])
    except UserMistake as error:
        parts.wrong(path, row.get("plus_minus"), str(error))
        return None
    except KeyError:
        parts.wrong(path, None, "a tolerance needs plus_minus, or low and high", "")
        return None
    if low > high or (leaf.clip(low), leaf.clip(high)) != (low, high):
        parts.wrong(path, row.get("plus_minus"), "reaches beyond what this input may be", leaf.bounds)
        return None
    return Tolerance(leaf.path, low, high, str(row.get("distribution", "uniform")), str(row.get("group", "")))


def _difference(kind: str) -> str:
    return "temperature_difference" if kind == "temperature" else kind
