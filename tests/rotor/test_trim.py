from dataclasses import fields, replace
from typing import Any

import numpy as np
import pytest

from planner.rotor.case import Cases, gravity_vector_m_s2, make_cases
from planner.rotor.newton import Solution, solve
from planner.rotor.result import FlapState, TrimResult, TrimSettings
from planner.rotor.trim import free_flap, held_on_stop, trim

AIR = {"air_density_kg_m3": 1.2, "speed_of_sound_m_s": 340.0}
STOPS = {"droop_angle_rad": np.radians(-3.0), "up_angle_rad": np.radians(20.0)}
KINDS = ["articulated", "teetering", "hingeless"]


def numbers(result: TrimResult) -> dict[str, Any]:
    """Every array of a result by name."""
    found = {f.name: getattr(result, f.name) for f in fields(result) if f.name != "loads"}
    return found | {f.name: getattr(result.loads, f.name) for f in fields(result.loads)}


def sweep(kind: str, count: int, seed: int) -> Cases:
    """Cases over the whole envelope, some parked, some trimmed."""
    random = np.random.default_rng(seed)
    return make_cases(
        speed_rad_s=np.where(random.uniform(size=count) < 0.1, 0.0, 1.0)
        * 35.0
        * random.uniform(0.0, 1.1, count),
        collective_rad=np.radians(random.uniform(-5.0, 20.0, count)),
        wind_m_s=random.uniform(0.0, 25.0, count),
        trimmed=random.uniform(size=count) < 0.4,
        load_factor=random.uniform(0.8, 1.2, count),
        **AIR,
        **({} if kind == "hingeless" else STOPS),
    )


@pytest.mark.parametrize("kind", KINDS)
def test_no_case_of_the_envelope_raises_or_passes_without_a_number(kind, make_arrays):
    cases = sweep(kind, 400, 11)
    result = trim(make_arrays(kind), cases)
    found = numbers(result)
    converged = result.converged
    turning = cases.speed_rad_s >= 0.05 * 35.0
    assert converged[cases.speed_rad_s == 0.0].all()
    assert np.mean(converged[turning]) > 0.96
    assert np.all((result.state == FlapState.UNKNOWN) == ~converged)
    may_be_missing = {"lift_off_moment_N_m", "stop_moment_N_m", "blade_loading"}
    for name in set(found) - may_be_missing:
        assert np.all(np.isfinite(found[name][converged])), name
    known = np.isin(result.state, [FlapState.FREE, FlapState.RESTING])
    assert np.all(np.isfinite(result.stop_moment_N_m[known]))
    assert np.all(np.isfinite(result.blade_loading[converged & (cases.speed_rad_s > 0.0)]))
    assert np.all(np.isnan(result.loads.thrust_N[~converged]))


@pytest.mark.parametrize("kind", KINDS)
def test_numbers_of_a_case_do_not_depend_on_its_companions(kind, make_arrays):
    rotor, cases = make_arrays(kind), sweep(kind, 90, 3)
    together = numbers(trim(rotor, cases))
    order = np.random.default_rng(1).permutation(cases.count)
    permuted = numbers(trim(rotor, cases.take(order)))
    removed = np.flatnonzero(np.arange(cases.count) % 3 != 1)
    fewer = numbers(trim(rotor, cases.take(removed)))
    for name, values in together.items():
        assert values[order].tobytes() == permuted[name].tobytes(), name
        assert values[removed].tobytes() == fewer[name].tobytes(), name
    for index in range(0, cases.count, 15):
        alone = numbers(trim(rotor, cases.take(np.array([index]))))
        for name, values in together.items():
            assert values[index : index + 1].tobytes() == alone[name].tobytes(), name


def test_an_empty_batch_gives_empty_results(make_arrays):
    cases = sweep("articulated", 4, 1).take(np.zeros(0, dtype=np.int64))
    assert trim(make_arrays(), cases).converged.shape == (0,)


