from __future__ import annotations

import pytest

from planner.explore.gate_scan import scan
from planner.explore.gate_trial import Fail, Trial, Tried, Wind

WINDS = tuple(Wind(float(mean), mean + 1.5) for mean in range(8))


class Bench:
    """Fails each sector at the means stated: in the search, and in full marches besides."""

    def __init__(self, search: dict[str, set[int]], full: dict[str, set[int]] | None = None):
        self.search, self.full, self.trials = search, full or {}, []

    def __call__(self, trial: Trial) -> Tried:
        self.trials.append((int(trial.wind.mean_m_s), trial.sectors, trial.is_full))
        fails = []
        for sector in trial.sectors:
            also = self.full.get(sector, set()) if trial.is_full else set()
            if trial.wind.mean_m_s in self.search[sector] | also:
                fails.append(Fail(f"stop moment from {sector}", is_exceeded=True))
        return Tried(trial, tuple(fails))

    def tops(self) -> dict[str, int]:
        return {found.name: found.top for found in scan(WINDS, list(self.search), self)}


@pytest.mark.parametrize(
    ("failing", "top", "highest_tried"),
    [
        ({5, 6, 7}, 4, 5),
        ({3}, 2, 3),  # 4 to 7 would pass again: never between two failures
        ({3, 6}, 2, 3),
        (set(), 7, 7),
        ({0}, -1, 0),
        ({1}, 0, 1),
    ],
)
def test_the_gate_lies_below_the_first_failure(failing, top, highest_tried):
    bench = Bench({"field": failing})
    assert bench.tops() == {"field": top}
    assert max(mean for mean, _, _ in bench.trials) == highest_tried
    full = [mean for mean, _, is_full in bench.trials if is_full]
    assert full == ([] if top < 0 else [top])


def test_sectors_are_tried_together_until_they_fail_and_alone_from_there():
    bench = Bench({"field": {5, 6, 7}, "wood": {2}, "hall": {5, 6, 7}})
    assert bench.tops() == {"field": 4, "wood": 1, "hall": 4}
    everyone, two = ("field", "wood", "hall"), ("field", "hall")
    search = [(mean, sectors) for mean, sectors, is_full in bench.trials if not is_full]
    assert search == [
        (0, everyone), (1, everyone),
        (2, everyone), (2, ("field",)), (2, ("wood",)), (2, ("hall",)),
        (3, two), (4, two),
        (5, two), (5, ("field",)), (5, ("hall",)),
    ]  # fmt: skip
    confirmed = [trial[:2] for trial in bench.trials if trial[2]]
    assert confirmed == [(4, two), (1, ("wood",))]


def test_where_all_others_pass_alone_the_failure_is_the_last_ones():
    bench = Bench({"field": set(), "wood": {2}})
    (field, wood) = scan(WINDS, ["field", "wood"], bench)
    assert (field.top, wood.top) == (7, 1)
    assert (2, ("wood",), False) not in bench.trials
    assert wood.first_failure.fails[0].words == "stop moment from wood"
    assert field.first_failure is None


@pytest.mark.parametrize(
    ("full", "top", "confirmed"),
    [
        ({5}, 4, [5, 4]),
        ({4, 5}, 3, [5, 4, 3]),
        ({2}, 5, [5]),
        (set(range(8)), -1, [5, 4, 3, 2, 1, 0]),
    ],
)
def test_what_fails_at_full_fineness_steps_down(full, top, confirmed):
    bench = Bench({"field": {6}}, {"field": full})
    (found,) = scan(WINDS, ["field"], bench)
    assert found.top == top
    assert [mean for mean, _, is_full in bench.trials if is_full] == confirmed
    first = found.first_failure
    assert first is not None
    assert first.trial.wind.mean_m_s == top + 1
