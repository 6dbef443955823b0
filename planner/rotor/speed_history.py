"""Histories: rotor speed and controls over the time of one schedule, as a march takes them.

A history is a table over even time, straight between its rows; azimuth is integrated by the march
itself. Where the rotor comes to rest its speed is exactly 0 from a row on.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.run_down import Travel, lanes_of, speed_at
from planner.rotor.march_case import Histories

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    FloatArray = NDArray[np.float64]

STEP_S = 0.02
"""Time from row to row, the same in all histories, so that a march takes them side by side. The
row after a ramp's end or after rest holds the last speed exactly."""
AFTER_REST_S = 1.0
"""How long a history goes on when the rotor has come to rest."""


@dataclass(frozen=True)
class Controls:
    """Collective and cyclic pitch in force."""

    collective_rad: float
    cyclic_cosine_rad: float = 0.0
    cyclic_sine_rad: float = 0.0

    def towards(self, target: Controls, share: float) -> Controls:
        """Controls at a share of the straight way to others."""

        def part(start: float, end: float) -> float:
            return start + share * (end - start)

        return Controls(
            part(self.collective_rad, target.collective_rad),
            part(self.cyclic_cosine_rad, target.cyclic_cosine_rad),
            part(self.cyclic_sine_rad, target.cyclic_sine_rad),
        )


