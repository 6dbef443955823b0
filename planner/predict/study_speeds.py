"""Rotor speed over time: what the drive has left in a ramp, and how long run-downs take."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.model.results import Labels, Status
from planner.predict.cases import air_of
from planner.predict.drive_reserve import reserves
from planner.predict.passage_rows import PASSAGES, passage_rows
from planner.predict.rows import Rows
from planner.predict.run_down_events import Event, aborts, add_ends, solved_events, stops
from planner.predict.run_down_hand import hand_of
from planner.predict.shaft import TAKES, ends_of, shaft_of
from planner.predict.study import Inputs, Study

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from planner.model.plan import Segment
    from planner.model.results import Prediction
    from planner.predict.histories import FoundRunDown, Order
    from planner.predict.run_down_hand import Hand
    from planner.predict.shaft import Shaft, Way

_ID = "speeds"
TIMES = {"time_to_half": 0.5, "time_to_30": 0.3, "time_to_10": 0.1, "time_to_rest": 0.0}
"""Share of the speed at which the run-down begins; of 100 % rpm it would mislead, for an abort
from a low hold begins below half of that."""
_NO_POWER = "the stop runs down without power"


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """Reserve of every ramp; times and band passages of the stop and of every abort."""
    shaft = shaft_of(inputs)
    _ = shaft.friction_n_m  # without it nothing here is known
    walk: Sequence[Segment] = inputs["segments"]
    cyclics = shaft.found_cyclics(walk)
    ways = [(segment, ends_of(segment, cyclics)) for segment in walk]
    events = [*stops(ways, inputs, shaft), *aborts(ways, inputs, shaft)]
    solved = solved_events(shaft, events, inputs.allowance("torque"))
    rows = {q: Rows(q, _ID) for q in (*TIMES, *PASSAGES)}
    hands = {found.order: hand_of(shaft, found) for _, found in solved if found is not None}
    for event, found in solved:
        _time_rows(rows, event, found, hands)
    passage_rows(rows, solved, inputs, hands)
    times = {quantity: filled.prediction() for quantity, filled in rows.items()}
    return {"drive_torque_reserve": _reserves(ways, inputs, shaft), **times}


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


SPEEDS = Study(
    _ID,
    1,
    ("segments", "keep_outs", "shutdown", "abort", "stand.modes", *TAKES),
    ("air", "wind"),
    run,
    kept=True,
)
