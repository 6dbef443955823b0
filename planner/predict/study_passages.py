"""Whether each passage through a stand or shaft resonance lies in a declared keep-out band."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.model.results import Labels, Status
from planner.predict.rows import Rows
from planner.predict.study import Inputs, Study
from planner.predict.study_modes import given_harmonics, mode_fault

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from planner.model.plan import KeepOut, Segment
    from planner.model.results import Prediction
    from planner.model.stand import GivenMode

_ID = "passages"
_UNCOVERED = (
    "the ramp passes this resonance outside every declared keep-out band, and the amplitude of "
    "the passage is not computed"
)


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """One row for each ramp, given mode and harmonic that excites it."""
    rows = Rows("crossing_cover", _ID)
    modes: Sequence[GivenMode] = inputs["stand.modes"]
    ramps = [segment for segment in inputs["segments"] if segment.kind != "hold"]
    allowance = inputs.allowance("frequency")
    for ramp in ramps:
        for mode in modes:
            for n in given_harmonics(mode, inputs["rotor.n_blades"]):
                ends = [mode.frequency_rad_s * share / n for share in allowance]
                _row(rows, ramp, (mode, n), _met(ramp, ends, inputs), inputs["keep_outs"])
    if not ramps or not modes:
        rows.flag(Labels(), Status.NOT_APPLICABLE, "the stand file gives no mode")
    return {"crossing_cover": rows.prediction()}


def _met(ramp: Segment, ends: Sequence[float], inputs: Inputs) -> tuple[float, float] | None:
    """Part of a resonance's speed range that a ramp passes, gauge error included [rad/s]."""
    error = inputs["stand.speed_gauge_error_rad_s"]
    low = max(min(ends) - error, min(ramp.from_rad_s, ramp.to_rad_s))
    high = min(max(ends) + error, ramp.top_rad_s)
    return (low, high) if low < high else None


def _row(
    rows: Rows,
    ramp: Segment,
    excited: tuple[GivenMode, int],
    met: tuple[float, float] | None,
    bands: Sequence[KeepOut],
) -> None:
    mode, n = excited
    label = Labels(segment=ramp.id, mode=f"{mode.family} {mode.name}", harmonic=str(n))
    top = ramp.top_rad_s
    status, reason = mode_fault(mode)
    if status is not Status.OK:
        rows.flag(label, status, reason, speed_rad_s=top)
        return
    if met is None:
        reason = "the ramp does not pass this resonance"
        rows.flag(label, Status.NOT_APPLICABLE, reason, speed_rad_s=top)
        return
    inside = [min(met[0] - band.from_rad_s, band.to_rad_s - met[1]) for band in bands]
    best = max(inside, default=-1.0)
    if best >= 0.0:
        rows.add(label, best, speed_rad_s=top)
    else:
        rows.flag(label, Status.NOT_COMPUTED, _UNCOVERED, speed_rad_s=top)


PASSAGES = Study(
    _ID,
    1,
    (
        "segments",
        "keep_outs",
        "stand.modes",
        "rotor.n_blades",
        "stand.speed_gauge_error_rad_s",
    ),
    (),
    run,
)
