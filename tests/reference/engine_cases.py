"""The stored marches as cases of the engine under test."""

from __future__ import annotations

import dataclasses
from typing import TYPE_CHECKING

import numpy as np

from planner.rotor.march import march
from planner.rotor.march_case import Histories, MarchCases, MarchSettings, make_march_cases
from planner.rotor.march_model import MarchModel, march_model
from tests.reference.make_march_references import Setup, setups
from tests.reference.reference_rotor import reference_rotor

if TYPE_CHECKING:
    from planner.rotor.march import MarchResult

STEP_S = 0.01
STATIONS = 24
TOP_RAD_S = 290.0 * np.pi / 30.0


def histories(setup: Setup) -> Histories:
    """One stored march as a table over time."""
    case = setup.case
    times = STEP_S * np.arange(round(case.duration_s / STEP_S) + 1)
    speed = np.array([case.speed_rad_s(float(time)) for time in times])
    pitch = np.array([case.collective_rad(float(time)) for time in times])
    flat = np.zeros_like(times)
    end = np.array([case.duration_s])
    return Histories(STEP_S, speed[None], pitch[None], flat[None], flat[None], end)


def model_of(setup: Setup, settings: MarchSettings) -> MarchModel:
    """The reference rotor with the stops of a stored march, one blade standing for all."""
    rotor = dataclasses.replace(reference_rotor(), droop_stop=setup.droop, up_stop=setup.up)
    return march_model(rotor, TOP_RAD_S, settings, STATIONS, one_blade=True)


def cases(name: str, count: int = 1) -> MarchCases:
    """A stored march, so many times."""
    has_gust = "gust" in name
    return make_march_cases(
        history=np.zeros(count, dtype=int),
        azimuth_rad=setups()[name].case.start_azimuth_rad,
        wind_m_s=14.0,
        gust_m_s=10.0 if has_gust else 0.0,
        gust_start_s=6.0,
        gust_length_s=4.0,
        air_density_kg_m3=1.225,
        speed_of_sound_m_s=340.0,
    )


def run(name: str, settings: MarchSettings, count: int = 1) -> MarchResult:
    """March a stored case with the engine."""
    setup = setups()[name]
    return march(model_of(setup, settings), histories(setup), cases(name, count))
