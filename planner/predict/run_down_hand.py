"""The hand check of a run-down: drag with the square of speed, friction and brake, in pieces."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING

from planner.methods.hand_checks_run_down import (
    drag_and_friction_speed_rad_s,
    drag_and_friction_time_s,
    drag_and_friction_turns,
)
from planner.predict.histories import SPEED_SHARES

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    import numpy as np
    from numpy.typing import NDArray

    from planner.predict.histories import FoundRunDown, Order
    from planner.predict.shaft import Shaft

    FloatArray = NDArray[np.float64]

HALF = 4
"""Place of half the first speed among the solved speeds."""


@dataclass(frozen=True)
class Phase:
    """A stretch of speeds in which one drag constant and one friction hold."""

    from_rad_s: float
    to_rad_s: float
    drag_N_m_s2: float
    friction_N_m: float


@dataclass(frozen=True)
class Hand:
    """Closed forms in a row: before the controls have moved, after it, and with the brake.

    No phases: the closed form does not compare.
    """

    inertia_kg_m2: float
    phases: tuple[Phase, ...] = ()

    def time_s(self, speed_rad_s: float) -> float:
        """Time until a speed; not a number where the closed form does not compare."""
        return self._sum(drag_and_friction_time_s, self.first_rad_s, speed_rad_s)

    def turns(self, high_rad_s: float, low_rad_s: float) -> float:
        """Turns between two speeds."""
        return self._sum(drag_and_friction_turns, high_rad_s, low_rad_s)

    def rate_rad_s2(self, speed_rad_s: float) -> float:
        """Rate at which the speed falls; not a number where the closed form does not compare."""
        for phase in self.phases:
            if phase.to_rad_s <= speed_rad_s < phase.from_rad_s:
                torque = phase.drag_N_m_s2 * speed_rad_s**2 + phase.friction_N_m
                return torque / self.inertia_kg_m2
        return math.nan

    @property
    def first_rad_s(self) -> float:
        """Speed at which the run-down begins; not a number where the form does not compare."""
        return self.phases[0].from_rad_s if self.phases else math.nan

    def _sum(self, form: Callable[..., FloatArray], high_rad_s: float, low_rad_s: float) -> float:
        if not self.phases:
            return math.nan
        total = 0.0
        for phase in self.phases:
            start, end = min(phase.from_rad_s, high_rad_s), max(phase.to_rad_s, low_rad_s)
            if start > end:
                drag, friction = phase.drag_N_m_s2, phase.friction_N_m
                total += float(form(self.inertia_kg_m2, drag, friction, start, end))
        return total


def hand_of(shaft: Shaft, found: FoundRunDown) -> Hand:
    """The hand check of a run-down.

    Drag constants are those of the first speed while the controls wait and, half way, while they
    move; then that of half the first speed.
    """
    order, move, friction = found.order, found.order.move, shaft.friction_n_m
    first, half = order.from_rad_s, float(SPEED_SHARES[HALF]) * order.from_rad_s
    torque = found.torque_N_m
    drags = [torque[0, 0] / first**2, torque[1, 0] / first**2, torque[-1, HALF] / half**2]
    if move.is_frozen:
        drags[:2] = drags[2:] * 2
    if not (min(drags) > 0.0 and friction > 0.0):
        return Hand(shaft.inertia_kg_m2)
    delays = [order.brake_delay_s, 0.0 if move.is_frozen else move.collective_s]
    turns, speed = [], first
    for drag, delay in zip(drags, delays, strict=False):
        form = drag_and_friction_speed_rad_s(shaft.inertia_kg_m2, drag, friction, speed, delay)
        speed = float(form)
        turns.append(speed)
    return Hand(shaft.inertia_kg_m2, _phases(shaft, order, drags, [first, *turns, 0.0]))


def _phases(
    shaft: Shaft, order: Order, drags: Sequence[float], speeds: Sequence[float]
) -> tuple[Phase, ...]:
    """Stretches of one drag each, cut where the brake begins to act."""
    friction, brake = shaft.friction_n_m, min(order.brake_from_rad_s, speeds[1])
    braked = friction + (shaft.brake_torque_N_m or 0.0)
    phases = []
    for drag, (high, low) in zip(drags, pairwise(speeds), strict=True):
        cut = min(max(brake, low), high)
        phases += [Phase(high, cut, drag, friction), Phase(cut, low, drag, braked)]
    return tuple(phases)
