"""A document: the design a browser tab works on. It lives in the tab, whole; the server keeps nothing of it.

A document is plain data, so that it travels in a ``dcc.Store``, in a link and in a pinned variant alike:

    text    the design file as it would be written, comments and all
    saved   the text as the file holds it; back-to-file and "changed" compare with it
    file    name in the folder, empty for a design that is no file yet
    digest  of the file's bytes when it was read, so that a save notices other people's changes
    origin  who changed it last: "load", "control", "undo" ...; forms are built anew unless a control did
    serial  counts changes
"""

from __future__ import annotations

import base64
import json
import zlib
from collections.abc import Mapping
from typing import Any

from outcouple.errors import UserMistake

__all__ = ["LONGEST_TEXT", "document", "from_link", "link_of", "with_text"]

Document = dict[str, Any]

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
    }


def with_text(old: Mapping[str, Any], text: str, *, origin: str) -> Document:
    """The document with another text."""
    return {**old, "text": text, "origin": origin, "serial": int(old.get("serial", 0)) + 1}


def link_of(doc: Mapping[str, Any]) -> str:
    """Everything a tab needs to come back to this document, as letters, digits, ``-`` and ``_``."""
    parts = {key: doc[key] for key in ("text", "file", "digest")}
    if doc["saved"] != doc["text"]:
        parts["saved"] = doc["saved"]
    packed = zlib.compress(json.dumps(parts, separators=(",", ":")).encode(), 9)
    return base64.urlsafe_b64encode(packed).decode().rstrip("=")


def from_link(link: str) -> Document:
    """The document of a link. Raises UserMistake where it is none."""
    try:
        packed = base64.urlsafe_b64decode(link + "=" * (-len(link) % 4))
        unpacker = zlib.decompressobj()
        plain = unpacker.decompress(packed, 5 * LONGEST_TEXT)
        if unpacker.unconsumed_tail:
            raise ValueError("too long")
        parts = json.loads(plain)
        texts = {key: parts.get(key, "") for key in ("text", "file", "digest")}
        saved = parts.get("saved", texts["text"])
        if not all(isinstance(value, str) and len(value) <= LONGEST_TEXT for value in (*texts.values(), saved)):
            raise ValueError("not texts")
    except (ValueError, zlib.error, AttributeError, RecursionError):
        raise UserMistake("This link is damaged: the design in it cannot be read. Ask for it again.") from None
    return document(texts["text"], file=texts["file"], digest=texts["digest"], saved=saved)
