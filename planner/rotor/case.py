"""Cases: one whole rotor held at one speed, pitch, wind and air each."""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    from planner.model.stand import Mounting

    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]
    IndexArray = NDArray[np.int64]

STANDARD_GRAVITY_M_S2 = 9.80665

_MAY_BE_MISSING = ("droop_angle_rad", "up_angle_rad", "given_inflow_m_s")
_ABOVE_ZERO = ("air_density_kg_m3", "speed_of_sound_m_s", "load_factor")
_DEFAULTS: dict[str, float | bool] = {
    "wind_m_s": 0.0,
    "cyclic_cosine_rad": 0.0,
    "cyclic_sine_rad": 0.0,
    "trimmed": False,
    "load_factor": 1.0,
    "droop_angle_rad": np.nan,
    "up_angle_rad": np.nan,
    "given_inflow_m_s": np.nan,
}


@dataclass(frozen=True, eq=False)
class Cases:
    """Held states of one rotor, each array of shape (cases,) unless stated.

    Attributes:
        speed_rad_s: Rotor speed, 0 or more; 0 is parked.
        collective_rad: Pitch at the collective radius.
        cyclic_cosine_rad: Cyclic pitch with the cosine of azimuth; not used where trimmed.
        cyclic_sine_rad: Cyclic pitch with the sine of azimuth; not used where trimmed.
        trimmed: Cyclic is to be found that leaves no first-harmonic flap.
        wind_m_s: Wind in the disc plane.
        air_density_kg_m3: Air density.
        speed_of_sound_m_s: Speed of sound.
        load_factor: Multiplies the lift of every blade element in flap, thrust and torque. The
            momentum balance that gives the induced velocity sees the lift without it.
        gravity_m_s2: Gravity downwind, crosswind (towards azimuth 90 degrees) and along thrust,
            (cases, 3).
        droop_angle_rad: Droop stop in force; not a number where the hub has none.
        up_angle_rad: Up stop; not a number where the hub has none.
        given_inflow_m_s: Uniform induced velocity to use; not a number where it is to be solved.

    Raises:
        ValueError: Shapes differ or a value cannot be.
    """

    speed_rad_s: FloatArray
    collective_rad: FloatArray
    cyclic_cosine_rad: FloatArray
    cyclic_sine_rad: FloatArray
    trimmed: BoolArray
    wind_m_s: FloatArray
    air_density_kg_m3: FloatArray
    speed_of_sound_m_s: FloatArray
    load_factor: FloatArray
    gravity_m_s2: FloatArray
    droop_angle_rad: FloatArray
    up_angle_rad: FloatArray
    given_inflow_m_s: FloatArray

    def __post_init__(self) -> None:
        """Refuse what cannot be a case."""
        count = self.speed_rad_s.shape[0]
        for field in fields(self):
            values = getattr(self, field.name)
            shape = (count, 3) if field.name == "gravity_m_s2" else (count,)
            if values.shape != shape:
                _refuse(field.name, f"shape {shape}", f"shape {values.shape}")
            if field.name not in _MAY_BE_MISSING and not np.all(np.isfinite(values)):
                _refuse(field.name, "finite values", "an empty or infinite one")
            if field.name in _ABOVE_ZERO and not np.all(values > 0.0):
                _refuse(field.name, "values above 0", f"{np.min(values):g}")
        if not np.all(self.speed_rad_s >= 0.0):
            _refuse("speed_rad_s", "values from 0 up", f"{np.min(self.speed_rad_s):g}")
        if np.any(self.droop_angle_rad >= self.up_angle_rad):
            _refuse("droop_angle_rad", "the droop stop below the up stop", "it at or above")

    @property
    def count(self) -> int:
        """Number of cases."""
        return int(self.speed_rad_s.shape[0])

    def take(self, where: IndexArray | BoolArray) -> Cases:
        """Pick cases by index or mask."""
        return Cases(*(getattr(self, field.name)[where] for field in fields(self)))


def make_cases(**values: ArrayLike) -> Cases:
    """Make cases from numbers and arrays that broadcast to one axis.

    Args:
        values: The fields of `Cases`. May be left out: wind and cyclic (0), `trimmed` (no),
            `load_factor` (1), `gravity_m_s2` (upright), stops (none), `given_inflow_m_s` (to be
            solved).

    Returns:
        The cases.

    Raises:
        ValueError: A field is missing or unknown, shapes do not broadcast, or a value cannot be.

    Example:
        >>> make_cases(speed_rad_s=[0.0, 30.0], collective_rad=0.1, air_density_kg_m3=1.2,
        ...            speed_of_sound_m_s=340.0).count
        2
    """
    names = [field.name for field in fields(Cases)]
    given = {"gravity_m_s2": gravity_vector_m_s2("upright"), **_DEFAULTS, **values}
    if set(given) != set(names):
        wrong = sorted(set(given) ^ set(names))
        msg = f"cases: expected the fields {', '.join(names)}; missing or unknown: {wrong}"
        raise ValueError(msg)
    arrays = {
        name: np.atleast_1d(np.asarray(given[name], dtype=bool if name == "trimmed" else float))
        for name in names
    }
    gravity = np.atleast_2d(arrays.pop("gravity_m_s2"))
    (count,) = np.broadcast_shapes(gravity.shape[:1], *(array.shape for array in arrays.values()))
    spread = {name: np.broadcast_to(array, (count,)).copy() for name, array in arrays.items()}
    spread["gravity_m_s2"] = np.broadcast_to(gravity, (count, 3)).copy()
    return Cases(**spread)


def gravity_vector_m_s2(mounting: Mounting, *, wind_from_other_side: bool = False) -> FloatArray:
    """Gravity in the rotor's axes: downwind, crosswind towards azimuth 90 degrees, along thrust.

    Args:
        mounting: How the rotor axis stands.
        wind_from_other_side: Axis level only, where the wind lies in the disc plane and may blow
            from either side. The blade that advances into the wind points up, or, with this
            argument, down.

    Returns:
        The vector, (3,) [m/s2].

    Example:
        >>> gravity_vector_m_s2("inverted").tolist()
        [0.0, 0.0, 9.80665]
    """
    g = STANDARD_GRAVITY_M_S2
    match mounting:
        case "upright":
            return np.array([0.0, 0.0, -g])
        case "inverted":
            return np.array([0.0, 0.0, g])
        case "axis level":
            return np.array([0.0, g if wind_from_other_side else -g, 0.0])


def _refuse(name: str, expected: str, found: str) -> None:
    msg = f"cases, {name}: expected {expected}, found {found}; correct that value"
    raise ValueError(msg)
