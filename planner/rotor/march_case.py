"""Marched cases: one whole rotor through one history in one wind each, and how finely."""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    FloatArray = NDArray[np.float64]
    IndexArray = NDArray[np.int64]


@dataclass(frozen=True, eq=False)
class Histories:
    """What is prescribed over time, one row a history, held at its last value after its end.

    Attributes:
        step_s: Time between columns.
        speed_rad_s: Rotor speed, (histories, times).
        collective_rad: Pitch at the collective radius, (histories, times).
        cyclic_cosine_rad: Cyclic pitch with the cosine of azimuth, (histories, times).
        cyclic_sine_rad: Cyclic pitch with the sine of azimuth, (histories, times).
        end_s: When each history ends, (histories,).
    """

    step_s: float
    speed_rad_s: FloatArray
    collective_rad: FloatArray
    cyclic_cosine_rad: FloatArray
    cyclic_sine_rad: FloatArray
    end_s: FloatArray


@dataclass(frozen=True, eq=False)
class Turbulence:
    """Turbulence series that cases may ride, repeated when they run out.

    Attributes:
        step_s: Time between samples.
        wind_m_s: Along the mean wind, across it (towards azimuth 90 degrees) and up, added to
            the mean, (series, times, 3); at least one series.
    """

    step_s: float
    wind_m_s: FloatArray


STILL = Turbulence(1.0, np.zeros((1, 2, 3)))
"""No turbulence."""


@dataclass(frozen=True, eq=False)
class MarchCases:
    """Whole rotors to be marched, each array of shape (cases,).

    Attributes:
        history: Row of the histories.
        azimuth_rad: Azimuth of the first blade when the history begins.
        wind_m_s: Mean wind in the disc plane, towards azimuth 0.
        gust_m_s: What a 1-cosine gust adds at its peak.
        gust_start_s: When the gust begins.
        gust_length_s: How long it lasts from calm to calm, above 0.
        upflow: Upward wind over wind in the disc plane.
        series: Row of the turbulence; -1 for none.
        series_start_s: Time within the series when the history begins.
        air_density_kg_m3: Air density.
        speed_of_sound_m_s: Speed of sound.
        load_factor: Multiplies the lift of every blade element, as for held cases.
        counts_from_rad_s: Rotor speed from which touches of the droop stop count by themselves.
        seats: The retracting droop stop re-seats as it should.

    Raises:
        ValueError: Shapes differ or a value cannot be.
    """

    history: IndexArray
    azimuth_rad: FloatArray
    wind_m_s: FloatArray
    gust_m_s: FloatArray
    gust_start_s: FloatArray
    gust_length_s: FloatArray
    upflow: FloatArray
    series: IndexArray
    series_start_s: FloatArray
    air_density_kg_m3: FloatArray
    speed_of_sound_m_s: FloatArray
    load_factor: FloatArray
    counts_from_rad_s: FloatArray
    seats: NDArray[np.bool_]

    def __post_init__(self) -> None:
        """Refuse what cannot be marched."""
        count = self.history.shape
        for field in fields(self):
            values = getattr(self, field.name)
            if values.shape != count or not np.all(np.isfinite(values)):
                msg = (
                    f"march cases: {field.name}: expected {count[0]} finite values, found "
                    f"shape {values.shape} with {np.sum(np.isfinite(values))} finite"
                )
                raise ValueError(msg)
        if not np.all(self.gust_length_s > 0.0):
            msg = (
                "march cases: gust_length_s: expected above 0 s, found "
                f"{np.min(self.gust_length_s):g} s"
            )
            raise ValueError(msg)

    @property
    def count(self) -> int:
        """Number of cases."""
        return int(self.history.shape[0])

    def take(self, where: NDArray[Any]) -> MarchCases:
        """Pick cases by index or mask."""
        return MarchCases(*(getattr(self, field.name)[where] for field in fields(self)))


_DEFAULTS: dict[str, Any] = {
    "azimuth_rad": 0.0,
    "gust_m_s": 0.0,
    "gust_start_s": 0.0,
    "gust_length_s": 1.0,
    "upflow": 0.0,
    "series": -1,
    "series_start_s": 0.0,
    "load_factor": 1.0,
    "counts_from_rad_s": 0.0,
    "seats": True,
}
_KINDS: dict[str, type] = {"history": np.int64, "series": np.int64, "seats": np.bool_}


def make_march_cases(**values: ArrayLike) -> MarchCases:
    """Make cases from numbers and arrays that broadcast to one axis.

    Args:
        values: The fields of `MarchCases`. May be left out: azimuth (0), gust and upflow (none),
            turbulence (none), load factor (1), `counts_from_rad_s` (0), `seats` (yes).

    Returns:
        The cases.

    Raises:
        ValueError: A field is missing or unknown, or a value cannot be.
    """
    names = [field.name for field in fields(MarchCases)]
    given = {**_DEFAULTS, **values}
    if set(given) != set(names):
        wrong = sorted(set(given) ^ set(names))
        msg = f"march cases: expected the fields {', '.join(names)}; missing or unknown: {wrong}"
        raise ValueError(msg)
    arrays: list[NDArray[Any]] = [
        np.atleast_1d(np.asarray(given[n], dtype=_KINDS.get(n, np.float64))) for n in names
    ]
    return MarchCases(*(np.array(array) for array in np.broadcast_arrays(*arrays)))


@dataclass(frozen=True)
class MarchSettings:
    """Fineness of the march; the guide tells the convergence study that chose the defaults.

    Attributes:
        steps_per_turn: Steps in one turn at speed.
        longest_step_s: Longest step at low speed and at rest.
        substeps: Least number of steps within a step of a rotor with a blade on or near a stop; a
            stiff stop takes more.
        lead_in_turns: Turns at the history's first state before it begins, from turning rotors.
        longest_lead_in_s: Longest time of these turns.
        lead_in_s: The same for rotors at rest.
        elastic_modes: Bending modes beside rigid flap and the shape of resting on a stop.
        gradient: Fore-aft gradient of the induced velocity is kept.
        single: Precision is float32, for screening.
    """

    steps_per_turn: int = 48
    longest_step_s: float = 0.01
    substeps: int = 8
    lead_in_turns: float = 6.0
    longest_lead_in_s: float = 10.0
    lead_in_s: float = 2.0
    elastic_modes: int = 3
    gradient: bool = True
    single: bool = False

    @property
    def dtype(self) -> type[np.floating[Any]]:
        """Type of the numbers."""
        return np.float32 if self.single else np.float64