@dataclass(frozen=True)
class ControlMove:
    """Controls that stay for a time and then move to their target at a steady rate.

    Collective moves at the rate, and so does cyclic, its two parts together along the straight
    way. A target that is the start leaves them frozen.

    Attributes:
        start: Controls at time 0.
        target: Controls in the end.
        delay_s: Time before they begin to move.
        rate_rad_s: Rate of collective and of cyclic.
    """

    start: Controls
    target: Controls
    delay_s: float
    rate_rad_s: float

    @property
    def is_frozen(self) -> bool:
        """Nothing moves."""
        return self.start == self.target

    @property
    def collective_s(self) -> float:
        """Time that collective moves; that of cyclic where collective stays."""
        angle = abs(self.target.collective_rad - self.start.collective_rad) or self.cyclic_rad
        return angle / self.rate_rad_s if angle > 0.0 else 0.0

    @property
    def cyclic_rad(self) -> float:
        """Angle that cyclic moves."""
        return math.hypot(
            self.target.cyclic_cosine_rad - self.start.cyclic_cosine_rad,
            self.target.cyclic_sine_rad - self.start.cyclic_sine_rad,
        )

    def at(self, time_s: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
        """Collective, cosine and sine cyclic at given times."""
        angle = self.rate_rad_s * np.maximum(time_s - self.delay_s, 0.0)
        start, target = self.start, self.target
        rise = abs(target.collective_rad - start.collective_rad)
        collective = np.clip(angle / rise, 0.0, 1.0) if rise > 0.0 else np.ones_like(time_s)
        cyclic = (
            np.clip(angle / self.cyclic_rad, 0.0, 1.0)
            if self.cyclic_rad > 0.0
            else np.ones_like(time_s)
        )
        return _between(start, target, collective, cyclic)


@dataclass(frozen=True, eq=False)
class History:
    """One schedule as a table over even time, each array of shape (times,), straight between rows.

    Attributes:
        label: What it is, in words.
        is_unpowered: The rotor runs down by itself, so that its rate is nobody's choice.
        step_s: Time from row to row.
        speed_rad_s: Rotor speed, 0 or more.
        collective_rad: Collective pitch.
        cyclic_cosine_rad: Cyclic pitch with the cosine of azimuth.
        cyclic_sine_rad: Cyclic pitch with the sine of azimuth.

    Raises:
        ValueError: Shapes differ, or a value cannot be.
    """

    label: str
    is_unpowered: bool
    step_s: float
    speed_rad_s: FloatArray
    collective_rad: FloatArray
    cyclic_cosine_rad: FloatArray
    cyclic_sine_rad: FloatArray

    def __post_init__(self) -> None:
        """Refuse what cannot be a history."""
        tables = (
            self.speed_rad_s,
            self.collective_rad,
            self.cyclic_cosine_rad,
            self.cyclic_sine_rad,
        )
        same = {table.shape for table in tables} == {(self.speed_rad_s.size,)}
        if not same or self.speed_rad_s.size < 2:  # noqa: PLR2004 - a table has two rows
            shapes = ", ".join(str(table.shape) for table in tables)
            _refuse(self.label, "tables of one length of 2 or more", shapes)
        if not all(np.all(np.isfinite(table)) for table in tables):
            _refuse(self.label, "finite values", "an empty or infinite one")
        if not np.all(self.speed_rad_s >= 0.0) or not self.step_s > 0.0:
            _refuse(self.label, "speeds from 0 up and a step above 0", "others")

    @property
    def duration_s(self) -> float:
        """Time from the first row to the last."""
        return self.step_s * (self.speed_rad_s.size - 1)

    @property
    def time_s(self) -> FloatArray:
        """Time of the rows, (times,)."""
        return np.asarray(self.step_s * np.arange(self.speed_rad_s.size))


def prescribed_ramp(
    label: str,
    speeds_rad_s: tuple[float, float],
    controls: tuple[Controls, Controls],
    duration_s: float,
    settle_s: float,
) -> History:
    """Speed, collective and cyclic along straight lines over a time, then held.

    Args:
        label: What it is, in words.
        speeds_rad_s: Rotor speed at the start and at the end.
        controls: Controls at the start and at the end.
        duration_s: Time of the ramp, above 0.
        settle_s: Time held at the end.

    Returns:
        The history.

    Raises:
        ValueError: The duration is not above 0.
    """
    if not 0.0 < duration_s < math.inf:
        _refuse(label, "a time of the ramp above 0 s", f"{duration_s:g}")
    time = _times(duration_s, settle_s)
    share = np.minimum(time / duration_s, 1.0)
    start, end = speeds_rad_s
    speed = np.where(share < 1.0, start + share * (end - start), end)
    return _history(label, speed, _between(*controls, share, share), is_unpowered=False)


def run_down(label: str, path: Travel, lane: int, move: ControlMove) -> History:
    """Run-down without power to rest and a little beyond.

    Args:
        label: What it is, in words.
        path: Speeds and times of run-downs.
        lane: Which of them.
        move: What the controls do.

    Returns:
        The history.

    Raises:
        ValueError: The rotor does not come to rest.
    """
    time = _times(_end_s(label, path, lane), AFTER_REST_S)
    speed = _speed(path, lane, time)
    return _history(label, speed, move.at(time), is_unpowered=True)


def own_run_up(
    label: str, path: Travel, lane: int, controls: tuple[Controls, Controls], settle_s: float
) -> History:
    """Run-up by all the torque that the drive has; controls follow the speed in proportion.

    Args:
        label: What it is, in words.
        path: Speeds and times of run-ups.
        lane: Which of them.
        controls: Controls at the start and at the end.
        settle_s: Time held at the end.

    Returns:
        The history.

    Raises:
        ValueError: The drive does not reach the last speed.
    """
    time = _times(_end_s(label, path, lane), settle_s)
    speed = _speed(path, lane, time)
    start, end = path.speed_rad_s[lane, 0], path.speed_rad_s[lane, -1]
    share = (speed - start) / (end - start)
    return _history(label, speed, _between(*controls, share, share), is_unpowered=False)


def side_by_side(histories: Sequence[History]) -> Histories:
    """Histories as a march takes them: padded with their last rows to the longest.

    Args:
        histories: One or more.

    Returns:
        Their tables, one row a history.
    """
    longest = max(history.speed_rad_s.size for history in histories)

    def padded(name: str) -> FloatArray:
        tables = [getattr(history, name) for history in histories]
        return np.stack([np.pad(t, (0, longest - t.size), mode="edge") for t in tables])

    return Histories(
        step_s=STEP_S,
        speed_rad_s=padded("speed_rad_s"),
        collective_rad=padded("collective_rad"),
        cyclic_cosine_rad=padded("cyclic_cosine_rad"),
        cyclic_sine_rad=padded("cyclic_sine_rad"),
        end_s=np.array([history.duration_s for history in histories]),
    )


def _history(
    label: str,
    speed_rad_s: FloatArray,
    controls: tuple[FloatArray, FloatArray, FloatArray],
    *,
    is_unpowered: bool,
) -> History:
    collective, cosine, sine = controls
    return History(
        label=label,
        is_unpowered=is_unpowered,
        step_s=STEP_S,
        speed_rad_s=speed_rad_s,
        collective_rad=collective,
        cyclic_cosine_rad=cosine,
        cyclic_sine_rad=sine,
    )


def _speed(path: Travel, lane: int, time_s: FloatArray) -> FloatArray:
    return np.asarray(speed_at(lanes_of(path, slice(lane, lane + 1)), time_s[None, :])[0])


def _end_s(label: str, path: Travel, lane: int) -> float:
    end = float(path.time_s[lane, -1])
    if not 0.0 < end < math.inf:
        _refuse(label, "a last speed that is reached", f"it after {end:g} s")
    return end


def _times(end_s: float, after_s: float) -> FloatArray:
    """Even times to beyond ``end_s`` and on for at least ``after_s``."""
    rows = math.ceil((end_s + after_s) / STEP_S) + 1
    return np.asarray(STEP_S * np.arange(rows + 1), dtype=np.float64)


def _between(
    start: Controls, target: Controls, collective: FloatArray, cyclic: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Controls at shares of the way, of collective and of cyclic."""

    def along(first: float, last: float, share: FloatArray) -> FloatArray:
        return np.where(share < 1.0, first + share * (last - first), last)

    return (
        along(start.collective_rad, target.collective_rad, collective),
        along(start.cyclic_cosine_rad, target.cyclic_cosine_rad, cyclic),
        along(start.cyclic_sine_rad, target.cyclic_sine_rad, cyclic),
    )


def _refuse(label: str, expected: str, found: str) -> None:
    msg = f"history {label}: expected {expected}, found {found}; correct the schedule"
    raise ValueError(msg)
