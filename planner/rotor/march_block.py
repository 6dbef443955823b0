"""A block of marched cases: its state, and one step of all of them."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.march_contact import middle, near_stops
from planner.rotor.march_inflow import LOSS_EVERY, MarchInflow
from planner.rotor.march_lag import MarchLag
from planner.rotor.march_loads import Instant, LoadMaker, UnitLoads
from planner.rotor.march_start import starting_state
from planner.rotor.march_stops import MarchStops
from planner.rotor.march_substeps import Pressed, SubstepTable, pressed_step
from planner.rotor.march_track import Contacts, Extremes, Touches, follow
from planner.rotor.march_watch import Watch
from planner.rotor.march_wind import Course, Prescribed, WindNow

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.march_case import Histories, MarchCases, Turbulence
    from planner.rotor.march_model import MarchModel

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]
    IndexArray = NDArray[np.int64]

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
    "_spun",
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
        self._course = Course(histories, rough, cases, self._dtype)
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
        turns_s = np.minimum(turns_s, settings.longest_lead_in_s)
        lead = np.where(turning, turns_s, settings.lead_in_s)
        self.time_s = -lead
        self.azimuth_rad = self.cases.azimuth_rad - speed * lead
        self.contacts.left_rad += self.azimuth_rad[:, None]
        self.stops.move(speed, np.full(shape, np.inf), np.zeros(shape[0], dtype=bool))
        start = starting_state(model, self.cases, first, self.stops.places)
        self.x = start.x.astype(dtype)
        self.moment_N_m = start.moment_N_m.astype(dtype)
        self.induced_m_s = start.induced_m_s.astype(dtype)
        self.lag = None if model.lag is None else MarchLag(model.lag, (shape[0], blades), dtype)
        self._load = np.zeros((*shape, model.unit.n_freedoms), dtype)
        self._spun = np.zeros_like(self._load)
        self._speed2 = speed * speed
        self._rate = np.zeros_like(self.induced_m_s)
        self._last_s = np.full(shape[0], np.inf)
        self._now = self._course.prescribed(self.time_s)
        self._loss = self._inflow.loss(self.induced_m_s, speed.astype(dtype))

    def keep(self, where: IndexArray) -> None:
        """Go on with some of the cases only."""
        self.cases = self.cases.take(where)
        self._course.keep(self.cases)
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

    @property
    def flap_rad(self) -> Array:
        """What counts as flap, its built-in part included, of every blade, (cases, blades)."""
        unit = self.model.unit
        rotation = self.model.viewer(self.x)["rotation"]
        signs = np.array([1.0, -1.0])[: unit.n_blades].astype(self._dtype)
        flap: Array = (rotation * signs).reshape(rotation.shape[0], -1)
        return flap + self._dtype(unit.fixed_flap_rad)

    def step(self) -> None:
        """One step of every case; a case that is done goes on unseen."""
        table, now, dtype = self.model.table, self._now, self._dtype
        node = table.node(now.speed_rad_s)
        step_s = table.step_s.take(node)
        instant = self._instant(node, now)
        loads = self._loads(instant)
        counts = (self.time_s >= 0.0) & ~self.is_done
        if self.steps % self._look_every == 0:
            self._watch.loads(self.extremes, instant, loads, (self.moment_N_m, counts))
        height = (loads.flap_sine, instant.view.of_blades("bend"))
        self._watch.tips(self.extremes, None, height, (self.azimuth_rad, counts))
        step, ratio = step_s.astype(dtype), (step_s / self._last_s).astype(dtype)
        row = self._row(instant, loads.on_freedoms, ratio)
        self._flap(instant, row, (step_s, step), counts)
        self._breathe(loads, instant.wind, (step, ratio))
        later = self._course.prescribed(self.time_s + step_s)
        if self.lag is not None:
            self._swing(instant, loads, (later, step_s, ratio), counts)
        self._go_on(later, step_s, counts)

    def _instant(self, node: IndexArray, now: Prescribed) -> Instant:
        """Where the block is."""
        speed = now.speed_rad_s.astype(self._dtype)
        wind, view = self._course.wind(self.time_s), self.model.viewer(self.x)
        return Instant(self.x, view, self.induced_m_s, self.azimuth_rad, node, speed, now, wind)

    def _row(self, now: Instant, load: Array, ratio: Array) -> Array:
        """State, load and rise of the load over the step, (cases, units, 4n).

        What the table's node lacks of the centrifugal stiffness is a load.
        """
        dtype = self._dtype
        spun, speed2 = now.view["spun"].copy(), now.controls.speed_rad_s**2
        at_node = self.model.table.speed2.take(now.node)
        lacking = (at_node - speed2).astype(dtype)[:, None, None]
        before = (at_node - self._speed2).astype(dtype)[:, None, None]
        whole = lacking * spun
        whole += load
        rise = before * self._spun
        rise += self._load
        np.subtract(whole, rise, out=rise)
        rise *= ratio[:, None, None]
        self._load, self._spun, self._speed2 = load, spun, speed2
        return np.concatenate([self.x, whole, rise], axis=-1)

    def _flap(
        self, now: Instant, row: Array, step: tuple[FloatArray, Array], counts: BoolArray
    ) -> None:
        """Flap over the step, and what is seen of it."""
        model, view = self.model, now.view
        before = (view["rotation"][..., 0], view["rotation_rate"][..., 0])
        self.stops.move(now.controls.speed_rad_s, before[0], self.cases.seats)
        after = np.matmul(row, model.table.whole.take(now.node, axis=0))
        end = (after[..., -2], after[..., -1])
        half = middle(before, end, step[1])
        low, top = np.minimum(half, end[0]), np.maximum(half, end[0])
        self.x = after[..., :-2]
        if model.substeps is not None:
            reach = (np.minimum(before[0], low), np.maximum(before[0], top))
            near = near_stops(*reach, self.moment_N_m, self.stops.places)
            if np.count_nonzero(near):
                where = np.flatnonzero(near)
                pressed = self._press(where, now, row, model.substeps)
                self.x[where], self.moment_N_m[where] = pressed.x, pressed.moment_N_m[-1]
                low[where] = np.minimum.reduce(pressed.rotation_rad, axis=0)
                top[where] = np.maximum.reduce(pressed.rotation_rad, axis=0)
                self._touch(where, pressed, (before[1], step[0]), counts)
        self._watch.flap(self.extremes, (low, top), counts, self.time_s)

    def _press(
        self, where: IndexArray, now: Instant, row: Array, substeps: SubstepTable
    ) -> Pressed:
        """Sub-steps of cases on or near a stop."""
        low, high = self.stops.places
        places = (low[where], high[where])

        def law(rotation: Array, rate: Array, give: tuple[Array, Array]) -> Array:
            return self.stops.moment((rotation, rate), places, give)

        start = (row[where], self.moment_N_m[where])
        return pressed_step(substeps, now.node[where], start, law, self.model.unit.n_blades)

    def _touch(
        self,
        where: IndexArray,
        pressed: Pressed,
        begin: tuple[Array, FloatArray],
        counts: BoolArray,
    ) -> None:
        """What is seen of cases on or near a stop."""
        both, watch = self.model.laws.high_is_droop, self._watch
        moment, counting = pressed.moment_N_m, counts[where]
        azimuth, speed = self.azimuth_rad[where], self._now.speed_rad_s[where]
        step_s = begin[1][where]
        rate = np.concatenate([begin[0][where][None], pressed.rate_rad_s])
        touches = Touches(
            is_on=moment != 0.0 if both else moment > 0.0,
            closing_rad_s=np.abs(rate) if both else -rate,
            time_s=self.time_s[where],
            step_s=step_s,
            speed_rad_s=speed,
            azimuth_rad=azimuth,
            counts=counting,
            is_fast=speed >= self.cases.counts_from_rad_s[where],
        )
        follow(self.contacts, where, touches)
        if counting.all():
            watch.stops(self.extremes, where, moment, both_droop=both)
        else:
            watch.stops(self.extremes, where[counting], moment[:, counting], both_droop=both)
        height = (watch.tip_sine(pressed.middle_flap_rad), pressed.middle_bend_m)
        turned = azimuth + 0.5 * step_s * speed
        watch.tips(self.extremes, where, height, (turned, counting))

    def _breathe(self, loads: UnitLoads, wind: WindNow, clock: tuple[Array, Array]) -> None:
        """Induced velocity over the step, its rate extrapolated."""
        plane = np.hypot(wind.along_m_s, wind.across_m_s)
        air = (plane, wind.up_m_s)
        rate = self._inflow.rate(self.induced_m_s, self._loss, loads.ring_force, air)
        step, ratio = clock[0][:, None], clock[1][:, None]
        change = rate - self._rate
        change *= 0.5 * ratio
        change += rate
        change *= step
        self.induced_m_s = self.induced_m_s + change
        self._rate = rate

    def _swing(
        self,
        now: Instant,
        loads: UnitLoads,
        later: tuple[Prescribed, FloatArray, Array],
        counts: BoolArray,
    ) -> None:
        """Lag over the step."""
        lag, speed = self.lag, now.controls.speed_rad_s
        if lag is None:
            return
        rate = ((later[0].speed_rad_s - speed) / later[1]).astype(self._dtype)
        lag.step(now.node, loads, (now.speed_rad_s, rate), later[2])
        fast = counts & (speed >= self.cases.counts_from_rad_s)
        self._watch.lag(self.extremes, lag.from_middle_rad, lag.stop_N_m, (counts, fast))

    def _go_on(self, later: Prescribed, step_s: FloatArray, counts: BoolArray) -> None:
        """Time and azimuth at the end of the step."""
        turned = 0.5 * step_s * (self._now.speed_rad_s + later.speed_rad_s)
        self.azimuth_rad = self.azimuth_rad + turned
        leads = self.time_s < 0.0
        self.time_s = self.time_s + step_s
        self._now, self._last_s = later, step_s
        self.steps += 1
        self.contacts.lift(self.azimuth_rad, self.time_s, counts)
        if np.count_nonzero(leads):
            begins = leads & (self.time_s >= 0.0)
            self.contacts.start_free(begins, self.moment_N_m != 0.0, later.speed_rad_s)
        if self.steps % LOSS_EVERY == 0:
            speed = later.speed_rad_s.astype(self._dtype)
            self._loss = self._inflow.loss(self.induced_m_s, speed)
