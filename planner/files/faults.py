"""What is wrong in a plan folder: one fault each, with its place and its mend."""

from __future__ import annotations

import difflib
import re
from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterable

_LONGEST_SHOWN = 60
_MINUS_LIKE = (
    "\N{MINUS SIGN}\N{EN DASH}\N{EM DASH}\N{HYPHEN}\N{NON-BREAKING HYPHEN}\N{FIGURE DASH}"
    "\N{SMALL HYPHEN-MINUS}\N{FULLWIDTH HYPHEN-MINUS}"
)


@dataclass(frozen=True)
class Fault:
    """One thing that must be mended before the plan can be read."""

    file: str
    line: int
    column: int
    key: str
    """Dotted key, empty where the fault is about the whole file."""
    expected: str
    found: str
    mend: str

    def __str__(self) -> str:
        """Print as ``file:line:column: key: expected ..., found ...; mend``."""
        key = f"{visible(self.key)}: " if self.key else ""
        place = f"{visible(self.file)}:{self.line}:{self.column}"
        return f"{place}: {key}expected {self.expected}, found {self.found}; {self.mend}"


class PlanFaults(Exception):  # noqa: N818 (it carries faults, in the plural)
    """All faults of all files of a plan, in reading order of the files."""

    def __init__(self, faults: Iterable[Fault], files: Iterable[str] = ()) -> None:
        """Sort by file, in the order in which they were read, then by place; drop repeats."""
        unsorted = list(dict.fromkeys(faults))
        names = dict.fromkeys([*files, *(fault.file for fault in unsorted)])
        order = {name: rank for rank, name in enumerate(names)}
        self.faults = tuple(
            sorted(unsorted, key=lambda f: (order[f.file], f.line, f.column, f.key))
        )
        super().__init__("\n".join(str(fault) for fault in self.faults))


def visible(text: str) -> str:
    r"""Replace characters that would not print as themselves, such as U+202E, by their code.

    Example:
        >>> visible("a\u202eb")
        'a<U+202E>b'
    """
    return "".join(c if c.isprintable() else f"<U+{ord(c):04X}>" for c in text)


def shown(value: object) -> str:
    """Describe a value as it stands in the file, short and on one line.

    Example:
        >>> shown("5,5 m"), shown(True), shown([1, 2]), shown({})
        ('"5,5 m"', 'true', 'an array of 2', 'a table')
    """
    if isinstance(value, str):
        cut = value if len(value) <= _LONGEST_SHOWN else value[:_LONGEST_SHOWN] + "..."
        return f'"{visible(cut)}"'
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, dict | list):
        return "a table" if isinstance(value, dict) else f"an array of {len(value)}"
    huge = isinstance(value, int) and abs(value) > 10**_LONGEST_SHOWN
    return "a very large integer" if huge else str(value)[:_LONGEST_SHOWN]


def did_you_mean(word: str, known: Iterable[str]) -> str:
    """Suggest the nearest known word, or give an empty text.

    Example:
        >>> did_you_mean("raduis", ["radius", "chord"])
        'did you mean "radius"?'
    """
    close = difflib.get_close_matches(word, sorted(known), n=1, cutoff=0.6)
    return f'did you mean "{close[0]}"?' if close else ""


def minus_mend(text: str) -> str:
    r"""Say how to write a minus sign that is not the keyboard's, or give an empty text.

    Example:
        >>> minus_mend("\N{MINUS SIGN}1.5 deg"), minus_mend("-1.5 deg")
        ('write the minus sign as the keyboard\'s "-"', '')
    """
    sign = re.match(rf"\s*[{_MINUS_LIKE}]\s*[\d.]|[\s\d.+-]*[eE][{_MINUS_LIKE}]\d", text)
    return 'write the minus sign as the keyboard\'s "-"' if sign else ""


def listed(words: Iterable[str], joint: str = "or") -> str:
    """Join words as ``a, b or c``.

    Example:
        >>> listed(["a", "b", "c"])
        'a, b or c'
    """
    *first, last = [*words] or ["none"]
    return f"{', '.join(first)} {joint} {last}" if first else last
