"""What is marched: ramps, the stop and aborts, in pieces that many of them share.

Flap forgets within a few turns, so a history is marched in pieces side by side, each with turns of
its own before it: where the stops matter in one piece, in all winds; above that in short pieces,
in fewer winds.

An abort is its first piece, until controls have reached their place, and the run-down after it.
The upper part of the run-down is marched once for all aborts that come to it with the same
controls: from the fastest of them, and again from about two thirds of that speed and so on, so
that a slow origin is not charged with the loads of a fast one. The lower part begins at one speed
for all; there a lost brake or a stop that does not re-seat tells.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from itertools import pairwise
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
    from planner.model.rotor import Stop
    from planner.predict.histories import FoundRunDown, Order
    from planner.predict.shaft import Shaft
    from planner.rotor.speed_history import Controls, History

    FloatArray = NDArray[np.float64]

LADDER = 1.5
"""Ratio of the speeds from which shared run-downs begin."""
SETTLED_S = 3.0
"""How long the first piece of an abort goes on when its controls have reached their place."""
LOW_SHARE = 1.3
"""The lower part of a history begins this much above the speed where the stops are left behind."""
ABOVE_CHANGE = 1.1
"""It also begins this much above release and brake speed."""
PIECE_S = 6.0
"""Longest piece of the upper part of a history."""


@dataclass(frozen=True, eq=False)
class Track:
    """One history to be marched in all its winds.

    Attributes:
        history: Speed and controls over time.
        seats: The retracting droop stop re-seats.
        is_low: It passes the region of the stops.
        begins_s: When it begins within the history that it is a piece of.
    """

    history: History
    seats: bool
    is_low: bool
    begins_s: float = 0.0

    @property
    def is_at_rest(self) -> bool:
        """It begins or ends at rest."""
        return bool(np.min(self.history.speed_rad_s[[0, -1]]) <= 0.0)

    @property
    def key(self) -> tuple[bytes, bytes, bool]:
        """Equal for tracks that are the same."""
        history = self.history
        pitch = (history.collective_rad, history.cyclic_cosine_rad, history.cyclic_sine_rad)
        return history.speed_rad_s.tobytes(), np.stack(pitch).tobytes(), self.seats


def pieces_of(history: History, low_rad_s: float, *, seats: bool = True) -> tuple[Track, ...]:
    """A history in pieces: whole below a speed, short above it.

    Args:
        history: Speed and controls over time.
        low_rad_s: Speed below which the stops matter.
        seats: The retracting droop stop re-seats.

    Returns:
        The pieces in order of time, each beginning with the row that the one before ends with.
    """
    low = history.speed_rad_s < low_rad_s
    edges = [0, *(np.flatnonzero(low[1:] != low[:-1]) + 1).tolist(), low.size - 1]
    rows = max(2, round(PIECE_S / history.step_s))
    found = []
    for start, end in pairwise(edges):
        is_low = bool(low[start])
        parts = 1 if is_low else max(1, math.ceil((end - start) / rows))
        inner = np.linspace(start, end, parts + 1).round().astype(int).tolist()
        found += [
            Track(rows_of(history, a, b), seats, is_low, a * history.step_s)
            for a, b in pairwise(inner)
            if b > a
        ]
    return tuple(found)


def rows_of(history: History, first: int, last: int) -> History:
    """Rows of a history from one to another, both included."""
    cut = slice(first, last + 1)
    return replace(
        history,
        speed_rad_s=history.speed_rad_s[cut],
        collective_rad=history.collective_rad[cut],
        cyclic_cosine_rad=history.cyclic_cosine_rad[cut],
        cyclic_sine_rad=history.cyclic_sine_rad[cut],
    )


def low_speed_rad_s(free_rad_s: float, droop: Stop | None, brakes_rad_s: Sequence[float]) -> float:
    """Speed below which a history is marched in one piece and in all winds.

    Args:
        free_rad_s: Where the stops are left behind.
        droop: The droop stop.
        brakes_rad_s: Speeds from which brakes act.

    Returns:
        The speed, above release and brakes.
    """
    release = 0.0
    if droop is not None and droop.retraction is not None:
        release = droop.retraction.release_rad_s
    return max(LOW_SHARE * free_rad_s, ABOVE_CHANGE * max(release, *brakes_rad_s, 0.0))


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
        self, shaft: Shaft, abort: AbortActions, low_rad_s: float, sources: Sequence[Source]
    ) -> None:
        """Take what aborts are made from."""
        self._shaft, self._abort, self._low = shaft, abort, low_rad_s
        self._sources = [s for s in sources if s.speed_rad_s > 0.0]
        self._found: dict[Order, FoundRunDown] = {}
        self._pieces: dict[tuple[Order, bool, bool], tuple[Track, ...]] = {}

    def aborts(self, causes: Sequence[str]) -> list[Abort]:
        """All causes from all sources; their run-downs are found as one batch."""
        wanted = [self._orders(source, cause) for source in self._sources for cause in causes]
        orders = dict.fromkeys(order for one in wanted for order in one.orders)
        self._found = dict(zip(orders, run_downs(self._shaft, list(orders)), strict=True))
        return [self._abort_of(one) for one in wanted]

    def _orders(self, source: Source, cause: str) -> _Wanted:
        origin = Origin(source.speed_rad_s, source.controls)
        try:
            own = abort_order(self._shaft, self._abort, origin, cause)
        except NotAssessedError as refusal:
            return _Wanted(source, cause, status=refusal.status, reason=str(refusal))
        if cause == FROZEN:
            uppers = [self._frozen(source, controls) for controls in source.frozen]
        else:
            uppers = [self._commanded(source, own)]
        starts = [
            max(self._low, 0.0) if u.from_rad_s > self._low else u.from_rad_s for u in uppers
        ]
        lowers = [
            replace(
                upper, from_rad_s=start, brake_from_rad_s=own.brake_from_rad_s, brake_delay_s=0.0
            )
            for upper, start in zip(uppers, starts, strict=True)
        ]
        return _Wanted(source, cause, own, tuple(uppers), tuple(lowers))

    def _frozen(self, source: Source, controls: Controls) -> Order:
        """The shared run-down with controls that stay where a hold had them."""
        speeds = [
            s.speed_rad_s for s in self._sources if controls in s.frozen and len(s.frozen) == 1
        ]
        start = _rung([*speeds, source.speed_rad_s], source.speed_rad_s)
        order = abort_order(self._shaft, self._abort, Origin(start, controls), FROZEN)
        return replace(order, brake_delay_s=0.0)

    def _commanded(self, source: Source, own: Order) -> Order:
        """The shared run-down with the controls that are commanded, taken up before it begins."""
        start = _rung([s.speed_rad_s for s in self._sources], source.speed_rad_s)
        move = replace(own.move, start=own.move.target, delay_s=0.0)
        brake = self._shaft.brake_from_rad_s(
            self._abort.brake_from_rad_s, is_used=self._abort.brake
        )
        return replace(own, from_rad_s=start, move=move, brake_from_rad_s=brake, brake_delay_s=0.0)

    def _abort_of(self, wanted: _Wanted) -> Abort:
        source, cause = wanted.source, wanted.cause
        bare = Abort(source.segment, cause, source.speed_rad_s)
        if wanted.own is None:
            return replace(bare, status=wanted.status, reason=wanted.reason)
        try:
            return replace(bare, tracks=self._parts(wanted, wanted.own))
        except NotAssessedError as refusal:
            return replace(bare, status=refusal.status, reason=str(refusal))

    def _parts(self, wanted: _Wanted, own: Order) -> tuple[Track, ...]:
        seats = wanted.cause != NOT_RESEATED
        tracks = list(self._first(own, seats=seats))
        for upper, lower in zip(wanted.uppers, wanted.lowers, strict=True):
            tracks += self._cut(upper, above=True, seats=True)
            tracks += self._cut(lower, above=False, seats=seats)
        return tuple(tracks)

    def _cut(self, order: Order, *, above: bool, seats: bool) -> tuple[Track, ...]:
        """Pieces of a run-down above or below the low speed, made once."""
        key = (order, above, seats)
        if key not in self._pieces:
            history = self._found[order].history("run-down of an abort")
            pieces = pieces_of(history, self._low, seats=seats)
            self._pieces[key] = tuple(piece for piece in pieces if piece.is_low != above)
        return self._pieces[key]

    def _first(self, own: Order, *, seats: bool) -> tuple[Track, ...]:
        """The beginning of a run-down, until its controls have reached their place and settled."""
        whole = self._found[own].history("first piece of an abort")
        end = own.move.delay_s + SETTLED_S
        if not own.move.is_frozen:
            end += max(own.move.collective_s, own.move.cyclic_rad / own.move.rate_rad_s)
        last = min(whole.speed_rad_s.size - 1, math.ceil(end / whole.step_s) + 1)
        return pieces_of(rows_of(whole, 0, last), self._low, seats=seats)


@dataclass(frozen=True)
class _Wanted:
    """An abort that is to be put together: its own run-down, and the shared ones after it."""

    source: Source
    cause: str
    own: Order | None = None
    uppers: tuple[Order, ...] = ()
    lowers: tuple[Order, ...] = ()
    status: Status = Status.OK
    reason: str = ""

    @property
    def orders(self) -> tuple[Order, ...]:
        """All run-downs that it needs."""
        return () if self.own is None else (self.own, *self.uppers, *self.lowers)


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
