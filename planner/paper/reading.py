"""Looking things up in a record: what the pages ask for, by name; nothing is computed here."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import Any

from planner.model.results import Status, Verdict
from planner.model.rules import ABORTS, HAZARD_CLASSES
from planner.paper import texts

Json = Mapping[str, Any]

SYMBOLS = {
    Verdict.GO: "○",
    Verdict.CAUTION: "△",
    Verdict.NOT_ASSESSED: "◇",
    Verdict.NO_GO: "■",
}
"""Printed with the word, so that neither colour nor the word alone carries a verdict."""

ABORT = "abort"
"""Where a number, a rule or a document is about aborts."""

_ENDS = ("low", "high")
_WHOLE_RUN = "run"
_TOLD = {Status.OK.value, Status.NOT_APPLICABLE.value}

_BANNERS = {
    Verdict.GO: "PLAN GO, not clearance to run",
    Verdict.CAUTION: "CAUTION, not clearance to run",
    Verdict.NOT_ASSESSED: "NOT ASSESSED — do not run",
    Verdict.NO_GO: "NO-GO — do not run",
}


def _worst_of(row: Json, danger: str) -> float:
    """The end of a prediction's range that is nearer to harm; the value where neither is."""
    if danger == "both":
        return texts.worst_end(row["low"], row["high"], "at most", danger)[0]
    return float(row[danger if danger in _ENDS else "value"])


def covers(rule: Json, part: str) -> bool:
    """Say whether a rule is about a part of the run."""
    return part in rule["where"] or _WHOLE_RUN in rule["where"]


def _is_missing(rows: Iterable[Json], rule: Json) -> bool:
    """Say whether any of the numbers that a rule looks at is not there."""
    return any(
        row["status"] not in _TOLD
        for row in rows
        if not (row["mode"] and rule["mode_family"])
        or row["mode"].startswith(f"{rule['mode_family']} ")
    )


def verdict_of(word: str) -> Verdict:
    """Read a verdict's word.

    Raises:
        ValueError: the word is not a verdict; paper prints no verdict that it does not know.
    """
    try:
        return Verdict(word)
    except ValueError:
        known = ", ".join(verdict.value for verdict in Verdict)
        msg = f"a verdict must be one of {known}; the record has {word!r}"
        raise ValueError(msg) from None


def with_symbol(word: str) -> str:
    """Put a verdict's symbol before its word."""
    verdict = verdict_of(word)
    return f"{SYMBOLS[verdict]} {verdict.value}"


def banner_text(word: str) -> str:
    """Give the sentence that every page carries for a verdict."""
    verdict = verdict_of(word)
    return f"{SYMBOLS[verdict]} {_BANNERS[verdict]}"


@dataclass(frozen=True)
class Shown:
    """A prediction ready for paper: its number and range, or the status in their place."""

    text: str
    value: float = 0.0
    low: float = 0.0
    high: float = 0.0
    is_number: bool = False
    why: str = ""
    """Why there is no number."""


