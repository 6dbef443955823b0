"""Marched ramps, stops and aborts: the ways 22 to 25 to a wrong GO, and those of 7 with aborts."""

import math
from dataclasses import replace

import numpy as np
import pytest

from planner.judge.case import Span
from planner.judge.hand_checks import hand_check_findings
from planner.model.plan import ABORT_CAUSES
from planner.model.results import Labels, Status, Verdict
from planner.model.rules import Limit, SpeedRange
from planner.predict.register import REGISTER
from tests.judge.conftest import TWO_HOLDS, fresh

GO, OPEN, NO_GO = Verdict.GO, Verdict.NOT_ASSESSED, Verdict.NO_GO
COMMANDED, FROZEN, BRAKE_LOST, NOT_SEATED = ABORT_CAUSES
PEAK = "droop_stop_peak_moment"


@pytest.fixture
def bench():
    """Holds at 10 and 36 rad/s; the second ramp passes a keep-out band."""
    return fresh("articulated", TWO_HOLDS)


@pytest.fixture
def hingeless_bench():
    return fresh("hingeless", TWO_HOLDS)


def run_verdict(bench) -> Verdict:
    return Verdict(bench.judge().verdict)


def leave_out(bench, *quantities: str) -> None:
    bench.change_book(rules=tuple(r for r in bench.rules if r.quantity not in quantities))


def relabel(bench, quantity: str, at: int, labels: Labels) -> None:
    old = bench.predictions[quantity]
    bench.predictions[quantity] = replace(
        old, labels=(*old.labels[:at], labels, *old.labels[at + 1 :])
    )


def blank(bench, quantity: str, labels: Labels, status: Status) -> None:
    """Leave one row without a number."""
    bench.drop(quantity, bench.rows(quantity)[1:])
    old = bench.predictions[quantity]
    bench.predictions[quantity] = replace(old, labels=(labels,), value=np.array([math.nan]))
    bench.flag(quantity, [0], status, "refused")


def test_run_with_marched_numbers_needs_no_document_for_them(bench, hingeless_bench):
    for each in (bench, hingeless_bench):
        named = {d.hazard_class for d in each.plan.documents}
        assert named & {"stops", "loads", "clearance", "aborts"} == set()
        assert run_verdict(each) is GO


@pytest.mark.parametrize(
    ("segment", "state", "where"),
    [("1.2r", "", "1.2r"), ("1.2r", FROZEN, f"abort from 1.2r, {FROZEN}")],
)
def test_abort_counts_for_the_segment_where_it_begins(bench, segment, state, where):
    bench.put(PEAK, bench.rows(PEAK, segment=segment, state=state), high=401.0)
    finding = bench.finding("droop-stop-peak")
    assert (finding.verdict, finding.segment, finding.where) == (NO_GO, "1.2r", where)
    assert finding.segment_verdicts["1.2r"] == "NO-GO"
    assert finding.segment_verdicts["1.1r"] == "GO"
    judgement = bench.judge()
    assert judgement.segment_verdicts["1.2r"] is NO_GO
    assert judgement.segment_verdicts["1.2h"] is GO
    by_part = {c.where: c.verdict for c in judgement.coverage if c.hazard_class == "stops"}
    assert by_part["ramp"] is (GO if state else NO_GO)
    assert bench.covered("aborts", "abort").verdict is (NO_GO if state else GO)


def test_band_and_mode_of_an_abort_are_named(bench):
    rows = bench.rows("passage_amplitude", segment="1.2h", state=FROZEN)
    bench.put("passage_amplitude", rows, high=99.0)
    where = f"abort from 1.2h, {FROZEN}, stand sway, 1 per rev"
    assert bench.finding("passage-sway").where == where
    rows = bench.rows("band_cycles", segment="1.2h", state=FROZEN)
    bench.put("band_cycles", rows, high=99.0)
    where = f"abort from 1.2h, {FROZEN}, band lag"
    assert bench.finding("keep-out-cycles").where == where


