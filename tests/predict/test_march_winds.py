"""Winds that histories are marched in: what is searched, and what is refused."""

from __future__ import annotations

import dataclasses
import math

import numpy as np
import pytest

from planner.model.plan import GustLengths, Sector, Site, Turbulence
from planner.model.results import Status
from planner.model.stand import Obstruction
from planner.predict.march_tracks import Track
from planner.predict.march_winds import (
    EARLY_S,
    NO_GUSTS,
    PASSED_SHARES,
    STRONGEST_GUST_M_S,
    Winds,
    gust_peaks_s,
    winds_of,
)
from planner.predict.sectors import SectorWind
from planner.predict.study import NotAssessedError
from planner.rotor.march_case import STILL
from planner.rotor.speed_history import STEP_S, History

FREE = 12.0
MEAN, GUST, DIAMETER = 4.0, 6.0, 12.0
OPEN = Sector("open", 0.0, math.pi, 0.0, None, None, "")
ROUGH = Sector("rough", math.pi, 2.0 * math.pi, 0.0, 0.3, None, "")
SITE = Site(
    elevation_m=0.0,
    pressure_Pa=None,
    temperature_K=288.15,
    temperature_spread_K=5.0,
    relative_humidity=0.5,
    wind_mean_m_s=MEAN,
    wind_gust_m_s=GUST,
    averaging_time_s=120.0,
    anemometer_height_m=10.0,
    anemometer_error_m_s=0.5,
    shear_exponent=0.15,
    gust_lengths=GustLengths(1.0, 8.0),
    turbulence=Turbulence(0.15, 3, 7),
    sectors=(OPEN, ROUGH),
)


def track(speed_rad_s, *, is_low=True):
    speed = np.asarray(speed_rad_s, dtype=np.float64)
    history = History(
        label="test",
        is_unpowered=False,
        step_s=STEP_S,
        speed_rad_s=speed,
        collective_rad=0.0 * speed,
        cyclic_cosine_rad=0.0 * speed,
        cyclic_sine_rad=0.0 * speed,
    )
    return Track(history, seats=True, is_low=is_low)


RISE = track(np.linspace(0.0, 20.0, 1001))
FALL = track(np.linspace(20.0, 0.0, 1001))
FAST = track(np.linspace(20.0, 26.0, 301), is_low=False)


def winds(site=SITE, hub=(MEAN, GUST, DIAMETER), obstructions=()):
    return winds_of(site, 8.0, obstructions, hub)


@pytest.fixture(scope="module")
def day():
    return winds()


@pytest.mark.parametrize("marched", [RISE, FALL, FAST])
def test_no_wind_is_ridden_twice(day, marched):
    rides = day.rides(marched, FREE)
    assert len(set(rides)) == len(rides)
    gusts = [ride for ride in rides if ride.gust_m_s > 0.0]
    assert len(gusts) == 2 * gust_peaks_s(marched, FREE).size  # like sectors search them once
    assert {ride.gust_m_s for ride in gusts} == {GUST - MEAN}
    assert [ride.mean_m_s for ride in rides if ride.series < 0][:2] == [0.0, MEAN]
    assert all(ride.gust_m_s == 0.0 for ride in rides if ride.series >= 0)
    assert {ride.azimuth_share for ride in gusts} == {0.0, 0.5}


def test_turbulence_is_ridden_in_every_sector(day):
    assert day.rough.wind_m_s.shape[0] == 2 * day.n_series == 6
    open_m_s, rough_m_s = day.rough.wind_m_s[:3, :, 0], day.rough.wind_m_s[3:, :, 0]
    assert np.std(rough_m_s) == pytest.approx(2.0 * np.std(open_m_s), rel=1e-6)
    every = [(0, 0), (1, 0), (2, 0), (3, 1), (4, 1), (5, 1)]
    for marched, wanted in ((RISE, every), (FAST, [every[i] for i in (0, 1, 3, 4)])):
        rows = [(r.series, r.sector) for r in day.rides(marched, FREE) if r.series >= 0]
        assert rows == wanted


def test_turbulence_is_strongest_at_one_of_the_moments(day):
    peaks = gust_peaks_s(RISE, FREE)
    for ride in day.rides(RISE, FREE):
        if ride.series >= 0:
            along = day.rough.wind_m_s[ride.series, :, 0]
            at = np.argmax(along) * day.rough.step_s - ride.series_start_s
            assert np.min(np.abs(peaks - at)) < 1e-9


