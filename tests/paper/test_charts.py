from __future__ import annotations

import itertools

from hypothesis import given
from hypothesis import strategies as st
from reportlab.graphics.shapes import Drawing, Path, String

from planner.paper.fan_chart import fan_drawing
from planner.paper.fan_panels import FAMILIES
from planner.paper.flap_chart import flap_drawing
from planner.paper.plot import spread, ticks
from planner.paper.reading import Reading
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


def test_everything_stays_on_the_drawing() -> None:
    for n in (2, 60):
        reading = Reading(sample_record(n))
        for drawing in (
            fan_drawing(reading, FAMILIES[:1], 736.0, 400.0),
            fan_drawing(reading, FAMILIES[1:], 736.0, 400.0),
            flap_drawing(reading, 736.0, 400.0),
        ):
            left, bottom, right, top = drawing.getBounds()
            assert left >= -1.0
            assert bottom >= -1.0
            assert right <= 737.0
            assert top <= 401.0


def test_empty_series_still_draw() -> None:
    record = sample_record(2)
    record["series"]["fan"] |= {"speed_rad_s": [], "modes": [], "shifted": []}
    record["series"]["flap"] = {key: [] for key in record["series"]["flap"]}
    record["series"]["run"] = {key: [] for key in record["series"]["run"]}
    reading = Reading(record)
    found = words(fan_drawing(reading, FAMILIES, 736.0, 500.0))
    assert {"1P", "no blade mode was computed: NOT ASSESSED"} <= set(found)
    assert "no stand mode was computed: NOT ASSESSED" in found
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
