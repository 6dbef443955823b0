"""Ramps, the stop and aborts, marched in gusts and turbulence: rows of what they come to."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.clearance import clearance_m
from planner.model.results import Labels, Status
from planner.predict.cases import air_of
from planner.predict.histories import NOT_RESEATED
from planner.predict.march_course import COURSE, course_rows
from planner.predict.march_outcome import LEAST, MOST
from planner.predict.march_parts import Part, RunParts, march_parts
from planner.predict.march_pool import Crew, crew
from planner.predict.march_runs import Bench
from planner.predict.march_winds import winds_of
from planner.predict.rows import Rows
from planner.predict.shaft import TAKES, shaft_of
from planner.predict.study import Inputs, Study

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from planner.model.plan import Segment
    from planner.model.results import Prediction
    from planner.model.rotor import Rotor
    from planner.model.stand import Obstruction
    from planner.predict.march_outcome import Outcome

_ID = "marches"
MOMENTS = {"contact_first": "first", "contact_last": "last"}
OVERRUN = "droop_stop_overrun"
QUANTITIES = (*MOST, *LEAST, *MOMENTS, OVERRUN, "blade_clearance")
OF_STOPS = frozenset(
    {
        "droop_stop_peak_moment",
        "up_stop_peak_moment",
        "contacts_after_lift_off",
        "contact_highest_speed",
        "contact_longest",
        "contact_closing_speed",
        "contact_energy",
        *MOMENTS,
        OVERRUN,
    }
)
OF_LAG = frozenset({"lag_peak", "lag_stop_peak_moment"})
_NO_STOPS = "the hub has no flap stops; its root moment is judged instead"
_HINGED = "the hub has a flap hinge; its stops are judged instead"
_NO_LAG_STOP = "the rotor file states no lag stops"
_UNRESOLVED = (
    "a case did not stay finite, or its steps do not resolve the stiffness of the stop: state "
    "the stiffness that the stop really has, or have it assessed otherwise"
)
_LEFT_OUT = "the stop does not come back here: that is the case looked at"
_NOT_AT_REST = "it neither begins nor ends at rest"
_BY_SPEED = "contacts of an abort are told by rotor speed (contact_highest_speed)"
_NO_TOUCH = "no blade touches its droop stop after lift-off"
_LEVEL_LAG = "lag of a rotor with a level axis swings with its weight, which is not modelled"
_LEVEL = "clearance is computed for an upright or inverted shaft only"


_Hands = dict[tuple[str, Labels], float]


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """March the run and write down what each part came to."""
    shaft = shaft_of(inputs)
    _ = shaft.friction_n_m  # without it no run-down is known
    whole = RunParts(shaft, inputs["segments"], inputs["shutdown"], inputs["abort"])
    with crew() as hands:
        bench = bench_of(inputs, hands)
        parts = march_parts(whole, bench, inputs.progress)
    found = predictions_of(parts, inputs)
    return {**found, COURSE: course_rows(parts, bench, inputs["segments"])}


def bench_of(inputs: Inputs, hands: Crew) -> Bench:
    """What a run is marched with.

    Raises:
        NotAssessedError: winds, air, or the speed where the stops are left behind are not known.
    """
    air, rotor, site = air_of(inputs), inputs["rotor"], inputs["site"]
    mean = min(air.wind_m_s + site.anemometer_error_m_s, air.gust_m_s)
    winds = winds_of(
        inputs["site"],
        inputs["stand.hub_height_m"],
        inputs["stand.obstructions"],
        (mean, air.gust_m_s, 2.0 * rotor.blade.radius_m),
    )
    free = inputs.bounds("stop_free_speed")[2]
    thrifty = inputs.requests.is_thrifty
    return Bench(rotor, inputs["stand.mounting"], air, winds, free, hands, is_thrifty=thrifty)


def predictions_of(parts: Sequence[Part], inputs: Inputs) -> dict[str, Prediction]:
    """Rows of all marched quantities; clearance at holds comes from their periodic flap."""
    rows = {quantity: Rows(quantity, _ID) for quantity in QUANTITIES}
    clearance, hands = _clearance(inputs), _periodic(inputs)
    for part in parts:
        for quantity in QUANTITIES:
            _row(rows[quantity], part, inputs["rotor"], (clearance, hands))
    for segment in inputs["segments"]:
        if segment.kind == "hold":
            _at_hold(rows["blade_clearance"], segment, inputs, clearance)
    return {quantity: filled.prediction() for quantity, filled in rows.items()}


def _periodic(inputs: Inputs) -> _Hands:
    """Extremes of periodic flap along ramps above the region of the stops, cyclic fixed.

    Where cyclic is trimmed the periodic states take the trim of each instant, the crew cannot.
    """
    hands: dict[tuple[str, Labels], float] = {}
    walk = inputs["segments"]
    fixed = {s.id for s in walk if not (s.from_cyclic.trimmed or s.cyclic.trimmed)}
    for marched, periodic, end in (
        ("highest_flap_marched", "flap_highest", "high"),
        ("lowest_flap_marched", "flap_lowest", "low"),
    ):
        found = inputs.prior[periodic]
        values = getattr(found, end)
        for labels, status, value in zip(found.labels, found.status, values, strict=True):
            if status is Status.OK and labels.segment in fixed:
                hands[marched, labels] = float(value)
    return hands


def _row(rows: Rows, part: Part, rotor: Rotor, known: tuple[_Clearance, _Hands]) -> None:
    """One part's row of one quantity."""
    clearance, hands = known
    status, reason = _fault(rows.quantity, part, rotor, clearance)
    if status is not Status.OK:
        rows.flag(part.labels, status, reason, speed_rad_s=part.top_rad_s)
        return
    if rows.quantity == "blade_clearance":
        value, worst = (
            clearance.of_tip_m(clearance.low_side_m(part.outcomes, at), part.collective_rad)
            for at in ("nominal", "worst")
        )
        rows.add(part.labels, value, low=worst, speed_rad_s=part.top_rad_s)
        return
    if rows.quantity in MOMENTS:
        _moment_row(rows, part)
        return
    if rows.quantity == OVERRUN:
        _overrun_row(rows, part, rotor)
        return
    value, worst = (_extreme(part.outcomes, rows.quantity, at) for at in ("nominal", "worst"))
    low = high = worst
    if rows.quantity == "thrust_peak":
        low = min(outcome.other["least_thrust"] for outcome in part.outcomes)
    hand = hands.get((rows.quantity, part.labels), math.nan)
    rows.add(part.labels, value, low=low, high=high, speed_rad_s=part.top_rad_s, hand=hand)


