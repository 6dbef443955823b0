"""Lewis: Vibration during Acceleration through a Critical Speed, Transactions of the ASME 54
(APM-54-24), 1932.

From memory: without damping a force of constant size that sweeps evenly through a resonance gives
a peak of 3.67 f / sqrt(f') times the static deflection. To four digits by Fresnel integrals
(computed): 3.676, at w + 2.157 sqrt(rate).
"""

import numpy as np
import pytest

from planner.methods.hand_checks_passage import undamped_peak_speed_rad_s, undamped_sweep_peak
from planner.methods.passage import SpeedTable, passage_peak

pytestmark = pytest.mark.published


@pytest.mark.parametrize("sense", [1.0, -1.0])
def test_undamped_passage(sense):
    w, rate = 20.0, 0.0036
    half = 20.0 * np.sqrt(rate) * sense
    speed = np.linspace(w - half, w + half, 41)[None, :]
    found = passage_peak(SpeedTable(speed, 1.0 / np.sqrt(rate)), [w], 1e-7, "constant force")
    peak = found.amplitude[0, 0]
    assert peak == pytest.approx(3.67 * (w / np.sqrt(2.0 * np.pi * rate)), rel=1e-2)
    assert peak == pytest.approx(float(undamped_sweep_peak(w, rate)), rel=2e-3)
    late = found.speed_rad_s[0, 0] - w
    assert late == pytest.approx(float(undamped_peak_speed_rad_s(w, sense * rate)) - w, rel=1e-2)
