"""The schedules of a plan over time: ramps, the stop, and aborts from anywhere."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from operator import attrgetter
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.run_down import RunDown, Travel, lanes_of, reach, run_up
from planner.methods.run_down import run_down as run_down_path
from planner.methods.shaft_torque import finer_torque
from planner.model.plan import ABORT_CAUSES
from planner.model.results import Status
from planner.predict.shaft import TAKES, ends_of, shaft_of
from planner.predict.study import Inputs, NotAssessedError
from planner.predict.study_air import AIR, WIND
from planner.rotor.speed_history import (
    ControlMove,
    Controls,
    History,
    own_run_up,
    prescribed_ramp,
    run_down,
)

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from planner.model.plan import AbortActions, Plan, Segment, Shutdown
    from planner.model.results import Requests
    from planner.predict.shaft import Shaft, Way

    FloatArray = NDArray[np.float64]

COMMANDED, FROZEN, BRAKE_LOST, NOT_RESEATED = ABORT_CAUSES
SPEED_SHARES = np.array([1.0, 0.87, 0.75, 0.62, 0.5, 0.4, 0.3, 0.21, 0.14, 0.08, 0.04, 0.0])
"""Of the first speed: where the torque of a run-down is solved."""
WAY_SHARES = np.linspace(0.0, 1.0, 12)
"""Of the way of the drive's own run-up: where its torque is solved."""
MOVE_SHARES = np.array([0.0, 0.5, 1.0])
"""Of a move of the controls: where torque is solved; a parabola through it is tabled."""
MOVE_TABLE = np.linspace(0.0, 1.0, 9)
PARTS = 20
"""Pieces between two solved speeds. Against 200, over the sample plans, times change by less than
0.05 %; against four times the solved speeds by less than 0.7 % in a wind of 13 m/s and 0.05 % in
3 m/s; against three times the solved moves by less than 0.05 %."""
SETTLE_S = 2.0
"""How long a ramp's history goes on at the speed and pitch that it leads to."""
_NEUTRAL = "neutral"
_KEPT = ("as it is", "keep", "kept", "hold", "unchanged")
_NO_ABORT_TIMES = (
    "abort: expected collective_rate and reaction_time, found one or both missing; state in "
    "[abort] how fast and how soon the crew sets collective"
)
_ABORT_CYCLIC = (
    'abort, cyclic: expected "neutral" or "as it is", found {found!r}; nothing else can be '
    "marched, write one of these"
)


@dataclass(frozen=True)
class Origin:
    """A turning state from which a run is broken off."""

    speed_rad_s: float
    controls: Controls


@dataclass(frozen=True)
class Order:
    """A run-down without power that is to be found."""

    from_rad_s: float
    move: ControlMove
    brake_from_rad_s: float
    """0: no brake."""
    brake_delay_s: float = 0.0
    """Time before which nobody is on the brake."""


@dataclass(frozen=True, eq=False)
class FoundRunDown:
    """A run-down: nominal, and with the low and the high end of the torque allowance."""

    order: Order
    is_solved: bool
    """Every torque that it rests on was found."""
    path: Travel
    """Of all run-downs of the batch; lanes are nominal, low and high, one after the other."""
    lane: int
    torque_N_m: FloatArray
    """Nominal rotor torque, (shares of the move, shares of the first speed)."""

    def reached(self, speed_rad_s: float) -> tuple[FloatArray, FloatArray]:
        """Time [s] and turns until a speed, nominal, low and high torque, each (3,)."""
        path = lanes_of(self.path, slice(self.lane, self.lane + 3))
        time, turns = reach(path, np.full((3, 1), speed_rad_s))
        return time[:, 0], turns[:, 0]

    def stays_above_rad_s(self, lane: int = 0) -> float:
        """Lowest speed that it comes down to; above 0 where wind or nothing keeps it turning."""
        row = self.lane + lane
        return float(np.min(self.path.speed_rad_s[row][np.isfinite(self.path.time_s[row])]))

    def history(self, label: str) -> History:
        """The nominal run-down over time.

        Raises:
            NotAssessedError: its torque was not found, or it does not come to rest.
        """
        if not self.is_solved:
            raise NotAssessedError(Status.NOT_CONVERGED, NO_TORQUE)
        if self.stays_above_rad_s() > 0.0:
            raise NotAssessedError(Status.OUTSIDE_VALIDITY, NO_REST)
        return run_down(label, self.path, self.lane, self.order.move)


