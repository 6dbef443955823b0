"""The limits table, the findings and how each hazard class is closed."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.model.results import Verdict
from planner.paper import texts
from planner.paper.boxes import Box, gap, heading, paragraph
from planner.paper.ink import BODY, REFERENCE
from planner.paper.reading import Json, Reading, with_symbol
from planner.paper.tables import Cell, Row, Table, fitted, plain_row, table_boxes
from planner.paper.texts import sentence

if TYPE_CHECKING:
    from planner.paper.pages import Frame

UNWATCHED = "UNWATCHED"
_NOTHING = "nothing to watch"
_UNSEEN_STUDIES = {"schedule", "modes", "passages", "tip"}
_UNSEEN_AXES = {"mode", "band"}
_WIND_CAP = "wind cap:"


def limit_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """Every predicted and watched rule with its numbers, its channel and its basis."""
    table = Table(
        frame.shares(24, 28, 15, 21, 12),
        ("Rule", "Limit, caution", "Channel / watcher", "Worst", "Verdict, margin"),
        tail_face=REFERENCE,
    )
    rules = reading.rules_of_kind("predicted", "watched")
    rows = [_limit_row(reading, rule) for rule in rules]
    none = "NOT ASSESSED: the rule book holds no limits. Do not run."
    return [
        heading("5  Limits", frame.width),
        paragraph(
            "Worst: predicted values, read at the end of the model allowance that is nearer to "
            "the limit, over the whole hold window; margins are rounded down.",
            frame.width,
            keep_next=True,
        ),
        gap(3.0),
        *(table_boxes(fitted(table, rows), rows) or [paragraph(none, frame.width, BODY.bold)]),
    ]


def _limit_row(reading: Reading, rule: Json) -> Row:
    if rule["kind"] == "watched":
        limit, caution = rule["abort_text"], rule["caution_text"]
        worst, margin, word = "watched only", "—", ""
    else:
        limit = limit_text(reading, rule, rule["limit"]) + _limit_at_worst(reading, rule)
        caution = _caution_text(reading, rule)
        worst, margin, word = _worst(reading, rule)
    return Row(
        (
            Cell(rule["title"], bold=True),
            Cell(f"{limit}\ncaution {caution}" if caution else limit),
            Cell(_watch(reading, rule)),
            Cell(worst),
            Cell(margin, lead=word),
        ),
        tails=(Cell(_basis(rule)),),
    )


def _caution_text(reading: Reading, rule: Json) -> str:
    """Print a caution level, short where it is another share of the same reference."""
    caution, limit = rule["caution"], rule["limit"]
    if caution is None:
        return ""
    if limit and limit["reference"] and limit["reference"] == caution["reference"]:
        return texts.setting(caution["share"], "%")
    return limit_text(reading, rule, caution).removeprefix(f"{rule['sense']} ")


def _watch(reading: Reading, rule: Json) -> str:
    """Channel and watcher; what no reading can show says so, other gaps are UNWATCHED."""
    quantity = reading.vocabulary.get(rule["quantity"])
    if quantity is not None and not (rule["channel"] or rule["watcher"]):
        unseen = _UNSEEN_AXES.intersection(quantity["axes"])
        if quantity["study"] in _UNSEEN_STUDIES or unseen:
            return _NOTHING
    return f"{rule['channel'] or 'no channel'}\n{rule['watcher'] or UNWATCHED}"


def _basis(rule: Json) -> str:
    acceptor = rule["caution_acceptor"]
    accepted = f" {sentence(f'Caution accepted by: {acceptor}')}" if acceptor else ""
    return sentence(f"Basis: {rule['basis']}") + accepted


def limit_text(reading: Reading, rule: Json, limit: Json | None) -> str:
    """Print a limit as the rule book has it: a value, a table over speed, or a share."""
    unit = reading.unit_of(rule)
    sense = rule["sense"]
    if limit is None:
        return texts.NOT_ASSESSED
    if limit["constant"] is not None:
        return f"{sense} {texts.limit(limit['constant'], unit, sense)}"
    if limit["table"] is not None:
        points = [
            f"{texts.setting(speed, 'rpm')}: {texts.limit(value, unit, sense)}"
            for speed, value in limit["table"]
        ]
        return f"{sense} " + "; ".join(points)
    share = texts.setting(limit["share"], "%")
    return f"{sense} {share} of {str(limit['reference']).replace('_', ' ')}"


def _limit_at_worst(reading: Reading, rule: Json) -> str:
    """What a share or a table came to where the worst value was found."""
    findings = reading.findings_by_rule.get(rule["id"])
    limit = rule["limit"]
    if not findings or limit is None or limit["constant"] is not None:
        return ""
    at = findings[0]["limit"]
    return "" if at is None else f": {texts.limit(at, reading.unit_of(rule), rule['sense'])}"


def _worst(reading: Reading, rule: Json) -> tuple[str, str, str]:
    findings = reading.findings_by_rule.get(rule["id"])
    if not findings:
        return texts.NOT_ASSESSED, texts.NOT_ASSESSED, with_symbol(Verdict.NOT_ASSESSED.value)
    finding = findings[0]
    word = with_symbol(finding["verdict"])
    if finding["verdict"] == Verdict.GO.value and not finding["tested"]:
        by = f"document {finding['closed_by']}" if finding["closed_by"] else texts.DOES_NOT_APPLY
        return by, "—", word
    value, margin = _values(reading, rule, finding)
    return f"{value}\nat {finding['where']}" if finding["where"] else value, margin, word


def _values(reading: Reading, rule: Json, finding: Json) -> tuple[str, str]:
    unit = reading.unit_of(rule)
    low, high = finding["low"], finding["high"]
    if low is None or high is None or finding["margin"] is None:
        return texts.NOT_ASSESSED, texts.NOT_ASSESSED
    danger = reading.vocabulary[rule["quantity"]]["danger"]
    worst, toward = texts.worst_end(low, high, rule["sense"], danger)
    value = texts.toward_danger(worst, unit, toward)
    return value, texts.number(finding["margin"], unit, "down")


def finding_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """Findings, worst first, with their reasons; what came to GO is counted."""
    open_findings = [f for f in reading.findings if _is_open(f)]
    passed = len(reading.findings) - len(open_findings)
    table = Table(
        frame.shares(18, 30, 18, 17, 17), ("Verdict", "Rule", "Predicted", "Limit", "Margin")
    )
    rows = [_finding_row(reading, finding) for finding in open_findings]
    said = f"{passed} {'further ' if rows else ''}findings came to GO: see the limits."
    resting = sum(bool(f["closed_by"]) for f in reading.findings if not _is_open(f))
    if resting:
        said += f" {resting} of them rest in some rows on an outside document, named there."
    return [
        heading("6  Findings, worst first", frame.width),
        *table_boxes(table, rows),
        gap(3.0),
        paragraph(said, frame.width),
        gap(),
        *_coverage_boxes(reading, frame),
        *_document_boxes(reading, frame),
    ]


def _is_open(finding: Json) -> bool:
    return bool(finding["verdict"] != Verdict.GO.value)


def _finding_row(reading: Reading, finding: Json) -> Row:
    rule = reading.rules.get(finding["rule"])
    shown = ("—", "—", "—")
    if rule is not None and rule["kind"] == "predicted":
        value, margin = _values(reading, rule, finding)
        limit = finding["limit"]
        unit, sense = reading.unit_of(rule), rule["sense"]
        at = texts.limit(limit, unit, sense) if limit is not None else texts.NOT_ASSESSED
        shown = (value, f"{sense} {at}" if limit is not None else at, margin)
    where = f" — {finding['where']}" if finding["where"] else ""
    return Row(
        (
            Cell(with_symbol(finding["verdict"]), bold=True),
            Cell(f"{reading.title_of(finding['rule'])}{where}", bold=True),
            *(Cell(text) for text in shown),
        ),
        tails=(Cell(_reason(reading, rule, finding)),),
    )


def _reason(reading: Reading, rule: Json | None, finding: Json) -> str:
    parts = [sentence(finding["reason"] or "No reason was recorded")]
    if finding["not_assessed"]:
        parts.append(f"{finding['not_assessed']} of its places NOT ASSESSED.")
    if finding["closed_by"]:
        parts.append(f"Closed by document {finding['closed_by']}.")
    if rule is not None:
        parts.append(sentence(f"Basis: {rule['basis']}"))
        if finding["verdict"] == Verdict.CAUTION.value:
            parts.append(
                f"To be accepted by {rule['caution_acceptor'] or 'no one named'}: "
                "signature ______________  time ________"
            )
    elif finding["rule"].startswith(_WIND_CAP):
        parts.append(sentence(f"Basis: {reading.book['wind_cap_basis'] or 'none stated'}"))
    return " ".join(parts)


def _coverage_boxes(reading: Reading, frame: Frame) -> list[Box]:
    table = Table(frame.shares(30, 16, 38, 16), ("Hazard class", "Part", "Closed by", "Verdict"))
    parts: dict[tuple[str, str, str], list[str]] = {}
    for covered in reading.record["coverage"]:
        said = (
            closers(reading, covered["closed_by"])
            or f"nothing: {covered.get('reason') or 'no reason recorded'}"
        )
        row = (reading.class_title(covered["hazard_class"]), said, covered["verdict"])
        parts.setdefault(row, []).append(covered["where"])
    rows = [
        plain_row(title, ", ".join(where), said, with_symbol(verdict))
        for (title, said, verdict), where in parts.items()
    ]
    none = "NOT ASSESSED: no hazard class is recorded. Do not run."
    return [
        heading("Hazard classes and what closes them", frame.width, level=1),
        *(table_boxes(table, rows) or [paragraph(none, frame.width, BODY.bold)]),
    ]


def closers(reading: Reading, closed_by: str) -> str:
    """Number of rules judged, then the outside documents by number."""
    parts = [part for part in closed_by.split(", ") if part]
    judged = sum(part in reading.rules for part in parts)
    rules = [f"{judged} rule{'s' if judged > 1 else ''} judged"] if judged else []
    documents = [f"outside document {part}" for part in parts if part not in reading.rules]
    return "; ".join([*rules, *documents])


def _document_boxes(reading: Reading, frame: Frame) -> list[Box]:
    table = Table(
        frame.shares(26, 20, 22, 20, 12),
        ("Outside document", "Number, revision", "Closes", "Approver", "Date"),
    )
    rows = [
        plain_row(
            document["title"],
            f"{document['number']}, revision {document['revision']}",
            f"{reading.class_title(document['hazard_class'])}: {', '.join(document['where'])}",
            document["approver"] or "no approver: void",
            document["date"],
        )
        for document in reading.plan["documents"]
    ]
    if not rows:
        return []
    title = "Outside documents relied on"
    return [gap(), heading(title, frame.width, level=1), *table_boxes(table, rows)]
