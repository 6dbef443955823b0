"""How finely a march cuts blade, turn and time: what each costs in accuracy.

Run as a script: ``python tests/bench/bench_march_convergence.py``; takes some minutes. Two of the
stored marches of tests/reference, an engagement in a gust and a coast-down onto both stops, are
repeated with one measure changed at a time, all others fine, and compared with the finest; then
with the settings that are used, against the stored adaptive integrations.
"""

from __future__ import annotations

import os

for library in ("OMP", "OPENBLAS", "MKL"):
    os.environ.setdefault(f"{library}_NUM_THREADS", "1")

import dataclasses  # noqa: E402 - the threads are set before numpy loads
import functools  # noqa: E402
import json  # noqa: E402
import sys  # noqa: E402
import time  # noqa: E402

import numpy as np  # noqa: E402

from planner.predict.march_runs import PRINTED, SEARCH  # noqa: E402
from planner.rotor.march import march  # noqa: E402
from planner.rotor.march_case import MarchSettings  # noqa: E402
from planner.rotor.march_model import march_model  # noqa: E402
from tests.reference.engine_cases import TOP_RAD_S, cases, histories  # noqa: E402
from tests.reference.make_march_references import STORED, setups  # noqa: E402
from tests.reference.reference_rotor import reference_rotor  # noqa: E402

NAMES = ("engagement in a gust", "coast-down")
FINE = MarchSettings(96, 0.0025, 8, elastic_modes=4, lead_in_s=0.0, lead_in_turns=0.0)
FINE_STATIONS = 24
COLUMNS = ("highest deg", "lowest deg", "lowest tip %", "droop %", "up %", "contacts", "CPU s")


@functools.cache
def found(settings: MarchSettings, stations: int) -> tuple[tuple[float, ...], ...]:
    """Of each march: flap [deg], lowest tip, both stop moments, contacts, CPU time."""
    rows = []
    for name in NAMES:
        setup = setups()[name]
        rotor = dataclasses.replace(reference_rotor(), droop_stop=setup.droop, up_stop=setup.up)
        model = march_model(rotor, TOP_RAD_S, settings, stations, one_blade=True)
        begin = time.process_time()
        result = march(model, histories(setup), cases(name))
        spent = time.process_time() - begin
        seen = result.extremes
        rows.append(
            (
                float(np.degrees(seen.highest_flap_rad[0, 0])),
                float(np.degrees(seen.lowest_flap_rad[0, 0])),
                float(seen.lowest_tip_m.min()),
                float(seen.droop_N_m[0, 0]),
                float(seen.up_N_m[0, 0]),
                float(result.contacts.count[0, 0]),
                spent,
            )
        )
    return tuple(rows)


def stored() -> tuple[tuple[float, ...], ...]:
    """The same of the adaptive integrations, contacts left out."""
    everything = json.loads(STORED.read_text(encoding="utf-8"))
    names = (
        "highest_flap_deg",
        "lowest_flap_deg",
        "lowest_tip_m",
        "droop_peak_N_m",
        "up_peak_N_m",
    )
    return tuple(
        (*(float(everything[name]["results"][key]) for key in names), np.nan, np.nan)
        for name in NAMES
    )


def line(
    words: str, one: tuple[tuple[float, ...], ...], other: tuple[tuple[float, ...], ...]
) -> None:
    """Worst difference of both marches."""
    a, b = np.array(one), np.array(other)
    apart = a - b
    share = apart[:, 2:5] / np.where(np.abs(b[:, 2:5]) > 0.0, b[:, 2:5], np.inf)
    apart[:, 2:5] = 100.0 * share
    worst = [values[np.argmax(np.abs(values))] for values in apart[:, :6].T]
    shown = " ".join(f"{value:12.4f}" for value in (*worst, a[:, 6].sum()))
    sys.stdout.write(f"{words:28s} {shown}\n")


def main() -> None:
    """Print the study."""
    finest = found(dataclasses.replace(FINE, elastic_modes=5), 32)
    sys.stdout.write(f"{'':28s} {' '.join(f'{name:>12s}' for name in COLUMNS)}\n")
    for stations in (8, 12, 16, 24):
        line(f"stations {stations}", found(FINE, stations), found(FINE, 32))
    for modes in (1, 2, 3, 4):
        changed = dataclasses.replace(FINE, elastic_modes=modes)
        line(
            f"bending modes {modes}",
            found(changed, FINE_STATIONS),
            found(dataclasses.replace(FINE, elastic_modes=5), FINE_STATIONS),
        )
    base = dataclasses.replace(FINE, elastic_modes=3)
    for steps in (16, 24, 48):
        changed = dataclasses.replace(base, steps_per_turn=steps, longest_step_s=0.1)
        fine = dataclasses.replace(base, steps_per_turn=192, longest_step_s=0.1)
        line(f"steps a turn {steps}, no limit", found(changed, 24), found(fine, 24))
    for longest in (0.02, 0.015, 0.01, 0.005):
        changed = dataclasses.replace(base, longest_step_s=longest)
        line(f"longest step {longest} s", found(changed, 24), found(base, 24))
    for parts in (1, 4, 8, 16):
        changed = dataclasses.replace(base, longest_step_s=0.01, substeps=parts)
        fine = dataclasses.replace(changed, substeps=32)
        line(f"sub-steps at least {parts}", found(changed, 24), found(fine, 24))
    for words, settings in (("printed", PRINTED), ("search", SEARCH)):
        used = dataclasses.replace(settings, lead_in_s=0.0, lead_in_turns=0.0)
        line(f"{words}, 16 stations", found(used, 16), stored())
    line("finest", finest, stored())


if __name__ == "__main__":
    main()
