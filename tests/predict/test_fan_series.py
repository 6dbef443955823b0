"""Curves of the fan chart, and time at speed."""

from __future__ import annotations

import numpy as np
import pytest

from planner.judge.requests import requests
from planner.model.plan import segments
from planner.predict.fan_series import fan_series, time_at_speed


def test_time_at_speed_adds_up_to_the_whole_run(articulated):
    walk = segments(articulated)
    told = time_at_speed(walk, articulated.stand.full_speed_rad_s)
    wanted = sum(s.times * s.duration_s for s in walk)
    assert told["seconds"].sum() == pytest.approx(wanted, rel=1e-12)
    top = told["edges_rad_s"][told["seconds"].argmax()] / articulated.stand.full_speed_rad_s
    assert 0.97 <= top <= 0.99


def test_chart_has_three_panels_with_their_own_harmonics(articulated, predicted):
    found = predicted("articulated-run-up")
    fan = fan_series(articulated, segments(articulated), found, requests(articulated.rule_book))
    panels = {mode["panel"] for mode in fan["modes"]}
    assert panels == {"blade", "stand", "shaft"}
    assert fan["harmonics"]["stand"] == (1, 4, 8, 12)
    assert fan["harmonics"]["shaft"] == (4, 8, 12)
    names = [curve["name"] for curve in fan["shifted"]]
    assert names == ["flap 1, Ω - ω", "flap 1, Ω + ω", "lag 1, Ω - ω", "lag 1, Ω + ω"]
    lag = next(m for m in fan["modes"] if m["name"] == "lag 1")["frequency_rad_s"]
    behind = fan["shifted"][2]["frequency_rad_s"]
    assert behind == pytest.approx(np.abs(fan["speed_rad_s"] - lag))
