"""The files of one plan: opened once each, digested, decoded, with every fault collected."""

from __future__ import annotations

import errno
import hashlib
import os
import posixpath
import re
import tomllib
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

from planner.files.faults import Fault, did_you_mean, shown, visible
from planner.files.positions import KeyPath, Positions, index
from planner.files.syntax import deep_key, long_integer, reason_of, too_deep

if TYPE_CHECKING:
    from pathlib import Path

LARGEST_FILE_BYTES = 2_000_000
_BYTE_ORDER_MARK = b"\xef\xbb\xbf"
_DIGITS_MEND = "write a number of reasonable length"
_OPEN_ERRORS = {
    errno.EACCES: "you have no permission",
    errno.EPERM: "you have no permission",
    errno.ENAMETOOLONG: "the name is too long",
    errno.EIO: "the disk failed",
}


@dataclass(frozen=True)
class SourceFile:
    """A file that the plan was read from."""

    name: str
    """Path relative to the plan folder, with forward slashes."""
    sha256: str
    size: int


@dataclass(frozen=True)
class Mention:
    """Where a file is named: what a fault about its absence points to."""

    file: str
    line: int
    column: int
    key: str


@dataclass
class Document:
    """One TOML file with its positions and the list that its faults go to."""

    name: str
    data: dict[str, Any]
    positions: Positions
    faults: list[Fault]

    def fault(self, path: KeyPath, expected: str, mend: str, found: str | None = None) -> None:
        """Add a fault at a value; without ``found`` the value itself is shown."""
        line, column = self.positions.value(path)
        self._add(path, (line, column), expected, found or shown(self.value(path)), mend)

    def fault_at_key(self, path: KeyPath, expected: str, mend: str, found: str) -> None:
        """Add a fault at a key."""
        self._add(path, self.positions.key(path), expected, found, mend)

    def _add(
        self, path: KeyPath, place: tuple[int, int], expected: str, found: str, mend: str
    ) -> None:
        self.faults.append(Fault(self.name, *place, dotted(path), expected, found, mend))

    def value(self, path: KeyPath) -> object:
        """The value as it stands in the file, None where there is none."""
        at: Any = self.data
        for part in path:
            try:
                at = at[part]
            except (KeyError, IndexError, TypeError):
                return None
        return at

    def mention(self, path: KeyPath) -> Mention:
        """The place where a file is named."""
        return Mention(self.name, *self.positions.value(path), dotted(path))


def dotted(path: KeyPath) -> str:
    """Join the keys of a path; the line tells which element of an array is meant."""
    return ".".join(part for part in path if isinstance(part, str))