@pytest.mark.parametrize("kind", KINDS)
def test_still_air_leaves_no_first_harmonic(kind, make_arrays):
    cases = make_cases(speed_rad_s=33.0, collective_rad=0.1, **AIR)
    found = trim(make_arrays(kind), cases).loads
    assert found.flap_cosine_rad[0] == pytest.approx(0.0, abs=1e-12)
    assert found.flap_sine_rad[0] == pytest.approx(0.0, abs=1e-12)
    assert found.flap_highest_rad == pytest.approx(found.flap_lowest_rad)


@pytest.mark.parametrize("kind", KINDS)
def test_wind_from_the_other_side_mirrors_the_flap(kind, make_arrays):
    cases = make_cases(speed_rad_s=30.0, collective_rad=0.1, wind_m_s=[12.0, -12.0], **AIR)
    found = trim(make_arrays(kind), cases).loads
    assert found.flap_mean_rad[1] == pytest.approx(found.flap_mean_rad[0], abs=1e-9)
    assert found.flap_cosine_rad[1] == pytest.approx(-found.flap_cosine_rad[0], abs=1e-9)
    assert found.flap_sine_rad[1] == pytest.approx(-found.flap_sine_rad[0], abs=1e-9)
    assert found.thrust_N[1] == pytest.approx(found.thrust_N[0])


def test_reversing_thrust_mirrors_the_flap_without_gravity(make_arrays):
    cases = make_cases(
        speed_rad_s=30.0,
        collective_rad=[0.08, -0.08],
        wind_m_s=12.0,
        gravity_m_s2=np.zeros(3),
        **AIR,
    )
    found = trim(make_arrays(twist_rad=0.0), cases).loads
    assert found.thrust_N[1] == pytest.approx(-found.thrust_N[0])
    assert found.flap_lowest_rad[1] == pytest.approx(-found.flap_highest_rad[0], abs=1e-9)


def test_teetering_blades_flap_like_central_hinged_ones_about_their_mean(make_arrays):
    values = {"speed_rad_s": 33.0, "collective_rad": 0.1, "wind_m_s": 10.0, **AIR}
    cases = make_cases(**values)
    central = make_arrays("articulated", hub={"flap_hinge_m": 0.0}, n_blades=2)
    alone = trim(central, cases).loads
    precone = {"precone_rad": float(alone.flap_mean_rad[0])}
    pair = trim(make_arrays("teetering", hub=precone), cases).loads
    assert pair.flap_mean_rad == pytest.approx(alone.flap_mean_rad, abs=1e-9)
    assert pair.flap_cosine_rad == pytest.approx(alone.flap_cosine_rad, abs=np.radians(0.03))
    assert pair.flap_sine_rad == pytest.approx(alone.flap_sine_rad, abs=np.radians(0.03))


def test_yoke_of_a_teetering_rotor_carries_what_precone_does_not(make_arrays):
    rotor = make_arrays("teetering")
    cases = make_cases(speed_rad_s=33.0, collective_rad=[0.02, 0.2], **AIR)
    found = trim(rotor, cases).loads
    beta = np.radians(2.5)
    centrifugal = 33.0**2 * rotor.flap_inertia_kg_m2 * np.sin(beta) * np.cos(beta)
    weight = 9.80665 * rotor.first_moment_kg_m * np.cos(beta)
    lift_arm = (found.root_flap_moment_N_m[1] + centrifugal + weight) / (0.5 * found.thrust_N[1])
    assert 4.0 < lift_arm < 5.0


