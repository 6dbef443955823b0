"""Adaptive reference of a march: the equations integrated, and what is read from them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np
from scipy.integrate import solve_ivp

from tests.reference.blade_shapes import blade_shapes
from tests.reference.march_equations import Equations, stop_moment_n_m

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from planner.methods.beam import BladeBeam
    from planner.model.rotor import Stop
    from planner.rotor.setup import RotorArrays
    from tests.reference.march_equations import Case

    FloatArray = NDArray[np.float64]

SAMPLE_S = 1e-4
"""Longest time between two states that are kept of a fine run."""

STRETCH_S = 1.0
"""A fine run is integrated in stretches, so that what lies between its steps can be let go."""


@dataclass(frozen=True)
class Solver:
    """How the equations are integrated; the defaults are those of the speed comparison.

    Attributes:
        method: Of solve_ivp.
        relative: Relative tolerance.
        absolute: Absolute tolerance of every unknown.
        longest_step_s: Longest step.
        dense: Keep what is needed between steps.
    """

    method: str = "LSODA"
    relative: float = 1e-6
    absolute: float = 1e-8
    longest_step_s: float = np.inf
    dense: bool = False


FINE = Solver("DOP853", 1e-9, 1e-11, 2e-3, dense=True)
"""For converged values. A step no longer than 2 ms finds every touch of a stop."""


@dataclass(frozen=True, eq=False)
class Marched:
    """States over time, (unknowns, times), and the droop angle in force, (times,)."""

    equations: Equations
    time_s: FloatArray
    state: FloatArray
    droop_rad: FloatArray
    evaluations: int

    def shapes(self, blade: int = 0) -> FloatArray:
        """Flap and elastic shapes, (shapes, times)."""
        shapes: FloatArray = self.equations.blade_states(self.state)[0][blade]
        return shapes

    def hinge_rad(self, blade: int = 0) -> FloatArray:
        """Rotation of the hinge."""
        return self.equations.blade.hinge_slope @ self.shapes(blade)

    def hinge_rate_rad_s(self, blade: int = 0) -> FloatArray:
        """Its rate."""
        rates: FloatArray = self.equations.blade_states(self.state)[1][blade]
        return self.equations.blade.hinge_slope @ rates

    def tip_m(self, blade: int = 0, *, small_angles: bool = False) -> FloatArray:
        """Height of the tip over the hinge: l sin b, or l b, and the elastic shapes."""
        q, tip = self.shapes(blade), self.equations.blade.tip
        height: FloatArray = tip[0] * (q[0] if small_angles else np.sin(q[0])) + tip[1:] @ q[1:]
        return height

    def droop_moment_n_m(self, blade: int = 0) -> FloatArray:
        """Moment of the droop stop on the blade, upwards."""
        return self._moment(self.equations.droop, blade, 1.0)

    def up_moment_n_m(self, blade: int = 0) -> FloatArray:
        """Moment of the up stop on the blade, downwards."""
        return self._moment(self.equations.up, blade, -1.0)

    def _moment(self, stop: Stop | None, blade: int, side: float) -> FloatArray:
        if stop is None:
            return np.zeros_like(self.time_s)
        limit = self.droop_rad if side > 0.0 else stop.angle_rad
        penetration = side * (limit - self.hinge_rad(blade))
        moment: FloatArray = stop_moment_n_m(
            stop, penetration, -side * self.hinge_rate_rad_s(blade)
        )
        return moment


def reference_march(
    rotor: RotorArrays,
    beam: BladeBeam,
    stops: tuple[Stop | None, Stop | None],
    case: Case,
    n_elastic: int = 3,
    solver: Solver | None = None,
) -> Marched:
    """March one blade that starts at rest on its droop stop, with the air at rest above it."""
    blade = blade_shapes(beam, rotor.hub.hinge_m, rotor.station_radius_m, n_elastic)
    equations = Equations(rotor, blade, stops, case)
    return march(equations, equations.start(equations.at_rest()), solver)


def march(equations: Equations, start: FloatArray, solver: Solver | None = None) -> Marched:
    """Integrate from a given start; a retracting droop stop moves by its own rule.

    It retracts where speed rises to its release speed and re-seats where speed falls to its
    re-seat speed; if the blade then lies below its place, not before the blade has risen.
    """
    chosen = solver or Solver()
    where = _first_place(equations)
    runs = []
    begin, evaluations, state, last = 0.0, 0, start, equations.case.duration_s
    while begin < last:
        equations.droop_rad = _angle(equations, where)
        leaves = _exits(equations, where)
        end = min(begin + STRETCH_S, last) if chosen.dense else last
        run = _integrate(equations, (begin, end, state), [event for event, _ in leaves], chosen)
        runs.append((*_sampled(run, chosen), equations.droop_rad))
        begin, state, evaluations = float(run.t[-1]), run.y[:, -1], evaluations + run.nfev
        if run.status == 1:
            taken = next(i for i, times in enumerate(run.t_events) if times.size)
            where = _seat(equations, leaves[taken][1], state)
    droop = np.concatenate([np.full(times.size, angle) for times, _, angle in runs])
    times, states = (np.concatenate([run[i] for run in runs], axis=-1) for i in (0, 1))
    return Marched(equations, times, states, droop, evaluations)


def _integrate(
    equations: Equations,
    stretch: tuple[float, float, FloatArray],
    events: list[Any],
    solver: Solver,
) -> Any:
    solve: Any = solve_ivp  # the method is a plain text here
    run = solve(
        equations,
        stretch[:2],
        stretch[2],
        solver.method,
        events=events or None,
        rtol=solver.relative,
        atol=solver.absolute,
        max_step=solver.longest_step_s,
        dense_output=solver.dense,
    )
    assert run.success, run.message
    return run


def _sampled(run: Any, solver: Solver) -> tuple[FloatArray, FloatArray]:
    """Times and states at the steps and, if dense, between them."""
    if not solver.dense:
        return run.t, run.y
    steps = np.diff(run.t)
    parts = np.ceil(steps / SAMPLE_S).astype(int)
    place = np.arange(np.sum(parts)) - np.repeat(np.cumsum(parts) - parts, parts)
    between = np.repeat(run.t[:-1], parts) + place * np.repeat(steps / parts, parts)
    times = np.append(between, run.t[-1])
    return times, run.sol(times)


def _first_place(equations: Equations) -> str:
    case, stop = equations.case, equations.droop
    if stop is None or stop.retraction is None:
        return "fixed"
    retracted = case.starts_retracted
    if retracted is None:
        retracted = case.speed_rad_s(0.0) >= stop.retraction.release_rad_s
    return "retracted" if retracted else "seated"


def _angle(equations: Equations, where: str) -> float:
    stop = equations.droop
    if stop is None:
        return -np.inf
    if stop.retraction is None or where == "seated":
        return stop.angle_rad
    return stop.retraction.retracted_angle_rad


def _seat(equations: Equations, where: str, state: FloatArray) -> str:
    """Where the stop goes: a blade below its seat keeps it waiting."""
    assert equations.droop
    hinge = equations.blade.hinge_slope @ equations.blade_states(state)[0][0]
    below = hinge < equations.droop.angle_rad - 1e-9
    return "waiting" if where == "seated" and below else where


def _exits(equations: Equations, where: str) -> list[tuple[Callable[..., float], str]]:
    """Events that end a place of the droop stop, and the place that follows."""
    stop = equations.droop
    if where == "fixed" or stop is None or stop.retraction is None:
        return []
    speed, retraction = equations.case.speed_rad_s, stop.retraction

    def release(time: float, _state: FloatArray) -> float:
        return speed(time) - retraction.release_rad_s

    def reseat(time: float, _state: FloatArray) -> float:
        return retraction.reseat_rad_s - speed(time)

    def risen(_time: float, state: FloatArray) -> float:
        hinge = equations.blade.hinge_slope @ equations.blade_states(state)[0][0]
        return float(hinge) - stop.angle_rad

    for event in (release, reseat, risen):
        vars(event).update(terminal=True, direction=1.0)
    wanted: dict[str, list[tuple[Callable[..., float], str]]] = {
        "seated": [(release, "retracted")],
        "retracted": [(reseat, "seated")],
        "waiting": [(risen, "seated"), (release, "retracted")],
    }
    return wanted[where]


@dataclass(frozen=True)
class Contact:
    """One stay of a blade on a stop."""

    start_s: float
    end_s: float
    peak_moment_N_m: float
    closing_rad_s: float
    start_azimuth_rad: float
    end_azimuth_rad: float


def contacts(marched: Marched, *, up: bool = False, blade: int = 0) -> list[Contact]:
    """Contacts that begin after the start: with the droop stop, or with the up stop."""
    time, hinge, rate = marched.time_s, marched.hinge_rad(blade), marched.hinge_rate_rad_s(blade)
    over = marched.equations.up_rad - hinge if up else hinge - marched.droop_rad
    moment = marched.up_moment_n_m(blade) if up else marched.droop_moment_n_m(blade)
    touches = over < 0.0
    found = []
    for first in (np.flatnonzero(~touches[:-1] & touches[1:]) + 1).tolist():
        free = np.flatnonzero(~touches[first:]).tolist()
        last = first + free[0] if free else time.size
        end = _crossing(time, over, last) if free else float(time[-1])
        largest = float(np.max(moment[first:last]))
        start = _crossing(time, over, first)
        turned = np.interp([start, end], time, marched.state[0]).tolist()
        found.append(Contact(start, end, largest, abs(float(rate[first])), *turned))
    return found


def _crossing(time: FloatArray, over: FloatArray, index: int) -> float:
    """Time of the change of sign between a sample and the one before."""
    low, high = over[index - 1], over[index]
    share = low / (low - high)
    return float(time[index - 1] + share * (time[index] - time[index - 1]))


def peak(time: FloatArray, values: FloatArray) -> tuple[float, float]:
    """Largest value and its time."""
    at = int(np.argmax(values))
    return float(values[at]), float(time[at])
