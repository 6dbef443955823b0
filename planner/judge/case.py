"""What one judgement reads, and the speeds that a stretch of the run covers."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Mapping

    from planner.model.plan import Plan, Segment
    from planner.model.results import Predictions, Quantity

WHOLE_RUN = "run"
"""Where a number or a hazard belongs to the run and to no single segment."""


@dataclass(frozen=True)
class Span:
    """A closed range of rotor speeds."""

    lowest_rad_s: float
    highest_rad_s: float

    def meets(self, other: Span) -> bool:
        """Tell whether any speed lies in both."""
        return (
            self.lowest_rad_s <= other.highest_rad_s and other.lowest_rad_s <= self.highest_rad_s
        )

    def within(self, other: Span) -> Span:
        """Cut off what lies outside the other range; meant for ranges that meet."""
        return Span(
            max(self.lowest_rad_s, other.lowest_rad_s),
            min(self.highest_rad_s, other.highest_rad_s),
        )

    def including(self, speed_rad_s: float) -> Span:
        """Widen to reach a speed; NaN changes nothing."""
        if math.isnan(speed_rad_s):
            return self
        return Span(min(self.lowest_rad_s, speed_rad_s), max(self.highest_rad_s, speed_rad_s))


EVERY_SPEED = Span(0.0, math.inf)


@dataclass(frozen=True)
class Case:
    """A plan with its segments by label, the vocabulary and the predictions."""

    plan: Plan
    segments: Mapping[str, Segment]
    vocabulary: Mapping[str, Quantity]
    predictions: Predictions

    @cached_property
    def spans(self) -> Mapping[str, Span]:
        """Speeds of each segment: its window and the error of the speed gauge."""
        error = abs(self.plan.stand.speed_gauge_error_rad_s)
        return {s.id: Span(*s.ends_rad_s(error)) for s in self.segments.values()}

    @cached_property
    def whole_run(self) -> Span:
        """From rest to the highest speed of any segment."""
        return Span(0.0, max((s.highest_rad_s for s in self.spans.values()), default=0.0))

    @cached_property
    def unfitted_modes(self) -> frozenset[str]:
        """Labels of given modes that are not stated to be found with the rotor's mass fitted."""
        return frozenset(
            f"{mode.family} {mode.name}"
            for mode in self.plan.stand.modes
            if mode.rotor_fitted is not True
        )
