"""Whether each passage through a resonance lies in a declared keep-out band, and at what rate."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.hand_checks_dynamics import rate_for_peak_rad_s2
from planner.methods.passage_rate import rate_needed_rad_s2
from planner.model.results import Labels, Status
from planner.model.stand import mode_labels
from planner.predict.fixed_frame import NO_STAND_MODE
from planner.predict.mode_tracks import shaft_harmonics, stand_harmonics
from planner.predict.rows import Rows
from planner.predict.stand_modes import TAKES, StandMode, stand_modes, without_mass
from planner.predict.study import Inputs, Study

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from planner.model.plan import KeepOut, Segment
    from planner.model.results import Prediction

_ID = "passages"
_UNCOVERED = (
    "the ramp passes this resonance outside every declared keep-out band, so that nobody watches "
    "its rate"
)
_NOT_PASSED = "the ramp does not pass this resonance"
_NO_LIMIT = "the stand file states no hub_amplitude in [ratings]"
_TOO_SLOW = "no rate of run-up that the method knows keeps the hub below its rated amplitude"


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """One row for each ramp, mode of stand or shaft, and harmonic that excites it."""
    rows = Rows("crossing_cover", _ID)
    ramps = [segment for segment in inputs["segments"] if segment.kind != "hold"]
    excited = _excited(inputs)
    for ramp in ramps:
        for mode, harmonics in excited:
            _ramp_rows(rows, ramp, (mode, harmonics), inputs)
    if not excited:
        rows.flag(Labels(), Status.NOT_STATED, "the stand file gives no mode")
    elif not ramps:
        rows.flag(Labels(), Status.NOT_APPLICABLE, "the plan has no ramp")
    return {"crossing_cover": rows.prediction(), "passage_rate_needed": _rates(inputs)}


def _excited(inputs: Inputs) -> list[tuple[str, tuple[int, ...]]]:
    """Labels of all modes of stand and shaft, as the stand file has them, with their harmonics."""
    n = inputs["rotor"].n_blades
    parts = (inputs["stand.modes"], inputs["stand.column"], inputs["stand.drive_train"])
    return [
        (label, stand_harmonics(n) if family == "stand" else shaft_harmonics(n))
        for family in ("stand", "shaft")
        for label in mode_labels(family, *parts)
    ]


def _ramp_rows(
    rows: Rows, ramp: Segment, excited: tuple[str, tuple[int, ...]], inputs: Inputs
) -> None:
    mode, harmonics = excited
    top = ramp.top_rad_s
    prior = inputs.prior["crossing_speed"]
    places = [i for i, label in enumerate(prior.labels) if label.mode in {"", mode}]
    faults = [i for i in places if prior.status[i] is not Status.OK]
    for n in harmonics:
        label = Labels(segment=ramp.id, mode=mode, harmonic=str(n))
        if faults:
            status, reason = prior.status[faults[0]], prior.reasons[faults[0]]
            rows.flag(label, status, reason, speed_rad_s=top)
            continue
        met = [
            (float(prior.low[i]), float(prior.high[i]))
            for i in places
            if prior.labels[i].harmonic == str(n)
        ]
        passed = [part for ends in met if (part := _met(ramp, ends, inputs))]
        _row(rows, label, (passed, top), inputs["keep_outs"])


def _met(ramp: Segment, ends: tuple[float, float], inputs: Inputs) -> tuple[float, float] | None:
    """Part of a resonance's speed range that a ramp passes, gauge error included [rad/s]."""
    error = inputs["stand.speed_gauge_error_rad_s"]
    low = max(ends[0] - error, min(ramp.from_rad_s, ramp.to_rad_s))
    high = min(ends[1] + error, ramp.top_rad_s)
    return (low, high) if low < high else None


def _row(
    rows: Rows,
    label: Labels,
    passed: tuple[Sequence[tuple[float, float]], float],
    bands: Sequence[KeepOut],
) -> None:
    met, top = passed
    if not met:
        rows.flag(label, Status.NOT_APPLICABLE, _NOT_PASSED, speed_rad_s=top)
        return
    room = min(
        max(
            (min(low - band.from_rad_s, band.to_rad_s - high) for band in bands),
            default=-math.inf,
        )
        for low, high in met
    )
    if room >= 0.0:
        rows.add(label, room, speed_rad_s=top)
    else:
        rows.flag(label, Status.NOT_COMPUTED, _UNCOVERED, speed_rad_s=top)


def _rates(inputs: Inputs) -> Prediction:
    """Rate of run-up for each mode of the stand that keeps the hub below its rated amplitude."""
    rows = Rows("passage_rate_needed", _ID)
    limit = inputs["stand.ratings"].hub_amplitude_m
    modes = stand_modes(inputs)
    if not modes:
        rows.flag(Labels(), Status.NOT_STATED, NO_STAND_MODE)
    unbalance = inputs.prior["unbalance"]
    for mode in map(without_mass, modes):
        label = Labels(mode=mode.label)
        if mode.status is not Status.OK:
            rows.flag(label, mode.status, mode.reason)
        elif limit is None:
            rows.flag(label, Status.NOT_STATED, _NO_LIMIT)
        elif unbalance.status[0] is not Status.OK:
            rows.flag(label, unbalance.status[0], unbalance.reasons[0])
        else:
            least = inputs.allowance("damping")[0]
            _rate_row(rows, label, mode, (limit, float(unbalance.value[0]), least))
    return rows.prediction()


def _rate_row(
    rows: Rows, label: Labels, mode: StandMode, asked: tuple[float, float, float]
) -> None:
    """The nominal rate, and that for both ends of the frequency with the least damping."""
    limit_m, unbalance_kg_m, least = asked
    if unbalance_kg_m == 0.0:
        rows.add(label, 0.0)
        return
    wanted = limit_m * mode.modal_mass_kg / unbalance_kg_m
    w = np.array(mode.frequencies_rad_s)
    zeta = mode.damping_ratio * np.array([1.0, least, least])
    try:
        found = rate_needed_rad_s2(w, zeta, wanted)
    except ValueError as refusal:
        rows.flag(label, Status.OUTSIDE_VALIDITY, str(refusal))
        return
    if not np.all(found.is_found):
        rows.flag(label, Status.OUTSIDE_VALIDITY, _TOO_SLOW)
        return
    rate = found.rate_rad_s2
    hand = float(rate_for_peak_rad_s2(w[0], mode.damping_ratio, wanted))
    rows.add(label, float(rate[0]), low=float(rate.min()), high=float(rate.max()), hand=hand)


PASSAGES = Study(
    _ID,
    2,
    (
        "segments",
        "keep_outs",
        "stand.drive_train",
        "stand.speed_gauge_error_rad_s",
        "stand.ratings",
        *TAKES,
    ),
    ("modes", "unbalance"),
    run,
)
