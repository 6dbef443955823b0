"""A block of marched cases: its state, and one step of all of them."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.march_contact import (
    Pressed,
    Push,
    free_step,
    middle,
    near_stops,
    pressed_step,
    rotation,
)
from planner.rotor.march_inflow import LOSS_EVERY, MarchInflow
from planner.rotor.march_lag import MarchLag
from planner.rotor.march_loads import Instant, LoadMaker, UnitLoads
from planner.rotor.march_start import starting_state
from planner.rotor.march_stops import MarchStops
from planner.rotor.march_track import (
    Contacts,
    Extremes,
    Moment,
    follow,
    start_free,
    turn_on,
)
from planner.rotor.march_watch import Watch
from planner.rotor.march_wind import Course, WindNow

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.march_case import Histories, MarchCases, Turbulence
    from planner.rotor.march_model import MarchModel

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]

LOOKS_PER_TURN = 24
"""How often in a turn hub moment, root moment and thrust are looked at."""
_PER_CASE = (
    "end_s",
    "time_s",
    "azimuth_rad",
    "x",
    "moment_N_m",
    "induced_m_s",
    "_load",
    "_by_spin",
    "_speed2",
    "_rate",
    "_last_s",
    "_loss",
)


class Block:
    """Cases marched side by side, each at its own time.

    A step: loads from the state; flap exactly under them, extrapolated from the step before;
    stops by sub-steps in cases that need them; inflow and lag likewise; then time and azimuth.
    """

    def __init__(
        self, model: MarchModel, histories: Histories, rough: Turbulence, cases: MarchCases
    ) -> None:
        """Begin the lead-in of every case."""
        self.model, self.cases = model, cases
        self._dtype = model.settings.dtype
        self._histories = histories
        self._course = Course(histories, rough, cases)
        self._inflow = MarchInflow(model.arrays, self._dtype, gradient=model.settings.gradient)
        self._loads = LoadMaker(model, cases, self._inflow)
        self._watch = Watch(model)
        shape = (cases.count, model.units)
        blades = model.units * model.unit.n_blades
        self.stops = MarchStops(model.laws, shape, self._dtype)
        self.contacts = Contacts.none(shape)
        self.extremes = Extremes.none(*shape, blades)
        self.end_s = histories.end_s[cases.history]
        self.steps = 0
        self._look_every = max(1, model.settings.steps_per_turn // LOOKS_PER_TURN)
        self._begin(shape, blades)

    def _begin(self, shape: tuple[int, int], blades: int) -> None:
        """State at the begin of the lead-in."""
        model, dtype, settings = self.model, self._dtype, self.model.settings
        first = self._course.prescribed(np.zeros(shape[0]))
        speed = first.speed_rad_s
        turning = speed > 0.0
        turns_s = settings.lead_in_turns * 2.0 * np.pi / np.where(turning, speed, 1.0)
        lead = np.where(turning, turns_s, settings.lead_in_s)
        self.time_s = -lead
        self.azimuth_rad = self.cases.azimuth_rad - speed * lead
        self.stops.move(speed, np.full(shape, np.inf), np.zeros(shape[0], dtype=bool))
        start = starting_state(model, self.cases, first, self.stops.places())
        self.x = start.x.astype(dtype)
        self.moment_N_m = start.moment_N_m.astype(dtype)
        self.induced_m_s = start.induced_m_s.astype(dtype)
        self.lag = None if model.lag is None else MarchLag(model.lag, (shape[0], blades), dtype)
        self._load = np.zeros((*shape, model.unit.n_freedoms), dtype)
        self._by_spin = np.zeros_like(self._load)
        self._speed2 = speed * speed
        self._rate = np.zeros_like(self.induced_m_s)
        self._last_s = np.full(shape[0], np.inf)
        self._now = self._course.prescribed(self.time_s)
        self._loss = self._inflow.loss(self.induced_m_s, speed.astype(dtype))

    def keep(self, where: NDArray[Any]) -> None:
        """Go on with some of the cases only."""
        self.cases = self.cases.take(where)
        self._course = self._course.take(self._histories, where)
        for name in _PER_CASE:
            setattr(self, name, getattr(self, name)[where])
        self.stops = self.stops.take(where)
        self.contacts = self.contacts.take(where)
        self.extremes = self.extremes.take(where)
        if self.lag is not None:
            self.lag = self.lag.take(where)
        self._now = self._course.prescribed(self.time_s)
        self._loads = LoadMaker(self.model, self.cases, self._inflow)

    @property
    def is_done(self) -> BoolArray:
        """Cases whose history has ended."""
        done: BoolArray = self.time_s >= self.end_s
        return done

    def step(self) -> None:
        """One step of every case; a case that is done goes on unseen."""
        model, now = self.model, self._now
        node = model.table.node(now.speed_rad_s)
        step = model.table.step_s[node]
        wind = self._course.wind(self.time_s)
        instant = Instant(self.x, self.induced_m_s, self.azimuth_rad, now, wind)
        loads = self._loads(instant)
        counts = (self.time_s >= 0.0) & ~self.is_done
        if self.steps % self._look_every == 0:
            self._watch.loads(self.extremes, instant, loads, (self.moment_N_m, counts))
        ratio = step / self._last_s
        push = self._push(loads, node, ratio)
        self._flap(push, step, counts)
        self._breathe(loads, wind, (step, ratio))
        later = self._course.prescribed(self.time_s + step)
        if self.lag is not None:
            rate = (later.speed_rad_s - now.speed_rad_s) / step
            self.lag.step(node, loads, (now.speed_rad_s, rate), ratio)
            fast = counts & (now.speed_rad_s >= self.cases.counts_from_rad_s)
            lag = self.lag
            self._watch.lag(self.extremes, lag.from_middle_rad, lag.stop_N_m, (counts, fast))
        self.azimuth_rad = self.azimuth_rad + 0.5 * step * (now.speed_rad_s + later.speed_rad_s)
        begins = (self.time_s < 0.0) & (self.time_s + step >= 0.0)
        self.time_s = self.time_s + step
        self._now, self._last_s = later, step
        self.steps += 1
        if np.any(begins):
            start_free(self.contacts, begins, self.moment_N_m != 0.0, later.speed_rad_s)
        if self.steps % LOSS_EVERY == 0:
            speed = later.speed_rad_s.astype(self._dtype)
            self._loss = self._inflow.loss(self.induced_m_s, speed)

    def _push(self, loads: UnitLoads, node: NDArray[np.int64], ratio: FloatArray) -> Push:
        """Load of the step: what the table's node lacks of the centrifugal stiffness included."""
        model, dtype = self.model, self._dtype
        n = model.unit.n_freedoms
        spin = np.matmul(self.x[..., :n], model.spin_stiffness)
        speed2, at_node = self._now.speed_rad_s**2, model.table.speed2[node]
        lacking = (speed2 - at_node).astype(dtype)[:, None, None]
        before = (self._speed2 - at_node).astype(dtype)[:, None, None]
        load = loads.on_freedoms - lacking * spin
        rise = load - (self._load - before * self._by_spin)
        rise *= ratio.astype(dtype)[:, None, None]
        self._load, self._by_spin, self._speed2 = loads.on_freedoms, spin, speed2
        return Push(node, load, rise)

    def _flap(self, push: Push, step: FloatArray, counts: BoolArray) -> None:
        """Flap over the step, and what is seen of it."""
        model = self.model
        before = rotation(model, self.x)
        self.stops.move(self._now.speed_rad_s, before[0], self.cases.seats)
        places = self.stops.places()
        after = free_step(model, self.x, push)
        end = rotation(model, after)
        half = middle(before, end, step)
        near = near_stops((before[0], half, end[0]), self.moment_N_m, places)
        some = model.laws.exist and bool(np.any(near))
        if some:
            where = np.flatnonzero(near)
            self._press(where, push.take(where), step, after)
            half = np.where(near[:, None], before[0], half)
            end = rotation(model, after)
        self._free(near, step, counts)
        self.x = after
        self._watch.flap(self.extremes, (half, end[0]), counts, self.time_s)
        self._watch.tips(self.extremes, after, self.azimuth_rad, counts)

    def _free(self, near: BoolArray, step: FloatArray, counts: BoolArray) -> None:
        """Blades away from their stops, whose moment is 0: their turns off the stop go on."""
        turned = np.where(near, 0.0, self._now.speed_rad_s * step)
        rises = turn_on(self.contacts, turned, counts & ~near)
        if np.any(rises):
            time = (self.time_s + step)[:, None]
            self.contacts.lift_off_s = np.where(rises, time, self.contacts.lift_off_s)

    def _press(self, where: NDArray[np.int64], push: Push, step: FloatArray, after: Array) -> None:
        """Sub-steps of cases on or near a stop; writes their state into the step's end."""
        model, parts = self.model, self.model.settings.substeps
        stops = self.stops.take(where)
        places = stops.places()
        part, seen = self.contacts.take(where), self.extremes.take(where)
        counts = (self.time_s[where] >= 0.0) & ~self.is_done[where]
        both, azimuth = model.laws.high_is_droop, self.azimuth_rad[where]
        time = self.time_s[where]

        def see(number: int, now: Pressed, turned: tuple[Array, Array]) -> None:
            on = np.abs(now.moment_N_m) > 0.0 if both else now.moment_N_m > 0.0
            closing = np.abs(turned[1]) if both else -turned[1]
            follow(part, self._moment(where, step / parts, float(number), (on, closing)))
            self._watch.stops(seen, now.moment_N_m, counts, both_droop=both)
            self._watch.flap(seen, (turned[0], turned[0]), counts, time)
            if 2 * number == parts:  # the step's end is looked at in any case
                self._watch.tips(seen, now.x, azimuth, counts)

        start = Pressed(self.x[where], self.moment_N_m[where])
        ended = pressed_step(model, start, push, (stops, places), see)
        self.contacts.put(where, part)
        self.extremes.put(where, seen)
        after[where] = ended.x
        self.moment_N_m[where] = ended.moment_N_m

    def _moment(
        self,
        where: NDArray[np.int64],
        step: FloatArray,
        number: float,
        touch: tuple[BoolArray, Array],
    ) -> Moment:
        part = step[where]
        time = np.where(self.is_done[where], -1.0, self.time_s[where] + number * part)
        return Moment(
            time_s=time,
            step_s=part,
            speed_rad_s=self._now.speed_rad_s[where],
            counts_from_rad_s=self.cases.counts_from_rad_s[where],
            is_on=touch[0],
            closing_rad_s=touch[1],
        )

    def _breathe(
        self, loads: UnitLoads, wind: WindNow, clock: tuple[FloatArray, FloatArray]
    ) -> None:
        """Induced velocity over the step, its rate extrapolated."""
        dtype = self._dtype
        plane = np.hypot(wind.along_m_s, wind.across_m_s).astype(dtype)
        air = (plane, wind.up_m_s.astype(dtype))
        rate = self._inflow.rate(self.induced_m_s, self._loss, loads.ring_force, air)
        step, half = clock[0].astype(dtype)[:, None], (0.5 * clock[1]).astype(dtype)[:, None]
        self.induced_m_s = self.induced_m_s + step * (rate + half * (rate - self._rate))
        self._rate = rate
