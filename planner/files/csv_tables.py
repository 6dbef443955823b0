"""CSV tables with units in the header: blade stations and section polars."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np

from planner import units
from planner.files.faults import Fault, did_you_mean, listed, minus_mend, shown

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

_MOST_FAULTS = 20
_FEWEST_ROWS = 2
_MOST_ROWS = 20_000
_NUMBER = re.compile(r"[+-]?(\d+(\.\d*)?|\.\d+)([eE][+-]?\d{1,3})?", re.ASCII)
_HEADER = re.compile(r"(?P<name>[^\[\]]*?)\s*(?:\[(?P<unit>[^\[\]]*)\])?\s*")


@dataclass(frozen=True)
class Column:
    """A column that a table may have."""

    name: str
    dimension: str = "number"
    sign: Literal["any", "positive", "not negative"] = "any"
    required: bool = True


STATION_COLUMNS = (
    Column("radius", "length", "not negative"),
    Column("chord", "length", "not negative"),
    Column("twist", "angle"),
    Column("mass", "mass per length", "positive"),
    Column("flap stiffness", "bending stiffness", "positive"),
    Column("lag stiffness", "bending stiffness", "positive"),
    Column("torsion stiffness", "bending stiffness", "positive"),
    Column("pitch inertia", "pitch inertia per length", "positive"),
    Column("c.g. offset", "length"),
    Column("a.c. offset", "length"),
)

POLAR_COLUMNS = (
    Column("angle", "angle"),
    Column("lift"),
    Column("drag", sign="not negative"),
    Column("moment", required=False),
    Column("mach", sign="not negative", required=False),
)


@dataclass(frozen=True)
class _Cell:
    text: str
    line: int
    column: int


@dataclass(frozen=True)
class CsvTable:
    """Values in SI by column name, with the place of each cell."""

    file: str
    values: dict[str, NDArray[np.float64]]
    lines: tuple[int, ...]
    places: dict[str, tuple[int, ...]]
    """Column on its line where each cell begins."""

    def fault(self, row: int, name: str, expected: str, found: str, mend: str) -> Fault:
        """Make a fault that points to one cell."""
        return Fault(
            self.file, self.lines[row], self.places[name][row], name, expected, found, mend
        )


def read_csv(
    file: str, text: str, columns: Sequence[Column], faults: list[Fault]
) -> CsvTable | None:
    """Read a table; every fault goes to the list, and then there is no table.

    The first row that is neither blank nor a comment (``#``) names the columns, in any order and
    in any unit of their dimension: ``radius [m], chord [mm]``.
    """
    rows = _rows(text)
    if not rows:
        found = "an empty table"
        faults.append(Fault(file, 1, 1, "", "a header and rows", found, "fill the table in"))
        return None
    reader = _Reader(file, columns)
    chosen = reader.header(rows[0])
    table = None if reader.faults else reader.body(rows[1:], chosen)
    faults.extend(reader.short_list())
    return table if not reader.faults else None


def _rows(text: str) -> list[list[_Cell]]:
    rows: list[list[_Cell]] = []
    for number, line in enumerate(text.replace("\r\n", "\n").split("\n"), start=1):
        if not line.strip() or line.lstrip().startswith("#"):
            continue
        cells: list[_Cell] = []
        start = 0
        for part in line.split(","):
            indent = len(part) - len(part.lstrip())
            at = start + (indent if part.strip() else 0) + 1
            cells.append(_Cell(part.strip(), number, at))
            start += len(part) + 1
        rows.append(cells)
    return rows


class _Reader:
    """Collects the faults of one table while it is read."""

    def __init__(self, file: str, columns: Sequence[Column]) -> None:
        self.file = file
        self.columns = {column.name: column for column in columns}
        self.faults: list[Fault] = []

    def short_list(self) -> list[Fault]:
        """The first faults, and how many more there are."""
        rest = len(self.faults) - _MOST_FAULTS
        if rest <= 0:
            return self.faults
        at = self.faults[_MOST_FAULTS]
        more = Fault(
            self.file,
            at.line,
            at.column,
            "",
            "sound values from here on",
            f"{rest} more faults",
            "mend those above first",
        )
        return [*self.faults[:_MOST_FAULTS], more]

    def _note(self, cell: _Cell, key: str, expected: str, mend: str, found: str = "") -> None:
        found = found or shown(cell.text)
        self.faults.append(Fault(self.file, cell.line, cell.column, key, expected, found, mend))

    def header(self, cells: list[_Cell]) -> list[tuple[Column, float]]:
        """Match the header's cells to columns, each with the factor of its unit to SI."""
        chosen: list[tuple[Column, float]] = []
        if len(cells) == 1 and re.search(r"[;\t]", cells[0].text):
            expected = "columns separated by commas"
            self._note(cells[0], "", expected, "separate columns by commas, decimals by points")
            return chosen
        seen: set[str] = set()
        for cell in cells:
            match = _HEADER.fullmatch(cell.text)
            name = " ".join((match["name"] if match else cell.text).lower().split())
            column = self.columns.get(name)
            if column is None:
                hint = did_you_mean(name, self.columns) or "remove the column"
                self._note(cell, "", f"one of the columns {listed(self.columns)}", hint)
            elif name in seen:
                self._note(cell, name, "each column once", "remove one of the two")
            else:
                chosen.append((column, self._factor(cell, column, match and match["unit"])))
            seen.add(name)
        missing = [c.name for c in self.columns.values() if c.required and c.name not in seen]
        for name in missing:
            unit = next(iter(units.DIMENSIONS[self.columns[name].dimension]))
            mend = f'add the column "{name} [{unit}]"' if unit else f'add the column "{name}"'
            self._note(cells[0], name, f'a column "{name}"', mend, "none")
        return chosen

    def _factor(self, cell: _Cell, column: Column, unit: str | None) -> float:
        try:
            return units.parse(f"1 {unit or ''}", column.dimension)[0]
        except units.UnitError:
            names = [f"[{name}]" for name in units.unit_names(column.dimension) if name]
            expected = f"a unit of {column.dimension}: {listed(names)}" if names else "no unit"
            mend = f'write for example "{column.name} {names[0]}"' if names else "remove the unit"
            self._note(cell, column.name, expected, mend)
            return math.nan

    def body(self, rows: list[list[_Cell]], chosen: list[tuple[Column, float]]) -> CsvTable | None:
        """Read the numbers."""
        if not _FEWEST_ROWS <= len(rows) <= _MOST_ROWS:
            self.faults.append(
                Fault(
                    self.file,
                    rows[-1][0].line if rows else 1,
                    1,
                    "",
                    f"{_FEWEST_ROWS} to {_MOST_ROWS} rows",
                    str(len(rows)),
                    "add or thin out rows",
                )
            )
            return None
        values = np.empty((len(rows), len(chosen)))
        for i, cells in enumerate(rows):
            if len(cells) != len(chosen):
                mend = "fill every column, and write decimals with a point"
                self._note(cells[0], "", f"{len(chosen)} cells", mend, f"{len(cells)} cells")
                continue
            for j, (cell, (column, factor)) in enumerate(zip(cells, chosen, strict=True)):
                values[i, j] = self._number(cell, column) * factor
        if self.faults:
            return None
        names = [column.name for column, _ in chosen]
        return CsvTable(
            file=self.file,
            values={name: values[:, j].copy() for j, name in enumerate(names)},
            lines=tuple(cells[0].line for cells in rows),
            places={
                name: tuple(cells[j].column for cells in rows) for j, name in enumerate(names)
            },
        )

    def _number(self, cell: _Cell, column: Column) -> float:
        signs = {"any": "", "positive": " above 0", "not negative": " of at least 0"}
        expected = f"a number{signs[column.sign]}"
        if not _NUMBER.fullmatch(cell.text):
            mend = minus_mend(cell.text) or "write a plain number"
            self._note(cell, column.name, expected, mend)
            return 0.0
        number = float(cell.text)
        if not math.isfinite(number):
            self._note(cell, column.name, expected, "write a finite number")
        elif column.sign != "any" and (
            number < 0.0 or (column.sign == "positive" and number == 0.0)
        ):
            self._note(cell, column.name, expected, "correct the value")
        return number
