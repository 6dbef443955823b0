from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

from planner.explore.gate_scan import scan
from planner.explore.gate_trial import Fail, Trial, Tried, Wind

if TYPE_CHECKING:
    from collections.abc import Sequence

WINDS = tuple(Wind(float(mean), mean + 1.5) for mean in range(8))


class Bench:
    """Fails each sector at the means stated: in the search, and in full marches besides."""

    def __init__(
        self, search: dict[str, set[int]], full: dict[str, set[int]] | None = None
    ) -> None:
        self.search, self.full = search, full or {}
        self.trials: list[tuple[int, tuple[str, ...], bool]] = []

    def __call__(self, trials: Sequence[Trial]) -> list[Tried]:
        return [self._tried(trial) for trial in trials]

    def _tried(self, trial: Trial) -> Tried:
        self.trials.append((int(trial.wind.mean_m_s), trial.sectors, trial.is_full))
        fails = []
        for sector in trial.sectors:
            also = self.full.get(sector, set()) if trial.is_full else set()
            if trial.wind.mean_m_s in self.search[sector] | also:
                fails.append(Fail(f"stop moment from {sector}", is_exceeded=True))
        return Tried(trial, tuple(fails))

    def tops(self, ahead: int = 1) -> dict[str, int]:
        return {found.name: found.top for found in scan(WINDS, list(self.search), self, ahead)}


@pytest.mark.parametrize("ahead", [1, 3])
@pytest.mark.parametrize(
    ("failing", "top"),
    [
        ({5, 6, 7}, 4),
        ({3}, 2),  # 4 to 7 would pass again: never between two failures
        ({3, 6}, 2),
        (set(), 7),
        ({0}, -1),
        ({1}, 0),
    ],
)
def test_the_gate_lies_below_the_first_failure(failing, top, ahead):
    bench = Bench({"field": failing})
    assert bench.tops(ahead) == {"field": top}
    assert max(mean for mean, _, _ in bench.trials) <= top + ahead
    full = [mean for mean, _, is_full in bench.trials if is_full]
    assert full == ([] if top < 0 else [top])


def test_what_was_tried_above_the_first_failure_is_shown_and_decides_nothing():
    (found,) = scan(WINDS, ["field"], Bench({"field": {1, 3}}), ahead=4)
    assert found.top == 0
    assert {place: one.passes for place, one in sorted(found.tried.items())} == {
        0: True, 1: False, 2: True, 3: False,
    }  # fmt: skip


@pytest.mark.parametrize("ahead", [1, 2, 4])
def test_sectors_have_their_own_gates_however_many_are_tried_side_by_side(ahead):
    bench = Bench({"field": {5, 6, 7}, "wood": {2}, "hall": {5, 7}})
    assert bench.tops(ahead) == {"field": 4, "wood": 1, "hall": 4}


def test_sectors_are_tried_together_until_they_fail_and_alone_from_there():
    bench = Bench({"field": {5, 6, 7}, "wood": {2}, "hall": {5, 6, 7}})
    bench.tops()
    everyone, two = ("field", "wood", "hall"), ("field", "hall")
    assert [(mean, sectors) for mean, sectors, is_full in bench.trials if not is_full] == [
        (0, everyone), (1, everyone),
        (2, everyone), (2, ("field",)), (2, ("wood",)), (2, ("hall",)),
        (3, two), (4, two),
        (5, two), (5, ("field",)), (5, ("hall",)),
    ]  # fmt: skip
    confirmed = [trial[:2] for trial in bench.trials if trial[2]]
    assert confirmed == [(4, two), (1, ("wood",))]


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
    assert found.first_failure is not None
    assert found.first_failure.trial.wind.mean_m_s == top + 1
