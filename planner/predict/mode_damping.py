"""Damping of a mode at a hold: stated, from the air, or from the lag damper."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.model.results import Labels, Status
from planner.predict.study import NotAssessedError
from planner.rotor.blade_views import flap_inertia

if TYPE_CHECKING:
    from planner.model.plan import Segment
    from planner.predict.mode_tracks import Track
    from planner.predict.rows import Rows
    from planner.predict.study import Inputs

FIRST_FLAP = frozenset({"flap 1", "flap 1 cyclic"})
"""Modes that flap_damping_ratio speaks of. A teetering pair that flaps alike bends, and has less
damping than one that tilts."""
LEAST_SHARE = 0.5
"""A mode that moves less than this in its own family is not damped as the family is."""
_NOT_KNOWN = "damping of this mode is not computed"
_NO_AIR = "flap damping from the air is not known here"
_MIXED = "a mixture of motions, whose damping is not computed"


def add_damping(rows: Rows, track: Track, hold: Segment, inputs: Inputs) -> None:
    """Add the row of one mode at one hold.

    What damps flap or lag damps a coupled mode by the share of its motion in that family.
    """
    label = Labels(segment=hold.id, mode=track.name)
    if track.damping is not None:
        _as_stated(rows, label, (track.damping, hold), inputs)
        return
    least = 0.0 if track.share is None else float(track.share.min())
    hinged = inputs["rotor.hub"].kind == "articulated"
    damped = track.name in FIRST_FLAP or (track.name == "lag 1" and hinged)
    if damped and least < LEAST_SHARE:
        rows.flag(label, Status.NOT_COMPUTED, _MIXED, speed_rad_s=hold.to_rad_s)
    elif track.name in FIRST_FLAP:
        _from_air(rows, label, (hold, least), inputs)
    elif damped and float(track.ends.low_rad_s.min()) > 0.0:
        _from_damper(rows, label, (track, hold, least), inputs)
    else:
        rows.flag(label, Status.NOT_COMPUTED, _NOT_KNOWN, speed_rad_s=hold.to_rad_s)


def _as_stated(rows: Rows, label: Labels, at: tuple[float, Segment], inputs: Inputs) -> None:
    damping, hold = at
    try:
        low, high = inputs.allowance("damping")
    except NotAssessedError as refusal:
        rows.flag(label, refusal.status, str(refusal), speed_rad_s=hold.to_rad_s)
        return
    rows.add(label, damping, low=low * damping, high=high * damping, speed_rad_s=hold.to_rad_s)


def _from_damper(
    rows: Rows, label: Labels, at: tuple[Track, Segment, float], inputs: Inputs
) -> None:
    track, hold, least = at
    hub = inputs["rotor.hub"]
    body = flap_inertia(inputs["rotor.blade"], hub.lag_hinge_m)
    twice = 2.0 * float(body.second_moment_kg_m2)
    ends = track.ends
    found = [
        hub.lag_damper_N_m_s_rad / (twice * float(w))
        for w in (ends.frequency_rad_s[0], ends.low_rad_s.min(), ends.high_rad_s.max())
    ]
    rows.add(
        label,
        least * found[0],
        low=least * min(found),
        high=max(found),
        speed_rad_s=hold.to_rad_s,
    )


def _from_air(rows: Rows, label: Labels, at: tuple[Segment, float], inputs: Inputs) -> None:
    hold, least = at
    air = inputs.prior["flap_damping_ratio"]
    found = [i for i, row in enumerate(air.labels) if row.segment == hold.id]
    if found and air.status[found[0]] is Status.OK:
        i = found[0]
        rows.add(
            label,
            least * float(air.value[i]),
            low=least * float(air.low[i]),
            high=float(air.high[i]),
            speed_rad_s=hold.to_rad_s,
        )
    else:
        rows.flag(label, Status.NOT_COMPUTED, _NO_AIR, speed_rad_s=hold.to_rad_s)
