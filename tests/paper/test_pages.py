from __future__ import annotations

from typing import TYPE_CHECKING

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from planner.paper.boxes import Heading, gap, heading, new_page, paragraph
from planner.paper.ink import BODY, clipped, lines_of, width_of
from planner.paper.pages import frame_for, paginate
from planner.paper.tables import Cell, Row, Table, TableRow, table_boxes

if TYPE_CHECKING:
    from planner.paper.boxes import Box
    from planner.paper.pages import Page

ROOM = 400.0
WIDTHS = (60.0, 140.0)


def rows_on(page: Page) -> list[TableRow]:
    return [p.box for p in page if isinstance(p.box, TableRow) and not is_head(p.box)]


def is_head(row: TableRow) -> bool:
    return row is row.table.head_box


def text_of(row: TableRow) -> str:
    cells = [" ".join(line for line, _ in lines) for lines in row.lines]
    return " ".join(cells + [" ".join(line for line, _ in lines) for lines in row.tail_lines])


@settings(deadline=None)
@given(
    st.lists(st.tuples(st.integers(0, 260), st.booleans()), min_size=1, max_size=40),
    st.integers(0, 5),
)
def test_rows_stay_whole_in_order_under_a_head(sizes: list[tuple[int, bool]], most: int) -> None:
    table = Table(WIDTHS, ("Row", "Text"), most_rows=most)
    rows = [
        Row((Cell(f"#{i}"), Cell("word " * (n // 5))), keep_next=tied)
        for i, (n, tied) in enumerate(sizes)
    ]
    pages = paginate(table_boxes(table, rows), ROOM)
    found = [row for page in pages for row in rows_on(page)]
    assert [row.lines[0][0][0] for row in found] == [f"#{i}" for i in range(len(sizes))]
    for page in pages:
        assert page
        first = page[0].box
        assert isinstance(first, TableRow)
        assert is_head(first)
        assert max(p.down + p.box.height for p in page) <= ROOM + 1e-6
        assert not most or len(rows_on(page)) <= most


@pytest.mark.parametrize("n_words", [100, 500, 3000])
def test_row_taller_than_a_page_goes_on_and_loses_nothing(n_words: int) -> None:
    words = [f"w{i}" for i in range(n_words)]
    table = Table(WIDTHS, ("Row", "Text"))
    row = Row((Cell("#0", tick=True), Cell(" ".join(words))), tails=(Cell(" ".join(words)),))
    pages = paginate(table_boxes(table, [row, Row((Cell("#1"), Cell("after")))]), ROOM)
    found = " ".join(text_of(row) for page in pages for row in rows_on(page)).split()
    assert [w for w in found if w.startswith("w")] == words * 2
    assert all(max(p.down + p.box.height for p in page) <= ROOM + 1e-6 for page in pages)


@given(st.integers(0, 40))
def test_heading_never_stands_last(n_lines: int) -> None:
    boxes: list[Box] = [
        paragraph("\n".join("x" for _ in range(n_lines + 1)), 100.0),
        gap(),
        heading("Part", 100.0),
        heading("Piece", 100.0, level=1),
        paragraph("text", 100.0),
    ]
    for page in paginate(boxes, ROOM):
        assert not isinstance(page[-1].box, Heading)


def test_page_breaks_and_gaps_make_no_empty_page() -> None:
    boxes: list[Box] = [new_page(), gap(), new_page(), paragraph("a", 90.0), new_page(), gap()]
    assert len(paginate(boxes, ROOM)) == 1


@given(st.text(st.sampled_from("abcW θ≤\n"), max_size=300), st.floats(20.0, 300.0))
def test_lines_fit_and_keep_every_letter(text: str, width: float) -> None:
    lines = lines_of(text, BODY, width)
    assert "".join("".join(lines).split()) == "".join(text.split())
    assert all(width_of(line, BODY) <= width or len(line) == 1 for line in lines)


def test_sixty_letter_word_is_broken_not_clipped() -> None:
    lines = lines_of("W" * 60, BODY, 100.0)
    assert "".join(lines) == "W" * 60
    assert len(lines) > 5


def test_clipped_line_shows_that_it_was_cut() -> None:
    assert clipped("short", BODY, 200.0) == "short"
    assert clipped("long " * 40, BODY, 100.0).endswith("…")


def test_unknown_paper_is_refused() -> None:
    with pytest.raises(ValueError, match=r"paper must be one of a4, letter; got 'a3'"):
        frame_for("a3")
