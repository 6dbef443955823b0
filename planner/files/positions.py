"""Where each key and value of a TOML text stands, by line and column.

``tomllib`` gives no positions. This index reads the same text again, *after* ``tomllib`` accepted
it, and therefore only needs to follow valid TOML.
"""

from __future__ import annotations

import bisect
import re
import tomllib
from dataclasses import dataclass

KeyPath = tuple[str | int, ...]
"""Keys and array indices from the root of a document."""

Place = tuple[int, int]
"""Line and column, both counted from one."""

_SPACE = re.compile(r"[ \t]*")
_BLANK = re.compile(r"(?:[ \t\n]+|#[^\n]*)*")
_BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")
_STRING = re.compile(
    r'"""(?:[^\\]|\\.)*?"""(?:"{1,2})?'
    r"|'''.*?'''(?:'{1,2})?"
    r'|"(?:[^"\\]|\\.)*"'
    r"|'[^']*'",
    re.DOTALL,
)
_PLAIN = re.compile(r"\d{4}-\d\d-\d\d \d\d:\d\d[^\s,\]}#]*|[^\s,\]}#]+")


@dataclass(frozen=True)
class Positions:
    """Places of keys and of values, by key path."""

    keys: dict[KeyPath, Place]
    values: dict[KeyPath, Place]

    def key(self, path: KeyPath) -> Place:
        """Place of the key, else of the nearest table around it, else the document's start."""
        for length in range(len(path), 0, -1):
            place = self.keys.get(path[:length])
            if place is not None:
                return place
        return (1, 1)

    def value(self, path: KeyPath) -> Place:
        """Place of the value behind the key; for a table under a header, that of the header."""
        return self.values.get(path) or self.key(path)


def index(text: str) -> Positions:
    r"""Index a TOML text that ``tomllib`` accepts.

    Raises:
        RecursionError: arrays or inline tables are nested too deeply.

    Example:
        >>> index("[a]\nb = [1, 2]").value(("a", "b", 1))
        (2, 9)
    """
    scan = _Scan(text.replace("\r\n", "\n"))
    scan.document()
    starts = [0, *(match.end() for match in re.finditer("\n", scan.text))]

    def place(offset: int) -> Place:
        line = bisect.bisect_right(starts, offset)
        return line, offset - starts[line - 1] + 1

    return Positions(
        keys={path: place(offset) for path, offset in scan.keys.items()},
        values={path: place(offset) for path, offset in scan.values.items()},
    )


class _Scan:
    """One pass over the text, front to back, that notes offsets."""

    def __init__(self, text: str) -> None:
        self.text = text
        self.at = 0
        self.keys: dict[KeyPath, int] = {}
        self.values: dict[KeyPath, int] = {}
        self._lengths: dict[KeyPath, int] = {}

    def document(self) -> None:
        table: KeyPath = ()
        self._skip(_BLANK)
        while self.at < len(self.text):
            if self.text[self.at] == "[":
                table = self._header()
            else:
                self._pair(table)
            self._skip(_BLANK)

    def _skip(self, pattern: re.Pattern[str]) -> str:
        match = pattern.match(self.text, self.at)
        if match is None:
            msg = f"not TOML at offset {self.at}: index only what tomllib accepts"
            raise ValueError(msg)
        self.at = match.end()
        return match.group()

    def _header(self) -> KeyPath:
        brackets = 2 if self.text.startswith("[[", self.at) else 1
        self.at += brackets
        *parents, (last, offset) = self._key()
        self.at += brackets
        path: KeyPath = ()
        for name, parent_offset in parents:
            path = (*path, name)
            self.keys.setdefault(path, parent_offset)
            if path in self._lengths:
                path = (*path, self._lengths[path] - 1)
        path = (*path, last)
        if brackets == 1:
            self.keys[path] = offset
            return path
        self.keys.setdefault(path, offset)
        element = self._lengths.get(path, 0)
        self._lengths[path] = element + 1
        path = (*path, element)
        self.keys[path] = offset
        return path

    def _key(self) -> list[tuple[str, int]]:
        """Read ``a . "b" . c`` as names with their offsets, up to the first other sign."""
        names: list[tuple[str, int]] = []
        while True:
            self._skip(_SPACE)
            offset = self.at
            if self.text[self.at] in "\"'":
                raw = self._skip(_STRING)
                name = tomllib.loads(f"key = {raw}")["key"] if "\\" in raw else raw[1:-1]
            else:
                name = self._skip(_BARE_KEY)
            names.append((name, offset))
            self._skip(_SPACE)
            if self.text[self.at] != ".":
                return names
            self.at += 1

    def _pair(self, table: KeyPath) -> None:
        path = table
        for name, offset in self._key():
            path = (*path, name)
            self.keys.setdefault(path, offset)
        self.at += 1
        self._skip(_SPACE)
        self._value(path)

    def _value(self, path: KeyPath) -> None:
        self.values[path] = self.at
        sign = self.text[self.at]
        if sign == "[":
            self._array(path)
        elif sign == "{":
            self._inline_table(path)
        else:
            self._skip(_STRING if sign in "\"'" else _PLAIN)

    def _array(self, path: KeyPath) -> None:
        self.at += 1
        element = 0
        while True:
            self._skip(_BLANK)
            if self.text[self.at] == "]":
                break
            if self.text[self.at] == ",":
                self.at += 1
                continue
            self.keys[*path, element] = self.at
            self._value((*path, element))
            element += 1
        self.at += 1

    def _inline_table(self, path: KeyPath) -> None:
        self.at += 1
        while True:
            self._skip(_BLANK)
            if self.text[self.at] == "}":
                break
            if self.text[self.at] == ",":
                self.at += 1
                continue
            self._pair(path)
        self.at += 1
