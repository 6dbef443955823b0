"""The plan's wind against the rule book's cap."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from planner.model.results import Finding, Verdict

if TYPE_CHECKING:
    from planner.model.plan import Plan


def wind_cap_findings(plan: Plan) -> tuple[Finding, Finding]:
    """Judge mean wind and gust against the cap, with the anemometer's error on top.

    A book without a cap leaves the weather gate open: NOT ASSESSED.
    """
    site, book = plan.site, plan.rule_book
    error = abs(site.anemometer_error_m_s)
    gust = max(site.wind_gust_m_s, site.wind_mean_m_s)
    return (
        _finding("mean", site.wind_mean_m_s + error, book.wind_mean_cap_m_s),
        _finding("gust", gust + error, book.wind_gust_cap_m_s),
    )


def _finding(what: str, wind_m_s: float, cap_m_s: float | None) -> Finding:
    cap = math.nan if cap_m_s is None else cap_m_s
    verdict, reason = Verdict.GO, ""
    if not (math.isfinite(cap) and math.isfinite(wind_m_s)):
        verdict, reason = Verdict.NOT_ASSESSED, f"the rule book states no cap for the {what} wind"
    elif not wind_m_s <= cap:
        verdict = Verdict.NO_GO
        reason = f"{wind_m_s:.6g} m/s with the anemometer's error against the cap of {cap:.6g} m/s"
    assessed = verdict is not Verdict.NOT_ASSESSED
    return Finding(
        rule=f"wind cap: {what}",
        where="whole run",
        segment="",
        value=wind_m_s,
        low=wind_m_s,
        high=wind_m_s,
        limit=cap,
        caution=math.nan,
        margin=cap - wind_m_s,
        verdict=verdict,
        reason=reason,
        tested=int(assessed),
        not_assessed=int(not assessed),
    )