@pytest.mark.parametrize("kind", KINDS)
def test_trimmed_cyclic_leaves_no_first_harmonic(kind, make_arrays):
    values = {"speed_rad_s": 33.0, "collective_rad": 0.1, "wind_m_s": 10.0, **AIR}
    rotor = make_arrays(kind)
    trimmed = trim(rotor, make_cases(trimmed=True, **values))
    assert trimmed.converged.all()
    assert trimmed.cyclic_need_found.all()
    assert 0.0 < trimmed.cyclic_need[0] < 1.0
    assert trimmed.loads.flap_cosine_rad.tolist() == [0.0]
    assert trimmed.loads.flap_sine_rad.tolist() == [0.0]
    cyclic = {
        "cyclic_cosine_rad": trimmed.cyclic_cosine_rad,
        "cyclic_sine_rad": trimmed.cyclic_sine_rad,
    }
    fixed = trim(rotor, make_cases(**cyclic, **values))
    assert fixed.loads.flap_cosine_rad[0] == pytest.approx(0.0, abs=1e-7)
    assert fixed.loads.flap_sine_rad[0] == pytest.approx(0.0, abs=1e-7)
    assert fixed.cyclic_need == pytest.approx(trimmed.cyclic_need)


def test_trim_beyond_the_authority_is_cut_in_the_same_direction(make_arrays):
    rotor = make_arrays()
    weak = replace(rotor, cyclic_authority_rad=np.radians(1.0))
    cases = make_cases(speed_rad_s=33.0, collective_rad=0.12, wind_m_s=15.0, trimmed=True, **AIR)
    full, cut = trim(rotor, cases), trim(weak, cases)
    assert full.cyclic_need[0] < 1.0 < cut.cyclic_need[0]
    assert cut.cyclic_need == pytest.approx(8.0 * full.cyclic_need)
    size = np.hypot(cut.cyclic_cosine_rad, cut.cyclic_sine_rad)
    assert size == pytest.approx([np.radians(1.0)])
    ratio = full.cyclic_cosine_rad / full.cyclic_sine_rad
    assert cut.cyclic_cosine_rad / cut.cyclic_sine_rad == pytest.approx(ratio)
    assert abs(cut.loads.flap_cosine_rad[0]) > np.radians(0.5)


def test_no_authority_at_all_is_an_endless_need(make_arrays):
    rotor = replace(make_arrays(), cyclic_authority_rad=0.0)
    cases = make_cases(
        speed_rad_s=33.0, collective_rad=0.1, wind_m_s=10.0, trimmed=[True, False], **AIR
    )
    result = trim(rotor, cases)
    assert result.converged.all()
    assert result.cyclic_need.tolist() == [np.inf, 0.0]
    assert result.loads.flap_lowest_rad[0] == pytest.approx(result.loads.flap_lowest_rad[1])


def test_load_factor_raises_thrust_and_coning_with_the_inflow_of_the_theory(make_arrays):
    rotor = make_arrays()
    cases = make_cases(speed_rad_s=33.0, collective_rad=0.1, load_factor=[0.8, 1.0, 1.25], **AIR)
    found = trim(rotor, cases).loads
    assert found.thrust_N / found.thrust_N[1] == pytest.approx([0.8, 1.0, 1.25], rel=2e-3)
    assert np.all(np.diff(found.flap_mean_rad) > 0.0)
    assert found.induced_m_s == pytest.approx(np.full(3, found.induced_m_s[1]), rel=2e-3)


def test_inverted_rotor_flaps_higher(make_arrays):
    values = {"speed_rad_s": 20.0, "collective_rad": 0.05, **AIR}
    rotor = make_arrays()
    up = trim(rotor, make_cases(**values)).loads.flap_mean_rad[0]
    gravity = gravity_vector_m_s2("inverted")
    down = trim(rotor, make_cases(gravity_m_s2=gravity, **values)).loads.flap_mean_rad[0]
    stiffness = 400.0 * (rotor.flap_inertia_kg_m2 + 0.3 * rotor.first_moment_kg_m)
    apart = 2.0 * 9.80665 * rotor.first_moment_kg_m / stiffness
    assert down - up == pytest.approx(apart, rel=0.02)


