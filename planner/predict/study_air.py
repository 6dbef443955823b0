"""Air and wind at the hub."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.atmosphere import (
    moist_air_density_kg_m3,
    speed_of_sound_m_s,
    standard_pressure_pa,
)
from planner.methods.wind import gust_peak_m_s, wind_at_height_m_s
from planner.predict.rows import single
from planner.predict.study import Inputs, Study

if TYPE_CHECKING:
    from collections.abc import Mapping

    from planner.model.plan import Site
    from planner.model.results import Prediction


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """Density and speed of sound over the temperature range."""
    site: Site = inputs["site"]
    pressure = site_pressure_pa(site)
    spread = site.temperature_spread_K
    temperature = site.temperature_K + np.array([0.0, spread, -spread])
    density = moist_air_density_kg_m3(pressure, temperature, site.relative_humidity)
    sound = speed_of_sound_m_s(pressure, temperature, site.relative_humidity)
    return {
        "air_density": single(
            "air_density",
            "air",
            float(density[0]),
            low=float(density[1]),
            high=float(density[2]),
            hand=pressure / (287.05 * site.temperature_K),
        ),
        "speed_of_sound": single(
            "speed_of_sound",
            "air",
            float(sound[0]),
            low=float(sound[2]),
            high=float(sound[1]),
            hand=20.05 * math.sqrt(site.temperature_K),
        ),
    }


def site_pressure_pa(site: Site) -> float:
    """Pressure as stated, or of the standard atmosphere at the site's elevation."""
    if site.pressure_Pa is not None:
        return site.pressure_Pa
    if site.elevation_m is None:
        msg = "site: must state an elevation or a pressure"
        raise ValueError(msg)
    return float(standard_pressure_pa(site.elevation_m))


def winds_at_hub(site: Site, hub_height_m: float) -> tuple[float, float]:
    """Mean wind, and gust plus anemometer error, at the hub height [m/s].

    The profile is one of means. A gust is carried as the mean at the hub plus the spread as it
    was read, and by the profile as well; the greater counts.
    """
    heights = (site.anemometer_height_m, hub_height_m, site.shear_exponent)
    gust = site.wind_gust_m_s + site.anemometer_error_m_s
    mean, scaled = wind_at_height_m_s(np.array([site.wind_mean_m_s, gust]), *heights)
    carried = gust_peak_m_s(mean, gust - site.wind_mean_m_s)
    return float(mean), float(max(scaled, carried))


def run_wind(inputs: Inputs) -> Mapping[str, Prediction]:
    """Wind at the hub: calm, mean, and gust with the anemometer's error."""
    mean, greatest = winds_at_hub(inputs["site"], inputs["stand.hub_height_m"])
    return {"wind_at_hub": single("wind_at_hub", "wind", mean, low=0.0, high=greatest)}


AIR = Study("air", 1, ("site",), (), run)
WIND = Study("wind", 1, ("site", "stand.hub_height_m"), (), run_wind)
