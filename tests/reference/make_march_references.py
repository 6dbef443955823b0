"""Writes the stored references of marches, each integrated at two tolerances.

Takes about ten minutes. Run it only when the equations are meant to change:
python -m tests.reference.make_march_references
"""

from __future__ import annotations

import dataclasses
import json
import math
import pathlib
import re
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.blade_views import beam
from planner.rotor.setup import rotor_arrays
from tests.reference.blade_shapes import blade_shapes
from tests.reference.march_equations import Case, Equations, constant, steady_wind
from tests.reference.march_reference import Marched, Solver, contacts, march, peak
from tests.reference.reference_rotor import DROOP_STOP, UP_STOP, reference_rotor

if TYPE_CHECKING:
    from planner.model.rotor import Stop

STORED = pathlib.Path(__file__).parent / "march_references.json"
N_ELASTIC = 3
RPM = math.pi / 30.0
COARSE = Solver("DOP853", 1e-8, 1e-10, 1e-3, dense=True)
FINE = Solver("DOP853", 1e-9, 1e-11, 1e-3, dense=True)
AIR: dict[str, Any] = {"air_density_kg_m3": 1.225, "speed_of_sound_m_s": 340.0}


@dataclasses.dataclass(frozen=True)
class Setup:
    """One stored march of one blade of the reference rotor.

    Attributes:
        about: The march in words.
        case: What is done to the rotor.
        starts_on_stop: At rest on the droop stop; else straight and level without motion. The air
            has no induced velocity in either.
        droop: Droop stop.
        up: Up stop.
    """

    about: str
    case: Case
    starts_on_stop: bool = True
    droop: Stop = DROOP_STOP
    up: Stop = UP_STOP


def run_up_rad_s(time: float) -> float:
    """0 to 290 rpm along half a cosine in 30 s, then held."""
    share = 0.5 * (1.0 - math.cos(math.pi * min(time, 30.0) / 30.0))
    return 290.0 * RPM * share


def run_down_rad_s(time: float) -> float:
    """150 rpm for 3 s, in which the start is forgotten, then straight to 20 rpm in 30 s."""
    return RPM * (150.0 - 130.0 * max(time - 3.0, 0.0) / 30.0)


def gusty(time: float) -> tuple[float, float, float]:
    """14 m/s with a 1 - cosine gust of 10 m/s from 6 s to 10 s."""
    inside = 6.0 < time < 10.0
    return (
        14.0 + (5.0 * (1.0 - math.cos(0.5 * math.pi * (time - 6.0))) if inside else 0.0),
        0.0,
        0.0,
    )


def setups() -> dict[str, Setup]:
    """The stored marches."""
    three, six = constant(math.radians(3.0)), constant(math.radians(6.0))
    engaged = Case(40.0, run_up_rad_s, three, steady_wind(14.0), **AIR)
    gust = dataclasses.replace(engaged, wind_m_s=gusty, start_azimuth_rad=1.0)
    down = Case(33.0, run_down_rad_s, six, steady_wind(14.0), **AIR)
    low_up = dataclasses.replace(UP_STOP, angle_rad=math.radians(6.0))
    ramp = "0 to 290 rpm along half a cosine in 30 s, 10 s hold; collective 3 deg"
    return {
        "engagement": Setup(f"{ramp}; 14 m/s; starts at azimuth 0", engaged),
        "engagement in a gust": Setup(
            f"{ramp}; 14 m/s, 1 - cosine gust of 10 m/s from 6 to 10 s; starts at azimuth 1 rad",
            gust,
        ),
        "coast-down": Setup(
            "3 s at 150 rpm, then straight to 20 rpm in 30 s; collective 6 deg; 14 m/s; up stop "
            "at 6 deg; starts straight and level",
            down,
            starts_on_stop=False,
            up=low_up,
        ),
    }


