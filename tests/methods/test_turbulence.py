from __future__ import annotations

import dataclasses
import itertools
from typing import get_args

import numpy as np
import pytest
from scipy.integrate import quad

from planner.methods.turbulence import (
    Component,
    SurfaceWind,
    kaimal_spectrum,
    kaimal_variance,
    turbulence_series,
)

COMPONENTS = get_args(Component)
WIND = SurfaceWind(mean_m_s=12.0, height_m=9.0, intensity=0.18, highest_hz=5.0)
TEN_MINUTES = (600.0, 0.05)


@pytest.fixture(scope="module")
def series():
    return turbulence_series(WIND, *TEN_MINUTES, 4, 11)


def band_variance(component, low_hz, high_hz):
    """Variance in a band, sigma_u one, by adaptive integration."""
    found, _ = quad(lambda n: float(kaimal_spectrum(n, 9.0, 12.0, component)), low_hz, high_hz)
    return found / kaimal_variance("u")


@pytest.mark.parametrize("component", COMPONENTS)
def test_spectrum_integrates_to_the_variance(component):
    # over the logarithm of frequency; beyond 100 Hz by the power law, S falls with n^(-5/3)
    inside, _ = quad(
        lambda x: float(np.exp(x) * kaimal_spectrum(np.exp(x), 5.0, 20.0, component)),
        np.log(1e-7), np.log(100.0), limit=200,
    )  # fmt: skip
    beyond = 1.5 * 100.0 * float(kaimal_spectrum(100.0, 5.0, 20.0, component))
    assert inside + beyond == pytest.approx(kaimal_variance(component), rel=2e-3)


def test_series_has_the_stated_deviation_and_no_mean(series):
    assert series.shape == (4, 12000, 3)
    ratio = np.sqrt([kaimal_variance(c) / kaimal_variance("u") for c in COMPONENTS])
    assert series.std(axis=1) == pytest.approx(np.tile(0.18 * 12.0 * ratio, (4, 1)), rel=1e-9)
    assert np.abs(series.mean(axis=1)).max() < 1e-12


@pytest.mark.parametrize("component", COMPONENTS)
def test_periodogram_averaged_over_bands_follows_the_spectrum(series, component):
    x = series[:, :, COMPONENTS.index(component)]
    frequency = np.fft.rfftfreq(x.shape[1], 0.05)
    power = 2.0 * np.mean(np.abs(np.fft.rfft(x) / x.shape[1]) ** 2, axis=0)
    edges = np.array([0.0125, 0.05, 0.2, 0.8, 3.2])
    held = np.array([power[(frequency > a) & (frequency <= b)].sum()
                     for a, b in itertools.pairwise(edges)])  # fmt: skip
    true = np.array([band_variance(component, a, b)
                     for a, b in itertools.pairwise(edges)])  # fmt: skip
    scale = held / (true * (0.18 * 12.0) ** 2)
    # what lies outside the band of the series is given back by one factor for all frequencies
    assert scale == pytest.approx(np.full(4, scale.mean()), rel=0.03)
    assert 1.0 < scale.mean() < 1.4
    assert power[frequency > 5.0 + 1e-9].max() < 1e-20


def test_components_and_series_are_not_alike(series):
    columns = series.transpose(0, 2, 1).reshape(12, -1)
    together = np.corrcoef(columns) - np.eye(12)
    assert np.abs(together).max() < 0.3


def test_values_spread_as_random_wind_does(series):
    share = np.mean(np.abs(series[:, :, 0]) < 0.18 * 12.0)
    assert share == pytest.approx(0.683, abs=0.04)


def test_a_series_is_the_same_however_many_are_asked_for(series):
    again = turbulence_series(WIND, *TEN_MINUTES, 1, 11)
    assert np.array_equal(again[0], series[0])
    other = turbulence_series(WIND, *TEN_MINUTES, 1, 12)
    assert not np.array_equal(other[0], series[0])


def test_length_is_filled_up_to_whole_steps():
    wind = dataclasses.replace(WIND, highest_hz=1.0)
    assert turbulence_series(wind, 60.0, 0.25, 1, 0).shape == (1, 240, 3)
    assert turbulence_series(wind, 60.1, 0.25, 1, 0).shape == (1, 241, 3)


def test_no_intensity_is_steady_wind():
    calm = dataclasses.replace(WIND, intensity=0.0)
    assert not turbulence_series(calm, *TEN_MINUTES, 1, 0).any()


@pytest.mark.parametrize(
    ("change", "grid", "message"),
    [
        ({"mean_m_s": 0.5}, TEN_MINUTES, r"mean wind: expected 1 to 75 m/s, found 0.5"),
        ({"height_m": 1.0}, TEN_MINUTES, r"height over ground: expected 2 to 100 m, found 1"),
        ({"intensity": 0.6}, TEN_MINUTES, r"turbulence intensity: expected 0 to 0.5, found 0.6"),
        ({"highest_hz": 0.0}, TEN_MINUTES, r"highest frequency: expected above 0 Hz, found 0"),
        ({}, (600.0, 0.1), r"step of the series: expected at most 0.05 s for 5 Hz, found 0.1 s"),
        ({}, (0.5, 0.05), r"duration of the series: expected 1 to 7200 s, found 0.5"),
        ({}, (2.0, 0.05), r"or more of the variance of u .* take a longer series"),
        ({"highest_hz": 0.3}, TEN_MINUTES, r"or more of the variance of w .* found 0\.\d\d"),
    ],
)
def test_wind_outside_validity_is_refused(change, grid, message):
    with pytest.raises(ValueError, match=message):
        turbulence_series(dataclasses.replace(WIND, **change), grid[0], grid[1], 1, 0)


@pytest.mark.parametrize(("n_series", "seed"), [(0, 1), (1, -1)])
def test_no_series_and_negative_seed_are_refused(n_series, seed):
    with pytest.raises(ValueError, match=r"turbulence series: expected at least 1 series and"):
        turbulence_series(WIND, *TEN_MINUTES, n_series, seed)


def test_unknown_component_is_refused():
    with pytest.raises(ValueError, match=r"wind component: expected one of u, v, w, found x"):
        kaimal_spectrum(1.0, 9.0, 12.0, "x")  # type: ignore[arg-type]
