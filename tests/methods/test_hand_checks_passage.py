import numpy as np
import pytest

from planner.methods.hand_checks_passage import (
    half_power_turns,
    steady_unbalance_peak,
    swept_share,
    unbalance_passage_peak,
    undamped_peak_speed_rad_s,
)


def test_steady_peak_is_the_top_of_the_steady_curve():
    speed = np.linspace(0.5, 2.0, 20_001)
    for zeta in (0.05, 0.2):
        curve = speed**2 / np.abs(1.0 - speed**2 + 2j * zeta * speed)
        assert float(steady_unbalance_peak(zeta)) == pytest.approx(curve.max(), rel=1e-6)


def test_sweep_number_is_q_over_the_turns_between_half_power_points():
    zeta, w, rate = 0.03, 20.0, np.array([0.1, 1.0, 10.0])
    eta = 0.5 / zeta / half_power_turns(w, zeta, rate)
    assert swept_share(w, zeta, rate) == pytest.approx(1.0 - np.exp(-2.86 * eta**-0.445))


def test_no_rate_at_all_is_steady_and_peaks_come_late():
    assert float(unbalance_passage_peak(20.0, 0.05, 0.0)) == 10.0
    late = undamped_peak_speed_rad_s(20.0, np.array([4.0, 0.0, -4.0]))
    assert late == pytest.approx([24.314, 20.0, 15.686])
