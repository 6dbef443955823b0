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
class StepTable:
    """Steps and sub-steps of x = (q, dq/dt) at nodes of rotor speed.

    A row vector (x, f, rise of f) times a matrix of the table is the state after the step.

    Attributes:
        speed2: Speed squared of the nodes, (nodes,) [rad2/s2].
        step_s: Length of a step, (nodes,).
        numeric: Damping added to each freedom that is too fast to follow, (nodes, n).
        whole: Of a step, (nodes, 4n, 2n).
        part: Of a sub-step, (nodes, 4n, 2n).
        part_stop: State after a sub-step for a stop moment of one at its begin and none at its
            end, and for the reverse, (nodes, 2, 2n).
        whole_stop: The same for a step, (nodes, 2, 2n).
        yields: Rotation and rate at the stop after a sub-step for unit moment at its end,
            (nodes, 2).
    """

    speed2: FloatArray
    step_s: FloatArray
    numeric: Array
    whole: Array
    part: Array
    part_stop: Array
    whole_stop: Array
    yields: Array

    def node(self, speed_rad_s: FloatArray) -> NDArray[np.int64]:
        """Nearest node of each speed, (cases,)."""
        per = (self.speed2.size - 1) / self.speed2[-1]
        place: NDArray[np.int64] = np.rint(speed_rad_s * speed_rad_s * per).astype(np.int64)
        return np.minimum(place, self.speed2.size - 1)


def step_table(
    mass: FloatArray,
    damping: FloatArray,
    stiffness: tuple[FloatArray, FloatArray],
    at_stop: FloatArray,
    top: tuple[float, MarchSettings],
) -> StepTable:
    """Build the table of one flapping unit or one lagging blade.

    Args:
        mass: M, (n, n).
        damping: C, (n, n).
        stiffness: K0 and K1 of K0 + Omega^2 K1, each (n, n).
        at_stop: Rotation at the stop for unit freedoms, (n,).
        top: Highest rotor speed [rad/s], and the settings.

    Returns:
        The table.
    """
    highest, settings = top
    speed2 = np.linspace(0.0, max(highest, 1.0) ** 2, NODES)
    turn_s = 2.0 * np.pi / np.sqrt(np.maximum(speed2, 1e-12))
    step_s = np.minimum(turn_s / settings.steps_per_turn, settings.longest_step_s)
    stiff = stiffness[0] + speed2[:, None, None] * stiffness[1]
    numeric = _numeric(mass, stiff, step_s)
    unit, short_s = np.eye(mass.shape[0]), step_s / settings.substeps
    within = _numeric(mass, stiff, short_s)
    whole = step_matrices(mass, damping + numeric[:, :, None] * unit, stiff, step_s)
    part = step_matrices(mass, damping + within[:, :, None] * unit, stiff, short_s)
    stop, n, dtype = _stop(part, at_stop), mass.shape[0], settings.dtype
    yields = np.stack([stop[:, 1, :n] @ at_stop, stop[:, 1, n:] @ at_stop], axis=1)
    return StepTable(
        speed2=speed2,
        step_s=step_s,
        numeric=numeric.astype(dtype),
        whole=_rows(whole.free, whole.by_load, whole.by_rise).astype(dtype),
        part=_rows(part.free, part.by_load, part.by_rise).astype(dtype),
        part_stop=stop.astype(dtype),
        whole_stop=_stop(whole, at_stop).astype(dtype),
        yields=yields.astype(dtype),
    )


def _numeric(mass: FloatArray, stiffness: FloatArray, step_s: FloatArray) -> FloatArray:
    """Damping of shapes too fast for their step: 2 zeta omega M, (nodes, n)."""
    inertia = np.diag(mass)
    rate = np.sqrt(np.diagonal(stiffness, axis1=1, axis2=2) / inertia)
    too_fast = rate * step_s[:, None] > FAST_RAD
    return np.where(too_fast, 2.0 * FAST_DAMPING * rate * inertia, 0.0)


def _stop(step: StepMatrices, at_stop: FloatArray) -> FloatArray:
    """State after a step for a moment that fades from one, and for one that grows to one."""
    start, rise = step.by_load @ at_stop, step.by_rise @ at_stop
    return np.stack([start - rise, rise], axis=1)


def _rows(*blocks: FloatArray) -> FloatArray:
    """Matrices side by side, turned so that row vectors are multiplied from the left."""
    joined = np.concatenate(blocks, axis=2)
    return np.ascontiguousarray(np.swapaxes(joined, 1, 2))
