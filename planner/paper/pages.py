"""Paper sizes, breaking boxes into pages, and drawing the pages with their running header."""

from __future__ import annotations

import io
from contextlib import contextmanager
from dataclasses import dataclass
from typing import TYPE_CHECKING

from planner.paper.boxes import Box, Gap, NewPage
from planner.paper.ink import BODY, PLAIN, REFERENCE, clipped, draw_lines, width_of
from planner.paper.tables import Table, TableRow
from planner.paper.texts import printable, shipped_fonts

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence
    from types import ModuleType

    from reportlab.pdfgen.canvas import Canvas

PAPERS = {"a4": (841.89, 595.28), "letter": (792.0, 612.0)}
"""Paper name to width and height in points, turned to lie on its long side."""

MARGIN_X = 28.0
_MARGIN_TOP, _MARGIN_BOTTOM = 26.0, 24.0
_HEADER, _FOOTER = 54.0, 16.0
FOOTING = (
    "Planning aid. The facility's approved procedures, local codes and licensed practice decide."
)


@dataclass(frozen=True)
class Frame:
    """The part of a sheet that content may use."""

    page_width: float
    page_height: float

    @property
    def width(self) -> float:
        """Width for content."""
        return self.page_width - 2.0 * MARGIN_X

    @property
    def top(self) -> float:
        """Upper edge of the content."""
        return self.page_height - _MARGIN_TOP - _HEADER

    @property
    def height(self) -> float:
        """Height for content."""
        return self.top - _MARGIN_BOTTOM - _FOOTER

    def shares(self, *weights: float) -> tuple[float, ...]:
        """Divide the width among columns."""
        return tuple(self.width * weight / sum(weights) for weight in weights)


@dataclass(frozen=True)
class Banner:
    """What every page says about the document it belongs to."""

    title: str
    verdict: str
    status: str
    reference: str
    document: str
    """What kind of paper this is, for the file's own title."""
    maker: str


@dataclass(frozen=True)
class Placed:
    """A box and the distance of its top from the top of the content."""

    box: Box
    down: float


Page = list[Placed]


def frame_for(paper: str) -> Frame:
    """Choose the sheet.

    Raises:
        ValueError: the paper is neither ``a4`` nor ``letter``.
    """
    if paper not in PAPERS:
        msg = f"paper must be one of {', '.join(PAPERS)}; got {paper!r}"
        raise ValueError(msg)
    return Frame(*PAPERS[paper])


class _Filler:
    """Fills one page after another."""

    def __init__(self, room: float) -> None:
        self.room = room
        self.pages: list[Page] = []
        self.start()

    def start(self) -> None:
        self.page: Page = []
        self.down = 0.0
        self.table: Table | None = None
        self.counted = 0

    def end(self) -> None:
        if self.page:
            self.pages.append(self.page)
        self.start()

    def need(self, boxes: Sequence[Box]) -> float:
        """Height that boxes would take here, with the table heads that they bring."""
        table, total = self.table, 0.0
        for box in boxes:
            if isinstance(box, TableRow) and box.table is not table:
                total += box.table.head_box.height
            if not (isinstance(box, Gap) and not self.page and total == 0.0):
                total += box.height
            if not isinstance(box, Gap):
                table = box.table if isinstance(box, TableRow) else None
        return total

    def is_full(self, boxes: Sequence[Box]) -> bool:
        """Say whether a page's number of counted rows would be passed."""
        rows = [b.table.most_rows for b in boxes if isinstance(b, TableRow) and b.table.most_rows]
        return bool(rows) and self.counted + len(rows) > min(rows)

    def place(self, box: Box) -> None:
        if isinstance(box, Gap) and not self.page:
            return
        if isinstance(box, TableRow):
            if box.table is not self.table:
                head = box.table.head_box
                self.page.append(Placed(head, self.down))
                self.down += head.height
            self.counted += bool(box.table.most_rows)
        if not isinstance(box, Gap):
            self.table = box.table if isinstance(box, TableRow) else None
        self.page.append(Placed(box, self.down))
        self.down += box.height

    def put(self, box: Box) -> None:
        """Place one box, over as many pages as it takes."""
        rest: Box | None = box
        while rest is not None:
            fits = self.down + self.need([rest]) <= self.room + 1e-6
            if fits and not self.is_full([rest]):
                self.place(rest)
                return
            rest = self._continue(rest)

    def _continue(self, box: Box) -> Box | None:
        """Put what fits of a box on this page; give back the rest, for the next page."""
        extra = self.need([box]) - box.height
        may_split = not (isinstance(box, TableRow) and self._fits_alone(box))
        parts = box.split(self.room - self.down - extra) if may_split else None
        if parts is None:
            if not self.page:
                self.place(box)  # nothing can divide it: let it run over rather than lose it
                return None
            self.end()
            return box
        self.place(parts[0])
        self.end()
        return parts[1]

    def _fits_alone(self, box: TableRow) -> bool:
        return box.height + box.table.head_box.height <= self.room


