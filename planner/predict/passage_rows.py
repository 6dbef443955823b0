"""Keep-out bands passed without power: turns inside, and what the stand's modes answer."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.hand_checks_passage import unbalance_passage_peak
from planner.methods.passage import SpeedTable, passage_peak
from planner.methods.run_down import lanes_of, speed_at
from planner.model.results import Labels, Status
from planner.predict.run_down_events import add_ends
from planner.predict.study import NotAssessedError
from planner.predict.study_modes import mode_fault

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from numpy.typing import NDArray

    from planner.model.plan import KeepOut
    from planner.model.stand import GivenMode
    from planner.predict.histories import FoundRunDown, Order
    from planner.predict.rows import Rows
    from planner.predict.run_down_events import Event
    from planner.predict.run_down_hand import Hand
    from planner.predict.study import Inputs

    BoolArray = NDArray[np.bool_]
    FloatArray = NDArray[np.float64]
    Case = tuple[Event, FoundRunDown | None]
    Hands = Mapping[Order, Hand]

PASSAGES = ("band_cycles", "band_amplification")
POINTS = 1024
"""Points of the speed table of a passage. Against 16,384, over the sample plans, peaks change by
less than 0.002 %."""
BESIDE = 0.5
"""Of a band's width: how far beyond its edges a passage is followed, for on the way down the peak
comes after the resonance."""
HAND_DAMPING = 0.06
"""Damping up to which the hand check holds."""
CLEAR = 0.05
"""Of a mode's frequency: how far inside the followed speeds it lies where the hand check holds."""
_POWERED = "the stop is powered: its rate is prescribed, and judged as such"
_BELOW_BAND = "the run-down begins below this band"
_NO_BAND = "the plan declares no keep-out band"
_NO_MODE = "the stand file gives no stand mode"


@dataclass(frozen=True, eq=False)
class _Passed:
    """A band's passages: three lanes a run-down, for the nominal, low and high torque."""

    orders: tuple[Order, ...]
    ends: BoolArray
    """Whether the band is left."""
    table: SpeedTable | None


@dataclass(frozen=True, eq=False)
class _Answer:
    """Peaks of a mode over the unbalance offset, the nominal one first, by run-down."""

    mode: GivenMode
    peaks: Mapping[Order, FloatArray]
    status: Status = Status.OK
    reason: str = ""


def passage_rows(
    rows: Mapping[str, Rows], solved: Sequence[Case], inputs: Inputs, hands: Hands
) -> None:
    """Fill the rows of every band that the stop or an abort may pass."""
    bands: Sequence[KeepOut] = inputs["keep_outs"]
    modes = [mode for mode in inputs["stand.modes"] if mode.family == "stand"]
    for quantity, missing in ((PASSAGES[0], not bands), (PASSAGES[1], not bands or not modes)):
        if missing:
            words = _NO_MODE if bands else _NO_BAND
            rows[quantity].flag(Labels(), Status.NOT_APPLICABLE, words)
    different = {run_down.order: run_down for _, run_down in solved if run_down is not None}
    for band in bands:
        passed = _passed(list(different.values()), band)
        for case in solved:
            _cycles(rows[PASSAGES[0]], case, band, hands)
        for mode in modes:
            answer = _answer(passed, mode, inputs)
            for case in solved:
                _answer_row(rows[PASSAGES[1]], case, (band, answer), hands)


def _cycles(rows: Rows, case: Case, band: KeepOut, hands: Hands) -> None:
    event, found = case
    label = replace(event.label, band=band.id)
    if found is None or band.from_rad_s >= event.from_rad_s:
        rows.flag(label, *_why_not(event, band), speed_rad_s=event.from_rad_s)
        return
    enters = min(band.to_rad_s, event.from_rad_s)
    turns = found.reached(band.from_rad_s)[1] - found.reached(enters)[1]
    hand = hands[found.order].turns(enters, band.from_rad_s)
    add_ends(rows, label, (turns, hand), found)