def test_hand_check_of_an_abort_names_it(bench):
    rows = bench.rows("time_to_rest", segment="1.1h", state=BRAKE_LOST)
    bench.put("time_to_rest", rows, hand=1.0)
    (finding,) = hand_check_findings(REGISTER, bench.predictions)
    assert finding.where == f"abort from 1.1h, {BRAKE_LOST}"
    assert finding.segment_verdicts == {"1.1h": "NOT ASSESSED"}


@pytest.mark.parametrize(("where", "verdict"), [("ramp", GO), ("abort", NO_GO), ("run", NO_GO)])
def test_23_rule_for_ramps_does_not_reach_the_aborts_out_of_them(bench, where, verdict):
    bench.put(PEAK, bench.rows(PEAK, segment="1.2r", state=FROZEN), high=401.0)
    bench.change_rule("droop-stop-peak", where=(where,))
    finding = bench.finding("droop-stop-peak")
    assert finding.verdict is verdict
    assert "1.2r" in finding.segment_verdicts
    assert ("stop" in finding.segment_verdicts) is (where == "run")


def test_23_rule_for_the_run_finds_every_abort_missing(bench):
    bench.drop("blade_clearance", bench.rows("blade_clearance", state=NOT_SEATED))
    bench.change_rule("clearance-share", where=("run",))
    finding = bench.finding("clearance-share")
    assert (finding.verdict, finding.not_assessed) == (OPEN, 4)


@pytest.mark.parametrize("segment", ["1.1r", "1.1h", "1.2r", "1.2h"])
@pytest.mark.parametrize("cause", ABORT_CAUSES)
def test_23_abort_that_is_missing_is_not_assessed(bench, segment, cause):
    bench.drop(PEAK, bench.rows(PEAK, segment=segment, state=cause))
    finding = bench.finding("droop-stop-peak")
    assert (finding.verdict, finding.not_assessed, finding.segment) == (OPEN, 1, segment)
    assert finding.reason == f"nothing was predicted for the abort from {segment}, {cause}"
    judgement = bench.judge()
    assert judgement.verdict is OPEN
    assert judgement.segment_verdicts[segment] is OPEN
    covered = next(c for c in judgement.coverage if c.where == "abort")
    assert (covered.verdict, covered.closed_by) == (OPEN, "")


def test_23_rule_that_is_for_some_speeds_still_meets_every_abort(bench):
    """An abort from the top passes low speeds too."""
    slow = SpeedRange(to_rad_s=5.0)
    bench.change_rule("droop-stop-peak", speed_range=slow, where=("abort",))
    assert bench.finding("droop-stop-peak").tested == 16
    fast = SpeedRange(from_rad_s=20.0)
    bench.change_rule("droop-stop-peak", speed_range=fast)
    assert set(bench.finding("droop-stop-peak").segment_verdicts) == {"1.2r", "1.2h"}
    covered = bench.covered("aborts", "abort")
    assert covered.verdict is OPEN
    assert (
        covered.reason == f"no rule of the class judges {PEAK} at the abort from 1.1r, {COMMANDED}"
    )


def test_09_table_counts_over_all_speeds_of_an_abort(bench):
    table = Limit(table=((0.0, 1_000.0), (5.0, 200.0), (20.0, 1_000.0), (40.0, 1_000.0)))
    bench.change_rule("droop-stop-peak", caution=None, limit=table, where=("abort",))
    finding = bench.finding("droop-stop-peak")
    assert (finding.verdict, finding.limit) == (NO_GO, 200.0)
    bench.change_rule("droop-stop-peak", limit=Limit(table=((1.0, 1e3), (40.0, 1e3))))
    assert "does not reach the rotor speeds" in bench.finding("droop-stop-peak").reason


def test_abort_covers_speeds_from_its_segments_down_to_rest(bench):
    (place,) = [p for p in bench.case.aborts if (p.segment.id, p.state) == ("1.2h", FROZEN)]
    assert place.span == Span(0.0, bench.case.spans["1.2h"].highest_rad_s)
    assert {p.segment.id for p in bench.case.aborts} == {"1.1r", "1.1h", "1.2r", "1.2h"}
    assert [p.kind for p in bench.case.stretches] == ["ramp", "hold", "ramp", "hold", "stop"]


