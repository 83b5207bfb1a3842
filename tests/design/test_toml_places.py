"""Where things stand in a design file, and what is said of text that is not TOML."""

from __future__ import annotations

import tomllib
from typing import Any

import pytest
import tomlkit
from hypothesis import given, settings
from hypothesis import strategies as st

from outcouple.design.toml_source import TomlSource
from outcouple.errors import UserMistake

TEXT = """\
# a tank
title = "Tank"   # not [here] = "either"

[emitter]
power    = "10 mW"
"half angle" = '15 deg'
light.colour = "red"

[prism.face]
angle = "45 deg"

[[states]]
name = "dry"
notes = \"\"\"
name = "not a key"
[nor.a.table]
\"\"\"

[[states]]
name = "wet"
touching = { what = "droplets", liquid.name = "oil" }
set = { "emitter.power" = "0 mW" }
list = [
    1, # one, two = 2
    "a, ] b",
    { deep = [ [ 3 ] ] },
]

  [states.object]
  diameter = "9 mm"

[[states.patches]]
share = "10 %"
[[states.patches]]
share = "20 %"

[tolerance]
"emitter.power" = "5 %"
"""
SOURCE = TomlSource(TEXT, "tank.toml")

PLACES = [
    ("title", (2, 1), (2, 9)),
    ("emitter", (4, 1), (4, 1)),
    ("emitter.power", (5, 1), (5, 12)),
    ("emitter.half angle", (6, 1), (6, 16)),
    ("emitter.light", (7, 1), (7, 16)),
    ("emitter.light.colour", (7, 7), (7, 16)),
    ("prism.face.angle", (10, 1), (10, 9)),
    ("states", (12, 1), (12, 1)),
    ("states.0", (12, 1), (12, 1)),
    ("states.0.name", (13, 1), (13, 8)),
    ("states.0.notes", (14, 1), (14, 9)),
    ("states.1", (19, 1), (19, 1)),
    ("states.1.name", (20, 1), (20, 8)),
    ("states.1.touching", (21, 1), (21, 12)),
    ("states.1.touching.what", (21, 14), (21, 21)),
    ("states.1.touching.liquid.name", (21, 40), (21, 47)),
    ("states.1.set.emitter.power", (22, 9), (22, 27)),
    ("states.1.list", (23, 1), (23, 8)),
    ("states.1.list.0", (24, 5), (24, 5)),
    ("states.1.list.1", (25, 5), (25, 5)),
    ("states.1.list.2.deep", (26, 7), (26, 14)),
    ("states.1.list.2.deep.0.0", (26, 18), (26, 18)),
    ("states.1.object", (29, 3), (29, 3)),
    ("states.1.object.diameter", (30, 3), (30, 14)),
    ("states.1.patches", (32, 1), (32, 1)),
    ("states.1.patches.0.share", (33, 1), (33, 9)),
    ("states.1.patches.1.share", (35, 1), (35, 9)),
    ("tolerance.emitter.power", (38, 1), (38, 19)),
]


@pytest.mark.parametrize(("path", "key", "value"), PLACES)
def test_keys_and_values(path: str, key: tuple[int, int], value: tuple[int, int]) -> None:
    parts = tuple(path.split("."))
    assert SOURCE.position(parts) == key
    assert SOURCE.position(parts, part="value") == value


@pytest.mark.parametrize(
    ("path", "place"),
    [
        (("emitter", "exponent"), (4, 1)),
        (("states", "1", "expect"), (19, 1)),
        (("states", "1", "touching", "coverage"), (21, 1)),
        (("states", "7", "name"), (12, 1)),
        (("prism",), (1, 1)),
        (("prism", "base"), (1, 1)),
        (("readout", "bits"), (1, 1)),
        ((), (1, 1)),
    ],
)
@pytest.mark.parametrize("part", ["key", "value"])
def test_what_is_not_there_is_found_at_the_table_around_it(
    path: tuple[str, ...], place: tuple[int, int], part: Any
) -> None:
    assert SOURCE.position(path, part=part) == place


def test_lines() -> None:
    assert SOURCE.line_text(5) == 'power    = "10 mW"'
    assert (SOURCE.line_text(0), SOURCE.line_text(999)) == ("", "")


