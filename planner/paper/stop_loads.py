"""The peak moment that tells most: of the droop stop, the up stop, or a hingeless root."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.reading import Shown

if TYPE_CHECKING:
    from collections.abc import Callable

    from planner.paper.reading import Reading

PEAKS = ("droop_stop_peak_moment", "up_stop_peak_moment", "root_flap_peak_moment")
_NAMES = dict(zip(PEAKS, ("droop", "up", "root"), strict=True))


@dataclass(frozen=True)
class Peak:
    """A peak moment and the rating that it is held against."""

    quantity: str
    shown: Shown
    rating_N_m: float | None

    @property
    def name(self) -> str:
        """Which stop, or the root."""
        return _NAMES.get(self.quantity, "")

    @property
    def share(self) -> float:
        """Share of the rating; without a rating the moment itself."""
        return self.shown.high / (self.rating_N_m or 1.0)

    @property
    def share_text(self) -> str:
        """Share of the rating rounded up; empty without a rating."""
        return texts.number(self.share, "%", "up") if self.rating_N_m else ""


def governing_peak(reading: Reading, shown_of: Callable[[str], Shown]) -> Peak:
    """Pick the peak that is the greatest share of its rating; one that is not there comes first.

    Args:
        reading: the record.
        shown_of: gives the number of a quantity at the place that is asked for.
    """
    every = [Peak(quantity, shown_of(quantity), rating(reading, quantity)) for quantity in PEAKS]
    found = [peak for peak in every if peak.shown.text != texts.DOES_NOT_APPLY]
    missing = next((peak for peak in found if not peak.shown.is_number), None)
    nothing = Peak("", Shown(texts.NOT_ASSESSED, why="no stop is judged"), None)
    return missing or max(found, key=lambda peak: peak.share, default=nothing)


def rating(reading: Reading, quantity: str) -> float | None:
    """The rating of a stop or of a hingeless root; None where there is none."""
    rotor = reading.plan["rotor"]
    found: float | None
    if quantity == PEAKS[2]:
        found = rotor["hub"].get("root_moment_rating_N_m")
    else:
        stop = rotor[quantity.removesuffix("_peak_moment")]
        found = stop["moment_rating_N_m"] if stop else None
    return found