def _answer_row(
    rows: Rows,
    case: Case,
    asked: tuple[KeepOut, _Answer],
    hands: Hands,
) -> None:
    (event, found), (band, answer) = case, asked
    mode = answer.mode
    label = replace(event.label, band=band.id, mode=f"{mode.family} {mode.name}")
    if found is None or band.from_rad_s >= event.from_rad_s:
        rows.flag(label, *_why_not(event, band), speed_rad_s=event.from_rad_s)
    elif answer.status is not Status.OK:
        rows.flag(label, answer.status, answer.reason, speed_rad_s=event.from_rad_s)
    else:
        hand = _hand(mode, band, hands[found.order])
        add_ends(rows, label, (answer.peaks[found.order], hand), found)


def _why_not(event: Event, band: KeepOut) -> tuple[Status, str]:
    """Why a run-down has no passage of a band to judge."""
    if band.from_rad_s >= event.from_rad_s:
        return Status.NOT_APPLICABLE, _BELOW_BAND
    if event.status is Status.OK:
        return Status.NOT_APPLICABLE, _POWERED
    return event.status, event.reason


def _followed(band: KeepOut, top_rad_s: float) -> tuple[float, float]:
    """Speeds between which a passage is followed."""
    beside = BESIDE * (band.to_rad_s - band.from_rad_s)
    leaves = max(band.from_rad_s - beside, BESIDE * band.from_rad_s)
    return min(top_rad_s, band.to_rad_s + beside), leaves


def _passed(found: Sequence[FoundRunDown], band: KeepOut) -> _Passed:
    """Every run-down that begins above a band's lower edge, followed through the band."""
    entering = [f for f in found if f.order.from_rad_s > band.from_rad_s]
    if not entering:
        return _Passed((), np.zeros(0, dtype=bool), None)
    pairs = [(f, _followed(band, f.order.from_rad_s)) for f in entering]
    begin, end = (np.array([f.reached(v[i])[0] for f, v in pairs]).ravel() for i in (0, 1))
    ends = np.isfinite(end)
    begin, end = np.where(ends, begin, 0.0), np.where(ends, end, 1.0)
    lanes = np.concatenate([f.lane + np.arange(3) for f in entering])
    time = begin[:, None] + (end - begin)[:, None] * np.linspace(0.0, 1.0, POINTS)
    speed = speed_at(lanes_of(entering[0].path, lanes), time)
    table = SpeedTable(speed, (end - begin) / (POINTS - 1))
    return _Passed(tuple(f.order for f in entering), ends, table)


def _answer(passed: _Passed, mode: GivenMode, inputs: Inputs) -> _Answer:
    """Peaks of one mode in every run-down, or why there are none."""
    status, reason = mode_fault(mode)
    if status is not Status.OK or passed.table is None:
        return _Answer(mode, {}, status, reason)
    try:
        w = mode.frequency_rad_s * np.array([1.0, *inputs.allowance("frequency")])
        peak = passage_peak(passed.table, w, mode.damping_ratio).amplitude
    except NotAssessedError as refusal:
        return _Answer(mode, {}, refusal.status, str(refusal))
    except ValueError as refusal:
        return _Answer(mode, {}, Status.OUTSIDE_VALIDITY, str(refusal))
    peak = np.where(passed.ends[:, None], peak, np.nan).reshape(-1, 3, w.size)
    each = np.moveaxis(peak, 1, 2).reshape(len(passed.orders), -1)
    return _Answer(mode, dict(zip(passed.orders, each, strict=True)))


def _hand(mode: GivenMode, band: KeepOut, hand: Hand) -> float:
    """Passage at the even rate of the mode's own speed, where all of it is followed."""
    w, zeta = mode.frequency_rad_s, mode.damping_ratio
    enters, leaves = _followed(band, hand.first_rad_s)
    rate = hand.rate_rad_s2(w)
    clear = leaves < (1.0 - CLEAR) * w and (1.0 + CLEAR) * w < enters
    if not (clear and 0.0 < zeta <= HAND_DAMPING and rate > 0.0):
        return math.nan
    return float(unbalance_passage_peak(w, zeta, rate))
