import numpy as np
import pytest

from planner.methods.clearance import (
    azimuth_of_bearing_rad,
    clearance_m,
    ground_gap_m,
    obstruction_gaps_m,
)

LEVEL = np.zeros((1, 1, 2))
SPAN = [1.0, 6.0]


@pytest.mark.parametrize(
    ("distance", "height", "gap"),
    [
        (3.0, 2.5, 1.5),  # under the blade
        (3.0, 4.5, -0.5),  # through the blade
        (6.0, 4.25, -0.25),  # at the very tip
        (8.0, 4.0, 2.0),  # level with the tip
        (8.0, 9.0, 2.0),  # taller than the tip path
        (8.0, 1.0, np.sqrt(13.0)),  # low: slant from the tip to the top
        (0.5, 3.0, np.sqrt(1.25)),  # the stand's top, inboard of the blade
    ],
)
def test_level_blade_by_hand(distance, height, gap):
    found = obstruction_gaps_m(LEVEL, SPAN, 4.0, [distance], [height])
    assert found == pytest.approx(np.array([[gap]]))
    assert float(clearance_m(LEVEL, SPAN, 4.0, [distance], [height])[0]) == min(4.0, found[0, 0])


def test_sloping_blade_keeps_its_length_or_reaches_to_its_radius():
    tip = 6.0 * np.sin(np.radians(30.0))
    blades = np.array([[[0.0, tip]], [[0.0, -tip]]])
    found = obstruction_gaps_m(blades, [0.0, 6.0], 4.0, [2.0], [1.0])[:, 0]
    up = 4.0 * np.cos(np.arctan(0.5))  # to the longer reach, at half a metre a metre
    down = (3.0 - 2.0 * np.tan(np.radians(30.0))) * np.cos(np.radians(30.0))
    assert found == pytest.approx([up, down])
    far = obstruction_gaps_m(blades, [0.0, 6.0], 4.0, [7.0], [20.0])[:, 0]
    assert far == pytest.approx([1.0, 1.0])


def test_dip_counts_only_where_the_post_may_be():
    low = np.zeros((2, 8, 2))
    low[1, 0, 1] = -1.0  # the tip dips in the first eighth of a turn
    low[1, 1:, 1] = -0.2

    def gaps(azimuth):
        where = None if azimuth is None else np.radians(azimuth)
        return obstruction_gaps_m(low, SPAN, [4.0, 4.0], [6.0], [2.0], where)[:, 0]

    under, open_side = gaps([20.0]), gaps([200.0])
    assert under[0] == pytest.approx(2.0)
    assert under[1] == pytest.approx(1.0)
    assert open_side == pytest.approx([2.0, 1.8])
    for found in (gaps(None), gaps([[-10.0, 5.0]]), gaps([[350.0, 10.0]]), gaps([[90.0, 450.0]])):
        assert found == pytest.approx(under)
    assert gaps([[60.0, 300.0]])[1] == pytest.approx(1.8)
    beside = gaps([47.0])[1]  # 2 degrees past the dip: its tip is 6 * 2 sin(1 degree) away
    assert beside == pytest.approx(np.hypot(1.0, 12.0 * np.sin(np.radians(1.0))), rel=1e-3)


def test_distance_is_that_to_the_nearest_of_many_points():
    random = np.random.default_rng(4)
    radius = np.array([0.5, 2.0, 4.0, 6.0])
    low = np.cumsum(random.uniform(-0.5, 0.5, (6, 3, 4)), axis=2)
    away, top, azimuth = np.array([2.5, 5.0, 7.0]), np.array([2.0, 3.2, 4.0]), [0.3, 2.0, 5.0]
    found = obstruction_gaps_m(low, radius, 4.5, away, top, azimuth)
    fine = np.linspace(0.5, 6.0, 1101)
    level = np.sqrt(np.diff(radius) ** 2 - np.diff(low, axis=2) ** 2).cumsum(axis=2)
    turned = np.linspace(0.0, 2.0 * np.pi, 721)[:, None]
    for lane in range(6):
        for j in range(3):
            nearest = np.inf
            for sector in range(3):
                high = np.interp(fine, radius, 4.5 + low[lane, sector])
                across = np.interp(fine, radius, 0.5 + np.concatenate([[0], level[lane, sector]]))
                over = np.maximum(high - top[j], 0.0)
                seen = turned[240 * sector : 240 * sector + 241] - azimuth[j]
                for reach in (fine, across):
                    flat = reach**2 + away[j] ** 2 - 2.0 * reach * away[j] * np.cos(seen)
                    nearest = min(nearest, float(np.sqrt(flat + over**2).min()))
            assert max(found[lane, j], 0.0) == pytest.approx(nearest, abs=0.015)


def test_ground_counts_without_any_obstruction():
    low = np.array([[[0.0, -0.7], [0.0, -0.9]], [[0.0, -4.5], [0.0, 0.0]]])
    assert ground_gap_m(low, 4.0) == pytest.approx([3.1, -0.5])
    assert clearance_m(low, SPAN, [4.0, 5.0], [], []) == pytest.approx([3.1, 0.5])


def test_azimuth_of_a_bearing_for_both_senses():
    downwind = azimuth_of_bearing_rad(np.radians(250.0), np.radians(70.0), clockwise=True)
    assert float(downwind) == pytest.approx(0.0, abs=1e-12)
    turned = np.radians([280.0, 220.0])
    found = [azimuth_of_bearing_rad(turned, np.radians(70.0), clockwise=c) for c in (True, False)]
    assert np.degrees(found) == pytest.approx(np.array([[30.0, 330.0], [330.0, 30.0]]))


@pytest.mark.parametrize(
    ("low", "radius", "azimuth", "message"),
    [
        (np.full((1, 1, 2), np.inf), SPAN, None, r"lowest blade height: expected .* found inf"),
        (np.zeros((1, 2)), SPAN, None, r"lowest blade height: expected \(lanes, azimuths, 2"),
        (np.zeros((1, 0, 2)), SPAN, None, r"lowest blade height: expected \(lanes, azimuths, 2"),
        (LEVEL, [6.0, 1.0], None, r"blade radius: expected 2 stations or more, rising"),
        (LEVEL, SPAN, [0.1, 0.2], r"obstruction azimuth: expected one angle or one range"),
        (LEVEL, SPAN, [np.nan], r"obstruction azimuth: expected one angle .* found \[nan\]"),
    ],
)
def test_what_does_not_fit_is_refused(low, radius, azimuth, message):
    with pytest.raises(ValueError, match=message):
        clearance_m(low, radius, 4.0, [5.0], [1.0], azimuth)
