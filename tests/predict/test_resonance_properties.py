"""Wider allowances never look safer, and unusual plans are flagged, never a crash."""

from __future__ import annotations

import dataclasses
import math
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from planner.judge.judge import judge
from planner.judge.requests import requests
from planner.model.plan import Plan, Window, segments
from planner.model.results import Labels, Status, Verdict
from planner.predict.fan_series import fan_series
from planner.predict.register import REGISTER
from planner.predict.rows import Rows
from planner.predict.run import predict_only
from planner.predict.study_modes import MODES
from tests.conftest import read_sample

if TYPE_CHECKING:
    from collections.abc import Mapping

    from planner.model.plan import Segment
    from planner.model.results import Prediction

RPM = 2.0 * math.pi / 60.0
HINGELESS, TEETERING = "hingeless-model", "teetering-pair"
STUDIES = (
    "air", "wind", "stops", "schedule", "holds", "modes", "unbalance", "passages", "speeds",
)  # fmt: skip
QUANTITIES = (
    "mode_frequency", "mode_share", "mode_damping", "harmonic_spacing", "fixed_frame_spacing",
    "crossing_speed", "crossing_cover", "passage_amplitude", "passage_rate_needed",
    "band_time_total",
)  # fmt: skip


def held(
    name: str, *rpm: float, window: Window | None = None, collective_deg: float = 2.0
) -> Plan:
    """A sample plan with holds at these speeds only."""
    plan = read_sample(name)
    step = dataclasses.replace(
        plan.blocks[0].steps[1], collective_rad=math.radians(collective_deg)
    )
    step = dataclasses.replace(step, window=window or step.window)
    steps = tuple(dataclasses.replace(step, speed_rad_s=speed * RPM) for speed in rpm)
    block = dataclasses.replace(plan.blocks[0], steps=steps)
    return dataclasses.replace(plan, blocks=(block,))


def changed(plan: Plan, part: str, **values: Any) -> Plan:
    return dataclasses.replace(plan, **{part: dataclasses.replace(getattr(plan, part), **values)})


def modes_of(
    plan: Plan, allowance: tuple[float, float] = (0.97, 1.03)
) -> Mapping[str, Prediction]:
    """Modes at the holds without damping from the air, with a frequency allowance."""
    wanted = requests(plan.rule_book)
    allowances = {**wanted.allowances, "frequency": allowance}
    rows = Rows("flap_damping_ratio", "holds")
    rows.flag(Labels(), Status.NOT_COMPUTED, "not asked for here")
    wanted = dataclasses.replace(wanted, allowances=allowances)
    prior = {"flap_damping_ratio": rows.prediction()}
    return MODES.run(
        dataclasses.replace(MODES.inputs(plan, segments(plan), wanted, {}), prior=prior)
    )


@given(
    name=st.sampled_from([HINGELESS, TEETERING, "articulated-run-up"]),
    share=st.floats(0.1, 1.0),
    wider=st.tuples(st.floats(0.0, 30.0), st.floats(0.0, 0.1), st.floats(0.0, 0.1)),
)
@settings(max_examples=8)
def test_wider_window_or_allowance_never_leaves_more_distance(name, share, wider):
    more_rpm, more_pitch, more_frequency = wider
    full = read_sample(name).stand.full_speed_rad_s / RPM
    found = [
        modes_of(
            held(name, share * full, window=Window((2.0 + k * more_rpm) * RPM, 0.005 + k * pitch)),
            (0.97 - k * more_frequency, 1.03 + k * more_frequency),
        )["harmonic_spacing"]
        for k, pitch in ((0.0, 0.0), (1.0, more_pitch))
    ]
    narrow, wide = found
    assert narrow.labels == wide.labels
    assert set(narrow.status) == set(wide.status) == {Status.OK}
    near = 1e-4 * (1.0 + narrow.value)  # between the pitches that are looked at
    assert np.all(wide.low <= narrow.low + near)
    assert np.all(wide.high >= narrow.high - near)
    assert np.all(narrow.low <= narrow.value)


def predicted_of(plan: Plan, walk: tuple[Segment, ...]) -> Mapping[str, Prediction]:
    """All but the marches, judged and drawn, which must not fail either."""
    wanted = requests(plan.rule_book)
    found = predict_only(STUDIES, plan, walk, wanted)
    assert judge(plan, walk, REGISTER, found).verdict is not Verdict.GO
    drawn = fan_series(plan, walk, found, wanted)
    assert set(drawn["harmonics"]) == {"blade", "stand", "shaft"}
    for quantity in QUANTITIES:
        rows = found[quantity]
        known = np.array([status is Status.OK for status in rows.status], dtype=bool)
        assert np.all(np.isfinite(rows.value[known]))
        assert np.all((rows.low <= rows.value)[known])
        assert np.all((rows.value <= rows.high)[known])
        assert all(rows.reasons[i] for i in np.flatnonzero(~known))
    return found


