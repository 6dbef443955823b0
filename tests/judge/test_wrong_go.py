"""Each way in which a wrong GO could come out, numbered as in ``planner.judge.judge``."""

import math
from dataclasses import replace

import pytest

from planner.judge.judge import judge
from planner.model.plan import KeepOut
from planner.model.results import Labels, Status, Verdict
from planner.model.rules import HAZARD_CLASSES, Limit, SpeedRange
from planner.predict.register import REGISTER

GO, CAUTION, OPEN, NO_GO = Verdict.GO, Verdict.CAUTION, Verdict.NOT_ASSESSED, Verdict.NO_GO


def run_verdict(bench) -> Verdict:
    return Verdict(bench.judge().verdict)


# 1, 3 and 4: test_example_book.py tries every rule; 14 to 16: test_coverage.py; 17: and what of 12
# documents do not close: test_documents.py. Here is what is left.


def test_01_all_numbers_nan_is_never_go(bench):
    for quantity in list(bench.predictions):
        rows = bench.rows(quantity)
        bench.put(quantity, rows, value=math.nan, low=math.nan, high=math.nan)
    judgement = bench.judge()
    assert judgement.verdict is OPEN
    assert set(judgement.segment_verdicts.values()) == {OPEN}


@pytest.mark.parametrize("status", [Status.OUTSIDE_VALIDITY, Status.NOT_CONVERGED])
def test_02_number_beyond_the_limit_that_is_not_proven_is_told_not_judged(bench, status):
    rows = bench.rows("thrust", segment="1.3h")
    bench.put("thrust", rows, high=50_000.0)
    bench.flag("thrust", rows, status, "wind across the disc")
    finding = bench.finding("stand-thrust")
    assert finding.verdict is OPEN
    assert "for information: 50000 N, beyond the limit 20000 N" in finding.reason


def test_02_number_inside_the_limit_that_is_not_proven_is_not_go(bench):
    bench.flag("thrust", bench.rows("thrust", segment="1.3h"), Status.OUTSIDE_VALIDITY)
    finding = bench.finding("stand-thrust")
    assert finding.verdict is OPEN
    assert "within the limit" in finding.reason


def test_03_value_outside_its_own_low_and_high_still_counts(bench):
    bench.put("thrust", bench.rows("thrust", segment="1.3h"), value=20_001.0)
    assert bench.finding("stand-thrust").verdict is NO_GO


def test_03_downward_thrust_beyond_the_rating_is_no_go(bench):
    ratings = replace(bench.plan.stand.ratings, thrust_N=4_000.0)
    bench.change(stand=replace(bench.plan.stand, ratings=ratings))
    for quantity in ("thrust", "thrust_peak"):
        bench.put(quantity, bench.rows(quantity), value=1_000.0, low=900.0, high=1_100.0)
    assert run_verdict(bench) is GO
    rows = bench.rows("thrust", segment="1.3h")
    bench.put("thrust", rows, value=-22_000.0, low=-23_000.0, high=-21_000.0)
    finding = bench.finding("stand-thrust")
    assert (finding.verdict, finding.segment) == (NO_GO, "1.3h")
    assert finding.reason == "23000 N against limit at most 4000 N"
    assert finding.margin == pytest.approx(-19_000.0)
    assert run_verdict(bench) is NO_GO


@pytest.mark.parametrize(
    ("low", "verdict"), [(-4_001.0, NO_GO), (-3_300.0, CAUTION), (-3_100.0, GO)]
)
@pytest.mark.parametrize("segment", ["1.3h", "1.4r", "stop"])
def test_03_torque_that_brakes_is_held_against_the_rating(bench, segment, low, verdict):
    bench.put("torque", bench.rows("torque", segment=segment), value=-3_000.0, low=low, high=0.0)
    assert bench.finding("drive-torque").verdict is verdict
    assert run_verdict(bench) is verdict


def test_03_lower_bound_on_a_quantity_dangerous_both_ways_closes_nothing(bench):
    for rule in ("stand-thrust", "drive-torque", "drive-power"):
        bench.change_rule(rule, sense="at least", limit=Limit(constant=-1e9), caution=None)
        assert bench.finding(rule).verdict is GO
    assert bench.covered("loads", "hold").verdict is OPEN
    assert bench.covered("drive and overspeed", "ramp").verdict is OPEN


