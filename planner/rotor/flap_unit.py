"""The parts that flap together, as shapes and matrices: one blade, or a teetering pair."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from scipy.linalg import block_diag, eigh, solve

from planner.methods.beam import BeamMatrices, Root, flap_matrices
from planner.methods.beam_elements import quadrature, shapes
from planner.rotor.blade_views import beam

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from planner.methods.beam import BladeBeam
    from planner.model.rotor import Rotor
    from planner.rotor.setup import RotorArrays

    FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class FlapUnit:
    """Equations of what flaps together: M q'' + C q' + (K0 + Omega^2 K1) q = F.

    Height of a blade over the hub plane: (r - e) sin(beta) + shape . q, with
    beta = fixed + rigid . q. Station arrays hold 0 in the column of a rigid freedom.

    Attributes:
        n_blades: Blades in the unit.
        blade_azimuth_rad: Azimuth of each blade after the first, (blades,).
        fixed_flap_rad: Built-in flap.
        rigid: Rigid flap of each blade for unit freedoms, (blades, n).
        hinge: Rotation at the hinge of the first blade for unit freedoms, (n,).
        flap_view: What counts as flap: rotation at the hinge, or, of a blade that is built in, the
            height of its tip over its length, (n,).
        shape: Elastic height at the stations for unit freedoms, (blades, n, stations) [m].
        slope: Elastic slope at the stations for unit freedoms, (blades, n, stations).
        tip: Elastic height of the tip for unit freedoms, (blades, n) [m].
        mass: M, (n, n), diagonal.
        damping: C, (n, n).
        stiffness: K0, hinge spring included, (n, n).
        spin_stiffness: K1, (n, n).
        spin_fixed: Centrifugal load for unit built-in flap over speed squared, (n,).
        spring_load: Load of the relaxed hinge spring, (n,).
        weight: Load of unit gravity along thrust, (n,) [kg m or kg].
        first_moment: Mass times height over the whole blade, (blades, n) [kg m or kg].
        flap_inertia_kg_m2: Of one blade about the hinge; 0 without rigid flap.
        first_moment_kg_m: Of one blade about the hinge; 0 without rigid flap.
        root_mass: Moment of inertia forces about the root for unit freedoms, (blades, n).
        root_spin: Moment of centrifugal forces about the root for unit freedoms and speed,
            (blades, n).
        root_m: Where the root moment is taken: the hinge, or where the blade is built in.
        is_hinged: The unit has a flap hinge with stops.
    """

    n_blades: int
    blade_azimuth_rad: FloatArray
    fixed_flap_rad: float
    rigid: FloatArray
    hinge: FloatArray
    flap_view: FloatArray
    shape: FloatArray
    slope: FloatArray
    tip: FloatArray
    mass: FloatArray
    damping: FloatArray
    stiffness: FloatArray
    spin_stiffness: FloatArray
    spin_fixed: FloatArray
    spring_load: FloatArray
    weight: FloatArray
    first_moment: FloatArray
    flap_inertia_kg_m2: float
    first_moment_kg_m: float
    root_mass: FloatArray
    root_spin: FloatArray
    root_m: float
    is_hinged: bool

    @property
    def n_freedoms(self) -> int:
        """Number of freedoms."""
        return int(self.mass.shape[0])


@dataclass(frozen=True, eq=False)
class _Family:
    """Shapes of one blade held in one way, rigid flap first where there is a hinge."""

    at_stations: FloatArray
    slope_at_stations: FloatArray
    at_tip: FloatArray
    mass: FloatArray
    stiffness: FloatArray
    spin_stiffness: FloatArray
    hinge: FloatArray
    weight: FloatArray
    root_mass: FloatArray
    root_spin: FloatArray
    root_m: float
    is_hinged: bool


def flap_unit(rotor: Rotor, arrays: RotorArrays, n_elastic: int) -> FlapUnit:
    """Bind a rotor's hub and blade to the equations of its flapping units.

    An articulated blade flaps rigidly about its hinge, in its lowest hinged bending modes, and in
    the shape that it takes when it rests on a stop. A teetering pair has these with opposite sign
    on its two blades, and the bending of blades built in at the centre with equal sign. A
    hingeless blade is built in at its root.

    Args:
        rotor: The article under test.
        arrays: The same rotor's station arrays.
        n_elastic: Bending modes beside rigid flap.

    Returns:
        The unit.

    Raises:
        ValueError: A beam table that cannot be used, or a hingeless hub with pitch-flap coupling,
            which has no hinge angle to act on.
    """
    blade, kind = beam(rotor.blade), rotor.hub.kind
    stations = arrays.station_radius_m
    if kind == "articulated":
        return _single(_family(blade, Root(arrays.hub.hinge_m, 0.0), stations, n_elastic), arrays)
    if kind == "hingeless":
        if arrays.hub.pitch_flap != 0.0:
            msg = (
                "pitch-flap coupling: expected 0 deg on a hingeless hub, found "
                f"{np.degrees(np.arctan(arrays.hub.pitch_flap)):g} deg; marching has no flap "
                "hinge for it to act on"
            )
            raise ValueError(msg)
        root = getattr(rotor.hub, "root_m", arrays.hub.hinge_m)
        return _single(_family(blade, Root(root), stations, n_elastic + 1), arrays)
    hinged = _family(blade, Root(0.0, 0.0), stations, n_elastic)
    return _pair(hinged, _family(blade, Root(0.0), stations, n_elastic), arrays)


def _family(blade: BladeBeam, root: Root, stations: FloatArray, n_modes: int) -> _Family:
    """Rigid flap if hinged, the lowest bending modes, and the shape of resting under weight."""
    matrices = flap_matrices(blade, root)
    mass, bending = matrices.mass, matrices.stiffness_0
    hinged = int(root.is_free)
    spread = _Spread(blade, matrices, root.radius_m)
    weight = spread.over_mass(np.ones_like)
    _, vectors = eigh(bending, mass, subset_by_index=(0, n_modes + hinged - 1))
    resting = np.zeros((mass.shape[0], 1))
    resting[hinged:, 0] = solve(bending[hinged:, hinged:], weight[hinged:], assume_a="pos")
    columns = np.hstack([vectors[:, hinged:], resting])
    rigid = np.eye(mass.shape[0])[:, :hinged]
    if hinged:
        columns = columns - rigid @ (rigid.T @ mass @ columns) / mass[0, 0]
    _, mixed = eigh(columns.T @ bending @ columns, columns.T @ mass @ columns)
    columns = columns @ mixed
    tip = shapes(matrices.mesh, blade.radius_m[-1:]).second_integral
    basis = np.hstack([rigid, columns / (tip @ columns)])
    at = shapes(matrices.mesh, stations)
    elastic = basis.copy()
    elastic[:, :hinged] = 0.0
    return _Family(
        at_stations=(at.second_integral @ elastic).T,
        slope_at_stations=(at.first_integral @ elastic).T,
        at_tip=(tip @ elastic)[0],
        mass=np.diag(np.diag(basis.T @ mass @ basis)),
        stiffness=basis.T @ bending @ basis,
        spin_stiffness=basis.T @ matrices.stiffness_omega2 @ basis,
        hinge=basis[0] if hinged else np.zeros(basis.shape[1]),
        weight=basis.T @ weight,
        root_mass=basis.T @ spread.over_mass(lambda r: r - root.radius_m),
        root_spin=basis.T @ spread.over_mass(lambda r: r),
        root_m=root.radius_m,
        is_hinged=root.is_free,
    )


class _Spread:
    """Integrals of the beam's unknowns over its mass."""

    def __init__(self, blade: BladeBeam, matrices: BeamMatrices, root_m: float) -> None:
        breaks = np.concatenate([blade.radius_m, blade.point_radius_m])
        points = quadrature(matrices.mesh.node_radius_m, breaks)
        self._radius, self._weight = points.radius_m, points.weight_m
        self._at = shapes(matrices.mesh, points.radius_m)
        self._per_length = np.interp(points.radius_m, blade.radius_m, blade.mass_kg_m)
        out = blade.point_radius_m > root_m
        self._lump_radius, self._lump = blade.point_radius_m[out], blade.point_mass_kg[out]
        self._at_lumps = shapes(matrices.mesh, self._lump_radius)

    def over_mass(self, factor: Callable[[FloatArray], FloatArray]) -> FloatArray:
        """Height of each unknown times mass and a factor of radius, (unknowns,)."""
        spread = self._weight * self._per_length * factor(self._radius)
        lumped = self._lump * factor(self._lump_radius)
        total: FloatArray = self._at.second_integral.T @ spread
        return total + self._at_lumps.second_integral.T @ lumped


