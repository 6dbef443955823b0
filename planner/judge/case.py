"""What one judgement reads: places of the run with the speeds that they cover."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from planner.model.plan import ABORT_CAUSES
from planner.model.results import Status

if TYPE_CHECKING:
    from collections.abc import Mapping

    from planner.model.plan import KeepOut, Plan, Segment
    from planner.model.results import Labels, Predictions, Quantity

WHOLE_RUN = "run"
"""Where a number or a hazard belongs to the run and to no single segment."""

ABORT = "abort"
"""Where a number or a hazard belongs to an abort, from wherever it begins."""


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
class Place:
    """A segment of the run, or an abort that begins in it."""

    segment: Segment
    span: Span
    state: str = ""
    """Cause of the abort; empty: the segment itself."""

    @property
    def kind(self) -> str:
        """Kind of segment, or ``abort``."""
        return ABORT if self.state else self.segment.kind

    @property
    def words(self) -> str:
        """Where it is, for a reason."""
        if self.state:
            return f"the {abort_words(self.segment.id, self.state)}"
        return self.segment.id

    @property
    def must_occur(self) -> bool:
        """Tell whether no hub and no shutdown can make this place not apply.

        With power cut the controls are either commanded or frozen, from any turning rotor; a
        brake that is lost and a stop that does not re-seat need a brake and such a stop.
        """
        return self.state in ABORT_CAUSES[:2] and self.segment.top_rad_s > 0.0

    def enters(self, band: KeepOut) -> bool:
        """Tell whether its target speeds enter a keep-out band; an abort runs down to rest."""
        if self.state:
            return band.from_rad_s < self.segment.top_rad_s
        return self.segment.enters(band)

    @property
    def targets_rad_s(self) -> tuple[float, float]:
        """Lowest and highest target speed; an abort runs down to rest."""
        low, high = sorted((self.segment.from_rad_s, self.segment.to_rad_s))
        return (0.0 if self.state else low), high


def abort_words(segment: str, state: str) -> str:
    """Where an abort begins and what caused it, in words.

    Example:
        >>> abort_words("1.3h", "controls frozen")
        'abort from 1.3h, controls frozen'
    """
    return f"abort from {segment or 'anywhere'}, {state}"


def harmonic_words(harmonic: str) -> str:
    """A harmonic, or the stand mode that a blade mode is held against, in words.

    Example:
        >>> harmonic_words("4"), harmonic_words("stand lateral, Ω - ω")
        ('4 per rev', 'against stand lateral, Ω - ω')
    """
    if not harmonic:
        return ""
    return f"{harmonic} per rev" if harmonic.isdigit() else f"against {harmonic}"


def place_words(labels: Labels) -> str:
    """Labels in words; the whole run where all are empty."""
    where = abort_words(labels.segment, labels.state) if labels.state else labels.segment
    parts = [
        where,
        labels.mode,
        harmonic_words(labels.harmonic),
        f"band {labels.band}" if labels.band else "",
    ]
    return ", ".join(part for part in parts if part) or "whole run"


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
    def stretches(self) -> tuple[Place, ...]:
        """Every segment as a place of its own."""
        return tuple(Place(s, self.spans[s.id]) for s in self.segments.values())

    @cached_property
    def aborts(self) -> tuple[Place, ...]:
        """Aborts from every segment but the final stop, which is one itself, for every cause.

        Each runs through all speeds from the segment's highest down to rest.
        """
        return tuple(
            Place(s, Span(0.0, self.spans[s.id].highest_rad_s), cause)
            for s in self.segments.values()
            if s.kind != "stop"
            for cause in ABORT_CAUSES
        )

    def places_of(self, quantity: Quantity) -> tuple[Place, ...]:
        """Places where a quantity of each segment may have numbers."""
        return (*self.stretches, *self.aborts) if "state" in quantity.axes else self.stretches

    @cached_property
    def whole_run(self) -> Span:
        """From rest to the highest speed of any segment."""
        return Span(0.0, max((s.highest_rad_s for s in self.spans.values()), default=0.0))

    @cached_property
    def frequencies(self) -> Mapping[str, Span]:
        """Range of the natural frequency of each mode of which every row is sound [rad/s]."""
        found = self.predictions.get("mode_frequency")
        if found is None:
            return {}
        numbers: dict[str, list[float]] = {}
        columns = (found.value.tolist(), found.low.tolist(), found.high.tolist())
        for labels, status, *row in zip(found.labels, found.status, *columns, strict=True):
            sound = row if status is Status.OK else [math.nan]
            numbers.setdefault(labels.mode, []).extend(sound)
        return {
            mode: Span(min(ends), max(ends))
            for mode, ends in numbers.items()
            if all(math.isfinite(end) for end in ends)
        }

    def passes(self, place: Place, mode: str) -> bool:
        """Tell whether a place's speeds reach the frequency of a mode of the stand.

        The frequency's allowance and the gauge's error are counted in. A mode whose frequency is
        not known is passed by every rotor that turns.
        """
        low, high = place.targets_rad_s
        frequency = self.frequencies.get(mode)
        if frequency is None:
            return high > 0.0
        error = abs(self.plan.stand.speed_gauge_error_rad_s)
        return low < frequency.highest_rad_s + error and high > frequency.lowest_rad_s - error

    @cached_property
    def unfitted_modes(self) -> frozenset[str]:
        """Labels of given modes that are not stated to count the rotor's mass."""
        return frozenset(m.label for m in self.plan.stand.modes if not m.counts_rotor)
