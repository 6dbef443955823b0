"""Rotor, drive and brake on one shaft: what turns it, what slows it, and the controls in force."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.shaft_torque import motor_torque_n_m
from planner.model.plan import Cyclic
from planner.model.results import Status
from planner.predict.cases import AirState, Point, air_of, to_cases
from planner.predict.fineness import SETTINGS, STATIONS
from planner.predict.study import NotAssessedError
from planner.rotor.blade_views import flap_inertia
from planner.rotor.setup import rotor_arrays
from planner.rotor.speed_history import Controls
from planner.rotor.trim import PARKED_BELOW_RAD_S, trim

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from numpy.typing import ArrayLike, NDArray

    from planner.model.plan import Segment
    from planner.model.rotor import Rotor
    from planner.model.stand import Drive, Mounting
    from planner.predict.study import Inputs
    from planner.rotor.result import TrimResult
    from planner.rotor.setup import RotorArrays

    FloatArray = NDArray[np.float64]
    Way = tuple[Segment, tuple[Controls, Controls]]
    """A segment with the controls at its beginning and end."""

TAKES = (
    "rotor",
    "stand.mounting",
    "stand.drive",
    "stand.brake_below_rad_s",
    "stand.brake_torque_N_m",
)
"""Model paths that a shaft is made of."""
LEVEL = "wind on a rotor with a level axis also blows through the disc, which is not modelled"
_NO_FRICTION = (
    "stand, drive: expected the friction of drive and bearings, found none; state friction in "
    '[drive], "0 N m" where none may be counted on'
)


@dataclass(frozen=True, eq=False)
class Shaft:
    """Rotor, drive and brake in the nominal air and mean wind of the day."""

    rotor: Rotor
    arrays: RotorArrays
    drive: Drive
    mounting: Mounting
    brake_below_rad_s: float | None
    brake_torque_N_m: float | None
    air: AirState
    wind_m_s: float

    @cached_property
    def inertia_kg_m2(self) -> float:
        """Rotating inertia of blades, hub and drive, as it takes torque to change the speed."""
        blade = float(flap_inertia(self.rotor.blade, 0.0).second_moment_kg_m2)
        return self.rotor.n_blades * blade + self.drive.inertia_kg_m2

    @property
    def friction_n_m(self) -> float:
        """Friction of drive and bearings.

        Raises:
            NotAssessedError: the stand file states none.
        """
        if self.drive.friction_N_m is None:
            raise NotAssessedError(Status.NOT_STATED, _NO_FRICTION)
        return self.drive.friction_N_m

    def brake_from_rad_s(self, ordered_rad_s: float, *, is_used: bool) -> float:
        """Speed from which the brake acts: as ordered, never above the permitted; 0: not at all.

        A brake without a stated torque is counted on for nothing.
        """
        if not is_used or self.brake_below_rad_s is None or self.brake_torque_N_m is None:
            return 0.0
        return min(ordered_rad_s, self.brake_below_rad_s)

    def motor_torque_n_m(self, speed_rad_s: ArrayLike) -> FloatArray:
        """Greatest torque of the drive at the rotor shaft by rotor speed."""
        drive = self.drive
        return motor_torque_n_m(
            speed_rad_s, drive.torque_rating_N_m, drive.power_rating_W, drive.torque_by_speed
        )

    def nominal(self, speed_rad_s: float, controls: Controls) -> Point:
        """The state that is meant, in nominal air and mean wind."""
        cyclic = Cyclic(
            trimmed=False,
            cosine_rad=controls.cyclic_cosine_rad,
            sine_rad=controls.cyclic_sine_rad,
        )
        return Point(0, speed_rad_s, controls.collective_rad, cyclic, self.wind_m_s, self.air)

    def torque_n_m(self, points: Sequence[Point]) -> FloatArray:
        """Rotor torque of many states, each different one solved once, all in one batch.

        A rotor at rest in the wind has next to none; where no balance of its parked blades is
        found it counts as 0.

        Returns:
            Torque, (points,); not a number where a turning state was not solved.
        """
        if not points:
            return np.zeros(0)
        where: dict[Point, int] = {}
        order = [where.setdefault(point, len(where)) for point in points]
        torque = self._solved(list(where)).loads.torque_N_m
        parked = np.array([point.speed_rad_s <= PARKED_BELOW_RAD_S for point in where])
        torque = np.where(parked & ~np.isfinite(torque), 0.0, torque)
        return np.asarray(torque[np.array(order)])

    def found_cyclics(self, walk: Sequence[Segment]) -> Mapping[tuple[float, float], Cyclic]:
        """Cyclic that trims each end of a segment in the mean wind, by speed and collective."""
        ends = sorted(
            {
                (speed, collective)
                for s in walk
                for speed, collective, cyclic in (
                    (s.from_rad_s, s.from_collective_rad, s.from_cyclic),
                    (s.to_rad_s, s.to_collective_rad, s.cyclic),
                )
                if cyclic.trimmed and speed > PARKED_BELOW_RAD_S
            }
        )
        if not ends:
            return {}
        trimmed = Cyclic(trimmed=True)
        points = [replace(self.nominal(v, Controls(pitch)), cyclic=trimmed) for v, pitch in ends]
        result = self._solved(points)
        pairs = zip(result.cyclic_cosine_rad, result.cyclic_sine_rad, strict=True)
        found = [Cyclic(trimmed=False, cosine_rad=float(c), sine_rad=float(s)) for c, s in pairs]
        return dict(zip(ends, found, strict=True))

    def _solved(self, points: list[Point]) -> TrimResult:
        stops = (self.rotor.droop_stop, self.rotor.up_stop)
        return trim(self.arrays, to_cases(points, stops, self.mounting), SETTINGS)


def shaft_of(inputs: Inputs) -> Shaft:
    """Collect the shaft of a run; the study takes the paths in ``TAKES``, and needs air and wind.

    Raises:
        NotAssessedError: air or wind were not assessed, the book states no allowance, or wind
            blows through a rotor with a level axis.
    """
    air = air_of(inputs)
    if inputs["stand.mounting"] == "axis level" and air.gust_m_s > 0.0:
        raise NotAssessedError(Status.OUTSIDE_VALIDITY, LEVEL)
    return Shaft(
        rotor=inputs["rotor"],
        arrays=rotor_arrays(inputs["rotor"], STATIONS),
        drive=inputs["stand.drive"],
        mounting=inputs["stand.mounting"],
        brake_below_rad_s=inputs["stand.brake_below_rad_s"],
        brake_torque_N_m=inputs["stand.brake_torque_N_m"],
        air=air.nominal,
        wind_m_s=air.wind_m_s,
    )


def ends_of(
    segment: Segment, cyclics: Mapping[tuple[float, float], Cyclic]
) -> tuple[Controls, Controls]:
    """Controls where a segment begins and ends.

    Cyclic that is trimmed is the one found in the mean wind. A rotor at rest needs none; the stop
    keeps what it begins with, for nobody trims a rotor that runs down.
    """
    start = _controls(
        segment.from_cyclic, (segment.from_rad_s, segment.from_collective_rad), cyclics
    )
    if segment.kind == "stop" and segment.cyclic.trimmed:
        return start, replace(start, collective_rad=segment.to_collective_rad)
    return start, _controls(segment.cyclic, (segment.to_rad_s, segment.to_collective_rad), cyclics)


def _controls(
    cyclic: Cyclic, at: tuple[float, float], cyclics: Mapping[tuple[float, float], Cyclic]
) -> Controls:
    if cyclic.trimmed:
        cyclic = cyclics.get(at, Cyclic(trimmed=False))
    return Controls(at[1], cyclic.cosine_rad, cyclic.sine_rad)
