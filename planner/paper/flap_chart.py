"""Flap range against the stops over the run, with what was not assessed hatched."""

from __future__ import annotations

import math
from itertools import groupby, pairwise
from typing import TYPE_CHECKING, Any

from planner.model.results import Verdict
from planner.paper.ink import PLAIN
from planner.paper.plot import Area, Plot, text_width, time_scale
from planner.paper.texts import NOT_ASSESSED
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Sequence

    from reportlab.graphics.shapes import Drawing

    from planner.paper.reading import Reading

_LEFT, _RIGHT, _SPEED = 44.0, 96.0, 84.0
_NARROWEST_LABEL = 6.0
Sample = dict[str, Any]


def flap_drawing(reading: Reading, width: float, height: float) -> Drawing:
    """Draw lowest and highest flap with both stops; below it the rotor speed at the same time."""
    from reportlab.graphics.shapes import Drawing  # noqa: PLC0415  # only charts pay

    drawing = Drawing(width, height, initialFontName=PLAIN)
    samples = _samples(reading)
    times = [sample["time_s"] for sample in samples] or [0.0]
    first, last = min(times), max(*times, min(times) + 1.0)
    unit, scale = time_scale(last - first)
    spread = (first / scale, last / scale)
    inner = width - _LEFT - _RIGHT
    low, high = _flap_ends(samples)
    area = Area(_LEFT, _SPEED + 44.0, inner, height - _SPEED - 66.0, spread, (low, high))
    plot = Plot(drawing, area)
    _draw_range(plot, samples, scale)
    _draw_open(plot, samples, scale)
    _draw_stops(plot, samples, scale)
    plot.border()
    plot.y_axis("flap [°]")
    _draw_speed(drawing, area, reading, (unit, scale))
    return drawing


def _samples(reading: Reading) -> list[Sample]:
    """Rows of the series in degrees; what any finding leaves open counts as not assessed."""
    series = reading.record["series"]["flap"]
    names = list(series)
    opened = _open_segments(reading)
    kinds = {s["id"]: s["kind"] for s in reading.record["segments"]}  # ramps, stop: marched
    samples: list[Sample] = []
    for values in zip(*(series[name] for name in names), strict=True):
        sample = dict(zip(names, values, strict=True))
        if sample["time_s"] is None:
            continue
        for name in ("lowest_rad", "highest_rad", "droop_rad", "up_rad"):
            value = sample[name]
            sample[name] = None if value is None else from_si(value, "deg")
        known = sample["lowest_rad"] is not None and sample["highest_rad"] is not None
        sample["drawn"] = known and bool(sample["assessed"])
        is_hold = kinds.get(sample["segment"], "hold") == "hold"
        sample["open"] = (not sample["drawn"] and is_hold) or sample["segment"] in opened
        samples.append(sample)
    return samples


def _open_segments(reading: Reading) -> set[str]:
    rules = {r["id"] for r in reading.book["rules"] if r["hazard_class"] == "stops"}
    return {
        segment
        for finding in reading.findings
        if finding["rule"] in rules
        for segment, word in finding["segment_verdicts"].items()
        if word == Verdict.NOT_ASSESSED.value
    }


def _flap_ends(samples: Sequence[Sample]) -> tuple[float, float]:
    known = [
        sample[name]
        for sample in samples
        for name in ("lowest_rad", "highest_rad", "droop_rad", "up_rad")
        if sample[name] is not None
    ] or [-1.0, 1.0]
    margin = max(1.0, 0.12 * (max(known) - min(known)))
    return math.floor(min(known) - margin), math.ceil(max(known) + margin)


def _draw_range(plot: Plot, samples: Sequence[Sample], scale: float) -> None:
    area = plot.area
    for drawn, members in groupby(samples, key=lambda sample: sample["drawn"]):
        if not drawn:
            continue
        run = list(members)
        places = [area.x(sample["time_s"] / scale) for sample in run]
        low, high = (
            [(x, area.y(sample[name])) for x, sample in zip(places, run, strict=True)]
            for name in ("lowest_rad", "highest_rad")
        )
        plot.fill([*low, *high[::-1]], 0.85)
        plot.line(low, 1.0)
        plot.line(high, 1.0)


def _draw_open(plot: Plot, samples: Sequence[Sample], scale: float) -> None:
    """Hatch between samples where either end is open, and say so."""
    area = plot.area
    stretches: list[tuple[float, float]] = []
    for one, other in pairwise(samples):
        if not (one["open"] and other["open"]) or one["time_s"] == other["time_s"]:
            continue
        ends = area.x(one["time_s"] / scale), area.x(other["time_s"] / scale)
        if stretches and abs(stretches[-1][1] - ends[0]) < 0.5:  # noqa: PLR2004  # half a point
            ends = stretches.pop()[0], ends[1]
        stretches.append(ends)
    taken = -math.inf
    label = f"hatched: {NOT_ASSESSED}"
    for start, end in stretches:
        plot.hatch(start, end)
    for start, end in stretches:
        middle, half = 0.5 * (start + end), 0.5 * text_width(NOT_ASSESSED)
        if end - start > 2.0 * half + _NARROWEST_LABEL and middle - half > taken:
            _boxed(plot, (middle, area.bottom + 8.0), NOT_ASSESSED)
            taken = middle + half
    if stretches:
        plot.text((area.right, area.top + 6.0), label, "end")


def _boxed(plot: Plot, place: tuple[float, float], text: str) -> None:
    x, y = place
    half = 0.5 * text_width(text) + 2.0
    plot.fill(((x - half, y - 3), (x + half, y - 3), (x + half, y + 9), (x - half, y + 9)), 1.0)
    plot.text(place, text, "middle")


def _draw_stops(plot: Plot, samples: Sequence[Sample], scale: float) -> None:
    area = plot.area
    for name, label in (("droop_rad", "droop stop"), ("up_rad", "up stop")):
        known = [sample for sample in samples if sample[name] is not None]
        if not known:
            continue
        places = [(area.x(s["time_s"] / scale), area.y(s[name])) for s in known]
        plot.line(places, 2.2, (8.0, 3.0))
        plot.text((area.right + 6.0, places[-1][1] - 3.0), label)
    if all(s["droop_rad"] is None and s["up_rad"] is None for s in samples):
        plot.text((area.left + 6.0, area.top - 14.0), "this hub has no flap stops")
    plot.text((area.left + 40.0, area.top + 6.0), "grey: lowest to highest flap")


def _draw_speed(
    drawing: Drawing, above: Area, reading: Reading, time_unit: tuple[str, float]
) -> None:
    unit, scale = time_unit
    run = reading.record["series"]["run"]
    pairs = [
        (time / scale, from_si(speed, "rpm"))
        for time, speed in zip(run["time_s"], run["speed_rad_s"], strict=True)
        if time is not None and speed is not None
    ]
    top = 1.08 * max([speed for _, speed in pairs], default=1.0) or 1.0
    area = Area(above.left, 34.0, above.width, _SPEED - 10.0, above.x_range, (0.0, top))
    plot = Plot(drawing, area)
    inside = [(area.x(t), area.y(s)) for t, s in pairs if t <= area.x_range[1] + 1e-9]
    plot.line(inside, 1.2)
    plot.border()
    plot.x_axis(f"time, one pass of each block [{unit}]")
    plot.y_axis("rotor speed [rpm]")
