"""The winds that each history is marched in."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.gusts import candidate_gusts
from planner.methods.turbulence import SurfaceWind, turbulence_series
from planner.model.results import Status
from planner.predict.sectors import sectors_of
from planner.predict.study import NotAssessedError
from planner.rotor.march_case import STILL, Turbulence

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from planner.model.plan import Site
    from planner.model.stand import Obstruction
    from planner.predict.march_tracks import Track
    from planner.predict.sectors import SectorWind

    FloatArray = NDArray[np.float64]

PASSED_SHARES = (0.02, 0.12, 0.35, 0.7, 1.1)
"""Shares of the speed where the stops are left behind at which gusts peak."""
EARLY_S = 2.0
"""Another gust peaks this long after the beginning, of a start from rest too."""
GUST_LENGTHS = 2
SERIES_ABOVE = 2
"""Series of turbulence that a piece above the region of the stops rides."""
ENTRY_SHARES = (0.0, 0.5)
"""Azimuth of the first blade when a history begins, in blade spacings, taken in turns."""
SERIES_S = 600.0
SERIES_STEP_S = 0.1
HIGHEST_HZ = 2.5
LEAST_TURBULENT_M_S = 1.0
"""Below this mean wind no spectrum of turbulence is published; there it is left out as weak."""
STRONGEST_GUST_M_S = 30.0
"""Above it a wind that is even over the disc and steady sections are no model of a gust."""
NO_GUSTS = (
    "gust: expected shortest and longest, found neither; state in [gust] the lengths of gusts "
    "that are to be searched"
)


@dataclass(frozen=True)
class Ride:
    """One wind that a history is marched in.

    Attributes:
        mean_m_s: Mean wind.
        gust_m_s: What the gust adds.
        start_s: When it begins.
        length_s: How long it lasts.
        upflow: Upward over horizontal wind.
        series: Row of the turbulence; -1 for none.
        azimuth_share: Azimuth of the first blade at the beginning, in blade spacings.
        sector: Place of the sector.
        series_start_s: Time within the turbulence when the history begins.
    """

    mean_m_s: float
    gust_m_s: float
    start_s: float
    length_s: float
    upflow: float
    series: int
    azimuth_share: float
    sector: int
    series_start_s: float = 0.0


@dataclass(frozen=True)
class Winds:
    """Winds of the day, sector by sector.

    Attributes:
        sectors: Each sector once.
        shortest_s: Shortest gust.
        longest_s: Longest gust.
        rough: Turbulence series of all sectors.
        n_series: Series of each sector.
        diameter_m: Of the rotor: a gust that passes it faster is not even over the disc.
    """

    sectors: tuple[SectorWind, ...]
    shortest_s: float
    longest_s: float
    rough: Turbulence
    n_series: int
    diameter_m: float

    def rides(self, track: Track, free_rad_s: float) -> list[Ride]:
        """Winds of one track, none twice: calm, mean, gusts by start and length, turbulence."""
        rides = [Ride(0.0, 0.0, 0.0, 1.0, 0.0, -1, 0.0, 0)]
        first: dict[tuple[float, float, float], int] = {}
        for place, sector in enumerate(self.sectors):
            wind = (sector.mean_m_s, sector.gust_m_s, sector.upflow_slope)
            like = first.setdefault(wind, place)
            steady = Ride(sector.mean_m_s, 0.0, 0.0, 1.0, sector.upflow_slope, -1, 0.0, like)
            rides += [steady, *self._gusts(steady, sector, gust_peaks_s(track, free_rad_s))]
            if sector.mean_m_s >= LEAST_TURBULENT_M_S:
                count = self.n_series if track.is_low else min(SERIES_ABOVE, self.n_series)
                peaks = gust_peaks_s(track, free_rad_s)
                rides += self._rough_rides(steady, place, peaks)[:count]
        return list(dict.fromkeys(rides))

    def _gusts(self, steady: Ride, sector: SectorWind, peaks_s: FloatArray) -> list[Ride]:
        """Gusts on a steady wind, with every start and length that is searched."""
        more = sector.gust_m_s - sector.mean_m_s
        if not more > 0.0:
            return []
        starts, lengths = candidate_gusts(peaks_s, *self.lengths_s(sector), GUST_LENGTHS)
        pairs = zip(starts.tolist(), lengths.tolist(), strict=True)
        return [
            replace(
                steady,
                gust_m_s=more,
                start_s=start,
                length_s=length,
                azimuth_share=ENTRY_SHARES[i % 2],
            )
            for i, (start, length) in enumerate(pairs)
        ]

    def _rough_rides(self, steady: Ride, place: int, peaks_s: FloatArray) -> list[Ride]:
        """Turbulence of a sector, the strongest gust of each series at one of the moments."""
        first = place * self.n_series
        return [
            replace(
                steady,
                series=first + i,
                azimuth_share=ENTRY_SHARES[i % 2],
                sector=place,
                series_start_s=self.strongest_s(first + i) - float(peaks_s[i % peaks_s.size]),
            )
            for i in range(self.n_series)
        ]

    def strongest_s(self, row: int) -> float:
        """When the wind along the mean is strongest in a series of turbulence."""
        return float(np.argmax(self.rough.wind_m_s[row, :, 0])) * self.rough.step_s

    def lengths_s(self, sector: SectorWind) -> tuple[float, float]:
        """Shortest and longest gust; one that crosses the disc faster is not even over it."""
        crossing = self.diameter_m / sector.gust_m_s
        longest = max(self.longest_s, crossing)
        return max(self.shortest_s, crossing), longest * (1.0 + 1e-9)


def winds_of(
    site: Site,
    hub_height_m: float,
    obstructions: Sequence[Obstruction],
    hub: tuple[float, float, float],
) -> Winds:
    """Winds of the day.

    Args:
        site: Gust lengths, turbulence, sectors.
        hub_height_m: Height of the hub over the ground.
        obstructions: What stands about the stand.
        hub: Mean wind and gust at the hub, and the rotor's diameter.

    Returns:
        The winds.

    Raises:
        NotAssessedError: gust lengths or turbulence are not stated, or a gust is stronger than
            the model holds for.
    """
    mean, gust, diameter_m = hub
    if gust > STRONGEST_GUST_M_S:
        msg = f"gust: expected up to {STRONGEST_GUST_M_S:g} m/s at the hub, found {gust:g} m/s"
        raise NotAssessedError(Status.OUTSIDE_VALIDITY, msg)
    sectors = sectors_of(site, hub_height_m, obstructions, (mean, gust))
    for sector in sectors:
        if sector.reason and gust > 0.0:
            raise NotAssessedError(Status.NOT_STATED, sector.reason)
    if site.gust_lengths is None:
        if gust > 0.0:
            raise NotAssessedError(Status.NOT_STATED, NO_GUSTS)
        return Winds(sectors, 1.0, 2.0, STILL, 0, diameter_m)
    lengths = site.gust_lengths
    n_series = 0 if site.turbulence is None else site.turbulence.series
    rough = _rough(sectors, site, hub_height_m) if n_series else STILL
    return Winds(sectors, lengths.shortest_s, lengths.longest_s, rough, n_series, diameter_m)


def _rough(sectors: Sequence[SectorWind], site: Site, height_m: float) -> Turbulence:
    """Series of all sectors, one sector after the other; still air where the wind is weak."""
    turbulence = site.turbulence
    if turbulence is None:
        return STILL
    parts = []
    for sector in sectors:
        intensity = sector.turbulence_intensity or 0.0
        if sector.mean_m_s < LEAST_TURBULENT_M_S or intensity <= 0.0:
            times = int(SERIES_S / SERIES_STEP_S)
            parts.append(np.zeros((turbulence.series, times, 3)))
            continue
        wind = SurfaceWind(sector.mean_m_s, height_m, intensity, HIGHEST_HZ)
        parts.append(
            turbulence_series(wind, SERIES_S, SERIES_STEP_S, turbulence.series, turbulence.seed)
        )
    return Turbulence(SERIES_STEP_S, np.concatenate(parts))


def gust_peaks_s(track: Track, free_rad_s: float) -> FloatArray:
    """Moments at which gusts peak: where the stops matter, else spread over the history."""
    history = track.history
    end = history.step_s * (history.speed_rad_s.size - 1)
    speed = history.speed_rad_s
    peaks = [EARLY_S] if track.is_low and end > EARLY_S else []
    for share in PASSED_SHARES:
        beyond = speed >= share * free_rad_s
        changes = np.flatnonzero(beyond[1:] != beyond[:-1])
        if changes.size:
            peaks.append(float(changes[0]) * history.step_s)
    if not peaks:
        peaks = [end / 3.0, 2.0 * end / 3.0]
    return np.array(sorted(set(peaks)))
