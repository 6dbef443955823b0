"""Solving the rotor for all segments of a run at once, and reading one segment's results."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.model.plan import Cyclic
from planner.predict.cases import (
    Air,
    Point,
    corner_points,
    gust_trim_points,
    nominal_points,
    to_cases,
)
from planner.predict.fineness import SETTINGS
from planner.rotor.loads import Loads
from planner.rotor.result import TrimResult
from planner.rotor.trim import trim

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from planner.model.plan import Segment
    from planner.model.rotor import Stop
    from planner.predict.study import Inputs
    from planner.rotor.setup import RotorArrays

    BoolArray = NDArray[np.bool_]
    FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Batch:
    """States of many segments and what the rotor does in them."""

    points: tuple[Point, ...]
    result: TrimResult
    segment: NDArray[np.int64]
    speed_rad_s: FloatArray

    def of(self, segment: int) -> NDArray[np.int64]:
        """Positions of one segment's states."""
        return np.flatnonzero(self.segment == segment)


@dataclass(frozen=True, eq=False)
class Solved:
    """All states of a run: nominal, corners, and trimmed states once more in the gust."""

    nominal: Batch
    corners: Batch
    gust_trim: Batch


def solve_run(inputs: Inputs, rotor: RotorArrays, air: Air, counts_from_rad_s: float) -> Solved:
    """Solve nominal states first, then the corners with the cyclic found there."""
    segments: Sequence[Segment] = inputs["segments"]
    error = inputs["stand.speed_gauge_error_rad_s"]
    nominal = _batch(nominal_points(segments, air, counts_from_rad_s), inputs, rotor)
    corners = [
        corner
        for i, point in enumerate(nominal.points)
        for corner in corner_points(
            replace(point, cyclic=_cyclic_found(nominal.result, i)),
            segments[point.segment],
            air,
            error,
        )
    ]
    again = gust_trim_points(
        [p for p in nominal.points if segments[p.segment].kind == "hold"], air
    )
    return Solved(nominal, _batch(corners, inputs, rotor), _batch(again, inputs, rotor))


def _cyclic_found(result: TrimResult, i: int) -> Cyclic:
    return Cyclic(
        trimmed=False,
        cosine_rad=float(result.cyclic_cosine_rad[i]),
        sine_rad=float(result.cyclic_sine_rad[i]),
    )


def _batch(points: Sequence[Point], inputs: Inputs, rotor: RotorArrays) -> Batch:
    """Solve each different state once; segments that share a state share its numbers."""
    stops: tuple[Stop | None, Stop | None] = (inputs["rotor"].droop_stop, inputs["rotor"].up_stop)
    different: dict[Point, int] = {}
    where = [different.setdefault(replace(p, segment=0), len(different)) for p in points]
    cases = to_cases(list(different), stops, inputs["stand.mounting"])
    return Batch(
        tuple(points),
        _taken(trim(rotor, cases, SETTINGS), np.array(where, dtype=np.int64)),
        np.array([p.segment for p in points], dtype=np.int64),
        np.array([p.speed_rad_s for p in points]),
    )


def _taken(result: TrimResult, where: NDArray[np.int64]) -> TrimResult:
    """Results by position; a position may come more than once."""
    rest = {
        field.name: getattr(result, field.name)[where]
        for field in fields(TrimResult)
        if field.name != "loads"
    }
    loads = Loads(*(getattr(result.loads, field.name)[where] for field in fields(Loads)))
    return TrimResult(loads=loads, **rest)