def test_blade_at_rest_on_its_stop_presses_with_what_centrifugal_force_leaves(make_arrays):
    rotor = make_arrays()
    thin = {"air_density_kg_m3": 1e-6, "speed_of_sound_m_s": 340.0}
    cases = make_cases(speed_rad_s=[0.0, 3.0, 6.0], collective_rad=0.1, **thin, **STOPS)
    result = trim(rotor, cases)
    beta, spin = np.radians(3.0), np.array([0.0, 9.0, 36.0])
    lever = rotor.flap_inertia_kg_m2 * np.cos(beta) + 0.3 * rotor.first_moment_kg_m
    wanted = 9.80665 * rotor.first_moment_kg_m * np.cos(beta) - spin * lever * np.sin(beta)
    assert result.state.tolist() == [FlapState.RESTING] * 3
    assert result.stop_moment_N_m == pytest.approx(wanted, rel=1e-4)
    assert result.loads.root_flap_moment_N_m == pytest.approx(wanted, rel=1e-4)
    assert result.loads.flap_lowest_rad == pytest.approx(np.full(3, -beta))


def test_states_follow_one_another_with_speed(make_arrays):
    rotor = make_arrays()
    cases = make_cases(
        speed_rad_s=[3.0, 6.0, 35.0],
        collective_rad=0.05,
        wind_m_s=[2.0, 12.0, 12.0],
        **AIR,
        **STOPS,
    )
    result = trim(rotor, cases)
    assert result.state.tolist() == [FlapState.RESTING, FlapState.INTERMITTENT, FlapState.FREE]
    assert result.stop_moment_N_m[0] > 0.0 == result.stop_moment_N_m[2]
    assert np.isnan(result.stop_moment_N_m[1])
    assert result.loads.flap_lowest_rad[1] < np.radians(-3.0)


def test_low_up_stop_is_reported(make_arrays):
    stops: dict[str, Any] = {"droop_angle_rad": -0.1, "up_angle_rad": [0.02, 0.06]}
    cases = make_cases(speed_rad_s=30.0, collective_rad=0.2, wind_m_s=[0.0, 10.0], **AIR, **stops)
    result = trim(make_arrays(), cases)
    assert result.state.tolist() == [FlapState.RESTING_UP, FlapState.UP_STOP]
    assert result.loads.flap_highest_rad[0] == pytest.approx(0.02)
    assert result.loads.flap_highest_rad[1] > 0.06
    assert result.stop_moment_N_m[0] > 0.0
    assert np.isnan(result.stop_moment_N_m[1])


def test_negative_pitch_can_hold_blades_on_the_stop_above_the_weight_limit(make_arrays):
    rotor = make_arrays()
    cases = make_cases(speed_rad_s=9.0, collective_rad=np.radians(-9.0), **AIR, **STOPS)
    light = replace(cases, collective_rad=np.zeros(1))
    assert trim(rotor, light).state.tolist() == [FlapState.FREE]
    assert trim(rotor, cases).state.tolist() == [FlapState.RESTING]
    loads, solved = held_on_stop(rotor, cases)
    assert solved.all()
    assert loads.lift_off_moment_N_m[0] < 0.0


def test_trimmed_rotor_has_no_cyclic_while_blades_rest(make_arrays):
    cases = make_cases(
        speed_rad_s=[0.0, 3.0], collective_rad=0.05, wind_m_s=2.0, trimmed=True, **AIR, **STOPS
    )
    result = trim(make_arrays(), cases)
    assert result.state.tolist() == [FlapState.RESTING] * 2
    assert result.cyclic_need.tolist() == [0.0, 0.0]
    assert result.cyclic_sine_rad.tolist() == [0.0, 0.0]


def test_what_has_no_solution_is_said(make_arrays):
    cases = make_cases(speed_rad_s=[0.0, 0.5, 30.0], collective_rad=0.05, wind_m_s=20.0, **AIR)
    result = trim(make_arrays(), cases)
    assert result.converged.tolist() == [False, False, True]
    assert result.state.tolist() == [FlapState.UNKNOWN, FlapState.UNKNOWN, FlapState.FREE]
    assert np.isnan(result.loads.flap_lowest_rad[:2]).all()


def test_stalled_blades_are_outside_section_data(make_arrays):
    cases = make_cases(speed_rad_s=30.0, collective_rad=np.radians([6.0, 24.0]), **AIR)
    assert trim(make_arrays(), cases).outside_sections.tolist() == [False, True]


