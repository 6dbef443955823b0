"""What closes a hazard class: the ways 14 to 16 to a wrong GO, as in ``planner.judge.judge``."""

import math
from dataclasses import replace

import numpy as np
import pytest

from planner.model.results import Labels, Status, Verdict
from planner.model.rules import HAZARD_CLASSES, Limit, SpeedRange
from planner.units import to_si

GO, OPEN, NO_GO = Verdict.GO, Verdict.NOT_ASSESSED, Verdict.NO_GO
OF_MODES = (
    "harmonic_spacing",
    "mode_damping",
    "mode_frequency",
    "crossing_cover",
    "passage_amplitude",
)
PARTS = HAZARD_CLASSES["drive and overspeed"][1]


def run_verdict(bench) -> Verdict:
    return Verdict(bench.judge().verdict)


def leave_out(bench, *rules: str) -> None:
    kept = tuple(r for r in bench.plan.rule_book.rules if r.id not in rules)
    assert len(kept) == len(bench.plan.rule_book.rules) - len(rules)
    bench.change_book(rules=kept)


def add_stand_mode(bench, name: str) -> None:
    """Give the stand another mode, with the numbers of the first."""
    modes = bench.plan.stand.modes
    bench.change(stand=replace(bench.plan.stand, modes=(*modes, replace(modes[0], name=name))))
    add_pair(bench, f"stand {name}")
    for quantity in OF_MODES:
        old = bench.predictions[quantity]
        at = bench.rows(quantity, mode="stand sway")
        bench.predictions[quantity] = replace(
            old,
            labels=old.labels + tuple(replace(old.labels[i], mode=f"stand {name}") for i in at),
            status=old.status + tuple(old.status[i] for i in at),
            reasons=old.reasons + tuple(old.reasons[i] for i in at),
            **{
                column: np.concatenate((getattr(old, column), getattr(old, column)[at]))
                for column in ("value", "low", "high", "speed_rad_s", "hand")
            },
        )


def add_pair(bench, stand: str) -> None:
    """Hold the low blade modes against another mode of the stand too."""
    old = bench.predictions["fixed_frame_spacing"]
    named = [replace(x, harmonic=x.harmonic.replace("stand sway", stand)) for x in old.labels]
    bench.predictions["fixed_frame_spacing"] = replace(
        old,
        labels=(*old.labels, *named),
        status=old.status * 2,
        reasons=old.reasons * 2,
        **{
            column: np.tile(getattr(old, column), 2)
            for column in ("value", "low", "high", "speed_rad_s", "hand")
        },
    )


def absent(bench, *quantities: str) -> None:
    for quantity in quantities:
        bench.flag(quantity, bench.rows(quantity), Status.NOT_APPLICABLE, "no such part")


def test_14_part_where_nothing_applies_is_closed_by_the_rules_that_looked(bench):
    absent(bench, "droop_stop_clearance", "up_stop_clearance", "droop_stop_moment")
    finding = bench.finding("up-clearance-angle")
    assert (finding.verdict, finding.tested) == (GO, 0)
    assert finding.reason == "does not apply: no such part"
    covered = bench.covered("stops", "hold")
    assert covered.verdict is GO
    assert "droop-clearance-angle" in covered.closed_by
    assert run_verdict(bench) is GO


def test_14_part_where_nothing_applies_is_open_where_one_number_was_not_looked_at(bench):
    absent(bench, "droop_stop_clearance", "up_stop_clearance", "droop_stop_moment")
    leave_out(bench, "droop-stop-moment")
    covered = bench.covered("stops", "hold")
    assert (covered.verdict, covered.closed_by) == (OPEN, "")
    assert covered.reason == "no rule of the class judges droop_stop_moment at 1.1h"
    assert bench.judge().segment_verdicts["1.1h"] is OPEN


def test_14_rule_that_does_not_apply_closes_no_class_of_a_plan(bench):
    absent(bench, "cyclic_needed")
    bench.change(extra_classes=("cyclic",))
    bench.add_rule(
        quantity="cyclic_needed",
        sense="at most",
        limit=Limit(constant=1.0),
        caution=None,
        where=("hold",),
        hazard_class="cyclic",
    )
    assert bench.finding("added").verdict is GO
    assert bench.covered("cyclic", "run").verdict is OPEN


def exempt_from(bench, damping: float) -> None:
    for rule in bench.plan.rule_book.rules:
        if rule.quantity == "harmonic_spacing":
            bench.change_rule(rule.id, exempt_damping=damping)


