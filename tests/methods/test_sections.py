from dataclasses import replace

import numpy as np
import pytest

from planner.methods.section_lookup import coefficients
from planner.methods.sections import (
    ANGLE_GRID_RAD,
    PolarData,
    SymmetricLaw,
    polar_section,
    symmetric_section,
)
from planner.methods.stall import Continuation

LAW = SymmetricLaw(
    lift_slope_per_rad=5.73,
    zero_lift_drag=0.0087,
    drag_rise_per_rad2=0.4,
    stall_angle_rad=np.radians(15.0),
    stall_fall_rad_per_mach=np.radians(16.0),
    divergence_mach=0.725,
)
CONTINUATION = Continuation(aspect_ratio=15.0, least_drag=0.005)


def cambered() -> PolarData:
    angle = np.radians([-10.0, -6.0, -2.0, 0.0, 4.0, 8.0, 12.0, 16.0])
    lift = np.array([-0.75, -0.40, 0.05, 0.25, 0.70, 1.10, 1.40, 1.30])
    drag = np.array([0.030, 0.014, 0.009, 0.008, 0.009, 0.012, 0.022, 0.060])
    moment = np.full(8, -0.05)
    return PolarData(np.array([0.3]), (angle,), (lift,), (drag,), (moment,))


def with_block(**columns: np.ndarray) -> PolarData:
    polars = cambered()
    return PolarData(
        polars.mach,
        (columns.get("angle_rad", polars.angle_rad[0]),),
        (columns.get("lift", polars.lift[0]),),
        (columns.get("drag", polars.drag[0]),),
        (columns.get("moment", np.full(8, -0.05)),),
    )


def test_symmetric_table_is_odd_in_lift_and_moment_and_even_in_drag():
    table = symmetric_section(LAW, CONTINUATION)
    assert table.drag == pytest.approx(table.drag[:, ::-1], abs=1e-14)
    for odd in (table.lift, table.moment):
        assert odd == pytest.approx(-odd[:, ::-1], abs=1e-12)


def test_symmetric_law_holds_up_to_stall():
    table = symmetric_section(LAW, CONTINUATION)
    alpha = np.radians([-14.0, -3.0, 0.0, 0.5, 6.0])
    lift, drag, moment = coefficients(table, alpha, 0.0)
    assert lift == pytest.approx(5.73 * alpha, abs=1e-12)
    assert drag == pytest.approx(0.0087 + 0.4 * alpha**2, abs=5e-5)
    assert moment == pytest.approx(0.0, abs=1e-12)


def test_lift_slope_follows_the_compressibility_correction_and_stops_at_divergence():
    table = symmetric_section(LAW, CONTINUATION)
    mach = np.array([0.0, 0.2, 0.4, 0.6, 0.725, 0.8, 0.95])
    lift, _, _ = coefficients(table, np.radians(2.0), mach)
    slope = 5.73 / np.sqrt(1.0 - np.minimum(mach, 0.725) ** 2)
    assert lift == pytest.approx(slope * np.radians(2.0), rel=5e-3)
    assert lift[-1] == lift[-2] == lift[-3]


def test_stall_comes_earlier_with_mach_number():
    table = symmetric_section(LAW, CONTINUATION)
    assert table.valid_high_rad[0] == pytest.approx(np.radians(15.0))
    assert table.valid_high_rad[-1] == pytest.approx(np.radians(3.4))
    assert np.array_equal(table.valid_low_rad, -table.valid_high_rad)
    assert table.valid_mach == (0.0, 0.725)


@pytest.mark.parametrize("mach", [0.0, 0.33, 0.725])
def test_no_jump_anywhere_on_the_circle(mach):
    alpha = np.linspace(-np.pi, np.pi, 100001)
    step = alpha[1] - alpha[0]
    for table in (symmetric_section(LAW, CONTINUATION), polar_section(
        cambered(), CONTINUATION, (0.0, 0.5)
    )):  # fmt: skip
        for column in coefficients(table, alpha, mach):
            assert np.abs(np.diff(column)).max() < 13.0 * step
            assert column[0] == pytest.approx(column[-1], abs=1e-9)


def test_drag_is_positive_everywhere():
    assert symmetric_section(LAW, CONTINUATION).drag.min() > 0.0
    assert polar_section(cambered(), CONTINUATION, (0.0, 0.5)).drag.min() > 0.0


def test_polar_points_are_reproduced():
    polars = cambered()
    table = polar_section(polars, CONTINUATION, (0.0, 0.5))
    lift, drag, moment = coefficients(table, polars.angle_rad[0], 0.3)
    assert lift == pytest.approx(polars.lift[0], abs=1e-9)
    assert drag == pytest.approx(polars.drag[0], abs=1e-9)
    assert moment == pytest.approx(-0.05, abs=1e-9)
    assert table.moment_is_known


