import numpy as np
import pytest

from planner.methods.stall import (
    Continuation,
    DataEnd,
    coefficients_beyond,
    viterna_continuation,
)

STALL = np.radians(14.0)


def end_of_data() -> DataEnd:
    angle = np.linspace(-STALL, STALL, 21)
    return DataEnd(STALL, 1.3, 0.03, -0.05, angle, 0.009 + 0.021 * (angle / STALL) ** 2)


def test_continuation_meets_the_stall_point_and_the_flat_plate():
    lift, drag = viterna_continuation(np.array([STALL, 0.5 * np.pi]), STALL, 1.3, 0.03, 12.0)
    assert lift == pytest.approx([1.3, 0.0], abs=1e-12)
    assert drag == pytest.approx([0.03, 1.11 + 0.018 * 12.0], abs=1e-12)


def test_every_joint_to_the_rear_is_free_of_jumps():
    angle = np.linspace(STALL, np.pi, 200001)
    for column, steepest in zip(
        coefficients_beyond(angle, end_of_data(), Continuation(12.0, 0.005)),
        (8.0, 4.0, 6.0),
        strict=True,
    ):
        assert np.abs(np.diff(column)).max() < steepest * (angle[1] - angle[0])


def test_start_equals_end_of_data_and_trailing_edge_forward_lifts_nothing():
    lift, drag, moment = coefficients_beyond(
        np.array([STALL, np.pi]), end_of_data(), Continuation(12.0, 0.005)
    )
    assert lift == pytest.approx([1.3, 0.0], abs=1e-12)
    assert drag == pytest.approx([0.03, 0.009])
    assert moment == pytest.approx([-0.05, 0.0], abs=1e-12)


def test_rear_quadrant_mirrors_lift_with_a_share_and_keeps_drag():
    front, rear = np.radians(50.0), np.radians(130.0)
    lift, drag, _ = coefficients_beyond(
        np.array([front, rear]), end_of_data(), Continuation(12.0, 0.005)
    )
    assert lift[1] == pytest.approx(-0.7 * lift[0])
    assert drag[1] == pytest.approx(drag[0])


def test_broadside_force_acts_at_mid_chord():
    _, drag, moment = coefficients_beyond(
        np.array([0.5 * np.pi]), end_of_data(), Continuation(12.0, 0.005)
    )
    assert moment == pytest.approx(-0.25 * drag)


def test_drag_is_kept_above_the_floor_where_the_form_dips():
    angle = np.linspace(np.radians(40.0), np.radians(60.0), 50)
    _, bare = viterna_continuation(angle, np.radians(40.0), 1.0, 0.02, 12.0)
    low = DataEnd(np.radians(40.0), 1.0, 0.02, 0.0, angle[:2], np.array([0.02, 0.02]))
    _, steep = viterna_continuation(np.radians(25.0), np.radians(40.0), 1.0, 0.02, 12.0)
    assert steep < 0.0
    _, drag, _ = coefficients_beyond(angle, low, Continuation(12.0, 0.1))
    assert drag == pytest.approx(np.maximum(bare, 0.1))
    assert drag.min() == 0.1


@pytest.mark.parametrize(
    ("angle", "aspect_ratio", "message"),
    [
        (0.0, 12.0, r"end of section data: expected above 0 to 60 deg, found 0 deg"),
        (np.radians(61.0), 12.0, r"end of section data: .* found 61 deg"),
        (STALL, 50.0, r"aspect ratio: expected above 0 and below 50, found 50; check radius"),
        (STALL, 0.0, r"aspect ratio: .* found 0"),
    ],
)
def test_continuation_outside_its_range_is_refused(angle, aspect_ratio, message):
    with pytest.raises(ValueError, match=message):
        viterna_continuation(1.0, angle, 1.0, 0.02, aspect_ratio)


def test_missing_drag_floor_is_refused():
    with pytest.raises(ValueError, match=r"drag floor: expected above 0, found 0; give"):
        coefficients_beyond(np.array([1.0]), end_of_data(), Continuation(12.0, 0.0))