NO_TORQUE = "the rotor torque that the run-down rests on did not converge at every speed"
NO_REST = "friction and brake do not bring this rotor to rest in the mean wind"


def stop_order(
    shaft: Shaft,
    stop: Way,
    shutdown: Shutdown,
    abort: AbortActions,
) -> Order:
    """The unpowered stop.

    The crew moves the controls as power is cut, at the rate stated for aborts, else at the even
    rate that ends with the stated time of the stop.

    Raises:
        NotAssessedError: neither a rate nor a time of the stop is stated.
    """
    segment, (start, target) = stop
    rate, change = abort.collective_rate_rad_s, abs(target.collective_rad - start.collective_rad)
    if rate is None:
        if not segment.duration_s > 0.0:
            raise NotAssessedError(Status.NOT_STATED, _NO_ABORT_TIMES)
        rate = change / segment.duration_s or 1.0
    brake = shaft.brake_from_rad_s(shutdown.brake_from_rad_s, is_used=shutdown.brake)
    return Order(segment.from_rad_s, ControlMove(start, target, 0.0, rate), brake)


def abort_order(shaft: Shaft, abort: AbortActions, origin: Origin, cause: str) -> Order:
    """The run-down after power is cut, for one cause; the crew acts after its reaction time.

    Raises:
        NotAssessedError: the cause does not apply, or the plan lacks what the crew does and when.
    """
    does_not_apply = no_such_cause(shaft, abort, cause)
    if does_not_apply:
        raise NotAssessedError(Status.NOT_APPLICABLE, does_not_apply)
    is_used = abort.brake and cause != BRAKE_LOST
    brake = shaft.brake_from_rad_s(abort.brake_from_rad_s, is_used=is_used)
    delay, rate = abort.reaction_time_s, abort.collective_rate_rad_s
    if delay is None or rate is None:
        raise NotAssessedError(Status.NOT_STATED, _NO_ABORT_TIMES)
    start = target = origin.controls
    if cause != FROZEN:
        target = _commanded(start, abort)
    return Order(origin.speed_rad_s, ControlMove(start, target, delay, rate), brake, delay)


def _commanded(start: Controls, abort: AbortActions) -> Controls:
    words = abort.cyclic.strip().casefold()
    if words == _NEUTRAL:
        return Controls(abort.collective_rad)
    if words not in _KEPT:
        raise NotAssessedError(Status.NOT_STATED, _ABORT_CYCLIC.format(found=abort.cyclic))
    return replace(start, collective_rad=abort.collective_rad)


def no_such_cause(shaft: Shaft, abort: AbortActions, cause: str) -> str:
    """Why a cause cannot be on this stand and rotor; empty where it can."""
    stop = shaft.rotor.droop_stop
    if cause == BRAKE_LOST and shaft.brake_below_rad_s is None:
        return "the stand has no brake that could be lost"
    if cause == BRAKE_LOST and not abort.brake:
        return "the plan's abort uses no brake"
    if cause == NOT_RESEATED and (stop is None or stop.retraction is None):
        return "the hub has no droop stop that retracts"
    return ""


