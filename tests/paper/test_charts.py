from __future__ import annotations

import csv
import io
import itertools
from xml.etree import ElementTree

import pypdf
import pytest
from hypothesis import given
from hypothesis import strategies as st
from reportlab.graphics.shapes import Drawing, Path, PolyLine, String

from planner.paper.fan import fan_csv, fan_pdf, fan_svg
from planner.paper.fan_chart import fan_drawing
from planner.paper.flap_chart import flap_drawing
from planner.paper.plot import spread, ticks
from planner.paper.reading import Reading
from planner.paper.texts import UnprintableError
from tests.paper.sample_record import sample_record


def labels(drawing: Drawing) -> list[String]:
    return [shape for shape in drawing.contents if isinstance(shape, String)]


def words(drawing: Drawing) -> list[str]:
    return [label.text for label in labels(drawing)]


@given(st.lists(st.floats(0.0, 100.0), max_size=14), st.floats(1.0, 12.0))
def test_spread_labels_keep_apart_and_inside(places: list[float], apart: float) -> None:
    moved = spread(places, apart, 0.0, 100.0)
    assert all(-1e-6 <= place <= 100.0 + 1e-6 for place in moved)
    room = 100.0 / max(1, len(places) - 1)
    for one, other in itertools.pairwise(sorted(moved)):
        assert other - one >= min(apart, room) - 1e-6
    by_place = [m for _, m in sorted(zip(places, moved, strict=True))]
    assert by_place == sorted(by_place)


@given(st.floats(-100.0, 100.0), st.floats(0.01, 1e4))
def test_ticks_are_few_and_inside(low: float, width: float) -> None:
    found = ticks(low, low + width)
    assert 2 <= len(found) <= 12
    slack = 1e-6 * width
    assert all(low - slack <= value <= low + width + slack for value, _ in found)


def test_fan_names_every_mode_ray_and_band() -> None:
    found = words(fan_drawing(Reading(sample_record(12)), 760.0, 420.0))
    for wanted in ("flap 1", "lag 1", "torsion 1", "stand rocking", "shaft first", "1P", "8P",
                   "keep-out K1", "keep-out K2", "rotor speed [rpm]", "frequency [Hz]",
                   "stand twist (NOT ASSESSED)"):  # fmt: skip
        assert wanted in found


def test_fan_mode_labels_do_not_overlap_with_many_modes() -> None:
    record = sample_record(2)
    fan = record["series"]["fan"]
    fan["modes"] = [{**fan["modes"][0], "name": f"flap {i}"} for i in range(1, 15)]
    drawing = fan_drawing(Reading(record), 720.0, 400.0)
    heights = sorted(label.y for label in labels(drawing) if label.text.startswith("flap "))
    assert len(heights) == 14
    assert min(b - a for a, b in itertools.pairwise(heights)) >= 9.0


def test_fan_says_what_it_cannot_draw() -> None:
    record = sample_record(2)
    modes = record["series"]["fan"]["modes"]
    modes[0]["frequency_rad_s"] = [None] * len(modes[0]["frequency_rad_s"])
    modes[1]["frequency_rad_s"] = [9e4] * len(modes[1]["frequency_rad_s"])
    found = words(fan_drawing(Reading(record), 760.0, 420.0))
    assert "flap 1: NOT ASSESSED" in found
    assert "flap 2: above the chart" in found


def test_fan_lines_differ_without_colour() -> None:
    drawing = fan_drawing(Reading(sample_record(2)), 760.0, 420.0)
    for shape in drawing.contents:
        colour = getattr(shape, "strokeColor", None)
        if colour is not None:
            assert colour.red == colour.green == colour.blue
    styles = {
        tuple(shape.strokeDashArray or ())
        for shape in drawing.contents
        if isinstance(shape, PolyLine) and shape.strokeWidth == 1.5
    }
    assert len(styles) >= 6


def test_everything_stays_on_the_drawing() -> None:
    for n in (2, 60):
        reading = Reading(sample_record(n))
        for drawing in (fan_drawing(reading, 736.0, 400.0), flap_drawing(reading, 736.0, 400.0)):
            left, bottom, right, top = drawing.getBounds()
            assert left >= -1.0
            assert bottom >= -1.0
            assert right <= 737.0
            assert top <= 401.0


