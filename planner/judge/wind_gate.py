"""The plan's wind against the wind gate that is kept for this very plan.

A gate is a plain mapping, as `planner.explore.wind_gate` makes it and the record holds it.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

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


def gate_findings(site: Site, gate: Gate | None) -> tuple[Finding, ...]:
    """Judge mean wind and gust as they are read against the gate of every sector.

    The sector that leaves the least room is told. Without a gate nothing is found: none need be
    computed. Above it the plan is NO-GO; where the gate ends because something was not assessed,
    NOT ASSESSED.
    """
    return () if gate is None else (_finding(site, gate),)


def _finding(site: Site, gate: Gate) -> Finding:
    if not gate["sectors"]:
        return _found(site, math.nan, math.nan, (Verdict.NOT_ASSESSED, "it holds no sector"))
    sector = min(gate["sectors"], key=lambda one: (-_verdict(site, one).rank, _room(site, one)))
    verdict = _verdict(site, sector)
    reason = "" if verdict is Verdict.GO else _words(site, sector)
    limit = sector["mean_m_s"]
    numbers = math.nan if limit is None else limit, _room(site, sector)
    return _found(site, *numbers, (verdict, reason))


def _verdict(site: Site, sector: Gate) -> Verdict:
    """Inside, above, or above where nobody knows that it fails."""
    if _room(site, sector) >= -ROUNDING_M_S:
        return Verdict.GO
    return Verdict.NO_GO if sector.get("is_assessed", True) else Verdict.NOT_ASSESSED


def _room(site: Site, sector: Gate) -> float:
    """What the wind leaves to the gate, by mean or gust; no room at all where it is closed."""
    mean, gust = sector["mean_m_s"], sector["gust_m_s"]
    if mean is None or gust is None:
        return -math.inf
    return min(float(mean) - site.wind_mean_m_s, float(gust) - _gust(site))


def _gust(site: Site) -> float:
    return max(site.wind_gust_m_s, site.wind_mean_m_s)


def _words(site: Site, sector: Gate) -> str:
    bounds = "it is closed"
    if sector["mean_m_s"] is not None:
        bounds = f"{sector['mean_m_s']:.6g} m/s mean and {sector['gust_m_s']:.6g} m/s gust"
    return (
        f"{site.wind_mean_m_s:.6g} m/s mean and {_gust(site):.6g} m/s gust against the gate from "
        f"{sector['name']}: {bounds}; limited by {sector['limited_by']}"
    )


def _found(site: Site, limit: float, margin: float, said: tuple[Verdict, str]) -> Finding:
    verdict, reason = said
    assessed = verdict is not Verdict.NOT_ASSESSED
    return Finding(
        rule=RULE,
        where="whole run",
        segment="",
        value=site.wind_mean_m_s,
        low=site.wind_mean_m_s,
        high=site.wind_mean_m_s,
        limit=limit,
        caution=math.nan,
        margin=margin if math.isfinite(margin) else math.nan,
        verdict=verdict,
        reason=reason,
        tested=int(assessed),
        not_assessed=int(not assessed),
    )
