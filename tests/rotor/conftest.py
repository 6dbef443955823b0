"""Invented rotors to try the equations on."""

from dataclasses import replace
from typing import Any

import numpy as np
import pytest

from planner.model.rotor import (
    ArticulatedHub,
    Blade,
    HingelessHub,
    PolarSection,
    Rotor,
    SectionSpan,
    Stations,
    Stop,
    SymmetricSection,
    TeeteringHub,
)
from planner.rotor.setup import rotor_arrays

HUBS: dict[str, Any] = {
    "articulated": ArticulatedHub(0.3, 0.35, 0.0, 0.0, 0.0, 0.0, 100.0, 0.0, 0.0),
    "teetering": TeeteringHub(np.radians(2.5), 0.0, 0.0, 0.0),
    "hingeless": HingelessHub(0.4, np.radians(1.0), 0.0, None, None, 0.0, 1e4),
}
N_BLADES = {"articulated": 4, "teetering": 2, "hingeless": 5}


def build_blade(section: Any, mass_kg_m: float, twist_rad: float) -> Blade:
    radius = np.linspace(0.2, 6.0, 30)
    flat = np.ones(30)
    stations = Stations(
        radius_m=radius,
        chord_m=0.3 * flat,
        twist_rad=twist_rad * radius / 6.0,
        mass_kg_m=mass_kg_m * flat,
        flap_stiffness_N_m2=2e4 * (1.0 + 5.0 * np.exp(-2.0 * radius)),
        lag_stiffness_N_m2=4e5 * flat,
        torsion_stiffness_N_m2=2e4 * flat,
        pitch_inertia_kg_m=0.05 * flat,
        cg_offset_m=0.0 * flat,
        ac_offset_m=0.0 * flat,
    )
    span = SectionSpan(section, 0.9, 6.0)
    return Blade(6.0, 0.9, 4.5, stations, (), (span,), ("1", "2"))


@pytest.fixture
def symmetric_section():
    return SymmetricSection("invented", 5.73, 0.0087, 0.4, np.radians(15.0))


@pytest.fixture
def smooth_section():
    """Lift and drag without stall, smooth over the full circle, no Mach number."""
    angle = np.radians(np.linspace(-180.0, 180.0, 721))
    lift = 5.7 * np.sin(angle) * np.cos(angle)
    drag = 0.01 + 1.2 * np.sin(angle) ** 2
    block = ((angle,), (lift,), (drag,), (0.0 * angle,))
    return PolarSection("smooth", np.array([0.0]), *block)


@pytest.fixture
def linear_section():
    """Straight lift curve almost without drag over the full circle."""
    angle = np.radians(np.linspace(-180.0, 180.0, 721))
    block = ((angle,), (5.7 * angle,), (0.0 * angle + 1e-9,), (0.0 * angle,))
    return PolarSection("linear", np.array([0.0]), *block)


@pytest.fixture
def make_rotor(symmetric_section):
    """Build a model rotor: kind of hub, changes to the hub, to the rotor, and the blade's own."""

    def build(kind="articulated", section=None, hub=None, mass_kg_m=8.0, **changes):
        stops: dict[str, Any] = {"droop_stop": None, "up_stop": None}
        if kind != "hingeless":
            stops["droop_stop"] = Stop(np.radians(-3.0), 1e6, 0.0, 1e4)
            stops["up_stop"] = Stop(np.radians(20.0), 1e6, 0.0, 1e4)
        twist = changes.pop("twist_rad", np.radians(-8.0))
        rotor = Rotor(
            name="invented",
            n_blades=N_BLADES[kind],
            clockwise=False,
            blade=build_blade(section or symmetric_section, mass_kg_m, twist),
            hub=replace(HUBS[kind], **(hub or {})),
            control_stiffness_N_m_rad=1e4,
            cyclic_authority_rad=np.radians(8.0),
            design_maximum_rad_s=36.0,
            proven_rad_s=38.0,
            root_force_rating_N=1e6,
            **stops,
        )
        return replace(rotor, **changes)

    return build


@pytest.fixture
def make_arrays(make_rotor):
    """Build the arrays of an invented rotor."""

    def build(*args, **kwargs):
        return rotor_arrays(make_rotor(*args, **kwargs))

    return build
