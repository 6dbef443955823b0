"""Tip speed and Mach number at each segment, and the wind beside them."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from planner.model.results import Labels, Status
from planner.predict.rows import Rows
from planner.predict.study import Inputs, Study

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from planner.model.plan import Segment, Site
    from planner.model.results import Prediction
    from planner.model.rotor import Blade

_ID = "tip"
_QUANTITIES = ("tip_speed", "tip_mach", "advancing_tip_mach", "advance_ratio")


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """Tip speeds over windows, gauge error and the temperature range."""
    rows = {quantity: Rows(quantity, _ID) for quantity in _QUANTITIES}
    segments: Sequence[Segment] = inputs["segments"]
    for segment in segments:
        _tip(rows, segment, inputs)
    return {quantity: filled.prediction() for quantity, filled in rows.items()}


def _tip(rows: Mapping[str, Rows], segment: Segment, inputs: Inputs) -> None:
    blade: Blade = inputs["rotor.blade"]
    site: Site = inputs["site"]
    error = inputs["stand.speed_gauge_error_rad_s"]
    label = Labels(segment=segment.id)
    top = segment.top_rad_s
    tips = [blade.radius_m * speed for speed in (top, *segment.ends_rad_s(error))]
    sound, slow_sound, fast_sound = inputs.bounds("speed_of_sound")
    mean, _, gust = inputs.bounds("wind_at_hub")
    dry_sound = 20.05 * math.sqrt(site.temperature_K)
    rows["tip_speed"].add(
        label,
        tips[0],
        low=tips[1],
        high=tips[2],
        speed_rad_s=top,
    )
    rows["tip_mach"].add(
        label,
        tips[0] / sound,
        low=tips[1] / fast_sound,
        high=tips[2] / slow_sound,
        speed_rad_s=top,
        hand=tips[0] / dry_sound,
    )
    rows["advancing_tip_mach"].add(
        label,
        (tips[0] + mean) / sound,
        low=tips[1] / fast_sound,
        high=(tips[2] + gust) / slow_sound,
        speed_rad_s=top,
    )
    if tips[1] > 0.0:
        rows["advance_ratio"].add(
            label, mean / tips[0], low=0.0, high=gust / tips[1], speed_rad_s=top
        )
    else:
        rows["advance_ratio"].flag(
            label,
            Status.NOT_APPLICABLE,
            "the rotor comes from, goes to or stays at rest: no advance ratio",
            speed_rad_s=top,
        )


TIP = Study(
    _ID,
    1,
    ("segments", "site", "rotor.blade", "stand.speed_gauge_error_rad_s"),
    ("air", "wind"),
    run,
)