def test_04_only_binary_representation_is_forgiven(bench):
    rows = bench.rows("collective_step", segment="1.2r")
    step = math.radians(6.0) - math.radians(4.0)
    assert step > math.radians(2.0)
    bench.put("collective_step", rows, value=step, low=step, high=step)
    assert bench.finding("collective-step").verdict is GO
    beyond = math.radians(2.0) * (1.0 + 1e-11)
    bench.put("collective_step", rows, high=beyond)
    assert bench.finding("collective-step").verdict is NO_GO


def test_04_limit_of_zero_forgives_nothing(bench):
    bench.change_rule("keep-out-distance", limit=Limit(constant=0.0))
    bench.put("band_distance", bench.rows("band_distance", segment="1.2h"), low=-1e-300)
    assert bench.finding("keep-out-distance").verdict is NO_GO


def test_05_rule_about_an_unknown_quantity_is_not_assessed(bench):
    bench.add_rule(quantity="blade_colour")
    finding = bench.finding("added")
    assert (finding.verdict, finding.reason) == (OPEN, "there is no quantity 'blade_colour'")
    assert run_verdict(bench) is OPEN


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        ({"where": ("abort",)}, "matches nothing: no thrust at abort"),
        ({"where": ()}, "matches nothing: no thrust at nowhere"),
        ({"mode_family": "flap"}, "it is for modes, thrust has none"),
        ({"mode_orders": (1,)}, "matches nothing"),
        ({"speed_range": SpeedRange(from_rad_s=39.0)}, "in the rule's speed range"),
        ({"quantity": "card_speed"}, 'whole run, so where must have "run"'),
        ({"quantity": "harmonic_spacing", "mode_family": "tail"}, "for tail modes"),
        ({"quantity": "harmonic_spacing", "harmonics": (7, 9)}, "per revolution 7, 9"),
        ({"quantity": "harmonic_spacing", "mode_family": "shaft", "mode_orders": (1,)}, "shaft"),
    ],
)
def test_06_rule_that_matches_nothing_is_not_assessed(bench, changes, words):
    basis = {"quantity": "thrust", "where": ("hold",), "hazard_class": "loads"}
    limits = {"limit": Limit(constant=1.0), "caution": None, "speed_range": SpeedRange()}
    quantity = changes.get("quantity", "thrust")
    unit = {"unit": REGISTER[quantity].unit}
    bench.add_rule(**basis | limits | unit | changes)
    finding = bench.finding("added")
    assert (finding.verdict, finding.tested) == (OPEN, 0)
    assert words in finding.reason
    assert run_verdict(bench) is OPEN


def test_06_shaft_rule_on_a_stand_without_shaft_modes_is_not_assessed(bench):
    bench.change(stand=replace(bench.plan.stand, modes=bench.plan.stand.modes[:1]))
    bench.drop("harmonic_spacing", bench.rows("harmonic_spacing", mode="shaft twist"))
    assert bench.finding("shaft-spacing").verdict is OPEN
    assert bench.covered("resonance", "hold").verdict is OPEN


def test_07_mode_left_out_of_one_hold_is_not_assessed(bench):
    bench.change_rule("lag-high-spacing", speed_range=SpeedRange())
    bench.drop("harmonic_spacing", bench.rows("harmonic_spacing", segment="1.3h", mode="lag 2"))
    finding = bench.finding("lag-high-spacing")
    assert (finding.verdict, finding.segment) == (OPEN, "1.3h")
    assert "nothing was predicted for lag 2 at 1.3h" in finding.reason


def test_07_mode_of_the_stand_left_out_everywhere_is_not_assessed(bench):
    bench.change(
        stand=replace(
            bench.plan.stand,
            modes=(*bench.plan.stand.modes, replace(bench.plan.stand.modes[0], name="rock")),
        )
    )
    assert "nothing was predicted for stand rock" in bench.finding("stand-spacing").reason