def _overrun_row(rows: Rows, part: Part, rotor: Rotor) -> None:
    """How far a blade sinks below its static droop stop on the way from or to rest."""
    droop, speed = rotor.droop_stop, part.top_rad_s
    rests = [outcome for outcome in part.outcomes if outcome.is_at_rest]
    if part.labels.state == NOT_RESEATED:
        rows.flag(part.labels, Status.NOT_APPLICABLE, _LEFT_OUT, speed_rad_s=speed)
    elif droop is None or not rests:
        rows.flag(part.labels, Status.NOT_APPLICABLE, _NOT_AT_REST, speed_rad_s=speed)
    else:
        value, worst = (
            max(0.0, droop.angle_rad - _extreme(rests, "lowest_flap_marched", at))
            for at in ("nominal", "worst")
        )
        rows.add(part.labels, value, high=worst, speed_rad_s=speed)


def _moment_row(rows: Rows, part: Part) -> None:
    """First or last touch after lift-off, from the begin of a ramp or the stop."""
    if part.labels.state:
        rows.flag(part.labels, Status.NOT_APPLICABLE, _BY_SPEED, speed_rad_s=part.top_rad_s)
        return
    name = MOMENTS[rows.quantity]
    times = [
        piece.begins_s + outcome.other[name]
        for piece, outcome in zip(part.pieces, part.outcomes, strict=True)
    ]
    found = [time for time in times if math.isfinite(time)]
    if not found:
        rows.flag(part.labels, Status.NOT_APPLICABLE, _NO_TOUCH, speed_rad_s=part.top_rad_s)
        return
    rows.add(
        part.labels, min(found) if name == "first" else max(found), speed_rad_s=part.top_rad_s
    )


def _extreme(outcomes: Sequence[Outcome], quantity: str, at: str) -> float:
    """Worst of all pieces of a part."""
    values: list[float] = [getattr(outcome, at)[quantity] for outcome in outcomes]
    return min(values) if quantity in LEAST else max(values)


