"""What torque the drive has left in each ramp."""

from __future__ import annotations

from dataclasses import replace
from itertools import product
from typing import TYPE_CHECKING

import numpy as np

from planner.model.results import Labels, Status
from planner.predict.histories import TOO_WEAK

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from planner.model.plan import Segment
    from planner.predict.cases import Air, Point
    from planner.predict.rows import Rows
    from planner.predict.shaft import Shaft, Way

    FloatArray = NDArray[np.float64]

SHARES = np.linspace(0.0, 1.0, 9)
"""Of a ramp's way: where its rotor torque is solved."""
LOOKS = np.linspace(0.0, 1.0, 129)
"""Of a ramp's way: where its reserve is looked at, rotor torque straight between solved states."""
NO_TORQUE = "the rotor torque of the ramp did not converge at every point"
NO_DURATION = "the ramp has no duration"


def reserves(
    rows: Rows, ways: Sequence[Way], known: tuple[Shaft, Air], allowance: tuple[float, float]
) -> None:
    """Add the least torque that the drive has left in each ramp; all are solved in one batch.

    Raises:
        NotAssessedError: the stand file states no friction.
    """
    shaft, air = known
    friction = shaft.friction_n_m
    points = [point for way in ways for point in _points(way, shaft, air)]
    torque = shaft.torque_n_m(points).reshape(len(ways), SHARES.size, -1) if ways else None
    for i, (segment, _) in enumerate(ways):
        label, top = Labels(segment=segment.id), segment.top_rad_s
        if torque is None or not np.all(np.isfinite(torque[i])):
            rows.flag(label, Status.NOT_CONVERGED, NO_TORQUE, speed_rad_s=top)
            continue
        if not segment.own_run_up and not segment.duration_s > 0.0:
            rows.flag(label, Status.NOT_STATED, NO_DURATION, speed_rad_s=top)
            continue
        value, low, high = _left(segment, shaft, torque[i], allowance)
        needs = friction + _acceleration_torque_n_m(segment, shaft)
        numbers = (value - needs, low - needs, high - needs)
        if segment.own_run_up and not value > needs:
            rows.flag(label, Status.OUTSIDE_VALIDITY, TOO_WEAK, numbers=numbers, speed_rad_s=top)
        else:
            rows.add(label, numbers[0], low=numbers[1], high=numbers[2], speed_rad_s=top)


def _points(way: Way, shaft: Shaft, air: Air) -> list[Point]:
    """At each share of the way the nominal state, then every wind with both ends of the air."""
    segment, (start, end) = way
    points = []
    for share in SHARES.tolist():
        speed = segment.from_rad_s + share * (segment.to_rad_s - segment.from_rad_s)
        nominal = shaft.nominal(speed, start.towards(end, share))
        winds = sorted({0.0, air.wind_m_s, air.gust_m_s})
        points += [nominal]
        points += [replace(nominal, wind_m_s=w, air=a) for w, a in product(winds, air.ends)]
    return points


def _left(
    segment: Segment, shaft: Shaft, torque: FloatArray, allowance: tuple[float, float]
) -> tuple[float, float, float]:
    """Motor torque less rotor torque (shares, states): nominal, low and high, least of the way."""
    ends = np.sort(np.multiply.outer(np.array(allowance), torque), axis=0)
    columns = (torque[:, 0], ends[1].max(axis=1), ends[0].min(axis=1))
    start, change = segment.from_rad_s, segment.to_rad_s - segment.from_rad_s
    looks = LOOKS
    if change:
        bends = np.array([(row[0] - start) / change for row in shaft.drive.torque_by_speed])
        looks = np.union1d(LOOKS, bends[(bends > 0.0) & (bends < 1.0)])
    motor = shaft.motor_torque_n_m(start + looks * change)
    value, low, high = (
        float(np.min(motor - np.interp(looks, SHARES, column))) for column in columns
    )
    return value, low, high


def _acceleration_torque_n_m(segment: Segment, shaft: Shaft) -> float:
    """Torque that changes the speed along the ramp; its own run-up has what is left over."""
    if segment.own_run_up:
        return 0.0
    change = segment.to_rad_s - segment.from_rad_s
    return shaft.inertia_kg_m2 * change / segment.duration_s
