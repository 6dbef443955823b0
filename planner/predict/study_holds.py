"""What the rotor does at each hold over its window, and along each ramp."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.shaft_torque import motor_torque_n_m
from planner.model.results import Labels, Status
from planner.predict.cases import air_of
from planner.predict.fineness import STATIONS
from planner.predict.hover_hand import HoverHand, compares, hover_hand
from planner.predict.register_rotor import ROTOR
from planner.predict.rows import Rows
from planner.predict.segment_results import SegmentResults, segment_results
from planner.predict.solving import Solved, solve_run
from planner.predict.state_faults import AIR_LOADS, STOPS, Scope, state_fault
from planner.predict.study import Inputs, Study
from planner.predict.study_inertia import moment_by_trapezia
from planner.rotor.blade_views import flap_inertia, lift_slope_per_rad, section_at
from planner.rotor.setup import RotorArrays, rotor_arrays

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from planner.model.plan import Segment
    from planner.model.results import Prediction
    from planner.model.rotor import Blade, Rotor
    from planner.model.stand import Drive
    from planner.predict.cases import Air

_ID = "holds"
_FLAP = (
    "flap_mean",
    "flap_cosine",
    "flap_sine",
    "flap_highest",
    "flap_lowest",
    "hub_moment",
)
_DANGER = {quantity.id: quantity.danger for quantity in ROTOR}


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """Solve all states as one batch and fill the rows of every segment."""
    rotor: Rotor = inputs["rotor"]
    segments: Sequence[Segment] = inputs["segments"]
    air = air_of(inputs)
    arrays = rotor_arrays(rotor, STATIONS)
    counts_from = inputs.bounds("stop_free_speed")[0]
    solved = solve_run(inputs, arrays, air, counts_from)
    rows = {quantity.id: Rows(quantity.id, _ID) for quantity in ROTOR}
    for index, segment in enumerate(segments):
        found = segment_results(index, segment, rotor, solved, counts_from)
        hand = _hand(found, arrays, inputs)
        _rotor_rows(rows, found, hand, inputs)
        _force_row(rows["root_centrifugal_force"], segment, arrays, inputs)
        _cyclic_row(rows["cyclic_needed"], found, solved)
        _flap_constants(rows, segment, (arrays, air, hand), rotor.blade)
    return {quantity: filled.prediction() for quantity, filled in rows.items()}


def _hand(found: SegmentResults, arrays: RotorArrays, inputs: Inputs) -> HoverHand:
    if found.segment.kind != "hold" or inputs["stand.mounting"] != "upright":
        return HoverHand()
    point = found.solved.nominal.points[int(found.nominal[0])]
    blade: Blade = inputs["rotor"].blade
    if not compares(point, inputs["stand.full_speed_rad_s"], blade.radius_m):
        return HoverHand()
    return hover_hand(arrays, blade, point)


def _rotor_rows(
    rows: Mapping[str, Rows], found: SegmentResults, hand: HoverHand, inputs: Inputs
) -> None:
    scope = Scope(
        mounting=inputs["stand.mounting"],
        gust_m_s=inputs.bounds("wind_at_hub")[2],
        has_torque_allowance="torque" in inputs.requests.allowances,
    )
    hands = {
        "flap_mean": hand.flap_mean_rad,
        "thrust": hand.thrust_N,
        "torque": hand.torque_N_m,
        "power": hand.power_W,
    }
    for quantity in (*AIR_LOADS, *_FLAP, *STOPS, "root_flap_moment"):
        label = Labels(segment=found.segment.id)
        top = found.segment.top_rad_s
        status, reason = state_fault(quantity, found, scope)
        if status is Status.NOT_APPLICABLE:
            rows[quantity].flag(label, status, reason, speed_rad_s=top)
            continue
        numbers = _numbers(quantity, found, inputs)
        if status is Status.OK:
            rows[quantity].add(
                label,
                numbers[0],
                low=numbers[1],
                high=numbers[2],
                speed_rad_s=top,
                hand=hands.get(quantity, math.nan),
            )
        else:
            rows[quantity].flag(label, status, reason, numbers=numbers, speed_rad_s=top)


def _numbers(quantity: str, found: SegmentResults, inputs: Inputs) -> tuple[float, float, float]:
    """Value, low and high over the states that count."""
    if found.is_empty:
        return math.nan, math.nan, math.nan
    if quantity in {"torque", "power"}:
        return _shaft(quantity, found, inputs)
    nominal, every = found.nominals(quantity), found.all(quantity)
    value = float(nominal.min() if _DANGER[quantity] == "low" else nominal.max())
    return value, float(every.min()), float(every.max())


def _shaft(quantity: str, found: SegmentResults, inputs: Inputs) -> tuple[float, float, float]:
    """Torque or power: air load with its allowance, and what the ramp's acceleration takes."""
    if found.segment.own_run_up:
        return _all_it_has(quantity, found, inputs["stand.drive"])
    ends = inputs.requests.allowances.get("torque", (math.nan, math.nan))
    extra = _acceleration_torque(found.segment, inputs)
    nominal, every = found.nominals("torque") + extra, found.all("torque")
    low = np.minimum(every * ends[0], every * ends[1]) + extra
    high = np.maximum(every * ends[0], every * ends[1]) + extra
    if quantity == "power":
        speeds = found.all_speeds_rad_s
        nominal = nominal * speeds[: nominal.size]
        low, high = low * speeds, high * speeds
    worst = nominal[int(np.argmax(np.abs(nominal)))]
    return float(worst), float(low.min()), float(high.max())


