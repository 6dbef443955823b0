"""Aborts out of the middle of a ramp, near a resonance: up to it, and back through it.

Power that fails a little above a resonance turns the speed around inside it: the mode, swinging
already, is passed once more. So each powered ramp that passes a mode of the stand is cut at some
speeds about it, and the ramp and the run-down after it are marched as one.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import partial
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.passage import SpeedTable, passage_peak
from planner.methods.run_down import lanes_of, speed_at
from planner.model.plan import ABORT_CAUSES
from planner.model.results import Labels, Status
from planner.predict.histories import Origin, abort_order
from planner.predict.run_down_events import Event, ordered

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping, Sequence

    from numpy.typing import NDArray

    from planner.model.plan import Segment
    from planner.predict.histories import FoundRunDown
    from planner.predict.shaft import Shaft, Way
    from planner.predict.stand_modes import StandMode
    from planner.predict.study import Inputs

    FloatArray = NDArray[np.float64]

CUT_STEP = 0.04
CUT_SHARES = (0.96, 1.24)
"""Of the modes' frequencies: where power fails, from below the lowest to above the highest mode
that a ramp passes, in steps. The way back meets the way up in some phase, so that the sway goes up
and down with the cut."""
BETWEEN = 1.05
"""Of the greatest amplification found: it may be this much between two cuts. Steps of a quarter
change it by up to 5 %, tried with damping from 0.5 to 2.5 % and ramps from 3 to 20 s."""
BESIDE = 0.4
"""Of a mode's frequency: how far beyond it ramp and run-down are followed."""
POINTS = 2048
_STAYS = "a run-down out of the ramp may stay near this resonance"


@dataclass(frozen=True)
class Cut:
    """Power fails in a ramp at one speed, for one cause."""

    segment: Segment
    event: Event


@dataclass(frozen=True)
class Worst:
    """Greatest amplification of all cuts of a ramp for one cause."""

    nominal: float = 0.0
    speed_rad_s: float = 0.0
    """Where the nominal one peaks."""
    most: float = 0.0
    """Over both ends of the frequency and torque allowances, and of what still rings."""
    status: Status = Status.OK
    reason: str = ""


def cuts(
    ways: Sequence[Way], inputs: Inputs, shaft: Shaft, modes: Sequence[StandMode]
) -> Iterator[Cut]:
    """Every ramp that has a time, cut about each mode that can be judged, for every cause."""
    for segment, (start, end) in ways:
        if segment.kind != "ramp" or not segment.duration_s > 0.0:
            continue
        rise = segment.to_rad_s - segment.from_rad_s
        for speed in cut_speeds(segment, modes):
            controls = start.towards(end, (speed - segment.from_rad_s) / rise)
            origin = Origin(speed, controls)
            for cause in ABORT_CAUSES:
                event = Event(Labels(segment=segment.id, state=cause), speed)
                parts = (inputs["abort"], origin, cause)
                yield Cut(segment, ordered(event, partial(abort_order, shaft, *parts)))


def cut_speeds(segment: Segment, modes: Sequence[StandMode]) -> list[float]:
    """Speeds inside a ramp at which it is cut about the modes that it passes, lowest first."""
    low, high = sorted((segment.from_rad_s, segment.to_rad_s))
    passed = [
        mode.frequencies_rad_s
        for mode in modes
        if mode.status is Status.OK
        and mode.frequencies_rad_s[1] < high
        and mode.frequencies_rad_s[2] > low
    ]
    found: set[float] = set()
    for nominal, _, _ in passed:
        count = round((CUT_SHARES[1] - CUT_SHARES[0]) / CUT_STEP)
        for k in range(count + 1):
            speed = nominal * (CUT_SHARES[0] + k * CUT_STEP)
            near = any(abs(speed - other) < 0.5 * CUT_STEP * nominal for other in found)
            if low < speed < high and not near:
                found.add(speed)
    return sorted(found)


