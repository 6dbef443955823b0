"""Torsional modes of the shaft: as given, or of the drive train with the blades' lag motion."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.beam import Root, lag_matrices
from planner.methods.shaft_chain import chain_blades, chain_modes, referred_chain
from planner.model.results import Status
from planner.predict.mode_correction import (
    ModelFrequency,
    measured_ends,
    require_known,
    with_allowance,
)
from planner.predict.stand_modes import mode_fault
from planner.rotor.blade_views import beam

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from planner.methods.shaft_chain import ChainBlades
    from planner.model.rotor import MeasuredMode, Rotor
    from planner.model.stand import DriveTrain
    from planner.predict.mode_correction import Ends
    from planner.predict.study import Inputs

    FloatArray = NDArray[np.float64]

TAKES = ("rotor", "stand.modes", "stand.drive_train", "stand.measured_modes")
"""Model paths that the shaft's modes follow from."""


@dataclass(frozen=True)
class ShaftMode:
    """One torsional mode of the shaft; numbers are not numbers where its status is not OK."""

    label: str
    ends: Ends
    damping_ratio: float
    status: Status = Status.OK
    reason: str = ""


def shaft_modes(inputs: Inputs, speed_rad_s: FloatArray) -> tuple[ShaftMode, ...]:
    """All modes of the shaft over the speeds.

    Raises:
        NotAssessedError: the rule book states no frequency allowance.
        ValueError: a measurement that does not fit the train, or a train out of range.
    """
    allowance = inputs.allowance("frequency")
    rotor: Rotor = inputs["rotor"]
    found = []
    for mode in inputs["stand.modes"]:
        if mode.family != "shaft":
            continue
        status, reason = mode_fault(mode, rotor)
        frequency = mode.frequency_rad_s if status is Status.OK else np.nan
        ends = with_allowance(np.full(speed_rad_s.shape, frequency), allowance)
        found.append(ShaftMode(mode.label, ends, mode.damping_ratio, status, reason))
    train: DriveTrain | None = inputs["stand.drive_train"]
    if train is not None:
        measured = inputs["stand.measured_modes"]
        found += _of_train(train, rotor, (speed_rad_s, measured), allowance)
    return tuple(found)


def blades_on_shaft(rotor: Rotor) -> ChainBlades:
    """In-plane motion of all blades alike, about their lag hinges or where they are held."""
    hub, blade = rotor.hub, beam(rotor.blade)
    start = float(blade.radius_m[0])
    if hub.kind == "articulated":
        root = Root(hub.lag_hinge_m, hub.lag_spring_N_m_rad)
    else:
        root = Root(hub.root_m if hub.kind == "hingeless" else start)
    return chain_blades(blade, lag_matrices(blade, root), rotor.n_blades)


def _of_train(
    train: DriveTrain,
    rotor: Rotor,
    asked: tuple[FloatArray, Sequence[MeasuredMode]],
    allowance: tuple[float, float],
) -> list[ShaftMode]:
    speed, measured = asked
    n, count = speed.size, len(train.inertias)
    inertia, stiffness = referred_chain(
        np.array([body.inertia_kg_m2 for body in train.inertias]),
        np.array([shaft.stiffness_N_m_rad for shaft in train.shafts]),
        np.array([body.turns for body in train.inertias]),
        np.array([shaft.turns for shaft in train.shafts]),
    )
    lanes = np.concatenate([speed, [m.speed_rad_s for m in measured], [0.0]])
    modes = chain_modes(inertia, stiffness, blades_on_shaft(rotor), lanes, count)
    found = []
    for k in range(count):
        label, every = f"shaft train {k + 1}", modes.frequency_rad_s[:, k]
        own = [i for i, m in enumerate(measured) if m.mode == label]
        there = every[n + np.array(own, dtype=np.intp)]
        rest = every[-1]
        model = ModelFrequency(speed, every[:n], np.full(n, rest), there, np.full(len(own), rest))
        ends = measured_ends(model, [measured[i] for i in own], allowance)
        found.append(ShaftMode(label, ends, train.damping_ratio))
    of_shaft = [m for m in measured if m.mode.startswith("shaft ")]
    require_known(of_shaft, [mode.label for mode in found])
    return found
