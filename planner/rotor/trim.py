"""Trim: the periodic state of every held case, and what its stops have to do with it."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.rotor.balance import Problem
from planner.rotor.loads import Loads, loads
from planner.rotor.motion import free_motion, held_flap_rad, held_motion
from planner.rotor.newton import Solution, solve
from planner.rotor.parked import parked
from planner.rotor.result import FlapState, TrimResult, TrimSettings

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.case import Cases
    from planner.rotor.setup import RotorArrays

    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]
    IndexArray = NDArray[np.int64]

PARKED_BELOW_RAD_S = 1e-3
OUTSIDE_SHARE_LIMIT = 0.05
"""Share of moments that rests on no section data, from which a result is outside validity."""
RESIDUAL_LIMIT = 1e-6
"""Largest left-over of flap [rad] and of ring force (relative) in a converged case."""


@dataclass(frozen=True, eq=False)
class _Found:
    """Solved cases before they are put in place, each (cases,) unless stated."""

    loads: Loads
    converged: BoolArray
    state: IndexArray
    stop_moment_N_m: FloatArray
    cyclic_rad: FloatArray
    need: FloatArray
    need_found: BoolArray


def trim(rotor: RotorArrays, cases: Cases, settings: TrimSettings | None = None) -> TrimResult:
    """Periodic flap, inflow and loads of held cases.

    Blades that their centrifugal force cannot lift off the droop stop without help from the air
    are first tried at rest on it; then flap is solved free of stops; blades whose free flap passes
    a stop, or does not close, are tried at rest on it. A trimmed rotor has no cyclic while its
    blades rest. A parked rotor is in static balance at every azimuth, the worst azimuth kept.

    Args:
        rotor: The rotor.
        cases: Held states. What a case yields does not depend on which others are solved with it.
        settings: Fineness; None takes the defaults.

    Returns:
        The results.

    Validity:
        Rigid flap; stops without give and not in use while blades flap; steady sections and
        inflow. What could not be solved is marked, never raised.
    """
    chosen = settings or TrimSettings()
    whole = _nothing(cases)
    is_parked = cases.speed_rad_s <= PARKED_BELOW_RAD_S
    has_droop = np.isfinite(cases.droop_angle_rad)
    _settle(whole, is_parked, _parked(rotor, cases.take(is_parked), chosen))
    heavy = ~is_parked & has_droop & _stays_down(rotor, cases)
    _settle_resting(whole, heavy, rotor, cases, chosen)
    turning = ~is_parked & (whole.state == FlapState.UNKNOWN)
    _settle(whole, turning, _free(rotor, cases.take(turning), chosen))
    in_doubt = (whole.state == FlapState.INTERMITTENT) | (whole.state == FlapState.UNKNOWN)
    _settle_resting(whole, in_doubt & turning & ~heavy & has_droop, rotor, cases, chosen)
    in_doubt = (whole.state == FlapState.UP_STOP) | (whole.state == FlapState.UNKNOWN)
    has_up = np.isfinite(cases.up_angle_rad) & (rotor.hub.pair == 0.0)
    up = in_doubt & turning & has_up
    _settle_resting(whole, up, rotor, cases, chosen, on_up=True)
    return _result(rotor, cases, whole)


def free_flap(
    rotor: RotorArrays, cases: Cases, settings: TrimSettings | None = None
) -> tuple[Loads, BoolArray]:
    """Periodic state of blades without stops, trimmed within the cyclic authority.

    Args:
        rotor: The rotor.
        cases: Held states, none parked.
        settings: Fineness; None takes the defaults.

    Returns:
        Results, and whether each case is solved. Unsolved cases hold meaningless numbers.
    """
    found = _free(rotor, cases, settings or TrimSettings())
    return found.loads, found.converged


def held_on_stop(
    rotor: RotorArrays,
    cases: Cases,
    settings: TrimSettings | None = None,
    *,
    on_up: bool = False,
) -> tuple[Loads, BoolArray]:
    """State of blades that lie on their stop all round; trimmed cases without cyclic.

    Args:
        rotor: The rotor.
        cases: Held states with a droop stop, none parked.
        settings: Fineness; None takes the defaults.
        on_up: Blades that flap alone lie on the up stop.

    Returns:
        Results, and whether the inflow of each case is solved. Blades stay on the droop stop where
        `lift_off_moment_N_m` is negative, on the up stop where `stop_moment_N_m` is.
    """
    chosen = settings or TrimSettings()
    motion = held_motion(rotor.hub, chosen.n_azimuths)
    problem = Problem(rotor, motion, chosen.gradient)
    droop, up = cases.droop_angle_rad, cases.up_angle_rad
    flap = held_flap_rad(rotor.hub, droop, up, chosen.n_azimuths, on_up=on_up)
    fixed = _without_trim(cases, np.zeros((cases.count, 2)))
    solution = solve(problem, fixed, flap)
    results = loads(problem, fixed, solution.trial)
    return results, solution.converged & _closes(results)


def _free(rotor: RotorArrays, cases: Cases, settings: TrimSettings) -> _Found:
    motion = free_motion(rotor.hub, settings.n_azimuths, settings.n_harmonics)
    problem = Problem(rotor, motion, settings.gradient)
    base = np.full((cases.count, settings.n_azimuths), rotor.hub.fixed_flap_rad)
    solution = solve(problem, cases, base)
    need_found = solution.converged | ~cases.trimmed
    need_rad = solution.trial.cyclic_rad
    lost = np.flatnonzero(~need_found)
    if lost.size:
        bare = _without_trim(cases.take(lost), np.zeros((lost.size, 2)))
        without = solve(problem, bare, base[lost]).trial.freedoms
        need_rad = need_rad.copy()
        need_rad[lost] = np.stack([-without[:, 1], without[:, 0]], axis=1)
    need = _share_of_authority(rotor, need_rad)
    solution = _within_authority(problem, cases, solution, need_rad, need)
    results = loads(problem, cases, solution.trial)
    passes_droop = results.flap_lowest_rad < cases.droop_angle_rad
    passes_up = results.flap_highest_rad > cases.up_angle_rad
    state = np.where(passes_up, FlapState.UP_STOP, FlapState.FREE)
    state = np.where(passes_droop, FlapState.INTERMITTENT, state)
    return _Found(
        loads=results,
        converged=solution.converged & _closes(results),
        state=state,
        stop_moment_N_m=np.where(state == FlapState.FREE, 0.0, np.nan),
        cyclic_rad=solution.trial.cyclic_rad,
        need=need,
        need_found=need_found,
    )


def _within_authority(
    problem: Problem,
    cases: Cases,
    solution: Solution,
    need_rad: FloatArray,
    need: FloatArray,
) -> Solution:
    """Solve again, with cyclic cut down to the authority, what was trimmed beyond or in vain."""
    again = np.flatnonzero(cases.trimmed & ~(solution.converged & (need <= 1.0)))
    if again.size == 0:
        return solution
    cut = need_rad[again] / np.maximum(need[again], 1.0)[:, None]
    limited = _without_trim(cases.take(again), cut)
    solved = solve(problem, limited, solution.trial.fixed_flap_rad[again])
    trial, converged = solution.trial, solution.converged.copy()
    trial.freedoms[again] = solved.trial.freedoms
    trial.cyclic_rad[again] = solved.trial.cyclic_rad
    trial.induced_m_s[again] = solved.trial.induced_m_s
    converged[again] = solved.converged
    return Solution(trial, converged)


def _share_of_authority(rotor: RotorArrays, cyclic_rad: FloatArray) -> FloatArray:
    size = np.hypot(cyclic_rad[:, 0], cyclic_rad[:, 1])
    if rotor.cyclic_authority_rad > 0.0:
        return np.asarray(size / rotor.cyclic_authority_rad)
    return np.asarray(np.where(size > 0.0, np.inf, 0.0))


def _without_trim(cases: Cases, cyclic_rad: FloatArray) -> Cases:
    """The cases with trimmed ones at the cyclic given, (cases, 2)."""
    return replace(
        cases,
        trimmed=np.zeros_like(cases.trimmed),
        cyclic_cosine_rad=np.where(cases.trimmed, cyclic_rad[:, 0], cases.cyclic_cosine_rad),
        cyclic_sine_rad=np.where(cases.trimmed, cyclic_rad[:, 1], cases.cyclic_sine_rad),
    )


def _stays_down(rotor: RotorArrays, cases: Cases) -> BoolArray:
    """Without air load weight and spring hold the blade on the droop stop."""
    hub, S = rotor.hub, rotor.first_moment_kg_m
    flap = held_flap_rad(hub, cases.droop_angle_rad, cases.up_angle_rad, 2)
    flap = flap[:, [0, -1]]
    sine, cosine = np.sin(flap), np.cos(flap)
    spin = cases.speed_rad_s[:, None] ** 2
    lift = -spin * (rotor.flap_inertia_kg_m2 * cosine + hub.hinge_m * S) * sine
    lift -= hub.spring_N_m_rad * (flap - hub.spring_neutral_rad)
    lift += S * cases.gravity_m_s2[:, 2, None] * cosine
    return np.asarray(lift[:, 0] - hub.pair * lift[:, 1] <= 0.0)


def _settle_resting(
    whole: _Found,
    where: BoolArray,
    rotor: RotorArrays,
    cases: Cases,
    settings: TrimSettings,
    *,
    on_up: bool = False,
) -> None:
    """Put in place what rests on a stop of the cases marked."""
    index = np.flatnonzero(where)
    part = cases.take(index)
    results, converged = held_on_stop(rotor, part, settings, on_up=on_up)
    lifting, pressing = results.lift_off_moment_N_m, results.stop_moment_N_m
    if on_up:
        lifting, pressing = pressing, lifting
    rests = converged & (lifting < 0.0)
    cyclic = np.stack([part.cyclic_cosine_rad, part.cyclic_sine_rad], axis=1)
    cyclic = np.where(part.trimmed[:, None], 0.0, cyclic)
    found = _Found(
        loads=results,
        converged=rests,
        state=np.full(index.size, FlapState.RESTING_UP if on_up else FlapState.RESTING),
        stop_moment_N_m=pressing,
        cyclic_rad=cyclic,
        need=_share_of_authority(rotor, cyclic),
        need_found=np.ones(index.size, dtype=bool),
    )
    kept = np.flatnonzero(rests)
    picked = _Found(
        _pick(results, kept), *(getattr(found, field.name)[kept] for field in fields(_Found)[1:])
    )
    _settle(whole, index[kept], picked)


def _parked(rotor: RotorArrays, cases: Cases, settings: TrimSettings) -> _Found:
    still = replace(cases, speed_rad_s=np.zeros(cases.count))
    problem, solution = parked(rotor, still, settings.n_azimuths)
    cyclic = solution.trial.cyclic_rad
    down, up = solution.on_droop, solution.on_up
    state = np.where(np.any(down, axis=-1), FlapState.INTERMITTENT, FlapState.FREE)
    state = np.where(np.any(up, axis=-1), FlapState.UP_STOP, state)
    state = np.where(np.all(up, axis=-1), FlapState.RESTING_UP, state)
    return _Found(
        loads=loads(problem, still, solution.trial),
        converged=solution.converged,
        state=np.where(np.all(down, axis=-1), FlapState.RESTING, state),
        stop_moment_N_m=solution.stop_moment_N_m,
        cyclic_rad=cyclic,
        need=_share_of_authority(rotor, cyclic),
        need_found=np.ones(cases.count, dtype=bool),
    )


def _closes(results: Loads) -> BoolArray:
    flap, inflow = results.flap_residual_rad, results.inflow_residual
    return np.asarray((flap < RESIDUAL_LIMIT) & (inflow < RESIDUAL_LIMIT))


def _nothing(cases: Cases) -> _Found:
    count = cases.count
    return _Found(
        loads=Loads(*(np.full(count, np.nan) for _ in fields(Loads))),
        converged=np.zeros(count, dtype=bool),
        state=np.full(count, int(FlapState.UNKNOWN)),
        stop_moment_N_m=np.full(count, np.nan),
        cyclic_rad=np.stack([cases.cyclic_cosine_rad, cases.cyclic_sine_rad], axis=1),
        need=np.full(count, np.nan),
        need_found=np.zeros(count, dtype=bool),
    )


def _pick(results: Loads, where: IndexArray) -> Loads:
    return Loads(*(getattr(results, field.name)[where] for field in fields(Loads)))


def _settle(whole: _Found, where: IndexArray | BoolArray, found: _Found) -> None:
    """Put solved cases in their places; what did not converge stays unknown."""
    solved = found.converged
    for field in fields(Loads):
        values = getattr(found.loads, field.name)
        getattr(whole.loads, field.name)[where] = np.where(solved, values, np.nan)
    whole.converged[where] = solved
    whole.state[where] = np.where(solved, found.state, int(FlapState.UNKNOWN))
    whole.stop_moment_N_m[where] = np.where(solved, found.stop_moment_N_m, np.nan)
    whole.cyclic_rad[where] = found.cyclic_rad
    whole.need[where] = found.need
    whole.need_found[where] = found.need_found


def _result(rotor: RotorArrays, cases: Cases, whole: _Found) -> TrimResult:
    tip_speed = cases.speed_rad_s * rotor.radius_m
    turns = cases.speed_rad_s > PARKED_BELOW_RAD_S
    pressure = cases.air_density_kg_m3 * np.where(turns, tip_speed, np.nan) ** 2
    return TrimResult(
        state=whole.state,
        converged=whole.converged,
        loads=whole.loads,
        stop_moment_N_m=whole.stop_moment_N_m,
        power_W=whole.loads.torque_N_m * cases.speed_rad_s,
        blade_loading=whole.loads.thrust_N / (pressure * rotor.blade_area_m2),
        root_centrifugal_force_N=cases.speed_rad_s**2 * rotor.centrifugal_factor_kg_m,
        cyclic_cosine_rad=whole.cyclic_rad[:, 0].copy(),
        cyclic_sine_rad=whole.cyclic_rad[:, 1].copy(),
        cyclic_need=whole.need,
        cyclic_need_found=whole.need_found,
        outside_sections=whole.loads.outside_share > OUTSIDE_SHARE_LIMIT,
    )