@dataclass
class Shelf:
    """Reads the files of a plan folder by name and remembers digests and faults."""

    folder: Path
    faults: list[Fault] = field(default_factory=list)
    files: dict[str, SourceFile] = field(default_factory=dict)

    def beside(self, name: str, other: str) -> str:
        """Name of a file that the file ``name`` refers to as ``other``."""
        return posixpath.normpath(posixpath.join(posixpath.dirname(name), other))

    def toml(self, name: str, mention: Mention | None) -> Document | None:
        """Read a TOML file; None, with faults noted, where that fails."""
        text = self.text(name, mention)
        if text is None:
            return None
        deep = deep_key(text)
        if deep is not None:
            self._note_depth(name, _place(text, deep))
            return None
        try:
            data = tomllib.loads(text)
            if not too_deep(data):
                return Document(name, data, index(text), self.faults)
            self._note_depth(name, (1, 1))
        except tomllib.TOMLDecodeError as error:
            place, reason = _syntax_place(str(error), text)
            self._file_fault(name, place, "valid TOML", reason, "correct the text at this place")
        except RecursionError:
            self._note_depth(name, (1, 1))
        except ValueError:
            place, found = _place(text, long_integer(text)), "an integer of thousands of digits"
            self._file_fault(name, place, "valid TOML", found, _DIGITS_MEND)
        return None

    def _note_depth(self, name: str, place: tuple[int, int]) -> None:
        found = "arrays or tables nested too deeply"
        self._file_fault(name, place, "a plain structure", found, "nest less")

    def text(self, name: str, mention: Mention | None) -> str | None:
        """Read a text file; None, with faults noted, where that fails."""
        raw = self._bytes(name, mention)
        if raw is None:
            return None
        self.files[name] = SourceFile(name, hashlib.sha256(raw).hexdigest(), len(raw))
        return self._decoded(name, raw)

    def _bytes(self, name: str, mention: Mention | None) -> bytes | None:
        path = self.folder / name
        raw = b""
        try:
            reason, mend = _why_unreadable(path)
            if not reason:
                with path.open("rb") as stream:
                    raw = stream.read(LARGEST_FILE_BYTES + 1)
        except OSError as error:
            why = _OPEN_ERRORS.get(error.errno or 0, "the system refuses to open it")
            reason = f"{shown(path.name)}, which cannot be read: {why}"
            mend = "check its name and permissions"
        if reason:
            at = mention or Mention(name, 1, 1, "")
            self.faults.append(
                Fault(at.file, at.line, at.column, at.key, "a readable file", reason, mend)
            )
            return None
        if len(raw) > LARGEST_FILE_BYTES:
            found = f"more than {LARGEST_FILE_BYTES} bytes"
            expected = f"a file of at most {LARGEST_FILE_BYTES} bytes"
            self._file_fault(name, (1, 1), expected, found, "make it smaller")
            return None
        return raw

    def _decoded(self, name: str, raw: bytes) -> str | None:
        if raw.startswith((b"\xff\xfe", b"\xfe\xff")):
            self._file_fault(name, (1, 1), "UTF-8 text", "UTF-16", "save it as UTF-8")
            return None
        try:
            return raw.removeprefix(_BYTE_ORDER_MARK).decode("utf-8")
        except UnicodeDecodeError as error:
            before = error.object[: error.start].decode("utf-8")
            place = _place(before, len(before))
            found = f"byte 0x{error.object[error.start]:02X}"
            self._file_fault(name, place, "UTF-8 text", found, "save it as UTF-8")
            return None

    def _file_fault(
        self, name: str, place: tuple[int, int], expected: str, found: str, mend: str
    ) -> None:
        self.faults.append(Fault(name, *place, "", expected, found, mend))


def _why_unreadable(path: Path) -> tuple[str, str]:
    """Say why a path is no regular file, and the mend; empty when it is one."""
    shown_name = f'"{visible(path.name or str(path))}"'
    if path.is_dir():
        return f"{shown_name}, which is a directory", "name a file in it"
    if path.is_file():
        return "", ""
    if path.exists():
        return f"{shown_name}, which is no regular file", "name a regular file"
    return _why_missing(path, shown_name)


def _why_missing(path: Path, shown_name: str) -> tuple[str, str]:
    if path.is_symlink():
        found = f"{shown_name}, a link that leads to no file"
        return found, "correct the link, or name the file itself"
    try:
        beside = os.listdir(path.parent)  # noqa: PTH208 (names only, and no follow-up look)
    except OSError:
        return f"no folder {shown_name} could be in", "correct the path"
    hint = did_you_mean(path.name, beside)
    return f"no file {shown_name}", hint or "correct the name or add the file"


def _syntax_place(message: str, text: str) -> tuple[tuple[int, int], str]:
    """Take line and column out of the parser's message."""
    match = re.search(r" \(at (?:line (\d+), column (\d+)|end of document)\)$", message)
    reason = reason_of(message[: match.start()] if match else message)
    if match and match[1]:
        return (int(match[1]), int(match[2])), reason
    plain = text.replace("\r\n", "\n")
    return _place(plain, len(plain)), reason


def _place(text: str, offset: int) -> tuple[int, int]:
    start = text.rfind("\n", 0, offset) + 1
    return text.count("\n", 0, offset) + 1, offset - start + 1
