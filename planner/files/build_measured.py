"""What measured frequencies of rotor and stand have in common."""

from __future__ import annotations

import math
import re
from typing import TYPE_CHECKING

from planner.files.faults import did_you_mean

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from planner.files.source import Document

_SAME = 1e-6
"""Speeds [rad/s] and angles [rad] that differ by less than this are one."""


def nearest_label(mode: str, labels: Iterable[str]) -> str:
    """Suggest the label that was meant, or give an empty text.

    A mode of another order is another mode, with another frequency: it is never suggested.

    Example:
        >>> nearest_label("flop 2", ["flap 1", "flap 2"]), nearest_label("flap 3", ["flap 2"])
        ('did you mean "flap 2"?', '')
    """
    order = re.findall(r"\d+", mode)
    return did_you_mean(mode, [label for label in labels if re.findall(r"\d+", label) == order])


def check_repeats(
    document: Document, entries: Sequence[tuple[str, float, float]], where: str
) -> None:
    """Add a fault for each mode that is measured twice in one place.

    Args:
        document: File of the ``[[measured_mode]]`` tables.
        entries: Mode, speed [rad/s] and collective [rad] of each; unknown ones blank or NaN.
        where: What one place is, in words.
    """
    for i, entry in enumerate(entries):
        if entry[0] and any(_is_same(entry, other) for other in entries[:i]):
            expected = f"each mode once at {where}"
            mend = "remove one of the two, or correct it"
            document.fault(("measured_mode", i, "mode"), expected, mend)


def _is_same(one: tuple[str, float, float], other: tuple[str, float, float]) -> bool:
    near = (math.isclose(a, b, abs_tol=_SAME) for a, b in zip(one[1:], other[1:], strict=True))
    return one[0] == other[0] and all(near)
