from __future__ import annotations

import csv
from xml.etree import ElementTree

import pytest
from reportlab.graphics.shapes import Group

from planner.paper.fan import fan_csv, fan_svg
from planner.paper.fan_chart import fan_drawing
from planner.paper.fan_panels import FAMILIES
from planner.paper.reading import Reading
from planner.paper.texts import UnprintableError
from tests.paper.sample_record import Json, sample_record


def curve(record: Json, name: str) -> Json:
    found: Json = next(m for m in record["series"]["fan"]["modes"] if m["name"] == name)
    return found


def test_svg_has_three_panels_and_text_stays_text() -> None:
    record = sample_record(2)
    record["series"]["fan"]["modes"][0]["name"] = '<script>x</script>&"'
    root = ElementTree.fromstring(fan_svg(record))  # noqa: S314  # made here
    assert not [node for node in root.iter() if node.tag.endswith("script")]
    found = [node.text or "" for node in root.iter()]
    assert any('<script>x</script>&"' in text for text in found)
    assert sum(text.strip() == "rotor speed [rpm]" for text in found) == 3
    assert float(root.attrib["height"]) > 3 * 400.0


def test_panels_of_the_svg_keep_to_their_places() -> None:
    for family in FAMILIES:
        part = fan_drawing(Reading(sample_record(2)), (family,), 900.0, 460.0)
        left, bottom, right, top = Group(*part.contents).getBounds()
        assert (left >= 0.0, bottom >= 0.0, right <= 900.0, top <= 462.0) == (True,) * 4


def test_svg_refuses_unprintable_text() -> None:
    record = sample_record(2)
    record["series"]["fan"]["modes"][0]["name"] = "a\u202eb"
    with pytest.raises(UnprintableError, match=r"U\+202E"):
        fan_svg(record)


def csv_tables(record: Json) -> list[list[str]]:
    """Lines of each table, without those of the banner."""
    blocks = fan_csv(record).split("\n\n")
    return [[x for x in block.splitlines() if not x.startswith("# ")] for block in blocks]


def test_csv_begins_with_what_it_belongs_to() -> None:
    record = sample_record(2)
    record["plan"]["title"] = "two\nlines"
    record["series"]["fan"]["modes"][0]["frequency_rad_s"][1] = 1e-14
    lines = fan_csv(record).splitlines()
    assert lines[:5] == [
        "# Fan chart: two lines",
        "# Card WS-014 · revision B · issued 2026-11-30 08:00 UTC · files digest 0123456789ab · "
        "EXAMPLE rule book, not approved",
        "# △ CAUTION, not clearance to run (DRAFT until approved in ink)",
        "# Planning aid. The facility's approved procedures, local codes and licensed practice "
        "decide.",
        "# whirlcard 0.1.0",
    ]
    assert lines[7].split(",")[1] == "0"
    record["plan"]["keep_outs"], record["series"]["fan"]["time_at_speed"] = [], None
    assert [table[1] for table in csv_tables(record)[1::2]] == [
        "none is declared", "not in this record"
    ]  # fmt: skip


def test_svg_says_what_it_belongs_to() -> None:
    record = sample_record(2)
    record["plan"]["title"] = "R&D <rotor>"
    root = ElementTree.fromstring(fan_svg(record))  # noqa: S314  # made here
    told = {node.tag.rpartition("}")[2]: node.text or "" for node in root}
    assert told["title"] == "Fan chart: R&D <rotor>"
    texts = " ".join(node.text or "" for node in root.iter())
    for words_ in (
        "Card WS-014", "revision B", "CAUTION, not clearance to run", "DRAFT until approved",
        "files digest 0123456789ab", "Planning aid.",
    ):  # fmt: skip
        assert words_ in texts
        assert words_ in told["desc"]


def test_csv_has_units_and_frames_and_says_what_is_missing() -> None:
    record = sample_record(2)
    curve(record, "flap 2")["frequency_rad_s"][3] = None
    first, *others = csv_tables(record)
    rows = list(csv.reader(first))
    assert [table[0].split(",")[0].strip('"') for table in others] == [
        "keep-out band", "run", "time at speed"
    ]  # fmt: skip
    assert others[0][1] == "K1,141,156,stand rocking mode at 1P"
    assert others[1][1] == "0,0,1.1r"
    assert rows[0][:3] == [
        "rotor speed [rpm]", "flap 1, turning frame [Hz]", "flap 2, turning frame [Hz]"
    ]  # fmt: skip
    for head in ("stand twist (NOT ASSESSED), fixed frame [Hz]", "shaft first, torsion [Hz]",
                 "lag 1, Ω + ω, fixed frame [Hz]", "1 per revolution [Hz]"):  # fmt: skip
        assert head in rows[0]
    assert rows[4][2] == "NOT ASSESSED"
    assert len({len(row) for row in rows}) == 1
    seen = rows[0].index("lag 1, Ω + ω, fixed frame [Hz]")
    assert float(rows[-1][seen]) == pytest.approx(1.3 * float(rows[-1][0]) / 60.0, rel=1e-5)
    assert rows[0][-1] == "12 per revolution [Hz]"
    assert float(rows[-1][-1]) == pytest.approx(12.0 * float(rows[-1][0]) / 60.0, rel=1e-5)
