"""The course of one marched case over time, for charts: what running extremes do not keep."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.rotor.march_block import Block

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.march_case import Histories, MarchCases, Turbulence
    from planner.rotor.march_model import MarchModel

    FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Course:
    """Flap of a case in stretches of time, each array of shape (stretches,).

    Attributes:
        time_s: End of the stretch, from the begin of the history.
        speed_rad_s: Rotor speed then.
        highest_rad: Highest flap of any blade within it.
        lowest_rad: Lowest flap of any blade within it.
    """

    time_s: FloatArray
    speed_rad_s: FloatArray
    highest_rad: FloatArray
    lowest_rad: FloatArray


def course(
    model: MarchModel,
    histories: Histories,
    rough: Turbulence,
    case: MarchCases,
    stretches: int,
) -> Course:
    """March one case and keep the extremes of flap stretch by stretch.

    Args:
        model: The rotor.
        histories: Speed and pitch over time.
        rough: Turbulence series.
        case: One case.
        stretches: Into how many stretches of equal time its history is cut.

    Returns:
        The course.

    Raises:
        ValueError: Not exactly one case.
    """
    if case.count != 1:
        msg = f"course: expected one case, found {case.count}; march many with `march`"
        raise ValueError(msg)
    block = Block(model, histories, rough, case)
    end = float(block.end_s[0])
    rows: list[tuple[float, float, float, float]] = []
    highest, lowest = -np.inf, np.inf
    while len(rows) < stretches:
        block.step()
        time = float(block.time_s[0])
        if time < 0.0:
            continue
        both = block.flap_rad
        highest, lowest = max(highest, float(both.max())), min(lowest, float(both.min()))
        if time >= end * (len(rows) + 1) / stretches:
            rows.append((time, _speed(histories, case, time), highest, lowest))
            highest, lowest = -np.inf, np.inf
    columns = np.array(rows).T
    return Course(*columns)


def _speed(histories: Histories, case: MarchCases, time_s: float) -> float:
    table = histories.speed_rad_s[case.history[0]]
    return float(np.interp(time_s, histories.step_s * np.arange(table.size), table))
