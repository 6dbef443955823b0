"""What is marched: the ramps and the stop, and aborts in parts that many of them share.

An abort is its first part, until controls have reached their place, and the run-down after it.
The run-down is marched once for all aborts that come to it with the same controls: from the
fastest of them, and again from about two thirds of that speed and so on, so that a slow origin is
not charged with the loads of a fast one. What a lost brake or a stop that does not re-seat changes
begins at low speed; there one run-down stands for all origins.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.model.results import Status
from planner.predict.histories import (
    FROZEN,
    NOT_RESEATED,
    Origin,
    abort_order,
    run_downs,
)
from planner.predict.study import NotAssessedError

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from numpy.typing import NDArray

    from planner.model.plan import AbortActions
    from planner.predict.histories import FoundRunDown, Order
    from planner.predict.shaft import Shaft
    from planner.rotor.speed_history import Controls, History

    FloatArray = NDArray[np.float64]

LADDER = 1.5
"""Ratio of the speeds from which shared run-downs begin."""
SETTLED_S = 3.0
"""How long the first part of an abort goes on when its controls have reached their place."""
ABOVE_CHANGE = 1.15
"""Run-downs for what changes at low speed begin this much above it."""


@dataclass(frozen=True, eq=False)
class Track:
    """One history to be marched in all its winds.

    Attributes:
        name: What it is, in words.
        history: Speed and controls over time.
        seats: The retracting droop stop re-seats.
        is_low: It passes the region of the stops.
    """

    name: str
    history: History
    seats: bool
    is_low: bool

    @property
    def key(self) -> tuple[bytes, bytes, bool]:
        """Equal for tracks that are the same."""
        history = self.history
        pitch = (history.collective_rad, history.cyclic_cosine_rad, history.cyclic_sine_rad)
        return history.speed_rad_s.tobytes(), np.stack(pitch).tobytes(), self.seats


def track_of(name: str, history: History, free_rad_s: float, *, seats: bool = True) -> Track:
    """A history as a track; ``free_rad_s`` is where the stops are left behind."""
    is_low = bool(np.min(history.speed_rad_s) < free_rad_s)
    return Track(name, history, seats, is_low)


@dataclass(frozen=True)
class Source:
    """A state that aborts start from.

    Attributes:
        segment: Id of the segment.
        speed_rad_s: Rotor speed.
        controls: Controls in force.
        frozen: Controls of holds that a frozen abort is covered by: its own for a hold, those of
            both ends for a ramp.
    """

    segment: str
    speed_rad_s: float
    controls: Controls
    frozen: tuple[Controls, ...]


@dataclass(frozen=True, eq=False)
class Abort:
    """One abort: the tracks that it consists of, or why there are none."""

    segment: str
    cause: str
    speed_rad_s: float
    tracks: tuple[Track, ...] = ()
    status: Status = Status.OK
    reason: str = ""


class AbortTracks:
    """Finds the tracks of aborts, each different one once."""

    def __init__(
        self, shaft: Shaft, abort: AbortActions, free_rad_s: float, sources: Sequence[Source]
    ) -> None:
        """Take what aborts are made from."""
        self._shaft, self._abort, self._free = shaft, abort, free_rad_s
        self._sources = [s for s in sources if s.speed_rad_s > 0.0]
        self._found: dict[Order, FoundRunDown] = {}

    def aborts(self, causes: Sequence[str]) -> list[Abort]:
        """All causes from all sources; their run-downs are found as one batch."""
        wanted = [self._orders(source, cause) for source in self._sources for cause in causes]
        orders = dict.fromkeys(o for one in wanted for o in one.orders)
        self._found = dict(zip(orders, run_downs(self._shaft, list(orders)), strict=True))
        return [self._abort_of(one) for one in wanted]

    def _orders(self, source: Source, cause: str) -> _Wanted:
        origin = Origin(source.speed_rad_s, source.controls)
        try:
            own = abort_order(self._shaft, self._abort, origin, cause)
        except NotAssessedError as refusal:
            return _Wanted(source, cause, None, (), refusal.status, str(refusal))
        if cause == FROZEN:
            tails = [self._frozen(source, controls) for controls in source.frozen]
        else:
            tails = [self._commanded(source, own)]
        return _Wanted(source, cause, own, (*tails, *self._low(source, own, cause)))

    def _frozen(self, source: Source, controls: Controls) -> Order:
        speeds = [
            s.speed_rad_s for s in self._sources if controls in s.frozen and len(s.frozen) == 1
        ]
        start = _rung([*speeds, source.speed_rad_s], source.speed_rad_s)
        return abort_order(self._shaft, self._abort, Origin(start, controls), FROZEN)

    def _commanded(self, source: Source, own: Order) -> Order:
        """The shared run-down with the controls that are commanded, taken up before it begins."""
        start = _rung([s.speed_rad_s for s in self._sources], source.speed_rad_s)
        target = own.move.target
        move = replace(own.move, start=target, delay_s=0.0)
        brake = self._shaft.brake_from_rad_s(
            self._abort.brake_from_rad_s, is_used=self._abort.brake
        )
        return replace(own, from_rad_s=start, move=move, brake_from_rad_s=brake, brake_delay_s=0.0)

    def _low(self, source: Source, own: Order, cause: str) -> tuple[Order, ...]:
        """The run-down where a lost brake or a stop that does not re-seat tells."""
        if cause not in {"brake lost", NOT_RESEATED}:
            return ()
        stop = self._shaft.rotor.droop_stop
        release = 0.0
        if stop is not None and stop.retraction is not None:
            release = stop.retraction.release_rad_s
        change = max(self._abort.brake_from_rad_s, release, 1.0)
        move = replace(own.move, start=own.move.target, delay_s=0.0)
        speed = min(ABOVE_CHANGE * change, max(source.speed_rad_s, change))
        return (replace(own, from_rad_s=speed, move=move, brake_delay_s=0.0),)

    def _abort_of(self, wanted: _Wanted) -> Abort:
        source, cause = wanted.source, wanted.cause
        bare = Abort(source.segment, cause, source.speed_rad_s)
        if not wanted.orders or wanted.own is None:
            return replace(bare, status=wanted.status, reason=wanted.reason)
        try:
            tracks = self._parts(wanted, wanted.own)
        except NotAssessedError as refusal:
            return replace(bare, status=refusal.status, reason=str(refusal))
        return replace(bare, tracks=tracks)

    def _parts(self, wanted: _Wanted, own: Order) -> tuple[Track, ...]:
        seats = wanted.cause != NOT_RESEATED
        first = self._first(own)
        tracks = [track_of("first part of an abort", first, self._free)]
        lows = len(self._low(wanted.source, own, wanted.cause))
        for i, order in enumerate(wanted.orders[1:]):
            low = i >= len(wanted.orders) - 1 - lows
            history = self._found[order].history("run-down of an abort")
            tracks.append(
                track_of("run-down of an abort", history, self._free, seats=seats or not low)
            )
        return tuple(tracks)

    def _first(self, own: Order) -> History:
        """The beginning of a run-down, until its controls have reached their place and settled."""
        whole = self._found[own].history("first part of an abort")
        end = own.move.delay_s + SETTLED_S
        if not own.move.is_frozen:
            end += max(own.move.collective_s, own.move.cyclic_rad / own.move.rate_rad_s)
        rows = min(whole.speed_rad_s.size, int(np.ceil(end / whole.step_s)) + 2)
        return replace(
            whole,
            speed_rad_s=whole.speed_rad_s[:rows],
            collective_rad=whole.collective_rad[:rows],
            cyclic_cosine_rad=whole.cyclic_cosine_rad[:rows],
            cyclic_sine_rad=whole.cyclic_sine_rad[:rows],
        )


@dataclass(frozen=True)
class _Wanted:
    source: Source
    cause: str
    own: Order | None
    tails: tuple[Order, ...]
    status: Status = Status.OK
    reason: str = ""

    @property
    def orders(self) -> tuple[Order, ...]:
        """The abort's own run-down, then the shared ones that cover the rest of it."""
        return () if self.own is None else (self.own, *self.tails)


def _rung(speeds: Sequence[float], speed: float) -> float:
    """Lowest rung of the ladder from the highest speed that is not below a speed."""
    rung = max(speeds)
    for candidate in sorted(set(speeds), reverse=True):
        if candidate >= speed and candidate * LADDER <= rung:
            rung = candidate
    return rung


def distinct(tracks: Sequence[Track]) -> tuple[list[Track], Mapping[int, int]]:
    """Tracks without repetition, and the place of each by its ``id``."""
    places: dict[tuple[bytes, bytes, bool], int] = {}
    kept: list[Track] = []
    where: dict[int, int] = {}
    for track in tracks:
        if track.key not in places:
            places[track.key] = len(kept)
            kept.append(track)
        where[id(track)] = places[track.key]
    return kept, where
