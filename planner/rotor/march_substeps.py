"""Steps with stops: all sub-steps at once, but for the moments of the stops themselves."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.march_table import rows_of, stop_rows

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from planner.rotor.flap_unit import FlapUnit
    from planner.rotor.march_table import StepTable, Vibrating

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class SubstepTable:
    """A step in equal parts, at nodes of rotor speed.

    The equations are linear but for the moments of the stops, which are linear in time over each
    part: what is seen at the end of each part is that without stops, and what each moment adds.
    Columns: rotation at the stop and its rate after each part; rigid flap and elastic height of
    the tip of each blade of the unit in mid-step; the state at the end.

    Attributes:
        parts: Number of parts.
        free: From (x, f, rise of f over the whole step), (nodes, 4n, columns).
        by_stop: For unit moment at the begin of the step and after each part,
            (nodes, parts + 1, columns).
        yields: Rotation and rate after a part for unit moment at its end, (nodes, 2).
    """

    parts: int
    free: Array
    by_stop: Array
    yields: Array


def substep_table(
    system: Vibrating, unit: FlapUnit, table: StepTable, settings: tuple[int, type[Any]]
) -> SubstepTable:
    """Build the table.

    Args:
        system: The unit's equations.
        unit: The unit.
        table: Its table of whole steps.
        settings: Number of parts, and precision.

    Returns:
        The table.
    """
    parts, dtype = settings
    step, _ = system.steps(table.speed2, table.step_s / parts)
    n, nodes = unit.n_freedoms, table.speed2.size
    rows, stops = rows_of(step), stop_rows(step, system.seen)
    free = np.zeros((nodes, 4 * n, 2 * n))
    free[:, : 2 * n] = np.eye(2 * n)
    pressed = np.zeros((nodes, parts + 1, 2 * n))
    tips = np.zeros((2 * n, 2 * unit.n_blades))
    tips[:n] = np.hstack([unit.rigid.T, unit.tip.T])
    seen: list[FloatArray] = []
    middle = both = np.empty(0)
    for part in range(parts):
        free = free @ rows[:, : 2 * n]
        free[:, 2 * n : 3 * n] += rows[:, 2 * n : 3 * n]
        free[:, 3 * n :] += (part * rows[:, 2 * n : 3 * n] + rows[:, 3 * n :]) / parts
        pressed = pressed @ rows[:, : 2 * n]
        pressed[:, part : part + 2] += stops
        both = np.concatenate([free, pressed], axis=1)
        seen.append(both @ system.seen_of_state)
        if part == (parts - 1) // 2:
            middle = both @ tips
    columns = np.concatenate([*seen, middle, both], axis=-1)
    return SubstepTable(
        parts=parts,
        free=np.ascontiguousarray(columns[:, : 4 * n]).astype(dtype),
        by_stop=np.ascontiguousarray(columns[:, 4 * n :]).astype(dtype),
        yields=(stops[:, 1] @ system.seen_of_state).astype(dtype),
    )


@dataclass(frozen=True, eq=False)
class Pressed:
    """Units on or near a stop over one step.

    Attributes:
        moment_N_m: Signed moment of the stops after each part, (parts, cases, units).
        rotation_rad: Rotation at the stop then, (parts, cases, units).
        rate_rad_s: Its rate, (parts, cases, units).
        middle_flap_rad: Rigid flap in mid-step without its built-in part, (cases, blades).
        middle_bend_m: Elastic height of the tip then, (cases, blades).
        x: State at the end, (cases, units, 2n).
    """

    moment_N_m: Array
    rotation_rad: Array
    rate_rad_s: Array
    middle_flap_rad: Array
    middle_bend_m: Array
    x: Array


def pressed_step(
    table: SubstepTable,
    node: NDArray[np.int64],
    start: tuple[Array, Array],
    law: Callable[[Array, Array, tuple[Array, Array]], Array],
    n_blades: int,
) -> Pressed:
    """State after a step with stops, one scalar equation a part.

    Args:
        table: The table.
        node: Nodes, (cases,).
        start: State and loads (x, f, rise of f), (cases, units, 4n), and moments of the stops,
            (cases, units).
        law: Moment of the stops from rotation and rate without it and what unit moment adds to
            both.
        n_blades: Blades of a unit.

    Returns:
        What becomes of the units.
    """
    row, moment = start
    parts, shape = table.parts, moment.shape
    seen = np.matmul(row, table.free.take(node, axis=0))
    by_stop = table.by_stop.take(node, axis=0)
    yields = table.yields.take(node, axis=0)
    give = (
        np.repeat(yields[:, :1], shape[1], axis=1),
        np.repeat(yields[:, 1:], shape[1], axis=1),
    )
    reached = np.empty((2, parts, *shape), row.dtype)
    moments = np.empty((parts + 1, *shape), row.dtype)
    moments[0] = moment
    for part in range(parts):
        if np.count_nonzero(moments[part]):
            later = slice(2 * part, 2 * parts)
            seen[..., later] += moments[part][:, :, None] * by_stop[:, None, part, later]
        rotation, rate = seen[..., 2 * part], seen[..., 2 * part + 1]
        moments[part + 1] = pushes = law(rotation, rate, give)
        reached[0, part] = rotation + pushes * give[0]
        reached[1, part] = rate + pushes * give[1]
    rest = seen[..., 2 * parts :]
    if np.count_nonzero(moments):
        held = np.ascontiguousarray(np.moveaxis(moments, 0, -1))
        rest = rest + np.matmul(held, by_stop[:, :, 2 * parts :])
    edges = (n_blades, 2 * n_blades)
    return Pressed(
        moments[1:],
        reached[0],
        reached[1],
        rest[..., : edges[0]].reshape(shape[0], -1),
        rest[..., edges[0] : edges[1]].reshape(shape[0], -1),
        rest[..., edges[1] :],
    )
