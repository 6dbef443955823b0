"""How far documents reach: the ways 12 and 17 to a wrong GO, as in ``planner.judge.judge``."""

import math
from dataclasses import replace

import pytest

from planner.judge.judge import judge
from planner.model.plan import segments
from planner.model.results import Status, Verdict
from planner.model.rules import HAZARD_CLASSES, Limit, SpeedRange
from planner.predict.register import REGISTER

GO, OPEN, NO_GO = Verdict.GO, Verdict.NOT_ASSESSED, Verdict.NO_GO


def run_verdict(bench) -> Verdict:
    return Verdict(bench.judge().verdict)


def open_thrust(bench, status: Status = Status.NOT_COMPUTED) -> None:
    rows = bench.rows("thrust_peak", segment="1.3r", state="")
    bench.flag("thrust_peak", rows, status, "too many blades")


def test_17_document_closes_what_was_not_computed(bench, paper):
    open_thrust(bench)
    bench.change(documents=(*bench.plan.documents, paper("loads", "ramp")))
    finding = bench.finding("thrust-peak")
    assert (finding.verdict, finding.closed_by, finding.not_assessed) == (GO, "DOC loads", 1)
    assert "1 not assessed but closed by document" in finding.reason
    assert "DOC loads" in bench.covered("loads", "ramp").closed_by
    assert run_verdict(bench) is GO


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        ({"wind_limit_m_s": 9.4}, "reaches to 9.4 m/s wind, the plan's gust with anemometer"),
        ({"wind_limit_m_s": math.nan}, "reaches to nan m/s wind"),
        ({"speed_limit_rad_s": 30.05}, "reaches to 286.96 rpm, this part of the run with gauge"),
        ({"approver": " "}, "names no approver"),
        ({"number": ""}, "without a number closes nothing"),
        ({"where": ("hold", "run")}, ""),
        ({"hazard_class": "stops"}, ""),
    ],
)
def test_17_document_that_does_not_reach_does_not_close(bench, paper, changes, words):
    open_thrust(bench)
    bench.change(documents=(*bench.plan.documents, replace(paper("loads", "ramp"), **changes)))
    finding = bench.finding("thrust-peak")
    assert (finding.verdict, finding.closed_by) == (OPEN, "")
    assert words in finding.reason
    assert run_verdict(bench) is OPEN


def test_17_document_does_not_close_what_did_not_converge(bench, paper):
    open_thrust(bench, Status.NOT_CONVERGED)
    bench.change(documents=(*bench.plan.documents, paper("loads", "ramp")))
    assert bench.finding("thrust-peak").verdict is OPEN
    covered = bench.covered("loads", "ramp")
    assert (covered.verdict, covered.closed_by) == (OPEN, "")
    assert covered.reason.startswith("thrust-peak left 1.3r not assessed: not converged")


def test_17_document_does_not_close_a_class_with_a_rule_that_matches_nothing(bench, paper):
    bench.change(documents=(*bench.plan.documents, paper("loads", "ramp")))
    bench.change_rule("stand-thrust", where=("ramp",), quantity="card_speed", unit="")
    covered = bench.covered("loads", "ramp")
    assert (covered.verdict, covered.closed_by) == (OPEN, "")
    assert bench.covered("loads", "hold").verdict is OPEN


def test_17_document_does_not_close_an_exceeded_limit(bench, paper):
    bench.put("thrust_peak", bench.rows("thrust_peak", segment="1.3r", state=""), high=1e6)
    bench.change(documents=(*bench.plan.documents, paper("loads", "ramp")))
    assert run_verdict(bench) is NO_GO
    assert bench.covered("loads", "ramp").verdict is NO_GO


def test_17_document_does_not_close_a_missing_limit_or_a_gap(bench, paper):
    bench.change(documents=(*bench.plan.documents, paper("loads", "hold", "ramp", "stop", "run")))
    bench.drop("thrust_peak", bench.rows("thrust_peak", segment="1.3r", state=""))
    assert bench.finding("thrust-peak").verdict is OPEN
    bench.change_rule("hub-moment", limit=None)
    assert bench.finding("hub-moment").verdict is OPEN


