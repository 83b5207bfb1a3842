"""Documents and links: a link carries the whole state, and a damaged one is told."""

from __future__ import annotations

import base64
import json
import zlib

import pytest

from outcouple.errors import UserMistake
from outcouple_dashboard.documents import LONGEST_TEXT, document, from_link, link_of, pin_of, with_text


def test_a_link_brings_everything_back(tank):
    doc = with_text(document(tank, file="tank.toml", digest="ab"), tank.replace("8 mm", "9 mm"), origin="control")
    pins = [pin_of("thick", tank), pin_of("thin", tank.replace("8 mm", "5 mm"))]
    back, pinned = from_link(link_of(doc, pins))
    assert {key: back[key] for key in ("text", "saved", "file", "digest")} == {
        key: doc[key] for key in ("text", "saved", "file", "digest")
    }
    assert [(pin["name"], pin["text"]) for pin in pinned] == [(pin["name"], pin["text"]) for pin in pins]


def test_a_link_fits_an_address_bar(tank):
    assert len(link_of(document(tank, file="tank.toml", digest="a" * 64))) < 2000


def packed(value):
    return base64.urlsafe_b64encode(zlib.compress(json.dumps(value).encode())).decode().rstrip("=")


@pytest.mark.parametrize(
    "link",
    [
        "",
        "x",
        "%%%",
        "AAAA",
        packed([]),
        packed({"text": 5}),
        packed({"text": "x" * (LONGEST_TEXT + 1)}),
        packed({"pins": [1]}),
    ],
)
def test_a_damaged_link_is_told(link):
    with pytest.raises(UserMistake, match="This link is damaged"):
        from_link(link)


def test_a_link_that_would_unpack_without_end_is_refused():
    bomb = base64.urlsafe_b64encode(zlib.compress(b'{"text": "' + b"x" * 50_000_000 + b'"}')).decode()
    with pytest.raises(UserMistake, match="This link is damaged"):
        from_link(bomb)
