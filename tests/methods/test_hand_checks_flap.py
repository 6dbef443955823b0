"""Flap closed forms against worked values and against a march of the exact equation."""

from dataclasses import dataclass, replace

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from planner.methods.hand_checks_flap import (
    Array,
    Flap,
    FlapBlade,
    FlapLoading,
    coning_rad,
    first_order_flap_rad,
    flap_damping_ratio,
    second_order_flap_rad,
    span_integral,
)

PLAIN = FlapBlade(4.617, 1.0, 0.0, 0.0, 1.0, 0.0)
OFFSET_LOCK = 1.2 * 5.7 * 0.3 * 6.0**4 / (8.0 * 5.7**3 / 3.0)
OFFSET = FlapBlade(OFFSET_LOCK, 1.0 + 1.5 * 0.05 / 0.95, 0.05, 0.15, 0.97, 0.0)
STILL = FlapLoading(np.radians(6.0), 0.0, 0.0, 0.0, 0.03, 0.0, 0.0, 0.0)
WEIGHT = -9.80665 * 1.5 / (5.7 * 35.0**2)


@dataclass(frozen=True)
class March:
    """Rigid blade in time: I b'' + (I cos b + e S) sin b + ... = M, air load by strips.

    Exact in flap and inflow angle, or with both taken as small as the closed forms do.
    """

    blade: FlapBlade
    loading: FlapLoading
    is_exact: bool = True

    def load(self, psi: float, flap: float, rate: float) -> float:
        """Integral of the normal force of the strips times their arm."""
        blade, loading = self.blade, self.loading
        e = blade.hinge_fraction
        nodes, weights = np.polynomial.legendre.leggauss(24)
        half = 0.5 * (blade.tip_fraction - blade.root_fraction)
        x = blade.root_fraction + half * (nodes + 1.0)
        pitch = loading.pitch_rad + loading.twist_rad * (x - 0.75)
        pitch = pitch + loading.cyclic_cosine_rad * np.cos(psi)
        pitch = pitch + loading.cyclic_sine_rad * np.sin(psi) - blade.pitch_flap_coupling * flap
        inflow = loading.inflow_ratio * (1.0 + loading.inflow_gradient * x * np.cos(psi))
        mu = loading.advance_ratio
        if self.is_exact:
            along = e + (x - e) * np.cos(flap) + mu * np.sin(psi)
            through = inflow * np.cos(flap) + (x - e) * rate + mu * np.cos(psi) * np.sin(flap)
            angle = np.arctan2(through, along)
            normal = (along**2 + through**2) * (pitch - angle) * np.cos(angle)
        else:
            along = x + mu * np.sin(psi)
            through = inflow + (x - e) * rate + mu * np.cos(psi) * flap
            normal = pitch * along**2 - through * along
        return float(half * np.sum(weights * (x - e) * normal))

    def rates(self, psi: float, state: Array) -> list[float]:
        flap, rate = state
        blade = self.blade
        pull, weight = blade.frequency_squared * flap, self.loading.steady_moment
        if self.is_exact:
            pull = (np.cos(flap) + blade.frequency_squared - 1.0) * np.sin(flap)
            weight = weight * np.cos(flap)
        moment = 0.5 * blade.lock_number * self.load(psi, flap, rate)
        return [float(rate), float(moment - pull + weight)]

    def harmonics_deg(self) -> list[float]:
        psi = 2.0 * np.pi * (10 + np.arange(64) / 64)
        run = solve_ivp(
            self.rates, (0.0, psi[-1]), [0.0, 0.0], "DOP853", psi, rtol=1e-8, atol=1e-10
        )
        flap = np.degrees(run.y[0])
        cosine, sine = 2.0 * np.mean(flap * np.cos(psi)), 2.0 * np.mean(flap * np.sin(psi))
        return [float(flap.mean()), float(cosine), float(sine)]


def degrees(flap: Flap) -> list[float]:
    return [float(np.degrees(value)) for value in (flap.mean_rad, flap.cosine_rad, flap.sine_rad)]


def test_span_integrals_agree_with_quadrature():
    x = np.linspace(0.15, 0.97, 20001)
    for hinge_power in (1, 2):
        for power in range(4):
            exact = np.trapezoid((x - 0.05) ** hinge_power * x**power, x)
            assert float(span_integral(OFFSET, hinge_power, power)) == pytest.approx(
                exact, rel=1e-7
            )


def test_damping_ratio_repeats_worked_values():
    assert float(flap_damping_ratio(OFFSET)) == pytest.approx(0.249, abs=5e-4)
    assert float(flap_damping_ratio(replace(PLAIN, lock_number=5.385))) == pytest.approx(
        0.337, abs=5e-4
    )


