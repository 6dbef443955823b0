"""One step of flap: exact between stops, in sub-steps where a blade is on or near one."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from planner.rotor.march_model import MarchModel
    from planner.rotor.march_stops import MarchStops

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]

NEAR_RAD = 0.002
"""How far beyond what a step is seen to reach a stop still counts as near."""


@dataclass(frozen=True, eq=False)
class Push:
    """What drives a step.

    Attributes:
        node: Nodes of the table, (cases,).
        load: Load at its begin, (cases, units, n).
        rise: Change of the load over the step, (cases, units, n).
    """

    node: NDArray[np.int64]
    load: Array
    rise: Array

    def take(self, where: NDArray[Any]) -> Push:
        """Pick cases."""
        return Push(self.node[where], self.load[where], self.rise[where])


def free_step(model: MarchModel, x: Array, push: Push) -> Array:
    """State after a step without stops, (cases, units, 2n)."""
    row = np.concatenate([x, push.load, push.rise], axis=-1)
    after: Array = np.matmul(row, model.table.whole[push.node])
    return after


def rotation(model: MarchModel, x: Array) -> tuple[Array, Array]:
    """What counts as flap, without its built-in part, and its rate, each (cases, units)."""
    n, column = model.unit.n_freedoms, model.flap_column
    return np.matmul(x[..., :n], column)[..., 0], np.matmul(x[..., n:], column)[..., 0]


def middle(before: tuple[Array, Array], after: tuple[Array, Array], step_s: FloatArray) -> Array:
    """Rotation halfway through a step, from both ends and their rates (cubic)."""
    eighth = (0.125 * step_s).astype(before[0].dtype)[:, None]
    half: Array = 0.5 * (before[0] + after[0]) + eighth * (before[1] - after[1])
    return half


def near_stops(
    reached: tuple[Array, Array, Array], moment_N_m: Array, places: tuple[Array, Array]
) -> BoolArray:
    """Cases with a unit on a stop or near one within a step, (cases,).

    Args:
        reached: Rotation at begin, middle and end of the step without stops.
        moment_N_m: Stop moments at its begin.
        places: Lower and upper stops.

    Returns:
        Which cases need sub-steps.
    """
    lowest = np.minimum(np.minimum(reached[0], reached[1]), reached[2])
    highest = np.maximum(np.maximum(reached[0], reached[1]), reached[2])
    near = (lowest < places[0] + NEAR_RAD) | (highest > places[1] - NEAR_RAD)
    near |= moment_N_m != 0.0
    result: BoolArray = np.any(near, axis=1)
    return result


@dataclass(eq=False)
class Pressed:
    """State of cases on or near a stop, through their sub-steps."""

    x: Array
    moment_N_m: Array


def pressed_step(
    model: MarchModel,
    start: Pressed,
    push: Push,
    stops: tuple[MarchStops, tuple[Array, Array]],
    see: Callable[[int, Pressed, tuple[Array, Array]], None],
) -> Pressed:
    """State after a step with stops, in exact sub-steps with one scalar equation each.

    Args:
        model: The model.
        start: State and stop moments at the begin.
        push: Load.
        stops: The stops and their places.
        see: Called after each sub-step with its number, the state, and the rotation at the hinge
            with its rate.

    Returns:
        State and stop moments at the end.
    """
    table, parts = model.table, model.settings.substeps
    matrix, by_stop = table.part[push.node], table.part_stop[push.node]
    yields = table.yields[push.node]
    give = (yields[:, :1], yields[:, 1:])
    x, moment = start.x, start.moment_N_m
    rise = push.rise / parts
    load = push.load
    laws, places = stops
    for part in range(parts):
        row = np.concatenate([x, load, rise], axis=-1)
        x = np.matmul(row, matrix)
        x += moment[:, :, None] * by_stop[:, None, 0]
        without = rotation(model, x)
        moment = laws.moment(without, places, give)
        x += moment[:, :, None] * by_stop[:, None, 1]
        load = load + rise
        turned = (without[0] + moment * give[0], without[1] + moment * give[1])
        see(part + 1, Pressed(x, moment), turned)
    return Pressed(x, moment)
