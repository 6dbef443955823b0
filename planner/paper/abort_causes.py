"""What the record says of aborts, cause by cause: verdicts, worst numbers, where they begin."""

from __future__ import annotations

import math
from collections import defaultdict
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from planner.model.plan import ABORT_CAUSES
from planner.model.results import Status, Verdict
from planner.paper import texts
from planner.paper.reading import ABORT, Shown, covers, verdict_of, with_symbol

if TYPE_CHECKING:
    from collections.abc import Iterator

    from planner.paper.reading import Json, Reading

COMMANDED, FROZEN, BRAKE_LOST, NOT_RESEATED = ABORT_CAUSES
MUST_OCCUR = (COMMANDED, FROZEN)
"""With power cut one of the two happens, on every stand and rotor."""
_SOUND = {Verdict.GO, Verdict.CAUTION}


@dataclass(frozen=True)
class Worst:
    """The greatest number of a quantity over the aborts of one cause, and where it begins."""

    shown: Shown
    origin: str = ""
    mode: str = ""


@dataclass(frozen=True)
class CauseVerdict:
    """What the judged rules come to for one cause."""

    cause: str
    verdict: Verdict
    origin: str = ""
    """Segment where the worst abort begins; empty: the record does not say."""
    against: tuple[str, ...] = ()
    """What keeps it from GO, worst first."""
    documents: tuple[str, ...] = ()
    """Outside documents that it rests on."""

    @property
    def is_sound(self) -> bool:
        """Whether aborts of this cause are covered by the actions as they are ordered."""
        return self.verdict in _SOUND

    @property
    def words(self) -> str:
        """The verdict with what it rests on."""
        by = f" by {', '.join(self.documents)}" if self.documents and self.is_sound else ""
        return f"{with_symbol(self.verdict.value)}{by}"


