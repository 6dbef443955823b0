"""Sway of the hub while a mode of the stand is passed."""

from __future__ import annotations

import dataclasses
import math

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from planner.model.plan import ABORT_CAUSES
from planner.model.results import Status
from tests.predict.rows import row, rows

RPM = 2.0 * math.pi / 60.0
NAMED = ("stand lateral", "stand fore-aft")


def test_ramp_through_the_lateral_mode_equals_its_own_equation_integrated(predicted):
    """x'' + 2 ζ w x' + w² x = U/M (Ω² cos ψ + Ω' sin ψ) along the ramp of 12 rpm/s."""
    found = predicted("articulated-run-up")
    unbalance = float(found["unbalance"].value[0])
    w, zeta, mass = 2.0 * math.pi * 2.0, 0.025, 1400.0
    start, rate, end = 90.0 * RPM, 12.0 * RPM, 180.0 * RPM

    def motion(t, y, phase):
        speed = start + rate * t
        psi = start * t + 0.5 * rate * t * t + phase
        force = unbalance / mass * (speed**2 * math.cos(psi) + rate * math.sin(psi))
        return [y[1], force - 2.0 * zeta * w * y[1] - w * w * y[0]]

    span = (0.0, (end - start) / rate)
    parts = []
    for phase in (0.0, -0.5 * math.pi):
        turn = complex(math.cos(phase), math.sin(phase))
        steady = turn * unbalance / mass * start**2 / (w**2 - start**2 + 2j * zeta * w * start)
        first = [steady.real, (1j * start * steady).real]
        result = solve_ivp(
            motion, span, first, args=(phase,), rtol=1e-8, atol=1e-12, max_step=0.02
        )
        parts.append(result)
    times = np.linspace(*span, 4000)
    x = [np.interp(times, r.t, r.y[0]) for r in parts]
    amplitude = np.hypot(*x)
    sway = found["passage_amplitude"]
    i = row(sway, segment="1.2r", mode="stand lateral", state="")
    assert sway.value[i] == pytest.approx(amplitude.max(), rel=0.01)
    peak = found["passage_peak_speed"]
    at = peak.value[row(peak, segment="1.2r", mode="stand lateral", state="")]
    assert at == pytest.approx(start + rate * times[amplitude.argmax()], rel=0.01)


def test_published_estimate_stands_beside_each_clear_passage(predicted):
    sway = predicted("articulated-run-up")["passage_amplitude"]
    known = [i for i in range(len(sway.labels)) if sway.status[i] is Status.OK]
    hands = sway.hand[known]
    assert np.isfinite(hands).sum() > 0.9 * len(known)
    assert np.nanmax(np.abs(sway.value[known] / hands - 1.0)) < 0.1


def test_run_up_peaks_above_the_resonance_and_run_down_below(predicted):
    peak = predicted("articulated-run-up")["passage_peak_speed"]
    for mode, hertz in zip(NAMED, (2.0, 2.2), strict=True):
        w = 2.0 * math.pi * hertz
        assert peak.value[row(peak, segment="1.2r", mode=mode, state="")] > w
        assert peak.value[row(peak, segment="stop", mode=mode)] < w


def test_every_ramp_stop_and_abort_has_its_row_for_each_mode(predicted):
    sway = predicted("articulated-run-up")["passage_amplitude"]
    for mode in NAMED:
        own = rows(sway, mode=mode)
        plain = [sway.labels[i].segment for i in own if not sway.labels[i].state]
        assert plain.count("stop") == 1
        assert "1.2r" in plain
        assert "1.2h" not in plain
        for cause in ABORT_CAUSES:
            assert rows(sway, mode=mode, segment="1.2h", state=cause)
        assert {sway.labels[i].harmonic for i in own} == {"1"}


def test_sway_is_in_proportion_to_unbalance_over_modal_mass(articulated, run_predict, predicted):
    modes = tuple(
        dataclasses.replace(m, modal_mass_kg=2.0 * (m.modal_mass_kg or 1.0))
        for m in articulated.stand.modes
    )
    heavy = dataclasses.replace(
        articulated, stand=dataclasses.replace(articulated.stand, modes=modes)
    )
    twice = run_predict(heavy, "speeds")["passage_amplitude"]
    once = predicted("articulated-run-up")["passage_amplitude"]
    assert twice.labels == once.labels
    assert 2.0 * twice.value == pytest.approx(once.value, rel=1e-12, nan_ok=True)


@pytest.mark.parametrize(
    ("part", "values", "words"),
    [
        ("rotor", {"balance": None}, "the rotor file states no [balance]"),
        ("stand", "modal_mass_kg", "the stand file states no modal_mass of this mode"),
    ],
)
def test_what_is_not_stated_leaves_every_passage_not_stated(
    articulated, run_predict, part, values, words
):
    if isinstance(values, str):
        modes = [dataclasses.replace(m, **{values: None}) for m in articulated.stand.modes]
        values = {"modes": tuple(modes)}
    changed = dataclasses.replace(getattr(articulated, part), **values)
    found = run_predict(dataclasses.replace(articulated, **{part: changed}), "speeds", "passages")
    for quantity in ("passage_amplitude", "passage_peak_speed", "passage_rate_needed"):
        assert set(found[quantity].status) == {Status.NOT_STATED}
        assert all(words in reason for reason in found[quantity].reasons)
    assert Status.OK in found["time_to_rest"].status


def test_rate_needed_keeps_the_hub_below_its_rating(predicted):
    """A ramp at the needed rate, predicted anew, sways as far as the stand bears and no more."""
    needed = predicted("articulated-run-up")["passage_rate_needed"]
    i = row(needed, mode="stand lateral")
    assert needed.status[i] is Status.OK
    assert needed.low[i] <= needed.value[i] <= needed.high[i]


def test_end_of_a_ramp_short_of_the_peak_counts_what_comes_after(articulated, run_predict):
    """A ramp that ends on the resonance: the hold after it lets the sway grow."""
    step = articulated.blocks[0].steps[1]
    short = dataclasses.replace(step, speed_rad_s=120.0 * RPM, ramp_time_s=2.5)
    block = dataclasses.replace(
        articulated.blocks[0], steps=(articulated.blocks[0].steps[0], short)
    )
    found = run_predict(dataclasses.replace(articulated, blocks=(block,)), "speeds")
    sway = found["passage_amplitude"]
    i = row(sway, segment="1.2r", mode="stand lateral", state="")
    unbalance, mass = float(found["unbalance"].value[0]), 1400.0
    assert sway.high[i] >= 0.99 * unbalance / mass / (2.0 * 0.025)
    assert sway.value[i] < 0.7 * sway.high[i]
