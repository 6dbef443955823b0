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
    """What a history prescribes at one time of each case, each (cases,).

    Attributes:
        speed_rad_s: Rotor speed.
        collective_rad: Pitch at the collective radius.
        cyclic_cosine_rad: Cyclic pitch with the cosine of azimuth.
        cyclic_sine_rad: Cyclic pitch with the sine of azimuth.
        cyclic: Some history has cyclic pitch.
    """

    speed_rad_s: FloatArray
    collective_rad: FloatArray
    cyclic_cosine_rad: FloatArray
    cyclic_sine_rad: FloatArray
    cyclic: bool


@dataclass(frozen=True, eq=False)
class WindNow:
    """Wind at one time of each case: along, across and up, each (cases,) [m/s].

    In the precision of the march.
    """

    along_m_s: Array
    across_m_s: Array
    up_m_s: Array


class Course:
    """Histories and winds of a block of cases."""

    def __init__(
        self, histories: Histories, turbulence: Turbulence, cases: MarchCases, dtype: type[Any]
    ) -> None:
        """Stack the histories for one look-up."""
        parts = (
            histories.speed_rad_s,
            histories.collective_rad,
            histories.cyclic_cosine_rad,
            histories.cyclic_sine_rad,
        )
        self._cyclic = bool(np.any(parts[2]) or np.any(parts[3]))
        table = np.stack(parts, axis=-1)
        rise = np.zeros_like(table)
        rise[:, :-1] = table[:, 1:] - table[:, :-1]
        self._columns = table.shape[1]
        self._per_step = 1.0 / histories.step_s
        self._table, self._rise = table.reshape(-1, 4), rise.reshape(-1, 4)
        self._turbulence, self._dtype = turbulence, dtype
        self._bind(cases)

    def _bind(self, cases: MarchCases) -> None:
        """Take what the cases give."""
        self._cases = cases
        self._row = cases.history * self._columns
        self._has_gust = bool(np.any(cases.gust_m_s != 0.0))
        self._rides = bool(np.any(cases.series >= 0))
        self._per_gust = 1.0 / cases.gust_length_s
        along, up = cases.wind_m_s, cases.upflow * cases.wind_m_s
        self._mean = self._now(along, np.zeros_like(along), up)

    def keep(self, cases: MarchCases) -> None:
        """Go on with some of the cases only."""
        self._bind(cases)

    def prescribed(self, time_s: FloatArray) -> Prescribed:
        """Linear between the columns of the histories, held beyond their ends."""
        place = np.maximum(time_s * self._per_step, 0.0)
        place = np.minimum(place, self._columns - 1.0)
        column = place.astype(np.int64)
        place -= column
        column += self._row
        now = self._rise.take(column, axis=0, mode="clip")
        now *= place[:, None]
        now += self._table.take(column, axis=0, mode="clip")
        return Prescribed(now[:, 0], now[:, 1], now[:, 2], now[:, 3], self._cyclic)

    def wind(self, time_s: FloatArray) -> WindNow:
        """Mean wind, gust and turbulence."""
        if not (self._has_gust or self._rides):
            return self._mean
        cases = self._cases
        along = cases.wind_m_s
        if self._has_gust:
            phase = (time_s - cases.gust_start_s) * self._per_gust
            phase = np.minimum(np.maximum(phase, 0.0), 1.0)
            swell = 0.5 - 0.5 * np.cos(2.0 * np.pi * phase)
            along = along + cases.gust_m_s * swell
        up = cases.upflow * along
        across = np.zeros_like(along)
        if self._rides:
            rough = self._rough(time_s)
            along, across, up = along + rough[:, 0], rough[:, 1], up + rough[:, 2]
        return self._now(along, across, up)

    def _now(self, along: FloatArray, across: FloatArray, up: FloatArray) -> WindNow:
        return WindNow(*(part.astype(self._dtype) for part in (along, across, up)))

    def _rough(self, time_s: FloatArray) -> FloatArray:
        """Turbulence of the cases that ride a series, (cases, 3)."""
        samples = self._turbulence.wind_m_s
        n = samples.shape[1]
        place = (time_s + self._cases.series_start_s) / self._turbulence.step_s
        place = np.mod(place, n)
        column = place.astype(np.int64)
        share = (place - column)[:, None]
        row = np.maximum(self._cases.series, 0)
        low = samples[row, column % n]
        now = low + share * (samples[row, (column + 1) % n] - low)
        result: FloatArray = now * (self._cases.series >= 0)[:, None]
        return result
