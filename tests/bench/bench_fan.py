"""How much faster a fan chart's blade modes are than the full matrices of each speed.

Run as a script: ``python tests/bench/bench_fan.py``. One articulated blade with twist, offsets and
point masses; 61 rotor speeds with 8 modes named by shape: flap 4, lag 2, torsion 2. Assembly
counts. The yardstick assembles the same matrices once and solves them whole at each speed with
scipy.linalg.eigh(K, M), and names nothing. CPU seconds, medians, the numerical libraries on one
thread, both in turn.
"""

from __future__ import annotations

import os

for library in ("OMP", "OPENBLAS", "MKL"):
    os.environ.setdefault(f"{library}_NUM_THREADS", "1")

import statistics  # noqa: E402 - the threads are set before numpy loads
import sys  # noqa: E402
import time  # noqa: E402
from typing import TYPE_CHECKING  # noqa: E402

import numpy as np  # noqa: E402
from scipy.linalg import eigh  # noqa: E402

from planner.methods.beam import BladeBeam, Root  # noqa: E402
from planner.methods.coupled_beam import (  # noqa: E402
    BladeRoots,
    CoupledBlade,
    coupled_matrices,
    pencils,
)
from planner.methods.coupled_modes import coupled_modes  # noqa: E402

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from planner.methods.beam import Family

    FloatArray = NDArray[np.float64]

REPEATS = 9
SPEED = np.linspace(0.0, 45.0, 61)
COLLECTIVE = 0.1
COUNTS: dict[Family, int] = {"flap": 4, "lag": 2, "torsion": 2}


def invented_blade() -> tuple[CoupledBlade, BladeRoots]:
    r = np.concatenate([[0.3, 0.6, 0.9], np.linspace(1.2, 6.0, 20)])
    inner, taper = r < 0.9, 1.0 - 0.05 * r
    beam = BladeBeam(
        r,
        np.where(inner, 20.0, 7.0) - 0.3 * r,
        np.where(inner, 2e5, 2.5e4) * taper,
        np.where(inner, 8e5, 7e5) * taper,
        np.where(inner, 8e4, 2e4),
        np.full(r.size, 0.06),
        np.array([4.5, 6.0]),
        np.array([1.5, 0.8]),
    )
    twist = np.radians(6.0 - 8.0 * r / 6.0)
    blade = CoupledBlade(beam, twist, np.full(r.size, 0.01), np.array([-0.03, 0.02]))
    return blade, BladeRoots(Root(0.35, 0.0), Root(0.45, 0.0), Root(0.3, 2e4), 0.3)


def fan() -> FloatArray:
    matrices = coupled_matrices(*invented_blade())
    return coupled_modes(matrices, SPEED, COLLECTIVE, COUNTS).frequency_rad_s


def speed_by_speed() -> FloatArray:
    """Squared frequencies of every speed, all of them, lowest first."""
    matrices = coupled_matrices(*invented_blade())
    found = []
    for speed in SPEED:
        mass, stiffness = pencils(matrices, [speed], [COLLECTIVE])
        found.append(eigh(stiffness[0], mass[0])[0])
    return np.array(found)


def cpu_s(call: Callable[[], object]) -> float:
    begin = time.process_time()
    call()
    return time.process_time() - begin


def main() -> None:
    named, full = fan(), np.sqrt(np.maximum(speed_by_speed(), 0.0))
    pairs = [(cpu_s(fan), cpu_s(speed_by_speed)) for _ in range(REPEATS)]
    ours, theirs = (statistics.median(column) for column in zip(*pairs, strict=True))
    ratio = statistics.median(other / own for own, other in pairs)
    turning = SPEED > 0.0
    apart = np.min(np.abs(named[turning, :, None] - full[turning, None, :]), axis=-1)
    sys.stdout.write(
        f"{SPEED.size} speeds, {named.shape[1]} modes: {ours:.3f} s; {full.shape[1]} unknowns "
        f"speed by speed {theirs:.3f} s, ratio {ratio:.1f}; frequencies differ by up to "
        f"{float(np.max(apart / named[turning])):.1e}\n"
    )


if __name__ == "__main__":
    main()
