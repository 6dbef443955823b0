"""What trim yields, and how finely it looks."""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

    from planner.rotor.annuli import Gradient
    from planner.rotor.loads import Loads

    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]
    IndexArray = NDArray[np.int64]


class FlapState(IntEnum):
    """What the blades do over a turn."""

    FREE = 0
    """They reach no stop."""
    RESTING = 1
    """They lie on the droop stop all round."""
    RESTING_UP = 2
    """They lie on the up stop all round, as on a slow inverted rotor."""
    INTERMITTENT = 3
    """Free flap would pass the droop stop, yet they do not lie on it all round: they knock."""
    UP_STOP = 4
    """Free flap would pass the up stop, yet they do not lie on it all round."""
    UNKNOWN = 5
    """No solution was found."""


@dataclass(frozen=True)
class TrimSettings:
    """Fineness of the solution; the defaults keep flap within 0.01 degrees of finer ones.

    Attributes:
        n_azimuths: Collocation azimuths in a turn, even.
        n_harmonics: Highest flap harmonic.
        gradient: Fore-aft gradient of the induced velocity.

    Raises:
        ValueError: Azimuths are odd, or too few for the harmonics.
    """

    n_azimuths: int = 24
    n_harmonics: int = 5
    gradient: Gradient = "pitt-peters"

    def __post_init__(self) -> None:
        """Refuse a grid that cannot carry the harmonics."""
        if self.n_azimuths % 2 or not 1 <= self.n_harmonics < self.n_azimuths // 2:
            msg = (
                f"trim settings: expected an even number of azimuths and from 1 to below half as "
                f"many harmonics, found {self.n_azimuths} and {self.n_harmonics}; refine the grid"
            )
            raise ValueError(msg)


@dataclass(frozen=True, eq=False)
class TrimResult:
    """Results of held cases, each of shape (cases,).

    Where `converged` is false every other number but the cyclic is not a number, and the state is
    UNKNOWN. In the states INTERMITTENT and UP_STOP flap and loads are those of blades without
    stops: they say that and how far stops would be passed, and nothing about what then happens.

    Attributes:
        state: `FlapState`.
        converged: A solution was found, and its equations close.
        loads: Flap and loads.
        stop_moment_N_m: Largest moment that presses on a stop over azimuth: 0 in FREE, not a
            number in INTERMITTENT and UP_STOP while the rotor turns, where it is not computed.
        power_W: Torque times speed.
        blade_loading: Thrust over air density, blade area and tip speed squared; not a number
            where parked.
        root_centrifugal_force_N: Centrifugal force of one straight blade at the hinge.
        cyclic_cosine_rad: Cyclic pitch in force.
        cyclic_sine_rad: Cyclic pitch in force.
        cyclic_need: Cyclic pitch called for over the authority, both parts combined. Above 1 a
            trimmed case is solved with the authority in the same direction.
        cyclic_need_found: The need is computed. Where false the trim did not close, the need is
            the first-harmonic flap without cyclic over the authority, a guess.
        outside_sections: More than 5 % of the moments rest on no section data.
    """

    state: IndexArray
    converged: BoolArray
    loads: Loads
    stop_moment_N_m: FloatArray
    power_W: FloatArray
    blade_loading: FloatArray
    root_centrifugal_force_N: FloatArray
    cyclic_cosine_rad: FloatArray
    cyclic_sine_rad: FloatArray
    cyclic_need: FloatArray
    cyclic_need_found: BoolArray
    outside_sections: BoolArray
