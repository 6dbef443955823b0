"""Rotor speed over time: reserve of the drive, run-downs, and what passing resonances costs."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.model.results import Labels, Status
from planner.predict.band_rows import CYCLES, TOTALS, cycle_rows, total_rows
from planner.predict.cases import air_of
from planner.predict.drive_reserve import reserves
from planner.predict.fixed_frame import NO_STAND_MODE
from planner.predict.histories import own_run_up_of, ramp_history
from planner.predict.mid_ramp import cuts
from planner.predict.passage_amplitudes import (
    AMPLITUDE,
    PEAK_SPEED,
    passages_of,
    ramp_rows,
    run_down_rows,
)
from planner.predict.rows import Rows
from planner.predict.run_down_events import Event, aborts, add_ends, solved_events, stops
from planner.predict.run_down_hand import hand_of
from planner.predict.shaft import TAKES, ends_of, shaft_of
from planner.predict.stand_modes import TAKES as STAND_TAKES
from planner.predict.stand_modes import stand_modes
from planner.predict.study import Inputs, NotAssessedError, Study

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from planner.model.plan import Segment
    from planner.model.results import Prediction
    from planner.predict.histories import FoundRunDown, Order
    from planner.predict.passage_amplitudes import Passage
    from planner.predict.run_down_hand import Hand
    from planner.predict.shaft import Shaft, Way
    from planner.predict.stand_modes import StandMode
    from planner.rotor.speed_history import History

_ID = "speeds"
TIMES = {"time_to_half": 0.5, "time_to_30": 0.3, "time_to_10": 0.1, "time_to_rest": 0.0}
"""Share of the speed at which the run-down begins; of 100 % rpm it would mislead, for an abort
from a low hold begins below half of that."""
_NO_POWER = "the stop runs down without power"


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """Reserve of every ramp; times and passages of ramps, of the stop and of every abort."""
    shaft = shaft_of(inputs)
    _ = shaft.friction_n_m  # without it nothing here is known
    walk: Sequence[Segment] = inputs["segments"]
    cyclics = shaft.found_cyclics(walk)
    ways = [(segment, ends_of(segment, cyclics)) for segment in walk]
    events = [*stops(ways, inputs, shaft), *aborts(ways, inputs, shaft)]
    modes = _modes(inputs)
    cut = list(cuts(ways, inputs, shaft, [] if isinstance(modes, NotAssessedError) else modes))
    every = [*events, *(one.event for one in cut)]
    solved = solved_events(shaft, every, inputs.allowance("torque"))
    solved, of_cuts = solved[: len(events)], solved[len(events) :]
    rows = {q: Rows(q, _ID) for q in (*TIMES, CYCLES, *TOTALS, AMPLITUDE, PEAK_SPEED)}
    hands = {found.order: hand_of(shaft, found) for _, found in solved if found is not None}
    for event, found in solved:
        _time_rows(rows, event, found, hands)
    cycle_rows(rows[CYCLES], solved, inputs["keep_outs"], hands)
    total_rows(rows, solved, (walk, inputs["keep_outs"]), inputs["abort"].reentries)
    passages = modes if isinstance(modes, NotAssessedError) else _passages(modes, inputs)
    if isinstance(passages, NotAssessedError):
        for quantity in (AMPLITUDE, PEAK_SPEED):
            rows[quantity].flag(Labels(), passages.status, str(passages))
    else:
        ramp_rows(rows, _powered(ways, shaft, inputs), passages)
        joined = [(one, *case) for one, case in zip(cut, of_cuts, strict=True)]
        run_down_rows(rows, solved, passages, hands, joined)
    found_rows = {quantity: filled.prediction() for quantity, filled in rows.items()}
    return {"drive_torque_reserve": _reserves(ways, inputs, shaft), **found_rows}


def _modes(inputs: Inputs) -> tuple[StandMode, ...] | NotAssessedError:
    """Modes of the stand, or why there are none: a refusal leaves the times alone."""
    try:
        found = stand_modes(inputs)
    except NotAssessedError as refusal:
        return refusal
    except ValueError as refusal:
        return NotAssessedError(Status.OUTSIDE_VALIDITY, str(refusal))
    return found or NotAssessedError(Status.NOT_STATED, NO_STAND_MODE)


def _passages(modes: Sequence[StandMode], inputs: Inputs) -> list[Passage] | NotAssessedError:
    unbalance = inputs.prior["unbalance"]
    known = (float(unbalance.value[0]), unbalance.status[0], unbalance.reasons[0])
    try:
        return passages_of(modes, inputs, known)
    except NotAssessedError as refusal:
        return refusal


def _powered(
    ways: Sequence[Way], shaft: Shaft, inputs: Inputs
) -> list[tuple[Segment, tuple[History, ...] | NotAssessedError]]:
    """Ramps, and the stop where it is powered, with their speed over time."""
    driven = {"ramp", "stop"} if inputs["shutdown"].powered else {"ramp"}
    allowance = inputs.allowance("torque")
    return [(way[0], _histories(way, shaft, allowance)) for way in ways if way[0].kind in driven]


def _reserves(ways: Sequence[Way], inputs: Inputs, shaft: Shaft) -> Prediction:
    coasts = not inputs["shutdown"].powered
    rows, driven = Rows("drive_torque_reserve", _ID), {"ramp"} if coasts else {"ramp", "stop"}
    ramps = [way for way in ways if way[0].kind in driven]
    reserves(rows, ramps, (shaft, air_of(inputs)), inputs.allowance("torque"))
    for segment, _ in ways:
        if segment.kind == "stop" and coasts:
            label, top = Labels(segment=segment.id), segment.top_rad_s
            rows.flag(label, Status.NOT_APPLICABLE, _NO_POWER, speed_rad_s=top)
    return rows.prediction()


def _time_rows(
    rows: Mapping[str, Rows],
    event: Event,
    found: FoundRunDown | None,
    hands: Mapping[Order, Hand],
) -> None:
    top = event.from_rad_s
    for quantity, share in TIMES.items():
        if found is not None:
            hand = hands[found.order].time_s(share * top)
            times, _ = found.reached(share * top)
            add_ends(rows[quantity], event.label, (times, hand), found)
        elif event.status is Status.OK:
            time = (1.0 - share) * event.powered_s
            rows[quantity].add(event.label, time, speed_rad_s=top)
        else:
            rows[quantity].flag(event.label, event.status, event.reason, speed_rad_s=top)


def _histories(
    way: Way, shaft: Shaft, torque_allowance: tuple[float, float]
) -> tuple[History, ...] | NotAssessedError:
    """Speed of a powered ramp over time, of an own run-up also the slowest, or why none is."""
    segment, controls = way
    try:
        if not segment.own_run_up:
            return (ramp_history(segment, controls),)
        run_up = own_run_up_of(shaft, segment, controls, torque_allowance)
        return tuple(ramp_history(segment, controls, run_up, lane) for lane in (0, 1))
    except NotAssessedError as refusal:
        return refusal


SPEEDS = Study(
    _ID,
    2,
    ("segments", "keep_outs", "shutdown", "abort", "stand.speed_gauge_error_rad_s",
     *dict.fromkeys((*TAKES, *STAND_TAKES))),
    ("air", "wind", "unbalance"),
    run,
    kept=True,
)  # fmt: skip