@pytest.mark.parametrize(
    ("changes", "closes"),
    [
        ({}, True),
        ({"wind_limit_m_s": 9.0}, False),
        ({"speed_limit_rad_s": 36.25}, False),
        ({"approver": ""}, False),
        ({"where": ("hold",)}, False),
    ],
)
def test_17_whole_class_is_closed_only_by_a_document_that_reaches(bench, paper, changes, closes):
    bench.change_book(rules=without_aborts(bench))
    bench.change(documents=(*bench.plan.documents, replace(paper("aborts", "abort"), **changes)))
    assert (run_verdict(bench) is GO) is closes
    assert (bench.covered("aborts", "abort").closed_by == "DOC aborts") is closes


def without_aborts(bench):
    """The book with rules that leave aborts alone."""
    kept = (replace(r, where=tuple(w for w in r.where if w != "abort")) for r in bench.rules)
    return tuple(rule for rule in kept if rule.where)


def test_17_document_on_aborts_stands_in_whatever_the_class_of_the_rule(bench, paper):
    rows = bench.rows("droop_stop_peak_moment", segment="1.3h", state="brake lost")
    bench.flag("droop_stop_peak_moment", rows, Status.NOT_COMPUTED, "not marched")
    papers = bench.plan.documents
    for hazard_class, where in (("stops", ("ramp", "stop", "abort")), ("aborts", ("run",))):
        bench.change(documents=(*papers, paper(hazard_class, *where)))
        finding = bench.finding("droop-stop-peak")
        assert (finding.verdict, finding.closed_by) == (OPEN, "")
        assert finding.where == "abort from 1.3h, brake lost"
        assert run_verdict(bench) is OPEN
    bench.change(documents=(*papers, paper("aborts", "abort")))
    assert bench.finding("droop-stop-peak").closed_by == "DOC aborts"
    assert "DOC aborts" in bench.covered("aborts", "abort").closed_by
    assert run_verdict(bench) is GO
    bench.flag("droop_stop_peak_moment", rows, Status.NOT_CONVERGED, "stop not resolved")
    assert bench.finding("droop-stop-peak").verdict is OPEN


def test_17_number_of_the_run_is_closed_by_a_document_for_the_run(bench, paper):
    bench.flag("droop_stop_rest_moment", [0], Status.OUTSIDE_VALIDITY, "stalled")
    papers = bench.plan.documents
    parts = ("hold", "ramp", "stop")
    for where, verdict in (
        (("hold",), OPEN),
        (parts, OPEN),
        (("run",), GO),
        (("run", *parts), GO),
    ):
        bench.change(documents=(*papers, paper("stops", *where)))
        assert bench.finding("droop-rest-moment").verdict is verdict
        assert bench.covered("stops", "run").verdict is verdict


def test_17_number_of_the_run_in_a_class_without_it_needs_the_run_or_every_part(bench, paper):
    bench.add_rule(
        quantity="lift_off_speed_in_wind",
        sense="at most",
        limit=Limit(constant=20.0),
        caution=None,
        where=("run",),
        hazard_class="loads",
    )
    bench.flag("lift_off_speed_in_wind", [0], Status.OUTSIDE_VALIDITY, "stalled")
    papers = bench.plan.documents
    for where, verdict in ((("hold",), OPEN), (("run",), GO), (("hold", "ramp", "stop"), GO)):
        bench.change(documents=(*papers, paper("loads", *where)))
        assert bench.finding("added").verdict is verdict


def test_17_document_for_the_run_holds_for_holds_of_a_class_of_the_run(bench, paper):
    papers = tuple(d for d in bench.plan.documents if d.hazard_class != "people")
    bench.change(documents=papers)
    bench.add_rule(
        quantity="thrust",
        sense="at most",
        limit=Limit(constant=2e4),
        caution=None,
        where=("hold",),
        hazard_class="people",
    )
    bench.flag("thrust", bench.rows("thrust", segment="1.3h"), Status.OUTSIDE_VALIDITY, "stall")
    assert bench.finding("added").verdict is OPEN
    assert bench.covered("people", "run").verdict is OPEN
    bench.change(documents=(*papers, paper("people", "run")))
    assert bench.finding("added").verdict is GO
    assert bench.covered("people", "run").verdict is GO


def test_17_document_for_the_run_does_not_reach_the_holds_of_a_class_of_parts(bench, paper):
    bench.flag("torque", bench.rows("torque", segment="1.3h"), Status.OUTSIDE_VALIDITY, "stall")
    papers = bench.plan.documents
    bench.change(documents=(*papers, paper("drive and overspeed", "run")))
    assert bench.finding("drive-torque").verdict is OPEN
    assert bench.covered("drive and overspeed", "hold").verdict is OPEN
    bench.change(documents=(*papers, paper("drive and overspeed", "hold")))
    assert bench.finding("drive-torque").verdict is GO
    assert bench.covered("drive and overspeed", "hold").verdict is GO