def paginate(boxes: Sequence[Box], room: float) -> list[Page]:
    """Break a run of boxes into pages.

    A box that keeps with the next one never stands last on a page; a table's row goes over
    to the next page whole, under a repeated head, unless no page can hold it.

    Args:
        boxes: what to place, in order.
        room: height of a page's content [pt].

    Returns:
        Pages, none of them empty.
    """
    filler = _Filler(room)
    i = 0
    while i < len(boxes):
        if isinstance(boxes[i], NewPage):
            filler.end()
            i += 1
            continue
        chain = _chain(boxes, i)
        too_low = filler.down + filler.need(chain) > room
        if filler.page and (too_low or filler.is_full(chain)) and not _divides(chain, filler):
            filler.end()
        for box in chain:
            filler.put(box)
        i += len(chain)
    filler.end()
    return filler.pages


def _chain(boxes: Sequence[Box], start: int) -> Sequence[Box]:
    end = start
    while boxes[end].keep_next and end + 1 < len(boxes):
        if isinstance(boxes[end + 1], NewPage):
            break
        end += 1
    return boxes[start : end + 1]


def _divides(chain: Sequence[Box], filler: _Filler) -> bool:
    """Say whether the last of a chain can begin on this page and go on over the next."""
    if isinstance(chain[-1], TableRow):
        return False
    room = filler.room - filler.down - filler.need(chain[:-1])
    return chain[-1].split(room) is not None


def render(pages: list[Page], frame: Frame, banner: Banner) -> bytes:
    """Draw pages into a PDF whose bytes depend on nothing but the arguments."""
    from reportlab import rl_config  # noqa: PLC0415  # only printing pays
    from reportlab.pdfgen.canvas import Canvas  # noqa: PLC0415  # only printing pays

    shipped_fonts()
    stream = io.BytesIO()
    size = (frame.page_width, frame.page_height)
    canvas = Canvas(
        stream,
        pagesize=size,
        invariant=1,
        pageCompression=1,
        lang="en-GB",
        initialFontName=PLAIN,  # type: ignore[arg-type]  # the stubs want a number
    )
    canvas.setTitle(f"{banner.document}: {banner.title}")
    canvas.setSubject(banner.reference)
    canvas.setAuthor(banner.maker)
    canvas.setCreator(banner.maker)
    for number, page in enumerate(pages, 1):
        _draw_banner(canvas, frame, banner, f"Page {number} of {len(pages)}")
        for placed in page:
            placed.box.draw(canvas, MARGIN_X, frame.top - placed.down)
        canvas.showPage()
    with _binary_streams(rl_config):
        canvas.save()
    return stream.getvalue()


@contextmanager
def _binary_streams(settings: ModuleType) -> Iterator[None]:
    """Compressed page contents as bytes, not wrapped into text once more."""
    before, settings.useA85 = settings.useA85, 0  # type: ignore[attr-defined]  # not in the stubs
    try:
        yield
    finally:
        settings.useA85 = before  # type: ignore[attr-defined]  # not in the stubs


def _draw_banner(canvas: Canvas, frame: Frame, banner: Banner, page: str) -> None:
    face = BODY.bold
    right = frame.page_width - MARGIN_X
    top = frame.page_height - _MARGIN_TOP
    lines = ((banner.title, page), (banner.verdict, banner.status))
    for i, (left_text, right_text) in enumerate(lines):
        y = top - i * face.leading
        start = right - width_of(printable(right_text), face)
        draw_lines(canvas, (right_text,), face, (start, y))
        text = clipped(left_text, face, start - MARGIN_X - 14.0)
        draw_lines(canvas, (text,), face, (MARGIN_X, y))
    reference = clipped(banner.reference, REFERENCE, frame.width)
    y = top - 2.0 * face.leading - 1.0
    draw_lines(canvas, (reference,), REFERENCE, (MARGIN_X, y))
    canvas.setLineWidth(1.2)
    canvas.line(MARGIN_X, y - 14.0, right, y - 14.0)
    foot = _MARGIN_BOTTOM + REFERENCE.leading - 4.0
    canvas.setLineWidth(0.3)
    canvas.line(MARGIN_X, foot + 1.0, right, foot + 1.0)
    draw_lines(canvas, (FOOTING,), REFERENCE, (MARGIN_X, foot))
    start = right - width_of(banner.maker, REFERENCE)
    draw_lines(canvas, (banner.maker,), REFERENCE, (start, foot))