def statuses(found: Mapping[str, Prediction], quantity: str) -> set[Status]:
    return set(found[quantity].status)


def test_plan_without_holds_has_crossings_and_passages_only():
    plan = held(HINGELESS, 250.0, 500.0)
    walk = tuple(s for s in segments(plan) if s.kind != "hold")
    found = predicted_of(plan, walk)
    assert found["harmonic_spacing"].labels == ()
    assert statuses(found, "crossing_speed") == {Status.OK}
    assert Status.OK in statuses(found, "passage_amplitude")


@pytest.mark.parametrize("window_rpm", [0.0, 5.0])
def test_one_hold_at_rest(window_rpm):
    plan = changed(
        held(HINGELESS, 0.0, window=Window(window_rpm * RPM, 0.0)),
        "stand",
        speed_gauge_error_rad_s=0.0,
    )
    found = predicted_of(plan, segments(plan))
    expected = {Status.OK} if window_rpm else {Status.NOT_APPLICABLE}
    assert statuses(found, "harmonic_spacing") == expected
    assert statuses(found, "mode_frequency") == {Status.OK}


def test_stand_without_modes_is_never_taken_for_a_stand_that_does_not_sway():
    bare = {"modes": (), "column": None, "drive_train": None, "measured_modes": ()}
    plan = changed(held(HINGELESS, 500.0), "stand", **bare)
    found = predicted_of(plan, segments(plan))
    assert {label.mode.split()[0] for label in found["mode_frequency"].labels} == {
        "flap", "lag", "torsion",
    }  # fmt: skip
    for quantity in (
        "fixed_frame_spacing", "crossing_cover", "passage_amplitude", "passage_rate_needed",
    ):  # fmt: skip
        assert statuses(found, quantity) == {Status.NOT_STATED}


@pytest.mark.parametrize(("n_blades", "multiples"), [(2, "2 4 6"), (5, "5 10 15")])
def test_blade_number_sets_what_shakes_stand_and_shaft(n_blades, multiples):
    plan = changed(held(HINGELESS, 500.0), "rotor", n_blades=n_blades)
    rows = predicted_of(plan, segments(plan))["harmonic_spacing"]
    for mode, expected in (
        ("stand lateral", f"1 {multiples}"),
        ("shaft train 2", multiples),
        ("flap 1", "1 2 3 4 5 6 7 8"),
    ):
        found = [label.harmonic for label in rows.labels if label.mode == mode]
        assert " ".join(found) == expected


def test_pitch_coupling_of_a_teetering_pair_moves_its_cyclic_modes_alone():
    plain = held(TEETERING, 300.0)
    hub = dataclasses.replace(plain.rotor.hub, pitch_flap_coupling_rad=0.4)
    coupled = changed(plain, "rotor", hub=hub)
    before = modes_of(plain)["mode_frequency"]
    after = predicted_of(coupled, segments(coupled))["mode_frequency"]
    assert before.labels == after.labels
    assert set(after.status) == {Status.OK}
    change = after.value / before.value - 1.0
    cyclic = np.array([label.mode.endswith("cyclic") for label in after.labels])
    assert np.abs(change[~cyclic]).max() < 1e-9
    assert 1e-4 < np.abs(change[cyclic]).max() < 0.05


def test_control_that_hardly_gives_is_as_a_rigid_one():
    stiff, rigid = (
        changed(held(HINGELESS, 500.0), "rotor", control_stiffness_N_m_rad=stiffness)
        for stiffness in (1e9, 1e15)
    )
    found = predicted_of(rigid, segments(rigid))["mode_frequency"]
    assert set(found.status) == {Status.OK}
    assert found.value == pytest.approx(modes_of(stiff)["mode_frequency"].value, rel=1e-4)


def test_collective_beyond_what_holds_is_outside_validity():
    plan = held(HINGELESS, 500.0, collective_deg=50.0)
    found = predicted_of(plan, segments(plan))
    for quantity in ("mode_frequency", "harmonic_spacing", "fixed_frame_spacing"):
        assert statuses(found, quantity) == {Status.OUTSIDE_VALIDITY}
        assert all("collective: expected within" in r for r in found[quantity].reasons)
