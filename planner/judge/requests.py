"""What the rules need computed; goes forward before predicting and never holds a limit."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from planner.model.results import Requests

if TYPE_CHECKING:
    from planner.model.rules import Allowance, RuleBook


def requests(book: RuleBook) -> Requests:
    """Collect the model allowances and the margin on lift-off speed of a rule book.

    Where merged books state one allowance twice, the wider end of each counts.

    Raises:
        ValueError: an allowance that is not 0 < low <= high, or a negative margin.
    """
    widest: dict[str, tuple[float, float]] = {}
    for allowance in book.allowances:
        _check(allowance)
        low, high = widest.get(allowance.id, (allowance.low, allowance.high))
        widest[allowance.id] = (min(low, allowance.low), max(high, allowance.high))
    margin = book.stop_free_margin
    if margin is not None and not 0.0 <= margin < math.inf:
        msg = f"stop_free_margin must be a share of 0 % or more, got {margin}; mend the rule book"
        raise ValueError(msg)
    return Requests(widest, margin)


def _check(allowance: Allowance) -> None:
    if not 0.0 < allowance.low <= allowance.high < math.inf:
        msg = (
            f"allowance {allowance.id!r} must have 0 < low <= high, got low {allowance.low} "
            f"and high {allowance.high}; mend the rule book"
        )
        raise ValueError(msg)