@pytest.mark.parametrize("hazard_class", ["people", "lag and stand stability"])
def test_17_document_does_not_hide_a_rule_of_the_class_that_matches_nothing(bench, hazard_class):
    bench.add_rule(
        quantity="thrust",
        sense="at most",
        limit=Limit(constant=2e4),
        caution=None,
        where=("hold",),
        hazard_class=hazard_class,
        speed_range=SpeedRange(from_rad_s=39.0),
    )
    covered = bench.covered(hazard_class, "run")
    assert (covered.verdict, covered.closed_by) == (OPEN, "")
    assert "added: the rule matches nothing" in covered.reason


def test_17_wind_at_the_hub_counts_where_it_is_stronger(bench, paper):
    open_thrust(bench)
    bench.change(documents=(*bench.plan.documents, paper("loads", "ramp")))
    bench.put("wind_at_hub", [0], value=12.0, low=0.0, high=15.0)
    assert bench.finding("thrust-peak").verdict is GO
    bench.put("wind_at_hub", [0], high=15.1)
    finding = bench.finding("thrust-peak")
    assert finding.verdict is OPEN
    assert "gust with anemometer error is 15.1 m/s at the anemometer or the hub" in finding.reason
    people = bench.covered("people", "run")
    assert (people.verdict, people.closed_by) == (OPEN, "")
    assert run_verdict(bench) is OPEN


def test_17_weaker_wind_at_the_hub_does_not_lower_the_anemometers(bench, paper):
    open_thrust(bench)
    weak = replace(paper("loads", "ramp"), wind_limit_m_s=9.4)
    bench.change(documents=(*bench.plan.documents, weak))
    bench.put("wind_at_hub", [0], value=1.0, low=0.0, high=2.0)
    assert "is 9.5 m/s at the anemometer" in bench.finding("thrust-peak").reason


@pytest.mark.parametrize("number", [math.nan, math.inf])
@pytest.mark.parametrize("column", ["value", "low", "high"])
def test_17_wind_at_the_hub_that_is_no_number_closes_nothing(bench, column, number):
    bench.put("wind_at_hub", [0], **{column: number})
    covered = bench.covered("people", "run")
    assert (covered.verdict, covered.closed_by) == (OPEN, "")
    assert "cannot be held against the wind: wind_at_hub is not finite" in covered.reason


@pytest.mark.parametrize("status", [s for s in Status if s is not Status.OK])
def test_17_wind_at_the_hub_that_is_not_ok_closes_nothing(bench, status):
    bench.flag("wind_at_hub", [0], status, "why")
    assert f"wind_at_hub is {status.value}: why" in bench.covered("people", "run").reason
    assert run_verdict(bench) is OPEN


def test_17_wind_at_the_hub_that_is_missing_closes_nothing(bench):
    bench.drop("wind_at_hub", [0])
    assert "wind_at_hub was not predicted" in bench.covered("people", "run").reason
    del bench.predictions["wind_at_hub"]
    assert bench.covered("people", "run").verdict is OPEN


@pytest.mark.parametrize(
    ("date", "issued", "closes"),
    [
        ("2026-01-01", "2026-01-01 08:00 UTC", True),
        ("2025-12-31", "2026-01-01", True),
        ("2026-01-02", "2026-01-01 23:00 UTC", False),
        ("2027-01-01", "2026-12-31", False),
        ("", "2026-01-01", False),
        (" ", "2026-01-01", False),
    ],
)
def test_17_document_dated_after_the_issue_does_not_close(bench, paper, date, issued, closes):
    open_thrust(bench)
    bench.change(issued=issued)
    papers = tuple(replace(d, date="2025-01-01") for d in bench.plan.documents)
    bench.change(documents=(*papers, replace(paper("loads", "ramp"), date=date)))
    finding = bench.finding("thrust-peak")
    assert (finding.verdict is GO) is closes
    assert (run_verdict(bench) is GO) is closes
    if date.strip() and not closes:
        assert f"is dated {date}, after the card's issue" in finding.reason


