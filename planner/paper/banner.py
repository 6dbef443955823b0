"""What the running header says: title, card, revision, issue, digest, status, verdict."""

from __future__ import annotations

from planner.paper.front import EXAMPLE_BOOK
from planner.paper.pages import Banner
from planner.paper.reading import Reading, banner_text

STATUS = "DRAFT until approved in ink"
_LONGEST = 40


def banner_of(reading: Reading, document: str) -> Banner:
    """Make the running header of a document from its record."""
    plan, record = reading.plan, reading.record
    card, revision, issued = (_short(plan[key]) for key in ("card", "revision", "issued"))
    parts = [
        f"Card {card}",
        f"revision {revision}",
        f"issued {issued}",
        f"files digest {record['files_digest'][:12]}",
    ]
    if not reading.book["approved"]:
        parts.append(EXAMPLE_BOOK)
    return Banner(
        title=plan["title"],
        verdict=banner_text(record["verdict"]),
        status=STATUS,
        reference="  ·  ".join(parts),
        document=document,
        maker=f"whirlcard {record['made_by']['whirlcard']}",
    )


def _short(text: str) -> str:
    line = " ".join(text.split())
    return line if len(line) <= _LONGEST else f"{line[: _LONGEST - 1]}…"
