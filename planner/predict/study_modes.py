"""Natural frequencies over rotor speed and their distance from rotor harmonics."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.beam import BladeBeam, Root, flap_matrices, lag_matrices, torsion_matrices
from planner.methods.beam_modes import frequencies
from planner.model.results import Labels, Status
from planner.predict.rows import Rows
from planner.predict.study import Inputs, Study
from planner.predict.study_inertia import moment_by_trapezia
from planner.rotor.blade_views import beam, flap_inertia
from planner.rotor.setup import hub_freedom

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from numpy.typing import NDArray

    from planner.methods.beam import BeamMatrices
    from planner.model.plan import Segment
    from planner.model.results import Prediction
    from planner.model.rotor import Blade, Hub, Rotor
    from planner.model.stand import GivenMode

    FloatArray = NDArray[np.float64]

_ID = "modes"
TOP_SHARE = 1.2
GRID_SPEEDS = 61
GREATEST_HARMONIC = 8
"""Blade modes are held against harmonics up to this one."""
SLOWEST_SHARE = 1e-3
"""A window that reaches down to rest is held against harmonics from this share of its top."""
FAMILY_MODES = {"flap": 3, "lag": 2, "torsion": 1}


@dataclass(frozen=True)
class Track:
    """One mode over rotor speed."""

    name: str
    family: str
    frequency_rad_s: FloatArray
    """Shape (speeds,)."""
    harmonics: tuple[int, ...]
    """Harmonics that excite it; empty: all up to the greatest."""
    damping: float | None
    given: GivenMode | None = None


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """Frequencies and spacing at every hold, and crossings up to 120 % rpm."""
    holds = [s for s in inputs["segments"] if s.kind == "hold"]
    speeds = hold_speeds(holds, inputs["stand.speed_gauge_error_rad_s"])
    rows = {
        q: Rows(q, _ID)
        for q in ("mode_frequency", "mode_damping", "harmonic_spacing", "crossing_speed")
    }
    allowance = inputs.allowance("frequency")
    fan = fan_speeds(inputs)
    for track in tracks(inputs, np.concatenate([speeds.reshape(-1), fan])):
        at_holds = track.frequency_rad_s[: speeds.size].reshape(speeds.shape)
        over_fan = track.frequency_rad_s[speeds.size :]
        _crossing_rows(
            rows["crossing_speed"], replace(track, frequency_rad_s=over_fan), fan, allowance
        )
        for hold, speed, frequency in zip(holds, speeds, at_holds, strict=True):
            label = Labels(segment=hold.id, mode=track.name)
            status, reason = mode_fault(track.given)
            if status is not Status.OK:
                for quantity in ("mode_frequency", "mode_damping", "harmonic_spacing"):
                    rows[quantity].flag(label, status, reason, speed_rad_s=hold.to_rad_s)
                continue
            _frequency_row(
                rows["mode_frequency"],
                label,
                (speed, frequency, allowance),
                hand_frequency(track.name, inputs, hold.to_rad_s),
            )
            _damping_row(rows["mode_damping"], track, hold, float(frequency[0]), inputs)
            _spacing_rows(rows["harmonic_spacing"], track, label, (speed, frequency, allowance))
    return {quantity: filled.prediction() for quantity, filled in rows.items()}


def fan_speeds(inputs: Inputs) -> FloatArray:
    """Rotor speeds of the fan chart, from rest to 120 % rpm [rad/s]."""
    return np.linspace(0.0, TOP_SHARE * inputs["stand.full_speed_rad_s"], GRID_SPEEDS)


def hold_speeds(holds: Sequence[Segment], gauge_error_rad_s: float) -> FloatArray:
    """Target, lowest and highest speed of each hold, shape (holds, 3) [rad/s]."""
    return np.array(
        [(hold.to_rad_s, *hold.ends_rad_s(gauge_error_rad_s)) for hold in holds]
    ).reshape(-1, 3)


def tracks(inputs: Inputs, speed_rad_s: FloatArray) -> list[Track]:
    """All modes over the speeds: blade families by beam elements, the others as given."""
    blade: Blade = inputs["rotor.blade"]
    found: list[Track] = []
    for prefix, suffix, matrices in blade_families(
        beam(blade), inputs["rotor.hub"], inputs["rotor.control_stiffness_N_m_rad"]
    ):
        count = FAMILY_MODES[prefix]
        per_mode = frequencies(matrices, speed_rad_s, count)
        for order in range(count):
            name = f"{prefix} {order + 1}{suffix}"
            found.append(Track(name, prefix, per_mode[:, order], (), None))
    n = inputs["rotor.n_blades"]
    for mode in inputs["stand.modes"]:
        harmonics = given_harmonics(mode, n)
        constant = np.full(speed_rad_s.shape, mode.frequency_rad_s)
        found.append(
            Track(
                f"{mode.family} {mode.name}",
                mode.family,
                constant,
                harmonics,
                mode.damping_ratio,
                mode,
            )
        )
    return found


def given_harmonics(mode: GivenMode, n_blades: int) -> tuple[int, ...]:
    """Harmonics that excite a given mode: unbalance once per turn shakes the stand only."""
    blades = (n_blades, 2 * n_blades)
    return (1, *blades) if mode.family == "stand" else blades


def blade_families(
    blade: BladeBeam, hub: Hub, control_stiffness_N_m_rad: float
) -> list[tuple[str, str, BeamMatrices]]:
    """Uncoupled families of blade modes for a hub: family, name suffix and matrices."""
    start = float(blade.radius_m[0])
    torsion = torsion_matrices(blade, Root(start, control_stiffness_N_m_rad))
    if hub.kind == "articulated":
        flap_root = Root(hub.flap_hinge_m, hub.flap_spring_N_m_rad)
        lag_root = Root(hub.lag_hinge_m, hub.lag_spring_N_m_rad)
        return [
            ("flap", "", flap_matrices(blade, flap_root)),
            ("lag", "", lag_matrices(blade, lag_root)),
            ("torsion", "", torsion),
        ]
    if hub.kind == "hingeless":
        built_in = Root(hub.root_m)
        return [
            ("flap", "", flap_matrices(blade, built_in)),
            ("lag", "", lag_matrices(blade, built_in)),
            ("torsion", "", torsion),
        ]
    half_spring = 0.5 * hub.teeter_spring_N_m_rad
    return [
        ("flap", " cyclic", flap_matrices(blade, Root(start, half_spring))),
        ("flap", " collective", flap_matrices(blade, Root(start))),
        ("lag", "", lag_matrices(blade, Root(start))),
        ("torsion", "", torsion),
    ]


def mode_fault(given: GivenMode | None) -> tuple[Status, str]:
    """Why a given mode cannot be judged; OK where it can, and for computed modes."""
    if given is None or given.rotor_fitted:
        return Status.OK, ""
    if given.rotor_fitted is None:
        return (
            Status.NOT_STATED,
            "the stand file does not say whether the rotor's mass was fitted when this mode was "
            "found (rotor_fitted)",
        )
    return (
        Status.NOT_COMPUTED,
        "the mode was found without the rotor's mass and is not corrected for it; give the mode "
        "with the rotor fitted",
    )


_Window = tuple["FloatArray", "FloatArray", tuple[float, float]]
"""Speeds (target, lowest, highest), frequencies there, and the allowance."""


def _frequency_row(rows: Rows, label: Labels, window: _Window, hand: float) -> None:
    speed, frequency, allowance = window
    rows.add(
        label,
        float(frequency[0]),
        low=float(frequency.min()) * allowance[0],
        high=float(frequency.max()) * allowance[1],
        speed_rad_s=float(speed[0]),
        hand=hand,
    )


def _damping_row(
    rows: Rows, track: Track, hold: Segment, frequency_rad_s: float, inputs: Inputs
) -> None:
    label = Labels(segment=hold.id, mode=track.name)
    if track.damping is not None:
        rows.add(label, track.damping, speed_rad_s=hold.to_rad_s)
    elif track.name in {"flap 1", "flap 1 cyclic", "flap 1 collective"}:
        _flap_damping(rows, label, hold, inputs)
    elif track.name == "lag 1" and inputs["rotor.hub"].kind == "articulated" and frequency_rad_s:
        hub = inputs["rotor.hub"]
        body = flap_inertia(inputs["rotor.blade"], hub.lag_hinge_m)
        critical = 2.0 * float(body.second_moment_kg_m2) * frequency_rad_s
        rows.add(label, hub.lag_damper_N_m_s_rad / critical, speed_rad_s=hold.to_rad_s)
    else:
        rows.flag(
            label,
            Status.NOT_COMPUTED,
            "damping of this mode is not computed",
            speed_rad_s=hold.to_rad_s,
        )


def _flap_damping(rows: Rows, label: Labels, hold: Segment, inputs: Inputs) -> None:
    air = inputs.prior["flap_damping_ratio"]
    at = [i for i, row in enumerate(air.labels) if row.segment == hold.id]
    if at and air.status[at[0]] is Status.OK:
        i = at[0]
        rows.add(
            label,
            float(air.value[i]),
            low=float(air.low[i]),
            high=float(air.high[i]),
            speed_rad_s=hold.to_rad_s,
        )
    else:
        rows.flag(
            label,
            Status.NOT_COMPUTED,
            "flap damping from the air is not known here",
            speed_rad_s=hold.to_rad_s,
        )


def _spacing_rows(rows: Rows, track: Track, label: Labels, window: _Window) -> None:
    speed, frequency, allowance = window
    if speed.max() <= 0.0:
        rows.flag(
            label, Status.NOT_APPLICABLE, "no harmonics at rest", speed_rad_s=float(speed[0])
        )
        return
    per_turn = frequency / np.maximum(speed, SLOWEST_SHARE * speed.max())
    lowest = float(per_turn.min()) * allowance[0]
    highest = float(per_turn.max()) * allowance[1]
    for n in track.harmonics or range(1, GREATEST_HARMONIC + 1):
        ends = (abs(lowest / n - 1.0), abs(highest / n - 1.0))
        rows.add(
            Labels(label.segment, label.mode, str(n)),
            abs(float(per_turn[0]) / n - 1.0),
            low=0.0 if lowest <= n <= highest else min(ends),
            high=max(ends),
            speed_rad_s=float(speed[0]),
        )


def _crossing_rows(
    rows: Rows, track: Track, speed: FloatArray, allowance: tuple[float, float]
) -> None:
    for n in track.harmonics or range(1, GREATEST_HARMONIC + 1):
        nominal, low, high = (
            _crossings(track.frequency_rad_s * share, n, speed) for share in (1.0, *allowance)
        )
        alike = len(nominal) == len(low) == len(high)
        for i, at in enumerate(nominal):
            ends = (low[i], high[i]) if alike else (at, at)
            label = Labels(mode=track.name, harmonic=str(n))
            rows.add(label, at, low=min(ends), high=max(ends), speed_rad_s=at)


def _crossings(frequency: FloatArray, n: int, speed: FloatArray) -> list[float]:
    """Speeds where a frequency meets a harmonic, between computed speeds by straight lines."""
    gap = frequency - n * speed
    found = []
    for i in np.flatnonzero((gap[:-1] > 0.0) != (gap[1:] > 0.0)):
        if speed[i] == 0.0 and gap[0] <= 0.0:
            continue  # a free hinge starts at zero on every harmonic
        share = gap[i] / (gap[i] - gap[i + 1])
        found.append(float(speed[i] + share * (speed[i + 1] - speed[i])))
    return found


def hand_frequency(mode: str, inputs: Inputs, speed_rad_s: float) -> float:
    """First flap and lag frequency of a rigid blade about its hinge; NaN for other modes.

    A hingeless blade flaps about its equivalent hinge, stated or found: a statement that does not
    fit the blade's own stiffness shows here. Mass moments come from a trapezoidal sum.
    """
    rotor: Rotor = inputs["rotor"]
    if speed_rad_s <= 0.0 or mode not in {"flap 1", "flap 1 cyclic", "lag 1"}:
        return math.nan
    if mode == "lag 1":
        hub = rotor.hub
        if hub.kind != "articulated":
            return math.nan
        hinge, spring, turning = hub.lag_hinge_m, hub.lag_spring_N_m_rad, 0.0
    else:
        freedom = hub_freedom(rotor)
        hinge, spring, turning = freedom.hinge_m, freedom.spring_N_m_rad, 1.0
    inertia = moment_by_trapezia(rotor.blade, hinge, 2)
    offset = hinge * moment_by_trapezia(rotor.blade, hinge, 1) / inertia
    return speed_rad_s * math.sqrt(turning + offset + spring / (inertia * speed_rad_s**2))


MODES = Study(
    _ID,
    1,
    (
        "segments",
        "rotor",
        "rotor.blade",
        "rotor.hub",
        "rotor.n_blades",
        "rotor.control_stiffness_N_m_rad",
        "stand.modes",
        "stand.full_speed_rad_s",
        "stand.speed_gauge_error_rad_s",
    ),
    ("holds",),
    run,
)