def test_14_rules_exempt_altogether_close_nothing(bench):
    bench.put("mode_damping", bench.rows("mode_damping"), value=0.9, low=0.9, high=0.9)
    exempt_from(bench, 0.1)
    finding = bench.finding("lag-low-spacing")
    assert (finding.verdict, finding.tested) == (GO, 0)
    assert "exempt by damping: lag 1 (2 times)" in finding.reason
    assert bench.finding("keep-out-distance").verdict is GO
    assert bench.covered("resonance", "hold").verdict is OPEN
    assert run_verdict(bench) is OPEN


def test_14_stand_rule_that_exempts_all_closes_nothing(bench):
    bench.put("harmonic_spacing", bench.rows("harmonic_spacing", mode="stand sway"), low=0.0)
    assert bench.finding("stand-spacing").verdict is NO_GO
    bench.change_rule("stand-spacing", exempt_damping=0.001)
    assert bench.finding("stand-spacing").verdict is GO
    covered = bench.covered("resonance", "hold")
    assert covered.verdict is OPEN
    assert "harmonic_spacing of stand sway at 1 per revolution at 1.1h" in covered.reason
    assert run_verdict(bench) is OPEN


@pytest.mark.parametrize("spoilt", ["stand sway", "stand rock"])
def test_14_stand_rule_that_exempts_one_of_two_modes_closes_nothing(bench, spoilt):
    """The mode that is judged does not stand in for the one that is not."""
    add_stand_mode(bench, "rock")
    assert run_verdict(bench) is GO
    damping = bench.rows("mode_damping", mode=spoilt)
    bench.put("mode_damping", damping, value=0.05, low=0.05, high=0.05)
    bench.put("harmonic_spacing", bench.rows("harmonic_spacing", mode=spoilt), low=0.0)
    bench.change_rule("stand-spacing", exempt_damping=0.05)
    assert bench.finding("stand-spacing").verdict is GO
    assert f"harmonic_spacing of {spoilt} at" in bench.covered("resonance", "hold").reason
    assert run_verdict(bench) is OPEN


def test_14_exempt_first_flap_mode_closes_but_no_other_mode_does(bench):
    for mode, verdict in (("flap 1", GO), ("flap 2", OPEN)):
        rows = bench.rows("mode_damping", mode=mode)
        bench.put("mode_damping", rows, value=0.5, low=0.5, high=0.5)
        finding = bench.finding("flap-low-spacing")
        assert finding.verdict is GO
        assert f"{mode} (2 times)" in finding.reason
        assert bench.covered("resonance", "hold").verdict is verdict


@pytest.mark.parametrize(
    ("harmonics", "missing"), [((8,), "1"), ((1,), "4"), ((4,), "1"), ((1, 8), "4")]
)
def test_14_stand_rule_that_sets_a_driving_harmonic_aside_closes_nothing(
    bench, harmonics, missing
):
    bench.change_rule("stand-spacing", harmonics=(1, 4))
    assert run_verdict(bench) is GO
    bench.change_rule("stand-spacing", harmonics=harmonics)
    rows = bench.rows("harmonic_spacing", mode="stand sway", harmonic=missing)
    bench.put("harmonic_spacing", rows, low=0.0)
    assert bench.finding("stand-spacing").verdict is GO
    covered = bench.covered("resonance", "hold")
    assert covered.verdict is OPEN
    assert f"of stand sway at {missing} per revolution at 1.1h" in covered.reason
    assert run_verdict(bench) is OPEN


def test_14_stand_rule_for_a_harmonic_without_numbers_is_not_assessed(bench):
    bench.change_rule("stand-spacing", harmonics=(7,))
    finding = bench.finding("stand-spacing")
    assert (finding.verdict, finding.tested) == (OPEN, 0)
    assert "matches nothing" in finding.reason
    assert bench.covered("resonance", "hold").verdict is OPEN
    assert run_verdict(bench) is OPEN


def test_14_shaft_rule_that_sets_the_blade_number_aside_closes_nothing(bench):
    bench.change_rule("shaft-spacing", harmonics=(8,))
    covered = bench.covered("resonance", "hold")
    assert covered.verdict is OPEN
    assert "harmonic_spacing of shaft twist at 4 per revolution" in covered.reason


