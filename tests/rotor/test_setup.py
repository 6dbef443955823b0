from dataclasses import replace

import numpy as np
import pytest

from planner.methods.beam import BladeBeam, Root, flap_matrices
from planner.methods.beam_modes import frequencies
from planner.methods.section_lookup import station_coefficients
from planner.model.rotor import PolarSection, SectionSpan, SymmetricSection
from planner.rotor.setup import hub_freedom, rotor_arrays


def test_pitch_at_the_collective_radius_is_the_collective(make_rotor):
    rotor = rotor_arrays(make_rotor())
    at_reference = np.interp(4.5, rotor.station_radius_m, rotor.twist_rad)
    assert at_reference == pytest.approx(0.0, abs=1e-12)
    assert rotor.twist_rad[0] > 0.0 > rotor.twist_rad[-1]


def test_stations_integrate_the_lifting_blade(make_rotor):
    rotor = rotor_arrays(make_rotor())
    assert np.sum(rotor.station_width_m) == pytest.approx(5.1)
    square = np.sum(rotor.station_width_m * rotor.station_radius_m**2)
    assert square == pytest.approx((6.0**3 - 0.9**3) / 3.0)
    assert rotor.blade_area_m2 == pytest.approx(4 * 0.3 * 6.0)


def test_mass_properties_of_a_uniform_blade(make_rotor):
    rotor = rotor_arrays(make_rotor())
    length = 6.0 - 0.3
    assert rotor.flap_inertia_kg_m2 == pytest.approx(8.0 * length**3 / 3.0)
    assert rotor.first_moment_kg_m == pytest.approx(8.0 * length**2 / 2.0)
    assert rotor.centrifugal_factor_kg_m == pytest.approx(8.0 * (36.0 - 0.09) / 2.0)


def test_articulated_hub_adds_precone_to_the_spring_neutral(make_rotor):
    hub = {"flap_spring_neutral_rad": 0.01, "precone_rad": 0.02, "flap_spring_N_m_rad": 50.0}
    found = hub_freedom(make_rotor(hub=hub))
    assert (found.hinge_m, found.spring_N_m_rad, found.pair) == (0.3, 50.0, 0.0)
    assert found.spring_neutral_rad == pytest.approx(0.03)


def test_teetering_blade_works_against_half_the_spring(make_rotor):
    hub = {"teeter_spring_N_m_rad": 400.0, "teeter_damper_N_m_s_rad": 60.0}
    found = hub_freedom(make_rotor("teetering", hub=hub))
    assert (found.spring_N_m_rad, found.damper_N_m_s_rad) == (200.0, 30.0)
    assert (found.hinge_m, found.pair) == (0.0, 1.0)
    assert found.fixed_flap_rad == pytest.approx(np.radians(2.5))


def test_equivalent_hinge_has_the_first_flap_frequency_of_the_hingeless_blade(make_rotor):
    model = make_rotor("hingeless")
    rotor = rotor_arrays(model)
    table = model.blade.stations
    beam = BladeBeam(
        table.radius_m,
        table.mass_kg_m,
        table.flap_stiffness_N_m2,
        table.lag_stiffness_N_m2,
        table.torsion_stiffness_N_m2,
        table.pitch_inertia_kg_m,
    )
    for speed in (0.0, 36.0):
        wanted = frequencies(flap_matrices(beam, Root(0.4)), speed, n_modes=1)[0]
        stiffness = (
            speed**2 * (rotor.flap_inertia_kg_m2 + rotor.hub.hinge_m * rotor.first_moment_kg_m)
            + rotor.hub.spring_N_m_rad
        )
        assert np.sqrt(stiffness / rotor.flap_inertia_kg_m2) == pytest.approx(wanted, rel=1e-6)


def test_stated_equivalent_hinge_is_taken(make_rotor):
    hub = {"equivalent_hinge_m": 0.5, "equivalent_spring_N_m_rad": 1234.0}
    found = hub_freedom(make_rotor("hingeless", hub=hub))
    assert (found.hinge_m, found.spring_N_m_rad) == (0.5, 1234.0)


def test_each_station_takes_the_section_of_its_span(make_rotor):
    model = make_rotor()
    thick = SymmetricSection("thick", 5.0, 0.01, 0.4, np.radians(12.0))
    thin = SymmetricSection("thin", 6.0, 0.01, 0.4, np.radians(12.0))
    spans = (SectionSpan(thick, 0.9, 3.0), SectionSpan(thin, 3.0, 6.0))
    rotor = rotor_arrays(replace(model, blade=replace(model.blade, sections=spans)))
    alpha = np.full(rotor.chord_m.size, 0.1)
    lift = station_coefficients(rotor.sections, alpha, 0.0 * alpha)[0]
    assert lift == pytest.approx(np.where(rotor.station_radius_m < 3.0, 0.5, 0.6))


def test_polar_tabled_at_low_mach_stands_for_low_mach_only(make_rotor, smooth_section):
    low = rotor_arrays(make_rotor(section=smooth_section))
    assert low.sections.valid_mach.tolist() == [[0.0, 0.3]]
    fast = PolarSection(
        "fast",
        np.array([0.4, 0.6]),
        smooth_section.angle_rad * 2,
        smooth_section.lift * 2,
        smooth_section.drag * 2,
        smooth_section.moment * 2,
    )
    assert rotor_arrays(make_rotor(section=fast)).sections.valid_mach.tolist() == [[0.4, 0.6]]


def test_stations_inboard_of_the_hinge_do_not_flap(make_rotor):
    hub = {"equivalent_hinge_m": 1.5, "equivalent_spring_N_m_rad": 1e4}
    rotor = rotor_arrays(make_rotor("hingeless", hub=hub))
    inboard = rotor.station_radius_m < 1.5
    assert np.any(inboard)
    assert np.all(rotor.arm_m[inboard] == 0.0)
    assert rotor.arm_m + rotor.still_m == pytest.approx(rotor.station_radius_m)
