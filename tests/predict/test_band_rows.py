"""Stay and turns inside a keep-out band over the whole card."""

from __future__ import annotations

import dataclasses
import math

import pytest

from planner.model.plan import ABORT_CAUSES, KeepOut, segments
from planner.model.results import Labels, Status
from planner.predict.band_rows import inside, total_rows
from planner.predict.rows import Rows
from planner.predict.run_down_events import Event
from planner.predict.study_schedule import least_rate_rad_s2
from tests.predict.rows import row, rows

RPM = 2.0 * math.pi / 60.0


def test_turns_of_an_even_ramp_are_its_mean_speed_times_its_time(articulated):
    """90 to 180 rpm at 12 rpm/s: 30 rpm of band take 2.5 s at 127 rpm, 5.29 turns."""
    ramp = next(s for s in segments(articulated) if s.id == "1.2r")
    band = KeepOut("S1", 112.0 * RPM, 142.0 * RPM, "x")
    seconds, turns = inside(ramp, band)
    assert seconds == pytest.approx(2.5)
    assert turns == pytest.approx(127.0 / 60.0 * 2.5)


def test_own_run_up_counts_by_its_course_not_by_its_mean(articulated):
    """Slow through the band and quick beyond it: 4 s at 127 rpm on the way of 10 s."""
    ramp = next(s for s in segments(articulated) if s.id == "1.2r")
    low, high = 112.0 * RPM, 142.0 * RPM
    course = ((0.0, ramp.from_rad_s), (3.0, low), (7.0, high), (10.0, ramp.to_rad_s))
    own = dataclasses.replace(ramp, own_run_up=True, duration_s=10.0, course=course)
    band = KeepOut("S1", low, high, "x")
    seconds, turns = inside(own, band)
    assert seconds == pytest.approx(4.0)
    assert turns == pytest.approx(127.0 / 60.0 * 4.0)
    assert least_rate_rad_s2(own, band) == pytest.approx(30.0 * RPM / 4.0)


def test_stop_whose_run_down_was_not_found_leaves_the_total_open(articulated):
    band = articulated.keep_outs[0]
    walk = segments(articulated)
    failed = Event(
        Labels(segment="stop"), 30.0, status=Status.NOT_CONVERGED, reason="torque did not converge"
    )
    rows = {q: Rows(q, "speeds") for q in ("band_time_total", "band_cycles_total")}
    total_rows(rows, [(failed, None)], (walk, [band]), 2)
    for filled in rows.values():
        found = filled.prediction()
        assert found.status == (Status.NOT_CONVERGED,)
        assert found.reasons == ("torque did not converge",)


def test_total_is_schedule_stop_and_the_worst_aborts_with_their_ways_back(articulated, predicted):
    """By hand from the turns that are told for each passage."""
    found = predicted("articulated-run-up")
    cycles, total = found["band_cycles"], found["band_cycles_total"]
    stop = cycles.value[row(cycles, segment="stop", band="S1")]
    causes = [rows(cycles, segment="2.4h", band="S1", state=c)[0] for c in ABORT_CAUSES]
    ramp = 127.0 / 60.0 * 2.5
    every = [i for i in rows(cycles, band="S1") if cycles.labels[i].state]
    abort = max(cycles.value[i] for i in every if cycles.status[i] is Status.OK)
    assert max(cycles.value[i] for i in causes) == pytest.approx(abort, rel=0.01)
    assert articulated.abort.reentries == 2
    wanted = ramp + stop + 2 * (abort + ramp)
    assert total.value[row(total, band="S1")] == pytest.approx(wanted, rel=1e-3)
    assert total.low[0] < total.value[0] < total.high[0]


def test_repeats_of_a_block_are_counted(articulated, run_predict, predicted):
    """The band is passed down and up once more for each repeat."""
    first = articulated.blocks[0]
    twice = dataclasses.replace(first, repeat=3)
    plan = dataclasses.replace(articulated, blocks=(twice, *articulated.blocks[1:]))
    more = run_predict(plan, "speeds")["band_cycles_total"]
    once = predicted("articulated-run-up")["band_cycles_total"]
    ramp = 127.0 / 60.0 * 2.5
    back = next(s for s in segments(plan) if s.id == "1.1b")
    down = inside(back, plan.keep_outs[0])[1]
    # two more ways up, two ways down between them, and the way back after an abort passes both
    assert more.value[0] - once.value[0] >= 2 * ramp + 2 * down - 1e-9


@pytest.mark.parametrize(
    ("bands", "reentries", "status", "words"),
    [
        (True, None, Status.NOT_STATED, r"does not state reentries"),
        (False, 2, Status.NOT_APPLICABLE, r"the plan declares no keep-out band"),
    ],
)
def test_what_is_not_stated_is_told(articulated, run_predict, bands, reentries, status, words):
    abort = dataclasses.replace(articulated.abort, reentries=reentries)
    kept = articulated.keep_outs if bands else ()
    plan = dataclasses.replace(articulated, abort=abort, keep_outs=kept)
    found = run_predict(plan, "speeds")
    for quantity in ("band_time_total", "band_cycles_total"):
        assert set(found[quantity].status) == {status}
        assert words in found[quantity].reasons[0]