@pytest.mark.parametrize(
    ("quantity", "labels", "words"),
    [
        (PEAK, Labels("1.2h", state="meteor"), "abort cause meteor, which is not known"),
        (PEAK, Labels("9.9h", state=FROZEN), "segment 9.9h, which the plan does not have"),
        (PEAK, Labels(state=FROZEN), "without saying for which segment"),
        ("torque", Labels("1.2h", state=FROZEN), f"abort cause {FROZEN}, torque has none"),
    ],
)
def test_07_number_of_an_abort_that_cannot_be_placed_is_not_assessed(
    bench, quantity, labels, words
):
    at = bench.rows(quantity, segment="1.2h")[0]
    relabel(bench, quantity, at, labels)
    rule = {PEAK: "droop-stop-peak", "torque": "drive-torque"}[quantity]
    finding = bench.finding(rule)
    assert (finding.verdict, finding.not_assessed) == (OPEN, 2)
    assert words in finding.reason
    assert run_verdict(bench) is OPEN


@pytest.mark.parametrize(
    ("labels", "segments"),
    [
        (Labels(), {"1.1r", "1.1h", "1.2r", "1.2h", "stop"}),
        (Labels(state=FROZEN), {"1.1r", "1.1h", "1.2r", "1.2h"}),
        (Labels("1.2h", state=FROZEN), {"1.2h"}),
    ],
)
def test_row_without_segment_stands_for_all_places_that_it_means(bench, labels, segments):
    blank(bench, PEAK, labels, Status.NOT_CONVERGED)
    bench.change_rule("droop-stop-peak", where=("run",))
    finding = bench.finding("droop-stop-peak")
    told = {s for s, word in finding.segment_verdicts.items() if word == "NOT ASSESSED"}
    assert segments <= told
    assert finding.reason == "not converged: refused"
    assert (finding.tested, finding.not_assessed) == (0, 21)


@pytest.mark.parametrize("status", [Status.NOT_CONVERGED, Status.NOT_STATED])
def test_22_ramp_that_did_not_converge_is_closed_by_no_periodic_number(bench, status):
    rows = bench.rows(PEAK, segment="1.1r", state="")
    bench.flag(PEAK, rows, status, "the step does not resolve the stop")
    finding = bench.finding("droop-stop-peak")
    assert (finding.verdict, finding.segment) == (OPEN, "1.1r")
    assert bench.covered("stops", "ramp").verdict is OPEN
    assert bench.covered("stops", "stop").verdict is GO


def test_22_periodic_numbers_close_no_ramp(bench):
    """A book as it was before anything was marched: its rules reach ramps, and it stays open."""
    margins = {"droop_stop_clearance", "up_stop_clearance", "droop_stop_moment"}
    periodic = {*margins, "thrust", "hub_moment"}
    for rule in bench.rules:
        if rule.quantity in periodic:
            bench.change_rule(rule.id, where=("hold", "ramp", "stop"))
    leave_out(bench, *(q.id for q in REGISTER.values() if q.study == "marches"))
    for part, segment in (("ramp", "1.1r"), ("stop", "stop")):
        for name, quantity in (("stops", PEAK), ("loads", "thrust_peak")):
            covered = bench.covered(name, part)
            assert (covered.verdict, covered.closed_by) == (OPEN, "")
            assert covered.reason == f"no rule of the class judges {quantity} at {segment}"
    assert bench.covered("stops", "hold").verdict is GO
    assert bench.covered("loads", "hold").verdict is GO


def test_22_periodic_margin_that_is_no_prediction_opens_no_ramp(bench):
    """Margins are for holds; that a ramp passes the region of the stops does not touch them."""
    for quantity in ("droop_stop_clearance", "up_stop_clearance", "hub_moment", "thrust"):
        for segment in ("1.1r", "stop"):
            rows = bench.rows(quantity, segment=segment)
            bench.flag(quantity, rows, Status.OUTSIDE_VALIDITY, "passes the region of the stops")
    assert run_verdict(bench) is GO


