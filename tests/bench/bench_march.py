"""How much faster a march of many cases is than an adaptive integration of each.

Run as a module: ``python -m tests.bench.bench_march``. The yardstick integrates the same equations
(tests/reference) for one case with solve_ivp: the 40 s engagement of the stored references, rigid
flap, three bending modes and the shape at rest, 24 stations. CPU time, since cores are shared;
everything in one process, the numerical libraries on one thread. LSODA at a relative tolerance of
1e-6 is what speeds are stated against; other methods are printed beside it, since LSODA is not
the quickest of them.
"""

from __future__ import annotations

import os

for library in ("OMP", "OPENBLAS", "MKL"):
    os.environ.setdefault(f"{library}_NUM_THREADS", "1")

import dataclasses  # noqa: E402 - the threads are set before numpy loads
import statistics  # noqa: E402 - the threads are set before numpy loads
import sys  # noqa: E402
import time  # noqa: E402
from functools import partial  # noqa: E402
from typing import TYPE_CHECKING  # noqa: E402

from planner.predict.march_runs import PRINTED, SEARCH  # noqa: E402
from tests.reference.engine_cases import run  # noqa: E402
from tests.reference.make_march_references import marched, setups  # noqa: E402
from tests.reference.march_reference import Solver, contacts  # noqa: E402

if TYPE_CHECKING:
    from collections.abc import Callable

    from planner.rotor.march_case import MarchSettings

REPEATS = 3
LANES = (1, 64, 1000)
YARDSTICKS = {
    "LSODA 1e-6": Solver("LSODA", 1e-6, 1e-6),
    "RK45 1e-6": Solver("RK45", 1e-6, 1e-6),
    "DOP853 1e-6": Solver("DOP853", 1e-6, 1e-6),
}
MARCHES: dict[str, MarchSettings] = {
    "double precision, as printed": PRINTED,
    "single precision, 48 steps a turn": dataclasses.replace(PRINTED, single=True),
    "single precision, as in the search": SEARCH,
}
"""What is measured, by name."""


def cpu_s(call: Callable[[], object], repeats: int = REPEATS) -> float:
    """Median CPU time of a call."""
    spent = []
    for _ in range(repeats):
        begin = time.process_time()
        call()
        spent.append(time.process_time() - begin)
    return statistics.median(spent)


def yardstick(name: str, repeats: int = REPEATS) -> float:
    """CPU time of one adaptive integration, with what it found printed."""
    setup, solver = setups()["engagement"], YARDSTICKS[name]
    spent = cpu_s(lambda: marched(setup, solver), repeats)
    found = marched(setup, solver)
    sys.stdout.write(
        f"{name}: {spent:.2f} s, {found.evaluations} evaluations, droop stop up to "
        f"{found.droop_moment_n_m().max():.1f} N m, {len(contacts(found))} contacts\n"
    )
    return spent


def main() -> None:
    stated = yardstick("LSODA 1e-6")
    for name in ("RK45 1e-6", "DOP853 1e-6"):
        yardstick(name, 1)
    for name, settings in MARCHES.items():
        for lanes in LANES:
            spent = cpu_s(partial(run, "engagement", settings, lanes))
            sys.stdout.write(
                f"{name}, {lanes} cases: {spent:.2f} s, {stated * lanes / spent:.0f} times faster "
                "a case\n"
            )


if __name__ == "__main__":
    main()
