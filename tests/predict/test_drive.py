"""What the drive has to give, and where the overspeed trip stands."""

from __future__ import annotations

import dataclasses
import math

import pytest

from planner.model.results import Status
from planner.predict.study_air import winds_at_hub

RPM = 2.0 * math.pi / 60.0


def row(prediction, segment):
    return next(i for i, label in enumerate(prediction.labels) if label.segment == segment)


def with_ramp_time(plan, seconds):
    steps = list(plan.blocks[0].steps)
    steps[1] = dataclasses.replace(steps[1], ramp_time_s=seconds)
    block = dataclasses.replace(plan.blocks[0], steps=tuple(steps))
    return dataclasses.replace(plan, blocks=(block,))


def test_fast_ramp_needs_the_torque_that_accelerates_the_rotor(articulated, run_predict):
    slow = run_predict(with_ramp_time(articulated, 100.0), "holds")["torque"]
    fast = run_predict(with_ramp_time(articulated, 0.01), "holds")["torque"]
    i = row(slow, "1.2r")
    # by hand: each blade about the shaft, I + 2 e S + e² m = 407.5 + 2 0.22 111.0 + 0.22² 43.2
    inertia = 120.0 + 4.0 * 458.4  # hub and drive, four blades
    change = 90.0 * RPM / 0.01 - 90.0 * RPM / 100.0
    assert fast.high[i] - slow.high[i] == pytest.approx(inertia * change, rel=0.005)


def test_powered_stop_brakes_with_negative_torque(articulated, run_predict):
    shutdown = dataclasses.replace(articulated.shutdown, powered=True, time_s=2.0)
    found = run_predict(dataclasses.replace(articulated, shutdown=shutdown), "holds")["torque"]
    assert found.low[row(found, "stop")] < -20_000.0


def test_unpowered_stop_takes_no_torque_from_the_drive(articulated, run_predict):
    shutdown = dataclasses.replace(articulated.shutdown, powered=False, time_s=2.0)
    found = run_predict(dataclasses.replace(articulated, shutdown=shutdown), "holds")["torque"]
    assert found.low[row(found, "stop")] > 0.0


def test_trip_stands_between_card_and_proven_speed(predicted):
    found = predicted("articulated-run-up")
    assert found["trip_above_card"].low[0] / RPM == pytest.approx(378.0 - 356.4 - 2.0)
    assert found["trip_below_proven"].value[0] / RPM == pytest.approx(396.0 - 378.0)


def test_missing_trip_is_not_stated(articulated, run_predict):
    drive = dataclasses.replace(articulated.stand.drive, overspeed_trip_rad_s=None)
    stand = dataclasses.replace(articulated.stand, drive=drive)
    found = run_predict(dataclasses.replace(articulated, stand=stand), "schedule")
    assert found["trip_above_card"].status == (Status.NOT_STATED,)
    assert found["trip_below_proven"].status == (Status.NOT_STATED,)


def test_collective_rate_counts_drops_too(predicted):
    found = predicted("articulated-run-up")["collective_rate"]
    assert found.value[row(found, "2.4r")] == pytest.approx(math.radians(5.0) / 15.0)


def test_gust_is_not_scaled_down_to_a_low_hub(articulated):
    site = dataclasses.replace(
        articulated.site, wind_mean_m_s=6.0, wind_gust_m_s=11.0, anemometer_error_m_s=0.5,
        anemometer_height_m=20.0, shear_exponent=0.2,
    )  # fmt: skip
    mean, gust = winds_at_hub(site, 5.0)
    assert mean == pytest.approx(6.0 * 0.25**0.2)
    assert gust == pytest.approx(mean + 5.5)
    mean, gust = winds_at_hub(site, 60.0)
    assert gust == pytest.approx(11.5 * 3.0**0.2)
