"""One segment's solved states: which of them count, and their extremes."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.rotor.result import FlapState

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from planner.model.plan import Segment
    from planner.model.rotor import Rotor
    from planner.predict.solving import Batch, Solved
    from planner.rotor.result import TrimResult

    FloatArray = NDArray[np.float64]

READ: dict[str, Callable[[TrimResult], FloatArray]] = {
    "flap_mean": lambda r: r.loads.flap_mean_rad,
    "flap_cosine": lambda r: r.loads.flap_cosine_rad,
    "flap_sine": lambda r: r.loads.flap_sine_rad,
    "flap_highest": lambda r: r.loads.flap_highest_rad,
    "flap_lowest": lambda r: r.loads.flap_lowest_rad,
    "droop_stop_moment": lambda r: r.stop_moment_N_m,
    "thrust": lambda r: r.loads.thrust_N,
    "torque": lambda r: r.loads.torque_N_m,
    "power": lambda r: r.power_W,
    "blade_loading": lambda r: r.blade_loading,
    "hub_moment": lambda r: r.loads.hub_moment_peak_N_m,
    "root_flap_moment": lambda r: r.loads.root_flap_moment_N_m,
}
"""Quantity to its numbers in a trim result, (cases,)."""


@dataclass(frozen=True, eq=False)
class SegmentResults:
    """States of one segment that its rows are made of.

    A hold counts whole. Of a ramp or stop, the states at and above the speed where the stops are
    left behind count; below it blades rest in calm, which the rest moment judges, and in wind a
    quasi-static answer is no prediction.
    """

    segment: Segment
    rotor: Rotor
    nominal: NDArray[np.int64]
    corners: NDArray[np.int64]
    solved: Solved
    reaches_below: bool
    """The segment passes speeds at which its quasi-static states do not count."""

    @property
    def is_empty(self) -> bool:
        """No state counts: the whole ramp lies below the speed where stops are left behind."""
        return self.nominal.size == 0

    def nominals(self, quantity: str) -> FloatArray:
        """Numbers of a quantity at the nominal states."""
        return self._read(quantity, self.solved.nominal, self.nominal)

    def all(self, quantity: str) -> FloatArray:
        """Numbers of a quantity at the nominal states and the corners."""
        corners = self._read(quantity, self.solved.corners, self.corners)
        return np.concatenate([self.nominals(quantity), corners])

    @property
    def all_speeds_rad_s(self) -> FloatArray:
        """Rotor speed of each state, in the order of ``all``."""
        nominal, corners = self.solved.nominal, self.solved.corners
        return np.concatenate(
            [nominal.speed_rad_s[self.nominal], corners.speed_rad_s[self.corners]]
        )

    @property
    def states(self) -> NDArray[np.int64]:
        """What the blades do in each state."""
        return self._both(lambda r: r.state)

    @property
    def unconverged(self) -> int:
        """Number of states without a solution."""
        return int(np.sum(~self._both(lambda r: r.converged)))

    @property
    def works_outside_sections(self) -> bool:
        """A notable share of a turning blade works beyond its section data.

        A parked rotor meets the wind from all sides: there the continuation over the full circle
        is the method, and this is no fault.
        """
        turns = self.all_speeds_rad_s > 0.0
        return bool(np.any(turns & (self._both(lambda r: r.outside_sections) != 0)))

    @property
    def rests(self) -> bool:
        """Blades lie on the droop stop all round, in every state."""
        return bool(np.all(self.states == FlapState.RESTING))

    @property
    def knocks(self) -> bool:
        """Blades touch the droop stop in part of a turn."""
        return bool(np.any(self.states == FlapState.INTERMITTENT))

    @property
    def reaches_up_stop(self) -> bool:
        """Blades reach the up stop: in flight, or lying on it."""
        return bool(np.any(np.isin(self.states, (FlapState.UP_STOP, FlapState.RESTING_UP))))

    def _both(self, read: Callable[[TrimResult], NDArray[np.generic]]) -> NDArray[np.int64]:
        return np.concatenate(
            [
                read(self.solved.nominal.result)[self.nominal],
                read(self.solved.corners.result)[self.corners],
            ]
        )

    def _read(self, quantity: str, batch: Batch, where: NDArray[np.int64]) -> FloatArray:
        if quantity == "droop_stop_clearance":
            stop = self.rotor.droop_stop
            if stop is None:
                return np.full(where.size, np.nan)
            angle = np.array([stop.lowest_angle_rad(v) for v in batch.speed_rad_s[where]])
            margin: FloatArray = batch.result.loads.flap_lowest_rad[where] - angle
            return margin
        if quantity == "up_stop_clearance":
            up = self.rotor.up_stop
            angle_up = np.nan if up is None else up.angle_rad
            return angle_up - batch.result.loads.flap_highest_rad[where]
        numbers: FloatArray = READ[quantity](batch.result)[where]
        return numbers


def segment_results(
    index: int, segment: Segment, rotor: Rotor, solved: Solved, counts_from_rad_s: float
) -> SegmentResults:
    """Pick the states of one segment that count."""
    nominal, corners = solved.nominal.of(index), solved.corners.of(index)
    below = (
        segment.kind != "hold" and min(segment.from_rad_s, segment.to_rad_s) < counts_from_rad_s
    )
    return SegmentResults(segment, rotor, nominal, corners, solved, below)
