"""The folder of design files: list, read, write; nothing outside it, and nothing written over unseen changes."""

from __future__ import annotations

import hashlib
import os
import re
import tempfile
import threading
from dataclasses import dataclass, field
from pathlib import Path

from outcouple.errors import UserMistake
from outcouple_dashboard.documents import LONGEST_TEXT

__all__ = ["Changed", "Folder", "Read"]

NAME = re.compile(r"[\w][\w .+-]{0,90}\.toml")
DEPTH = 3
MOST = 400


class Changed(UserMistake):
    """The file is not what it was when it was opened."""


@dataclass(frozen=True)
class Read:
    """A file's text and the digest of its bytes."""

    name: str
    text: str
    digest: str


@dataclass
class Folder:
    """A folder of design files. Names are relative to it, with forward slashes."""

    root: Path
    _writing: threading.Lock = field(default_factory=threading.Lock, repr=False)

    def __post_init__(self) -> None:
        self.root = Path(self.root).resolve()
        if not self.root.is_dir():
            raise UserMistake(f"{self.root}: no such folder")

    def names(self) -> list[str]:
        """Every design file, a few levels deep; links that lead outside are left out."""
        found = []
        for path in sorted(self.root.rglob("*.toml")):
            parts = path.relative_to(self.root).parts
            if len(parts) > DEPTH or any(part.startswith(".") for part in parts):
                continue
            if path.is_file() and path.resolve().is_relative_to(self.root):
                found.append("/".join(parts))
            if len(found) == MOST:
                break
        return found

    def read(self, name: str) -> Read:
        """A design file. Raises UserMistake where it is outside, too long or no text."""
        path = self._inside(name)
        try:
            with path.open("rb") as file:
                data = file.read(4 * LONGEST_TEXT + 1)
        except OSError as error:
            raise UserMistake(f"{name} cannot be read: {error.strerror or error}") from None
        if len(data) > LONGEST_TEXT:
            raise UserMistake(f"{name} is too long for a design file ({LONGEST_TEXT // 1000} kB at most)")
        try:
            text = data.decode("utf-8-sig")
        except UnicodeDecodeError:
            raise UserMistake(f"{name} is not UTF-8 text") from None
        return Read(name, text, _digest(data))

    def save(self, name: str, text: str, digest: str) -> Read:
        """Write over the file that was read with ``digest``. Raises Changed where it has another content by now."""
        path = self._inside(name)
        data = text.encode()
        with self._writing:
            try:
                now = _digest(path.read_bytes())
            except FileNotFoundError:
                raise Changed(f"{name} is gone: somebody moved or deleted it. Save under a name.") from None
            except OSError as error:
                raise UserMistake(f"{name} cannot be read: {error.strerror or error}") from None
            if now != digest:
                raise Changed(
                    f"{name} was changed by somebody else since you opened it. Nothing was written; "
                    "save under another name, or open it again and lose your changes."
                )
            self._write(path, data, replace=True)
        return Read(name, text, _digest(data))

    def save_as(self, name: str, text: str) -> Read:
        """Write a new file; an existing one is never touched."""
        name = name.strip()
        if not name.endswith(".toml"):
            name = f"{name}.toml"
        if not all(NAME.fullmatch(part) or re.fullmatch(r"[\w][\w .+-]*", part) for part in name.split("/")):
            raise UserMistake("A name is letters, digits, blanks, dots, + and -, and ends in .toml")
        if not NAME.fullmatch(name.split("/")[-1]):
            raise UserMistake("A name is letters, digits, blanks, dots, + and -, at most 90, and ends in .toml")
        path = self._inside(name)
        if not path.parent.is_dir():
            raise UserMistake(f"{name}: there is no folder {path.parent.name!r} here")
        data = text.encode()
        with self._writing:
            self._write(path, data, replace=False)
        return Read(name, text, _digest(data))

    def free_name(self, name: str) -> str:
        """A name like the given one that no file has yet."""
        stem = re.sub(r"[^\w.+-]+", "-", name.removesuffix(".toml")).strip("-.") or "design"
        taken = set(self.names())
        tries = (f"{stem}.toml", *(f"{stem}-{number}.toml" for number in range(2, MOST)))
        return next(one for one in tries if one not in taken)

    def _inside(self, name: str) -> Path:
        """The path of a name, links followed; refused where it leaves the folder or is no design file."""
        if not name or "\0" in name or not name.endswith(".toml") or any(p.startswith(".") for p in name.split("/")):
            raise UserMistake(f"{name!r} is not a design file of this folder")
        path = (self.root / name).resolve()
        if not path.is_relative_to(self.root) or path.suffix != ".toml":
            raise UserMistake(f"{name!r} lies outside the folder and stays untouched")
        return path

    def _write(self, path: Path, data: bytes, *, replace: bool) -> None:
        """Whole or not at all: a file beside it, flushed, then moved into place (linked, where none may be there)."""
        temporary = ""
        try:
            handle, temporary = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name}.")
            with os.fdopen(handle, "wb") as file:
                file.write(data)
                file.flush()
                os.fsync(file.fileno())
            os.chmod(temporary, path.stat().st_mode & 0o777 if replace else 0o644)
            if replace:
                os.replace(temporary, path)
            else:
                os.link(temporary, path)
        except FileExistsError:
            raise UserMistake(f"{path.name} is there already and stays as it is; choose another name") from None
        except OSError as error:
            raise UserMistake(f"{path.name} cannot be written: {error.strerror or error}") from None
        finally:
            if temporary and os.path.exists(temporary):
                os.unlink(temporary)


def _digest(data: bytes) -> str:
    return hashlib.sha256(data).hexdigest()
