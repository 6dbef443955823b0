"""The stand: mounting, modes, drive, brake, ratings, surroundings. SI, frozen, no I/O."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Mounting = Literal["upright", "inverted", "axis level"]


@dataclass(frozen=True)
class GivenMode:
    """A stand or shaft mode as measured or calculated elsewhere."""

    name: str
    family: Literal["stand", "shaft"]
    frequency_rad_s: float
    damping_ratio: float
    direction: str
    rotor_fitted: bool | None
    """Was the rotor's mass fitted? None: not stated, so the mode cannot be judged."""
    source: str


@dataclass(frozen=True)
class Drive:
    """Motor and gearing, referred to the rotor shaft."""

    name: str
    gear_ratio: float
    """Motor turns for one rotor turn."""
    torque_rating_N_m: float
    power_rating_W: float
    maximum_rad_s: float
    inertia_kg_m2: float
    """Rotating inertia of motor, gearing and hub, referred to the rotor shaft; without blades."""
    overspeed_trip_rad_s: float | None
    friction_N_m: float | None = None
    """Drag torque of drive and bearings at the rotor shaft while coasting."""
    torque_by_speed: tuple[tuple[float, float], ...] = ()
    """Greatest torque [N m] by rotor speed [rad/s], both at the rotor shaft, speed increasing.

    Empty: torque rating and power rating bound it.
    """


@dataclass(frozen=True)
class Ratings:
    """What the stand carries at the hub."""

    thrust_N: float
    hub_moment_N_m: float


@dataclass(frozen=True)
class Obstruction:
    """Something within reach of a blade, or a place where people stay."""

    name: str
    bearing_rad: float
    distance_m: float
    height_m: float


@dataclass(frozen=True)
class Stand:
    """The whirl stand as it is built."""

    name: str
    hub_height_m: float
    mounting: Mounting
    full_speed_rad_s: float
    """Rotor speed that reads 100 % rpm."""
    speed_gauge_error_rad_s: float
    modes: tuple[GivenMode, ...]
    drive: Drive
    brake_below_rad_s: float | None
    ratings: Ratings
    obstructions: tuple[Obstruction, ...]
    positions: tuple[Obstruction, ...]
    brake_torque_N_m: float | None = None
    """Torque of the brake at the rotor shaft."""