@dataclass(frozen=True)
class Aborts:
    """Aborts of a record."""

    reading: Reading

    @cached_property
    def origins(self) -> list[Json]:
        """Segments out of which an abort may begin: all with a turning rotor but the stop."""
        walk = self.reading.record["segments"]
        return [s for s in walk if s["kind"] != "stop" and top_rad_s(s) > 0.0]

    @cached_property
    def highest_hold(self) -> Json | None:
        """The fastest hold; of several the one from which the way to rest is longest."""
        holds = [s for s in self.origins if s["kind"] == "hold"]
        return max(holds, key=lambda s: (top_rad_s(s), self._rest_s(s)), default=None)

    def _rest_s(self, segment: Json) -> float:
        row = self.reading.abort_row("time_to_rest", segment["id"], COMMANDED)
        shown = self.reading.shown_row("time_to_rest", row)
        return shown.high if shown.is_number else math.inf

    @cached_property
    def causes(self) -> tuple[str, ...]:
        """Causes that this stand and rotor can have."""
        return tuple(cause for cause in ABORT_CAUSES if not self.does_not_apply(cause))

    def does_not_apply(self, cause: str) -> str:
        """Say why a cause cannot be here; empty where it can, and for those that always can."""
        if cause in MUST_OCCUR or not self.origins:
            return ""
        rows = [self.reading.abort_row("time_to_rest", s["id"], cause) for s in self.origins]
        absent = Status.NOT_APPLICABLE.value
        if any(row is None or row["status"] != absent for row in rows):
            return ""
        reasons = dict.fromkeys(row["reason"] for row in rows if row is not None)
        return "; ".join(reasons) or texts.DOES_NOT_APPLY

    def shown(self, quantity: str, origin: str, cause: str, band: str = "") -> Shown:
        """Print a number of one abort, or the status that stands in its place."""
        row = self.reading.abort_row(quantity, origin, cause, band)
        return self.reading.shown_row(quantity, row)

    def worst(self, quantity: str, cause: str, band: Json | None = None) -> Worst:
        """The greatest number over all origins; one that is not there outweighs them all.

        Args:
            quantity: one whose high end is the dangerous one.
            cause: of the aborts.
            band: keep-out band, for quantities that have one; origins below it do not count.
        """
        found: list[Worst] = []
        for origin in self.origins:
            if band is not None and band["from_rad_s"] >= top_rad_s(origin):
                continue
            for row in self._rows_at(quantity, origin["id"], cause, band["id"] if band else ""):
                shown = self.reading.shown_row(quantity, row)
                if row is not None and row["status"] == Status.NOT_APPLICABLE.value:
                    continue
                one = Worst(shown, origin["id"], row["mode"] if row else "")
                if not shown.is_number:
                    return one
                found.append(one)
        return max(found, key=lambda one: one.shown.high, default=Worst(_NONE))

    def _rows_at(self, quantity: str, origin: str, cause: str, band: str) -> Iterator[Json | None]:
        own = self._by_place.get((quantity, origin, cause, band), ())
        yield from own or (self.reading.abort_row(quantity, origin, cause, band),)

    @cached_property
    def _by_place(self) -> dict[tuple[str, str, str, str], list[Json]]:
        places: dict[tuple[str, str, str, str], list[Json]] = defaultdict(list)
        for quantity in self.reading.record["predictions"]:
            for row in self.reading.rows_of(quantity):
                if row["state"]:
                    key = (quantity, row["segment"], row["state"], row["band"])
                    places[key].append(row)
        return dict(places)

    @cached_property
    def verdicts(self) -> tuple[CauseVerdict, ...]:
        """Verdicts of the causes that apply."""
        return tuple(self._verdict(cause) for cause in self.causes)

    @cached_property
    def coverage(self) -> list[Json]:
        """How hazard classes are closed for aborts."""
        return [c for c in self.reading.record["coverage"] if c["where"] == ABORT]

    def _verdict(self, cause: str) -> CauseVerdict:
        said = [(part, f) for f in self._findings for part in _parts_of(f, cause)]
        said.sort(key=lambda one: _badness(one[0]))
        opened = [self._open(part) for part in self.coverage if self._is_open(part, cause)]
        if not self.coverage:
            opened.append(f"{texts.NOT_ASSESSED}: nothing closes aborts")
        titles = (
            f"{part['verdict']}: {self.reading.title_of(finding['rule'])}"
            for part, finding in said
            if part["verdict"] != Verdict.GO.value
        )
        words = [verdict_of(part["verdict"]) for part, _ in said]
        words += [Verdict.NOT_ASSESSED] * bool(opened)
        words += [verdict_of(part["verdict"]) for part in self.coverage if not said]
        return CauseVerdict(
            cause,
            Verdict.worst(words),
            said[0][0].get("segment", "") if said else "",
            tuple(dict.fromkeys((*titles, *opened))),
            self._documents([part for part, _ in said]),
        )

    @property
    def _findings(self) -> list[Json]:
        """Findings of rules that reach aborts."""
        rules = self.reading.rules
        return [
            finding
            for finding in self.reading.findings
            if finding["rule"] in rules and self._reaches(rules[finding["rule"]])
        ]

    def _reaches(self, rule: Json) -> bool:
        entry = self.reading.vocabulary.get(rule["quantity"], {"axes": ()})
        return covers(rule, ABORT) and "state" in entry["axes"]

    def _is_open(self, part: Json, cause: str) -> bool:
        """Whether a class is open for a cause: where its reason names no other one."""
        named = [known for known in ABORT_CAUSES if known in part.get("reason", "")]
        return not part["closed_by"] and (cause in named or not named)

    def _open(self, part: Json) -> str:
        title = self.reading.class_title(part["hazard_class"])
        return f"{texts.NOT_ASSESSED}: {title}, {part.get('reason') or 'nothing closes it'}"

    def _documents(self, parts: list[Json]) -> tuple[str, ...]:
        """Outside documents behind the findings, or behind the classes where no rule judged.

        Of several those count that are about aborts, or all where none is.
        """
        behind = parts or self.coverage
        listed = [n for part in behind for n in part.get("closed_by", "").split(", ") if n]
        numbers = tuple(dict.fromkeys(n for n in listed if n not in self.reading.rules))
        about = {d["number"] for d in self.reading.plan["documents"] if ABORT in d["where"]}
        return tuple(n for n in numbers if n in about) or numbers


_NONE = Shown(texts.DOES_NOT_APPLY, why="—")


def top_rad_s(segment: Json) -> float:
    """Highest target speed of a segment."""
    return float(max(segment["from_rad_s"], segment["to_rad_s"]))


def _parts_of(finding: Json, cause: str) -> Iterator[Json]:
    """What a finding says of one cause.

    A finding that does not tell its causes apart counts whole against each.
    """
    by_state = finding.get("by_state")
    if not by_state:
        yield {**finding, "segment": ""}
    elif cause in by_state:
        yield by_state[cause]


def _badness(part: Json) -> tuple[int, float]:
    """Sort key: worst verdict, then the smallest margin as a share of the limit."""
    margin, limit = part.get("margin"), part.get("limit")
    share = math.inf if margin is None else margin / (abs(limit or 0.0) or 1.0)
    return -verdict_of(part["verdict"]).rank, share