def test_damping_ratio_agrees_with_the_decay_of_a_march():
    def peak(psi: float, state: Array) -> float:
        del psi
        return float(state[1])

    still = March(OFFSET, replace(STILL, pitch_rad=0.0, inflow_ratio=0.0))
    run = solve_ivp(
        still.rates,
        (0.0, 20.0),
        [1e-4, 0.0],
        "DOP853",
        rtol=1e-9,
        atol=1e-15,
        events=peak,
    )
    assert run.y_events is not None
    peaks = np.abs(run.y_events[0][1:5, 0])
    decay = np.mean(np.log(peaks[:-1] / peaks[1:])) / np.pi
    assert decay / np.sqrt(1.0 + decay**2) == pytest.approx(
        float(flap_damping_ratio(OFFSET)), rel=1e-5
    )


def test_coning_repeats_the_worked_value_with_hinge_offset_and_weight():
    loading = replace(STILL, steady_moment=WEIGHT)
    assert float(np.degrees(coning_rad(OFFSET, loading))) == pytest.approx(1.772, abs=5e-4)


@pytest.mark.parametrize(
    ("advance", "worked"),
    [(0.07, (1.772, -0.968, -0.033)), (0.30, (1.772, -4.150, -0.142))],
)
def test_first_order_flap_repeats_worked_values(advance, worked):
    loading = replace(STILL, advance_ratio=advance, steady_moment=WEIGHT)
    assert degrees(first_order_flap_rad(OFFSET, loading)) == pytest.approx(worked, abs=6e-4)


@pytest.mark.parametrize(
    ("advance", "worked", "first_band", "second_band"),
    [  # bands in degrees: first-order forms fall short as wind grows, by known amounts
        (0.07, (1.790, -0.975, -0.034), 0.02, 0.005),
        (0.30, (2.102, -4.378, -0.291), 0.34, 0.06),
    ],
)
def test_march_repeats_worked_values_and_bounds_the_closed_forms(
    advance, worked, first_band, second_band
):
    loading = replace(STILL, advance_ratio=advance, steady_moment=WEIGHT)
    march = March(OFFSET, loading).harmonics_deg()
    assert march == pytest.approx(worked, abs=8e-4)
    assert degrees(first_order_flap_rad(OFFSET, loading)) == pytest.approx(march, abs=first_band)
    assert degrees(second_order_flap_rad(OFFSET, loading)) == pytest.approx(march, abs=second_band)


def test_classical_flap_at_the_shaft_repeats_worked_values_and_march():
    loading = replace(STILL, advance_ratio=0.1)
    closed = degrees(second_order_flap_rad(PLAIN, loading))
    assert closed == pytest.approx([2.1747, -1.2625, -0.2885], abs=1.5e-4)
    march = March(PLAIN, loading).harmonics_deg()
    assert march == pytest.approx([2.1767, -1.2656, -0.2905], abs=8e-4)
    assert closed == pytest.approx(march, rel=8e-3)


def test_every_term_of_the_second_order_form_agrees_with_the_march():
    blade = replace(OFFSET, pitch_flap_coupling=0.25)
    loading = FlapLoading(0.1, -0.12, 0.02, -0.03, 0.035, 0.8, 0.12, WEIGHT)
    march = March(blade, loading, is_exact=False).harmonics_deg()
    assert degrees(second_order_flap_rad(blade, loading)) == pytest.approx(march, abs=0.003)
    assert degrees(first_order_flap_rad(blade, loading)) == pytest.approx(march, abs=0.08)


def test_forms_agree_without_wind():
    blade = replace(OFFSET, pitch_flap_coupling=0.1)
    loading = FlapLoading(0.1, -0.12, 0.02, -0.03, 0.035, 0.8, 0.0, WEIGHT)
    first, second = first_order_flap_rad(blade, loading), second_order_flap_rad(blade, loading)
    assert degrees(first) == pytest.approx(degrees(second), abs=1e-12)


def test_cyclic_pitch_tilts_a_shaft_hinged_blade_by_its_own_angle():
    loading = replace(STILL, cyclic_cosine_rad=0.02, cyclic_sine_rad=-0.01)
    flap = first_order_flap_rad(PLAIN, loading)
    assert float(flap.cosine_rad) == pytest.approx(0.01)
    assert float(flap.sine_rad) == pytest.approx(0.02)


def test_arrays_of_cases_give_the_numbers_of_each_case():
    advance = np.array([0.0, 0.05, 0.2])
    many = second_order_flap_rad(OFFSET, replace(STILL, advance_ratio=advance))
    for number, value in enumerate(advance):
        one = second_order_flap_rad(OFFSET, replace(STILL, advance_ratio=value))
        assert float(one.cosine_rad) == many.cosine_rad[number]