def test_empty_series_still_draw() -> None:
    record = sample_record(2)
    record["series"]["fan"] = {"speed_rad_s": [], "modes": [], "harmonics": [1, 2]}
    record["series"]["flap"] = {key: [] for key in record["series"]["flap"]}
    record["series"]["run"] = {key: [] for key in record["series"]["run"]}
    reading = Reading(record)
    assert "1P" in words(fan_drawing(reading, 736.0, 400.0))
    assert "flap [°]" in words(flap_drawing(reading, 736.0, 400.0))


def test_flap_chart_hatches_and_names_what_is_open() -> None:
    record = sample_record(2, "NOT ASSESSED")
    record["series"]["flap"]["assessed"] = [True] * len(record["series"]["flap"]["assessed"])
    drawing = flap_drawing(Reading(record), 736.0, 400.0)
    assert "NOT ASSESSED" in words(drawing)
    assert "hatched: NOT ASSESSED" in words(drawing)
    assert sum(isinstance(shape, Path) for shape in drawing.contents) == 3
    whole = flap_drawing(Reading(sample_record(2, "GO")), 736.0, 400.0)
    assert {"droop stop", "up stop", "flap [°]"} <= set(words(whole))


def test_flap_chart_without_numbers_is_hatched_at_every_hold() -> None:
    """Ramps and the stop are marched: they are hatched where their findings are open."""
    record = sample_record(3)
    flap = record["series"]["flap"]
    flap["lowest_rad"] = [None] * len(flap["time_s"])
    drawing = flap_drawing(Reading(record), 736.0, 400.0)
    holds = [s for s in record["segments"] if s["kind"] == "hold"]
    assert sum(isinstance(shape, Path) for shape in drawing.contents) == len(holds) == 3
    assert "NOT ASSESSED" in words(drawing)


@pytest.mark.parametrize("paper", ["a4", "letter"])
def test_fan_pdf_prints_chart_and_crossings(paper: str) -> None:
    data = fan_pdf(sample_record(5), paper)
    assert data == fan_pdf(sample_record(5), paper)
    pages = [page.extract_text() for page in pypdf.PdfReader(io.BytesIO(data)).pages]
    assert "Page 1 of 2" in pages[0]
    assert "frequency [Hz]" in pages[0]
    assert "292 rpm (282 to 302 rpm)" in pages[1]


def test_fan_pdf_without_crossings_says_so() -> None:
    record = sample_record(2)
    del record["predictions"]["crossing_speed"]
    pages = pypdf.PdfReader(io.BytesIO(fan_pdf(record))).pages
    assert "NOT ASSESSED (not computed)" in pages[1].extract_text()


def test_fan_svg_is_well_formed_and_text_stays_text() -> None:
    record = sample_record(2)
    record["series"]["fan"]["modes"][0]["name"] = '<script>x</script>&"'
    svg = fan_svg(record)
    root = ElementTree.fromstring(svg)  # noqa: S314  # made here
    assert not [node for node in root.iter() if node.tag.endswith("script")]
    assert any('<script>x</script>&"' in (node.text or "") for node in root.iter())


def test_fan_svg_refuses_unprintable_text() -> None:
    record = sample_record(2)
    record["series"]["fan"]["modes"][0]["name"] = "a\u202eb"
    with pytest.raises(UnprintableError, match=r"U\+202E"):
        fan_svg(record)


def test_fan_csv_has_units_and_says_what_is_missing() -> None:
    record = sample_record(2)
    record["series"]["fan"]["modes"][1]["frequency_rad_s"][3] = None
    rows = list(csv.reader(io.StringIO(fan_csv(record))))
    assert rows[0][:3] == ["rotor speed [rpm]", "flap 1 [Hz]", "flap 2 [Hz]"]
    assert "stand twist (NOT ASSESSED) [Hz]" in rows[0]
    assert rows[4][2] == "NOT ASSESSED"
    assert len({len(row) for row in rows}) == 1
    assert float(rows[-1][-1]) == pytest.approx(8.0 * float(rows[-1][0]) / 60.0, rel=1e-5)