def test_gradients_differ_where_the_wake_is_skewed(make_arrays):
    cases = make_cases(speed_rad_s=33.0, collective_rad=0.1, wind_m_s=10.0, **AIR)
    sine = [
        free_flap(make_arrays(), cases, TrimSettings(gradient=gradient))[0].flap_sine_rad[0]
        for gradient in ("none", "coleman", "pitt-peters")
    ]
    assert sine[0] > sine[1] > sine[2]


def test_root_force_is_that_of_the_straight_blade(make_arrays):
    cases = make_cases(speed_rad_s=30.0, collective_rad=0.1, **AIR)
    wanted = 900.0 * 8.0 * (36.0 - 0.09) / 2.0
    assert trim(make_arrays(), cases).root_centrifugal_force_N == pytest.approx([wanted])


def test_cases_keep_their_order_through_all_states(make_arrays):
    cases = sweep("articulated", 60, 8)
    assert isinstance(cases, Cases)
    result = trim(make_arrays(), cases)
    spin = cases.speed_rad_s
    assert np.all(
        result.root_centrifugal_force_N == spin**2 * make_arrays().centrifugal_factor_kg_m
    )
    parked = spin == 0.0
    assert np.all(result.loads.induced_m_s[parked] == 0.0)


@pytest.mark.parametrize(("n_azimuths", "n_harmonics"), [(23, 5), (10, 5), (24, 0)])
def test_a_grid_too_coarse_for_its_harmonics_is_refused(n_azimuths, n_harmonics):
    with pytest.raises(ValueError, match=r"trim settings: expected an even number of azimuths"):
        TrimSettings(n_azimuths, n_harmonics)


def test_trim_in_vain_is_said_and_flown_with_the_authority_against_the_flap(
    make_arrays, monkeypatch
):
    cases = make_cases(
        speed_rad_s=33.0, collective_rad=0.12, wind_m_s=15.0, trimmed=[True, False], **AIR
    )
    rotor = replace(make_arrays(), cyclic_authority_rad=np.radians(1.0))
    wanted = trim(rotor, cases)

    def in_vain(problem, held, flap):
        solution = solve(problem, held, flap)
        return Solution(solution.trial, solution.converged & ~held.trimmed)

    monkeypatch.setattr("planner.rotor.trim.solve", in_vain)
    result = trim(rotor, cases)
    assert result.converged.all()
    assert result.cyclic_need_found.tolist() == [False, True]
    first = np.hypot(wanted.loads.flap_cosine_rad[1], wanted.loads.flap_sine_rad[1])
    assert result.cyclic_need[0] == pytest.approx(first / np.radians(1.0))
    found = np.array([result.cyclic_cosine_rad[0], result.cyclic_sine_rad[0]])
    right = np.array([wanted.cyclic_cosine_rad[0], wanted.cyclic_sine_rad[0]])
    assert np.hypot(*found) == pytest.approx(np.radians(1.0))
    assert found @ right > 0.9 * np.radians(1.0) ** 2


def test_slow_inverted_rotor_rests_on_the_up_stop(make_arrays):
    rotor = make_arrays()
    cases = make_cases(
        speed_rad_s=[1.0, 2.0, 30.0],
        collective_rad=0.0,
        gravity_m_s2=gravity_vector_m_s2("inverted"),
        air_density_kg_m3=1e-6,
        speed_of_sound_m_s=340.0,
        **STOPS,
    )
    result = trim(rotor, cases)
    assert result.state.tolist() == [FlapState.RESTING_UP] * 2 + [FlapState.FREE]
    beta, spin = np.radians(20.0), np.array([1.0, 4.0])
    lever = rotor.flap_inertia_kg_m2 * np.cos(beta) + 0.3 * rotor.first_moment_kg_m
    wanted = 9.80665 * rotor.first_moment_kg_m * np.cos(beta) - spin * lever * np.sin(beta)
    assert result.stop_moment_N_m[:2] == pytest.approx(wanted, rel=1e-4)
