"""Step matrices over rotor speed: one table serves every history."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.methods.propagation import step_matrices

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.methods.propagation import StepMatrices
    from planner.rotor.march_case import MarchSettings

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]

NODES = 256
"""Entries, in even steps of speed squared; what lies between is an explicit load."""
FAST_RAD = 2.0
"""A shape whose vibration turns farther than this in one step cannot be followed."""
FAST_DAMPING = 0.7
"""Ratio of critical that such a shape is given, so that it follows its load without ringing."""


@dataclass(frozen=True, eq=False)
class Vibrating:
    """M q'' + C q' + (K0 + Omega^2 K1) q = f, and what is seen of q.

    Attributes:
        mass: M, (n, n), diagonal.
        damping: C, (n, n).
        stiffness: K0, (n, n).
        spin_stiffness: K1, (n, n).
        seen: What meets stops, for unit freedoms, (n,).
    """

    mass: FloatArray
    damping: FloatArray
    stiffness: FloatArray
    spin_stiffness: FloatArray
    seen: FloatArray

    @property
    def seen_of_state(self) -> FloatArray:
        """The same and its rate for unit x = (q, dq/dt), (2n, 2)."""
        n = self.seen.size
        both = np.zeros((2 * n, 2))
        both[:n, 0] = both[n:, 1] = self.seen
        return both

    def steps(self, speed2: FloatArray, step_s: FloatArray) -> tuple[StepMatrices, FloatArray]:
        """Steps at nodes of speed squared, and damping added to shapes too fast for them."""
        stiff = self.stiffness + speed2[:, None, None] * self.spin_stiffness
        inertia = np.diag(self.mass)
        rate = np.sqrt(np.diagonal(stiff, axis1=1, axis2=2) / inertia)
        too_fast = rate * step_s[:, None] > FAST_RAD
        numeric = np.where(too_fast, 2.0 * FAST_DAMPING * rate * inertia, 0.0)
        damping = self.damping + numeric[:, :, None] * np.eye(inertia.size)
        return step_matrices(self.mass, damping, stiff, step_s), numeric


@dataclass(frozen=True, eq=False)
class StepTable:
    """Steps of x = (q, dq/dt) at nodes of rotor speed.

    A row vector (x, f, rise of f) times a matrix of the table is the state after the step and,
    in two more columns, what is seen of it and the rate of that.

    Attributes:
        speed2: Speed squared of the nodes, (nodes,) [rad2/s2].
        step_s: Length of a step, (nodes,).
        numeric: Damping added to each freedom that is too fast to follow, (nodes, n).
        whole: Matrices, (nodes, 4n, 2n + 2).
        by_stop: The same after a step for a stop moment that fades from one to none, and for one
            that grows from none to one, (nodes, 2, 2n + 2).
    """

    speed2: FloatArray
    step_s: FloatArray
    numeric: FloatArray
    whole: Array
    by_stop: Array

    def node(self, speed_rad_s: FloatArray) -> NDArray[np.int64]:
        """Nearest node of each speed, (cases,)."""
        last = self.speed2.size - 1
        place = speed_rad_s * speed_rad_s
        place *= last / self.speed2[-1]
        place += 0.5
        return np.minimum(place, last).astype(np.int64)


def step_table(system: Vibrating, top: tuple[float, MarchSettings]) -> StepTable:
    """Build the table of one flapping unit or one lagging blade.

    Args:
        system: What vibrates.
        top: Highest rotor speed [rad/s], and the settings.

    Returns:
        The table.
    """
    highest, settings = top
    speed2 = np.linspace(0.0, max(highest, 1.0) ** 2, NODES)
    turn_s = 2.0 * np.pi / np.sqrt(np.maximum(speed2, 1e-12))
    step_s = np.minimum(turn_s / settings.steps_per_turn, settings.longest_step_s)
    whole, numeric = system.steps(speed2, step_s)
    seen, dtype = system.seen_of_state, settings.dtype
    return StepTable(
        speed2=speed2,
        step_s=step_s,
        numeric=numeric,
        whole=with_seen(rows_of(whole), seen).astype(dtype),
        by_stop=with_seen(stop_rows(whole, system.seen), seen).astype(dtype),
    )


def rows_of(step: StepMatrices) -> FloatArray:
    """Matrices side by side, turned so that row vectors are multiplied from the left."""
    joined = np.concatenate([step.free, step.by_load, step.by_rise], axis=2)
    return np.ascontiguousarray(np.swapaxes(joined, 1, 2))


def stop_rows(step: StepMatrices, at_stop: FloatArray) -> FloatArray:
    """State after a step for a moment that fades from one, and for one that grows to one."""
    start, rise = step.by_load @ at_stop, step.by_rise @ at_stop
    return np.stack([start - rise, rise], axis=1)


def with_seen(rows: FloatArray, seen_of_state: FloatArray) -> FloatArray:
    """Rows of state with two columns more: what is seen of it."""
    return np.concatenate([rows, rows @ seen_of_state], axis=-1)