def without_bands(bench) -> None:
    bench.change(keep_outs=())
    for quantity in ("band_rate", "band_distance"):
        bench.drop(quantity, bench.rows(quantity)[1:])
        old = bench.predictions[quantity]
        bench.predictions[quantity] = replace(old, labels=(Labels(),), value=np.array([math.nan]))
        bench.flag(quantity, [0], Status.NOT_APPLICABLE, "the plan declares no keep-out band")


def test_14_plan_without_bands_is_closed_by_the_rules_that_looked(bench):
    without_bands(bench)
    assert bench.finding("keep-out-rate").verdict is GO
    assert bench.covered("resonance", "ramp").closed_by == "passage-sway, keep-out-cover"
    assert run_verdict(bench) is GO
    absent(bench, "crossing_cover", "passage_amplitude")
    closed_by = "keep-out-rate, passage-sway, keep-out-cover"
    assert bench.covered("resonance", "ramp").closed_by == closed_by
    bench.flag("passage_amplitude", bench.rows("passage_amplitude"), Status.OK)
    assert run_verdict(bench) is GO
    leave_out(bench, "keep-out-cover")
    covered = bench.covered("resonance", "ramp")
    assert covered.verdict is OPEN
    assert "crossing_cover of stand sway at 1 per revolution at 1.1r" in covered.reason


def test_14_stand_without_modes_leaves_open_what_its_ramps_pass(bench, paper):
    """Rules that looked and found nothing do not tell that there is nothing."""
    without_bands(bench)
    bench.change(stand=replace(bench.plan.stand, modes=bench.plan.stand.modes[1:]))
    for quantity in ("crossing_cover", "passage_amplitude"):
        bench.drop(quantity, bench.rows(quantity)[1:])
        old = bench.predictions[quantity]
        bench.predictions[quantity] = replace(old, labels=(Labels(),))
        bench.flag(quantity, [0], Status.NOT_APPLICABLE, "the stand file gives no mode")
    bench.change(documents=(*bench.plan.documents, paper("resonance", "hold")))
    for part, segment in (("ramp", "1.1r"), ("stop", "stop")):
        covered = bench.covered("resonance", part)
        wanted = f"crossing_cover of stand modes at 1 per revolution at {segment}"
        assert (covered.verdict, covered.closed_by) == (OPEN, "")
        assert covered.reason == f"no rule of the class judges {wanted}"
    reason = bench.covered("aborts", "abort").reason
    assert "judges passage_amplitude of stand modes at 1 per revolution at the abort" in reason
    assert run_verdict(bench) is OPEN


def test_14_rule_that_sets_all_aside_did_not_look(bench):
    without_bands(bench)
    bench.change_rule("keep-out-cover", mode_family="", harmonics=(8,))
    leave_out(bench, "keep-out-rate", "passage-sway")
    assert bench.finding("keep-out-cover").verdict is GO
    covered = bench.covered("resonance", "ramp")
    assert covered.verdict is OPEN
    assert "judges crossing_cover of stand sway at 1 per revolution at 1.1r" in covered.reason


@pytest.mark.parametrize(
    ("rule", "hazard_class", "where"),
    [
        ("up-clearance-angle", "stops", "hold"),
        ("stand-thrust", "loads", "hold"),
        ("thrust-peak", "loads", "stop"),
        ("hub-moment-peak", "loads", "ramp"),
        ("keep-out-rate", "resonance", "ramp"),
        ("torsion-spacing", "resonance", "hold"),
        ("root-force", "loads", "ramp"),
        ("droop-clearance-angle", "stops", "hold"),
        ("droop-rest-moment", "stops", "run"),
        ("droop-stop-moment", "stops", "hold"),
        ("droop-stop-peak", "stops", "ramp"),
        ("up-stop-peak", "stops", "stop"),
        ("no-contact-at-speed", "stops", "ramp"),
        ("lag-travel", "stops", "stop"),
        ("clearance-share", "clearance", "hold"),
        ("clearance-share", "clearance", "stop"),
        ("keep-out-cover", "resonance", "stop"),
        ("keep-out-distance", "resonance", "hold"),
        ("card-speed-drive", "drive and overspeed", "run"),
        ("trip-above-card", "drive and overspeed", "run"),
        ("trip-below-proven", "drive and overspeed", "run"),
        ("drive-torque", "drive and overspeed", "hold"),
        ("drive-torque", "drive and overspeed", "ramp"),
        ("drive-power", "drive and overspeed", "stop"),
        ("drive-reserve", "drive and overspeed", "ramp"),
        ("droop-stop-peak", "aborts", "abort"),
        ("no-contact-at-speed", "aborts", "abort"),
        ("lag-travel", "aborts", "abort"),
        ("clearance-share", "aborts", "abort"),
        ("hub-moment-peak", "aborts", "abort"),
        ("time-to-rest", "aborts", "abort"),
        ("keep-out-cycles", "aborts", "abort"),
        ("passage-sway", "aborts", "abort"),
        ("passage-sway", "resonance", "ramp"),
        ("passage-sway", "resonance", "stop"),
    ],
)
def test_15_book_that_lacks_a_kind_of_rule_is_not_assessed(bench, rule, hazard_class, where):
    quantity, family = bench.rule(rule).quantity, bench.rule(rule).mode_family
    rules = tuple(
        r for r in bench.plan.rule_book.rules if (r.quantity, r.mode_family) != (quantity, family)
    )
    bench.change_book(rules=rules)
    covered = bench.covered(hazard_class, where)
    assert (covered.verdict, covered.closed_by) == (OPEN, "")
    assert f"no rule of the class judges {quantity}" in covered.reason
    assert run_verdict(bench) is OPEN


