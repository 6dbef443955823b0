"""Torsional modes of the shaft: the drive train with blades that are free to lag."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from planner.methods.shaft_chain import chain_modes
from planner.predict.shaft_modes import blades_on_shaft
from tests.predict.rows import row, rows

TRAIN = ("shaft train 1", "shaft train 2", "shaft train 3")


def test_every_mode_of_the_train_stands_at_every_hold_against_the_blades(predicted):
    found = predicted("hingeless-model")
    for mode in TRAIN:
        labels = [found["harmonic_spacing"].labels[i] for i in rows(
            found["harmonic_spacing"], segment="1.4h", mode=mode)]  # fmt: skip
        assert [label.harmonic for label in labels] == ["4", "8", "12"]
    frequency = found["mode_frequency"]
    at = [frequency.value[row(frequency, segment="1.4h", mode=mode)] for mode in TRAIN]
    assert at == sorted(at)


def test_gears_refer_stiffness_and_inertia_by_the_square(sample, predicted):
    """The motor's side written at the rotor shaft by hand gives the same modes."""
    plan = sample("hingeless-model")
    inertia = np.array([0.0018 * 4.1**2, 0.01474, 0.035])
    stiffness = np.array([14.0 * 4.1**2, 550.0])
    found = predicted("hingeless-model")["mode_frequency"]
    i = row(found, segment="1.4h", mode="shaft train 2")
    speed = np.array([found.speed_rad_s[i]])
    modes = chain_modes(inertia, stiffness, blades_on_shaft(plan.rotor), speed, 3)
    assert found.value[i] == pytest.approx(modes.frequency_rad_s[0, 1], rel=1e-9)


def test_blades_on_free_lag_hinges_swing_against_the_hub(articulated):
    """Rigid blades about their hinges on a hub without a drive: two freedoms by hand.

    N (I + e S) couples hub and blades; the blades' spring is N Ω² e S.
    """
    blades = blades_on_shaft(articulated.rotor)
    hub_kg_m2, speed = 120.0, 37.3
    found = chain_modes([hub_kg_m2], [], blades, [speed], 1).frequency_rad_s[0, 0]
    about = 4.0 * blades.mass_kg[0, 0], 4.0 * blades.coupling_kg_m[0]
    total = hub_kg_m2 + 4.0 * blades.polar_inertia_kg_m2
    spring = 4.0 * (blades.stiffness_0_N_m + speed**2 * blades.stiffness_omega2_kg)[0, 0]
    by_hand = np.sqrt(spring / (about[0] - about[1] ** 2 / total))
    assert found == pytest.approx(by_hand, rel=0.05)
    assert found > 3.0 * np.sqrt(spring / about[0])  # locked to a heavy hub it would lag slowly


def test_damping_of_the_train_is_as_stated(predicted):
    found = predicted("hingeless-model")["mode_damping"]
    assert found.value[row(found, segment="1.1h", mode="shaft train 1")] == 0.015


def test_plan_without_drive_train_has_the_given_modes_alone(sample, run_predict):
    plan = sample("hingeless-model")
    bare = dataclasses.replace(plan, stand=dataclasses.replace(plan.stand, drive_train=None))
    found = run_predict(bare, "modes")["mode_frequency"]
    assert not any(label.mode.startswith("shaft") for label in found.labels)
