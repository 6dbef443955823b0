"""The stand: checks between its values, and the way into the model."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from planner.files.build_rotor import hinge_radius
from planner.files.build_train import (
    check_labels,
    check_masses,
    check_stand_frequencies,
    check_train,
    column_of,
    stand_frequency_of,
    train_of,
)
from planner.files.faults import shown
from planner.files.schema_rotor import HingelessTable
from planner.model.stand import Drive, GivenMode, Obstruction, Ratings, Stand
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Sequence

    from planner.files.schema_rotor import RotorFile
    from planner.files.schema_stand import (
        DriveTable,
        ModeTable,
        PlaceTable,
        StandFile,
    )
    from planner.files.schema_values import Measured
    from planner.files.source import Document


_LARGEST_GAUGE_ERROR = 0.05
"""Share of full speed; a gauge worse than this is a slip of the pen."""
_DROOP_WITHOUT_STOPS = 0.15
"""Share of the radius that the tips of a hub without stops may come below the hub."""
_ROUNDING = 1e-9


def check_stand(document: Document, file: StandFile) -> None:
    """Add the faults between values of the stand file."""
    _check_names(document, "mode", file.mode)
    _check_names(document, "obstruction", file.obstruction)
    _check_names(document, "position", file.position)
    trip = file.drive.overspeed_trip
    if trip is not None and trip.resolved(file.full_speed) > file.drive.maximum_speed.resolved(
        file.full_speed
    ):
        expected = "a trip at or below the drive's maximum_speed"
        document.fault(("drive", "overspeed_trip"), expected, "correct one of the two")
    _check_torque(document, file)
    check_masses(document, file)
    check_train(document, file)
    check_labels(document, file)
    check_stand_frequencies(document, file)
    allowed = _LARGEST_GAUGE_ERROR * file.full_speed * (1.0 + _ROUNDING)
    if file.speed_gauge_error.resolved(file.full_speed) > allowed:
        expected = f"at most {_LARGEST_GAUGE_ERROR:.0%} of full_speed"
        document.fault(("speed_gauge_error",), expected, "correct the error or full_speed")


def _check_torque(document: Document, file: StandFile) -> None:
    """The table of the drive's torque must run from standstill to its highest speed."""
    rows = file.drive.torque_by_speed
    if not rows:
        return
    path = ("drive", "torque_by_speed")
    speeds = [speed.resolved(file.full_speed) for speed, _ in rows]
    if speeds[0] > 0.0:
        document.fault((*path, 0, 0), "0 rpm in the first row", "add the torque at standstill")
    for i in range(1, len(speeds)):
        if speeds[i] <= speeds[i - 1]:
            expected = f"a speed above {from_si(speeds[i - 1], 'rpm'):g} rpm of the row before"
            document.fault((*path, i, 0), expected, "order the rows by speed")
    highest = file.drive.maximum_speed.resolved(file.full_speed)
    if speeds[-1] < highest * (1.0 - _ROUNDING):
        expected = f"at least maximum_speed {from_si(highest, 'rpm'):g} rpm in the last row"
        mend = "add the torque up to there, or correct maximum_speed"
        document.fault((*path, len(speeds) - 1, 0), expected, mend)


def check_surroundings(document: Document, file: StandFile, rotor: RotorFile) -> None:
    """Add a fault for each thing or person inside the rotor disc."""
    lowest = _lowest_tip(file, rotor)
    for key, places in (("obstruction", file.obstruction), ("position", file.position)):
        for i, place in enumerate(places):
            if place.distance <= rotor.radius + _ROUNDING and place.height >= lowest - _ROUNDING:
                expected = (
                    f"a distance above the rotor radius {rotor.radius:g} m, because blade tips"
                    f" reach down to {lowest:.2f} m above ground"
                )
                distance = shown(document.value((key, i, "distance")))
                found = f"{distance} at height {shown(document.value((key, i, 'height')))}"
                mend = "move it out of the disc, or correct distance or height"
                document.fault((key, i, "distance"), expected, mend, found)


def _lowest_tip(file: StandFile, rotor: RotorFile) -> float:
    """Lowest height above ground that a blade tip can reach; NaN where a value is unknown.

    An inverted or level rotor is taken to reach one radius below its hub.
    """
    if file.mounting != "upright":
        known = file.mounting in {"inverted", "axis level"}
        return file.hub_height - rotor.radius if known else math.nan
    if isinstance(rotor.hub, HingelessTable):
        return file.hub_height - _DROOP_WITHOUT_STOPS * rotor.radius
    stop = rotor.droop_stop
    if stop is None:
        return math.nan
    retracted = stop.retraction.retracted_angle if stop.retraction else stop.angle
    lowest_angle = float(np.min([0.0, stop.angle, retracted]))
    return file.hub_height + (rotor.radius - hinge_radius(rotor)) * math.sin(lowest_angle)


def _check_names(
    document: Document, key: str, entries: Sequence[ModeTable] | Sequence[PlaceTable]
) -> None:
    names = [entry.name for entry in entries]
    for i, name in enumerate(names):
        if name and name in names[:i]:
            document.fault((key, i, "name"), "a name of its own", "rename one of the two")


def build_stand(file: StandFile) -> Stand:
    """Build the model from a file without faults."""
    return Stand(
        name=file.name,
        hub_height_m=file.hub_height,
        mounting=file.mounting,
        full_speed_rad_s=file.full_speed,
        speed_gauge_error_rad_s=file.speed_gauge_error.resolved(file.full_speed),
        modes=tuple(
            GivenMode(
                name=mode.name,
                family=mode.family,
                frequency_rad_s=mode.frequency,
                damping_ratio=mode.damping,
                direction=mode.direction,
                rotor_fitted=mode.rotor_fitted,
                source=mode.source,
                modal_mass_kg=mode.modal_mass,
                missing_mass_kg=mode.missing_mass,
            )
            for mode in file.mode
        ),
        drive=_drive(file.drive, file.full_speed),
        brake_below_rad_s=_optional(file.brake.below if file.brake else None, file.full_speed),
        ratings=Ratings(file.ratings.thrust, file.ratings.hub_moment, file.ratings.hub_amplitude),
        obstructions=_places(file.obstruction),
        positions=_places(file.position),
        brake_torque_N_m=file.brake.torque if file.brake else None,
        column=column_of(file.column),
        drive_train=train_of(file.drive_train),
        measured_modes=tuple(
            stand_frequency_of(entry, file.full_speed) for entry in file.measured_mode
        ),
    )


def _drive(drive: DriveTable, full_speed: float) -> Drive:
    return Drive(
        name=drive.name,
        gear_ratio=drive.gear_ratio,
        torque_rating_N_m=drive.torque_rating,
        power_rating_W=drive.power_rating,
        maximum_rad_s=drive.maximum_speed.resolved(full_speed),
        inertia_kg_m2=drive.inertia,
        overspeed_trip_rad_s=_optional(drive.overspeed_trip, full_speed),
        friction_N_m=drive.friction,
        torque_by_speed=tuple(
            (speed.resolved(full_speed), torque) for speed, torque in drive.torque_by_speed or ()
        ),
    )


def _optional(speed: Measured | None, full_speed: float) -> float | None:
    return None if speed is None else speed.resolved(full_speed)


def _places(places: list[PlaceTable]) -> tuple[Obstruction, ...]:
    return tuple(Obstruction(p.name, p.bearing, p.distance, p.height) for p in places)
