"""What a march needs of a rotor: unit, stops, lag and tables, bound once for all its cases."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.methods.blade_inertia import blade_inertia
from planner.model.rotor import ArticulatedHub
from planner.rotor.blade_views import mass_distribution
from planner.rotor.case import gravity_vector_m_s2
from planner.rotor.flap_unit import FlapUnit, flap_unit
from planner.rotor.march_sections import PseudoTables, pseudo_tables
from planner.rotor.march_stops import StopLaws, no_stops, stop_laws
from planner.rotor.march_substeps import SubstepTable, substep_table
from planner.rotor.march_table import StepTable, Vibrating, step_table
from planner.rotor.march_view import Viewer
from planner.rotor.setup import RotorArrays, rotor_arrays

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.model.rotor import Rotor
    from planner.model.stand import Mounting
    from planner.rotor.march_case import MarchSettings

    FloatArray = NDArray[np.float64]

RESOLVED_RAD = 0.8
"""Largest angle that the contact vibration of a stop may turn in one sub-step: the peak
moment of a falling blade is then within 4 %, on a lossless stop of 1e6 N m/rad too."""
MOST_SUBSTEPS = 64
"""A stop that needs more parts of a step than this is not resolved."""


@dataclass(frozen=True, eq=False)
class LagModel:
    """Rigid lag of one blade about its own hinge.

    Attributes:
        hinge_m: Radius of the lag hinge.
        inertia_kg_m2: Of one blade about it.
        first_moment_kg_m: Of one blade about it.
        laws: Lag stops: lead side low, lag side high.
        table: Steps of lag.
        middle_rad: Middle of the stops' travel, from which lag is measured as an extreme.
    """

    hinge_m: float
    inertia_kg_m2: float
    first_moment_kg_m: float
    laws: StopLaws
    table: StepTable
    middle_rad: float


@dataclass(frozen=True, eq=False)
class MarchModel:
    """Everything of a rotor that its cases share.

    Attributes:
        arrays: Station arrays.
        unit: What flaps together.
        units: Units marched in a case; fewer than the rotor has stand for all of them.
        laws: Flap stops.
        table: Steps of flap.
        substeps: Steps of flap on or near a stop, where the hub has stops.
        viewer: Reads a unit's state.
        lag: Lag, where the hub has lag hinges.
        settings: Fineness.
        gravity_m_s2: Gravity downwind, crosswind and along thrust.
        resolves_stops: The steps follow the stiffest vibration of a blade on a stop.
        root_weight_kg_m: First moment of one blade about its root.
        root_centrifugal_kg_m2: Moment of the centrifugal force about the root for unit flap
            angle and speed.
    """

    arrays: RotorArrays
    unit: FlapUnit
    units: int
    laws: StopLaws
    table: StepTable
    substeps: SubstepTable | None
    viewer: Viewer
    lag: LagModel | None
    settings: MarchSettings
    gravity_m_s2: tuple[float, float, float]
    resolves_stops: bool
    root_weight_kg_m: float
    root_centrifugal_kg_m2: float

    @cached_property
    def sections(self) -> PseudoTables:
        """Section tables in the march's precision."""
        return pseudo_tables(self.arrays.sections, self.settings.dtype)

    @cached_property
    def blade_offsets_rad(self) -> FloatArray:
        """Azimuth of each marched blade after the first, (units * blades of a unit,)."""
        apart = 2.0 * np.pi / self.arrays.n_blades
        offsets = apart * np.arange(self.units)[:, None] + self.unit.blade_azimuth_rad
        return offsets.ravel()


