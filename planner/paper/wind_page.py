"""The wind gate by itself: as PDF and as a table of every level that was tried."""

from __future__ import annotations

import csv
import io
from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.banner import banner_of
from planner.paper.boxes import Box, Picture, gap, heading, numbered, paragraph
from planner.paper.gate import gate_boxes, kept_gate, limit_words, sector_text, speed_text
from planner.paper.pages import frame_for, paginate, render
from planner.paper.reading import Json, Reading
from planner.paper.wind_chart import FAMILIES, families_failed, levels_of, sector_drawing

if TYPE_CHECKING:
    from planner.paper.pages import Frame

_CHART = 150.0
_CAUTIONS = (
    "A gate is a prediction with allowances, not clearance to start. The facility's approved "
    "procedures come before it.",
    "It holds for the plan as it was computed, for wind from one sector at a time, and for the "
    "levels that were tried: nothing is said of the wind between the last that passed and the "
    "first that failed, and nothing above the cap.",
    "Wind was taken the same over the whole disc at a time. Shelter counts only where it was "
    "measured; near buildings and masts read the wind where the rotor is.",
    "A gust that is forecast counts as a gust that is met.",
)


def wind_pdf(record: Json, gate: Json, paper: str = "a4") -> bytes:
    """Print the wind gate: a chart a sector, what limits it, and cautions.

    Args:
        record: a record of the present layout.
        gate: the wind gate that was computed for it.
        paper: ``a4`` or ``letter``.

    Raises:
        UnprintableError: text holds characters that paper cannot show.
        ValueError: an unknown paper, or a gate of another plan.
    """
    _check(record, gate)
    reading, frame = Reading(record), frame_for(paper)
    boxes: list[Box] = [
        heading("Wind gate", frame.width),
        *gate_boxes(reading, gate, frame),
        gap(),
        *(numbered("•", text, frame.width) for text in _CAUTIONS),
    ]
    for sector in gate["sectors"]:
        boxes += _sector_boxes(reading, gate, sector, frame)
    return render(paginate(boxes, frame.height), frame, banner_of(reading, "Wind gate"))


def wind_csv(record: Json, gate: Json) -> str:
    """Write every level that was tried as one row, with the gate of its sector.

    Raises:
        ValueError: a gate of another plan.
    """
    _check(record, gate)
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow(
        [
            "sector",
            "mean wind [m/s]",
            "gust [m/s]",
            "result",
            *FAMILIES,
            "what fails",
            "gate, mean [m/s]",
            "gate, gust [m/s]",
            "limited by",
        ]
    )
    for sector in gate["sectors"]:
        for level in levels_of(gate, sector):
            failed = families_failed(record, level)
            writer.writerow(
                [
                    sector["name"],
                    *(f"{level[key]:.6g}" for key in ("mean_m_s", "gust_m_s")),
                    _result(passes=level["passes"]),
                    *(_result(passes=family not in failed) for family in FAMILIES),
                    "; ".join(level["fails"]),
                    *(_number(sector[key]) for key in ("mean_m_s", "gust_m_s")),
                    sector["limited_by"],
                ]
            )
    return out.getvalue()


def _check(record: Json, gate: Json) -> None:
    if kept_gate({**record, "wind_gate": gate}) is None:
        msg = (
            "wind gate: expected one that was computed for this plan, found one of a plan with "
            f"digest {gate['kept_for']!s:.12}; compute it anew"
        )
        raise ValueError(msg)


def _result(*, passes: bool) -> str:
    return "passes" if passes else "fails"


def _number(value: float | None) -> str:
    return "none" if value is None else f"{value:.6g}"


def _sector_boxes(reading: Reading, gate: Json, sector: Json, frame: Frame) -> list[Box]:
    """Chart of a sector, then its gate and what limits it."""
    mean, gust = (speed_text(sector[key]) for key in ("mean_m_s", "gust_m_s"))
    found = f"Gate: mean {mean}, gust {gust}. Limited by: {texts.sentence(limit_words(sector))}"
    levels = levels_of(gate, sector)
    failing = next((level for level in levels if not level["passes"]), None)
    fails = f" At {texts.number(failing['mean_m_s'], 'm/s')}: " if failing else ""
    words = texts.sentence("; ".join(failing["fails"]) or "no reason told") if failing else ""
    return [
        gap(),
        heading(sector_text(reading, sector["name"]), frame.width, level=1),
        Picture(
            keep_next=True, drawing=sector_drawing(reading, gate, sector, frame.width, _CHART)
        ),
        paragraph(f"{found}{fails}{words}", frame.width),
    ]
