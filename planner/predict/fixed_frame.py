"""Blade modes seen from the stand: shifted by rotor speed, and how near they come to its modes."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from planner.model.results import Labels, Status
from planner.predict.blade_modes import COLLECTIVE

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from numpy.typing import NDArray

    from planner.model.plan import Segment
    from planner.predict.mode_tracks import Track
    from planner.predict.rows import Rows

    FloatArray = NDArray[np.float64]

SIDES = {"Ω - ω": -1.0, "Ω + ω": 1.0}
"""How a wave around the rotor is seen from the stand: behind, or ahead of the rotation."""
SHIFTED = ("flap", "lag")
"""Families that shake the stand."""
HIGHEST_ORDER = 2
NO_STAND_MODE = "the stand file gives no mode of the stand"
_AHEAD = "seen ahead of the rotation, where the two do not feed each other"
_FAST = "the blades swing faster than the rotor turns, where the two do not feed each other"


def shifted(tracks: Sequence[Track]) -> Iterator[Track]:
    """Modes whose blades may move in a wave, lowest orders of flap and lag."""
    for track in tracks:
        is_low = track.family in SHIFTED and int(track.name.split()[1]) <= HIGHEST_ORDER
        if is_low and not track.name.endswith(COLLECTIVE):
            yield track


def shifted_rad_s(track: Track, speed_rad_s: FloatArray, side: float) -> FloatArray:
    """Frequency of a blade mode as the stand sees it, nominal, at each lane: |Ω ± ω|."""
    return np.abs(speed_rad_s + side * track.ends.frequency_rad_s)


def fixed_frame_rows(rows: Rows, tracks: Sequence[Track], at: tuple[Segment, FloatArray]) -> None:
    """Distance of each shifted mode from each mode of the stand at one hold."""
    hold, speed = at
    stands = [t for t in tracks if t.panel == "stand"]
    for track in shifted(tracks):
        label = Labels(segment=hold.id, mode=track.name)
        if not stands:
            rows.flag(label, Status.NOT_STATED, NO_STAND_MODE, speed_rad_s=hold.to_rad_s)
        for stand in stands:
            for words, side in SIDES.items():
                named = Labels(hold.id, track.name, f"{stand.name}, {words}")
                _row(rows, named, (track, stand), (hold, speed, side))


def _row(
    rows: Rows,
    label: Labels,
    pair: tuple[Track, Track],
    at: tuple[Segment, FloatArray, float],
) -> None:
    (track, stand), (hold, speed, side) = pair, at
    for mode in pair:
        if mode.status is not Status.OK:
            rows.flag(label, mode.status, mode.reason, speed_rad_s=hold.to_rad_s)
            return
    ends = np.stack([track.ends.low_rad_s, track.ends.high_rad_s])
    seen = speed + side * ends
    lowest, highest = _sizes(float(seen.min()), float(seen.max()))
    low = lowest / float(stand.ends.high_rad_s[0])
    high = highest / float(stand.ends.low_rad_s[0])
    nominal = shifted_rad_s(track, speed, side)[0] / stand.ends.frequency_rad_s[0]
    distances = (abs(low - 1.0), abs(high - 1.0))
    numbers = (
        abs(float(nominal) - 1.0),
        0.0 if low <= 1.0 <= high else min(distances),
        max(distances),
    )
    is_fast = float(seen.max()) <= 0.0
    if side > 0.0 or is_fast:
        why = _FAST if is_fast else _AHEAD
        rows.flag(label, Status.NOT_APPLICABLE, why, numbers=numbers, speed_rad_s=hold.to_rad_s)
    else:
        value, least, most = numbers
        rows.add(label, value, low=least, high=most, speed_rad_s=hold.to_rad_s)


def _sizes(low: float, high: float) -> tuple[float, float]:
    """Smallest and largest size of what lies between two numbers."""
    sizes = (abs(low), abs(high))
    return (0.0 if low <= 0.0 <= high else min(sizes)), max(sizes)