def run_downs(
    shaft: Shaft, orders: Sequence[Order], torque_allowance: tuple[float, float] = (1.0, 1.0)
) -> tuple[FoundRunDown, ...]:
    """Find run-downs; the rotor torque of all of them is solved as one batch.

    Raises:
        NotAssessedError: the stand file states no friction.
    """
    if not orders:
        return ()
    points = [
        shaft.nominal(float(share) * o.from_rad_s, o.move.start.towards(o.move.target, moved))
        for o in orders
        for moved in MOVE_SHARES.tolist()
        for share in SPEED_SHARES.tolist()
    ]
    shape = (len(orders), MOVE_SHARES.size, SPEED_SHARES.size)
    torque = shaft.torque_n_m(points).reshape(shape)
    solved = np.all(np.isfinite(torque), axis=(1, 2))
    ends = np.sort(np.multiply.outer(np.array(torque_allowance), torque), axis=0)
    lanes = np.nan_to_num(np.stack([torque, *ends], axis=1)).reshape(-1, *shape[1:])
    path = run_down_path(_case(shaft, orders, lanes))
    return tuple(
        FoundRunDown(order, bool(solved[i]), path, 3 * i, torque[i])
        for i, order in enumerate(orders)
    )


def _case(shaft: Shaft, orders: Sequence[Order], torque_N_m: FloatArray) -> RunDown:
    """Three lanes an order on fine speeds."""

    def each(numbers: list[float]) -> FloatArray:
        return np.repeat(np.array(numbers), 3)

    coarse = each([o.from_rad_s for o in orders])[:, None] * SPEED_SHARES
    s = MOVE_TABLE[:, None]
    parabola = np.hstack([(1.0 - s) * (1.0 - 2.0 * s), 4.0 * s * (1.0 - s), s * (2.0 * s - 1.0)])
    columns = np.sum(parabola[:, :, None] * torque_N_m[:, None, :, :], axis=2)
    speed, torque = finer_torque(coarse, columns, PARTS)
    same = np.ones(coarse.shape[0])
    return RunDown(
        speed_rad_s=speed,
        rotor_torque_N_m=torque,
        inertia_kg_m2=shaft.inertia_kg_m2 * same,
        friction_N_m=shaft.friction_n_m * same,
        brake_N_m=(shaft.brake_torque_N_m or 0.0) * same,
        brake_from_rad_s=each([o.brake_from_rad_s for o in orders]),
        brake_delay_s=each([o.brake_delay_s for o in orders]),
        delay_s=each([o.move.delay_s for o in orders]),
        move_s=each([o.move.collective_s for o in orders]),
    )


@dataclass(frozen=True, eq=False)
class FoundRunUp:
    """A run-up by all the torque that the drive has."""

    segment: Segment
    controls: tuple[Controls, Controls]
    path: Travel

    @property
    def time_s(self) -> float:
        """Time of the run-up; infinite where the drive is too weak."""
        return float(self.path.time_s[0, -1])

    @property
    def slowest_s(self) -> float:
        """The same at the worse end of the torque allowance."""
        return float(self.path.time_s[-1, -1])

    def course(self, lane: int) -> tuple[tuple[float, float], ...]:
        """Time and speed of the nominal run-up, lane 0, or of the slowest, lane -1."""
        times, speeds = self.path.time_s[lane].tolist(), self.path.speed_rad_s[lane].tolist()
        return tuple(zip(times, speeds, strict=True))