def test_07_order_that_the_rule_names_left_out_everywhere_is_not_assessed(bench):
    bench.drop("harmonic_spacing", bench.rows("harmonic_spacing", mode="flap 2"))
    finding = bench.finding("flap-low-spacing")
    assert finding.verdict is OPEN
    assert "order 2 of the mode family" in finding.reason


def test_07_order_is_known_by_the_first_number_of_a_mode(bench):
    old = bench.predictions["harmonic_spacing"]
    named = tuple(
        replace(label, mode="flap 2 cyclic") if label.mode == "flap 2" else label
        for label in old.labels
    )
    bench.predictions["harmonic_spacing"] = replace(old, labels=named)
    assert bench.finding("flap-low-spacing").verdict is GO


def test_07_band_left_out_of_a_ramp_that_enters_it_is_not_assessed(bench):
    bench.change(keep_outs=(*bench.plan.keep_outs, KeepOut("flap", 25.0, 26.0, "flap mode")))
    finding = bench.finding("keep-out-rate")
    assert finding.verdict is OPEN
    assert "nothing was predicted for band flap" in finding.reason


def test_07_band_that_no_ramp_enters_asks_for_nothing(bench):
    bench.change(keep_outs=(*bench.plan.keep_outs, KeepOut("far", 38.0, 39.0, "flap mode")))
    assert bench.finding("keep-out-rate").verdict is GO


@pytest.mark.parametrize(
    ("labels", "words"),
    [
        (Labels(segment="9.9h"), "segment 9.9h, which the plan does not have"),
        (Labels(), "without saying for which segment"),
    ],
)
def test_07_number_that_cannot_be_placed_is_not_assessed(bench, labels, words):
    old = bench.predictions["thrust"]
    at = bench.rows("thrust", segment="1.3h")[0]
    bench.predictions["thrust"] = replace(
        old, labels=(*old.labels[:at], labels, *old.labels[at + 1 :])
    )
    finding = bench.finding("stand-thrust")
    assert finding.verdict is OPEN
    assert words in finding.reason
    assert finding.not_assessed == 2


def test_07_columns_of_different_length_are_refused(bench):
    old = bench.predictions["thrust"]
    bench.predictions["thrust"] = replace(old, status=old.status[:-1])
    with pytest.raises(ValueError, match=r"zip\(\) argument"):
        bench.judge()


def test_07_prediction_filed_under_another_quantity_is_refused(bench):
    bench.predictions["thrust"] = bench.predictions["hub_moment"]
    with pytest.raises(ValueError, match=r"under 'thrust' is one of 'hub_moment'"):
        bench.judge()


@pytest.mark.parametrize(
    ("start", "covered"),
    [(10.25, True), (10.31, False)],  # hold 10 rad/s, window 0.2, gauge error 0.1
)
def test_08_window_and_gauge_error_reach_into_a_rules_range(bench, start, covered):
    bench.add_rule(
        quantity="thrust",
        sense="at most",
        limit=Limit(constant=5.0),
        caution=None,
        where=("hold",),
        hazard_class="loads",
        speed_range=SpeedRange(from_rad_s=start, to_rad_s=12.0),
    )
    finding = bench.finding("added")
    assert (finding.verdict is NO_GO) is covered


def test_08_ramp_that_passes_through_a_rules_range_is_judged_whole(bench):
    bench.add_rule(
        quantity="thrust",
        sense="at most",
        limit=Limit(constant=5.0),
        caution=None,
        where=("ramp",),
        hazard_class="loads",
        speed_range=SpeedRange(from_rad_s=24.0, to_rad_s=25.0),
    )
    assert set(bench.finding("added").segment_verdicts) == {"1.3r"}


def test_09_table_that_does_not_reach_is_not_assessed(bench):
    bench.change_rule(
        "stand-thrust", caution=None, limit=Limit(table=((0.0, 20_000.0), (36.2, 20_000.0)))
    )
    finding = bench.finding("stand-thrust")
    assert finding.verdict is OPEN
    assert "table does not reach the rotor speeds" in finding.reason
    bench.change_rule("stand-thrust", limit=Limit(table=((0.0, 2e4), (36.4, 2e4))))
    assert bench.finding("stand-thrust").verdict is GO


