"""How far the hub sways while a ramp, the stop or an abort passes a mode of the stand."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.hand_checks_passage import unbalance_passage_peak
from planner.methods.passage import SpeedTable, passage_peak
from planner.methods.run_down import lanes_of, speed_at
from planner.model.results import Labels, Status
from planner.predict.mid_ramp import Worst, worst_of_cuts
from planner.predict.run_down_events import add_ends
from planner.predict.stand_modes import without_mass
from planner.predict.study import NotAssessedError

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from numpy.typing import NDArray

    from planner.model.plan import Segment
    from planner.predict.histories import FoundRunDown, Order
    from planner.predict.mid_ramp import Cut
    from planner.predict.rows import Rows
    from planner.predict.run_down_events import Event
    from planner.predict.run_down_hand import Hand
    from planner.predict.stand_modes import StandMode
    from planner.predict.study import Inputs
    from planner.rotor.speed_history import History

    FloatArray = NDArray[np.float64]
    Case = tuple[Event, FoundRunDown | None]
    Hands = Mapping[Order, Hand]

AMPLITUDE, PEAK_SPEED = "passage_amplitude", "passage_peak_speed"
ONCE = "1"
"""The harmonic at which unbalance drives the stand."""
POINTS = 1024
"""Points of the speed table of a run-down. Against 16,384, over the sample plans, peaks change by
less than 0.002 %."""
BESIDE = 0.4
"""Of a mode's frequency: how far beyond it a run-down is followed, for the peak comes after it."""
HAND_DAMPING = 0.06
"""Damping up to which the hand check holds."""
CLEAR = 0.05
"""Of a mode's frequency: how far inside the passed speeds it lies where the hand check holds."""
NOT_PASSED = "this resonance is not passed"


@dataclass(frozen=True, eq=False)
class Passage:
    """What drives a mode in a passage."""

    mode: StandMode
    unbalance_kg_m: float
    error_rad_s: float
    """Of the speed gauge."""
    damping_allowance: tuple[float, float]

    @property
    def offset_m(self) -> float:
        """The unbalance over the modal mass: what amplifications multiply."""
        return self.unbalance_kg_m / self.mode.modal_mass_kg

    def variants(self, ends_rad_s: Sequence[float]) -> tuple[FloatArray, FloatArray]:
        """Frequencies and damping ratios that the mode may have, the nominal ones first.

        Both ends of the frequency allowance with both ends of the damping allowance, and, with
        the least damping, frequencies where a passage ends: a mode that lies there, gauge error
        included, answers more than at its own ends.
        """
        nominal, low, high = self.mode.frequencies_rad_s
        near = [v + e for v in ends_rad_s for e in (-self.error_rad_s, 0.0, self.error_rad_s)]
        lightly = [nominal, low, high, *np.clip(near, low, high)]
        least, most = (share * self.mode.damping_ratio for share in self.damping_allowance)
        frequency = np.array([nominal, *lightly, nominal, low, high])
        damping = [self.mode.damping_ratio, *[least] * len(lightly), *[most] * 3]
        return frequency, np.array(damping)

    def is_passed(self, low_rad_s: float, high_rad_s: float) -> bool:
        """Whether speeds reach the mode's frequency, allowance and gauge error included."""
        _, low, high = self.mode.frequencies_rad_s
        return low_rad_s < high + self.error_rad_s and high_rad_s > low - self.error_rad_s


def ramp_rows(
    rows: Mapping[str, Rows],
    ramps: Sequence[tuple[Segment, tuple[History, ...] | NotAssessedError]],
    passages: Sequence[Passage],
) -> None:
    """Rows of powered ramps and of a powered stop, marched along their own speed."""
    for passage in passages:
        for segment, history in ramps:
            label = Labels(segment=segment.id, mode=passage.mode.label, harmonic=ONCE)
            ends = sorted((segment.from_rad_s, segment.to_rad_s))
            fault = _fault(passage, ends[0], ends[1], history)
            if fault is not None:
                _flag(rows, label, fault, segment.top_rad_s)
            elif not isinstance(history, NotAssessedError):
                _ramp_row(rows, label, passage, (segment, history))


