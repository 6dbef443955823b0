"""Rules on resonances: the ways 27 to 30 to a wrong GO, as in ``planner.judge.judge``."""

import math
from dataclasses import replace

import numpy as np
import pytest

from planner.judge.case import place_words
from planner.judge.evidence import Evidence, wanted
from planner.judge.rows import family_of, order_of, stand_mode_of
from planner.model.plan import ABORT_CAUSES, KeepOut
from planner.model.results import Labels, Status, Verdict
from planner.model.rotor import TeeteringHub
from planner.model.rules import Limit, SpeedRange
from planner.model.stand import Column, DriveTrain, TrainInertia, TrainShaft
from tests.judge.conftest import TWO_HOLDS, fresh

GO, CAUTION, OPEN, NO_GO = Verdict.GO, Verdict.CAUTION, Verdict.NOT_ASSESSED, Verdict.NO_GO
BEHIND, AHEAD = "stand sway, Ω - ω", "stand sway, Ω + ω"
SPACING, SWAY = "fixed_frame_spacing", "passage_amplitude"
COLUMN = Column(8.0, 1e9, 2_000.0, 900.0, 0.02, "computed")
TRAIN = DriveTrain(
    (TrainInertia("motor", 1.0, 5.0), TrainInertia("hub", 30.0, 1.0)),
    (TrainShaft("shaft", 1e5, 1.0),),
    0.01,
    "computed",
)


@pytest.fixture
def bench():
    """Holds at 10 and 36 rad/s; the second ramp passes a keep-out band."""
    return fresh("articulated", TWO_HOLDS)


def run_verdict(bench) -> Verdict:
    return Verdict(bench.judge().verdict)


def blank(bench, quantity: str, labels: Labels, status: Status) -> None:
    """Leave one row without a number."""
    bench.drop(quantity, bench.rows(quantity)[1:])
    old = bench.predictions[quantity]
    bench.predictions[quantity] = replace(old, labels=(labels,), value=np.array([math.nan]))
    bench.flag(quantity, [0], status, "none there")


def rename(bench, quantity: str, *, to: dict[str, str], **labels: str) -> None:
    """Give the rows with some labels others."""
    rows = bench.rows(quantity, **labels)
    old = bench.predictions[quantity]
    named = [replace(x, **to) if i in rows else x for i, x in enumerate(old.labels)]
    bench.predictions[quantity] = replace(old, labels=tuple(named))


def asked(bench, segment: str) -> tuple[Evidence, ...]:
    """What the class of resonances asks for in a segment."""
    place = next(p for p in bench.case.stretches if p.segment.id == segment)
    return wanted("resonance", place, bench.case) or ()


def pass_sway_at(bench, speed_rad_s: float) -> None:
    """Put the stand mode where the second ramp may pass it."""
    rows = bench.rows("mode_frequency", mode="stand sway")
    bench.put("mode_frequency", rows, value=speed_rad_s, low=speed_rad_s, high=speed_rad_s)


# Modes that follow from a column or a drive train


@pytest.mark.parametrize(
    ("changes", "rule", "mode"),
    [
        ({"column": COLUMN}, "stand-spacing", "stand column 1"),
        ({"column": COLUMN}, "passage-sway", "stand column 1"),
        ({"column": COLUMN}, "keep-out-cover", "stand column 1"),
        ({"column": COLUMN}, "lag-against-stand", "lag 1, against stand column 1, Ω + ω"),
        ({"drive_train": TRAIN}, "shaft-spacing", "shaft train 1"),
    ],
)
def test_07_mode_of_column_or_drive_train_without_numbers_is_not_assessed(
    bench, changes, rule, mode
):
    assert bench.finding(rule).verdict is GO
    bench.change(stand=replace(bench.plan.stand, **changes))
    finding = bench.finding(rule)
    assert finding.verdict is OPEN
    assert f"nothing was predicted for {mode} at" in finding.reason
    assert run_verdict(bench) is OPEN


def test_07_every_mode_of_a_drive_train_is_looked_for(bench):
    """One for each inertia; the first does not stand in for the second."""
    sway = bench.plan.stand.modes[:1]
    bench.change(stand=replace(bench.plan.stand, modes=sway, drive_train=TRAIN))
    rename(bench, "harmonic_spacing", mode="shaft twist", to={"mode": "shaft train 1"})
    finding = bench.finding("shaft-spacing")
    assert finding.verdict is OPEN
    assert "nothing was predicted for shaft train 2 at 1.1h" in finding.reason


