import numpy as np
import pytest

from planner.methods.frequency_correction import Measured, correct

REST, BOOK = 20.0, (0.95, 1.05)
SPEED = np.array([0.0, 10.0, 20.0, 30.0, 40.0])


def model(speed, rest=REST, rise=1.3):
    return np.sqrt(rest**2 + rise * np.asarray(speed) ** 2)


def found_at(speed, frequency, accuracy=0.01, rest=REST) -> Measured:
    speed, frequency = np.asarray(speed, dtype=float), np.asarray(frequency, dtype=float)
    return Measured(
        speed,
        frequency,
        np.broadcast_to(accuracy, speed.shape),
        model(speed, rest),
        np.full(speed.shape, rest),
    )


@pytest.mark.parametrize("at", [[0.0], [0.0, 25.0], [0.0, 10.0, 40.0]])
def test_known_factor_is_recovered_and_the_residual_is_the_accuracy(at):
    truth = model(SPEED, REST * np.sqrt(1.2))
    measured = found_at(at, model(at, REST * np.sqrt(1.2)))
    found = correct(measured, SPEED, model(SPEED), REST, BOOK)
    assert found.structural_factor == pytest.approx(1.2, rel=1e-12)
    assert found.frequency_rad_s == pytest.approx(truth, rel=1e-12)
    assert found.correction == pytest.approx(np.sqrt(1.2) - 1.0)
    assert found.residual == pytest.approx(0.01, rel=1e-9)
    inside = np.max(at) >= SPEED
    assert found.low_rad_s[inside] == pytest.approx(0.99 * truth[inside])
    assert found.high_rad_s[inside] == pytest.approx(1.01 * truth[inside])


def test_measurements_that_disagree_leave_their_scatter():
    measured = found_at([0.0, 0.0], [0.97 * REST, 1.03 * REST], 0.005)
    found = correct(measured, SPEED, model(SPEED), REST, BOOK)
    middle = np.sqrt(0.5 * (0.97**2 + 1.03**2))
    assert found.frequency_rad_s[0] == pytest.approx(REST * middle)
    assert found.residual == pytest.approx(1.0 - 0.97 / middle + 0.005)


def test_sharper_measurement_weighs_more():
    measured = found_at([0.0, 0.0], [REST, 1.03 * REST], np.array([0.01, 0.001]))
    found = correct(measured, SPEED, model(SPEED), REST, BOOK)
    share = (1.03**2 - 1.0) * 1e6 / (1e6 + 1e4)
    assert found.structural_factor == pytest.approx(1.0 + share)


def test_what_speed_adds_beyond_the_measurements_keeps_the_rule_books_allowance():
    found = correct(found_at([0.0], [1.02 * REST]), SPEED, model(SPEED), REST, BOOK)
    structure, gained = (1.02 * REST) ** 2, 1.3 * SPEED**2
    low = np.sqrt(structure * 0.99**2 + gained * 0.95**2)
    high = np.sqrt(structure * 1.01**2 + gained * 1.05**2)
    assert found.low_rad_s == pytest.approx(low)
    assert found.high_rad_s == pytest.approx(high)
    assert np.all(np.diff(found.high_rad_s / found.low_rad_s) > 0.0)


def test_allowance_never_falls_below_the_residual():
    measured = found_at([0.0, 0.0], [0.9 * REST, 1.1 * REST])
    found = correct(measured, SPEED, model(SPEED), REST, (0.99, 1.01))
    assert found.residual > 0.1
    ends = np.array([found.low_rad_s, found.high_rad_s]) / found.frequency_rad_s - 1.0
    assert np.abs(ends) == pytest.approx(np.full((2, 5), found.residual))


def test_frequency_that_falls_beyond_the_measurements_widens_as_well():
    falling = model(SPEED, rise=-0.1)
    found = correct(found_at([0.0], [REST]), SPEED, falling, REST, BOOK)
    lost = 0.1 * SPEED**2
    assert found.low_rad_s == pytest.approx(np.sqrt((0.99 * REST) ** 2 - 1.05**2 * lost))
    assert found.high_rad_s == pytest.approx(np.sqrt((1.01 * REST) ** 2 - 0.95**2 * lost))


def test_below_the_lowest_measured_speed_the_rule_book_counts_as_well():
    found = correct(found_at([30.0], [0.98 * model(30.0)]), SPEED, model(SPEED), REST, BOOK)
    assert found.low_rad_s[3] == pytest.approx(found.frequency_rad_s[3] * 0.99)
    assert np.all(found.high_rad_s[:3] == 1.05 * model(SPEED[:3]))
    assert np.all(found.low_rad_s[:3] <= 0.99 * found.frequency_rad_s[:3])
    assert np.all(found.low_rad_s[:3] <= 0.95 * model(SPEED[:3]))


def test_frequency_that_does_not_change_is_known_at_any_speed():
    measured = Measured(*(np.array([v]) for v in (30.0, 1.02 * REST, 0.01, REST, REST)))
    found = correct(measured, [0.0, 40.0], REST, REST, BOOK)
    assert found.low_rad_s == pytest.approx(1.02 * REST * 0.99)
    assert found.high_rad_s == pytest.approx(1.02 * REST * 1.01)


def test_free_hinge_is_not_corrected_and_keeps_all_of_the_difference():
    measured = found_at([30.0], [1.03 * model(30.0, 0.0)], rest=0.0)
    found = correct(measured, SPEED, model(SPEED, 0.0), 0.0, BOOK)
    assert found.structural_factor == 1.0
    assert found.frequency_rad_s == pytest.approx(model(SPEED, 0.0))
    assert found.correction == 0.0
    assert found.residual == pytest.approx(0.04)
    assert found.low_rad_s[:4] == pytest.approx(0.96 * model(SPEED[:4], 0.0))


def test_weak_root_spring_is_not_bent_beyond_reason():
    measured = found_at([40.0], [1.05 * model(40.0, 4.0)], rest=4.0)
    found = correct(measured, SPEED, model(SPEED, 4.0), 4.0, BOOK)
    assert found.structural_factor == pytest.approx(1.2**2)
    assert found.residual > 0.05


@pytest.mark.parametrize(
    ("at", "frequency", "message"),
    [
        ([0.0], [1.21 * REST], r"expected within 20 % of the model's 20 rad/s, found 24.2 rad/s"),
        ([0.0], [0.0], r"expected within 20 % of the model's 20 rad/s, found 0 rad/s"),
        ([], [], r"measurements: expected a row of 1 or more, found shape \(0,\)"),
    ],
)
def test_measurement_of_another_mode_is_refused(at, frequency, message):
    with pytest.raises(ValueError, match=message):
        correct(found_at(at, frequency), SPEED, model(SPEED), REST, BOOK)


def test_measurement_where_the_model_has_no_frequency_is_refused():
    with pytest.raises(ValueError, match=r"model's 0 rad/s, found 3 rad/s at 0 rad/s"):
        correct(found_at([0.0], [3.0], rest=0.0), SPEED, model(SPEED, 0.0), 0.0, BOOK)


def test_correction_that_leaves_no_frequency_is_refused():
    with pytest.raises(ValueError, match=r"corrected frequency: expected a positive square"):
        correct(found_at([0.0], [0.85 * REST]), 40.0, 10.0, REST, BOOK)
