"""JSON Schema of sections, for editors."""

from __future__ import annotations

import json
import re

from outcouple.fields import json_schema
from outcouple.quantities import parse

from .sample_sections import Row, Sensor

SCHEMA = json_schema(Sensor)
PLATE = SCHEMA["$defs"]["Plate"]["properties"]


def test_it_is_plain_data() -> None:
    assert json.loads(json.dumps(SCHEMA)) == SCHEMA
    assert SCHEMA["$schema"] == "https://json-schema.org/draft/2020-12/schema"
    assert SCHEMA["additionalProperties"] is False
    assert SCHEMA["properties"]["plate"] == {"$ref": "#/$defs/Plate"}


def test_a_quantity_is_a_text_with_a_unit() -> None:
    thickness = PLATE["thickness"]
    assert thickness["type"] == "string"
    assert thickness["default"] == "6 mm"
    assert thickness["examples"] == ["6 mm", "0.5 mm", "50 mm"]
    assert thickness["description"] == ("thickness of the plate (0.5 to 50 mm). Reference: common practice, no source")
    assert re.search(thickness["pattern"], "-1.5e-3 mm")
    assert not re.search(thickness["pattern"], "6")
    assert not re.search(thickness["pattern"], "6 W")
    assert all(parse(text, "length") > 0 for text in thickness["examples"])


def test_signs_a_person_may_write() -> None:
    assert re.search(PLATE["gap"]["pattern"], "0.2 µm")
    assert re.search(PLATE["warmth"]["pattern"], "−20 °C")
    assert re.search(PLATE["tilt"]["pattern"], "1°")


def test_plain_kinds_take_numbers_too() -> None:
    exponent = SCHEMA["$defs"]["Lamp"]["properties"]["exponent"]
    assert [one["type"] for one in exponent["anyOf"]] == ["number", "string"]
    assert exponent["default"] == 1.0
    assert re.search(PLATE["haze"]["anyOf"][1]["pattern"], "0.03")
    assert "default" not in PLATE["haze"]


def test_the_other_sorts() -> None:
    sides, polished, finish, material = (PLATE[key] for key in ("sides", "polished", "finish", "material"))
    assert (sides["type"], sides["minimum"], sides["maximum"], sides["default"]) == ("integer", 1, 4, 4)
    assert (polished["type"], polished["default"]) == ("boolean", True)
    assert (finish["enum"], finish["default"]) == (["clear", "matt"], "clear")
    assert (material["type"], material["default"]) == ("string", "acrylic")


def test_required_keys_and_lists_of_sections() -> None:
    assert SCHEMA["properties"]["rows"]["items"] == {"$ref": "#/$defs/Row"}
    assert json_schema(Row)["required"] == ["share", "cover"]
