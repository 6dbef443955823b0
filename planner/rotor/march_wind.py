"""Wind and prescribed motions of marched cases at each case's own time."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.march_case import Histories, MarchCases, Turbulence

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Prescribed:
    """What a history prescribes at one time of each case, each (cases,)."""

    speed_rad_s: FloatArray
    collective_rad: FloatArray
    cyclic_cosine_rad: FloatArray
    cyclic_sine_rad: FloatArray


@dataclass(frozen=True, eq=False)
class WindNow:
    """Wind at one time of each case: along, across and up, each (cases,) [m/s]."""

    along_m_s: Array
    across_m_s: Array
    up_m_s: Array


class Course:
    """Histories and winds of a block of cases."""

    def __init__(self, histories: Histories, turbulence: Turbulence, cases: MarchCases) -> None:
        """Stack the histories for one look-up."""
        self._step = histories.step_s
        self._table = np.stack(
            [
                histories.speed_rad_s,
                histories.collective_rad,
                histories.cyclic_cosine_rad,
                histories.cyclic_sine_rad,
            ],
            axis=-1,
        )
        self._turbulence = turbulence
        self._rides = bool(np.any(cases.series >= 0))
        self._has_gust = bool(np.any(cases.gust_m_s != 0.0))
        self._cases = cases

    def take(self, histories: Histories, where: NDArray[Any]) -> Course:
        """The same for some of the cases."""
        return Course(histories, self._turbulence, self._cases.take(where))

    def prescribed(self, time_s: FloatArray) -> Prescribed:
        """Linear between the columns of the histories, held beyond their ends."""
        place = np.clip(time_s / self._step, 0.0, self._table.shape[1] - 1.001)
        column = place.astype(np.int64)
        share = (place - column)[:, None]
        row = self._cases.history
        low = self._table[row, column]
        now = low + share * (self._table[row, column + 1] - low)
        return Prescribed(now[:, 0], now[:, 1], now[:, 2], now[:, 3])

    def wind(self, time_s: FloatArray) -> WindNow:
        """Mean wind, gust and turbulence."""
        cases = self._cases
        along = cases.wind_m_s
        if self._has_gust:
            phase = (time_s - cases.gust_start_s) / cases.gust_length_s
            swell = 0.5 - 0.5 * np.cos(2.0 * np.pi * np.clip(phase, 0.0, 1.0))
            along = along + cases.gust_m_s * swell
        up = cases.upflow * along
        across = np.zeros_like(along)
        if self._rides:
            rough = self._rough(time_s)
            along, across, up = along + rough[:, 0], rough[:, 1], up + rough[:, 2]
        return WindNow(along, across, up)

    def _rough(self, time_s: FloatArray) -> FloatArray:
        """Turbulence of the cases that ride a series, (cases, 3)."""
        samples = self._turbulence.wind_m_s
        place = np.maximum(time_s, 0.0) / self._turbulence.step_s
        column = place.astype(np.int64)
        share = (place - column)[:, None]
        n = samples.shape[1]
        row = np.maximum(self._cases.series, 0)
        low = samples[row, column % n]
        now = low + share * (samples[row, (column + 1) % n] - low)
        result: FloatArray = now * (self._cases.series >= 0)[:, None]
        return result
