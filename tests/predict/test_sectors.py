"""Wind by direction: sectors, shelter, and turbulence behind obstructions."""

from __future__ import annotations

import dataclasses
import math

import pytest

from planner.model.plan import Sector, Turbulence
from planner.model.stand import Obstruction
from planner.predict.sectors import SectorWind, sectors_of

NORTH = Sector("north", math.radians(300.0), math.radians(60.0), 0.0, None, None, "")
SOUTH = Sector("south", math.radians(60.0), math.radians(300.0), 0.0, None, None, "")


def hall(bearing_deg, distance_m=40.0, height_m=8.0):
    return Obstruction("hall", math.radians(bearing_deg), distance_m, height_m)


@pytest.fixture
def winds(articulated):
    def of(*sectors, obstructions=(), turbulence=True):
        general = Turbulence(0.15, 6, 1) if turbulence else None
        site = dataclasses.replace(articulated.site, sectors=sectors, turbulence=general)
        stand = dataclasses.replace(
            articulated.stand, hub_height_m=9.0, obstructions=tuple(obstructions)
        )
        return sectors_of(site, stand.hub_height_m, stand.obstructions, (8.0, 13.0))

    return of


def test_without_sectors_the_wind_is_one_all_round(winds):
    assert winds() == (SectorWind("all round", 8.0, 13.0, 0.0, 0.15, ""),)


def test_stated_sector_takes_its_own_upflow_shelter_and_turbulence(winds):
    north = dataclasses.replace(
        NORTH, upflow_rad=math.radians(5.0), turbulence_intensity=0.25,
        shelter=0.5, shelter_source="measured at the site, two weeks",
    )  # fmt: skip
    found = winds(north, SOUTH)
    assert found[0] == SectorWind("north", 4.0, 6.5, math.tan(math.radians(5.0)), 0.25, "")
    assert found[1] == SectorWind("south", 8.0, 13.0, 0.0, 0.15, "")


@pytest.mark.parametrize(
    ("place", "struck"),
    [
        (hall(0.0), "north"),
        (hall(-59.0), "north"),
        (hall(419.0), "north"),
        (hall(180.0), "south"),
        (hall(60.0), "north south"),
        (hall(300.0), "north south"),
        (hall(0.0, distance_m=160.0), ""),
        (hall(0.0, distance_m=159.0), "north"),
        (hall(0.0, height_m=4.5), "north"),
        (hall(0.0, height_m=4.4), ""),
    ],
)
def test_tall_near_obstruction_upwind_voids_the_general_turbulence(winds, place, struck):
    found = winds(NORTH, SOUTH, obstructions=(place,))
    assert " ".join(w.name for w in found if w.reason) == struck
    for wind in found:
        assert (wind.turbulence_intensity is None) is bool(wind.reason)


def test_reason_names_the_obstruction_and_own_turbulence_mends_it(winds):
    places = (hall(20.0, 100.0), dataclasses.replace(hall(-10.0, 30.0), name="tower"))
    (found,) = winds(NORTH, obstructions=places)
    assert "sector north: tower, 8 m high and 30 m away at 350 deg, stands upwind" in found.reason
    assert "no turbulence intensity of a sector is stated there" in found.reason
    (mended,) = winds(dataclasses.replace(NORTH, turbulence_intensity=0.3), obstructions=places)
    assert (mended.turbulence_intensity, mended.reason) == (0.3, "")


def test_obstruction_counts_all_round_too(winds):
    (found,) = winds(obstructions=(hall(123.0),))
    assert found.turbulence_intensity is None
    assert found.reason.startswith("all round: hall")


def test_sector_from_and_to_one_bearing_is_the_whole_circle(winds):
    whole = dataclasses.replace(NORTH, from_rad=1.0, to_rad=1.0)
    assert winds(whole, obstructions=(hall(200.0),))[0].reason
    whole = dataclasses.replace(NORTH, from_rad=0.0, to_rad=2.0 * math.pi)
    assert winds(whole, obstructions=(hall(200.0),))[0].reason


def test_missing_turbulence_is_said(winds):
    assert winds(turbulence=False)[0].reason == "all round: no turbulence intensity is stated"
    own = dataclasses.replace(NORTH, turbulence_intensity=0.2)
    found = winds(own, SOUTH, turbulence=False)
    assert [w.turbulence_intensity for w in found] == [0.2, None]


def test_shelter_without_a_measurement_is_no_credit(winds):
    (found,) = winds(dataclasses.replace(NORTH, shelter=0.6, shelter_source=" "))
    assert (found.mean_m_s, found.gust_m_s) == (8.0, 13.0)
    assert found.reason == "sector north: no measurement is stated for its shelter"
    (faster,) = winds(dataclasses.replace(NORTH, shelter=1.2))
    assert (faster.mean_m_s, faster.reason) == (pytest.approx(9.6), "")


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"shelter": 0.0}, r"sector north: expected a shelter above 0, found 0; give"),
        ({"shelter": math.nan}, r"sector north: expected a shelter above 0, found nan"),
        ({"upflow_rad": 1.0}, r"sector north: expected upflow within 45 deg, found 57.2958 deg"),
    ],
)
def test_impossible_sector_is_refused(winds, change, message):
    with pytest.raises(ValueError, match=message):
        winds(dataclasses.replace(NORTH, **change))
