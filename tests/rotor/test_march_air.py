"""The march's air load against the same equations as the periodic solution evaluates them."""

import numpy as np
import pytest

from planner.rotor.airload import BladeState, airload, blade_flow
from planner.rotor.case import make_cases
from planner.rotor.march_air import MarchAir, UnitFlow
from planner.rotor.march_sections import pseudo_tables
from tests.rotor.marching import model_of

COUNT = 40
RANDOM = np.random.default_rng(7)


def states():
    """Any flap, rate, direction and wind, slow and fast."""
    of = RANDOM.uniform
    return {
        "azimuth": of(0.0, 6.28, COUNT),
        "flap": of(-0.1, 0.3, COUNT),
        "rate": of(-2.0, 2.0, COUNT),
        "wind": of(0.0, 20.0, COUNT),
        "speed": of(0.0, 36.0, COUNT),
        "pitch": of(-0.2, 0.4, COUNT),
        "induced": of(-2.0, 10.0, (COUNT, 8)),
    }


def march_forces(model, s, factor):
    """Normal force and force in the plane per length over density, (count, stations)."""
    n = model.unit.n_freedoms
    x = np.zeros((COUNT, 1, 2 * n))
    x[:, 0, 0], x[:, 0, n] = s["flap"], s["rate"]
    dtype = model.settings.dtype
    column = {k: v[:, None] for k, v in s.items() if v.ndim == 1}
    flow = UnitFlow(
        x=x.astype(dtype),
        speed_rad_s=s["speed"].astype(dtype),
        along_m_s=(column["wind"] * np.cos(column["azimuth"])).astype(dtype),
        across_m_s=(column["wind"] * np.sin(column["azimuth"])).astype(dtype),
        up_m_s=np.zeros(COUNT, dtype),
        sine=np.sin(column["flap"]).astype(dtype),
        cosine=np.cos(column["flap"]).astype(dtype),
        pitch_rad=column["pitch"].astype(dtype),
        induced_m_s=s["induced"].astype(dtype),
        tilt=np.zeros((COUNT, 1), dtype),
    )
    air = MarchAir(model.arrays, model.unit, model.sections, (COUNT, 1))
    ring, force = air.loads(flow, np.full(COUNT, 340.0, dtype), factor)
    return ring, force[:, 0].real, force[:, 0].imag


def test_forces_of_any_state_are_those_of_the_periodic_solution(make_rotor):
    model, s = model_of(make_rotor()), states()
    ring, normal, plane = march_forces(model, s, np.full(COUNT, 0.9))
    for i in range(COUNT):
        case = make_cases(
            speed_rad_s=s["speed"][i],
            collective_rad=s["pitch"][i],
            wind_m_s=s["wind"][i],
            load_factor=0.9,
            air_density_kg_m3=1.0,
            speed_of_sound_m_s=340.0,
        )
        one = {k: v[i : i + 1] for k, v in s.items()}
        state = BladeState(
            one["azimuth"],
            one["flap"][:, None],
            one["rate"][:, None],
            one["pitch"][:, None],
            one["induced"][:, None, :],
        )
        wanted = airload(model.arrays, case, blade_flow(model.arrays, case, state))
        size = 0.002 * np.abs(wanted.normal_N_m).max() + 0.3
        assert normal[i] == pytest.approx(wanted.normal_N_m[0, 0], abs=size)
        assert plane[i] == pytest.approx(wanted.drag_N_m[0, 0], abs=size)
    lift = np.cos(s["flap"])[:, None] * normal
    unfactored = march_forces(model, s, None)
    assert unfactored[0] == pytest.approx(np.cos(s["flap"])[:, None] * unfactored[1])
    assert ring == pytest.approx(unfactored[0])
    assert np.abs(lift - ring).max() > 1.0


def test_section_tables_keep_the_corners_of_the_given_ones(make_rotor):
    """At 0, 45, 90 and 180 degrees the direction lies on a cell's begin."""
    arrays = model_of(make_rotor()).arrays
    tables = pseudo_tables(arrays.sections)
    cells = tables.flat.size // tables.mach_planes - 1
    lowest_mach = tables.flat[: cells + 1]
    assert lowest_mach[cells // 2].real == pytest.approx(0.0, abs=1e-9)
    assert lowest_mach[0] == pytest.approx(lowest_mach[cells], abs=1e-9)
    near = 5  # cells, of a sixth of a degree
    slope = (lowest_mach[cells // 2 - near] - lowest_mach[cells // 2 + near]).real
    assert slope == pytest.approx(5.73 * 2.0 * near * 4.0 / cells, rel=0.05)
    assert pseudo_tables(arrays.sections, np.float32).flat.dtype == np.complex64