def test_15_mode_of_a_column_is_asked_for_by_name(bench):
    bench.change(stand=replace(bench.plan.stand, column=COLUMN))
    of_hold = {(e.quantity, e.mode, e.harmonic) for e in asked(bench, "1.1h")}
    assert {("harmonic_spacing", "stand column 1", n) for n in ("1", "4")} <= of_hold
    of_ramp = {(e.quantity, e.mode) for e in asked(bench, "1.1r")}
    assert {(q, "stand column 1") for q in ("crossing_cover", SWAY)} <= of_ramp


# Sway of the hub


def test_10_stand_without_a_rated_sway_is_not_assessed(bench, paper):
    ratings = replace(bench.plan.stand.ratings, hub_amplitude_m=None)
    bench.change(stand=replace(bench.plan.stand, ratings=ratings))
    papers = (paper("resonance", "hold", "ramp", "stop"), paper("aborts", "abort"))
    bench.change(documents=(*bench.plan.documents, *papers))
    finding = bench.finding("passage-sway")
    assert (finding.verdict, finding.tested, finding.closed_by) == (OPEN, 0, "")
    assert "the stand file states no hub_amplitude in [ratings]" in finding.reason
    assert run_verdict(bench) is OPEN


@pytest.mark.parametrize(
    ("high", "verdict"), [(0.0051, NO_GO), (0.0041, CAUTION), (0.0039, GO), (math.nan, OPEN)]
)
@pytest.mark.parametrize("state", ["", ABORT_CAUSES[1]])
def test_sway_is_held_against_what_the_stand_bears(bench, state, high, verdict):
    bench.put(SWAY, bench.rows(SWAY, segment="1.2r", state=state), high=high)
    assert bench.finding("passage-sway").verdict is verdict
    assert bench.judge().segment_verdicts["1.2r"] is verdict


@pytest.mark.parametrize("quantity", [SWAY, "crossing_cover"])
@pytest.mark.parametrize(
    ("frequency_rad_s", "verdict"),
    [(20.0, OPEN), (36.05, OPEN), (36.15, GO), (9.95, OPEN), (9.85, GO), (math.nan, OPEN)],
)
def test_27_resonance_that_the_ramp_passes_cannot_fail_to_apply(
    bench, quantity, frequency_rad_s, verdict
):
    """The second ramp runs from 10 to 36 rad/s, the gauge errs by 0.1 rad/s."""
    pass_sway_at(bench, frequency_rad_s)
    rows = bench.rows(quantity, segment="1.2r", mode="stand sway")
    rows = [i for i in rows if not bench.predictions[quantity].labels[i].state]
    bench.flag(quantity, rows, Status.NOT_APPLICABLE, "not passed")
    assert bench.covered("resonance", "ramp").verdict is verdict
    assert run_verdict(bench) is verdict
    if verdict is OPEN:
        wanted_words = f"judges {quantity} of stand sway at 1 per revolution at 1.2r"
        assert wanted_words in bench.covered("resonance", "ramp").reason


def test_27_allowance_and_doubt_of_the_frequency_widen_what_is_passed(bench):
    bench.flag(SWAY, bench.rows(SWAY, segment="1.2r", state=""), Status.NOT_APPLICABLE, "no")
    rows = bench.rows("mode_frequency", mode="stand sway")
    assert run_verdict(bench) is GO
    bench.put("mode_frequency", rows[:1], low=36.0)
    assert run_verdict(bench) is OPEN
    bench.put("mode_frequency", rows[:1], low=70.0)
    bench.flag("mode_frequency", rows[:1], Status.OUTSIDE_VALIDITY)
    assert run_verdict(bench) is OPEN
    del bench.predictions["mode_frequency"]
    assert run_verdict(bench) is OPEN


@pytest.mark.parametrize("cause", ABORT_CAUSES)
def test_27_abort_from_above_passes_the_mode(bench, cause):
    """Only a brake or a retracting stop can be absent; power can always be cut."""
    pass_sway_at(bench, 20.0)
    slow = bench.rows(SWAY, segment="1.1h", state=cause)
    bench.flag(SWAY, slow, Status.NOT_APPLICABLE, "not passed")
    assert run_verdict(bench) is GO
    rows = bench.rows(SWAY, segment="1.2h", state=cause)
    bench.flag(SWAY, rows, Status.NOT_APPLICABLE, "not passed")
    verdict = OPEN if cause in ABORT_CAUSES[:2] else GO
    assert bench.covered("aborts", "abort").verdict is verdict
    assert run_verdict(bench) is verdict