def run_down_rows(
    rows: Mapping[str, Rows],
    solved: Sequence[Case],
    passages: Sequence[Passage],
    hands: Hands,
    cut: Sequence[tuple[Cut, Event, FoundRunDown | None]],
) -> None:
    """Rows of the unpowered stop and of every abort, those out of the middle of a ramp among them.

    Args:
        rows: to be filled.
        solved: run-downs from the hold or the end of the ramp where each begins.
        passages: modes and what drives them.
        hands: hand checks of the run-downs.
        cut: run-downs out of the middle of ramps.
    """
    for passage in passages:
        for event, found in solved:
            if found is None and event.status is Status.OK:
                continue  # a powered stop is among the ramps
            label = replace(event.label, mode=passage.mode.label, harmonic=ONCE)
            fault = _fault(passage, 0.0, event.from_rad_s)
            if fault is None and found is None:
                fault = (event.status, event.reason)
            if fault is not None:
                _flag(rows, label, fault, event.from_rad_s)
        _followed_rows(rows, solved, passage, (hands, cut))


def passages_of(
    modes: Sequence[StandMode], inputs: Inputs, unbalance: tuple[float, Status, str]
) -> list[Passage]:
    """What drives each mode; where modal mass or unbalance are not known the mode is flagged.

    Raises:
        NotAssessedError: the rule book states no damping allowance.
    """
    value, status, reason = unbalance
    found, damping = [], inputs.allowance("damping")
    for mode in modes:
        known = without_mass(mode)
        if known.status is Status.OK and status is not Status.OK:
            known = replace(known, status=status, reason=reason)
        found.append(Passage(known, value, inputs["stand.speed_gauge_error_rad_s"], damping))
    return found


_Fault = tuple[Status, str]


def _fault(
    passage: Passage,
    low_rad_s: float,
    high_rad_s: float,
    history: tuple[History, ...] | NotAssessedError | None = None,
) -> _Fault | None:
    """Why a passage has no amplitude."""
    mode = passage.mode
    if mode.status is not Status.OK:
        return mode.status, mode.reason
    if not passage.is_passed(low_rad_s, high_rad_s):
        return Status.NOT_APPLICABLE, NOT_PASSED
    if isinstance(history, NotAssessedError):
        return history.status, str(history)
    return None


def _flag(rows: Mapping[str, Rows], label: Labels, fault: _Fault, top_rad_s: float) -> None:
    for quantity in (AMPLITUDE, PEAK_SPEED):
        rows[quantity].flag(label, *fault, speed_rad_s=top_rad_s)


def _ramp_row(
    rows: Mapping[str, Rows],
    label: Labels,
    passage: Passage,
    way: tuple[Segment, tuple[History, ...]],
) -> None:
    """One ramp; histories beside the first are other ways that it may take."""
    segment, histories = way
    top = segment.top_rad_s
    try:
        w, zeta = passage.variants((segment.from_rad_s, segment.to_rad_s))
        peaks = [
            passage_peak(SpeedTable(each.speed_rad_s[None, :], each.step_s), w, zeta)
            for each in histories
        ]
    except ValueError as refusal:
        _flag(rows, label, (Status.OUTSIDE_VALIDITY, str(refusal)), top)
        return
    offset = passage.offset_m
    amplitude = np.concatenate([peak.amplitude[0] for peak in peaks]) * offset
    # what a held speed after the ramp adds counts too
    held = np.concatenate([peak.held_amplitude[0] for peak in peaks]) * offset
    speed = np.concatenate([peak.speed_rad_s[0] for peak in peaks])
    rate = (segment.to_rad_s - segment.from_rad_s) / segment.duration_s
    hand = math.nan if segment.own_run_up else _hand(passage, segment, abs(rate))
    rows[AMPLITUDE].add(
        label,
        float(amplitude[0]),
        low=float(amplitude.min()),
        high=float(np.maximum(amplitude, held).max()),
        speed_rad_s=top,
        hand=hand,
    )
    rows[PEAK_SPEED].add(
        label, float(speed[0]), low=float(speed.min()), high=float(speed.max()), speed_rad_s=top
    )


def _hand(passage: Passage, segment: Segment, rate_rad_s2: float) -> float:
    """The published estimate at the ramp's even rate."""
    mode, ends = passage.mode, sorted((segment.from_rad_s, segment.to_rad_s))
    w, zeta = mode.frequencies_rad_s[0], mode.damping_ratio
    clear = ends[0] < (1.0 - CLEAR) * w and (1.0 + CLEAR) * w < ends[1]
    if not (clear and 0.0 < zeta <= HAND_DAMPING and rate_rad_s2 > 0.0):
        return math.nan
    return float(unbalance_passage_peak(w, zeta, rate_rad_s2)) * passage.offset_m


