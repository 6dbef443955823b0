"""Texts, ids, file names and dates of a plan folder, with their checks and JSON Schema."""

from __future__ import annotations

import datetime
import re
import unicodedata
from dataclasses import dataclass
from pathlib import PurePosixPath
from typing import Any

from pydantic_core import PydanticCustomError

from planner.files.faults import listed, shown
from planner.files.schema_values import Leaf, Printable, refuse

LONGEST_TEXT = 2_000
_LONGEST_FILE_NAME = 500


@dataclass(frozen=True)
class Text(Leaf):
    """Free text for people; runs of blanks and line ends become one space."""

    empty: bool = False
    longest: int = LONGEST_TEXT
    blank: Any = ""

    def read(self, value: object, printable: Printable | None) -> str:
        """Refuse what is not text, is too long or cannot be printed."""
        expected = f"a text of at most {self.longest} characters"
        if not isinstance(value, str):
            refuse(expected, shown(value), "write the text in quotes")
        if len(value) > self.longest:
            refuse(expected, f"{len(value)} characters", "shorten the text")
        _refuse_unprintable(value, printable)
        text = " ".join(part for part in re.split(r"[ \t\r\n]+", value) if part)
        if not text and not self.empty:
            refuse("a text that is not empty", shown(value), "fill it in")
        return text

    def json_schema(self) -> dict[str, Any]:
        """String with its longest length."""
        schema: dict[str, Any] = {"type": "string", "maxLength": self.longest}
        return schema if self.empty else schema | {"pattern": r"\S"}


@dataclass(frozen=True)
class Identifier(Leaf):
    """A short name that other entries and printed rows refer to."""

    blank: Any = ""
    pattern = r"^[A-Za-z0-9][A-Za-z0-9 ._-]{0,58}[A-Za-z0-9]$|^[A-Za-z0-9]$"

    def read(self, value: object, printable: Printable | None) -> str:
        """Refuse anything but letters, digits and inner spaces, dots, dashes, underscores."""
        del printable
        if not isinstance(value, str) or not re.fullmatch(self.pattern, value):
            refuse(
                "an id of at most 60 letters, digits, spaces, dots, dashes or underscores",
                shown(value),
                'write for example "flap-1"',
            )
        return value

    def json_schema(self) -> dict[str, Any]:
        """String with a pattern."""
        return {"type": "string", "pattern": self.pattern}


@dataclass(frozen=True)
class FileName(Leaf):
    """A path to another file, relative to the file that names it, with forward slashes."""

    example: str = "rotor.toml"
    blank: Any = ""

    def read(self, value: object, printable: Printable | None) -> str:
        """Refuse absolute paths, backslashes and unprintable characters."""
        expected = "a relative path with forward slashes"
        if not isinstance(value, str) or not value.strip() or len(value) > _LONGEST_FILE_NAME:
            refuse(expected, shown(value), f'write for example "{self.example}"')
        if "\\" in value:
            refuse(expected, shown(value), 'write "/" instead of "\\"')
        if PurePosixPath(value).is_absolute() or re.match(r"[A-Za-z]:", value):
            refuse(expected, shown(value), "name the file relative to the one that names it")
        _refuse_unprintable(value, printable)
        return value

    def accepts(self, value: str) -> bool:
        """Would ``read`` accept the text?"""
        try:
            self.read(value, None)
        except PydanticCustomError:
            return False
        return True

    def json_schema(self) -> dict[str, Any]:
        """String without a leading slash or any backslash."""
        return {"type": "string", "pattern": r"^[^/\\][^\\]*$", "examples": [self.example]}


@dataclass(frozen=True)
class Moment(Leaf):
    """A date and time with its time zone, as TOML date-time or text; kept as printed text."""

    blank: Any = ""

    def read(self, value: object, printable: Printable | None) -> str:
        """Refuse what is no real date and time or has no zone."""
        del printable
        expected = 'a date and time with its zone, such as "2026-11-30 08:00 UTC"'
        moment = value
        if isinstance(value, str):
            text = re.sub(r" ?(UTC|Z)$", "+00:00", value.strip())
            if not re.match(r"\d{4}-\d\d-\d\d[ T]\d\d:\d\d", text):
                refuse(expected, shown(value), "write year-month-day hour:minute zone")
            try:
                moment = datetime.datetime.fromisoformat(re.sub(r" (?=[+-]\d\d:\d\d$)", "", text))
            except ValueError:
                refuse(expected, shown(value), "write a day, time and zone that exist")
        if not isinstance(moment, datetime.datetime):
            refuse(expected, shown(value), "write date, time and zone")
        if moment.tzinfo is None:
            refuse(expected, shown(value), "add the zone: UTC, or an offset such as +01:00")
        offset = f"{moment:%z}"
        zone = "UTC" if offset == "+0000" else f"{offset[:3]}:{offset[3:5]}"
        return f"{moment:%Y-%m-%d %H:%M} {zone}"

    def json_schema(self) -> dict[str, Any]:
        """String; editors see a TOML date-time as a string too."""
        return {"type": "string", "examples": ["2026-11-30 08:00 UTC"]}


def moment_of(text: str) -> datetime.datetime:
    """Turn the text that ``Moment`` keeps back into a date and time, for comparing."""
    date, time, zone = text.split(" ")
    offset = "+00:00" if zone == "UTC" else zone
    return datetime.datetime.fromisoformat(f"{date} {time}{offset}")


@dataclass(frozen=True)
class Day(Leaf):
    """A date, as TOML date or text; kept as ``2026-11-30``."""

    blank: Any = ""

    def read(self, value: object, printable: Printable | None) -> str:
        """Refuse what is no real date."""
        del printable
        expected = 'a date such as "2026-11-30"'
        if isinstance(value, datetime.date) and not isinstance(value, datetime.datetime):
            return value.isoformat()
        if not isinstance(value, str) or not re.fullmatch(r"\d{4}-\d\d-\d\d", value, re.ASCII):
            refuse(expected, shown(value), "write year-month-day")
        try:
            return datetime.date.fromisoformat(value).isoformat()
        except ValueError:
            refuse(expected, shown(value), "write a day that exists")

    def json_schema(self) -> dict[str, Any]:
        """String with the form of a date."""
        return {"type": "string", "pattern": r"^\d{4}-\d\d-\d\d$", "examples": ["2026-11-30"]}


def _refuse_unprintable(text: str, printable: Printable | None) -> None:
    """Refuse control, bidirectional, surrogate, private and unprintable characters."""
    bad = [
        c
        for c in text
        if unicodedata.category(c) in {"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"}
        and c not in "\n\r\t"
    ]
    if bad:
        codes = listed([f"U+{ord(c):04X}" for c in dict.fromkeys(bad[:5])], "and")
        refuse("text without control characters", codes, "remove them")
    missing = printable(re.sub(r"[\n\r\t]", " ", text)) if printable else ""
    if missing:
        refuse("characters that the printed card has", missing, "write them in other characters")