@pytest.mark.parametrize(
    ("quantity", "labels", "hazard_class", "part"),
    [
        ("band_rate", {"segment": "1.2r"}, "resonance", "ramp"),
        ("band_distance", {"segment": "1.2h"}, "resonance", "hold"),
        ("band_cycles", {"segment": "1.2h", "state": ABORT_CAUSES[0]}, "aborts", "abort"),
    ],
)
def test_27_band_that_is_entered_cannot_fail_to_apply(bench, quantity, labels, hazard_class, part):
    bench.flag(quantity, bench.rows(quantity, **labels), Status.NOT_APPLICABLE, "powered")
    covered = bench.covered(hazard_class, part)
    assert covered.verdict is OPEN
    assert f"judges {quantity} of band lag at" in covered.reason


@pytest.mark.parametrize("mode", ["stand sway", "shaft twist", "flap 2", "torsion 1"])
def test_27_spacing_of_a_rotor_that_turns_cannot_fail_to_apply(bench, mode):
    rows = bench.rows("harmonic_spacing", segment="1.2h", mode=mode)
    bench.flag("harmonic_spacing", rows, Status.NOT_APPLICABLE, "no harmonics at rest")
    covered = bench.covered("resonance", "hold")
    assert covered.verdict is OPEN
    assert f"judges harmonic_spacing of {mode}" in covered.reason
    assert run_verdict(bench) is OPEN


def test_27_number_of_one_band_does_not_stand_in_for_another(bench):
    bench.change(keep_outs=(*bench.plan.keep_outs, KeepOut("flap", 25.0, 26.0, "flap mode")))
    bands = [e.band for e in asked(bench, "1.2r") if e.quantity == "band_rate"]
    assert bands == ["lag", "flap"]


# Blade modes seen from the stand


def test_words_of_a_pair():
    labels = Labels("1.2h", "lag 1", "stand lateral, Ω - ω")
    assert place_words(labels) == "1.2h, lag 1, against stand lateral, Ω - ω"
    assert place_words(replace(labels, harmonic="4")) == "1.2h, lag 1, 4 per rev"
    assert stand_mode_of("stand sway, low, Ω + ω") == "stand sway, low"


@pytest.mark.parametrize(
    ("mode", "family", "order"),
    [("lag 1 cyclic", "lag", 1), ("stand column 1", "stand", None), ("shaft 2", "shaft", None)],
)
def test_order_is_that_of_a_blade_mode(mode, family, order):
    assert (family_of(mode), order_of(mode)) == (family, order)


@pytest.mark.parametrize(("low", "verdict"), [(0.04, NO_GO), (0.06, CAUTION), (0.11, GO)])
def test_lag_mode_is_held_against_the_stand(bench, low, verdict):
    rows = bench.rows(SPACING, segment="1.2h", mode="lag 1", harmonic=BEHIND)
    bench.put(SPACING, rows, low=low)
    finding = bench.finding("lag-against-stand")
    assert (finding.verdict, finding.where) == (verdict, f"1.2h, lag 1, against {BEHIND}")
    bench.flag(SPACING, bench.rows(SPACING, harmonic=AHEAD), Status.NOT_APPLICABLE, "ahead")
    assert bench.finding("lag-against-stand").verdict is verdict


@pytest.mark.parametrize(
    ("mode", "damping", "verdict"),
    [("lag 1", 0.06, GO), ("lag 1", 0.04, NO_GO), ("lag 2", 0.9, NO_GO)],
)
def test_13_lag_damper_exempts_its_own_mode_only(bench, mode, damping, verdict):
    bench.put(SPACING, bench.rows(SPACING, segment="1.2h", mode="lag 1"), low=0.0)
    rows = bench.rows("mode_damping", segment="1.2h", mode=mode)
    bench.put("mode_damping", rows, value=damping, low=damping, high=damping)
    finding = bench.finding("lag-against-stand")
    assert finding.verdict is verdict
    assert ("exempt by damping: lag 1 (2 times)" in finding.reason) is (verdict is GO)