@pytest.mark.parametrize(
    "rows", [((0.0, 2e4), (20.0, 9e3), (50.0, 2e4)), ((0.0, 5e3), (50.0, 2e4))]
)
def test_09_strictest_value_over_a_ramp_counts(bench, rows):
    bench.change_rule("thrust-peak", caution=None, where=("stop",), limit=Limit(table=rows))
    assert Verdict(bench.finding("thrust-peak").segment_verdicts["stop"]) is NO_GO


def test_09_table_has_to_reach_only_where_the_rule_applies(bench):
    bench.change_rule(
        "stand-thrust",
        caution=None,
        where=("stop",),
        speed_range=SpeedRange(from_rad_s=20.0),
        limit=Limit(table=((20.0, 2e4), (40.0, 2e4))),
    )
    assert bench.finding("stand-thrust").verdict is GO


@pytest.mark.parametrize("status", [Status.NOT_CONVERGED, Status.NOT_STATED])
def test_10_reference_that_rests_on_a_failed_prediction_is_not_assessed(bench, paper, status):
    start = SpeedRange(from_rad_s=1.0, from_reference="stop_free_speed")
    bench.change_rule("droop-clearance-angle", speed_range=start)
    assert bench.finding("droop-clearance-angle").verdict is GO
    bench.flag("stop_free_speed", [0], status, "no root")
    finding = bench.finding("droop-clearance-angle")
    assert finding.verdict is OPEN
    assert f"stop_free_speed is {status.value}: no root" in finding.reason
    stops = paper("stops", "run", "hold", "ramp", "stop")
    bench.change(documents=(*bench.plan.documents, stops))
    assert run_verdict(bench) is OPEN


def test_10_rating_of_zero_is_no_reference(bench):
    ratings = replace(bench.plan.stand.ratings, thrust_N=0.0)
    bench.change(stand=replace(bench.plan.stand, ratings=ratings))
    bench.change_rule("stand-thrust", sense="at least", caution=None)
    assert bench.finding("stand-thrust").verdict is OPEN


def test_10_caution_that_cannot_be_resolved_is_not_assessed(bench):
    bench.change_rule("stand-thrust", caution=Limit(share=0.8, reference="moon"))
    finding = bench.finding("stand-thrust")
    assert finding.verdict is OPEN
    assert finding.reason == "caution level: there is no reference value 'moon'"


@pytest.mark.parametrize(
    "limit", [None, Limit(), Limit(constant=math.nan), Limit(constant=math.inf), Limit(share=0.5)]
)
def test_10_rule_without_a_limit_is_not_assessed(bench, limit):
    bench.change_rule("stand-thrust", limit=limit, caution=None)
    assert bench.finding("stand-thrust").verdict is OPEN


def test_11_limit_of_another_dimension_is_not_assessed(bench):
    bench.change_rule("stand-thrust", limit=Limit(share=1.0, reference="drive_torque_rating"))
    assert (
        "thrust (N) is held against drive_torque_rating (N m)"
        in bench.finding("stand-thrust").reason
    )
    bench.change_rule("hub-moment", unit="kN", limit=Limit(constant=1e9), caution=None)
    assert bench.finding("hub-moment").verdict is OPEN


def test_12_allowance_missing_from_the_book_takes_the_ok(bench):
    kept = tuple(a for a in bench.plan.rule_book.allowances if a.id != "torque")
    bench.change_book(allowances=kept)
    finding = bench.finding("drive-torque")
    assert finding.verdict is OPEN
    assert "not stated: rule book states no allowance 'torque'" in finding.reason


@pytest.mark.parametrize("fitted", [None, False])
def test_12_mode_found_without_the_rotors_mass_is_not_assessed(bench, fitted):
    modes = tuple(replace(m, rotor_fitted=fitted) for m in bench.plan.stand.modes)
    bench.change(stand=replace(bench.plan.stand, modes=modes))
    assert bench.finding("stand-spacing").verdict is OPEN
    assert bench.finding("lag-low-spacing").verdict is GO