def test_turbulence_of_a_light_wind_is_left_out():
    day = winds(hub=(0.9, GUST, DIAMETER))
    assert not np.any(day.rough.wind_m_s)
    assert all(ride.series < 0 for ride in day.rides(RISE, FREE))


def test_sectors_of_unlike_wind_are_each_searched():
    past = dataclasses.replace(OPEN, shelter=0.5, shelter_source="mast of the invented yard")
    day = winds(dataclasses.replace(SITE, sectors=(past, ROUGH)))
    gusts = {(r.sector, r.mean_m_s, r.gust_m_s) for r in day.rides(RISE, FREE) if r.gust_m_s > 0.0}
    assert gusts == {(0, 0.5 * MEAN, 0.5 * (GUST - MEAN)), (1, MEAN, GUST - MEAN)}


def test_gusts_peak_where_the_stops_matter():
    """Both change by 1 rad/s in a second."""
    passed = [share * FREE for share in PASSED_SHARES]
    for marched, at in ((RISE, passed), (FALL, [20.0 - speed for speed in passed])):
        peaks = gust_peaks_s(marched, FREE)
        assert peaks == pytest.approx(sorted([EARLY_S, *at]), abs=2.0 * STEP_S)
    end = FAST.history.duration_s
    assert gust_peaks_s(FAST, FREE) == pytest.approx([end / 3.0, 2.0 * end / 3.0])


def test_every_gust_peaks_where_it_was_meant_to(day):
    gusts = [ride for ride in day.rides(RISE, FREE) if ride.gust_m_s > 0.0]
    peaks = {round(ride.start_s + 0.5 * ride.length_s, 6) for ride in gusts}
    assert peaks == {round(float(peak), 6) for peak in gust_peaks_s(RISE, FREE)}


@pytest.mark.parametrize(
    ("gust", "lengths"),
    [(12.0, (1.0, 8.0)), (6.0, (2.0, 8.0)), (1.0, (12.0, 12.0))],
)
def test_no_gust_crosses_the_disc_faster_than_it_lasts(gust, lengths):
    sector = SectorWind("open", 0.5, gust, 0.0, 0.15, "")
    day = Winds((sector,), 1.0, 8.0, STILL, 0, DIAMETER)
    assert day.lengths_s(sector) == pytest.approx(lengths)
    found = {ride.length_s for ride in day.rides(RISE, FREE) if ride.gust_m_s > 0.0}
    assert (min(found), max(found)) == pytest.approx(lengths)


def test_a_calm_day_has_nothing_but_calm():
    for lengths in (SITE.gust_lengths, None):
        site = dataclasses.replace(SITE, gust_lengths=lengths)
        (calm,) = winds(site, hub=(0.0, 0.0, DIAMETER)).rides(RISE, FREE)
        assert (calm.mean_m_s, calm.gust_m_s, calm.series) == (0.0, 0.0, -1)


def test_a_steady_wind_searches_no_gust():
    rides = winds(hub=(MEAN, MEAN, DIAMETER)).rides(RISE, FREE)
    assert all(ride.gust_m_s == 0.0 for ride in rides)
    assert {ride.mean_m_s for ride in rides} == {0.0, MEAN}


MAST = Obstruction("mast", math.radians(45.0), 20.0, 9.0)


@pytest.mark.parametrize(
    ("changes", "obstructions", "status", "words"),
    [
        ({"gust_lengths": None}, (), Status.NOT_STATED, NO_GUSTS),
        ({"turbulence": None}, (), Status.NOT_STATED, "no turbulence intensity is stated"),
        ({}, (MAST,), Status.NOT_STATED, "sector open: mast, 9 m high and 20 m away at 45 deg"),
    ],
)
def test_wind_that_is_not_stated_is_not_assessed(changes, obstructions, status, words):
    with pytest.raises(NotAssessedError, match=words.replace("[", r"\[")) as refusal:
        winds(dataclasses.replace(SITE, **changes), obstructions=obstructions)
    assert refusal.value.status is status
    calm = winds(dataclasses.replace(SITE, **changes), (0.0, 0.0, DIAMETER), obstructions)
    assert len(calm.rides(RISE, FREE)) == 1


def test_a_gust_beyond_the_model_is_outside_validity():
    assert winds(hub=(MEAN, STRONGEST_GUST_M_S, DIAMETER)).sectors[0].gust_m_s == 30.0
    with pytest.raises(
        NotAssessedError, match=r"expected up to 30 m/s .* found 30.5 m"
    ) as refusal:
        winds(hub=(MEAN, 30.5, DIAMETER))
    assert refusal.value.status is Status.OUTSIDE_VALIDITY