def worst_of_cuts(
    solved: Sequence[tuple[Cut, Event, FoundRunDown | None]],
    mode: StandMode,
    variants: tuple[FloatArray, FloatArray],
) -> Mapping[tuple[str, str], Worst]:
    """Greatest amplification of one mode by ramp and cause.

    Args:
        solved: cuts with their run-downs.
        mode: which of their modes.
        variants: frequencies and damping ratios that it may have, the nominal ones first.
    """
    found: dict[tuple[str, str], Worst] = {}
    near = [case for case in solved if _is_near(case[0].event.from_rad_s, mode)]
    marched = [(cut, event, down) for cut, event, down in near if down is not None]
    for cut, event, down in near:
        place = (cut.segment.id, event.label.state)
        if down is None and event.status is not Status.NOT_APPLICABLE:
            found[place] = Worst(status=event.status, reason=event.reason)
    if marched:
        for (cut, event, _), one in zip(marched, _marched(marched, variants), strict=True):
            place = (cut.segment.id, event.label.state)
            found[place] = _worse(found.get(place, Worst()), one)
    return found


def _is_near(speed_rad_s: float, mode: StandMode) -> bool:
    """Whether a cut is one about this mode, with both ends of its frequency."""
    _, low, high = mode.frequencies_rad_s
    return (CUT_SHARES[0] - CUT_STEP) * low < speed_rad_s < (CUT_SHARES[1] + CUT_STEP) * high


def _worse(before: Worst, one: Worst) -> Worst:
    for either in (before, one):
        if either.status is not Status.OK:
            return either
    top = one if one.nominal > before.nominal else before
    return replace(top, most=max(before.most, one.most))


def _marched(
    cases: Sequence[tuple[Cut, Event, FoundRunDown]], variants: tuple[FloatArray, FloatArray]
) -> Iterator[Worst]:
    """Each cut by itself; three lanes a cut for the nominal, low and high torque."""
    w, zeta = variants
    lowest, highest = (1.0 - BESIDE) * w.min(), (1.0 + BESIDE) * w.max()
    ramps = [_approach(cut, event.from_rad_s, (lowest, highest)) for cut, event, _ in cases]
    leaves = [min(lowest, 0.5 * event.from_rad_s) for _, event, _ in cases]
    ends = np.concatenate(
        [down.reached(v)[0] for (_, _, down), v in zip(cases, leaves, strict=True)]
    )
    known = np.isfinite(ends)
    before = np.repeat([times[-1] for times, _ in ramps], 3)
    lasts = before + np.where(known, ends, 1.0)
    time = lasts[:, None] * np.linspace(0.0, 1.0, POINTS)
    lanes = np.concatenate([down.lane + np.arange(3) for _, _, down in cases])
    after = np.maximum(time - before[:, None], 0.0)
    speed = speed_at(lanes_of(cases[0][2].path, lanes), after)
    for i, (times, speeds) in enumerate(ramps):
        rows = slice(3 * i, 3 * i + 3)
        going = time[rows] < times[-1]
        speed[rows] = np.where(going, np.interp(time[rows], times, speeds), speed[rows])
    peak = passage_peak(SpeedTable(speed, lasts / (POINTS - 1)), w, zeta)
    most = np.maximum(peak.amplitude, peak.held_amplitude)
    for i in range(len(cases)):
        rows = slice(3 * i, 3 * i + 3)
        if np.all(known[rows]):
            nominal, at = peak.amplitude[3 * i, 0], peak.speed_rad_s[3 * i, 0]
            yield Worst(float(nominal), float(at), BETWEEN * float(most[rows].max()))
        else:
            yield Worst(status=Status.OUTSIDE_VALIDITY, reason=_STAYS)


def _approach(
    cut: Cut, at_rad_s: float, followed: tuple[float, float]
) -> tuple[FloatArray, FloatArray]:
    """Time and speed of the ramp from where it comes near the mode to where it is cut."""
    seconds, first, last = np.array(cut.segment.pieces).T
    times = np.concatenate([[0.0], np.cumsum(seconds)])
    speeds = np.concatenate([first, last[-1:]])
    rises = cut.segment.to_rad_s > cut.segment.from_rad_s
    order = 1.0 if rises else -1.0
    begin = max(first[0], followed[0]) if rises else min(first[0], followed[1])
    wanted = np.interp(order * np.array([begin, at_rad_s]), order * speeds, times)
    inner = times[(times > wanted[0]) & (times < wanted[1])]
    moments = np.concatenate([wanted[:1], inner, wanted[1:]])
    return moments - moments[0], np.interp(moments, times, speeds)
