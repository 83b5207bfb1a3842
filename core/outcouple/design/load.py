"""From a design file to a Design: every mistake found in one go, each with its place."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from functools import lru_cache
from pathlib import Path as FilePath
from typing import Any

from pydantic import ValidationError, create_model

from outcouple.design.design import Design, Path
from outcouple.design.own_materials import with_own_materials
from outcouple.design.parts import Parts, read_requirements, read_states, read_tolerances
from outcouple.design.problems import Problem, collect, raise_problems
from outcouple.design.sections import READOUTS, Decision, Emitter, Environment
from outcouple.design.toml_source import TomlSource
from outcouple.errors import UserMistake, nearest
from outcouple.fields import Section, leaves
from outcouple.geometry import Geometry
from outcouple.hooks import Host, build_host
from outcouple.materials import Catalogue

__all__ = ["design_from_mapping", "design_model", "load_design", "parse_design"]

PARTS = ("states", "requirements", "tolerance", "materials")
"""Top-level keys that are not sections of fixed fields."""
HEADER = ("title", "geometry", "notes")


def load_design(file: str | FilePath, *, host: Host | None = None) -> Design:
    """Read a design file.

    Raises UserMistake with one line per mistake (``file:line:column path = "value": ...``).
    """
    path = FilePath(file)
    try:
        text = path.read_text(encoding="utf-8")
    except OSError as error:
        raise UserMistake(f"{file}: cannot be read: {error.strerror or error}") from None
    except UnicodeDecodeError:
        raise UserMistake(f"{file}: is not UTF-8 text") from None
    return parse_design(text, file=str(file), host=host)


def parse_design(text: str, *, file: str = "design.toml", host: Host | None = None) -> Design:
    """A design from the text of a file; ``file`` names it in messages."""
    source = TomlSource(text, file)
    return design_from_mapping(source.data, source=source, file=file, host=host)


def design_from_mapping(
    data: Mapping[str, Any],
    *,
    source: TomlSource | None = None,
    file: str = "design",
    host: Host | None = None,
) -> Design:
    """A design from plain data in the shape of the file (texts with units)."""
    host = host or build_host()
    problems: list[Problem] = []
    geometry = _geometry(data, host, problems)
    if geometry is None:
        raise_problems(problems, source, file)
    catalogue = with_own_materials(data.get("materials", {}), host.catalogue, problems)
    sections = _sections(data, geometry, problems)
    _check_names(data, geometry, catalogue, problems)
    parts = Parts(geometry, host, catalogue, sections, problems)
    states = read_states(data.get("states"), parts)
    requirements = read_requirements(data.get("requirements", []), parts, states)
    tolerances = read_tolerances(data.get("tolerance", {}), parts)
    if problems or sections is None:
        raise_problems(problems, source, file)
    return Design(
        title=str(data.get("title", "untitled")),
        geometry=geometry,
        sections=sections,
        states=states,
        requirements=requirements,
        tolerances=tolerances,
        catalogue=catalogue,
        host=host,
        raw=dict(data),
        given=frozenset(_leaves(data)),
        file=file,
    )


def _geometry(data: Mapping[str, Any], host: Host, problems: list[Problem]) -> Geometry | None:
    name = data.get("geometry")
    allowed = ", ".join(sorted(host.geometries))
    if not isinstance(name, str):
        problems.append(Problem(("geometry",), name, "say which sensor this is", f"one of: {allowed}"))
        return None
    if name not in host.geometries:
        left = next((out for out in host.left_out if out.plugin == name), None)
        hint = f"its plugin was left out: {left.why}" if left else f"one of: {allowed}"
        problems.append(Problem(("geometry",), name, f"unknown geometry{nearest(name, host.geometries)}", hint))
        return None
    return host.geometry(name)


@lru_cache(maxsize=64)
def design_model(geometry: type[Geometry]) -> type[Section]:
    """The pydantic model of all sections of one geometry's design file.

    A geometry may restate a common section with defaults that suit it, or with a section derived from it.
    """
    own = {name: (info.annotation, info) for name, info in geometry.Parameters.model_fields.items()}
    after = {
        "readout": own.pop("readout", (READOUTS[geometry.readout], READOUTS[geometry.readout]())),
        "decision": own.pop("decision", (Decision, Decision())),
    }
    model: type[Section] = create_model(  # type: ignore[call-overload]
        f"{geometry.__name__}Design",
        __base__=Section,
        **{
            "environment": (Environment, Environment()),
            "emitter": (Emitter, Emitter()),
            **own,
            **after,
        },
    )
    return model


def _sections(data: Mapping[str, Any], geometry: Geometry, problems: list[Problem]) -> Section | None:
    model = design_model(type(geometry))
    own = {key: value for key, value in data.items() if key not in PARTS + HEADER}
    for key in HEADER:
        if key in data and not isinstance(data[key], str):
            problems.append(Problem((key,), data[key], "must be a text", ""))
    for key in list(own):
        if key not in model.model_fields:
            allowed = [*HEADER, *model.model_fields, *PARTS]
            what = "section" if isinstance(own[key], Mapping) else "key"
            problems.append(
                Problem((key,), None, f"unknown {what}{nearest(key, allowed)}", f"allowed: {', '.join(allowed)}")
            )
            del own[key]
    try:
        return model.model_validate(own)
    except ValidationError as error:
        problems.extend(collect(error, model))
        return None


def _check_names(data: Mapping[str, Any], geometry: Geometry, catalogue: Catalogue, problems: list[Problem]) -> None:
    """Every material a section names must be known."""
    for leaf in leaves(design_model(type(geometry))):
        if leaf.what == "material":
            value: Any = data
            for key in leaf.path:
                value = value.get(key) if isinstance(value, Mapping) else None
            if isinstance(value, str) and not catalogue.knows(value):
                problems.append(Problem(leaf.path, value, *catalogue.unknown(value)))


def _leaves(data: Mapping[str, Any], path: Path = ()) -> Iterator[Path]:
    for key, value in data.items():
        if isinstance(value, Mapping):
            yield from _leaves(value, (*path, key))
        else:
            yield (*path, key)
