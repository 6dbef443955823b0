"""The wind gate: the greatest wind in which every start, stop and abort stays inside the rules."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.explore.gate_scan import scan
from planner.explore.gate_team import Team
from planner.explore.gate_trial import Wind
from planner.judge.wind_gate import gate_findings
from planner.model.canonical import digest, plain
from planner.predict.sectors import sectors_of

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from planner.explore.gate_scan import SectorScan
    from planner.explore.gate_trial import Desk, Tried
    from planner.model.plan import Plan

    Gate = dict[str, Any]

STEP_M_S = 1.0
MOST_WINDS = 100
"""A finer step would take hours."""
COARSEST_M_S = 2.0
"""A coarser one could pass over winds that fail."""
AHEAD = 2
"""Winds tried side by side; fixed, so that a gate does not depend on the machine."""
ROUNDING = 1e-9
NO_CAP = "the rule book: it states no cap for mean wind and gust, so that nothing bounds the gate"
INSIDE = "GO: the planned wind is inside the gate of every sector"


def wind_gate(plan: Plan, desk: Desk, step_m_s: float = STEP_M_S) -> Gate:
    """Find the greatest mean wind and gust of each sector, as read at the anemometer.

    Winds are tried upward from calm in steps, never above the rule book's cap, until one fails.
    The anemometer may read low by its error, which is taken off what passes.

    Args:
        plan: The model.
        desk: What trials are predicted with.
        step_m_s: Step of the mean wind.

    Returns:
        The gate in plain values:
        ``kept_for`` digest of the plan; ``step_m_s``; ``averaging_time_s``;
        ``anemometer_error_m_s``; ``cap`` and ``planned``: each ``mean_m_s`` and ``gust_m_s``;
        ``sectors``: each ``name``, ``mean_m_s`` and ``gust_m_s`` (null: closed), ``limited_by``,
        ``first_failure_mean_m_s`` (null: none), ``at_cap``, ``is_assessed`` (false: what ends it
        is something that was not assessed, no limit), ``cautions`` at the gate;
        ``levels``: each ``sector``, ``mean_m_s``, ``gust_m_s`` (true wind), ``passes``,
        ``fails``, ``cautions``, ``is_full`` (tried at full fineness);
        ``verdict`` in words.

    Raises:
        ValueError: A step that is not above 0, too small or too coarse.

    Validity:
        The gate holds for the winds that were tried. Those below it were marched as finely as
        the search of a run is, the gate itself as finely as the run.
    """
    site, book = plan.site, plan.rule_book
    likes = _likes(plan)
    winds = winds_to_try(plan, step_m_s)
    found = _scanned(plan, desk, winds, list(dict.fromkeys(likes.values())))
    gate: Gate = {
        "kept_for": digest(plan),
        "step_m_s": step_m_s,
        "averaging_time_s": site.averaging_time_s,
        "anemometer_error_m_s": abs(site.anemometer_error_m_s),
        "cap": {"mean_m_s": book.wind_mean_cap_m_s, "gust_m_s": book.wind_gust_cap_m_s},
        "planned": {"mean_m_s": site.wind_mean_m_s, "gust_m_s": site.wind_gust_m_s},
        "sectors": [_sector(name, found[like], winds, plan) for name, like in likes.items()],
        "levels": [
            _level(name, one)
            for name, like in likes.items()
            for _, one in sorted(found[like].tried.items())
        ],
    }
    verdict = gate_findings(site, gate)[0]
    words = f"{verdict.verdict.value}: {verdict.reason}" if verdict.reason else INSIDE
    return dict(plain({**gate, "verdict": words}))


def winds_to_try(plan: Plan, step_m_s: float) -> tuple[Wind, ...]:
    """Calm, then mean winds in steps up to the rule book's cap, which is the last.

    The gust of each is the mean plus what the plan's gust is above the plan's mean. Where the
    book states no cap there are none: nothing would bound the scan.

    Raises:
        ValueError: A step that is not above 0, too small or too coarse.
    """
    book = plan.rule_book
    mean_cap, gust_cap = book.wind_mean_cap_m_s, book.wind_gust_cap_m_s
    if mean_cap is None or gust_cap is None or not math.isfinite(mean_cap + gust_cap):
        return ()
    spread = max(0.0, plan.site.wind_gust_m_s - plan.site.wind_mean_m_s)
    top = max(0.0, min(mean_cap, gust_cap - spread))
    least = top / MOST_WINDS
    if not (step_m_s > 0.0 and least <= step_m_s <= COARSEST_M_S):
        msg = (
            f"step: expected a wind speed from {max(least, ROUNDING):.2g} m/s to "
            f"{COARSEST_M_S:g} m/s, found {step_m_s:g} m/s; a gate is found to the step, usually "
            "1 m/s"
        )
        raise ValueError(msg)
    below = np.arange(step_m_s, top * (1.0 - ROUNDING), step_m_s).tolist()
    means = [*below, top] if top > 0.0 else []
    return (Wind(0.0, 0.0), *(Wind(mean, mean + spread) for mean in means))


def _likes(plan: Plan) -> dict[str, str]:
    """Sectors with the first one of the same wind, which is tried for all of them."""
    stand = plan.stand
    sectors = sectors_of(plan.site, stand.hub_height_m, stand.obstructions, (1.0, 1.0))
    first: dict[object, str] = {}
    likes: dict[str, str] = {}
    for sector in sectors:
        wind = replace(sector, name="", reason="")
        likes[sector.name] = first.setdefault((wind, bool(sector.reason)), sector.name)
    return likes


def _scanned(
    plan: Plan, desk: Desk, winds: Sequence[Wind], names: Sequence[str]
) -> Mapping[str, SectorScan]:
    with Team(plan, desk) as team:
        return {sector.name: sector for sector in scan(winds, names, team, AHEAD)}


def _sector(name: str, found: SectorScan, winds: Sequence[Wind], plan: Plan) -> Gate:
    """What a scan comes to for one sector."""
    error, top, failed = abs(plan.site.anemometer_error_m_s), found.top, found.first_failure
    mean = gust = None
    if top >= 0 and winds[top].mean_m_s >= error - ROUNDING:
        mean, gust = (max(0.0, v - error) for v in (winds[top].mean_m_s, winds[top].gust_m_s))
    limited_by = failed.fails[0].words if failed else _cap_words(winds, plan)
    return {
        "name": name,
        "mean_m_s": mean,
        "gust_m_s": gust,
        "limited_by": limited_by,
        "first_failure_mean_m_s": failed.trial.wind.mean_m_s if failed else None,
        "at_cap": bool(winds) and failed is None,
        "is_assessed": failed.fails[0].is_exceeded if failed else bool(winds),
        "cautions": list(found.tried[top].cautions) if top >= 0 else [],
    }


def _cap_words(winds: Sequence[Wind], plan: Plan) -> str:
    if not winds:
        return NO_CAP
    cap = plan.rule_book.wind_mean_cap_m_s
    is_mean = cap is not None and winds[-1].mean_m_s >= cap - ROUNDING
    return f"the rule book's cap on {'mean wind' if is_mean else 'gusts'}"


def _level(name: str, one: Tried) -> Gate:
    return {
        "sector": name,
        "mean_m_s": one.trial.wind.mean_m_s,
        "gust_m_s": one.trial.wind.gust_m_s,
        "passes": one.passes,
        "fails": [fail.words for fail in one.fails],
        "cautions": list(one.cautions),
        "is_full": one.trial.is_full,
    }