@pytest.mark.parametrize("text", ["", "\n\n", "# only this", "a = 1", "\ufeffa = 1\r\n[b]\r\nc = 2\r\n"])
def test_small_files(text: str) -> None:
    source = TomlSource(text, "x.toml")
    assert source.position(("nothing",)) == (1, 1)
    if "c" in source.data.get("b", {}):
        assert source.position(("b", "c"), part="value") == (3, 5)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (
            "[prism]\nbase = 6 mm\n",
            "x.toml:2:10 not TOML: expected newline or end of document after a statement; "
            'a quantity is written in quotes: base = "6 mm"',
        ),
        (
            "set = { gap = -20 degC }\n",
            'x.toml:1:19 not TOML: unclosed inline table; a quantity is written in quotes: gap = "-20 degC"',
        ),
        (
            "share = 35%  # of all\n",
            "x.toml:1:11 not TOML: expected newline or end of document after a statement; "
            'a quantity is written in quotes: share = "35%"',
        ),
        ("title = Tank\n", "x.toml:1:9 not TOML: invalid value"),
        ("a = 1\na = 2\n", "x.toml:2:6 not TOML: cannot overwrite a value"),
        ('a = "open', "x.toml:1:10 not TOML: unterminated string"),
        ("a = [1,\n", "x.toml:2:1 not TOML: invalid value"),
        ("a = " + "[" * 5000, "x.toml: not TOML that can be read: nested too deeply"),
        ("a = " + "1" * 5000, None),
    ],
)
def test_text_that_is_not_toml(text: str, message: str | None) -> None:
    with pytest.raises(UserMistake) as mistake:
        TomlSource(text, "x.toml")
    (line,) = mistake.value.lines
    if message is None:  # Python's own limit on the digits of a whole number, in Python's own words
        assert line.startswith("x.toml:1:5005 not TOML: exceeds the limit")
    else:
        assert line == message


KEYS = st.text("abc_-9", min_size=1, max_size=3) | st.sampled_from(["a b", "ü", "#x", "[y]", "=", "'"])
TREES = st.recursive(
    st.just(0),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(KEYS, inner, min_size=1, max_size=3),
    max_leaves=12,
)


def numbered(tree: Any, count: list[int]) -> Any:
    """The tree with every leaf a number of its own, in strings where that makes the text harder to read."""
    if isinstance(tree, dict):
        return {key: numbered(value, count) for key, value in tree.items()}
    if isinstance(tree, list):
        return [numbered(value, count) for value in tree]
    count[0] += 1
    return [f"{count[0]}", f"{count[0]} ] }} # = \" '", count[0], f"{count[0]}\nx = 1\n[t]\n"][count[0] % 4]


def leaves_of(data: Any, path: tuple[str, ...] = ()) -> Any:
    if isinstance(data, dict | list):
        for key, value in data.items() if isinstance(data, dict) else enumerate(data):
            yield from leaves_of(value, (*path, str(key)))
    else:
        yield path, data


@settings(max_examples=200)
@given(tree=st.dictionaries(KEYS, TREES, max_size=4), multiline=st.booleans())
def test_every_value_is_found_in_any_file(tree: dict[str, Any], multiline: bool) -> None:
    """The writer of the library tomlkit lays out the file; tomllib reads back what stands at the place."""
    data = numbered(tree, [0])
    text = tomlkit.dumps(data)
    if multiline:
        text = text.replace(", ", ",  # [x]\n  ") if "#" not in text and "{" not in text else text
    source = TomlSource(text, "x.toml")
    for path, value in leaves_of(source.data):
        line, column = source.position(path, part="value")
        rest = "\n".join(text.split("\n")[line - 1 :])[column - 1 :]
        assert _first_value(rest) == value


def _first_value(rest: str) -> Any:
    """What the shortest beginning that is a TOML value stands for; numbers here end where the digits do."""
    if rest[0].isdigit():
        return int(
            "".join(char for char in rest.split("\n")[0].split(",")[0].split("}")[0].split("]")[0] if char.isdigit())
        )
    for end in range(2, len(rest) + 1):
        try:
            return tomllib.loads(f"x = {rest[:end]}")["x"]
        except tomllib.TOMLDecodeError:
            continue
    raise AssertionError(rest)
