"""The plan's wind against the wind gate that is kept for this very plan.

A gate is a plain mapping, as `planner.explore.wind_gate` makes it and the record holds it.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any, NamedTuple

from planner.model.canonical import digest_of_plain
from planner.model.results import Finding, Verdict

if TYPE_CHECKING:
    from collections.abc import Mapping

    from planner.model.plan import Site

    Gate = Mapping[str, Any]

WAY = 1
"""Raised when gates are found in another way: those kept before are not found again."""
RULE = "wind gate"
ROUNDING_M_S = 1e-9
"""Difference that is mere binary representation."""


def gate_key(meaning_digest: str, versions: Mapping[str, str]) -> str:
    """Name under which the gate of a plan is kept.

    Args:
        meaning_digest: digest of the plan in SI.
        versions: of the program and the libraries that the numbers depend on.
    """
    return digest_of_plain([RULE, WAY, meaning_digest, dict(versions)])


def gate_verdict(gate: Gate) -> Verdict:
    """Tell where the wind lies that the gate's plan was made for."""
    planned = gate["planned"]
    wind = _Wind(float(planned["mean_m_s"]), float(planned["gust_m_s"]))
    return Verdict.worst([_verdict(wind, sector) for sector in gate["sectors"]])


def gate_findings(site: Site, gate: Gate | None) -> tuple[Finding, ...]:
    """Judge mean wind and gust as they are read against the gate of every sector.

    The sector that leaves the least room is told. Without a gate nothing is found: none need be
    computed. Above it the plan is NO-GO; where the gate ends because something was not assessed,
    NOT ASSESSED.
    """
    wind = _Wind(site.wind_mean_m_s, max(site.wind_gust_m_s, site.wind_mean_m_s))
    return () if gate is None else (_finding(wind, gate),)


class _Wind(NamedTuple):
    mean_m_s: float
    gust_m_s: float


def _finding(wind: _Wind, gate: Gate) -> Finding:
    if not gate["sectors"]:
        return _found(wind, math.nan, math.nan, (Verdict.NOT_ASSESSED, "it holds no sector"))
    sector = min(gate["sectors"], key=lambda one: (-_verdict(wind, one).rank, _room(wind, one)))
    verdict = _verdict(wind, sector)
    reason = "" if verdict is Verdict.GO else _words(wind, sector)
    limit = sector["mean_m_s"]
    numbers = math.nan if limit is None else float(limit), _room(wind, sector)
    return _found(wind, *numbers, (verdict, reason))


def _verdict(wind: _Wind, sector: Gate) -> Verdict:
    """Inside, above, or above where nobody knows that it fails."""
    if _room(wind, sector) >= -ROUNDING_M_S:
        return Verdict.GO
    return Verdict.NO_GO if sector.get("is_assessed", True) else Verdict.NOT_ASSESSED


def _room(wind: _Wind, sector: Gate) -> float:
    """What the wind leaves to the gate, by mean or gust; no room at all where it is closed."""
    mean, gust = sector["mean_m_s"], sector["gust_m_s"]
    if mean is None or gust is None:
        return -math.inf
    return min(float(mean) - wind.mean_m_s, float(gust) - wind.gust_m_s)


def _words(wind: _Wind, sector: Gate) -> str:
    bounds = "it is closed"
    if sector["mean_m_s"] is not None:
        bounds = f"{sector['mean_m_s']:.6g} m/s mean and {sector['gust_m_s']:.6g} m/s gust"
    return (
        f"{wind.mean_m_s:.6g} m/s mean and {wind.gust_m_s:.6g} m/s gust against the gate from "
        f"{sector['name']}: {bounds}; limited by {sector['limited_by']}"
    )


def _found(wind: _Wind, limit: float, margin: float, said: tuple[Verdict, str]) -> Finding:
    verdict, reason = said
    assessed = verdict is not Verdict.NOT_ASSESSED
    return Finding(
        rule=RULE,
        where="whole run",
        segment="",
        value=wind.mean_m_s,
        low=wind.mean_m_s,
        high=wind.mean_m_s,
        limit=limit,
        caution=math.nan,
        margin=margin if math.isfinite(margin) else math.nan,
        verdict=verdict,
        reason=reason,
        tested=int(assessed),
        not_assessed=int(not assessed),
    )
