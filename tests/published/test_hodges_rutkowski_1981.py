"""Uniform and tapered rotating cantilevers.

D. H. Hodges, M. J. Rutkowski, Free-vibration analysis of rotating beams by a variable-order
finite-element method, AIAA Journal 19(11), 1981, pp. 1459-1466. From memory; each number was also
reproduced by two independent solvers.

Dimensionless with the root properties, x = r/L: the tapered beam has m = 1 - x/2 and
EI = (1 - x/2)³. The cubic is entered as 200 straight pieces.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest

from planner.methods.beam import BladeBeam, Root, flap_matrices
from planner.methods.beam_modes import frequencies

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from planner.methods.beam import BeamMatrices

    Profile = Callable[[NDArray[np.float64]], NDArray[np.float64]]

pytestmark = pytest.mark.published


def cantilever(mass: Profile, stiffness: Profile, stations: int = 201) -> BeamMatrices:
    x = np.linspace(0.0, 1.0, stations)
    one = np.ones(stations)
    bending = stiffness(x) * one
    beam = BladeBeam(x, mass(x) * one, bending, bending, one, one)
    return flap_matrices(beam, Root(0.0))


def test_uniform_at_speed_twelve() -> None:
    matrices = cantilever(lambda x: 1.0 + 0.0 * x, lambda x: 1.0 + 0.0 * x, stations=2)
    assert frequencies(matrices, 12.0, 3) == pytest.approx([13.1702, 37.6031, 79.6145], rel=2e-5)


@pytest.mark.parametrize(
    ("speed", "expected"),
    [(0.0, [3.82379, 18.3173, 47.2648]), (12.0, [13.4711, 34.0877, 65.5237])],
)
def test_tapered(speed: float, expected: list[float]) -> None:
    matrices = cantilever(lambda x: 1.0 - x / 2, lambda x: (1.0 - x / 2) ** 3)
    assert frequencies(matrices, speed, 3) == pytest.approx(expected, rel=5e-5)