def test_13_damping_of_a_mixed_mode_exempts_nothing(bench):
    bench.put(SPACING, bench.rows(SPACING, segment="1.2h", mode="lag 1"), low=0.0)
    rows = bench.rows("mode_damping", segment="1.2h", mode="lag 1")
    bench.put("mode_damping", rows, value=0.3, low=0.3, high=0.3)
    bench.flag("mode_damping", rows, Status.NOT_COMPUTED, "a mixture of motions")
    assert bench.finding("lag-against-stand").verdict is NO_GO


@pytest.mark.parametrize("is_bare", [False, True])
def test_28_rule_for_harmonics_does_not_set_pairs_aside(bench, is_bare, paper):
    """Not even where one of the holds has nothing to judge."""
    if is_bare:
        rows = bench.rows(SPACING, segment="1.1h")
        bench.flag(SPACING, rows, Status.NOT_APPLICABLE, "no mode of the stand")
        rename(bench, SPACING, segment="1.1h", to={"harmonic": ""})
    bench.change_rule("lag-against-stand", harmonics=(1,))
    bench.change(documents=(*bench.plan.documents, paper("resonance", "hold")))
    finding = bench.finding("lag-against-stand")
    assert (finding.verdict, finding.tested, finding.closed_by) == (OPEN, 0, "")
    assert "the rule is for rotor harmonics, this number is against stand" in finding.reason
    assert run_verdict(bench) is OPEN


@pytest.mark.parametrize("harmonic", [BEHIND, AHEAD])
@pytest.mark.parametrize("segments", [("1.2h",), ("1.1h", "1.2h")])
def test_28_pair_that_is_left_out_is_not_assessed(bench, harmonic, segments):
    """Also where it is left out everywhere and what is left does not apply."""
    for segment in segments:
        bench.drop(SPACING, bench.rows(SPACING, segment=segment, harmonic=harmonic))
    bench.flag(SPACING, bench.rows(SPACING), Status.NOT_APPLICABLE, "ahead")
    finding = bench.finding("lag-against-stand")
    assert finding.verdict is OPEN
    assert f"nothing was predicted for lag 1, against {harmonic} at" in finding.reason


def test_28_pairs_with_a_stand_that_has_modes_cannot_fail_to_apply(bench):
    blank(bench, SPACING, Labels(), Status.NOT_APPLICABLE)
    assert bench.finding("lag-against-stand").verdict is OPEN
    bench.change(stand=replace(bench.plan.stand, modes=bench.plan.stand.modes[1:]))
    bench.change_rule("lag-against-stand", mode_orders=())
    assert bench.finding("lag-against-stand").verdict is GO


def test_28_rule_without_family_asks_for_blade_modes_only(bench):
    bench.change_rule("lag-against-stand", mode_family="", mode_orders=())
    finding = bench.finding("lag-against-stand")
    assert (finding.verdict, finding.tested, finding.not_assessed) == (GO, 16, 0)


@pytest.mark.parametrize("fitted", [None, False])
def test_28_pair_with_a_mode_without_the_rotors_mass_is_not_assessed(bench, fitted):
    modes = tuple(replace(m, rotor_fitted=fitted) for m in bench.plan.stand.modes)
    bench.change(stand=replace(bench.plan.stand, modes=modes))
    finding = bench.finding("lag-against-stand")
    assert finding.verdict is OPEN
    assert "not stated to be found with the rotor's mass fitted" in finding.reason


def test_12_mode_corrected_for_the_rotors_mass_is_judged(bench):
    sway, twist = bench.plan.stand.modes
    sway = replace(sway, rotor_fitted=False, modal_mass_kg=3_000.0, missing_mass_kg=200.0)
    bench.change(stand=replace(bench.plan.stand, modes=(sway, twist)))
    assert run_verdict(bench) is GO


# Names, harmonics and orders


def test_29_mode_without_a_name_at_the_one_hold_of_a_rule_is_not_assessed(bench):
    """The rule reaches the second hold only; the first one shows that there is such a mode."""
    bench.change_rule("torsion-spacing", speed_range=SpeedRange(from_rad_s=20.0), harmonics=())
    torsion = {"segment": "1.2h", "mode": "torsion 1"}
    rename(bench, "harmonic_spacing", **torsion, to={"mode": "torsion 2"})
    finding = bench.finding("torsion-spacing")
    assert finding.verdict is OPEN
    assert finding.reason == "nothing was predicted for torsion 1 at 1.2h"


