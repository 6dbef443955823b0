"""The marching equations of a hinged blade between stops, for an adaptive integration.

They share with the marching use of the rotor the matrices of the beam, the stations and the
section tables, and no equation. One blade is marched, which then stands for all blades of its
rotor in the momentum balance, or several that share one inflow.

Axes: azimuth zero downwind, growing with rotation; wind (u downwind, v towards azimuth 90 degrees,
w along thrust); flap up; lag against rotation.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, NamedTuple

import numpy as np

from planner.methods.blade_inertia import blade_inertia
from planner.methods.section_lookup import station_lift_drag

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from planner.methods.beam import BladeBeam
    from planner.model.rotor import LagStop, Stop
    from planner.rotor.setup import RotorArrays
    from tests.reference.blade_shapes import BladeShapes

    FloatArray = NDArray[np.float64]
    Wind = Callable[[float], tuple[float, float, float]]

GRAVITY_M_S2 = 9.80665
APPARENT_MASS = 8.0 / (3.0 * math.pi)
PITT_PETERS = 15.0 * math.pi / 32.0


@dataclass(frozen=True)
class LagHinge:
    """The rigid lagging blade: hinge, its moments about it, spring, damper and stops."""

    hinge_m: float
    inertia_kg_m2: float
    first_moment_kg_m: float
    spring_N_m_rad: float
    damper_N_m_s_rad: float
    stop: LagStop | None = None


def lag_hinge(
    beam: BladeBeam, hinge_m: float, spring: float, damper: float, stop: LagStop | None = None
) -> LagHinge:
    """The lag hinge of a blade, its moments from the tabled mass."""
    about = blade_inertia(beam.distribution, hinge_m)
    second, first = float(about.second_moment_kg_m2), float(about.first_moment_kg_m)
    return LagHinge(hinge_m, second, first, spring, damper, stop)


def constant(value: float) -> Callable[[float], float]:
    """A history that does not change."""
    return lambda _time: value


def tabled(time_s: FloatArray, values: FloatArray) -> Callable[[float], float]:
    """A history that is straight between the points of a table and held beyond them."""
    return lambda time: float(np.interp(time, time_s, values))


def steady_wind(downwind: float, across: float = 0.0, up: float = 0.0) -> Wind:
    """A wind that does not change."""
    return lambda _time: (downwind, across, up)


ZERO = constant(0.0)
CALM = steady_wind(0.0)


@dataclass(frozen=True, eq=False)
class Case:
    """What is done to the rotor, each history a function of the time.

    Attributes:
        duration_s: How long.
        speed_rad_s: Rotor speed.
        collective_rad: Collective pitch.
        wind_m_s: Wind, its three components.
        cyclic_rad: Cyclic pitch, cosine and sine part.
        acceleration_rad_s2: Rate of the rotor speed; only lag sees it.
        start_azimuth_rad: Azimuth of the first blade at the start.
        gravity_m_s2: Gravity downwind, across and along thrust.
        air_density_kg_m3: Air density; 0 leaves air and inflow out.
        speed_of_sound_m_s: Speed of sound.
        load_factor: Multiplies lift, but not in the momentum balance.
        starts_retracted: Droop stop at the start; None: at or above its release speed.
    """

    duration_s: float
    speed_rad_s: Callable[[float], float] = ZERO
    collective_rad: Callable[[float], float] = ZERO
    wind_m_s: Wind = CALM
    cyclic_rad: Callable[[float], tuple[float, float]] = lambda _time: (0.0, 0.0)
    acceleration_rad_s2: Callable[[float], float] = ZERO
    start_azimuth_rad: float = 0.0
    gravity_m_s2: tuple[float, float, float] = (0.0, 0.0, -GRAVITY_M_S2)
    air_density_kg_m3: float = 1.2
    speed_of_sound_m_s: float = 340.0
    load_factor: float = 1.0
    starts_retracted: bool | None = None


def stop_moment_n_m(stop: Stop | LagStop, penetration_rad: Any, rate_rad_s: Any) -> Any:
    """K p max(0, 1 + d p') where p > 0, with d the stated damping over the rated moment."""
    grows = 1.0 + stop.damping_N_m_s_rad / stop.moment_rating_N_m * rate_rad_s
    moment = stop.stiffness_N_m_rad * penetration_rad * np.maximum(grows, 0.0)
    return np.where(penetration_rad > 0.0, moment, 0.0)


class Instant(NamedTuple):
    """What is done to the rotor at one time."""

    speed: float
    wind: tuple[float, float, float]
    collective: float
    cyclic: tuple[float, float]


class Equations:
    """Right-hand side for one rotor and case.

    Unknowns: azimuth, induced velocity of the stations (with air), then shapes and their rates
    blade by blade, then lag and its rate blade by blade (with a lag hinge).
    """

    def __init__(
        self,
        rotor: RotorArrays,
        blade: BladeShapes,
        stops: tuple[Stop | None, Stop | None],
        case: Case,
        *,
        n_marched: int = 1,
        lag: LagHinge | None = None,
    ) -> None:
        self.rotor, self.blade, self.case, self.lag = rotor, blade, case, lag
        self.droop, self.up = stops
        self.n_marched, self.n_shapes = n_marched, blade.tip.size
        self.n_stations = rotor.station_radius_m.size if case.air_density_kg_m3 > 0.0 else 0
        self.first = 1 + self.n_stations
        self.droop_rad = self.droop.angle_rad if self.droop else -math.inf
        self.up_rad = self.up.angle_rad if self.up else math.inf
        self._prepare_motion()
        self._prepare_air()

    def _prepare_motion(self) -> None:
        blade, hub = self.blade, self.rotor.hub
        s, inverse = blade.hinge_slope, np.linalg.inv(blade.mass)
        bending = blade.stiffness_0 + hub.spring_N_m_rad * np.outer(s, s)
        self.pull = inverse @ np.stack([bending, blade.stiffness_omega2])
        self.by_moment, self.by_weight = inverse @ s, inverse @ blade.weight_kg_m
        self.by_rigid, self.by_shape = inverse[0], inverse
        self.inertia = float(blade.mass[0, 0])
        self.first_moment = float(blade.weight_kg_m[0])
        self.e_S = hub.hinge_m * self.first_moment
        self.neutral = hub.spring_N_m_rad * hub.spring_neutral_rad

    def _prepare_air(self) -> None:
        rotor, blade, rho = self.rotor, self.blade, self.case.air_density_kg_m3
        r = rotor.station_radius_m
        self.arm, self.still, self.x = rotor.arm_m, rotor.still_m, r / rotor.radius_m
        self.half_rho_chord = 0.5 * rho * rotor.chord_m
        weighted = blade.at_stations * rotor.station_width_m[:, None]
        self.by_force = self.by_shape @ weighted.T
        lag_arm = np.maximum(r - (self.lag.hinge_m if self.lag else 0.0), 0.0)
        self.lag_arm = lag_arm * rotor.station_width_m
        self.mean = rotor.station_width_m * r / np.sum(rotor.station_width_m * r)
        inboard = np.maximum(self.x - rotor.aero_root_m / rotor.radius_m, 0.0)
        self.distance = 0.5 * rotor.n_blades * np.stack([1.0 - self.x, inboard]) / self.x
        self.momentum = 4.0 * math.pi * rho * r * (2.0 / math.pi) ** 2
        self.apparent = 2.0 * math.pi * rho * r * APPARENT_MASS * rotor.radius_m

    def blade_states(self, state: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Shapes and their rates, each (blades, shapes, ...)."""
        size = 2 * self.n_marched * self.n_shapes
        both = state[self.first : self.first + size]
        both = both.reshape(self.n_marched, 2, self.n_shapes, *state.shape[1:])
        return both[:, 0], both[:, 1]

    def start(
        self, shapes: FloatArray, rates: FloatArray | None = None, induced: Any = 0.0
    ) -> FloatArray:
        """Unknowns with all blades alike and no lag."""
        rate = np.zeros(self.n_shapes) if rates is None else rates
        air = np.zeros(self.n_stations) + induced
        lag = np.zeros(2 * self.n_marched if self.lag else 0)
        blades = np.tile(np.concatenate([shapes, rate]), self.n_marched)
        return np.concatenate([[self.case.start_azimuth_rad], air, blades, lag])

    def at_rest(self) -> FloatArray:
        """Shapes of the blade that its weight alone presses on the droop stop."""
        assert self.droop
        s, K = self.blade.hinge_slope, self.droop.stiffness_N_m_rad
        spring = self.rotor.hub.spring_N_m_rad
        held = self.blade.stiffness_0 + (spring + K) * np.outer(s, s)
        q: Any = np.zeros(self.n_shapes)
        for _ in range(50):
            load = self.case.gravity_m_s2[2] * self.blade.weight_kg_m
            load[0] *= math.cos(q[0])
            q = np.linalg.solve(held, load + s * (K * self.droop_rad + self.neutral))
        return np.asarray(q)

    def __call__(self, time: float, state: FloatArray) -> FloatArray:
        """Rates of the unknowns."""
        case, n = self.case, self.n_shapes
        now = Instant(
            case.speed_rad_s(time),
            case.wind_m_s(time),
            case.collective_rad(time),
            case.cyclic_rad(time),
        )
        rates = np.empty_like(state)
        rates[0] = now.speed
        induced = state[1 : self.first]
        bend = self._gradient(now, induced)
        vertical: Any = 0.0
        for k in range(self.n_marched):
            psi = float(state[0]) + 2.0 * math.pi * k / self.n_marched
            begin = self.first + 2 * n * k
            q, rate = state[begin : begin + n], state[begin + n : begin + 2 * n]
            acceleration, upward, drag = self._blade(now, psi, (q, rate), (induced, bend))
            vertical = vertical + upward
            rates[begin : begin + n], rates[begin + n : begin + 2 * n] = rate, acceleration
            if self.lag:
                self._lag(time, state, rates, (k, drag))
        if self.n_stations:
            balance = vertical * (self.rotor.n_blades / self.n_marched)
            rates[1 : self.first] = (balance - self._carried(now, induced)) / self.apparent
        return rates

    def _gradient(self, now: Instant, induced: FloatArray) -> Any:
        """Share of the inflow that one metre a second of outward wind adds, (stations,)."""
        if not self.n_stations:
            return 0.0
        mean = abs(float(self.mean @ induced))
        wind = math.hypot(now.wind[0], now.wind[1])
        return (PITT_PETERS / max(math.hypot(wind, mean) + mean, 1e-12)) * self.x

    def _carried(self, now: Instant, induced: FloatArray) -> FloatArray:
        """Thrust per length that the momentum of each annulus takes up."""
        turning = now.speed * self.rotor.station_radius_m
        size = np.abs(induced)
        sine = size / np.maximum(np.sqrt(turning * turning + induced * induced), 1e-6)
        loss = np.arccos(np.exp(self.distance / -np.maximum(sine, 1e-9)))
        through = induced - now.wind[2]
        away = np.sqrt(now.wind[0] ** 2 + now.wind[1] ** 2 + through * through)
        carried: FloatArray = self.momentum * loss[0] * loss[1] * induced * away
        return carried

    def _blade(
        self,
        now: Instant,
        psi: float,
        motion: tuple[FloatArray, FloatArray],
        inflow: tuple[FloatArray, Any],
    ) -> tuple[FloatArray, Any, Any]:
        """Acceleration of the shapes, vertical force and drag per length, for one blade."""
        q, rate = motion
        turn = (math.cos(psi), math.sin(psi))
        theta, theta_rate = float(self.blade.hinge_slope @ q), float(self.blade.hinge_slope @ rate)
        moment = self.neutral - self.rotor.hub.damper_N_m_s_rad * theta_rate
        if theta < self.droop_rad and self.droop:
            moment += stop_moment_n_m(self.droop, self.droop_rad - theta, -theta_rate)
        if theta > self.up_rad and self.up:
            moment -= stop_moment_n_m(self.up, theta - self.up_rad, theta_rate)
        square = now.speed * now.speed
        pulls = self.pull @ q
        acceleration = self.by_moment * moment - pulls[0] - square * pulls[1]
        self._add_rigid(acceleration, square, turn, float(q[0]))
        if not self.n_stations:
            return acceleration, 0.0, 0.0
        pitch = now.collective - self.rotor.hub.pitch_flap * theta
        pitch += now.cyclic[0] * turn[0] + now.cyclic[1] * turn[1]
        normal, upward, drag = self._forces(now, (*turn, pitch), motion, inflow)
        return acceleration + self.by_force @ normal, upward, drag

    def _add_rigid(
        self, acceleration: FloatArray, square: float, turn: tuple[float, float], b: float
    ) -> None:
        """Weight, and what the flap angle itself adds to the linear centrifugal moment."""
        x, y, z = self.case.gravity_m_s2
        sine, cosine = math.sin(b), math.cos(b)
        acceleration += z * self.by_weight
        along = x * turn[0] + y * turn[1]
        weight = self.first_moment * (z * (cosine - 1.0) - along * sine)
        pull = (self.inertia * cosine + self.e_S) * sine - (self.inertia + self.e_S) * b
        acceleration += (weight - square * pull) * self.by_rigid

    def _forces(
        self,
        now: Instant,
        turn: tuple[float, float, float],
        motion: tuple[FloatArray, FloatArray],
        inflow: tuple[FloatArray, Any],
    ) -> tuple[FloatArray, FloatArray, FloatArray]:
        """Normal force, vertical force without load factor and drag, per length."""
        u_T, u_P = self.flow(now, turn[:2], motion, inflow)
        speed = np.sqrt(u_T * u_T + u_P * u_P)
        alpha = turn[2] + self.rotor.twist_rad - np.arctan2(u_P, u_T)
        lift_drag = station_lift_drag(
            self.rotor.sections, alpha, speed / self.case.speed_of_sound_m_s
        )
        pressure = self.half_rho_chord * speed
        lift, drag = pressure * lift_drag.real, pressure * lift_drag.imag
        k, cosine = self.case.load_factor, math.cos(motion[0][0])
        upward, down = lift * u_T, drag * u_P
        return k * upward - down, cosine * (upward - down), k * lift * u_P + drag * u_T

    def flow(
        self,
        now: Instant,
        turn: tuple[float, float],
        motion: tuple[FloatArray, FloatArray],
        inflow: tuple[FloatArray, Any],
    ) -> tuple[FloatArray, FloatArray]:
        """Air that meets the stations: in the disc plane, and from above; each (stations,).

        Of the inflow is given its mean over azimuth, and the share of it that one metre a second
        of outward wind adds.
        """
        (q, rate), (cp, sp), (u, v, w) = motion, turn, now.wind
        b = float(q[0])
        sine, cosine = math.sin(b), math.cos(b)
        along = u * cp + v * sp
        u_T = now.speed * (self.still + cosine * self.arm) + (u * sp - v * cp)
        u_P = cosine * (inflow[0] * (1.0 + along * inflow[1]) - w)
        u_P += self.blade.at_stations @ rate
        u_P += along * (sine + self.blade.slope_at_stations[:, 1:] @ q[1:])
        return u_T, u_P

    def _lag(
        self, time: float, state: FloatArray, rates: FloatArray, blade: tuple[int, Any]
    ) -> None:
        """Rigid lag, against rotation: driven by drag, acceleration of the rotor and flapping."""
        lag, (k, drag) = self.lag, blade
        assert lag
        at = self.first + 2 * self.n_shapes * self.n_marched + 2 * k
        begin = self.first + 2 * self.n_shapes * k
        flap, flap_rate = state[begin], state[begin + self.n_shapes]
        z, z_rate, Omega = state[at], state[at + 1], rates[0]
        e_S = lag.hinge_m * lag.first_moment_kg_m
        moment = float(np.sum(drag * self.lag_arm))
        moment += self.case.acceleration_rad_s2(time) * (lag.inertia_kg_m2 + e_S)
        moment -= 2.0 * Omega * lag.inertia_kg_m2 * flap * flap_rate
        moment -= lag.damper_N_m_s_rad * z_rate + (lag.spring_N_m_rad + Omega**2 * e_S) * z
        if lag.stop:
            moment += stop_moment_n_m(lag.stop, -lag.stop.lead_angle_rad - z, -z_rate)
            moment -= stop_moment_n_m(lag.stop, z - lag.stop.lag_angle_rad, z_rate)
        rates[at], rates[at + 1] = z_rate, moment / lag.inertia_kg_m2
