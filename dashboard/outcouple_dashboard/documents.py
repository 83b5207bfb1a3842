"""A document: the design a browser tab works on. It lives in the tab, whole; the server keeps nothing of it.

A document is plain data, so that it travels in a ``dcc.Store``, in a link and in a pinned variant alike:

    text    the design file as it would be written, comments and all
    saved   the text as the file holds it; back-to-file and "changed" compare with it
    file    name in the folder, empty for a design that is no file yet
    digest  of the file's bytes when it was read, so that a save notices other people's changes
    origin  who changed it last: "load", "control", "undo" ...; forms are built anew unless a control did
    serial  counts changes
    opened  another for every design that is opened
"""

from __future__ import annotations

import base64
import json
import secrets
import zlib
from collections.abc import Mapping, Sequence
from typing import Any

from outcouple.errors import UserMistake

__all__ = ["LONGEST_TEXT", "MOST_PINS", "document", "from_link", "link_of", "pin_of", "with_text"]

Document = dict[str, Any]

MOST_PINS = 8
"""Variants that stand side by side."""
LONGEST_TEXT = 200_000
"""Characters of a design that are taken; the demos have 2,000."""


def document(
    text: str, *, file: str = "", digest: str = "", saved: str | None = None, origin: str = "load"
) -> Document:
    """A document of a design's text."""
    return {
        "text": text,
        "saved": text if saved is None else saved,
        "file": file,
        "digest": digest,
        "origin": origin,
        "serial": 0,
        "opened": secrets.token_hex(4),
    }


def with_text(old: Mapping[str, Any], text: str, *, origin: str) -> Document:
    """The document with another text."""
    return {**old, "text": text, "origin": origin, "serial": int(old.get("serial", 0)) + 1}


def link_of(doc: Mapping[str, Any], pins: Sequence[Mapping[str, Any]] = ()) -> str:
    """Everything a tab needs to come back to this document and its pinned variants, as letters, digits, - and _."""
    parts: dict[str, Any] = {key: doc[key] for key in ("text", "file", "digest")}
    if pins:
        parts["pins"] = [[pin["name"], pin["text"]] for pin in pins]
    if doc["saved"] != doc["text"]:
        parts["saved"] = doc["saved"]
    packed = zlib.compress(json.dumps(parts, separators=(",", ":")).encode(), 9)
    return base64.urlsafe_b64encode(packed).decode().rstrip("=")


def from_link(link: str) -> tuple[Document, list[dict[str, str]]]:
    """The document of a link and its pins. Raises UserMistake where it is none."""
    try:
        packed = base64.urlsafe_b64decode(link + "=" * (-len(link) % 4))
        unpacker = zlib.decompressobj()
        plain = unpacker.decompress(packed, (MOST_PINS + 3) * LONGEST_TEXT)
        if unpacker.unconsumed_tail:
            raise ValueError("too long")
        parts = json.loads(plain)
        texts = {key: parts.get(key, "") for key in ("text", "file", "digest")}
        saved = parts.get("saved", texts["text"])
        pins = [(name, text) for name, text in parts.get("pins", [])][:MOST_PINS]
        inside = (*texts.values(), saved, *(part for pin in pins for part in pin))
        if not all(isinstance(value, str) and len(value) <= LONGEST_TEXT for value in inside):
            raise ValueError("not texts")
    except (ValueError, TypeError, zlib.error, AttributeError, RecursionError):
        raise UserMistake("This link is damaged: the design in it cannot be read. Ask for it again.") from None
    doc = document(texts["text"], file=texts["file"], digest=texts["digest"], saved=saved)
    return doc, [pin_of(name, text) for name, text in pins]


def pin_of(name: str, text: str, file: str = "") -> dict[str, str]:
    """A variant as it is kept in a tab: a name and the text of its design."""
    return {"id": secrets.token_hex(4), "name": name, "text": text, "file": file}