def test_29_harmonic_left_out_at_one_hold_is_not_assessed(bench):
    rows = bench.rows("harmonic_spacing", segment="1.2h", mode="shaft twist", harmonic="8")
    bench.drop("harmonic_spacing", rows)
    finding = bench.finding("shaft-spacing")
    assert (finding.verdict, finding.not_assessed) == (OPEN, 1)
    assert finding.reason == "nothing was predicted for shaft twist, 8 per rev at 1.2h"


def test_29_row_without_harmonic_stands_for_all_of_them(bench):
    """At rest there are no harmonics; a study that refused says so once for each mode."""
    rows = bench.rows("harmonic_spacing", segment="1.1h", mode="shaft twist")
    bench.drop("harmonic_spacing", rows[1:])
    shaft = {"segment": "1.1h", "mode": "shaft twist"}
    rename(bench, "harmonic_spacing", **shaft, to={"harmonic": ""})
    bench.flag("harmonic_spacing", rows[:1], Status.NOT_APPLICABLE, "no harmonics at rest")
    assert bench.finding("shaft-spacing").verdict is GO
    bench.flag("harmonic_spacing", rows[:1], Status.NOT_CONVERGED, "refused")
    assert bench.finding("shaft-spacing").not_assessed == 1


def test_29_both_motions_of_a_teetering_pair_are_asked_for(bench):
    hub = TeeteringHub(0.0, 0.0, 0.0, 0.0)
    bench.change(rotor=replace(bench.plan.rotor, hub=hub))
    modes = {e.mode for e in asked(bench, "1.2h") if e.order}
    pairs = ("flap 1", "flap 2", "lag 1", "torsion 1")
    assert modes == {f"{mode} {motion}" for mode in pairs for motion in ("cyclic", "collective")}


# Numbers of the whole card


def test_30_total_over_the_card_is_judged_and_marks_the_run(bench):
    bench.put("band_cycles_total", [0], high=501.0)
    assert bench.finding("keep-out-total").verdict is CAUTION
    bench.put("band_cycles_total", [0], high=1_001.0)
    finding = bench.finding("keep-out-total")
    assert (finding.verdict, finding.where) == (NO_GO, "band lag")
    assert run_verdict(bench) is NO_GO


def test_30_reentries_that_are_not_stated_are_closed_by_no_document(bench, paper):
    bench.flag("band_cycles_total", [0], Status.NOT_STATED, "[abort] does not state reentries")
    bench.change(documents=(*bench.plan.documents, paper("resonance", "hold", "ramp", "stop")))
    finding = bench.finding("keep-out-total")
    assert (finding.verdict, finding.closed_by) == (OPEN, "")
    assert run_verdict(bench) is OPEN


@pytest.mark.parametrize("is_bare", [False, True])
def test_30_band_without_a_total_is_not_assessed(bench, is_bare):
    bench.change(keep_outs=(*bench.plan.keep_outs, KeepOut("far", 38.0, 39.0, "flap mode")))
    if is_bare:
        blank(bench, "band_cycles_total", Labels(), Status.NOT_APPLICABLE)
    finding = bench.finding("keep-out-total")
    assert (finding.verdict, finding.not_assessed) == (OPEN, 2 if is_bare else 1)
    assert f"for band {'lag' if is_bare else 'far'} over the run" in finding.reason
    assert run_verdict(bench) is OPEN


def test_30_plan_without_bands_has_no_total(bench):
    bench.change(keep_outs=())
    blank(bench, "band_cycles_total", Labels(), Status.NOT_APPLICABLE)
    assert bench.finding("keep-out-total").verdict is GO


def test_30_total_for_other_parts_than_the_run_is_not_assessed(bench):
    bench.change_rule("keep-out-total", where=("hold", "ramp", "stop"))
    finding = bench.finding("keep-out-total")
    assert finding.verdict is OPEN
    assert 'whole run, so where must have "run"' in finding.reason


def test_30_rate_that_is_needed_is_asked_for_each_mode_of_the_stand(bench):
    limit = Limit(constant=2.0)
    changes = {"sense": "at most", "limit": limit, "caution": None, "where": ("run",)}
    bench.add_rule(quantity="passage_rate_needed", hazard_class="resonance", **changes)
    assert bench.finding("added").verdict is GO
    bench.change(stand=replace(bench.plan.stand, column=COLUMN))
    finding = bench.finding("added")
    assert finding.verdict is OPEN
    assert finding.reason == "nothing was predicted for stand column 1 over the run"
