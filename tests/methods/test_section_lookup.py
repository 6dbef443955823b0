import numpy as np
import pytest

from planner.methods.section_lookup import (
    blend_weights,
    coefficients,
    station_coefficients,
    station_lift_drag,
    station_tables,
    within_validity,
)
from planner.methods.sections import (
    ANGLE_GRID_RAD,
    PolarData,
    SectionTable,
    SymmetricLaw,
    polar_section,
    symmetric_section,
)
from planner.methods.stall import Continuation

LAW = SymmetricLaw(5.73, 0.0087, 0.4, np.radians(15.0), np.radians(16.0), 0.725)
CONTINUATION = Continuation(15.0, 0.005)
RNG = np.random.default_rng(3)


def polar_table() -> SectionTable:
    angle = np.radians(np.linspace(-9.0, 15.0, 13))
    blocks = [(0.25 + slope * angle, 0.009 + 0.4 * angle**2) for slope in (5.5, 6.0, 7.0)]
    polars = PolarData(
        np.array([0.1, 0.35, 0.7]),
        (angle, angle, 0.5 * angle),
        tuple(lift for lift, _ in blocks),
        tuple(drag for _, drag in blocks),
        None,
    )
    return polar_section(polars, CONTINUATION, (0.0, 0.7))


def by_hand(table: SectionTable, column: np.ndarray, alpha: float, mach: float) -> float:
    rows = [np.interp(alpha, ANGLE_GRID_RAD, row) for row in column]
    return float(np.interp(mach, table.mach, rows))


@pytest.mark.parametrize("table", [symmetric_section(LAW, CONTINUATION), polar_table()])
def test_lookup_is_linear_in_angle_and_mach(table):
    alpha, mach = RNG.uniform(-np.pi, np.pi, 300), RNG.uniform(0.0, 0.9, 300)
    found = coefficients(table, alpha, mach)
    for values, column in zip(found, (table.lift, table.drag, table.moment), strict=True):
        expected = [by_hand(table, column, a, m) for a, m in zip(alpha, mach, strict=True)]
        assert values == pytest.approx(expected, abs=1e-12)


def test_lookup_repeats_with_each_turn():
    table = polar_table()
    alpha = RNG.uniform(-np.pi, np.pi, 200)
    plain = coefficients(table, alpha, 0.4)
    for turns in (-3, -1, 1, 12):
        turned = coefficients(table, alpha + 2.0 * np.pi * turns, 0.4)
        for one, other in zip(plain, turned, strict=True):
            assert other == pytest.approx(one, abs=1e-10)


@pytest.mark.parametrize("alpha", [-np.pi, np.pi, -np.pi - 1e-16, -1e-300 - np.pi, np.pi + 1e-15])
def test_lookup_at_the_seam_stays_in_the_table(alpha):
    lift, drag, _ = coefficients(symmetric_section(LAW, CONTINUATION), alpha, 0.0)
    assert float(lift) == pytest.approx(0.0, abs=1e-9)
    assert float(drag) == pytest.approx(0.0087)


def test_lookup_keeps_what_is_not_a_number():
    lift, drag, moment = coefficients(
        polar_table(), [np.nan, 0.1, 0.1, np.inf], [0.1, 0.1, np.nan, 0.1]
    )
    for column in (lift, drag, moment):
        assert np.isnan(column).tolist() == [True, False, True, True]


def test_lookup_of_one_point_does_not_depend_on_its_companions():
    sections = station_tables([symmetric_section(LAW, CONTINUATION)], np.ones((24, 1)))
    alpha, mach = RNG.uniform(-0.3, 0.3, (50, 24)), RNG.uniform(0.0, 0.6, (50, 24))
    alone = station_lift_drag(sections, alpha[:1], mach[:1])
    wild = alpha.copy()
    wild[1:] *= 40.0
    together = station_lift_drag(sections, wild, mach)
    assert np.array_equal(alone[0], together[0])