def _followed_rows(
    rows: Mapping[str, Rows],
    solved: Sequence[Case],
    passage: Passage,
    beside: tuple[Hands, Sequence[tuple[Cut, Event, FoundRunDown | None]]],
) -> None:
    """Each different run-down once, three lanes for the nominal, low and high torque."""
    cases = [
        (event, found)
        for event, found in solved
        if found is not None and _fault(passage, 0.0, event.from_rad_s) is None
    ]
    different = {found.order: found for _, found in cases}
    if not different:
        return
    hands, cut = beside
    try:
        answers = _answers(list(different.values()), passage)
        worst = worst_of_cuts(cut, passage.mode, passage.variants(()))
    except ValueError as refusal:
        fault = (Status.OUTSIDE_VALIDITY, str(refusal))
        for event, _ in cases:
            label = replace(event.label, mode=passage.mode.label, harmonic=ONCE)
            _flag(rows, label, fault, event.from_rad_s)
        return
    for event, found in cases:
        label = replace(event.label, mode=passage.mode.label, harmonic=ONCE)
        out_of_ramp = worst.get((event.label.segment, event.label.state), Worst())
        if out_of_ramp.status is not Status.OK:
            _flag(rows, label, (out_of_ramp.status, out_of_ramp.reason), event.from_rad_s)
            continue
        hand = _run_down_hand(passage, hands[found.order])
        _add_worst(rows, label, (answers[found.order], out_of_ramp, hand), (passage, found))


def _add_worst(
    rows: Mapping[str, Rows],
    label: Labels,
    answers: tuple[tuple[FloatArray, FloatArray], Worst, float],
    what: tuple[Passage, FoundRunDown],
) -> None:
    """The worse of a run-down from the ramp's end and of one out of its middle."""
    (amplitude, speed), out_of_ramp, hand = answers
    passage, found = what
    if out_of_ramp.nominal > amplitude[0]:
        amplitude = np.concatenate([[out_of_ramp.nominal], amplitude])
        speed, hand = np.concatenate([[out_of_ramp.speed_rad_s], speed]), math.nan
    if out_of_ramp.most > 0.0:
        amplitude = np.append(amplitude, out_of_ramp.most)
    add_ends(rows[AMPLITUDE], label, (amplitude * passage.offset_m, hand), found)
    add_ends(rows[PEAK_SPEED], label, (speed, math.nan), found)


def _answers(
    found: Sequence[FoundRunDown], passage: Passage
) -> dict[Order, tuple[FloatArray, FloatArray]]:
    """Amplifications and speeds of their peaks of every run-down, nominal first.

    Where the run-down is left the mode may still ring: the bound of that is among the former.
    """
    mode = passage.mode
    _, low, high = mode.frequencies_rad_s
    tops = [min(f.order.from_rad_s, (1.0 + BESIDE) * high) for f in found]
    leaves = [min((1.0 - BESIDE) * low, 0.5 * top) for top in tops]
    begin, end = (
        np.array([f.reached(v)[0] for f, v in zip(found, speeds, strict=True)]).ravel()
        for speeds in (tops, leaves)
    )
    ends = np.isfinite(end)
    begin, end = np.where(ends, begin, 0.0), np.where(ends, end, 1.0)
    lanes = np.concatenate([f.lane + np.arange(3) for f in found])
    time = begin[:, None] + (end - begin)[:, None] * np.linspace(0.0, 1.0, POINTS)
    table = SpeedTable(
        speed_at(lanes_of(found[0].path, lanes), time), (end - begin) / (POINTS - 1)
    )
    frequency, damping = (
        np.repeat(each, 3, axis=0)
        for each in zip(*(passage.variants((f.order.from_rad_s,)) for f in found), strict=True)
    )
    peak = passage_peak(table, frequency, damping)
    most = np.maximum(peak.amplitude, peak.held_amplitude)
    numbers = (np.concatenate([peak.amplitude, most], axis=1), peak.speed_rad_s)
    orders = [f.order for f in found]
    amplitude, speed = (
        np.moveaxis(
            np.where(ends[:, None], value, np.nan).reshape(len(orders), 3, -1), 1, 2
        ).reshape(len(orders), -1)
        for value in numbers
    )
    return dict(zip(orders, zip(amplitude, speed, strict=True), strict=True))


def _run_down_hand(passage: Passage, hand: Hand) -> float:
    """Passage at the even rate of the mode's own speed, where all of it is followed."""
    mode = passage.mode
    w, zeta = mode.frequencies_rad_s[0], mode.damping_ratio
    rate = hand.rate_rad_s2(w)
    clear = (1.0 + CLEAR) * w < hand.first_rad_s
    if not (clear and 0.0 < zeta <= HAND_DAMPING and rate > 0.0):
        return math.nan
    return float(unbalance_passage_peak(w, zeta, rate)) * passage.offset_m
