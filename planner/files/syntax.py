"""Text that is no TOML, or nests too deeply: where, and in the words of this tool."""

from __future__ import annotations

import ast
import re
from typing import Any

from planner.files.faults import shown

_DEEPEST = 40
"""Levels of nesting that a document may have; a sound one has six."""

_KEY = r"""(?:[A-Za-z0-9_-]++|"[^"\n]*+"|'[^'\n]*+')"""
_DEEP_KEY = re.compile(rf"(?<![A-Za-z0-9_.-])(?:{_KEY}[ \t]*+\.[ \t]*+){{{_DEEPEST}}}")
_LONG_INTEGER = re.compile(r"[0-9][0-9_]{4000,}")

_REASONS = (
    (r"Invalid statement", "a line that is no key, table or comment"),
    (r"Expected '=' after a key", "a key without ="),
    (r"Expected '\]\]' at the end", "a table header without its ]]"),
    (r"Expected '\]' at the end", "a table header without its ]"),
    (r"Expected newline or end of document", "more text after a value or header"),
    (r"Found invalid character '\\n'|Illegal character '\\n'", "a line end inside a text"),
    (r"Found invalid character|Illegal character", "a control character"),
    (r"Cannot overwrite a value", "a key or table that is already there"),
    (r"Invalid initial character for a key", "no key where one must begin"),
    (r"Unclosed array", "an array without its ]"),
    (r"Unclosed inline table", "an inline table without its }"),
    (r"Unescaped '\\' in a string", 'a single "\\" in a text'),
    (r"Invalid hex value|Escaped character is not", "an escape with no valid character code"),
    (
        r"Unterminated string|Expected \"'''\"|Expected '\"\"\"'",
        "a text without its closing quotes",
    ),
    (r"Expected ['\"]", "a text without its closing quote"),
    (r"Invalid date or datetime", "a date or time that does not exist"),
    (r"Invalid value", "no text, number, date, array or table where a value must stand"),
)
_NAMED_REASONS = (
    (r"Cannot declare (\(.*\)) twice", "the table {}, declared already or inside a closed one"),
    (
        r"Cannot (?:mutate immutable|redefine) namespace (\(.*\))",
        "an addition to the closed table {}",
    ),
    (r"Duplicate inline table key (['\"].*['\"])", "the key {} for the second time"),
)


def reason_of(message: str) -> str:
    """Say what the parser's message means, in the words of this tool.

    Example:
        >>> reason_of("Cannot declare ('site',) twice")
        'the table "site", declared already or inside a closed one'
    """
    for pattern, words in _NAMED_REASONS:
        match = re.match(pattern, message, re.DOTALL)
        if match:
            name = ast.literal_eval(match[1])
            return words.format(shown(name if isinstance(name, str) else ".".join(name)))
    return next(
        (words for pattern, words in _REASONS if re.match(pattern, message)),
        "text that is no TOML",
    )


def deep_key(text: str) -> int | None:
    """Offset of a dotted key of too many parts, which the parser would take ages over.

    Example:
        >>> deep_key("[" + ".".join(50 * "a") + "]"), deep_key("[a.b]")
        (1, None)
    """
    match = _DEEP_KEY.search(text)
    return match.start() if match else None


def long_integer(text: str) -> int:
    """Offset of an integer of thousands of digits, 0 where there is none."""
    match = _LONG_INTEGER.search(text)
    return match.start() if match else 0


def too_deep(data: dict[str, Any]) -> bool:
    """Do arrays and tables nest more deeply than any sound document's?

    Example:
        >>> too_deep({"a": [{"b": 1}]})
        False
    """
    level: list[Any] = [data]
    for _ in range(_DEEPEST):
        children = (node.values() if isinstance(node, dict) else node for node in level)
        level = [item for inner in children for item in inner if isinstance(item, dict | list)]
        if not level:
            return False
    return True