def spoil_flap(bench, damping: float) -> None:
    """Put flap 1 on a harmonic at one hold, damped as given."""
    spacing = bench.rows("harmonic_spacing", segment="1.4h", mode="flap 1")
    bench.put("harmonic_spacing", spacing, value=0.01, low=0.0)
    at = bench.rows("mode_damping", segment="1.4h", mode="flap 1")
    bench.put("mode_damping", at, value=damping, low=damping, high=damping)


def test_13_well_damped_mode_is_exempt_and_listed(bench):
    spoil_flap(bench, 0.1)
    finding = bench.finding("flap-low-spacing")
    assert finding.verdict is GO
    assert finding.reason == "exempt by damping: flap 1 (2 times)"
    assert finding.tested == 2


def test_13_damping_just_below_does_not_exempt(bench):
    spoil_flap(bench, 0.0999)
    assert bench.finding("flap-low-spacing").verdict is NO_GO


@pytest.mark.parametrize("status", [Status.NOT_COMPUTED, Status.OUTSIDE_VALIDITY])
def test_13_damping_that_is_not_assessed_does_not_exempt(bench, status):
    spoil_flap(bench, 0.5)
    rows = bench.rows("mode_damping", segment="1.4h", mode="flap 1")
    bench.flag("mode_damping", rows, status)
    assert bench.finding("flap-low-spacing").verdict is NO_GO


def test_13_damping_at_its_low_end_missing_or_nan_does_not_exempt(bench):
    spoil_flap(bench, 0.5)
    rows = bench.rows("mode_damping", segment="1.4h", mode="flap 1")
    bench.put("mode_damping", rows, low=0.05)
    assert bench.finding("flap-low-spacing").verdict is NO_GO
    bench.put("mode_damping", rows, low=0.5, high=math.nan)
    assert bench.finding("flap-low-spacing").verdict is NO_GO
    del bench.predictions["mode_damping"]
    assert bench.finding("flap-low-spacing").verdict is NO_GO


def test_13_damping_exempts_no_number_that_was_not_computed(bench):
    spoil_flap(bench, 0.5)
    rows = bench.rows("harmonic_spacing", segment="1.4h", mode="flap 1")
    bench.flag("harmonic_spacing", rows, Status.NOT_COMPUTED)
    assert bench.finding("flap-low-spacing").verdict is OPEN


@pytest.mark.parametrize(
    ("harmonics", "verdict", "tested"), [((), NO_GO, 2), ((1,), GO, 1), ((2, 3), NO_GO, 1)]
)
def test_harmonics_that_a_rule_does_not_cover_are_set_aside(bench, harmonics, verdict, tested):
    rows = bench.rows("harmonic_spacing", segment="1.4h", mode="lag 1", harmonic="2")
    bench.put("harmonic_spacing", rows, low=0.0)
    bench.change_rule("lag-low-spacing", harmonics=harmonics)
    finding = bench.finding("lag-low-spacing")
    assert (finding.verdict, finding.tested) == (verdict, tested)
    assert "harmonics" not in finding.reason


def test_failed_prediction_without_harmonic_is_not_set_aside(bench):
    old = bench.predictions["harmonic_spacing"]
    at = bench.rows("harmonic_spacing", segment="1.4h", mode="lag 1")
    bare = tuple(
        replace(label, harmonic="") if i in at else label for i, label in enumerate(old.labels)
    )
    bench.predictions["harmonic_spacing"] = replace(old, labels=bare)
    bench.flag("harmonic_spacing", at, Status.NOT_COMPUTED)
    bench.change_rule("lag-low-spacing", harmonics=(1,))
    assert bench.finding("lag-low-spacing").verdict is OPEN


@pytest.mark.parametrize(
    ("cap", "rule", "verdict"),
    [
        ({"wind_mean_cap_m_s": 5.9}, "wind cap: mean", NO_GO),
        ({"wind_mean_cap_m_s": 6.4}, "wind cap: mean", NO_GO),
        ({"wind_mean_cap_m_s": 6.5}, "wind cap: mean", GO),
        ({"wind_gust_cap_m_s": 8.9}, "wind cap: gust", NO_GO),
        ({"wind_gust_cap_m_s": 9.4}, "wind cap: gust", NO_GO),
        ({"wind_mean_cap_m_s": None}, "wind cap: mean", OPEN),
        ({"wind_gust_cap_m_s": math.nan}, "wind cap: gust", OPEN),
        ({"wind_gust_cap_m_s": 9.5}, "wind cap: gust", GO),
    ],
)
def test_18_wind_with_anemometer_error_is_held_against_the_cap(bench, cap, rule, verdict):
    bench.change_book(**cap)
    assert bench.finding(rule).verdict is verdict
    assert run_verdict(bench) is verdict


