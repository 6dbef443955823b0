"""Branches of blade modes over speed: what is smooth where two modes exchange their names.

A name follows the shape. Where two modes veer, the shapes change over from one branch to the
other, and the curve of a name jumps by the gap between them. In the order of frequency the
branches have no jumps: crossings with harmonics are looked for on them, and take the name that
the mode has there.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from planner.predict.mode_correction import Ends

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from planner.predict.mode_tracks import Track

    FloatArray = NDArray[np.float64]
    IntArray = NDArray[np.intp]


def sets_of(tracks: Sequence[Track]) -> list[list[Track]]:
    """Blade modes that can be judged, by kind of motion of the hub."""
    ids = dict.fromkeys(track.set_id for track in tracks if track.panel == "blade")
    judged = [t for t in tracks if t.panel == "blade" and np.all(np.isfinite(t.frequency_rad_s))]
    return [[t for t in judged if t.set_id == each] for each in ids]


def branches(tracks: Sequence[Track]) -> list[tuple[Ends, IntArray]]:
    """Frequencies in order, lowest first, each with which of the tracks it is at each lane."""
    return [
        (
            Ends(
                _picked([t.ends.frequency_rad_s for t in tracks], who),
                _picked([t.ends.low_rad_s for t in tracks], who),
                _picked([t.ends.high_rad_s for t in tracks], who),
            ),
            who,
        )
        for who in _order(tracks)
    ]


def breaks_of(track: Track, tracks: Sequence[Track]) -> list[int]:
    """Lanes after which the curve of a name jumps from one branch to another.

    Where the name goes on in the direction of its curve, and the branch turns off, two modes
    cross: that is no jump.
    """
    order = _order(tracks)
    own = next((i for i, other in enumerate(tracks) if other.name == track.name), None)
    if own is None:
        return []
    place = np.argmax(order == own, axis=0)
    frequency = track.frequency_rad_s
    every = np.array([t.frequency_rad_s for t in tracks])
    in_order = np.take_along_axis(every, order, axis=0)
    found = []
    for k in np.flatnonzero(np.diff(place)):
        if k > 0:
            ahead = 2.0 * frequency[k] - frequency[k - 1]
            branch = in_order[place[k], k + 1]
            if abs(branch - ahead) < abs(frequency[k + 1] - ahead):
                found.append(int(k))
    return found


def _order(tracks: Sequence[Track]) -> IntArray:
    """Which track is where in the order of frequency, shape (tracks, lanes)."""
    return np.argsort(np.array([t.frequency_rad_s for t in tracks]), axis=0, kind="stable")


def _picked(values: Sequence[FloatArray], who: IntArray) -> FloatArray:
    return np.asarray(np.take_along_axis(np.array(values), who[None, :], axis=0)[0])
