"""How much faster one batch of trimmed holds is than a march in time of each hold.

Run as a script: ``python tests/bench/bench_trim.py``. The march integrates the same equations for
one blade, flap and the induced velocity of every annulus, with LSODA at a relative tolerance of
1e-6 over 20 turns; the inflow follows its momentum balance with a lag of two turns, so that it
averages over azimuth. Both start from rest and the closed-form inflow.
"""

import sys
import time
from typing import Any

import numpy as np
from scipy.integrate import solve_ivp

from planner.model.rotor import (
    ArticulatedHub,
    Blade,
    Rotor,
    SectionSpan,
    Stations,
    SymmetricSection,
)
from planner.rotor.airload import BladeState, airload, blade_flow
from planner.rotor.annuli import (
    gradient_over_disc,
    starting_induced_m_s,
    wake_force_n_m,
    wake_force_slope,
)
from planner.rotor.case import Cases, make_cases
from planner.rotor.setup import RotorArrays, rotor_arrays
from planner.rotor.trim import trim

HOLDS = 60
TURNS = 20
LAG_TURNS = 2.0


def invented_rotor() -> RotorArrays:
    radius = np.linspace(0.3, 6.0, 20)
    flat = np.ones(20)
    stations = Stations(
        radius, 0.3 * flat, np.radians(-8.0) * radius / 6.0, 8.0 * flat, 2e4 * flat, 4e5 * flat,
        2e4 * flat, 0.05 * flat, 0.0 * flat, 0.0 * flat,
    )  # fmt: skip
    section = SymmetricSection("invented", 5.73, 0.0087, 0.4, np.radians(15.0))
    span = SectionSpan(section, 0.9, 6.0)
    blade = Blade(6.0, 0.9, 4.5, stations, (), (span,), ("1", "2", "3", "4"))
    hub = ArticulatedHub(0.3, 0.35, 0.0, 0.0, 0.0, 0.0, 100.0, 0.0, 0.0)
    clockwise = False
    return rotor_arrays(
        Rotor("invented", 4, clockwise, blade, hub, None, None, 1e4, 0.14, 36.0, 38.0, 1e6)
    )


def holds() -> Cases:
    random = np.random.default_rng(7)
    return make_cases(
        speed_rad_s=random.uniform(18.0, 36.0, HOLDS),
        collective_rad=np.radians(random.uniform(0.0, 10.0, HOLDS)),
        wind_m_s=random.uniform(2.0, 15.0, HOLDS),
        air_density_kg_m3=1.2,
        speed_of_sound_m_s=340.0,
    )


def march(rotor: RotorArrays, case: Cases) -> tuple[float, float, int]:
    """Lowest and highest flap of the last turn, and the evaluations it took."""
    Omega = float(case.speed_rad_s[0])
    turn = 2.0 * np.pi / Omega
    weight = rotor.station_width_m
    x = rotor.station_radius_m / rotor.radius_m
    inertia, S = rotor.flap_inertia_kg_m2, rotor.first_moment_kg_m

    def slope(moment: float, state: Any) -> Any:
        flap, rate, induced = state[0], state[1], state[None, 2:]
        psi = np.array([Omega * moment])
        share = 1.0 + gradient_over_disc(rotor, case, induced, "pitt-peters")[0] * x * np.cos(psi)
        blade = BladeState(
            psi,
            np.array([[flap]]),
            np.array([[rate]]),
            case.collective_rad[:, None],
            (induced * share)[None],
        )
        normal = airload(rotor, case, blade_flow(rotor, case, blade)).normal_N_m[0, 0]
        pull = np.sum(normal * weight * rotor.arm_m) - 9.80665 * S * np.cos(flap)
        pull -= Omega**2 * (inertia * np.cos(flap) + rotor.hub.hinge_m * S) * np.sin(flap)
        wake = wake_force_n_m(rotor, case, induced)
        stiff = wake_force_slope(rotor, case, induced, wake)[0] + 1.0
        follows = (rotor.n_blades * normal * np.cos(flap) - wake[0]) / (stiff * LAG_TURNS * turn)
        return np.concatenate([[rate, pull / inertia], follows])

    start = np.concatenate([[0.0, 0.0], starting_induced_m_s(rotor, case)[0]])
    times = turn * (TURNS - 1 + np.arange(73) / 72)
    run = solve_ivp(slope, (0.0, times[-1]), start, "LSODA", times, rtol=1e-6, atol=1e-8)
    return float(np.min(run.y[0])), float(np.max(run.y[0])), int(run.nfev)


def main() -> None:
    rotor, cases = invented_rotor(), holds()
    result = trim(rotor, cases)
    begin = time.perf_counter()
    for _ in range(3):
        result = trim(rotor, cases)
    batch = (time.perf_counter() - begin) / 3
    begin = time.perf_counter()
    marched = np.array([march(rotor, cases.take(np.array([lane]))) for lane in range(HOLDS)])
    single = time.perf_counter() - begin
    apart = np.degrees(
        max(
            np.max(np.abs(result.loads.flap_lowest_rad - marched[:, 0])),
            np.max(np.abs(result.loads.flap_highest_rad - marched[:, 1])),
        )
    )
    sys.stdout.write(
        f"{HOLDS} holds: batch {batch:.3f} s, marches {single:.1f} s "
        f"({np.mean(marched[:, 2]):.0f} evaluations each), ratio {single / batch:.0f}; "
        f"converged {int(result.converged.sum())}; extremes of flap differ by up to "
        f"{apart:.3f} deg\n"
    )


if __name__ == "__main__":
    main()
