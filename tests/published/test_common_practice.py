"""Facts of the trade: common practice, no single text.

A blade on a central flap hinge flaps once per revolution whatever its mass, and the air alone
damps it: flap needs no mechanical damper. Lag has next to no damping from the air and needs one.
A hinged blade lags at about a quarter of rotor speed.
"""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from planner.methods.beam import BladeBeam, Root, flap_matrices, lag_matrices
from planner.methods.beam_modes import frequencies
from planner.methods.hand_checks_flap import FlapBlade, flap_damping_ratio

pytestmark = pytest.mark.published
SPEED = np.array([20.0, 40.0])


def blade(stiffness: float = 1e7) -> BladeBeam:
    radius = np.linspace(0.0, 5.0, 6)
    mass = np.linspace(9.0, 6.0, 6)
    ones = np.ones(6)
    return BladeBeam(radius, mass, stiffness * ones, stiffness * ones, 1e5 * ones, 0.05 * ones)


def test_centrally_hinged_blade_flaps_once_per_revolution():
    flap = frequencies(flap_matrices(blade(), Root(0.0, 0.0)), SPEED, 1)[:, 0]
    assert flap / SPEED == pytest.approx(1.0, abs=1e-6)


def test_hinged_blade_lags_at_about_a_quarter_of_rotor_speed():
    lag = frequencies(lag_matrices(blade(), Root(0.2, 0.0)), SPEED, 1)[:, 0]
    assert np.all((lag / SPEED > 0.2) & (lag / SPEED < 0.35))


def test_air_alone_damps_flap():
    """Usual Lock numbers, 3 to 12 (read second hand): 19 to 75 % of critical."""
    for lock_number in (3.0, 12.0):
        ratio = flap_damping_ratio(FlapBlade(lock_number, 1.0, 0.0, 0.0, 1.0, 0.0))
        assert ratio == pytest.approx(lock_number / 16.0)


def test_without_mechanical_dampers_flap_is_damped_and_lag_is_not(articulated, run_predict):
    hub = dataclasses.replace(
        articulated.rotor.hub, flap_damper_N_m_s_rad=0.0, lag_damper_N_m_s_rad=0.0
    )
    plan = dataclasses.replace(articulated, rotor=dataclasses.replace(articulated.rotor, hub=hub))
    found = run_predict(plan)["mode_damping"]
    damping = {
        label.mode: found.low[i] for i, label in enumerate(found.labels) if label.segment == "1.6h"
    }
    assert damping["flap 1"] > 0.15
    assert damping["lag 1"] == 0.0
