"""The rotor: checks between its values, and the way into the model."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from planner.files.build_balance import (
    balance_of,
    blade_frequency_of,
    check_balance,
    check_blade_frequencies,
)
from planner.files.build_sections import build_section
from planner.files.csv_tables import STATION_COLUMNS, CsvTable
from planner.files.faults import Fault
from planner.files.schema_rotor import (
    ArticulatedTable,
    DroopStopTable,
    HingelessTable,
    LagStopTable,
    RotorFile,
    TeeteringTable,
    UpStopTable,
)
from planner.model.rotor import (
    ArticulatedHub,
    Blade,
    HingelessHub,
    Hub,
    LagStop,
    PointMass,
    Retraction,
    Rotor,
    SectionSpan,
    Stations,
    Stop,
    TeeteringHub,
)
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Callable

    from planner.files.source import Document

FloatArray = NDArray[np.float64]
_SAME = 1e-6
"""Radii that differ by less than this share of the tip radius are one radius."""


@dataclass(frozen=True)
class StationRows:
    """Stations in SI from either form, with a way to point at one of their values."""

    values: dict[str, FloatArray]
    fault: Callable[[int, str, str, str, str], Fault]
    """Row, column, expected, found, mend."""


def csv_stations(table: CsvTable) -> StationRows:
    """Stations from a CSV table."""
    return StationRows(table.values, table.fault)


def inline_stations(document: Document, file: RotorFile) -> StationRows:
    """Stations from ``[[blade.station]]`` tables."""

    def key(name: str) -> str:
        return name.replace(".", "").replace(" ", "_")

    def fault(row: int, name: str, expected: str, found: str, mend: str) -> Fault:
        path = ("blade", "station", row, key(name))
        line, column = document.positions.value(path)
        dotted = f"blade.station.{key(name)}"
        return Fault(document.name, line, column, dotted, expected, found, mend)

    rows = file.blade.station
    values = {
        column.name: np.array([getattr(row, key(column.name)) for row in rows], dtype=np.float64)
        for column in STATION_COLUMNS
    }
    return StationRows(values, fault)


def hinge_radius(file: RotorFile) -> float:
    """Radius where the flapping blade begins."""
    match file.hub:
        case ArticulatedTable():
            return file.hub.flap_hinge
        case HingelessTable():
            return file.hub.root
        case TeeteringTable():
            return 0.0


def check_rotor(document: Document, file: RotorFile) -> None:
    """Add the faults between values of the rotor file."""
    _check_radii(document, file)
    _check_hub(document, file)
    _check_stops(document, file)
    _check_retraction(document, file.droop_stop)
    _check_lag_stop(document, file)
    _check_sections(document, file)
    _check_blade_set(document, file)
    check_balance(document, file)
    check_blade_frequencies(document, file)


def check_stations(rows: StationRows, file: RotorFile) -> list[Fault]:
    """Find stations out of order, not covering the blade, without chord, or with odd offsets."""
    radius = rows.values["radius"]
    if radius.size == 0:
        return []
    near = _SAME * file.radius
    inner = hinge_radius(file)
    faults: list[Fault] = []
    for i in range(1, radius.size):
        if radius[i] <= radius[i - 1]:
            expected = f"a radius above {_metres(radius[i - 1])} of the row before"
            mend = "order the stations from root to tip"
            faults.append(rows.fault(i, "radius", expected, _metres(radius[i]), mend))
    if radius[0] > inner + near:
        expected = f"a first station at or inside {_metres(inner)}, where the blade is hinged"
        mend = "add stations down to there"
        faults.append(rows.fault(0, "radius", expected, _metres(radius[0]), mend))
    if abs(radius[-1] - file.radius) > near:
        expected = f"a last station at the tip radius {_metres(file.radius)}"
        mend = "end the table at the tip, or correct radius"
        faults.append(rows.fault(radius.size - 1, "radius", expected, _metres(radius[-1]), mend))
    for row in np.flatnonzero((radius >= file.aero_root - near) & (rows.values["chord"] <= 0.0)):
        expected = f"a chord above 0 from aero_root {_metres(file.aero_root)} on"
        faults.append(rows.fault(int(row), "chord", expected, "0 m", "correct chord or aero_root"))
    return faults + _offset_faults(rows)


def _offset_faults(rows: StationRows) -> list[Fault]:
    """Find offsets that lie beyond the section: a wrong unit, most likely."""
    chord = rows.values["chord"]
    faults: list[Fault] = []
    for name in ("c.g. offset", "a.c. offset"):
        offset = rows.values[name]
        for row in np.flatnonzero((chord > 0.0) & (np.abs(offset) > chord)):
            expected = f"an offset of at most the chord {_metres(chord[row])}, either way"
            mend = "correct the offset or its unit"
            faults.append(rows.fault(int(row), name, expected, _metres(offset[row]), mend))
    return faults


def _check_radii(document: Document, file: RotorFile) -> None:
    for key in ("aero_root", "collective_radius"):
        value = getattr(file, key)
        if value > file.radius or (key == "aero_root" and value == file.radius):
            expected = f"a radius inside the tip radius {_metres(file.radius)}"
            document.fault((key,), expected, f"correct {key} or radius")
    for key in ("flap_hinge", "lag_hinge", "root", "equivalent_hinge"):
        value = getattr(file.hub, key, None)
        if value is not None and value >= file.radius:
            expected = f"a radius inside the tip radius {_metres(file.radius)}"
            document.fault(("hub", key), expected, f"correct {key} or radius")
    inner = hinge_radius(file)
    for i, mass in enumerate(file.blade.point_mass):
        if mass.radius < inner or mass.radius > file.radius:
            expected = f"a radius on the blade, {_metres(inner)} to {_metres(file.radius)}"
            document.fault(("blade", "point_mass", i, "radius"), expected, "correct the radius")


def _check_hub(document: Document, file: RotorFile) -> None:
    hub = file.hub
    if isinstance(hub, TeeteringTable) and file.blades in range(3, 21):
        document.fault(("blades",), "2 blades on a teetering hub", "correct blades or hub.kind")
    if isinstance(hub, HingelessTable) and (hub.equivalent_hinge is None) != (
        hub.equivalent_spring is None
    ):
        given, lacking = "equivalent_hinge", "equivalent_spring"
        if hub.equivalent_hinge is None:
            given, lacking = lacking, given
        expected = "equivalent_hinge and equivalent_spring together, or neither"
        document.fault_at_key(("hub", given), expected, f"add {lacking}", f"only {given}")


def _check_stops(document: Document, file: RotorFile) -> None:
    for key, stop in (("droop_stop", file.droop_stop), ("up_stop", file.up_stop)):
        if isinstance(file.hub, HingelessTable) and stop is not None:
            expected = "no stops on a hingeless hub"
            mend = "remove the table or correct hub.kind"
            document.fault_at_key((key,), expected, mend, f"table {key}")
        elif not isinstance(file.hub, HingelessTable) and stop is None:
            expected = f"a table [{key}], which a hub of kind {file.hub.kind} needs"
            document.fault_at_key(("hub", "kind"), expected, f"add [{key}]", "no such table")
    droop, up = file.droop_stop, file.up_stop
    if droop and up and droop.angle >= up.angle:
        expected = f"an angle below the up stop's {_degrees(up.angle)}"
        document.fault(("droop_stop", "angle"), expected, "correct the stops: they cross")


def _check_retraction(document: Document, stop: DroopStopTable | None) -> None:
    if stop is None or stop.retraction is None:
        return
    retraction = stop.retraction
    path = ("droop_stop", "retraction")
    if retraction.retracted_angle > stop.angle:
        expected = f"an angle at or below the static {_degrees(stop.angle)}"
        document.fault((*path, "retracted_angle"), expected, "correct one of the two angles")
    if retraction.release <= retraction.reseat:
        rpm = from_si(retraction.reseat, "rpm")
        expected = f"a speed above the re-seat speed {rpm:g} rpm"
        document.fault((*path, "release"), expected, "correct release or reseat")


def _check_lag_stop(document: Document, file: RotorFile) -> None:
    stop = file.lag_stop
    if stop is None:
        return
    if not isinstance(file.hub, ArticulatedTable):
        expected = f"no lag stop on a hub of kind {file.hub.kind}, which has no lag hinge"
        mend = "remove the table or correct hub.kind"
        document.fault_at_key(("lag_stop",), expected, mend, "table lag_stop")
    if stop.lead >= stop.lag:
        expected = f"an angle above the lead stop's {_degrees(stop.lead)}"
        document.fault(("lag_stop", "lag"), expected, "correct the stops: they cross")


def _check_sections(document: Document, file: RotorFile) -> None:
    if not file.section:
        return
    near = _SAME * file.radius
    end, what = file.aero_root, "aero_root"
    for i, span in enumerate(file.section):
        path = ("section", i)
        if abs(span.from_ - end) > near:
            expected = f"{_metres(end)}, {what}: no gap and no overlap"
            document.fault((*path, "from"), expected, "let the sections join, root to tip")
        if span.to <= span.from_:
            expected = f"a radius above its from, {_metres(span.from_)}"
            document.fault((*path, "to"), expected, "correct from or to")
        end, what = span.to, "where the section before ends"
    if abs(end - file.radius) > near:
        expected = f"{_metres(file.radius)}, the tip radius"
        last = ("section", len(file.section) - 1, "to")
        document.fault(last, expected, "let the last section reach the tip")


def _check_blade_set(document: Document, file: RotorFile) -> None:
    blade = file.blade
    if blade.serials and file.blades and len(blade.serials) != file.blades:
        expected = f"{file.blades} serial numbers, one a blade"
        found = str(len(blade.serials))
        document.fault(("blade", "serials"), expected, "correct serials or blades", found)
    for i, serial in enumerate(blade.serials):
        if serial and serial in blade.serials[:i]:
            document.fault(("blade", "serials", i), "distinct serial numbers", "correct it")
    if blade.stations is not None and blade.station:
        expected = "stations as a CSV file or inline, not both"
        document.fault_at_key(("blade", "stations"), expected, "remove one", "both")
    elif blade.stations is None and not blade.station:
        expected = 'key "stations" with a CSV file, or [[blade.station]] tables'
        document.fault_at_key(("blade",), expected, 'add stations = "blade.csv"', "neither")
    elif blade.stations is None and len(blade.station) == 1:
        path = ("blade", "station", 0)
        document.fault_at_key(path, "at least 2 stations", "add stations up to the tip", "1")


def build_rotor(file: RotorFile, rows: StationRows, polars: dict[str, CsvTable]) -> Rotor:
    """Build the model from a file without faults."""
    return Rotor(
        name=file.name,
        n_blades=file.blades,
        clockwise=file.rotation == "clockwise",
        blade=_blade(file, rows, polars),
        hub=_hub(file.hub),
        droop_stop=_stop(file.droop_stop),
        up_stop=_stop(file.up_stop),
        control_stiffness_N_m_rad=file.control_stiffness,
        cyclic_authority_rad=file.cyclic_authority,
        design_maximum_rad_s=file.design_maximum_speed,
        proven_rad_s=file.proven_speed,
        root_force_rating_N=file.root_force_rating,
        lag_stop=_lag_stop(file.lag_stop),
        balance=balance_of(file.balance),
        measured_modes=tuple(blade_frequency_of(entry) for entry in file.measured_mode),
    )


def _blade(file: RotorFile, rows: StationRows, polars: dict[str, CsvTable]) -> Blade:
    values = rows.values
    return Blade(
        radius_m=file.radius,
        aero_root_m=file.aero_root,
        collective_radius_m=file.collective_radius,
        stations=Stations(
            radius_m=values["radius"],
            chord_m=values["chord"],
            twist_rad=values["twist"],
            mass_kg_m=values["mass"],
            flap_stiffness_N_m2=values["flap stiffness"],
            lag_stiffness_N_m2=values["lag stiffness"],
            torsion_stiffness_N_m2=values["torsion stiffness"],
            pitch_inertia_kg_m=values["pitch inertia"],
            cg_offset_m=values["c.g. offset"],
            ac_offset_m=values["a.c. offset"],
        ),
        point_masses=tuple(
            PointMass(m.name, m.radius, m.mass, 0.0 if m.offset is None else m.offset)
            for m in file.blade.point_mass
        ),
        sections=tuple(
            SectionSpan(
                section=build_section(span, polars),
                from_radius_m=span.from_,
                to_radius_m=span.to,
            )
            for span in file.section
        ),
        serials=tuple(file.blade.serials),
    )


def _hub(hub: ArticulatedTable | HingelessTable | TeeteringTable) -> Hub:
    match hub:
        case ArticulatedTable():
            return ArticulatedHub(
                flap_hinge_m=hub.flap_hinge,
                lag_hinge_m=hub.lag_hinge,
                flap_spring_N_m_rad=hub.flap_spring,
                flap_spring_neutral_rad=hub.flap_spring_neutral,
                flap_damper_N_m_s_rad=hub.flap_damper,
                lag_spring_N_m_rad=hub.lag_spring,
                lag_damper_N_m_s_rad=hub.lag_damper,
                pitch_flap_coupling_rad=hub.pitch_flap_coupling,
                precone_rad=hub.precone,
            )
        case HingelessTable():
            return HingelessHub(
                root_m=hub.root,
                precone_rad=hub.precone,
                pitch_flap_coupling_rad=hub.pitch_flap_coupling,
                equivalent_hinge_m=hub.equivalent_hinge,
                equivalent_spring_N_m_rad=hub.equivalent_spring,
                flap_damper_N_m_s_rad=hub.flap_damper,
                root_moment_rating_N_m=hub.root_moment_rating,
            )
        case TeeteringTable():
            return TeeteringHub(
                precone_rad=hub.precone,
                teeter_spring_N_m_rad=hub.teeter_spring,
                teeter_damper_N_m_s_rad=hub.teeter_damper,
                pitch_flap_coupling_rad=hub.pitch_flap_coupling,
            )


def _stop(stop: UpStopTable | None) -> Stop | None:
    if stop is None:
        return None
    retraction = stop.retraction if isinstance(stop, DroopStopTable) else None
    return Stop(
        angle_rad=stop.angle,
        stiffness_N_m_rad=stop.stiffness,
        damping_N_m_s_rad=stop.damping,
        moment_rating_N_m=stop.moment_rating,
        retraction=None
        if retraction is None
        else Retraction(retraction.release, retraction.reseat, retraction.retracted_angle),
    )


def _lag_stop(stop: LagStopTable | None) -> LagStop | None:
    if stop is None:
        return None
    return LagStop(
        lead_angle_rad=stop.lead,
        lag_angle_rad=stop.lag,
        stiffness_N_m_rad=stop.stiffness,
        damping_N_m_s_rad=stop.damping,
        moment_rating_N_m=stop.moment_rating,
    )


def _metres(value: float) -> str:
    return f"{value:g} m"


def _degrees(value: float) -> str:
    return f"{from_si(value, 'deg'):g} deg"
