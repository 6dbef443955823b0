"""The droop stop at rest, and the speeds at which blades leave it."""

from __future__ import annotations

import math
from dataclasses import replace
from itertools import product
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.hand_checks import resting_stop_moment_n_m
from planner.model.plan import Cyclic
from planner.model.results import Labels, Status
from planner.predict.cases import Point, air_of, to_cases
from planner.predict.fineness import SETTINGS, STATIONS
from planner.predict.hover_hand import hinge_by_hand
from planner.predict.rows import Rows
from planner.predict.stop_free import stop_free_speed_rad_s
from planner.predict.study import Inputs, NotAssessedError, Study
from planner.rotor.lift_off import lift_off_in_wind, still_air_lift_off
from planner.rotor.result import FlapState
from planner.rotor.setup import RotorArrays, rotor_arrays
from planner.rotor.trim import trim

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from planner.model.plan import Segment
    from planner.model.results import Prediction
    from planner.model.rotor import Rotor, Stop
    from planner.predict.cases import Air
    from planner.rotor.case import Cases

_ID = "stops"
_QUANTITIES = ("lift_off_speed_still_air", "lift_off_speed_in_wind", "droop_stop_rest_moment")
_INVERTED = (
    "the blades of an inverted rotor hang on their up stops at rest; their moment there and how "
    "they leave it is not modelled"
)
_LEVEL = "wind on a rotor with a level axis also blows through the disc, which is not modelled"


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """Rest moment, lift-off speeds, and where the stops are left behind."""
    rotor: Rotor = inputs["rotor"]
    rows = {quantity: Rows(quantity, _ID) for quantity in _QUANTITIES}
    if rotor.droop_stop is None:
        for filled in rows.values():
            filled.flag(Labels(), Status.NOT_APPLICABLE, "the hub has no droop stop")
    elif inputs["stand.mounting"] == "inverted":
        for filled in rows.values():
            filled.flag(Labels(), Status.OUTSIDE_VALIDITY, _INVERTED)
    else:
        air, arrays = air_of(inputs), rotor_arrays(rotor, STATIONS)
        _rest_moment(rows["droop_stop_rest_moment"], inputs, arrays, (air, rotor.droop_stop))
        _lift_off(rows, inputs, arrays, (air, rotor.droop_stop))
    found = {quantity: filled.prediction() for quantity, filled in rows.items()}
    return {**found, "stop_free_speed": _stop_free(inputs, found["lift_off_speed_in_wind"])}


def _stop_free(inputs: Inputs, lift_off: Prediction) -> Prediction:
    rows = Rows("stop_free_speed", _ID)
    try:
        rows.add(Labels(), stop_free_speed_rad_s(inputs, inputs["rotor"], lift_off))
    except NotAssessedError as refusal:
        rows.flag(Labels(), refusal.status, str(refusal))
    return rows.prediction()


def _cases(points: Sequence[Point], inputs: Inputs, droop: Stop) -> Cases:
    """Cases at the static stop angle, whatever their speed."""
    rotor: Rotor = inputs["rotor"]
    static = replace(droop, retraction=None)
    return to_cases(points, (static, rotor.up_stop), inputs["stand.mounting"])


def _points(pitches: Sequence[float], winds: Sequence[float], air: Air) -> list[Point]:
    """The nominal state (first pitch, strongest wind), then both ends of the load allowance."""
    nominal = (pitches[0], winds[-1], air.nominal)
    return [
        Point(0, 0.0, pitch, Cyclic(trimmed=False), wind, state)
        for pitch, wind, state in (nominal, *product(pitches, winds, air.ends))
    ]


def pitches_at_rest(segments: Sequence[Segment]) -> list[float]:
    """Collectives with which the run leaves or reaches rest."""
    starting = {s.from_collective_rad for s in segments if s.from_rad_s == 0.0}
    ending = {s.to_collective_rad for s in segments if s.to_rad_s == 0.0}
    return sorted(starting | ending)


def _rest_moment(rows: Rows, inputs: Inputs, arrays: RotorArrays, known: tuple[Air, Stop]) -> None:
    air, droop = known
    pitches = pitches_at_rest(inputs["segments"])
    points = _points(pitches[:1], [0.0], air)[:1]
    points += _points(pitches, sorted({air.wind_m_s, air.gust_m_s}), air)
    result = trim(arrays, _cases(points, inputs, droop), SETTINGS)
    moments = result.stop_moment_N_m
    numbers = (float(moments[0]), float(np.min(moments)), float(np.max(moments)))
    if inputs["stand.mounting"] == "axis level" and air.gust_m_s > 0.0:
        rows.flag(Labels(), Status.OUTSIDE_VALIDITY, _LEVEL, numbers=numbers)
    elif not np.all(result.converged):
        rows.flag(Labels(), Status.NOT_CONVERGED, "no rest position of the parked blades found")
    elif not arrays.hub.pair and np.any(result.state != FlapState.RESTING):
        rows.flag(
            Labels(),
            Status.OUTSIDE_VALIDITY,
            "this wind lifts a parked blade off its "
            "droop stop; how it falls back is not predicted",
            numbers=numbers,
        )
    else:
        rows.add(
            Labels(),
            numbers[0],
            low=numbers[1],
            high=numbers[2],
            hand=_hand_rest_moment(inputs, arrays),
        )


def _hand_rest_moment(inputs: Inputs, arrays: RotorArrays) -> float:
    rotor: Rotor = inputs["rotor"]
    if arrays.hub.pair or inputs["stand.mounting"] != "upright" or rotor.droop_stop is None:
        return math.nan
    hinge = hinge_by_hand(arrays, rotor.blade)
    return float(resting_stop_moment_n_m(hinge, rotor.droop_stop.angle_rad))


def _lift_off(
    rows: Mapping[str, Rows], inputs: Inputs, arrays: RotorArrays, known: tuple[Air, Stop]
) -> None:
    air, droop = known
    segments: Sequence[Segment] = inputs["segments"]
    top = max(s.highest_rad_s for s in segments) + inputs["stand.speed_gauge_error_rad_s"]
    pitches = pitches_at_rest(segments)
    mean_and_gust = sorted({air.wind_m_s, air.gust_m_s})
    if droop.retraction is not None:  # then no verdict hangs on these speeds
        pitches, mean_and_gust = pitches[:1], mean_and_gust[-1:]
    for quantity, winds, search in (
        ("lift_off_speed_still_air", [0.0], still_air_lift_off),
        ("lift_off_speed_in_wind", mean_and_gust, lift_off_in_wind),
    ):
        cases = _cases(_points(pitches, winds, air), inputs, droop)
        found = search(arrays, cases, np.full(cases.count, top), SETTINGS)
        speeds = found.speed_rad_s
        if inputs["stand.mounting"] == "axis level" and winds[-1] > 0.0:
            rows[quantity].flag(Labels(), Status.OUTSIDE_VALIDITY, _LEVEL)
        elif not np.all(found.is_found):
            rows[quantity].flag(
                Labels(),
                Status.NOT_CONVERGED,
                "no speed was found up to the "
                "card's highest at which the blades leave the droop stop",
            )
        else:
            rows[quantity].add(
                Labels(), float(speeds[0]), low=float(speeds.min()), high=float(speeds.max())
            )


STOPS = Study(
    _ID,
    1,
    (
        "segments",
        "rotor",
        "stand.mounting",
        "stand.full_speed_rad_s",
        "stand.speed_gauge_error_rad_s",
    ),
    ("air", "wind"),
    run,
    kept=True,
)