def own_run_up_of(
    shaft: Shaft,
    segment: Segment,
    controls: tuple[Controls, Controls],
    torque_allowance: tuple[float, float] = (1.0, 1.0),
) -> FoundRunUp:
    """Find the drive's own run-up; collective and cyclic follow the speed in proportion.

    Its path has two lanes: nominal, and with the torque at the worse end of its allowance.

    Raises:
        NotAssessedError: no friction is stated, the torque did not converge, or it leads down.
    """
    start, rise = segment.from_rad_s, segment.to_rad_s - segment.from_rad_s
    if not rise > 0.0:
        msg = "the drive's own run-up: expected a step to a higher speed; state a ramp time"
        raise NotAssessedError(Status.OUTSIDE_VALIDITY, msg)
    shares = WAY_SHARES.tolist()
    points = [shaft.nominal(start + s * rise, controls[0].towards(controls[1], s)) for s in shares]
    torque = shaft.torque_n_m(points)
    if not np.all(np.isfinite(torque)):
        raise NotAssessedError(Status.NOT_CONVERGED, NO_TORQUE)
    coarse = start + rise * WAY_SHARES
    coarse[-1] = segment.to_rad_s
    speed, fine = finer_torque(coarse[None, :], torque[None, None, :], PARTS)
    knots = [row[0] for row in shaft.drive.torque_by_speed if start < row[0] < segment.to_rad_s]
    speed, fine = _with_knots(speed[0], fine[0, 0], knots)
    worst = np.max(np.multiply.outer(np.array(torque_allowance), fine), axis=0)
    path = run_up(
        np.stack([speed, speed]),
        np.stack([shaft.motor_torque_n_m(speed)] * 2),
        np.stack([fine, np.maximum(fine, worst)]),
        np.full(2, shaft.friction_n_m),
        np.full(2, shaft.inertia_kg_m2),
    )
    return FoundRunUp(segment, controls, path)


def _with_knots(
    speed: FloatArray, torque: FloatArray, knots: Sequence[float]
) -> tuple[FloatArray, FloatArray]:
    """Speeds with the bends of the motor's table among them, and torque there."""
    every = np.unique(np.concatenate([speed, np.array(knots)]))
    return every, np.interp(every, speed, torque)


def timed(plan: Plan, walk: Sequence[Segment], requests: Requests) -> tuple[Segment, ...]:
    """The walk with the times of the drive's own run-ups filled in.

    A time stays not a number where the drive does not reach the speed at the worse end of the
    torque allowance, or its run-up could not be found: what builds on it is then not assessed.
    """
    if not any(segment.own_run_up for segment in walk):
        return tuple(walk)
    values = {path: attrgetter(path)(plan) for path in (*AIR.takes, *WIND.takes, *TAKES)}
    try:
        bare = Inputs(values, requests, {})
        shaft = shaft_of(Inputs(values, requests, {**AIR.run(bare), **WIND.run(bare)}))
    except ValueError:
        return tuple(walk)
    cyclics = shaft.found_cyclics(walk)
    allowance = requests.allowances.get("torque", (1.0, 1.0))
    return tuple(
        _timed(shaft, (s, ends_of(s, cyclics)), allowance) if s.own_run_up else s for s in walk
    )


def _timed(shaft: Shaft, way: Way, torque_allowance: tuple[float, float]) -> Segment:
    segment, controls = way
    try:
        found = own_run_up_of(shaft, segment, controls, torque_allowance)
    except NotAssessedError:
        return replace(segment, duration_s=math.nan)
    if not math.isfinite(found.slowest_s):
        return replace(segment, duration_s=math.nan)
    return replace(
        segment, duration_s=found.time_s, course=found.course(0), slow_course=found.course(-1)
    )


def ramp_history(
    segment: Segment,
    controls: tuple[Controls, Controls],
    run_up: FoundRunUp | None = None,
    lane: int = 0,
) -> History:
    """A powered ramp or stop over time: straight lines, or the drive's own run-up.

    Lane 1 of a run-up is the slowest within the torque allowance.

    Raises:
        NotAssessedError: the ramp has no time, or the drive does not reach its speed.
    """
    label = segment.id
    if run_up is not None:
        if not math.isfinite(run_up.path.time_s[lane, -1]):
            raise NotAssessedError(Status.OUTSIDE_VALIDITY, TOO_WEAK)
        return own_run_up(label, run_up.path, lane, controls, SETTLE_S)
    if not segment.duration_s > 0.0:
        raise NotAssessedError(Status.NOT_STATED, "the ramp has no duration")
    speeds = (segment.from_rad_s, segment.to_rad_s)
    return prescribed_ramp(label, speeds, controls, segment.duration_s, SETTLE_S)


TOO_WEAK = (
    "the drive does not reach this step's speed: its torque is used up by air load and friction "
    "on the way"
)