def test_22_marched_numbers_close_no_hold(bench):
    leave_out(bench, "droop_stop_clearance")
    covered = bench.covered("stops", "hold")
    assert covered.reason == "no rule of the class judges droop_stop_clearance at 1.1h"


def test_22_hingeless_ramp_is_asked_for_its_root_moment(hingeless_bench):
    closed = hingeless_bench.covered("stops", "ramp")
    assert closed.closed_by == "root-flap-peak"
    leave_out(hingeless_bench, "root_flap_peak_moment")
    covered = hingeless_bench.covered("stops", "ramp")
    assert covered.reason == "no rule of the class judges root_flap_peak_moment at 1.1r"
    covered = hingeless_bench.covered("aborts", "abort")
    assert "judges root_flap_peak_moment at the abort from 1.1r" in covered.reason


def test_22_lag_is_asked_for_where_the_hub_has_lag_stops_only(bench):
    leave_out(bench, "lag_peak", "lag_stop_peak_moment")
    assert "judges lag_peak at 1.1r" in bench.covered("stops", "ramp").reason
    bench.change(rotor=replace(bench.plan.rotor, lag_stop=None))
    assert bench.covered("stops", "ramp").verdict is GO
    assert run_verdict(bench) is GO


def test_22_one_contact_at_speed_is_no_go(bench):
    rows = bench.rows("contacts_after_lift_off", segment="1.2r", state="")
    bench.put("contacts_after_lift_off", rows, high=1.0)
    finding = bench.finding("no-contact-at-speed")
    assert (finding.verdict, finding.reason) == (NO_GO, "1 against limit at most 0")


def test_23_aborts_of_one_cause_only_close_nothing(bench):
    for quantity in REGISTER.values():
        if "state" in quantity.axes:
            rows = [
                i
                for i in bench.rows(quantity.id)
                if bench.predictions[quantity.id].labels[i].state
            ]
            kept = bench.rows(quantity.id, state=COMMANDED)
            bench.drop(quantity.id, [i for i in rows if i not in kept])
    covered = bench.covered("aborts", "abort")
    assert (covered.verdict, covered.closed_by) == (OPEN, "")
    assert set(bench.judge().segment_verdicts.values()) == {OPEN, GO}


def test_23_open_aborts_mark_every_hold_and_ramp(bench):
    bench.change_book(rules=tuple(r for r in bench.rules if r.id != "time-to-rest"))
    judgement = bench.judge()
    assert judgement.verdict is OPEN
    assert judgement.segment_verdicts == {
        "1.1r": OPEN, "1.1h": OPEN, "1.2r": OPEN, "1.2h": OPEN, "stop": GO,
    }  # fmt: skip


@pytest.mark.parametrize(
    ("cause", "verdict"), [(COMMANDED, OPEN), (FROZEN, OPEN), (NOT_SEATED, GO)]
)
def test_24_abort_that_is_said_not_to_apply_does_not_count(bench, cause, verdict):
    """Only a stop that retracts can fail to re-seat; power can always be cut."""
    for quantity in ("time_to_rest", "blade_clearance", "hub_moment_peak", PEAK):
        bench.flag(quantity, bench.rows(quantity, state=cause), Status.NOT_APPLICABLE, "no cause")
    assert bench.finding("time-to-rest").verdict is GO
    assert bench.covered("aborts", "abort").verdict is verdict
    assert run_verdict(bench) is verdict


@pytest.mark.parametrize("speeds", [TWO_HOLDS, (0.0,)])
def test_24_aborts_of_which_nothing_was_assessed_are_open(speeds):
    """Even of a rotor that is only parked."""
    bench = fresh("articulated", speeds)
    for quantity in REGISTER.values():
        if "state" in quantity.axes:
            rows = [i for cause in ABORT_CAUSES for i in bench.rows(quantity.id, state=cause)]
            bench.flag(quantity.id, rows, Status.NOT_APPLICABLE, "no abort")
    assert bench.finding("time-to-rest").not_assessed == 0
    covered = bench.covered("aborts", "abort")
    assert (covered.verdict, covered.closed_by) == (OPEN, "")
    assert run_verdict(bench) is OPEN


