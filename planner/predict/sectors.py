"""The wind at the hub by direction: what each sector adds to upflow, shelter and turbulence."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Sequence

    from planner.model.plan import Sector, Site
    from planner.model.stand import Obstruction

ALL_ROUND = "all round"
WAKE_HEIGHTS = 20.0
"""The wake of an obstruction is taken as this many of its heights long (common practice, from
memory); within, turbulence is not that of open ground."""
TALL_SHARE = 0.5
"""An obstruction counts from this share of the hub height (common practice, from memory)."""
ROUNDING_RAD = 1e-9


@dataclass(frozen=True)
class SectorWind:
    """Wind that comes from one sector."""

    name: str
    mean_m_s: float
    gust_m_s: float
    upflow_slope: float
    """Upward over horizontal wind speed."""
    turbulence_intensity: float | None
    """None: no intensity holds here, and the reason says what is missing."""
    reason: str
    """Empty where everything is stated."""


def sectors_of(
    site: Site,
    hub_height_m: float,
    obstructions: Sequence[Obstruction],
    hub_m_s: tuple[float, float],
) -> tuple[SectorWind, ...]:
    """Wind of each stated sector; of one sector all round where none is stated.

    A measured shelter multiplies mean and gust. A sector's own turbulence intensity stands before
    the plan's. The plan's is that of open ground: it does not hold where an obstruction at least
    half as tall as the hub stands upwind within 20 of its heights.

    Args:
        site: Sectors and turbulence as the plan states them.
        hub_height_m: Height of the hub over the ground.
        obstructions: What stands about the stand.
        hub_m_s: Mean wind and gust at the hub, no shelter counted.

    Returns:
        One entry a sector, in the plan's order. Where something is missing the reason says what:
        such a sector is not assessed.

    Raises:
        ValueError: A shelter that is not above 0, or upflow of 45 degrees and more.

    Validity:
        An obstruction counts by the bearing of its middle; its width is not known.

    Source:
        Length of a wake and height that counts: common practice, from memory.
    """
    if not site.sectors:
        wake_of = _in_wake(None, hub_height_m, obstructions)
        intensity, reason = _intensity(ALL_ROUND, None, site, wake_of)
        return (SectorWind(ALL_ROUND, *hub_m_s, 0.0, intensity, reason),)
    return tuple(
        _wind_of(sector, site, _in_wake(sector, hub_height_m, obstructions), hub_m_s)
        for sector in site.sectors
    )


def _wind_of(
    sector: Sector, site: Site, wake_of: Obstruction | None, speeds_m_s: tuple[float, float]
) -> SectorWind:
    share, unmeasured = _shelter(sector)
    intensity, missing = _intensity(
        f"sector {sector.name}", sector.turbulence_intensity, site, wake_of
    )
    return SectorWind(
        name=sector.name,
        mean_m_s=share * speeds_m_s[0],
        gust_m_s=share * speeds_m_s[1],
        upflow_slope=_slope(sector),
        turbulence_intensity=intensity,
        reason="; ".join(text for text in (unmeasured, missing) if text),
    )


def _shelter(sector: Sector) -> tuple[float, str]:
    """Share of the wind that arrives; below 1 only with a measurement."""
    if sector.shelter is None:
        return 1.0, ""
    if not 0.0 < sector.shelter < math.inf:
        msg = (
            f"sector {sector.name}: expected a shelter above 0, found {sector.shelter:g}; "
            "give the measured share of the wind"
        )
        raise ValueError(msg)
    if sector.shelter < 1.0 and not sector.shelter_source.strip():
        return 1.0, f"sector {sector.name}: no measurement is stated for its shelter"
    return sector.shelter, ""


def _slope(sector: Sector) -> float:
    if not abs(sector.upflow_rad) < 0.25 * math.pi:
        msg = (
            f"sector {sector.name}: expected upflow within 45 deg, found "
            f"{math.degrees(sector.upflow_rad):g} deg; give the slope of the wind at the hub"
        )
        raise ValueError(msg)
    return math.tan(sector.upflow_rad)


def _intensity(
    where: str, own: float | None, site: Site, wake_of: Obstruction | None
) -> tuple[float | None, str]:
    """Turbulence intensity that holds, else the reason why none does."""
    if own is not None:
        return own, ""
    if wake_of is not None:
        bearing = math.degrees(wake_of.bearing_rad) % 360.0
        return None, (
            f"{where}: {wake_of.name}, {wake_of.height_m:g} m high and {wake_of.distance_m:g} m "
            f"away at {bearing:.0f} deg, stands upwind within {WAKE_HEIGHTS:g} of its heights, "
            "so that the plan's turbulence does not hold; no turbulence intensity of a sector "
            "is stated there"
        )
    if site.turbulence is None:
        return None, f"{where}: no turbulence intensity is stated"
    return site.turbulence.intensity, ""


def _in_wake(
    sector: Sector | None, hub_height_m: float, obstructions: Sequence[Obstruction]
) -> Obstruction | None:
    """The nearest obstruction, in its own heights, whose wake reaches the hub from a sector."""
    upwind = [
        place
        for place in obstructions
        if (sector is None or _holds(sector, place.bearing_rad))
        and place.height_m >= TALL_SHARE * hub_height_m
        and place.distance_m < WAKE_HEIGHTS * place.height_m
    ]
    return min(upwind, key=lambda place: place.distance_m / place.height_m, default=None)


def _holds(sector: Sector, bearing_rad: float) -> bool:
    """Tell whether a bearing lies in a sector, both edges included."""
    turn = 2.0 * math.pi
    width = sector.to_rad - sector.from_rad
    width = width % turn or turn
    past = (bearing_rad - sector.from_rad) % turn
    return past <= width + ROUNDING_RAD or past >= turn - ROUNDING_RAD
