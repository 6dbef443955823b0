"""The scan for the wind gate: upward from calm to the first failure, sector by sector.

The gate is the highest wind of the scan such that it and every lower one passes. It is never
looked for between two failures: above the first one, nothing is believed. Each wind is tried by
the search of the marches; the highest that passes is tried again at full fineness, and where it
fails there the scan steps down until one passes.

A few winds are tried ahead, side by side. What was tried above the first failure is kept to be
shown, and decides nothing.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING

from planner.explore.gate_trial import Trial

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from planner.explore.gate_trial import Tried, Wind

    Attempt = Callable[[Sequence[Trial]], Sequence[Tried]]


@dataclass
class SectorScan:
    """What was tried in a sector, by the place of the wind in the scan."""

    name: str
    tried: dict[int, Tried] = field(default_factory=dict)

    @property
    def top(self) -> int:
        """Place of the highest wind such that it and every lower one passes; -1: not even calm."""
        place = 0
        while place in self.tried and self.tried[place].passes:
            place += 1
        return place - 1

    @property
    def first_failure(self) -> Tried | None:
        """The first wind that fails; None where none does."""
        return self.tried.get(self.top + 1)


def scan(
    winds: Sequence[Wind], names: Sequence[str], attempt: Attempt, ahead: int = 1
) -> tuple[SectorScan, ...]:
    """Scan winds upward in every sector, and confirm the highest that pass.

    Args:
        winds: From calm upward.
        names: Sectors, each of another wind.
        attempt: Tries winds.
        ahead: How many are tried side by side.

    Returns:
        One scan a sector, in the order of the names.
    """
    found = tuple(SectorScan(name) for name in names)
    for start in range(0, len(winds), ahead):
        passing = _passing(found, start)
        if not passing:
            break
        trials = [_trial(wind, passing) for wind in winds[start : start + ahead]]
        for place, together in enumerate(attempt(trials), start):
            _note(_passing(found, place), place, together, attempt)
            _show(found, place, together)
    _confirm(found, winds, attempt)
    return found


def _passing(found: Sequence[SectorScan], place: int) -> list[SectorScan]:
    """Sectors where all winds below a place pass."""
    return [sector for sector in found if sector.top == place - 1]


def _trial(wind: Wind, sectors: Sequence[SectorScan], *, is_full: bool = False) -> Trial:
    return Trial(wind, tuple(sector.name for sector in sectors), is_full)


def _note(sectors: Sequence[SectorScan], place: int, together: Tried, attempt: Attempt) -> None:
    """Note a wind tried with at least these sectors; where it fails, each is tried by itself.

    What passes with the winds of all sectors passes with those of each.
    """
    if together.passes or together.trial.sectors == tuple(s.name for s in sectors[:1]):
        results = [together] * len(sectors)
    else:
        trial = together.trial
        results = list(attempt([replace(trial, sectors=(s.name,)) for s in sectors]))
    for sector, result in zip(sectors, results, strict=True):
        sector.tried[place] = result


def _show(found: Sequence[SectorScan], place: int, together: Tried) -> None:
    """Keep what was tried above a sector's first failure, where it speaks of this sector."""
    for sector in found:
        if together.passes or together.trial.sectors == (sector.name,):
            sector.tried.setdefault(place, together)


def _confirm(found: Sequence[SectorScan], winds: Sequence[Wind], attempt: Attempt) -> None:
    """Try the highest winds that pass at full fineness; a failure lowers its sector by one."""
    while True:
        pending: dict[int, list[SectorScan]] = {}
        for sector in found:
            if sector.top >= 0 and not sector.tried[sector.top].trial.is_full:
                pending.setdefault(sector.top, []).append(sector)
        if not pending:
            return
        trials = [_trial(winds[top], one, is_full=True) for top, one in pending.items()]
        for (top, sectors), together in zip(pending.items(), attempt(trials), strict=True):
            _note(sectors, top, together, attempt)
