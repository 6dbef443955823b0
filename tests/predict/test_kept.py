"""Stores of kept results, and the exact form that their keys are made of."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
import pytest

from planner.model.canonical import digest_of_plain
from planner.predict.kept import NOTHING_KEPT, MemoryStore, Store, exact


@dataclass(frozen=True)
class Fixed:
    angle_rad: float | None


@dataclass(frozen=True)
class Found:
    angle_rad: float | None


def test_what_differs_in_any_way_has_its_own_key():
    values = [
        *(Fixed(x) for x in (None, math.nan, math.inf, -math.inf, 0.0, -0.0, 1.0)),
        Found(1.0),
        np.array([1.0, math.nan]),
        np.array([1.0, math.inf]),
        np.array([[1.0, math.inf]]),
        np.float64(1.0),
        1,
        True,
        "1",
        {"angle_rad": 1.0},
        math.nextafter(1.0, 2.0),
    ]
    assert len({digest_of_plain(exact(value)) for value in values}) == len(values)


def test_order_of_a_mapping_does_not_count():
    assert digest_of_plain(exact({"a": 1, "b": 2})) == digest_of_plain(exact({"b": 2, "a": 1}))


def test_a_value_without_a_plain_form_is_refused():
    with pytest.raises(TypeError, match=r"no JSON form for set"):
        exact({"a": {1, 2}})


def test_memory_keeps_and_nothing_does_not(predicted):
    nothing: Store = NOTHING_KEPT
    memory, kept = MemoryStore(), {"air_density": predicted("hingeless-model")["air_density"]}
    for store in (memory, nothing):
        store.put("k", kept)
        store.put_plain("k", {"wind_m_s": np.array([1.0, math.nan])})
    assert memory.get("k") == kept
    assert memory.get("other") is None
    assert memory.get_plain("k", even_if_fresh=True) == {"wind_m_s": [1.0, None]}
    assert nothing.get("k") is None
    assert nothing.get_plain("k") is None