@dataclass(frozen=True)
class Reading:
    """A record with its indexes."""

    record: Json

    @property
    def plan(self) -> Json:
        """The model that the record was made from."""
        plan: Json = self.record["plan"]
        return plan

    @property
    def book(self) -> Json:
        """The rule book that judged."""
        book: Json = self.plan["rule_book"]
        return book

    @cached_property
    def vocabulary(self) -> dict[str, Json]:
        """Quantity id to its entry."""
        return {entry["id"]: entry for entry in self.record["vocabulary"]}

    @cached_property
    def rules(self) -> dict[str, Json]:
        """Rule id to the rule."""
        return {rule["id"]: rule for rule in self.book["rules"]}

    @cached_property
    def findings(self) -> tuple[Json, ...]:
        """All findings, worst first; those of one verdict in the book's order."""
        found = self.record["findings"]
        return tuple(sorted(found, key=lambda f: -verdict_of(f["verdict"]).rank))

    @cached_property
    def findings_by_rule(self) -> dict[str, list[Json]]:
        """Rule id to its findings, worst first."""
        grouped: dict[str, list[Json]] = defaultdict(list)
        for finding in self.findings:
            grouped[finding["rule"]].append(finding)
        return dict(grouped)

    def rules_of_kind(self, *kinds: str) -> list[Json]:
        """Rules of some kinds, in the book's order."""
        return [rule for rule in self.book["rules"] if rule["kind"] in kinds]

    def title_of(self, rule_id: str) -> str:
        """A rule's title; its id where the book has no such rule."""
        rule = self.rules.get(rule_id)
        return str(rule["title"]) if rule else rule_id

    def class_title(self, hazard_class: str) -> str:
        """A hazard class in words."""
        if hazard_class in HAZARD_CLASSES:
            return HAZARD_CLASSES[hazard_class][0]
        return str(dict(self.book["extra_classes"]).get(hazard_class, hazard_class))

    def unit_of(self, rule: Json) -> str:
        """Unit in which a rule's numbers are printed."""
        quantity = self.vocabulary.get(rule["quantity"], {})
        return str(rule["unit"] or quantity.get("unit", ""))

    def segment_verdict(self, segment_id: str) -> str:
        """Verdict of a stretch of the run; NOT ASSESSED where the record has none."""
        words: Mapping[str, str] = self.record["segment_verdicts"]
        return words.get(segment_id, Verdict.NOT_ASSESSED.value)

    def row(self, quantity: str, segment: str = "", band: str = "") -> Json | None:
        """The prediction for a place: its own, or the one that stands for the whole study.

        Never that of an abort, which begins at the place but is not what happens there.
        """
        own: Json | None = self._rows.get((quantity, segment, band, ""))
        if own is not None:
            return own
        return self._standing(quantity, ((segment, "", ""), ("", band, ""), ("", "", "")))

    def abort_row(self, quantity: str, origin: str, cause: str, band: str = "") -> Json | None:
        """The prediction for an abort from a segment: its own, or one that stands for it."""
        own: Json | None = self._rows.get((quantity, origin, band, cause))
        if own is not None:
            return own
        causes = [
            (segment, b, cause) for segment in (origin, "") for b in dict.fromkeys((band, ""))
        ]
        return self._standing(quantity, (*causes, ("", band, ""), ("", "", "")))

    def _standing(self, quantity: str, places: Iterable[tuple[str, str, str]]) -> Json | None:
        """The first row that says for several places why they have no number."""
        for place in places:
            found: Json | None = self._rows.get((quantity, *place))
            if found is not None and found["status"] != Status.OK.value:
                return found
        return None

    def rows_of(self, quantity: str) -> list[Json]:
        """All rows of a quantity as the record has them."""
        rows: list[Json] = self.record["predictions"].get(quantity, {"rows": []})["rows"]
        return rows

    def shown(self, quantity: str, segment: str = "", band: str = "") -> Shown:
        """Print a prediction, or the status that stands in its place; never nothing."""
        return self.shown_row(quantity, self.row(quantity, segment, band))

    def shown_row(self, quantity: str, row: Json | None) -> Shown:
        """Print one row of a quantity, or the status that stands in its place."""
        entry = self.vocabulary.get(quantity)
        if entry is None or row is None:
            return Shown(texts.NOT_ASSESSED, why=Status.NOT_COMPUTED.value)
        if row["status"] == Status.NOT_APPLICABLE.value:
            return Shown(texts.DOES_NOT_APPLY, why="—")
        fault = self._fault(entry, row)
        if fault:
            return Shown(texts.NOT_ASSESSED, why=fault)
        text = texts.toward_danger(_worst_of(row, entry["danger"]), entry["unit"], entry["danger"])
        return Shown(text, row["value"], row["low"], row["high"], is_number=True)

    def _fault(self, entry: Json, row: Json) -> str:
        """Say why a row holds no number that may be printed; empty where it does."""
        if row["status"] != Status.OK.value:
            return str(row["status"])
        if None in (row["value"], row["low"], row["high"]):
            return Status.NOT_COMPUTED.value
        wanted = entry["allowance"]
        if wanted and all(a["id"] != wanted for a in self.book["allowances"]):
            return f"no allowance {wanted}"
        return ""

    def applies(self, quantity: str) -> bool:
        """Say whether the article has such a thing at all."""
        rows = self.rows_of(quantity)
        return not rows or any(row["status"] != Status.NOT_APPLICABLE.value for row in rows)

    def margin(self, segment_id: str, *quantities: str) -> str:
        """Smallest distance to a limit on quantities of one unit in a stretch of the run.

        A finding holds the margin of its own segment, and may hold those of others under
        ``segment_margins``; a margin that the record does not hold is not made up.
        """
        margins: list[float] = []
        said = "no limit"
        found = (f for q in quantities for f in self._findings_by_quantity.get(q, ()))
        for finding in found:
            word = finding["segment_verdicts"].get(segment_id)
            if word == Verdict.NOT_ASSESSED.value:
                return texts.NOT_ASSESSED
            if word is None:
                continue
            margin = finding.get("segment_margins", {}).get(segment_id)
            if margin is None and finding["segment"] == segment_id:
                margin = finding["margin"]
            if margin is None:
                said = "see limits"
                continue
            margins.append(margin)
        if not margins:
            return said
        unit = next(self.vocabulary[q]["unit"] for q in quantities if q in self.vocabulary)
        return texts.number(min(margins), unit, "down")

    def documents_behind(self, segment_id: str, quantities: Iterable[str] = ()) -> list[str]:
        """Outside documents that a stretch's verdict rests on, each once.

        A finding rests on its documents where the stretch came to GO although a number that
        the rule looks at is not there. Of several documents of one finding those count that are
        about this part of the run, or all where none is.

        Args:
            segment_id: the stretch.
            quantities: only findings on these; empty: on all.
        """
        found: dict[str, None] = {}
        for quantity in tuple(quantities) or tuple(self._findings_by_quantity):
            for finding in self._findings_by_quantity.get(quantity, ()):
                word = finding["segment_verdicts"].get(segment_id)
                if not finding["closed_by"] or word != Verdict.GO.value:
                    continue
                for part in self._missing_parts(quantity, segment_id, finding):
                    found |= dict.fromkeys(self._documents_about(finding, part))
        return list(found)

    def _missing_parts(self, quantity: str, segment_id: str, finding: Json) -> Iterable[str]:
        """Say for which part, the stretch or aborts out of it, a rule lacks a number."""
        rule = self.rules[finding["rule"]]
        rows = [row for row in self.rows_of(quantity) if row["segment"] in {segment_id, ""}]
        own = [row for row in rows if not row["state"]]
        kind = self._kinds.get(segment_id, "")
        if covers(rule, kind) and (not own or _is_missing(own, rule)):
            yield kind
        aborts = [row for row in rows if row["state"] or not row["segment"]]
        if covers(rule, ABORT) and _is_missing(aborts, rule):
            yield ABORT

    def _documents_about(self, finding: Json, part: str) -> list[str]:
        numbers = [number for number in finding["closed_by"].split(", ") if number]
        hazard_class = ABORTS if part == ABORT else self.rules[finding["rule"]]["hazard_class"]
        about = {
            document["number"]
            for document in self.plan["documents"]
            if document["hazard_class"] == hazard_class and part in document["where"]
        }
        return [number for number in numbers if number in about] or numbers

    def reasons_against(self, segment_id: str) -> list[tuple[str, str]]:
        """Verdict and title of every rule or open hazard class that keeps a stretch from GO.

        Worst first; hazard classes that nothing closes in this part of the run come last. Open
        aborts keep every hold and ramp from GO, for nobody knows how to leave it.
        """
        kind = self._kinds.get(segment_id, "")
        parts = {kind} if kind == "stop" else {kind, ABORT}
        opened = [
            (covered["verdict"], f"nothing closes {self.class_title(covered['hazard_class'])}")
            for covered in self.record["coverage"]
            if covered["where"] in parts and not covered["closed_by"]
        ]
        return [*self._against.get(segment_id, []), *opened]

    @cached_property
    def _kinds(self) -> dict[str, str]:
        return {segment["id"]: segment["kind"] for segment in self.record["segments"]}

    @cached_property
    def _against(self) -> dict[str, list[tuple[str, str]]]:
        against: dict[str, list[tuple[str, str]]] = defaultdict(list)
        for verdict in reversed(Verdict):
            for finding in self.findings:
                for segment_id, word in finding["segment_verdicts"].items():
                    if verdict is not Verdict.GO and verdict_of(word) is verdict:
                        title = self._title_at(finding["rule"], segment_id)
                        against[segment_id].append((verdict.value, title))
        return dict(against)

    def _title_at(self, rule_id: str, segment_id: str) -> str:
        """A rule's title, with a word where it can only be about aborts from a place."""
        rule = self.rules.get(rule_id)
        title = self.title_of(rule_id)
        if rule is None or covers(rule, self._kinds.get(segment_id, "")):
            return title
        return f"{title} (abort from here)" if covers(rule, ABORT) else title

    @cached_property
    def _rows(self) -> dict[tuple[str, str, str, str], Json]:
        rows: dict[tuple[str, str, str, str], Json] = {}
        for quantity in self.record["predictions"]:
            for row in self.rows_of(quantity):
                rows.setdefault((quantity, row["segment"], row["band"], row["state"]), row)
        return rows

    @cached_property
    def _findings_by_quantity(self) -> dict[str, list[Json]]:
        grouped: dict[str, list[Json]] = defaultdict(list)
        for finding in self.findings:
            rule = self.rules.get(finding["rule"])
            if rule is not None and rule["quantity"]:
                grouped[rule["quantity"]].append(finding)
        return dict(grouped)