@pytest.mark.parametrize(
    ("rule", "orders", "missing"),
    [("flap-low-spacing", (1,), "flap 2"), ("flap-low-spacing", (2,), "flap 1")],
)
def test_15_book_without_an_order_of_mode_is_not_assessed(bench, rule, orders, missing):
    bench.change_rule(rule, mode_orders=orders)
    assert bench.finding(rule).verdict is GO
    covered = bench.covered("resonance", "hold")
    assert covered.verdict is OPEN
    assert (
        covered.reason
        == f"no rule of the class judges harmonic_spacing of {missing} modes at 1.4h"
    )
    assert run_verdict(bench) is OPEN


def test_15_second_lag_mode_does_not_stand_in_for_the_first(bench):
    leave_out(bench, "lag-low-spacing")
    assert bench.finding("lag-high-spacing").verdict is GO
    assert "of lag 1 modes at 1.4h" in bench.covered("resonance", "hold").reason
    assert run_verdict(bench) is OPEN


def test_15_hold_inside_a_band_is_never_go_without_a_rule_on_distance(bench):
    bench.put("band_distance", bench.rows("band_distance", segment="1.2h"), value=-0.5, low=-0.9)
    assert bench.finding("keep-out-distance").verdict is NO_GO
    leave_out(bench, "keep-out-distance")
    assert "band_distance of band lag at 1.1h" in bench.covered("resonance", "hold").reason
    judgement = bench.judge()
    assert judgement.verdict is OPEN
    assert judgement.segment_verdicts["1.2h"] is OPEN


def test_15_passages_of_each_stand_mode_are_asked_for(bench):
    add_stand_mode(bench, "rock")
    assert run_verdict(bench) is GO
    rows = bench.rows("crossing_cover", mode="stand rock", segment="1.2r", harmonic="1")
    bench.drop("crossing_cover", rows)
    covered = bench.covered("resonance", "ramp")
    assert covered.verdict is OPEN
    assert "nothing was predicted for stand rock, 1 per rev at 1.2r" in covered.reason
    bench.drop("crossing_cover", bench.rows("crossing_cover", mode="stand rock", harmonic="1"))
    covered = bench.covered("resonance", "ramp")
    assert covered.verdict is OPEN
    assert "crossing_cover of stand rock at 1 per revolution at 1.1r" in covered.reason
    assert run_verdict(bench) is OPEN


def test_15_passage_time_of_the_run_does_not_stand_in_for_the_rate(bench):
    leave_out(bench, "keep-out-rate")
    bench.add_rule(
        quantity="band_time_total",
        sense="at most",
        limit=Limit(constant=1e9),
        caution=None,
        where=("run",),
        hazard_class="resonance",
    )
    assert bench.finding("added").verdict is GO
    assert "judges band_rate of band lag at 1.2r" in bench.covered("resonance", "ramp").reason


def test_15_drive_asks_for_torque_and_for_power(bench):
    kept = bench.plan.rule_book
    for rule, quantity in (("drive-torque", "torque"), ("drive-power", "power")):
        leave_out(bench, rule)
        for part, segment in (("hold", "1.1h"), ("ramp", "1.1r"), ("stop", "stop")):
            covered = bench.covered("drive and overspeed", part)
            assert covered.reason == f"no rule of the class judges {quantity} at {segment}"
        assert bench.covered("drive and overspeed", "run").verdict is GO
        bench.change(rule_book=kept)


