"""Outside documents: what an approved document may stand in for, and how far it reaches.

A document closes what this tool could not compute or computed outside a method's validity. It
never closes a number that did not converge, a limit that is missing or cannot be resolved, a
number that should be there and is not, or an exceeded limit: those are faults of this plan.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.judge.case import WHOLE_RUN, Case
from planner.judge.references import Missing, predicted
from planner.model.results import Status
from planner.model.rules import HAZARD_CLASSES
from planner.units import from_si

if TYPE_CHECKING:
    from planner.model.plan import OutsideDocument

CLOSABLE = (Status.NOT_COMPUTED, Status.OUTSIDE_VALIDITY)
"""Statuses that a document may stand in for."""


def parts_of(hazard_class: str) -> tuple[str, ...]:
    """Parts of the run that a class has to cover; classes that a plan or book adds: the run."""
    return HAZARD_CLASSES[hazard_class][1] if hazard_class in HAZARD_CLASSES else (WHOLE_RUN,)


def closing_document(
    hazard_class: str, part: str, highest_rad_s: float, case: Case
) -> tuple[str, str]:
    """Look for a document that stands in for a hazard class in a part of the run.

    Args:
        hazard_class: class to close.
        part: hold, ramp, stop, abort or run.
        highest_rad_s: highest rotor speed reached there, gauge error included.
        case: the plan with its documents.

    Returns:
        Number of the document and an empty text, or an empty number and why those that name the
        class and part do not reach (empty where there are none).
    """
    whys: list[str] = []
    for document in case.plan.documents:
        if document.hazard_class != hazard_class or not _names(document, part):
            continue
        why = _falls_short(document, highest_rad_s, case)
        if not why:
            return document.number, ""
        whys.append(why)
    return "", "; ".join(whys)


def _names(document: OutsideDocument, part: str) -> bool:
    """Tell whether a document is about a part of the run.

    Where a class is closed part by part, a document for the run as a whole is taken only for
    numbers of the whole run, for which naming every part is as good. Where a class is closed for
    the run at once, a document for the run holds for all its parts.
    """
    parts = parts_of(document.hazard_class)
    if part in document.where:
        return True
    if part == WHOLE_RUN:
        return set(parts) <= set(document.where)
    return part not in parts and WHOLE_RUN in document.where


def _falls_short(document: OutsideDocument, highest_rad_s: float, case: Case) -> str:
    """Why a document that names the class and part does not reach; empty where it does."""
    number, wind = document.number, _strongest_wind(case)
    if isinstance(wind, Missing):
        return f"document {number} cannot be held against the wind: {wind.reason}"
    checks = (
        (bool(number.strip()), "an outside document without a number closes nothing"),
        (bool(document.approver.strip()), f"document {number} names no approver"),
        (
            wind <= document.wind_limit_m_s,
            f"document {number} reaches to {document.wind_limit_m_s:.4g} m/s wind, the plan's "
            f"gust with anemometer error is {wind:.4g} m/s at the anemometer or the hub",
        ),
        (bool(document.date.strip()), f"document {number} has no date"),
        (
            document.date[:10] <= case.plan.issued[:10],
            f"document {number} is dated {document.date}, after the card's issue",
        ),
        (
            highest_rad_s <= document.speed_limit_rad_s,
            f"document {number} reaches to {_rpm(document.speed_limit_rad_s)}, this part of the "
            f"run with gauge error to {_rpm(highest_rad_s)}",
        ),
    )
    return next((why for is_so, why in checks if not is_so), "")


def _strongest_wind(case: Case) -> float | Missing:
    """Gust with the anemometer's error, at the anemometer or at the hub, whichever is more."""
    site = case.plan.site
    read = max(site.wind_mean_m_s, site.wind_gust_m_s) + abs(site.anemometer_error_m_s)
    at_hub = predicted("wind_at_hub", case.predictions)
    return at_hub if isinstance(at_hub, Missing) else max(read, at_hub.greatest)


def _rpm(speed_rad_s: float) -> str:
    return f"{from_si(speed_rad_s, 'rpm'):.5g} rpm"