def test_polar_upside_down_gives_the_table_upside_down():
    polars = cambered()
    (angle,), (lift,), (drag,), (moment,) = (
        polars.angle_rad,
        polars.lift,
        polars.drag,
        polars.moment or (np.zeros(8),),
    )
    flipped = PolarData(
        polars.mach, (-angle[::-1],), (-lift[::-1],), (drag[::-1],), (-moment[::-1],)
    )
    upright = polar_section(polars, CONTINUATION, (0.0, 0.5))
    inverted = polar_section(flipped, CONTINUATION, (0.0, 0.5))
    assert inverted.lift == pytest.approx(-upright.lift[:, ::-1], abs=1e-12)
    assert inverted.drag == pytest.approx(upright.drag[:, ::-1], abs=1e-12)
    assert inverted.moment == pytest.approx(-upright.moment[:, ::-1], abs=1e-12)


def test_polar_without_moment_says_so():
    table = polar_section(replace(cambered(), moment=None), CONTINUATION, (0.0, 0.5))
    assert not table.moment_is_known


def test_full_circle_polar_is_taken_as_it_is():
    angle = np.radians(np.linspace(-180.0, 180.0, 73))
    polars = PolarData(
        np.array([0.0]), (angle,), (1.1 * np.sin(2.0 * angle),), (0.02 + np.sin(angle) ** 2,), None
    )
    table = polar_section(polars, CONTINUATION, (0.0, 0.3))
    assert table.lift[0, ::10] == pytest.approx(1.1 * np.sin(2.0 * ANGLE_GRID_RAD[::10]))
    assert table.valid_high_rad[0] == pytest.approx(np.pi)


SHORT = np.array([-0.1, 0.1, 0.2, 0.3])
FAULTY = [
    (
        with_block(angle_rad=np.radians([-10.0, -6.0, -2.0, 0.0, 4.0, 4.0, 12.0, 16.0])),
        r"polar at Mach 0.3: expected increasing angles, found a repeat or a step back",
    ),
    (
        with_block(angle_rad=np.radians([1.0, 2.0, 3.0, 4.0, 5.0, 8.0, 12.0, 16.0])),
        r"expected angles on both sides of zero .* found 1 to 16 deg; cut or extend",
    ),
    (
        with_block(angle_rad=np.radians([-10.0, -6.0, -2.0, 0.0, 4.0, 8.0, 12.0, 95.0])),
        r"expected angles on both sides of zero .* found -10 to 95 deg",
    ),
    (
        with_block(lift=np.array([0.1, 0.2])),
        r"expected columns of equal length, found \[8, 2, 8, 8\]; complete the rows",
    ),
    (
        with_block(angle_rad=SHORT, lift=SHORT, drag=SHORT, moment=SHORT),
        r"expected at least 5 angles, found 4; add rows",
    ),
    (
        with_block(drag=np.array([0.03, 0.01, 0.01, -0.008, 0.01, 0.012, 0.022, 0.06])),
        r"expected drag above 0, found -0.008; correct the rows",
    ),
    (
        with_block(lift=np.array([-0.75, -0.40, np.nan, 0.25, 0.70, 1.10, 1.40, 1.30])),
        r"expected numbers throughout, found an empty or infinite value",
    ),
    (
        replace(cambered(), mach=np.array([0.3, 0.5])),
        r"one block of angle, lift, drag and moment for each of 2 Mach numbers .*found 1, 1, 1, 1",
    ),
    (
        replace(
            cambered(),
            mach=np.array([0.5, 0.3]),
            angle_rad=cambered().angle_rad * 2,
            lift=cambered().lift * 2,
            drag=cambered().drag * 2,
            moment=None,
        ),
        r"expected Mach numbers increasing from 0 or more, found \[0.5, 0.3\]; sort the blocks",
    ),
]  # fmt: skip


@pytest.mark.parametrize(("polars", "message"), FAULTY)
def test_faulty_polar_is_refused_with_the_mend(polars, message):
    with pytest.raises(ValueError, match=message):
        polar_section(polars, CONTINUATION, (0.0, 0.5))


def test_reversed_validity_range_is_refused():
    with pytest.raises(ValueError, match=r"expected a lowest and a highest valid Mach number"):
        polar_section(cambered(), CONTINUATION, (0.5, 0.1))


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"lift_slope_per_rad": 0.0}, r"lift slope: expected above 0 per rad, found 0"),
        ({"zero_lift_drag": 0.0}, r"zero-lift drag: expected above 0, found 0"),
        ({"drag_rise_per_rad2": -0.1}, r"drag rise: expected 0 or more, found -0.1"),
        ({"divergence_mach": 1.0}, r"divergence Mach number: .* found 1; correct the section"),
        ({"stall_fall_rad_per_mach": 0.4}, r"stall angle at the divergence .* found -0.028"),
        ({"stall_angle_rad": 15.0}, r"stall angle at the divergence"),
    ],
)
def test_impossible_symmetric_law_is_refused(change, message):
    with pytest.raises(ValueError, match=message):
        symmetric_section(replace(LAW, **change), CONTINUATION)