def test_19_hand_check_that_disagrees_is_a_finding(bench):
    bench.put("thrust", bench.rows("thrust", segment="1.2h"), hand=5_000.0)
    judgement = bench.judge()
    finding = bench.finding("hand check: thrust")
    assert (finding.verdict, finding.segment) == (OPEN, "1.2h")
    assert judgement.verdict is OPEN
    assert judgement.segment_verdicts["1.2h"] is OPEN
    assert judgement.segment_verdicts["1.3h"] is GO


def test_20_class_that_is_open_marks_every_segment_of_its_kind(bench):
    kept = tuple(r for r in bench.plan.rule_book.rules if r.hazard_class != "clearance")
    bench.change_book(rules=kept)
    verdicts = bench.judge().segment_verdicts
    assert set(verdicts.values()) == {OPEN}


def test_20_class_of_the_run_that_is_open_marks_the_run_only(bench):
    bench.change(documents=tuple(d for d in bench.plan.documents if d.hazard_class != "people"))
    judgement = bench.judge()
    assert judgement.verdict is OPEN
    assert set(judgement.segment_verdicts.values()) == {GO}


def test_21_nothing_at_all_is_not_assessed(bench):
    bench.change_book(rules=(), allowances=())
    bench.change(documents=())
    judgement = judge(bench.plan, (), {}, {})
    assert judgement.verdict is OPEN
    assert {c.verdict for c in judgement.coverage} == {OPEN}
    assert {(c.hazard_class, c.where) for c in judgement.coverage} == {
        (name, part) for name, (_, parts) in HAZARD_CLASSES.items() for part in parts
    }


def test_21_class_added_by_plan_or_book_has_to_be_closed_too(bench, paper):
    bench.change(extra_classes=("lightning",))
    bench.change_book(extra_classes=(("noise", "Noise"),))
    assert bench.covered("lightning", "run").verdict is OPEN
    assert run_verdict(bench) is OPEN
    bench.change(documents=(*bench.plan.documents, paper("lightning", "run")))
    bench.add_rule(
        quantity="tip_speed",
        sense="at most",
        limit=Limit(constant=200.0),
        caution=None,
        where=("run",),
        hazard_class="noise",
        speed_range=SpeedRange(),
    )
    assert bench.covered("noise", "run").closed_by == "added"
    assert run_verdict(bench) is GO


def test_worst_verdict_of_all_decides_the_run(bench):
    bench.put("thrust", bench.rows("thrust", segment="1.2h"), high=17_000.0)
    assert run_verdict(bench) is CAUTION
    assert bench.judge().segment_verdicts["1.2h"] is CAUTION
    bench.flag("hub_moment", bench.rows("hub_moment", segment="1.2h"), Status.NOT_COMPUTED)
    assert run_verdict(bench) is OPEN
    bench.put("thrust", bench.rows("thrust", segment="1.3h"), high=21_000.0)
    judgement = bench.judge()
    assert judgement.verdict is NO_GO
    assert judgement.segment_verdicts["1.2h"] is OPEN
    assert judgement.segment_verdicts["1.3h"] is NO_GO


def test_rule_from_the_stop_free_speed_covers_what_reaches_it(bench):
    rows = bench.rows("stop_free_speed")
    bench.put("stop_free_speed", rows, value=25.0, low=25.0, high=25.0)
    start = SpeedRange(from_rad_s=1.0, from_reference="stop_free_speed")
    where = ("hold", "ramp", "stop")
    bench.change_rule("droop-clearance-angle", speed_range=start, where=where)
    judged = bench.finding("droop-clearance-angle").segment_verdicts
    assert set(judged) == {"1.3r", "1.3h", "1.4r", "1.4h", "stop"}