def unpowered(bench) -> None:
    """A stop without power: no rate to judge, and numbers of the passage instead."""
    bench.change(shutdown=replace(bench.plan.shutdown, powered=False))
    rows = bench.rows("band_rate", segment="stop")
    bench.flag("band_rate", rows, Status.NOT_APPLICABLE, "an unpowered stop has no rate")
    at = bench.rows("band_cycles", segment="stop")
    bench.flag("band_cycles", at, Status.OK)
    bench.put("band_cycles", at, value=5.0, low=5.0, high=5.0)


def test_25_unpowered_stop_is_judged_by_cycles_and_amplitude(bench):
    unpowered(bench)
    assert run_verdict(bench) is GO
    closed = bench.covered("resonance", "stop").closed_by
    assert closed == "keep-out-cycles, passage-sway, keep-out-cover"
    bench.put("band_cycles", bench.rows("band_cycles", segment="stop"), high=51.0)
    finding = bench.finding("keep-out-cycles")
    assert (finding.verdict, finding.where) == (NO_GO, "stop, band lag")


@pytest.mark.parametrize("quantity", ["band_cycles", "passage_amplitude"])
def test_25_rate_of_an_unpowered_stop_stands_in_for_nothing(bench, quantity):
    unpowered(bench)
    rows = bench.rows("band_rate", segment="stop")
    bench.flag("band_rate", rows, Status.OK)
    leave_out(bench, quantity)
    covered = bench.covered("resonance", "stop")
    assert covered.verdict is OPEN
    assert f"judges {quantity}" in covered.reason
    assert run_verdict(bench) is OPEN


@pytest.mark.parametrize(
    ("segment", "state", "place"),
    [
        ("1.1r", "", "1.1r"),
        ("stop", "", "stop"),
        ("1.2r", BRAKE_LOST, f"the abort from 1.2r, {BRAKE_LOST}"),
        ("1.1h", FROZEN, f"the abort from 1.1h, {FROZEN}"),
    ],
)
def test_25_each_stand_mode_is_asked_for_in_each_passage(bench, segment, state, place):
    rows = bench.rows("passage_amplitude", segment=segment, state=state)
    bench.drop("passage_amplitude", rows)
    finding = bench.finding("passage-sway")
    assert finding.verdict is OPEN
    assert finding.reason.startswith(f"nothing was predicted for stand sway at {place}")
    part = "abort" if state else ("stop" if segment == "stop" else "ramp")
    assert bench.covered("aborts" if state else "resonance", part).verdict is OPEN


def test_25_abort_from_below_a_band_is_asked_for_no_passage(bench):
    labels = bench.predictions["band_cycles"].labels
    assert {label.segment for label in labels if label.state} == {"1.2r", "1.2h"}
    assert bench.finding("keep-out-cycles").verdict is GO


def test_25_damping_exempts_no_passage_of_an_abort(bench):
    rows = bench.rows("passage_amplitude", segment="1.2h", state=FROZEN)
    bench.put("passage_amplitude", rows, high=99.0)
    damping = bench.rows("mode_damping", segment="1.2h", mode="stand sway")
    bench.put("mode_damping", damping, value=0.5, low=0.5, high=0.5)
    bench.change_rule("passage-sway", exempt_damping=0.1)
    assert bench.finding("passage-sway").verdict is NO_GO


@pytest.mark.parametrize("fitted", [None, False])
def test_12_stand_mode_without_the_rotors_mass_is_not_assessed_in_a_passage(bench, fitted):
    modes = tuple(replace(m, rotor_fitted=fitted) for m in bench.plan.stand.modes)
    bench.change(stand=replace(bench.plan.stand, modes=modes))
    finding = bench.finding("passage-sway")
    assert finding.verdict is OPEN
    assert "not stated to be found with the rotor's mass fitted" in finding.reason