def march_model(
    rotor: Rotor,
    top_rad_s: float,
    settings: MarchSettings,
    n_stations: int,
    *,
    mounting: Mounting = "upright",
    one_blade: bool = False,
) -> MarchModel:
    """Bind a rotor for marching.

    Args:
        rotor: The article under test.
        top_rad_s: Highest rotor speed of all histories.
        settings: Fineness.
        n_stations: Air-load stations.
        mounting: How the rotor stands.
        one_blade: One unit stands for all of the rotor: its load drives the inflow as if every
            blade were like it. For comparisons; hub moments are then not computed.

    Returns:
        The model.

    Raises:
        ValueError: A table, hub or stop that cannot be used.
    """
    arrays = rotor_arrays(rotor, n_stations)
    unit = flap_unit(rotor, arrays, settings.elastic_modes)
    laws = stop_laws(rotor, unit)
    about = blade_inertia(mass_distribution(rotor.blade), unit.root_m)
    gravity = np.ravel(gravity_vector_m_s2(mounting))
    system = Vibrating(
        unit.mass, unit.damping, unit.stiffness, unit.spin_stiffness, unit.flap_view
    )
    table = step_table(system, (top_rad_s, settings))
    needed = _needed_substeps(unit, laws, table)
    parts = min(max(settings.substeps, needed), MOST_SUBSTEPS)
    lag = _lag(rotor, top_rad_s, settings)
    return MarchModel(
        arrays=arrays,
        unit=unit,
        units=1 if one_blade else arrays.n_blades // unit.n_blades,
        laws=laws,
        table=table,
        substeps=substep_table(system, unit, table, (parts, settings.dtype))
        if laws.exist
        else None,
        viewer=Viewer(unit, settings.dtype),
        lag=lag,
        settings=settings,
        gravity_m_s2=(float(gravity[0]), float(gravity[1]), float(gravity[2])),
        resolves_stops=needed <= MOST_SUBSTEPS and _resolves_lag(lag),
        root_weight_kg_m=float(about.first_moment_kg_m),
        root_centrifugal_kg_m2=float(
            about.second_moment_kg_m2 + unit.root_m * about.first_moment_kg_m
        ),
    )


def contact_rad_s(unit: FlapUnit, stiffness_N_m_rad: float) -> float:
    """Upper bound of the vibration of a unit on its stop, sqrt(K s . M^-1 s) [rad/s]."""
    give = float(unit.hinge @ np.linalg.solve(unit.mass, unit.hinge))
    return math.sqrt(stiffness_N_m_rad * give)


def _needed_substeps(unit: FlapUnit, laws: StopLaws, table: StepTable) -> int:
    """Parts of a step that resolve the stiffer stop."""
    if not laws.exist:
        return 1
    stiffest = contact_rad_s(unit, max(laws.low[0], laws.high[0]))
    return math.ceil(stiffest * float(np.max(table.step_s)) / RESOLVED_RAD)


def _resolves_lag(lag: LagModel | None) -> bool:
    """Whole steps resolve the lag stops."""
    if lag is None or not lag.laws.exist:
        return True
    stiffest = math.sqrt(max(lag.laws.low[0], lag.laws.high[0]) / lag.inertia_kg_m2)
    return stiffest * float(np.max(lag.table.step_s)) <= RESOLVED_RAD


def _lag(rotor: Rotor, top_rad_s: float, settings: MarchSettings) -> LagModel | None:
    """Lag about the hinge: I z'' + c z' + (k + Omega^2 e S) z = moments."""
    hub: Any = rotor.hub
    if not isinstance(hub, ArticulatedHub):
        return None
    about = blade_inertia(mass_distribution(rotor.blade), hub.lag_hinge_m)
    inertia, first = float(about.second_moment_kg_m2), float(about.first_moment_kg_m)
    one = np.ones((1, 1))
    system = Vibrating(
        inertia * one,
        hub.lag_damper_N_m_s_rad * one,
        hub.lag_spring_N_m_rad * one,
        hub.lag_hinge_m * first * one,
        np.ones(1),
    )
    table = step_table(system, (top_rad_s, settings))
    stop = rotor.lag_stop
    middle = 0.0 if stop is None else 0.5 * (stop.lead_angle_rad + stop.lag_angle_rad)
    return LagModel(hub.lag_hinge_m, inertia, first, _lag_laws(rotor), table, middle)


def _lag_laws(rotor: Rotor) -> StopLaws:
    stop = rotor.lag_stop
    if stop is None:
        return no_stops()
    law = (stop.stiffness_N_m_rad, stop.damping_N_m_s_rad / stop.moment_rating_N_m)
    low, high = stop.lead_angle_rad, stop.lag_angle_rad
    return StopLaws(low, low, high, law, law, np.inf, 0.0, high_is_droop=False, exist=True)