def equations(setup: Setup) -> Equations:
    """The equations of a stored march."""
    model = reference_rotor()
    rotor = rotor_arrays(model)
    blade = blade_shapes(beam(model.blade), rotor.hub.hinge_m, rotor.station_radius_m, N_ELASTIC)
    return Equations(rotor, blade, (setup.droop, setup.up), setup.case)


def marched(setup: Setup, solver: Solver) -> Marched:
    """Integrate one stored march."""
    model = equations(setup)
    shapes = model.at_rest() if setup.starts_on_stop else np.zeros(model.n_shapes)
    return march(model, model.start(shapes), solver)


def digest(result: Marched) -> dict[str, Any]:
    """What is stored of a march."""
    hinge, tip, time = np.degrees(result.hinge_rad()), result.tip_m(), result.time_s
    found: dict[str, Any] = {}
    for name, values in (
        ("highest_flap_deg", hinge),
        ("lowest_flap_deg", -hinge),
        ("highest_tip_m", tip),
        ("lowest_tip_m", -tip),
        ("droop_peak_N_m", result.droop_moment_n_m()),
        ("up_peak_N_m", result.up_moment_n_m()),
    ):
        value, at = peak(time, values)
        found[name] = -value if name.startswith("lowest") else value
        found[f"{name.rsplit('_', 1)[0].removesuffix('_N')}_at_s"] = at
    for name, up in (("droop_contacts", False), ("up_contacts", True)):
        found[name] = [dataclasses.astuple(contact) for contact in contacts(result, up=up)]
    every = np.arange(0.0, result.equations.case.duration_s, 0.5)
    found["flap_each_half_second_deg"] = np.interp(every, time, hinge).tolist()
    last = result.state[:, -1]
    small = float(result.tip_m(small_angles=True).min())
    found["lowest_tip_small_angles_m"] = small
    found["final_state"] = last.tolist()
    found["final_rates"] = result.equations(float(time[-1]), last).tolist()
    return found


def difference(one: dict[str, Any], other: dict[str, Any]) -> dict[str, float]:
    """How far two digests are apart."""
    apart = {
        name: abs(value - other[name]) for name, value in one.items() if isinstance(value, float)
    }
    for name in ("droop_contacts", "up_contacts"):
        apart[f"{name}_count"] = float(abs(len(one[name]) - len(other[name])))
        if one[name] and len(one[name]) == len(other[name]):
            gap = np.abs(np.array(one[name]) - np.array(other[name])).max(axis=0)
            apart[f"{name}_start_s"], apart[f"{name}_peak_N_m"] = float(gap[0]), float(gap[2])
    state = np.abs(np.array(one["final_state"]) - np.array(other["final_state"]))
    apart["final_state"] = float(state.max())
    return apart


def stored(setup: Setup) -> dict[str, Any]:
    """One march at two tolerances."""
    fine, coarse = digest(marched(setup, FINE)), digest(marched(setup, COARSE))
    return {
        "about": setup.about,
        "columns_of_contacts": "start [s], end [s], peak moment [N m], closing speed [rad/s], "
        "azimuth at start and end [rad]",
        "results": fine,
        "apart_from_ten_times_the_tolerance": difference(fine, coarse),
    }


def rounded(value: Any) -> Any:
    """Ten digits of every number."""
    if isinstance(value, dict):
        return {name: rounded(inner) for name, inner in value.items()}
    if isinstance(value, list | tuple):
        return [rounded(inner) for inner in value]
    return float(f"{value:.10g}") if isinstance(value, float) else value


def text(everything: dict[str, Any]) -> str:
    """JSON with one line for each list of numbers."""
    spread = json.dumps(rounded(everything), indent=1)
    return re.sub(r"\[[^][{}]*\]", lambda found: " ".join(found[0].split()), spread) + "\n"


if __name__ == "__main__":
    everything = {name: stored(setup) for name, setup in setups().items()}
    STORED.write_text(text(everything), encoding="utf-8")
