"""Words and numbers that the tables of the fan chart and of passages share."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.model.results import Status, Verdict
from planner.paper import texts
from planner.paper.reading import covers

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from planner.paper.reading import Json, Reading

NOT_COMPUTED = f"{texts.NOT_ASSESSED} ({Status.NOT_COMPUTED.value})"
NO_HAND = "—"
EXEMPT = "exempt by damping"
_NO_FINDING = {"limit": None, "verdict": Verdict.NOT_ASSESSED.value, "tested": 0}


def is_absent(row: Json) -> bool:
    """Whether a row says that there is no such thing."""
    return bool(row["status"] == Status.NOT_APPLICABLE.value)


def number_text(reading: Reading, quantity: str, row: Json | None) -> str:
    """Print a number with its range, or NOT ASSESSED and why."""
    shown = reading.shown_row(quantity, row)
    if row is None:
        return NOT_COMPUTED
    if not shown.is_number:
        return missing_text(row, shown.why)
    entry = reading.vocabulary[quantity]
    value = texts.toward_danger(shown.value, entry["unit"], entry["danger"])
    if shown.low == shown.high:
        return value
    return f"{value} ({texts.span(shown.low, shown.high, entry['unit'])})"


def missing_text(row: Json, why: str) -> str:
    """Say why a row has no number, by the record's own reason."""
    status = row["status"]
    if is_absent(row):
        return (
            f"{texts.DOES_NOT_APPLY} ({row['reason']})" if row["reason"] else texts.DOES_NOT_APPLY
        )
    said = status if status != Status.OK.value else why
    parts = [part for part in (said, row["reason"]) if part and part != NO_HAND]
    return f"{texts.NOT_ASSESSED} ({': '.join(parts) or Status.NOT_COMPUTED.value})"


def hand_text(reading: Reading, quantity: str, row: Json) -> str:
    """The hand check of a row, where it has one."""
    hand = row["hand"]
    return NO_HAND if hand is None else texts.number(hand, reading.vocabulary[quantity]["unit"])


def harmonic_text(harmonic: str) -> str:
    """A harmonic in words; all of them where none is named.

    Example:
        >>> harmonic_text("4"), harmonic_text("")
        ('4 per rev', 'all harmonics')
    """
    return f"{harmonic} per rev" if harmonic else "all harmonics"


def limit_text(reading: Reading, quantity: str, part: str, mode: str = "") -> str:
    """The strictest limit that the rule book sets on a quantity in a part of the run.

    Args:
        reading: the record.
        quantity: that the rules are about.
        part: ``hold``, ``ramp``, ``stop``, ``abort`` or ``run``.
        mode: only rules on its family.
    """
    found = [
        (finding, rule)
        for rule in _rules(reading, quantity, part, mode)
        for finding in reading.findings_by_rule.get(rule["id"], [_NO_FINDING])
    ]
    known = [(finding["limit"], rule) for finding, rule in found if finding["limit"] is not None]
    if not known:
        return _no_number(found)
    is_least = known[0][1]["sense"] == "at least"
    limit, rule = (max if is_least else min)(known, key=lambda one: float(one[0]))
    text = texts.limit(limit, reading.unit_of(rule), rule["sense"])
    return f"{rule['sense']} {text}"


def _no_number(found: Sequence[tuple[Json, Json]]) -> str:
    """What stands in place of a limit where rules looked at no number, or there is no rule."""
    if not found:
        return "no limit"
    if any(finding["verdict"] != Verdict.GO.value or finding["tested"] for finding, _ in found):
        return texts.NOT_ASSESSED
    is_exempt = all(rule["exempt_damping"] is not None for _, rule in found)
    return EXEMPT if is_exempt else texts.DOES_NOT_APPLY


def exempting_damping(reading: Reading, quantity: str, row: Json) -> str:
    """Print the damping that exempts a row from every rule on it; empty where one judges it.

    Only damping that was itself assessed counts, at its least, of the same mode and hold.

    Args:
        reading: the record.
        quantity: that the rules are about.
        row: of a hold.
    """
    asked = [rule["exempt_damping"] for rule in _rules(reading, quantity, "hold", row["mode"])]
    place = (row["segment"], row["mode"])
    damping = [d for d in reading.rows_of("mode_damping") if (d["segment"], d["mode"]) == place]
    numbers = [d[key] for d in damping for key in ("value", "low", "high")]
    known = all(d["status"] == Status.OK.value for d in damping) and None not in numbers
    if not (asked and numbers and known) or None in asked or min(numbers) < max(asked):
        return ""
    return texts.number(min(numbers), "%", "down")


def _rules(reading: Reading, quantity: str, part: str, mode: str) -> Iterator[Json]:
    for rule in reading.rules_of_kind("predicted"):
        if rule["quantity"] == quantity and covers(rule, part) and _is_about(rule, mode):
            yield rule


def _is_about(rule: Json, mode: str) -> bool:
    """Whether a rule covers a mode; every rule covers what names none."""
    family, *rest = mode.split() or [""]
    if not mode or not rule["mode_family"]:
        return True
    orders = {str(order) for order in rule["mode_orders"]}
    return bool(rule["mode_family"] == family and (not orders or orders.intersection(rest[:1])))
