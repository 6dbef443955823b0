"""Every mode over rotor speed: blades, stand and shaft, each with the harmonics that excite it."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Literal

import numpy as np

from planner.model.results import Status
from planner.predict import blade_modes, shaft_modes, stand_modes

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.model.rotor import Rotor
    from planner.predict.blade_modes import Lanes
    from planner.predict.mode_correction import Ends
    from planner.predict.shaft_modes import ShaftMode
    from planner.predict.stand_modes import StandMode
    from planner.predict.study import Inputs

    FloatArray = NDArray[np.float64]
    IntArray = NDArray[np.intp]

TAKES = tuple(dict.fromkeys((*stand_modes.TAKES, *shaft_modes.TAKES)))
"""Model paths that all modes follow from."""
BLADE_HARMONICS = tuple(range(1, 9))
"""Blade modes are held against these."""
BLADE_MULTIPLES = (1, 2, 3)
"""Of the blade number: harmonics at which all blades together shake stand and shaft."""

Panel = Literal["blade", "stand", "shaft"]


@dataclass(frozen=True, eq=False)
class Track:
    """One mode at many (speed, pitch) lanes."""

    name: str
    family: str
    panel: Panel
    ends: Ends
    """Each of shape (lanes,)."""
    harmonics: tuple[int, ...]
    damping: float | None = None
    """As stated; None: to be found, or not known."""
    share: FloatArray | None = None
    """Of a blade mode's motion in its own family, shape (lanes,)."""
    status: Status = Status.OK
    reason: str = ""
    set_id: str = ""
    """Blade modes of one set do not change places where their frequencies are put in order."""

    @property
    def frequency_rad_s(self) -> FloatArray:
        """Nominal frequency, shape (lanes,)."""
        return self.ends.frequency_rad_s

    def at(self, lanes: IntArray | slice) -> Track:
        """The same mode at some of the lanes."""
        ends = replace(
            self.ends,
            frequency_rad_s=self.ends.frequency_rad_s[lanes],
            low_rad_s=self.ends.low_rad_s[lanes],
            high_rad_s=self.ends.high_rad_s[lanes],
        )
        return replace(self, ends=ends, share=None if self.share is None else self.share[lanes])


def stand_harmonics(n_blades: int) -> tuple[int, ...]:
    """Harmonics that excite the stand: unbalance once per turn, and the blades."""
    return tuple(dict.fromkeys((1, *shaft_harmonics(n_blades))))


def shaft_harmonics(n_blades: int) -> tuple[int, ...]:
    """Harmonics that excite the shaft: the blades."""
    return tuple(n * n_blades for n in BLADE_MULTIPLES)


def tracks(inputs: Inputs, lanes: Lanes) -> list[Track]:
    """All modes at the lanes; a mode that cannot be judged says why.

    Raises:
        NotAssessedError: the rule book states no frequency allowance.
        ValueError: a blade, column, train or measurement out of range.
        LinAlgError: blade modes that did not reach their tolerance.
    """
    rotor: Rotor = inputs["rotor"]
    allowance = inputs.allowance("frequency")
    found = [
        Track(m.label, m.family, "blade", m.ends, BLADE_HARMONICS, share=m.share, set_id=m.set_id)
        for m in blade_modes.blade_modes(rotor, lanes, allowance)
    ]
    everywhere = np.zeros(lanes.speed_rad_s.shape, dtype=np.intp)
    for mode in stand_modes.stand_modes(inputs):
        harmonics = stand_harmonics(rotor.n_blades)
        found.append(_given(mode, "stand", harmonics).at(everywhere))
    found += [
        _given(shaft, "shaft", shaft_harmonics(rotor.n_blades))
        for shaft in shaft_modes.shaft_modes(inputs, lanes.speed_rad_s)
    ]
    return [_with_fault(track) for track in found]


def _given(mode: StandMode | ShaftMode, panel: Panel, harmonics: tuple[int, ...]) -> Track:
    return Track(
        mode.label,
        panel,
        panel,
        mode.ends,
        harmonics,
        mode.damping_ratio,
        status=mode.status,
        reason=mode.reason,
    )


def _with_fault(track: Track) -> Track:
    """A mode whose measurement does not fit it is outside validity."""
    if track.ends.fault and track.status is Status.OK:
        return replace(track, status=Status.OUTSIDE_VALIDITY, reason=track.ends.fault)
    return track
