"""The verdict and its findings for a terminal, 80 columns or wider."""

from __future__ import annotations

import os
import shutil
import sys
import textwrap
from typing import TYPE_CHECKING, Any

from planner.paper.abort_causes import Aborts
from planner.paper.gate import kept_gate, limit_words, speed_text
from planner.paper.reading import Reading
from planner.paper.texts import limit, toward_danger, worst_end

if TYPE_CHECKING:
    from collections.abc import Mapping

NARROW, WIDE = 80, 120
ORDER = ("NO-GO", "NOT ASSESSED", "CAUTION", "GO")
_BOLD, _PLAIN = "\033[1m", "\033[0m"


def headline(record: Mapping[str, Any]) -> str:
    """The verdict in one line, GO never without its reservation."""
    verdict = record["verdict"]
    words = "PLAN GO, not clearance to run" if verdict == "GO" else verdict
    plan = record["plan"]
    return f"{plan['card']} rev {plan['revision']}: {_strong(words)}"


def summary(record: Mapping[str, Any]) -> str:
    """Verdict, findings with the worst first, coverage, aborts by cause, and the wind gate."""
    width = max(NARROW, min(WIDE, shutil.get_terminal_size((NARROW, 24)).columns))
    rules = {rule["id"]: rule for rule in record["plan"]["rule_book"]["rules"]}
    units = {entry["id"]: entry for entry in record["vocabulary"]}
    lines = [headline(record), record["plan"]["title"], ""]
    if not record["plan"]["rule_book"]["approved"]:
        lines += ["The rule book is an EXAMPLE, approved by nobody.", ""]
    findings = sorted(record["findings"], key=lambda finding: ORDER.index(finding["verdict"]))
    for finding in findings:
        lines += _finding(finding, rules.get(finding["rule"]), units, width)
    lines += ["", "Coverage of hazard classes"]
    for cell in record["coverage"]:
        text = f"{cell['hazard_class']}, {cell['where']}: {cell['closed_by'] or 'open'}"
        lines += _entry(cell["verdict"], text, width)
    lines += [*_aborts(record, width), *_gate(record, width)]
    lines += [
        "",
        *textwrap.wrap(
            "A planning aid. It does not replace the facility's approved procedures, local codes "
            "or licensed practice, and gives nobody clearance to run.",
            width,
        ),
    ]
    # paper glues units to their numbers with no-break spaces; a terminal wraps by itself
    return "\n".join(lines).replace("\N{NO-BREAK SPACE}", " ")


def _aborts(record: Mapping[str, Any], width: int) -> list[str]:
    """What aborts of each cause come to, and where the worst of them begins."""
    lines = ["", "Aborts by cause"]
    for found in Aborts(Reading(record)).verdicts:
        worst = f", worst from {found.origin}" if found.origin else ""
        by = f"; outside document {', '.join(found.documents)}" if found.documents else ""
        lines += _entry(found.verdict.value, f"{found.cause}{worst}{by}", width)
    return lines


def _gate(record: Mapping[str, Any], width: int) -> list[str]:
    """The wind gate, where one is kept for this very plan."""
    gate = kept_gate(record)
    if gate is None:
        return []
    lines = ["", "Wind gate, mean and gust at most"]
    for sector in gate["sectors"]:
        mean, gust = (speed_text(sector[key]) for key in ("mean_m_s", "gust_m_s"))
        text = f"{sector['name']}: {mean}, {gust}; {limit_words(sector)}"
        lines += textwrap.wrap(text, width, initial_indent="  ", subsequent_indent=" " * 15)
    return lines


def _finding(
    finding: Mapping[str, Any],
    rule: Mapping[str, Any] | None,
    units: Mapping[str, Any],
    width: int,
) -> list[str]:
    title = f"{finding['rule']}: {rule['title']}" if rule else str(finding["rule"])
    lines = _entry(finding["verdict"], title, width)
    details = []
    if rule and None not in (finding["low"], finding["high"]):
        details.append(_numbers(finding, rule, units[rule["quantity"]]))
    if finding["reason"] and (finding["verdict"] != "GO" or not finding["tested"]):
        details.append(finding["reason"])
    if finding["closed_by"]:
        details.append(f"outside document {finding['closed_by']} stands in where not assessed")
    for detail in details:
        lines += textwrap.wrap(detail, width, initial_indent=" " * 15, subsequent_indent=" " * 15)
    return lines


def _numbers(finding: Mapping[str, Any], rule: Mapping[str, Any], entry: Mapping[str, Any]) -> str:
    worst, toward = worst_end(finding["low"], finding["high"], rule["sense"], entry["danger"])
    shown = toward_danger(worst, entry["unit"], toward)
    text = f"{shown} at {finding['where'] or 'the whole run'}"
    if finding["limit"] is None:
        return text
    return f"{text}; {rule['sense']} {limit(finding['limit'], entry['unit'], rule['sense'])}"


def _entry(verdict: str, text: str, width: int) -> list[str]:
    wrapped = textwrap.wrap(text, width - 15) or [""]
    first = f"  {_strong(f'{verdict:<12}')} {wrapped[0]}"
    return [first, *(" " * 15 + more for more in wrapped[1:])]


def _strong(text: str) -> str:
    """Bold on a terminal that allows it."""
    if sys.stdout is not None and sys.stdout.isatty() and not os.environ.get("NO_COLOR"):
        return f"{_BOLD}{text}{_PLAIN}"
    return text
