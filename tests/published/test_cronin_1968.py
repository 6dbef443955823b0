"""Cronin: Response Spectra for Sweeping Sinusoidal Excitations, Shock and Vibration Bulletin 38,
1968.

The fit 1 - exp(-2.86 eta^-0.445) from memory, eta = Q^2 f' / f^2. The peaks over the steady peak
and the lateness of the peak are computed: a force of constant size sweeps evenly through a lightly
damped mode. Held with damping 0.001; the table is the limit of no damping at the same eta.
"""

import numpy as np
import pytest

from planner.methods.hand_checks_passage import swept_share
from planner.methods.passage import SpeedTable, passage_peak

pytestmark = pytest.mark.published

# eta, peak over steady peak, fit, (speed at the peak - w) / sqrt(rate)
TABLE = np.array(
    [
        [1.0, 0.93781, 0.94273, 1.1418],
        [2.0, 0.87678, 0.87766, 1.3356],
        [5.0, 0.75683, 0.75276, 1.5558],
        [10.0, 0.64592, 0.64175, 1.6920],
        [20.0, 0.53042, 0.52955, 1.8036],
        [50.0, 0.38846, 0.39442, 1.9158],
        [100.0, 0.29748, 0.30819, 1.9788],
        [200.0, 0.22314, 0.23712, 2.0268],
        [500.0, 0.14902, 0.16475, 2.0724],
    ]
)
ZETA, W = 0.001, 20.0


@pytest.mark.parametrize(("eta", "share", "fit", "late"), TABLE)
def test_march_meets_the_table_and_hand_check_the_fit(eta, share, fit, late):
    rate = 2.0 * eta * (ZETA * W) ** 2 / np.pi
    half = max(60.0 * ZETA * W, 15.0 * np.sqrt(rate))
    speed = np.linspace(W - half, W + half, 51)[None, :]
    table = SpeedTable(speed, 2.0 * half / rate / 50)
    found = passage_peak(table, [W], ZETA, "constant force")
    assert found.amplitude[0, 0] * 2.0 * ZETA == pytest.approx(share, rel=4e-3)
    assert (found.speed_rad_s[0, 0] - W) / np.sqrt(rate) == pytest.approx(late, abs=5e-3)
    assert float(swept_share(W, ZETA, rate)) == pytest.approx(fit, abs=1e-5)


def test_slowest_rows_of_the_table_by_the_fit():
    rate = 2.0 * np.array([0.1, 0.2, 0.5]) * (ZETA * W) ** 2 / np.pi
    assert swept_share(W, ZETA, rate) == pytest.approx([0.99965, 0.99713, 0.97962], abs=1e-5)
    assert swept_share(W, ZETA, rate) == pytest.approx([0.99801, 0.99338, 0.97348], rel=7e-3)


@pytest.mark.parametrize(
    ("eta", "share", "late"),
    [(0.1, 0.99801, 0.4776), (0.2, 0.99338, 0.6606), (0.5, 0.97348, 0.9336)],
)
def test_march_meets_the_slowest_rows(eta, share, late):
    """With damping 0.01, ten half-power widths to either side: slow sweeps take long."""
    zeta = 10.0 * ZETA
    rate = 2.0 * eta * (zeta * W) ** 2 / np.pi
    speed = W + 10.0 * zeta * W * np.linspace(-1.0, 1.0, 51)[None, :]
    table = SpeedTable(speed, 20.0 * zeta * W / rate / 50)
    found = passage_peak(table, [W], zeta, "constant force")
    assert found.amplitude[0, 0] * 2.0 * zeta == pytest.approx(share, rel=2e-3)
    assert found.speed_rad_s[0, 0] == pytest.approx(W + late * np.sqrt(rate), rel=5e-4)


def test_fit_holds_the_computed_peaks_within_its_validity():
    eta, share = TABLE[:7, :2].T
    fit = swept_share(W, ZETA, 2.0 * eta * (ZETA * W) ** 2 / np.pi)
    assert eta[-1] == 100.0
    assert fit == pytest.approx(share, rel=0.04)
