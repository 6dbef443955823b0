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

    name: str
    """Which stop, or the root; empty where there is neither."""
    shown: Shown
    rating_N_m: float = 1.0

    @property
    def share(self) -> float:
        """Share of the rating."""
        return self.shown.high / self.rating_N_m

    @property
    def share_text(self) -> str:
        """Share of the rating, rounded up."""
        return texts.number(self.share, "%", "up")


def governing_peak(reading: Reading, shown_of: Callable[[str], Shown]) -> Peak:
    """Pick the peak that is the greatest share of its rating; one that is not there comes first.

    Args:
        reading: the record.
        shown_of: gives the number of a quantity at the place that is asked for.
    """
    ratings = {quantity: _rating(reading, quantity) for quantity in PEAKS}
    found = [
        Peak(_NAMES[quantity], shown_of(quantity), rating)
        for quantity, rating in ratings.items()
        if rating
    ]
    missing = next((peak for peak in found if not peak.shown.is_number), None)
    nothing = Peak("", Shown(texts.NOT_ASSESSED, why="no stop has a rating"))
    return missing or max(found, key=lambda peak: peak.share, default=nothing)


def _rating(reading: Reading, quantity: str) -> float | None:
    """The rating of a stop or of a hingeless root; None where there is none."""
    rotor = reading.plan["rotor"]
    if quantity == PEAKS[2]:
        root: float | None = rotor["hub"].get("root_moment_rating_N_m")
        return root
    stop = rotor[quantity.removesuffix("_peak_moment")]
    return float(stop["moment_rating_N_m"]) if stop else None
