"""Reads a plan folder into the model, or raises every fault of all its files at once."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeVar

from planner.files.build_balance import check_balanced_mass, check_point_offsets
from planner.files.build_plan import build_plan, check_plan
from planner.files.build_rotor import (
    StationRows,
    build_rotor,
    check_rotor,
    check_stations,
    csv_stations,
    inline_stations,
)
from planner.files.build_rules import (
    Library,
    References,
    Vocabulary,
    add_classes,
    check_book,
    merged,
)
from planner.files.build_schedule import read_blocks
from planner.files.build_sections import check_polar
from planner.files.build_stand import build_stand, check_stand, check_surroundings
from planner.files.csv_tables import POLAR_COLUMNS, STATION_COLUMNS, Column, CsvTable, read_csv
from planner.files.faults import Fault, PlanFaults
from planner.files.schema_plan import PlanFile
from planner.files.schema_rotor import PolarTable, RotorFile
from planner.files.schema_rules import RulesFile
from planner.files.schema_stand import StandFile
from planner.files.schema_texts import FileName
from planner.files.schema_values import Printable, Table
from planner.files.source import Document, Shelf, SourceFile
from planner.files.validate import validated

if TYPE_CHECKING:
    from collections.abc import Mapping
    from pathlib import Path

    from planner.files.positions import KeyPath
    from planner.model.plan import Block, Plan
    from planner.model.rules import Rule

_AnyTable = TypeVar("_AnyTable", bound=Table)


@dataclass(frozen=True)
class LoadedPlan:
    """A plan with the digests of every file it was read from, in reading order."""

    plan: Plan
    files: tuple[SourceFile, ...]


def read_plan(
    path: Path,
    vocabulary: Vocabulary,
    references: References,
    printable: Printable | None = None,
) -> LoadedPlan:
    """Read a plan folder.

    Args:
        path: The folder, or its ``plan.toml``.
        vocabulary: Quantity id to its display unit and axes; rules refer to these.
        references: Reference id to a unit of its dimension; shares refer to these.
        printable: Names the characters of a text that paper cannot print; such texts are
            refused. Left out, only control characters and their kin are.

    Returns:
        The plan in SI, with the files it came from.

    Raises:
        PlanFaults: Anything is wrong with any of the files; it carries all of it.
    """
    folder, name = (path, "plan.toml") if path.is_dir() else (path.parent, path.name)
    return _Reading(Shelf(folder), vocabulary, references, printable).plan(name)


@dataclass(frozen=True)
class _RotorParts:
    file: RotorFile
    stations: StationRows | None
    polars: dict[str, CsvTable]


@dataclass
class _Reading:
    """One reading of one plan folder."""

    shelf: Shelf
    vocabulary: Mapping[str, tuple[str, tuple[str, ...]]]
    references: Mapping[str, str]
    printable: Printable | None

    @property
    def faults(self) -> list[Fault]:
        return self.shelf.faults

    def plan(self, name: str) -> LoadedPlan:
        document, file = self._toml(name, PlanFile, None, ())
        if document is None:
            raise PlanFaults(self.faults, self.shelf.files)
        rotor = self._rotor(document)
        stand = self._stand(document, rotor)
        full_speed = stand.full_speed if stand is not None else math.nan
        extra = file.extra_classes if file is not None else []
        library = Library(self.vocabulary, self.references, full_speed)
        books, rules = self._books(document, library, extra)
        blocks: tuple[Block, ...] = ()
        if file is not None:
            check_plan(document, file, stand, [*library.classes, *extra])
            blocks = read_blocks(document, file, full_speed)
        if self.faults:
            raise PlanFaults(self.faults, self.shelf.files)
        if file is None or stand is None or rotor is None or rotor.stations is None:
            msg = "a file was refused without a fault"
            raise AssertionError(msg)
        parts = (
            build_rotor(rotor.file, rotor.stations, rotor.polars),
            build_stand(stand),
            merged(books, rules),
        )
        return LoadedPlan(build_plan(file, blocks, parts), tuple(self.shelf.files.values()))

    def _toml(
        self, name: str, model: type[_AnyTable], asked_by: Document | None, path: KeyPath
    ) -> tuple[Document | None, _AnyTable | None]:
        mention = asked_by.mention(path) if asked_by is not None else None
        document = self.shelf.toml(name, mention)
        if document is None:
            return None, None
        return document, validated(document, model, self.printable)

    def _named(
        self, document: Document, path: KeyPath, model: type[_AnyTable]
    ) -> tuple[Document | None, _AnyTable | None]:
        """Read the file that a value names; the name itself was judged with its document."""
        name = self._name_at(document, path)
        if name is None:
            return None, None
        return self._toml(self.shelf.beside(document.name, name), model, document, path)

    def _name_at(self, document: Document, path: KeyPath) -> str | None:
        name = document.value(path)
        return name if isinstance(name, str) and FileName().accepts(name) else None

    def _rotor(self, plan: Document) -> _RotorParts | None:
        document, file = self._named(plan, ("rotor",), RotorFile)
        if document is None:
            return None
        table = self._csv(document, ("blade", "stations"), STATION_COLUMNS)
        if file is None:
            return None
        check_rotor(document, file)
        stations = csv_stations(table) if table is not None else None
        if stations is None and file.blade.stations is None and file.blade.station:
            stations = inline_stations(document, file)
        if stations is not None:
            faults = check_stations(stations, file)
            self.faults.extend(faults)
            if not faults and stations.values["radius"].size:
                check_balanced_mass(document, file, stations.values)
                check_point_offsets(document, file, stations.values)
        return _RotorParts(file, stations, self._polars(document, file))

    def _stand(self, plan: Document, rotor: _RotorParts | None) -> StandFile | None:
        document, file = self._named(plan, ("stand",), StandFile)
        if document is None or file is None:
            return None
        check_stand(document, file)
        if rotor is not None:
            check_surroundings(document, file, rotor.file)
        return file

    def _polars(self, document: Document, file: RotorFile) -> dict[str, CsvTable]:
        polars: dict[str, CsvTable] = {}
        for i, span in enumerate(file.section):
            if not isinstance(span, PolarTable) or span.polar in polars:
                continue
            table = self._csv(document, ("section", i, "polar"), POLAR_COLUMNS)
            if table is not None:
                self.faults.extend(check_polar(table))
                polars[span.polar] = table
        return polars

    def _csv(
        self, document: Document, path: KeyPath, columns: tuple[Column, ...]
    ) -> CsvTable | None:
        other = self._name_at(document, path)
        if other is None:
            return None
        name = self.shelf.beside(document.name, other)
        text = self.shelf.text(name, document.mention(path))
        return None if text is None else read_csv(name, text, columns, self.faults)

    def _books(
        self, plan: Document, library: Library, extra: list[str]
    ) -> tuple[list[RulesFile], list[tuple[Rule, ...]]]:
        names = plan.value(("rule_books",))
        each = names if isinstance(names, list) else []
        read = [
            self._named(plan, ("rule_books", i), RulesFile)
            for i, name in enumerate(each)
            if name not in each[:i]
        ]
        books = [(doc, file) for doc, file in read if doc is not None and file is not None]
        for document, file in books:
            add_classes(document, file, library)
        for name in extra:
            library.classes.setdefault(name, plan.name)
        rules = [check_book(document, file, library) for document, file in books]
        return [file for _, file in books], rules
