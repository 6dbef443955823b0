"""The article under test: blades, hub and stops. SI and radians, frozen, no I/O."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

    FloatArray = NDArray[np.float64]


@dataclass(frozen=True)
class Stations:
    """Spanwise tables of one blade, each of shape (stations,), radius strictly increasing.

    Offsets are positive aft of the pitch axis.
    """

    radius_m: FloatArray
    chord_m: FloatArray
    twist_rad: FloatArray
    mass_kg_m: FloatArray
    flap_stiffness_N_m2: FloatArray
    lag_stiffness_N_m2: FloatArray
    torsion_stiffness_N_m2: FloatArray
    pitch_inertia_kg_m: FloatArray
    cg_offset_m: FloatArray
    ac_offset_m: FloatArray


@dataclass(frozen=True)
class PointMass:
    """A lumped mass on the blade, such as a balance or tip weight."""

    name: str
    radius_m: float
    mass_kg: float
    cg_offset_m: float = 0.0
    """Chordwise, positive aft of the pitch axis."""


@dataclass(frozen=True)
class SymmetricSection:
    """Built-in symmetric section law; every number is the plan's own."""

    name: str
    lift_slope_per_rad: float
    zero_lift_drag: float
    drag_rise_per_rad2: float
    stall_angle_rad: float


@dataclass(frozen=True)
class PolarSection:
    """Section coefficients as tabled by the user, one block of angles for each Mach number."""

    name: str
    mach: FloatArray
    """Shape (mach numbers,), increasing."""
    angle_rad: tuple[FloatArray, ...]
    lift: tuple[FloatArray, ...]
    drag: tuple[FloatArray, ...]
    moment: tuple[FloatArray, ...]


Section = SymmetricSection | PolarSection


@dataclass(frozen=True)
class SectionSpan:
    """A section and the radius range where it applies, root to tip without gaps."""

    section: Section
    from_radius_m: float
    to_radius_m: float


@dataclass(frozen=True)
class Blade:
    """One blade of a set of equal blades."""

    radius_m: float
    aero_root_m: float
    """Radius where lift begins (root cut-out)."""
    collective_radius_m: float
    """Radius at which the blade pitch equals the stated collective."""
    stations: Stations
    point_masses: tuple[PointMass, ...]
    sections: tuple[SectionSpan, ...]
    serials: tuple[str, ...]


@dataclass(frozen=True)
class ArticulatedHub:
    """Flap and lag hinges at an offset, with springs and dampers."""

    flap_hinge_m: float
    lag_hinge_m: float
    flap_spring_N_m_rad: float
    flap_spring_neutral_rad: float
    flap_damper_N_m_s_rad: float
    lag_spring_N_m_rad: float
    lag_damper_N_m_s_rad: float
    pitch_flap_coupling_rad: float
    """Delta-three: pitch falls by tan(delta-three) times flap."""
    precone_rad: float
    """Flap angle at which the hinge spring is relaxed, added to its neutral angle."""
    kind: Literal["articulated"] = "articulated"


@dataclass(frozen=True)
class HingelessHub:
    """Blade clamped at a root radius; the equivalent hinge is stated, or found from the blade."""

    root_m: float
    precone_rad: float
    pitch_flap_coupling_rad: float
    equivalent_hinge_m: float | None
    equivalent_spring_N_m_rad: float | None
    flap_damper_N_m_s_rad: float
    root_moment_rating_N_m: float
    """Flap moment that the root carries: stands in for a stop's rating."""
    kind: Literal["hingeless"] = "hingeless"


@dataclass(frozen=True)
class TeeteringHub:
    """Two blades on one teeter hinge at the shaft axis."""

    precone_rad: float
    teeter_spring_N_m_rad: float
    teeter_damper_N_m_s_rad: float
    pitch_flap_coupling_rad: float
    kind: Literal["teetering"] = "teetering"


Hub = ArticulatedHub | HingelessHub | TeeteringHub


@dataclass(frozen=True)
class Retraction:
    """A droop stop that swings clear under centrifugal force."""

    release_rad_s: float
    """At and above this speed the retracted angle holds, running up."""
    reseat_rad_s: float
    """At and below this speed the static angle holds again, running down."""
    retracted_angle_rad: float


@dataclass(frozen=True)
class Stop:
    """A one-sided flap stop; the angle is the blade's flap angle from the hub plane.

    Damping grows with penetration and reaches the stated value where the stop carries its
    rated moment.
    """

    angle_rad: float
    stiffness_N_m_rad: float
    damping_N_m_s_rad: float
    moment_rating_N_m: float
    retraction: Retraction | None = None

    def lowest_angle_rad(self, speed_rad_s: float) -> float:
        """Angle in force at a held speed; between re-seat and release the static one."""
        if self.retraction is not None and speed_rad_s >= self.retraction.release_rad_s:
            return self.retraction.retracted_angle_rad
        return self.angle_rad


@dataclass(frozen=True)
class LagStop:
    """The two stops of a lag hinge, alike; angles count against the rotation, lag positive.

    Damping grows with penetration as on a flap stop.
    """

    lead_angle_rad: float
    """Lag angle where a leading blade meets its stop: zero or negative."""
    lag_angle_rad: float
    """Lag angle where a lagging blade meets its stop: zero or positive."""
    stiffness_N_m_rad: float
    damping_N_m_s_rad: float
    moment_rating_N_m: float


@dataclass(frozen=True)
class Balance:
    """What drives the stand once per revolution.

    Either a balance grade with the mass and speed that it refers to, or a measured unbalance.
    """

    static_moment_spread_kg_m: float
    """Greatest difference of first mass moment between two blades of the set."""
    lag_angle_spread_rad: float
    """Greatest difference of lag angle between two blades, from even places."""
    source: str
    grade_m_s: float | None = None
    mass_kg: float | None = None
    """Of rotor and hub together."""
    reference_rad_s: float | None = None
    measured_kg_m: float | None = None
    """Residual unbalance of hub and rotor, without the two spreads."""


@dataclass(frozen=True)
class MeasuredMode:
    """A natural frequency found by a rap test or in an earlier run."""

    mode: str
    """Label of the mode, such as ``flap 2``."""
    frequency_rad_s: float
    speed_rad_s: float
    """Rotor speed at which it was found; 0: a rap test."""
    collective_rad: float
    accuracy: float
    """Share of the frequency, either way."""
    source: str


@dataclass(frozen=True)
class Rotor:
    """Blades and hub with the speeds that were designed for and proven."""

    name: str
    n_blades: int
    clockwise: bool
    """Sense of rotation seen from the thrust side."""
    blade: Blade
    hub: Hub
    droop_stop: Stop | None
    up_stop: Stop | None
    control_stiffness_N_m_rad: float
    cyclic_authority_rad: float
    design_maximum_rad_s: float
    proven_rad_s: float
    root_force_rating_N: float
    lag_stop: LagStop | None = None
    """Articulated hubs only."""
    balance: Balance | None = None
    measured_modes: tuple[MeasuredMode, ...] = ()
    """Frequencies of this blade set, seen on the turning blade."""
