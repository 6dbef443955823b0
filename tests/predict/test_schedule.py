"""What the schedule alone says: steps, rates, bands."""

from __future__ import annotations

import dataclasses
import math

import pytest

from planner.model.plan import KeepOut, Window, segments
from planner.model.results import Status
from planner.predict.study_schedule import rate_rad_s2, seconds_inside

RPM = 2.0 * math.pi / 60.0


def row(prediction, **labels):
    for i, label in enumerate(prediction.labels):
        if all(getattr(label, key) == value for key, value in labels.items()):
            return i
    raise AssertionError(labels)


def test_segments_walk_from_rest_to_rest_without_a_gap(sample):
    for name in ("articulated-run-up", "hingeless-model", "teetering-pair"):
        walk = segments(sample(name))
        assert walk[0].from_rad_s == 0.0
        assert walk[-1].kind == "stop"
        assert walk[-1].to_rad_s == 0.0
        assert len({segment.id for segment in walk}) == len(walk)


def test_repeated_block_has_a_way_back(sample):
    walk = segments(sample("hingeless-model"))
    back = next(segment for segment in walk if segment.id == "2.1b")
    assert back.times == 2
    assert (back.from_collective_rad, back.to_collective_rad) == pytest.approx(
        (math.radians(6.0), math.radians(4.0))
    )
    assert next(s for s in walk if s.id == "2.2h").times == 3
    assert next(s for s in walk if s.id == "2.1r").times == 1


def test_ramp_time_follows_from_its_rate(articulated):
    ramp = next(s for s in segments(articulated) if s.id == "1.2r")
    assert rate_rad_s2(ramp) == pytest.approx(12.0 * RPM)


def test_time_in_a_band_counts_the_overlap_only(articulated):
    ramp = next(s for s in segments(articulated) if s.id == "1.2r")
    band = KeepOut("X", 100.0 * RPM, 130.0 * RPM, "test")
    assert seconds_inside(ramp, band) == pytest.approx(30.0 / 12.0)
    outside = KeepOut("X", 300.0 * RPM, 310.0 * RPM, "test")
    assert seconds_inside(ramp, outside) == 0.0


def test_hold_inside_a_band_counts_whole(articulated):
    hold = next(s for s in segments(articulated) if s.id == "1.3h")
    band = KeepOut("X", 260.0 * RPM, 280.0 * RPM, "test")
    assert seconds_inside(hold, band) == hold.duration_s


def test_hold_window_and_gauge_error_narrow_the_band_distance(articulated, run_predict):
    plan = dataclasses.replace(
        articulated, keep_outs=(KeepOut("X", 280.0 * RPM, 300.0 * RPM, "test"),)
    )
    found = run_predict(plan, "schedule")["band_distance"]
    i = row(found, segment="1.3h", band="X")
    assert found.value[i] / RPM == pytest.approx(10.0)
    assert found.low[i] / RPM == pytest.approx(10.0 - 2.0 - 1.0)


def test_hold_in_a_band_has_a_negative_distance(articulated, run_predict):
    plan = dataclasses.replace(
        articulated, keep_outs=(KeepOut("X", 260.0 * RPM, 300.0 * RPM, "test"),)
    )
    found = run_predict(plan, "schedule")["band_distance"]
    assert found.value[row(found, segment="1.3h", band="X")] < 0.0


def test_unpowered_passage_is_not_judged_by_rate(predicted):
    found = predicted("articulated-run-up")["band_rate"]
    i = row(found, segment="stop", band="S1")
    assert found.status[i] is Status.NOT_APPLICABLE
    assert "its turns and its amplitude" in found.reasons[i]


def test_without_bands_band_rules_do_not_apply(articulated, run_predict):
    found = run_predict(dataclasses.replace(articulated, keep_outs=()), "schedule", "speeds")
    for quantity in ("band_distance", "band_rate", "band_time_total"):
        assert found[quantity].status == (Status.NOT_APPLICABLE,)


def test_card_speed_holds_window_and_gauge_error(predicted):
    found = predicted("articulated-run-up")["card_speed"]
    assert found.value[0] / RPM == pytest.approx(0.99 * 360.0)
    assert found.high[0] / RPM == pytest.approx(0.99 * 360.0 + 1.0 + 1.0)


@pytest.mark.parametrize(
    ("in_stop", "in_aborts", "expected"),
    [(True, True, 100.0), (True, False, 90.0), (False, True, 100.0), (False, False, None)],
)
def test_brake_speed_is_the_faster_of_stop_and_aborts(
    articulated, run_predict, in_stop, in_aborts, expected
):
    plan = dataclasses.replace(
        articulated,
        shutdown=dataclasses.replace(
            articulated.shutdown, brake=in_stop, brake_from_rad_s=90.0 * RPM
        ),
        abort=dataclasses.replace(
            articulated.abort, brake=in_aborts, brake_from_rad_s=100.0 * RPM
        ),
    )
    found = run_predict(plan, "schedule")["brake_speed"]
    if expected is None:
        assert found.status == (Status.NOT_APPLICABLE,)
    else:
        assert found.value[0] / RPM == pytest.approx(expected)


def test_wider_window_never_shrinks_a_band_of_predictions(articulated, run_predict):
    steps = tuple(
        dataclasses.replace(step, window=Window(3.0 * step.window.speed_rad_s, 0.01))
        for step in articulated.blocks[0].steps
    )
    block = dataclasses.replace(articulated.blocks[0], steps=steps)
    wide = run_predict(dataclasses.replace(articulated, blocks=(block,)), "tip", "modes")
    block = dataclasses.replace(articulated.blocks[0])
    narrow = run_predict(dataclasses.replace(articulated, blocks=(block,)), "tip", "modes")
    for quantity in ("tip_mach", "root_centrifugal_force", "harmonic_spacing", "thrust"):
        assert (wide[quantity].high >= narrow[quantity].high - 1e-12).all()
        assert (wide[quantity].low <= narrow[quantity].low + 1e-12).all()