def test_complex_form_agrees_with_separate_columns():
    sections = station_tables([polar_table()], np.ones((4, 1)))
    alpha, mach = RNG.uniform(-np.pi, np.pi, (9, 4)), RNG.uniform(0.0, 0.7, (9, 4))
    lift, drag, _ = station_coefficients(sections, alpha, mach)
    both = station_lift_drag(sections, alpha, mach)
    assert np.array_equal(both.real, lift)
    assert np.array_equal(both.imag, drag)


def test_one_mach_number_serves_all():
    full = symmetric_section(LAW, CONTINUATION)
    single = SectionTable(
        full.mach[:1],
        full.lift[:1],
        full.drag[:1],
        full.moment[:1],
        full.valid_low_rad[:1],
        full.valid_high_rad[:1],
        (0.0, 0.3),
        moment_is_known=True,
    )
    alpha = RNG.uniform(-np.pi, np.pi, 50)
    for one, other in zip(
        coefficients(single, alpha, 0.6), coefficients(full, alpha, 0.0), strict=True
    ):
        assert one == pytest.approx(other, abs=1e-12)


def test_stations_blend_their_sections():
    first, second = symmetric_section(LAW, CONTINUATION), polar_table()
    weights = blend_weights([1.0, 3.0], [0.5, 1.5, 4.0])
    sections = station_tables([first, second], weights)
    alpha, mach = RNG.uniform(-np.pi, np.pi, (20, 3)), RNG.uniform(0.0, 0.7, (20, 3))
    found = station_coefficients(sections, alpha, mach)
    ones, twos = coefficients(first, alpha, mach), coefficients(second, alpha, mach)
    for values, one, two in zip(found, ones, twos, strict=True):
        assert values == pytest.approx(weights[:, 0] * one + weights[:, 1] * two, abs=1e-9)
    assert sections.moment_is_known[sections.row].tolist() == [True, False, False]


def test_equal_stations_share_one_table():
    sections = station_tables([polar_table()], np.ones((40, 1)))
    assert sections.lift_drag.shape[0] == 1


def test_validity_follows_angle_and_mach():
    sections = station_tables([symmetric_section(LAW, CONTINUATION)], np.ones((1, 1)))
    alpha = np.radians([[14.9], [15.1], [-14.9], [374.9], [5.0], [5.0], [5.0]])
    mach = np.array([[0.0], [0.0], [0.0], [0.0], [0.6], [0.7], [0.73]])
    assert within_validity(sections, alpha, mach)[:, 0].tolist() == [
        True, False, True, True, True, False, False,
    ]  # fmt: skip


def test_validity_of_a_blend_is_the_range_common_to_its_sections():
    tables = [symmetric_section(LAW, CONTINUATION), polar_table()]
    sections = station_tables(tables, np.array([[1.0, 0.0], [0.5, 0.5], [0.0, 1.0]]))
    alpha, mach = np.full((1, 3), np.radians(-10.0)), np.full((1, 3), 0.1)
    assert within_validity(sections, alpha, mach)[0].tolist() == [True, False, False]
    fast = within_validity(sections, np.zeros((1, 3)), np.full((1, 3), 0.71))
    assert fast[0].tolist() == [True, False, False]


def test_number_that_is_none_is_not_valid():
    sections = station_tables([polar_table()], np.ones((1, 1)))
    assert not within_validity(sections, np.array([[np.nan]]), np.array([[0.1]]))[0, 0]


@pytest.mark.parametrize(
    "weights", [np.ones((3, 2)), np.ones(3), np.array([[1.5, -0.5]]), np.array([[0.3, 0.3]])]
)
def test_wrong_weights_are_refused(weights):
    tables = [polar_table(), polar_table()]
    with pytest.raises(ValueError, match=r"section weights: expected \(station, 2\) shares of 0"):
        station_tables(tables, weights)


def test_unsorted_section_radii_are_refused():
    with pytest.raises(ValueError, match=r"section radii: expected increasing, found \[2.0, 1.0"):
        blend_weights([2.0, 1.0], [1.5])