def _all_it_has(quantity: str, found: SegmentResults, drive: Drive) -> tuple[float, float, float]:
    """The drive's own run-up: torque or power is the most that the drive gives on the way."""
    speeds = np.linspace(found.segment.from_rad_s, found.segment.to_rad_s, 101)
    torque = motor_torque_n_m(
        speeds, drive.torque_rating_N_m, drive.power_rating_W, drive.torque_by_speed
    )
    most = float(np.max(torque if quantity == "torque" else torque * speeds))
    return most, most, most


def _acceleration_torque(segment: Segment, inputs: Inputs) -> float:
    """Torque that the drive adds to change the rotor's speed; none where it coasts [N m]."""
    coasts = segment.kind == "stop" and not inputs["shutdown"].powered
    if segment.kind == "hold" or coasts or segment.own_run_up or segment.duration_s <= 0.0:
        return 0.0
    rotor: Rotor = inputs["rotor"]
    blade = float(flap_inertia(rotor.blade, 0.0).second_moment_kg_m2)
    inertia = rotor.n_blades * blade + inputs["stand.drive"].inertia_kg_m2
    return float(inertia * (segment.to_rad_s - segment.from_rad_s) / segment.duration_s)


def _force_row(rows: Rows, segment: Segment, arrays: RotorArrays, inputs: Inputs) -> None:
    error = inputs["stand.speed_gauge_error_rad_s"]
    top = segment.top_rad_s
    speeds = (top, *segment.ends_rad_s(error))
    forces = [speed**2 * arrays.centrifugal_factor_kg_m for speed in speeds]
    blade: Blade = inputs["rotor"].blade
    hinge = arrays.hub.hinge_m
    # about the shaft, of what lies outboard of the hinge: S + e times the mass
    factor = moment_by_trapezia(blade, hinge, 1) + hinge * moment_by_trapezia(blade, hinge, 0)
    rows.add(
        Labels(segment=segment.id),
        forces[0],
        low=forces[1],
        high=forces[2],
        speed_rad_s=top,
        hand=factor * top**2,
    )


def _cyclic_row(rows: Rows, found: SegmentResults, solved: Solved) -> None:
    label = Labels(segment=found.segment.id)
    top = found.segment.top_rad_s
    if found.segment.kind != "hold":
        rows.flag(label, Status.NOT_APPLICABLE, "judged at holds", speed_rad_s=top)
        return
    i = int(found.nominal[0])
    again = solved.gust_trim.of(solved.nominal.points[i].segment)
    known = bool(solved.nominal.result.cyclic_need_found[i]) and bool(
        np.all(solved.gust_trim.result.cyclic_need_found[again])
    )
    if not known:
        rows.flag(
            label,
            Status.NOT_CONVERGED,
            "no cyclic was found that trims flapping to zero",
            speed_rad_s=top,
        )
        return
    need = float(solved.nominal.result.cyclic_need[i])
    in_gust = solved.gust_trim.result.cyclic_need[again]
    rows.add(label, need, high=max([need, *in_gust.tolist()]), speed_rad_s=top)


def _flap_constants(
    rows: Mapping[str, Rows],
    segment: Segment,
    known: tuple[RotorArrays, Air, HoverHand],
    blade: Blade,
) -> None:
    """Flap frequency and damping of the rigid blade."""
    arrays, air, hand = known
    label = Labels(segment=segment.id)
    top = segment.top_rad_s
    if segment.kind != "hold" or top <= 0.0:
        for quantity in ("flap_frequency_ratio", "flap_damping_ratio"):
            rows[quantity].flag(
                label,
                Status.NOT_APPLICABLE,
                "given for holds with the rotor turning",
                speed_rad_s=top,
            )
        return
    hub, inertia = arrays.hub, arrays.flap_inertia_kg_m2
    ratio = math.sqrt(
        1.0
        + hub.hinge_m * arrays.first_moment_kg_m / inertia
        + hub.spring_N_m_rad / (inertia * top**2)
    )
    slope = np.array(
        [lift_slope_per_rad(section_at(blade, radius)) for radius in arrays.station_radius_m]
    )
    span = slope * arrays.chord_m * arrays.station_radius_m * arrays.arm_m**2
    from_air = float(np.sum(span * arrays.station_width_m)) / (4.0 * ratio * inertia)
    damper = hub.damper_N_m_s_rad / (2.0 * ratio * inertia * top)
    states = (air.nominal, *air.ends)
    density = [state.density_kg_m3 for state in states]
    rows["flap_frequency_ratio"].add(label, ratio, speed_rad_s=top, hand=hand.frequency_ratio)
    rows["flap_damping_ratio"].add(
        label,
        density[0] * from_air + damper,
        low=density[1] * states[1].load_factor * from_air + damper,
        high=density[2] * states[2].load_factor * from_air + damper,
        speed_rad_s=top,
        hand=hand.damping_ratio + damper,
    )


HOLDS = Study(
    _ID,
    1,
    (
        "segments",
        "rotor",
        "stand.mounting",
        "stand.drive",
        "shutdown",
        "stand.full_speed_rad_s",
        "stand.speed_gauge_error_rad_s",
    ),
    ("air", "wind", "stops"),
    run,
    kept=True,
)
