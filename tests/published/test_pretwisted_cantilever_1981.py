"""Pretwisted cantilever at rest: bending in both directions coupled by twist.

K. B. Subrahmanyam, S. V. Kulkarni, J. S. Rao, Coupled bending-bending vibrations of pre-twisted
cantilever blading allowing for shear deflection and rotary inertia by the Reissner method, Int. J.
Mechanical Sciences 23, 1981, pp. 517-530. From memory, title and numbers; used by later authors
as a check. Steel strip 152.4 x 25.4 x 1.7272 mm, twisted by 45° from root to tip, E 206.85 GPa,
density 7857.6 kg/m³: 61.9, 304.7, 937.0 and 1205.1 Hz. Shear and rotary inertia, left out here,
lower the higher modes by a per cent or so; without twist the second mode would be at 388 Hz.
"""

import numpy as np
import pytest

from planner.methods.beam import BladeBeam, Root
from planner.methods.coupled_beam import BladeRoots, CoupledBlade, coupled_matrices
from planner.methods.coupled_modes import coupled_modes

pytestmark = pytest.mark.published

LENGTH, BREADTH, THICKNESS = 0.1524, 0.0254, 0.0017272
MODULUS, DENSITY = 206.85e9, 7857.6


def test_four_modes_of_the_twisted_strip() -> None:
    r, one = np.linspace(0.0, LENGTH, 11), np.ones(11)
    area = BREADTH * THICKNESS
    flap = MODULUS * BREADTH * THICKNESS**3 / 12
    lag = MODULUS * THICKNESS * BREADTH**3 / 12
    inertia = DENSITY * area * BREADTH**2 / 12
    beam = BladeBeam(r, DENSITY * area * one, flap * one, lag * one, 1e3 * one, inertia * one)
    twist = np.radians(45.0) * r / LENGTH
    blade = CoupledBlade(beam, twist, 0.0 * r, np.zeros(0))
    built_in = Root(0.0)
    matrices = coupled_matrices(blade, BladeRoots(built_in, built_in, built_in))
    found = coupled_modes(matrices, 0.0, 0.0, {"flap": 3, "lag": 1})
    hertz = found.frequency_rad_s[0] / (2.0 * np.pi)
    assert hertz[:2] == pytest.approx([61.9, 304.7], rel=0.005)
    assert hertz[2:] == pytest.approx([937.0, 1205.1], rel=0.02)