def _fault(quantity: str, part: Part, rotor: Rotor, clearance: _Clearance) -> tuple[Status, str]:
    """Why a part has no number of a quantity; OK where it has."""
    for is_so, status, reason in (
        (quantity in OF_STOPS and rotor.droop_stop is None, Status.NOT_APPLICABLE, _NO_STOPS),
        (
            quantity == "root_flap_peak_moment" and rotor.hub.kind != "hingeless",
            Status.NOT_APPLICABLE,
            _HINGED,
        ),
        (quantity in OF_LAG and rotor.lag_stop is None, Status.NOT_APPLICABLE, _NO_LAG_STOP),
        (
            quantity in OF_LAG and clearance.mounting == "axis level",
            Status.OUTSIDE_VALIDITY,
            _LEVEL_LAG,
        ),
        (part.status is not Status.OK, part.status, part.reason),
        (not all(o.converged for o in part.outcomes), Status.NOT_CONVERGED, _UNRESOLVED),
        (quantity == "blade_clearance", *clearance.fault),
    ):
        if is_so:
            return status, reason
    return Status.OK, ""


@dataclass(frozen=True, eq=False)
class _Clearance:
    """From the height of a tip to the least distance of the blade from anything."""

    hinge_m: float
    radius_m: float
    chord_m: float
    hub_height_m: float
    obstructions: Sequence[Obstruction]
    mounting: str

    @property
    def fault(self) -> tuple[Status, str]:
        """Why there is no clearance; OK where there is."""
        if self.mounting == "axis level":
            return Status.OUTSIDE_VALIDITY, _LEVEL
        return Status.OK, ""

    def low_side_m(self, outcomes: Sequence[Outcome], at: str) -> float:
        """Lowest tip over the hub as it stands: of an inverted rotor the one flapped highest."""
        if self.mounting == "inverted":
            return -_extreme(outcomes, "highest_tip", at)
        return _extreme(outcomes, "lowest_tip", at)

    def of_tip_m(self, tip_m: float, collective_rad: float) -> float:
        """Clearance of a blade straight from hinge to tip, its trailing edge lowered by pitch."""
        edge = tip_m - 0.75 * self.chord_m * abs(math.sin(collective_rad))
        heights = np.array([[[0.0, edge]]])
        places = self.obstructions
        return float(
            clearance_m(
                heights,
                np.array([self.hinge_m, self.radius_m]),
                self.hub_height_m,
                np.array([place.distance_m for place in places]),
                np.array([place.height_m for place in places]),
            )[0]
        )


def _clearance(inputs: Inputs) -> _Clearance:
    rotor: Rotor = inputs["rotor"]
    hub, table = rotor.hub, rotor.blade.stations
    hinge = getattr(hub, "flap_hinge_m", getattr(hub, "root_m", 0.0))
    return _Clearance(
        hinge_m=float(hinge),
        radius_m=rotor.blade.radius_m,
        chord_m=float(np.max(table.chord_m)),
        hub_height_m=inputs["stand.hub_height_m"],
        obstructions=inputs["stand.obstructions"],
        mounting=inputs["stand.mounting"],
    )


def _at_hold(rows: Rows, segment: Segment, inputs: Inputs, clearance: _Clearance) -> None:
    """Clearance of the lowest periodic flap of a hold, as a straight blade."""
    label, speed = Labels(segment=segment.id), segment.to_rad_s
    inverted = clearance.mounting == "inverted"
    flap = inputs.prior["flap_highest" if inverted else "flap_lowest"]
    places = [i for i, labels in enumerate(flap.labels) if labels.segment in {"", segment.id}]
    status = [flap.status[i] for i in places] or [Status.NOT_COMPUTED]
    reasons = [flap.reasons[i] for i in places] or ["no flap was predicted for this hold"]
    if clearance.fault[0] is not Status.OK:
        rows.flag(label, *clearance.fault, speed_rad_s=speed)
    elif status[0] is not Status.OK:
        rows.flag(label, status[0], f"{flap.quantity}: {reasons[0]}", speed_rad_s=speed)
    else:
        length = clearance.radius_m - clearance.hinge_m
        pitch = abs(segment.to_collective_rad) + segment.window.collective_rad
        sign, worst = (-1.0, flap.high) if inverted else (1.0, flap.low)
        value, low = (
            clearance.of_tip_m(sign * length * math.sin(float(ends[places[0]])), pitch)
            for ends in (flap.value, worst)
        )
        rows.add(label, value, low=low, speed_rad_s=speed)


MARCHES = Study(
    _ID,
    1,
    (
        "site",
        "segments",
        "shutdown",
        "abort",
        "stand.hub_height_m",
        "stand.obstructions",
        *TAKES,
    ),
    ("air", "wind", "stops", "holds"),
    run,
    kept=True,
)