def _single(family: _Family, arrays: RotorArrays) -> FlapUnit:
    """One blade; built-in flap of a hingeless one is its precone."""
    hub = arrays.hub
    fixed = hub.fixed_flap_rad if family.is_hinged else hub.spring_neutral_rad
    spring = hub.spring_N_m_rad if family.is_hinged else 0.0
    hinge = family.hinge
    n = hinge.size
    view = hinge if family.is_hinged else family.at_tip / (arrays.radius_m - family.root_m)
    rigid = np.eye(n)[:1] if family.is_hinged else np.zeros((1, n))
    return FlapUnit(
        n_blades=1,
        blade_azimuth_rad=np.zeros(1),
        fixed_flap_rad=fixed,
        rigid=rigid,
        hinge=hinge,
        flap_view=view,
        shape=family.at_stations[None],
        slope=family.slope_at_stations[None],
        tip=family.at_tip[None],
        mass=family.mass,
        damping=hub.damper_N_m_s_rad * np.outer(view, view),
        stiffness=family.stiffness + spring * np.outer(hinge, hinge),
        spin_stiffness=family.spin_stiffness,
        spin_fixed=family.root_spin,
        spring_load=spring * (hub.spring_neutral_rad - fixed) * hinge,
        weight=family.weight,
        first_moment=family.weight[None],
        flap_inertia_kg_m2=arrays.flap_inertia_kg_m2 if family.is_hinged else 0.0,
        first_moment_kg_m=arrays.first_moment_kg_m if family.is_hinged else 0.0,
        root_mass=family.root_mass[None],
        root_spin=family.root_spin[None],
        root_m=family.root_m,
        is_hinged=family.is_hinged,
    )