def test_17_resonance_passed_outside_every_band_needs_a_document(bench, paper):
    rows = bench.rows("crossing_cover", segment="1.3r", mode="stand sway", harmonic="1")
    bench.flag("crossing_cover", rows, Status.NOT_COMPUTED, "outside every declared band")
    finding = bench.finding("keep-out-cover")
    assert (finding.verdict, finding.segment) == (OPEN, "1.3r")
    assert "not computed: outside every declared band" in finding.reason
    assert bench.covered("resonance", "ramp").verdict is OPEN
    assert run_verdict(bench) is OPEN
    papers = bench.plan.documents
    bench.change(documents=(*papers, paper("resonance", "hold", "stop")))
    assert run_verdict(bench) is OPEN
    bench.change(documents=(*papers, paper("resonance", "ramp")))
    assert bench.finding("keep-out-cover").closed_by == "DOC resonance"
    assert run_verdict(bench) is GO


def with_every_document(plan, paper):
    """A plan with a document for everything that a document can be for."""
    papers = tuple(
        replace(paper(name, *parts, "run"), wind_limit_m_s=99.0, speed_limit_rad_s=999.0)
        for name, (_, parts) in HAZARD_CLASSES.items()
    )
    return replace(plan, documents=papers)


def test_12_missing_trip_is_closed_by_no_document(sample, run_predict, paper):
    plan = sample("articulated-run-up")
    drive = replace(plan.stand.drive, overspeed_trip_rad_s=None)
    plan = with_every_document(replace(plan, stand=replace(plan.stand, drive=drive)), paper)
    judgement = judge(plan, segments(plan), REGISTER, run_predict(plan))
    assert judgement.verdict.rank >= OPEN.rank
    for rule in ("trip-above-card", "trip-below-proven"):
        finding = next(f for f in judgement.findings if f.rule == rule)
        assert (finding.verdict, finding.closed_by) == (OPEN, "")
        assert finding.reason == "not stated: the stand file states no overspeed trip"
    covered = {(c.hazard_class, c.where): c for c in judgement.coverage}
    drive_run = covered["drive and overspeed", "run"]
    assert (drive_run.verdict, drive_run.closed_by) == (OPEN, "")


def test_12_value_that_is_not_stated_is_closed_by_no_document(bench, paper):
    bench.plan = with_every_document(bench.plan, paper)
    assert run_verdict(bench) is GO
    bench.flag("trip_above_card", [0], Status.NOT_STATED, "no trip")
    assert bench.finding("trip-above-card").closed_by == ""
    assert bench.covered("drive and overspeed", "run").closed_by == ""
    assert run_verdict(bench) is OPEN


@pytest.mark.parametrize(
    ("allowance", "rule"),
    [("torque", "drive-torque"), ("frequency", "lag-low-spacing"), ("air_load", "stand-thrust")],
)
def test_12_missing_allowance_is_closed_by_no_document(bench, paper, allowance, rule):
    bench.plan = with_every_document(bench.plan, paper)
    kept = tuple(a for a in bench.plan.rule_book.allowances if a.id != allowance)
    bench.change_book(allowances=kept)
    finding = bench.finding(rule)
    assert (finding.verdict, finding.closed_by) == (OPEN, "")
    assert finding.reason.startswith("not stated: rule book states no allowance")
    assert run_verdict(bench) is OPEN


@pytest.mark.parametrize("fitted", [None, False])
def test_12_mode_without_the_rotors_mass_is_closed_by_no_document(bench, paper, fitted):
    bench.plan = with_every_document(bench.plan, paper)
    modes = tuple(replace(m, rotor_fitted=fitted) for m in bench.plan.stand.modes)
    bench.change(stand=replace(bench.plan.stand, modes=modes))
    for rule in ("stand-spacing", "shaft-spacing", "keep-out-cover"):
        finding = bench.finding(rule)
        assert (finding.verdict, finding.closed_by) == (OPEN, "")
    assert bench.covered("resonance", "hold").closed_by == ""
    assert run_verdict(bench) is OPEN


def test_12_unstated_fitting_is_closed_by_no_document_as_predicted(sample, run_predict, paper):
    plan = sample("articulated-run-up")
    modes = tuple(replace(m, rotor_fitted=None) for m in plan.stand.modes)
    plan = with_every_document(replace(plan, stand=replace(plan.stand, modes=modes)), paper)
    judgement = judge(plan, segments(plan), REGISTER, run_predict(plan))
    finding = next(f for f in judgement.findings if f.rule == "stand-spacing")
    assert (finding.verdict, finding.closed_by) == (OPEN, "")
    assert finding.reason.startswith("not stated: the stand file does not say")
    assert judgement.verdict.rank >= OPEN.rank
