"""A blade that falls on its droop stop, not turning and without air.

Rigid blade: energy and uniform angular acceleration (analytic). Uniform elastic blade, hinge at
0.2 m, tip at 5 m, 6 kg/m, EI 2·10⁴ N m², stop of 2·10⁵ N m/rad: computed by an independent
solver with hinged modes and the shape at rest on the stop, weight taken normal to the hub plane,
energy kept to 6·10⁻¹¹ J.
"""

import dataclasses
import math

import numpy as np
import pytest

from planner.methods.beam import BladeBeam
from planner.model.rotor import Stop
from planner.rotor.setup import rotor_arrays
from tests.reference.blade_shapes import Rest, blade_shapes
from tests.reference.march_equations import Case, Equations
from tests.reference.march_reference import Marched, Solver, contacts, march
from tests.reference.reference_rotor import reference_rotor

pytestmark = pytest.mark.published

TOP, STOP = math.radians(5.0), math.radians(-2.0)
FLAT = np.ones(2)
BEAM = BladeBeam(np.array([0.2, 5.0]), 6.0 * FLAT, 2e4 * FLAT, 4e5 * FLAT, 2e4 * FLAT, FLAT)
INERTIA, FIRST_MOMENT = 6.0 * 4.8**3 / 3.0, 6.0 * 4.8**2 / 2.0
"""m l³/3 [kg m²] and m l²/2 [kg m]."""


def fallen(n_elastic: int, rest: Rest) -> Marched:
    """The blade let go straight at 5 degrees."""
    rotor = rotor_arrays(reference_rotor())
    rotor = dataclasses.replace(rotor, hub=dataclasses.replace(rotor.hub, hinge_m=0.2))
    blade = blade_shapes(BEAM, 0.2, rotor.station_radius_m, n_elastic, rest)
    case = Case(0.6, air_density_kg_m3=0.0)
    model = Equations(rotor, blade, (Stop(STOP, 2e5, 0.0, 1e4), None), case)
    start = np.zeros(model.n_shapes)
    start[0] = TOP
    return march(model, model.start(start), Solver("DOP853", 1e-7, 1e-9, 2e-3, dense=True))


def test_rigid_blade_falls_and_hits_as_in_closed_form():
    drop, weight = TOP - STOP, 9.80665 * FIRST_MOMENT
    falls_s = math.sqrt(2.0 * drop * INERTIA / weight)
    peak = weight + math.sqrt(weight**2 + 2e5 * 2.0 * drop * weight)
    found = fallen(0, "none")
    assert contacts(found)[0].start_s == pytest.approx(falls_s, rel=2e-3)
    assert contacts(found)[0].peak_moment_N_m == pytest.approx(peak, rel=2e-3)


def test_elastic_blade_falls_and_hits_as_computed():
    found = fallen(3, "orthogonal")
    assert contacts(found)[0].start_s == pytest.approx(0.27753, abs=1e-3)
    assert found.tip_m(small_angles=True).min() == pytest.approx(-0.9817, rel=5e-3)
    assert found.droop_moment_n_m().max() == pytest.approx(2605.0, rel=0.02)


def test_without_the_shape_at_rest_the_tip_does_not_come_down_far_enough():
    assert fallen(3, "none").tip_m(small_angles=True).min() == pytest.approx(-0.885, abs=5e-3)