def _pair(odd: _Family, even: _Family, arrays: RotorArrays) -> FlapUnit:
    """Two blades on one teeter hinge: hinged shapes opposite, built-in shapes alike."""
    hub = arrays.hub
    n_odd, n_even = odd.hinge.size, even.hinge.size
    hinge = np.concatenate([odd.hinge, np.zeros(n_even)])
    rigid = np.zeros((2, n_odd + n_even))
    rigid[:, 0] = 1.0, -1.0
    twice = 2.0 * np.outer(hinge, hinge)
    return FlapUnit(
        n_blades=2,
        blade_azimuth_rad=np.array([0.0, np.pi]),
        fixed_flap_rad=hub.fixed_flap_rad,
        rigid=rigid,
        hinge=hinge,
        flap_view=hinge,
        shape=_both(odd.at_stations, even.at_stations),
        slope=_both(odd.slope_at_stations, even.slope_at_stations),
        tip=_both(odd.at_tip, even.at_tip),
        mass=2.0 * block_diag(odd.mass, even.mass),
        damping=hub.damper_N_m_s_rad * twice,
        stiffness=2.0 * block_diag(odd.stiffness, even.stiffness) + hub.spring_N_m_rad * twice,
        spin_stiffness=2.0 * block_diag(odd.spin_stiffness, even.spin_stiffness),
        spin_fixed=2.0 * np.concatenate([np.zeros(n_odd), even.root_spin]),
        spring_load=np.zeros(n_odd + n_even),
        weight=2.0 * np.concatenate([np.zeros(n_odd), even.weight]),
        first_moment=_both(odd.weight, even.weight),
        flap_inertia_kg_m2=arrays.flap_inertia_kg_m2,
        first_moment_kg_m=arrays.first_moment_kg_m,
        root_mass=_both(odd.root_mass, even.root_mass),
        root_spin=_both(odd.root_spin, even.root_spin),
        root_m=0.0,
        is_hinged=True,
    )


def _both(odd: FloatArray, even: FloatArray) -> FloatArray:
    """The same for both blades of a pair: the odd part changes sign, the even part does not."""
    return np.stack([np.concatenate([odd, even]), np.concatenate([-odd, even])])
