"""Ruled tables for the page: rows of known height under a head that repeats."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from typing import TYPE_CHECKING

from planner.paper.boxes import HAIR, RULE, Box
from planner.paper.ink import BODY, Face, draw_lines, lines_of, width_of
from planner.paper.texts import printable

if TYPE_CHECKING:
    from reportlab.pdfgen.canvas import Canvas

PAD_X = 4.0
PAD_Y = 3.0
_TICK = 13.0
_THICK = 1.0
_SLACK = 0.01

Place = tuple[float, float]
"""Left edge and top."""


Broken = tuple[tuple[str, bool], ...]
"""Lines of a cell, each with whether it is bold."""


@dataclass(frozen=True)
class Cell:
    """What stands in one cell; ``tick`` draws a box to be ticked."""

    text: str = ""
    bold: bool = False
    lead: str = ""
    """Bold lines above the text."""
    tick: bool = False


@dataclass(frozen=True)
class Row:
    """One row: cells, sub-rows that take the place of some cells, and full-width lines below."""

    cells: tuple[Cell, ...]
    sub_rows: tuple[tuple[Cell, ...], ...] = ()
    sub_from: int = 0
    """Column where the sub-rows begin; the cells in their place are left out."""
    tails: tuple[Cell, ...] = ()
    least_height: float = 0.0
    keep_next: bool = False
    grey: bool = False


@dataclass(frozen=True)
class Table:
    """Column widths, head and face of a table; the head repeats on every page."""

    widths: tuple[float, ...]
    head: tuple[str, ...]
    face: Face = BODY
    most_rows: int = 0
    """Rows of such a kind that a page may hold; 0: as many as fit."""
    sub_pitch: float = 16.2
    tail_face: Face = BODY

    @cached_property
    def lefts(self) -> tuple[float, ...]:
        """Left edge of each column, and the right edge of the last."""
        return tuple(sum(self.widths[:i]) for i in range(len(self.widths) + 1))

    @cached_property
    def head_box(self) -> TableRow:
        """The row that repeats on every page."""
        return table_row(self, Row(tuple(Cell(text, bold=True) for text in self.head), grey=True))


@dataclass(frozen=True)
class TableRow(Box):
    """A row whose cells are already broken into lines."""

    table: Table
    row: Row
    lines: tuple[Broken, ...]
    sub_lines: tuple[tuple[Broken, ...], ...]
    tail_lines: tuple[Broken, ...]

    @cached_property
    def sub_heights(self) -> tuple[float, ...]:
        """Height of each sub-row."""
        leading, pitch = self.table.face.leading, self.table.sub_pitch
        return tuple(
            max(pitch, leading * max(len(lines) for lines in sub) + pitch - leading)
            for sub in self.sub_lines
        )

    @cached_property
    def cells_height(self) -> float:
        """Height of the cells, without the lines below them."""
        most = max((len(lines) for lines in self.lines), default=0)
        if not (most or self.sub_lines):
            return 0.0
        lines = most * self.table.face.leading + 2.0 * PAD_Y
        return max(lines, sum(self.sub_heights), self.row.least_height)

    @cached_property
    def height(self) -> float:
        """Height in points."""
        tails = sum(self._tail_height(lines) for lines in self.tail_lines)
        return self.cells_height + tails

    def draw(self, canvas: Canvas, left: float, top: float) -> None:
        """Draw fill, rules and text."""
        self._draw_rules(canvas, left, top)
        face, lefts = self.table.face, self.table.lefts
        for i, (cell, lines) in enumerate(zip(self.row.cells, self.lines, strict=True)):
            self._draw_cell(canvas, cell, lines, (left + lefts[i], top), face)
        y = top
        for sub, texts, tall in zip(
            self.row.sub_rows, self.sub_lines, self.sub_heights, strict=True
        ):
            middle = y - 0.5 * (tall - face.leading * max(len(lines) for lines in texts)) + PAD_Y
            for j, (cell, lines) in enumerate(zip(sub, texts, strict=True), self.row.sub_from):
                self._draw_cell(canvas, cell, lines, (left + lefts[j], middle), face)
            y -= tall
        y = top - self.cells_height
        for cell, lines in zip(self.row.tails, self.tail_lines, strict=True):
            self._draw_cell(canvas, cell, lines, (left, y), self.table.tail_face)
            y -= self._tail_height(lines)

    def split(self, room: float) -> tuple[Box, Box] | None:
        """Divide between lines: only for a row that no page can hold."""
        leading = self.table.face.leading
        if self.cells_height > room:
            n = int((room - 2.0 * PAD_Y) / leading)
            if n < 1 or sum(self.sub_heights) > room:
                return None
            first = replace(self, lines=tuple(lines[:n] for lines in self.lines), tail_lines=())
            rest = replace(self, lines=tuple(lines[n:] for lines in self.lines), sub_lines=())
            cells = tuple(replace(cell, tick=False) for cell in self.row.cells)
            later = replace(self.row, cells=cells, sub_rows=(), least_height=0.0)
            return (
                replace(first, row=replace(self.row, tails=()), keep_next=False),
                replace(rest, row=later),
            )
        return self._split_tails(room)

    def _split_tails(self, room: float) -> tuple[Box, Box] | None:
        left_over = room - self.cells_height
        for i, lines in enumerate(self.tail_lines):
            if self._tail_height(lines) > left_over:
                n = max(0, int((left_over - 2.0 * PAD_Y) / self.table.tail_face.leading))
                parts = (*self.tail_lines[:i], lines[:n]), (lines[n:], *self.tail_lines[i + 1 :])
                tails = self.row.tails[: i + 1], self.row.tails[i:]
                first = replace(self.row, tails=tails[0])
                rest = Row((), tails=tails[1], grey=self.row.grey)
                return (
                    replace(self, row=first, tail_lines=parts[0], keep_next=False),
                    replace(self, row=rest, lines=(), sub_lines=(), tail_lines=parts[1]),
                )
            left_over -= self._tail_height(lines)
        return None

    def _tail_height(self, lines: Broken) -> float:
        return len(lines) * self.table.tail_face.leading + 2.0 * PAD_Y if lines else 0.0

    def _draw_cell(
        self, canvas: Canvas, cell: Cell, lines: Broken, place: Place, face: Face
    ) -> None:
        left, top = place[0] + PAD_X, place[1] - PAD_Y
        for i, (line, bold) in enumerate(lines):
            place = (left, top - i * face.leading)
            draw_lines(canvas, (line,), face.bold if bold else face, place)
        if cell.tick:
            canvas.setLineWidth(_THICK)
            canvas.rect(left, top - 1.0 - _TICK, _TICK, _TICK)

    def _draw_rules(self, canvas: Canvas, left: float, top: float) -> None:
        lefts = self.table.lefts
        if self.row.grey:
            canvas.setFillGray(0.9)
            canvas.rect(left, top - self.height, lefts[-1], self.height, stroke=0, fill=1)
            canvas.setFillGray(0.0)
        canvas.setLineWidth(RULE)
        canvas.rect(left, top - self.height, lefts[-1], self.height)
        canvas.setLineWidth(HAIR)
        if self.cells_height:
            for x in lefts[1:-1]:
                canvas.line(left + x, top, left + x, top - self.cells_height)
            if self.tail_lines:
                y = top - self.cells_height
                canvas.line(left, y, left + lefts[-1], y)
        if self.sub_lines:
            ends = self.row.sub_from, self.row.sub_from + len(self.sub_lines[0])
            y = top
            for tall in self.sub_heights[:-1]:
                y -= tall
                canvas.line(left + lefts[ends[0]], y, left + lefts[ends[1]], y)


def table_row(table: Table, row: Row) -> TableRow:
    """Break a row's cells into lines by the table's column widths."""

    def broken(cell: Cell, width: float, plain: Face = table.face) -> Broken:
        room = width - 2.0 * PAD_X
        face = plain.bold if cell.bold else plain
        lead = lines_of(cell.lead, plain.bold, room) if cell.lead else ()
        text = lines_of(cell.text, face, room) if cell.text or not lead else ()
        return (*((line, True) for line in lead), *((line, cell.bold) for line in text))

    n_sub = len(row.sub_rows[0]) if row.sub_rows else 0
    ends = row.sub_from, row.sub_from + n_sub
    cells = tuple(Cell() if ends[0] <= i < ends[1] else cell for i, cell in enumerate(row.cells))
    return TableRow(
        keep_next=row.keep_next,
        table=table,
        row=replace(row, cells=cells),
        lines=tuple(broken(c, w) for c, w in zip(cells, table.widths, strict=True)),
        sub_lines=tuple(
            tuple(broken(c, w) for c, w in zip(sub, table.widths[ends[0] : ends[1]], strict=True))
            for sub in row.sub_rows
        ),
        tail_lines=tuple(broken(cell, table.lefts[-1], table.tail_face) for cell in row.tails),
    )


def fitted(table: Table, rows: list[Row]) -> Table:
    """Widen columns until their longest word stands whole, at the cost of those with room.

    Where the words do not fit side by side the widths stay as they are.
    """
    head = Row(tuple(Cell(text, bold=True) for text in table.head))
    needs = [
        max(_longest_word(row.cells[i], table.face) for row in (head, *rows) if row.cells)
        + 2.0 * PAD_X
        + _SLACK
        for i in range(len(table.widths))
    ]
    missing = sum(max(0.0, need - width) for need, width in zip(needs, table.widths, strict=True))
    spare = sum(max(0.0, width - need) for need, width in zip(needs, table.widths, strict=True))
    if missing == 0.0 or missing > spare:
        return table
    widths = (
        need if need > width else width - (width - need) * missing / spare
        for need, width in zip(needs, table.widths, strict=True)
    )
    return replace(table, widths=tuple(widths))


def _longest_word(cell: Cell, face: Face) -> float:
    words = printable(cell.text).replace("\n", " ").replace("\t", " ").split(" ")
    leads = printable(cell.lead).replace("\n", " ").replace("\t", " ").split(" ")
    text_face = face.bold if cell.bold else face
    return max(
        *(width_of(word, text_face) for word in words),
        *(width_of(word, face.bold) for word in leads),
    )


def table_boxes(table: Table, rows: list[Row]) -> list[Box]:
    """Turn rows into boxes to be stacked; neither first nor last row stands alone on a page."""
    tied = {0, len(rows) - 2} - {len(rows) - 1}
    return [
        table_row(table, replace(row, keep_next=row.keep_next or i in tied))
        for i, row in enumerate(rows)
    ]


def plain_row(*cells: str, least_height: float = 0.0) -> Row:
    """Make a row of plain text; the first cell is bold."""
    first, *others = cells
    made = (Cell(first, bold=True), *(Cell(text) for text in others))
    return Row(made, least_height=least_height)
