"""The scan for the wind gate: upward from calm to the first failure, sector by sector.

The gate is the highest wind of the scan such that it and every lower one passes. It is never
looked for between two failures: above the first one, nothing is believed. Each wind is tried by
the search of the marches; the highest that passes is tried again at full fineness, and where it
fails there the scan steps down until one passes.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING

from planner.explore.gate_trial import Trial

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from planner.explore.gate_trial import Tried, Wind

    Attempt = Callable[[Trial], Tried]


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
        above = self.tried.get(self.top + 1)
        return above if above is not None and not above.passes else None


def scan(winds: Sequence[Wind], names: Sequence[str], attempt: Attempt) -> tuple[SectorScan, ...]:
    """Scan winds upward in every sector, and confirm the highest that pass.

    Args:
        winds: From calm upward.
        names: Sectors, each of another wind.
        attempt: Tries a wind.

    Returns:
        One scan a sector, in the order of the names.
    """
    found = tuple(SectorScan(name) for name in names)
    for place, wind in enumerate(winds):
        passing = [sector for sector in found if sector.top == place - 1]
        _try(passing, place, Trial(wind, ()), attempt)
    _confirm(found, winds, attempt)
    return found


def _try(sectors: Sequence[SectorScan], place: int, trial: Trial, attempt: Attempt) -> None:
    """Try a wind in sectors together; where they fail together, each by itself.

    What passes with the winds of all sectors passes with those of each. Where all but the last
    pass by themselves, the failure is the last one's.
    """
    if not sectors:
        return
    together = attempt(_from(trial, sectors))
    *others, last = sectors
    for sector in others:
        sector.tried[place] = together if together.passes else attempt(_from(trial, [sector]))
    alone = any(not sector.tried[place].passes for sector in others)
    last.tried[place] = attempt(_from(trial, [last])) if alone else together


def _from(trial: Trial, sectors: Sequence[SectorScan]) -> Trial:
    return replace(trial, sectors=tuple(sector.name for sector in sectors))


def _confirm(found: Sequence[SectorScan], winds: Sequence[Wind], attempt: Attempt) -> None:
    """Try the highest winds that pass at full fineness; a failure lowers its sector by one."""
    while True:
        pending = [s for s in found if s.top >= 0 and not s.tried[s.top].trial.is_full]
        if not pending:
            return
        top = max(sector.top for sector in pending)
        highest = [sector for sector in pending if sector.top == top]
        _try(highest, top, Trial(winds[top], (), is_full=True), attempt)
