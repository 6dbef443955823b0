"""Rule books: checks against the vocabulary, and the merge of several books into one."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING

from planner.files.build_limits import check_strictness, limit_of, scale_of, speed_range
from planner.files.faults import did_you_mean, listed, shown
from planner.files.schema_rules import (
    ConfirmedTable,
    PredictedTable,
    RulesFile,
    WatchedTable,
)
from planner.model.rules import HAZARD_CLASSES, Allowance, Rule, RuleBook

if TYPE_CHECKING:
    from planner.files.positions import KeyPath
    from planner.files.source import Document

Vocabulary = Mapping[str, tuple[str, tuple[str, ...]]]
"""Quantity id to its display unit and its axes."""

References = Mapping[str, str]
"""Reference id to a unit of its dimension."""

_BLADE_FAMILIES = ("flap", "lag", "torsion")


@dataclass
class Library:
    """What rules may refer to, and what the books read so far have defined."""

    vocabulary: Vocabulary
    references: References
    full_speed: float
    classes: dict[str, str] = field(default_factory=lambda: dict.fromkeys(HAZARD_CLASSES, ""))
    """Known classes, with the file that added each."""
    rules: dict[str, str] = field(default_factory=dict)
    allowances: dict[str, str] = field(default_factory=dict)

    def add(self, document: Document, path: KeyPath, name: str, kind: dict[str, str]) -> None:
        """Note an id once; a repeated one is a fault."""
        if name and name in kind:
            where = f" (in {kind[name]})" if kind[name] else ""
            document.fault(path, "an id of its own", f"rename it: it is already taken{where}")
        kind.setdefault(name, document.name)


def add_classes(document: Document, file: RulesFile, library: Library) -> None:
    """Learn the classes of a book; call for every book before checking rules."""
    for i, entry in enumerate(file.class_):
        library.add(document, ("class", i, "id"), entry.id, library.classes)


def check_class(document: Document, path: KeyPath, name: str, classes: Iterable[str]) -> None:
    """Add a fault when a hazard class is not known."""
    if name and name not in classes:
        mend = did_you_mean(name, classes) or "correct it, or add the class to a book or the plan"
        document.fault(path, f"a hazard class: {listed(classes)}", mend)


def check_book(document: Document, file: RulesFile, library: Library) -> tuple[Rule, ...]:
    """Add the faults of a rule book; the rules are sound only when there are none."""
    cap = file.wind_cap
    if cap is not None and cap.gust < cap.mean:
        expected = "a gust at or above the mean"
        document.fault(("wind_cap", "gust"), expected, "correct gust or mean")
    for i, allowance in enumerate(file.allowance):
        library.add(document, ("allowance", i, "id"), allowance.id, library.allowances)
        if allowance.high < allowance.low:
            document.fault(("allowance", i, "high"), "a share at or above low", "swap the two")
    rules: list[Rule] = []
    for i, rule in enumerate(file.rule):
        path: KeyPath = ("rule", i)
        library.add(document, (*path, "id"), rule.id, library.rules)
        check_class(document, (*path, "class"), rule.class_, library.classes)
        parts: list[str] = list(rule.where)
        for j, where in enumerate(parts):
            if where and where in parts[:j]:
                document.fault((*path, "where", j), "each part of the run once", "remove one")
        rules.append(
            _predicted(document, path, rule, library)
            if isinstance(rule, PredictedTable)
            else _plain(rule)
        )
    return tuple(rules)


def _plain(rule: WatchedTable | ConfirmedTable) -> Rule:
    common = Rule(
        id=rule.id,
        kind=rule.kind,
        hazard_class=rule.class_,
        title=rule.title,
        why=rule.why,
        basis=rule.basis,
        where=tuple(rule.where),
    )
    if isinstance(rule, ConfirmedTable):
        return replace(common, when=rule.when)
    return replace(
        common,
        channel=rule.channel,
        watcher=rule.watcher,
        caution_text=rule.caution,
        abort_text=rule.abort,
    )


def _predicted(document: Document, path: KeyPath, rule: PredictedTable, library: Library) -> Rule:
    unit, axes = library.vocabulary.get(rule.quantity, ("", ()))
    limit = caution = None
    if rule.quantity in library.vocabulary:
        scale = scale_of(unit, library.references, library.full_speed)
        limit = limit_of(document, (*path, "limit"), rule.limit, scale)
        if rule.caution is not None:
            caution = limit_of(document, (*path, "caution"), rule.caution, scale)
            check_strictness(document, (*path, "caution"), rule.sense, limit, caution)
        _check_modes(document, path, rule, axes)
    elif rule.quantity:
        hint = did_you_mean(rule.quantity, library.vocabulary)
        mend = hint or 'see "whirlcard method" for the ids'
        document.fault((*path, "quantity"), "the id of a quantity", mend)
    _check_acceptor(document, path, rule)
    speeds = scale_of("rpm", library.references, library.full_speed)
    return Rule(
        id=rule.id,
        kind=rule.kind,
        hazard_class=rule.class_,
        title=rule.title,
        why=rule.why,
        basis=rule.basis,
        where=tuple(rule.where),
        quantity=rule.quantity,
        sense=rule.sense,
        limit=limit,
        caution=caution,
        unit=unit,
        speed_range=speed_range(document, path, (rule.from_, rule.to), speeds),
        mode_family=rule.family or "",
        mode_orders=tuple(rule.orders),
        harmonics=tuple(rule.harmonics),
        exempt_damping=rule.exempt_damping,
        caution_acceptor=rule.caution_acceptor or "",
        channel=rule.channel or "",
        watcher=rule.watcher or "",
    )


def _check_modes(
    document: Document, path: KeyPath, rule: PredictedTable, axes: Sequence[str]
) -> None:
    given = [
        *(["family"] if rule.family else []),
        *(["orders"] if rule.orders else []),
        *(["harmonics"] if rule.harmonics and "harmonic" not in axes else []),
        *(["exempt_damping"] if rule.exempt_damping is not None else []),
    ]
    if "mode" in axes:
        given = [key for key in given if key == "harmonics"]
    if given:
        for key in given:
            has_no = "harmonics" if key == "harmonics" else "modes"
            expected = f"no {key}, because {rule.quantity} has no {has_no}"
            document.fault_at_key((*path, key), expected, "remove it", f"key {shown(key)}")
    elif rule.orders and rule.family not in {*_BLADE_FAMILIES, ""}:
        expected = f"orders only with the families {listed(_BLADE_FAMILIES)}"
        found = f"family {shown(rule.family)}" if rule.family else "no family"
        document.fault((*path, "orders"), expected, "remove orders or correct family", found)


def _check_acceptor(document: Document, path: KeyPath, rule: PredictedTable) -> None:
    if rule.caution is not None and rule.caution_acceptor is None:
        expected = 'key "caution_acceptor", because the rule has a caution'
        mend = "name the role that may accept it"
        document.fault_at_key((*path, "caution_acceptor"), expected, mend, "no such key")
    if rule.caution is None and rule.caution_acceptor is not None:
        expected = "no caution_acceptor, because the rule has no caution"
        mend = "add caution or remove it"
        document.fault_at_key((*path, "caution_acceptor"), expected, mend, "one")


def merged(files: Sequence[RulesFile], rules: Sequence[tuple[Rule, ...]]) -> RuleBook:
    """Merge books without faults: all rules together, the stricter of what can be only one."""
    caps = [file.wind_cap for file in files if file.wind_cap is not None]
    margins = [f.stop_free_margin for f in files if f.stop_free_margin is not None]
    return RuleBook(
        name=" + ".join(file.name for file in files),
        revision=" + ".join(file.revision for file in files),
        owner=" + ".join(dict.fromkeys(file.owner for file in files)),
        approved=all(file.approved for file in files),
        rules=tuple(rule for book in rules for rule in book),
        allowances=tuple(
            Allowance(a.id, a.low, a.high, a.basis) for file in files for a in file.allowance
        ),
        extra_classes=tuple((c.id, c.title) for file in files for c in file.class_),
        wind_mean_cap_m_s=min((cap.mean for cap in caps), default=None),
        wind_gust_cap_m_s=min((cap.gust for cap in caps), default=None),
        wind_cap_basis="; ".join(dict.fromkeys(cap.basis for cap in caps)),
        stop_free_margin=max(margins, default=None),
    )
