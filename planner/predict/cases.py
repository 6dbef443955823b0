"""From segments to the states that the rotor is solved in.

Each hold is solved at its target (nominal), and at the corners of its window: speed with gauge
error, collective, calm, mean wind and gust, and both ends of the air load allowance together with
the thinnest and densest air. Each ramp is solved at points along it, at each of them nominal, and
in calm, mean wind and gust with both ends of the allowance. The mean wind counts by itself: side
flapping is strongest in light wind, where the wake leans back but is still strong.

Where a step trims the cyclic, it is found at the nominal state in the mean wind; the corners keep
that cyclic: a gust is not trimmed out.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import product
from typing import TYPE_CHECKING

import numpy as np

from planner.rotor.case import Cases, gravity_vector_m_s2, make_cases

if TYPE_CHECKING:
    from collections.abc import Sequence

    from planner.model.plan import Cyclic, Segment
    from planner.model.rotor import Stop
    from planner.model.stand import Mounting
    from planner.predict.study import Inputs

RAMP_POINTS = 5
"""Points along a change of rotor speed, both ends included."""
PITCH_POINTS = 3
"""Points along a change of pitch at constant speed."""
ROUNDING = 1e-9


@dataclass(frozen=True)
class AirState:
    """Air together with the model allowance that goes with it."""

    density_kg_m3: float
    sound_m_s: float
    load_factor: float


@dataclass(frozen=True)
class Air:
    """Air and wind of a run: nominal, and the two ends that corners take.

    Low lift goes with the thinnest, warmest air and high lift with the densest, coldest.
    """

    nominal: AirState
    ends: tuple[AirState, AirState]
    wind_m_s: float
    gust_m_s: float


@dataclass(frozen=True)
class Point:
    """One state of one segment."""

    segment: int
    speed_rad_s: float
    collective_rad: float
    cyclic: Cyclic
    wind_m_s: float
    air: AirState


def air_of(inputs: Inputs) -> Air:
    """Collect the air and wind from the studies before.

    Raises:
        NotAssessedError: air or wind were not assessed, or the book states no allowance.
    """
    factor = inputs.allowance("air_load")
    sound, slow, fast = inputs.bounds("speed_of_sound")
    density, thin, dense = inputs.bounds("air_density")
    mean, _, gust = inputs.bounds("wind_at_hub")
    ends = (AirState(thin, fast, factor[0]), AirState(dense, slow, factor[1]))
    return Air(AirState(density, sound, 1.0), ends, mean, gust)


def nominal_points(segments: Sequence[Segment], air: Air, counts_from_rad_s: float) -> list[Point]:
    """The states that segments are meant to pass, in the mean wind.

    A hold counts at any speed; of a ramp, the points at and above the speed where the stops are
    left behind count, with one at just that speed where the ramp passes it.
    """
    return [
        Point(index, speed, collective, cyclic, air.wind_m_s, air.nominal)
        for index, segment in enumerate(segments)
        for speed, collective, cyclic in _along(segment, counts_from_rad_s)
    ]


def corner_points(
    point: Point, segment: Segment, air: Air, gauge_error_rad_s: float
) -> list[Point]:
    """The corners around a nominal state whose cyclic is fixed."""
    speeds, pitches = [point.speed_rad_s], [point.collective_rad]
    if segment.kind == "hold":
        half = segment.window.speed_rad_s + gauge_error_rad_s
        if point.speed_rad_s > 0.0:
            speeds = [max(0.0, point.speed_rad_s - half), point.speed_rad_s + half]
        pitches = sorted(
            {
                point.collective_rad - segment.window.collective_rad,
                point.collective_rad + segment.window.collective_rad,
            }
        )
    winds = sorted({0.0, air.wind_m_s, air.gust_m_s})
    return [
        replace(
            point,
            speed_rad_s=speed,
            collective_rad=pitch,
            wind_m_s=wind,
            air=end,
        )
        for speed, pitch, wind, end in product(speeds, pitches, winds, air.ends)
    ]


def gust_trim_points(points: Sequence[Point], air: Air) -> list[Point]:
    """Trimmed states once more in the gust: what the cyclic would have to be there."""
    return [replace(p, wind_m_s=air.gust_m_s) for p in points if p.cyclic.trimmed]


def to_cases(
    points: Sequence[Point],
    stops: tuple[Stop | None, Stop | None],
    mounting: Mounting,
) -> Cases:
    """Arrays for the rotor; the droop stop's angle is the one in force at each speed."""
    droop, up = stops
    missing = float("nan")
    return make_cases(
        speed_rad_s=[p.speed_rad_s for p in points],
        collective_rad=[p.collective_rad for p in points],
        cyclic_cosine_rad=[p.cyclic.cosine_rad for p in points],
        cyclic_sine_rad=[p.cyclic.sine_rad for p in points],
        trimmed=[p.cyclic.trimmed and p.speed_rad_s > 0.0 for p in points],
        wind_m_s=[p.wind_m_s for p in points],
        air_density_kg_m3=[p.air.density_kg_m3 for p in points],
        speed_of_sound_m_s=[p.air.sound_m_s for p in points],
        load_factor=[p.air.load_factor for p in points],
        gravity_m_s2=gravity_vector_m_s2(mounting),
        droop_angle_rad=[
            missing if droop is None else droop.lowest_angle_rad(p.speed_rad_s) for p in points
        ],
        up_angle_rad=missing if up is None else up.angle_rad,
    )


def _along(segment: Segment, counts_from_rad_s: float) -> list[tuple[float, float, Cyclic]]:
    """Speed, collective and cyclic at the nominal points of a segment."""
    if segment.kind == "hold":
        return [(segment.to_rad_s, segment.to_collective_rad, segment.cyclic)]
    start, change = segment.from_rad_s, segment.to_rad_s - segment.from_rad_s
    shares = np.linspace(0.0, 1.0, RAMP_POINTS if change else PITCH_POINTS).tolist()
    if change and 0.0 < (counts_from_rad_s - start) / change < 1.0:
        shares = sorted({*shares, (counts_from_rad_s - start) / change})
    pitch, more = (
        segment.from_collective_rad,
        segment.to_collective_rad - segment.from_collective_rad,
    )
    places = [(share, start + share * change, pitch + share * more) for share in shares]
    places[-1] = (1.0, segment.to_rad_s, segment.to_collective_rad)
    return [
        (speed, collective, cyclic)
        for share, speed, collective in places
        if speed >= counts_from_rad_s * (1.0 - ROUNDING)
        for cyclic in _cyclics(segment, share)
    ]


def _cyclics(segment: Segment, share: float) -> list[Cyclic]:
    """Cyclic on the way: between fixed values in proportion, else each end by itself."""
    start, end = segment.from_cyclic, segment.cyclic
    if start == end:
        return [end]
    if start.trimmed or end.trimmed:
        return [start, end]
    return [
        replace(
            end,
            cosine_rad=start.cosine_rad + share * (end.cosine_rad - start.cosine_rad),
            sine_rad=start.sine_rad + share * (end.sine_rad - start.sine_rad),
        )
    ]
