"""Marched cases over time, for charts: what running extremes do not keep."""

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
    """Flap in stretches of equal time, each array of shape (cases, stretches).

    Attributes:
        time_s: Middle of the stretch, from the begin of the history.
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
    cases: MarchCases,
    stretches: int,
) -> Course:
    """March cases side by side and keep the extremes of flap stretch by stretch.

    Args:
        model: The rotor.
        histories: Speed and pitch over time.
        rough: Turbulence series.
        cases: The cases.
        stretches: Into how many stretches of equal time each history is cut.

    Returns:
        Flap stretch by stretch; one shorter than a step holds no number.
    """
    block = Block(model, histories, rough, cases)
    end = block.end_s
    highest = np.full((cases.count, stretches), -np.inf)
    lowest = np.full((cases.count, stretches), np.inf)
    while not np.all(block.is_done):
        block.step()
        part = np.floor(block.time_s / end * stretches).astype(np.int64)
        seen = np.flatnonzero((part >= 0) & (part < stretches))
        flap = block.flap_rad[seen]
        place = (seen, part[seen])
        highest[place] = np.maximum(highest[place], flap.max(axis=1))
        lowest[place] = np.minimum(lowest[place], flap.min(axis=1))
    time = end[:, None] * (np.arange(stretches) + 0.5) / stretches
    known = np.isfinite(highest)
    return Course(
        time_s=time,
        speed_rad_s=_speeds(histories, cases, time),
        highest_rad=np.where(known, highest, np.nan),
        lowest_rad=np.where(known, lowest, np.nan),
    )


def _speeds(histories: Histories, cases: MarchCases, time_s: FloatArray) -> FloatArray:
    """Rotor speed of each case at given times."""
    tables = histories.speed_rad_s[cases.history]
    at = histories.step_s * np.arange(tables.shape[1])
    pairs = zip(time_s, tables, strict=True)
    return np.stack([np.interp(time, at, table) for time, table in pairs])
