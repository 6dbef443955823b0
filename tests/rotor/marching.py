"""Short marches for tests: histories that hold or ramp, and what is asked of them."""

from __future__ import annotations

from dataclasses import fields, replace
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.march import march
from planner.rotor.march_block import Block
from planner.rotor.march_case import STILL, Histories, MarchSettings, make_march_cases
from planner.rotor.march_model import march_model

if TYPE_CHECKING:
    from collections.abc import Sequence

    from planner.model.rotor import Rotor
    from planner.rotor.march import MarchResult
    from planner.rotor.march_case import MarchCases, Turbulence
    from planner.rotor.march_model import MarchModel

AIR: dict[str, Any] = {"air_density_kg_m3": 1.2, "speed_of_sound_m_s": 340.0}
NO_AIR: dict[str, Any] = {"air_density_kg_m3": 1e-12, "speed_of_sound_m_s": 340.0}
COARSE = MarchSettings(steps_per_turn=24, longest_step_s=0.02, substeps=4, lead_in_s=0.5)
STATIONS = 8


def history(
    speed_rad_s: Any, seconds: float, collective_rad: Any = 0.0, step_s: float = 0.05
) -> Histories:
    """Rows that run straight through the given speeds, evenly spread over the time."""
    speeds = np.atleast_2d(np.asarray(speed_rad_s, dtype=float))
    count = round(seconds / step_s) + 1
    share = np.linspace(0.0, 1.0, count)
    known = np.linspace(0.0, 1.0, max(speeds.shape[1], 2))
    rows = np.stack([np.interp(share, known, np.broadcast_to(row, known.shape)) for row in speeds])
    pitch = np.zeros_like(rows) + np.asarray(collective_rad, dtype=float).reshape(-1, 1)
    flat = np.zeros_like(rows)
    return Histories(step_s, rows, pitch, flat, flat, np.full(rows.shape[0], seconds))


def marchable(rotor: Rotor) -> Rotor:
    """The rotor with its station table carried on to the centre."""
    blade = rotor.blade
    radius = blade.stations.radius_m.copy()
    radius[0] = 0.0
    return replace(rotor, blade=replace(blade, stations=replace(blade.stations, radius_m=radius)))


def model_of(
    rotor: Rotor,
    settings: MarchSettings = COARSE,
    *,
    one_blade: bool = False,
    to_centre: bool = True,
) -> Any:
    """The rotor bound for marches up to 40 rad/s."""
    whole = marchable(rotor) if to_centre else rotor
    return march_model(whole, 40.0, settings, STATIONS, one_blade=one_blade)


def marched(
    model: MarchModel, course: Histories, rough: Turbulence = STILL, **cases: Any
) -> MarchResult:
    """March cases of the first history unless told otherwise."""
    given = {"history": 0, "wind_m_s": 0.0, **AIR, **cases}
    return march(model, course, make_march_cases(**given), rough)


def block_at_once(model: MarchModel, course: Histories, **cases: Any) -> Any:
    """Cases without a lead-in, for looking at each step."""
    given = {"history": 0, "wind_m_s": 0.0, **AIR, **cases}
    block = Block(model, course, STILL, make_march_cases(**given))
    block.time_s[:] = 0.0
    return block


def numbers(result: MarchResult) -> dict[str, np.ndarray]:
    """Everything that a march yields, by name."""
    parts = (result.extremes, result.contacts)
    found = {f.name: np.asarray(getattr(part, f.name)) for part in parts for f in fields(part)}
    return {**found, "converged": result.converged}


def same_bits(whole: MarchResult, part: MarchResult, where: Sequence[int]) -> list[str]:
    """Names of what differs between cases marched together and alone."""
    one, other = numbers(whole), numbers(part)
    return [
        name
        for name, values in one.items()
        if not np.array_equal(values[list(where)], other[name], equal_nan=values.dtype != bool)
    ]


def taken(cases: MarchCases, where: Sequence[int]) -> MarchCases:
    """Some of the cases in this order."""
    return cases.take(np.array(where))