@pytest.mark.parametrize("hazard_class", ["clearance", "people", "aborts"])
def test_15_rule_about_something_else_closes_no_class(bench, hazard_class):
    bench.change(documents=())
    rules = bench.plan.rule_book.rules
    kept = tuple(r for r in rules if r.hazard_class != hazard_class and "abort" not in r.where)
    bench.change_book(rules=kept)
    bench.add_rule(
        quantity="thrust",
        sense="at most",
        limit=Limit(constant=1e9),
        caution=None,
        where=("run",),
        hazard_class=hazard_class,
        speed_range=SpeedRange(),
    )
    part = HAZARD_CLASSES[hazard_class][1][0]
    assert bench.finding("added").verdict is GO
    assert bench.covered(hazard_class, part).verdict is OPEN


@pytest.mark.parametrize(
    ("rule", "changes", "hazard_class"),
    [
        ("stand-thrust", {"sense": "at least", "limit": Limit(constant=0.0)}, "loads"),
        ("torsion-spacing", {"sense": "at most", "limit": Limit(constant=9.0)}, "resonance"),
    ],
)
def test_15_rule_on_the_harmless_side_closes_no_class(bench, rule, changes, hazard_class):
    bench.change_rule(rule, caution=None, **changes)
    assert bench.finding(rule).verdict is GO
    covered = bench.covered(hazard_class, "hold")
    assert covered.verdict is OPEN
    assert "no rule of the class judges" in covered.reason


def test_15_stop_moment_is_no_substitute_for_clearance(bench):
    leave_out(bench, "droop-clearance-angle", "droop-clearance-share")
    assert "droop_stop_clearance at 1.1h" in bench.covered("stops", "hold").reason


def test_15_loads_of_holds_do_not_close_the_stop(bench):
    """Each part looks at numbers of its own kind only."""
    bench.change_rule("drive-torque", where=("hold", "ramp"))
    assert bench.covered("drive and overspeed", "hold").verdict is GO
    assert bench.covered("drive and overspeed", "stop").verdict is OPEN
    assert bench.judge().segment_verdicts["stop"] is OPEN
    assert bench.judge().segment_verdicts["1.4h"] is GO


def test_15_open_part_opens_no_other_part(bench):
    bench.flag("torque", bench.rows("torque", segment="1.3r"), Status.NOT_COMPUTED)
    parts = {part: bench.covered("drive and overspeed", part).verdict for part in PARTS}
    assert parts == {"run": GO, "hold": GO, "ramp": OPEN, "stop": GO}


def test_16_hold_outside_every_rules_range_is_not_assessed(bench):
    for rule in ("stand-thrust", "root-force", "hub-moment"):
        bench.change_rule(rule, speed_range=SpeedRange(from_rad_s=15.0))
    covered = bench.covered("loads", "hold")
    assert covered.verdict is OPEN
    assert "at 1.1h" in covered.reason
    assert bench.judge().segment_verdicts["1.1h"] is OPEN


def test_16_torque_rule_that_ends_below_the_fast_holds_closes_nothing(bench):
    rows = [i for s in ("1.3h", "1.4h") for i in bench.rows("torque", segment=s)]
    bench.put("torque", rows, value=9_000.0, low=9_000.0, high=9_000.0)
    assert bench.finding("drive-torque").verdict is NO_GO
    bench.change_rule("drive-torque", speed_range=SpeedRange(to_rad_s=to_si(100.0, "rpm")))
    assert bench.finding("drive-torque").verdict is GO
    covered = bench.covered("drive and overspeed", "hold")
    assert covered.reason == "no rule of the class judges torque at 1.2h"
    verdicts = bench.judge().segment_verdicts
    assert verdicts["1.3h"] is OPEN
    assert run_verdict(bench) is OPEN


def test_16_fast_hold_without_blade_modes_is_not_assessed(bench):
    rules = tuple(r for r in bench.plan.rule_book.rules if r.mode_family != "lag")
    bench.change_book(rules=rules)
    covered = bench.covered("resonance", "hold")
    assert covered.verdict is OPEN
    assert covered.reason == "no rule of the class judges harmonic_spacing of lag 1 modes at 1.4h"
