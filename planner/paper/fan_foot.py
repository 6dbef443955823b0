"""The foot of the fan chart: the run going downward in time, and the time at each speed."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.fan_panels import breaks_of
from planner.paper.plot import Area, Plot, time_scale
from planner.units import from_si, to_si

if TYPE_CHECKING:
    from reportlab.graphics.shapes import Drawing

    from planner.paper.reading import Json, Reading

_AXIS, _BARS, _BETWEEN, _TRACK, _OVER = 30.0, 42.0, 6.0, 62.0, 4.0
_NOTE_FROM, _NOTE_STEP = 12.0, 11.5
_GREY = 0.7
_GAP = ("a gap: two modes", "exchange their names")
_LEAST_BAR = 1.5
"""A bin that is passed in seconds shows too [pt]."""


def foot_height(reading: Reading) -> float:
    """Height that the foot takes [pt]: without bars it is lower."""
    bars = _BARS + _BETWEEN if _time_at_speed(reading) else 0.0
    return _AXIS + bars + _TRACK + _OVER


def draw_foot(drawing: Drawing, room: Area, reading: Reading) -> None:
    """Draw the run over the bars, both over the speeds of the panels above.

    Args:
        drawing: to draw on.
        room: what the foot may use, with the range of rotor speed [rpm].
        reading: the record.
    """
    at_speed = _time_at_speed(reading)
    lowest = _draw_track(drawing, room, reading, has_bars=at_speed is not None)
    if at_speed is not None:
        lowest = _draw_bars(drawing, room, reading, at_speed)
    lowest.x_axis("rotor speed [rpm]")


def _time_at_speed(reading: Reading) -> Json | None:
    found: Json | None = reading.record["series"]["fan"]["time_at_speed"]
    return found


def _draw_track(drawing: Drawing, room: Area, reading: Reading, *, has_bars: bool) -> Plot:
    run = reading.record["series"]["run"]
    pairs = [
        (time, from_si(speed, "rpm"))
        for time, speed in zip(run["time_s"], run["speed_rad_s"], strict=True)
        if time is not None and speed is not None
    ]
    last = max([time for time, _ in pairs], default=1.0) or 1.0
    unit, scale = time_scale(last)
    area = Area(
        room.left,
        room.top - _OVER - _TRACK,
        room.width,
        _TRACK,
        room.x_range,
        (last / scale, 0.0),
    )
    plot = Plot(drawing, area)
    _hatch(plot, reading)
    plot.line([(area.x(rpm), area.y(time / scale)) for time, rpm in pairs], 1.2)
    _finish(
        plot,
        f"run: time [{unit}] goes down,",
        "one pass of each block;",
        "dots up: speeds that are held",
        *(() if has_bars else ("time at speed: not in this record",)),
        *(_GAP if _has_gap(reading) else ()),
    )
    return plot


def _has_gap(reading: Reading) -> bool:
    fan = reading.record["series"]["fan"]
    return any(breaks_of(mode) for mode in (*fan["modes"], *fan["shifted"]))


def _draw_bars(drawing: Drawing, room: Area, reading: Reading, at_speed: Json) -> Plot:
    """Minutes in each bin of rotor speed."""
    edges = [from_si(edge, "rpm") for edge in at_speed["edges_rad_s"]]
    minutes = [from_si(seconds, "min") for seconds in at_speed["seconds"]]
    most = max(minutes, default=0.0) or 1.0
    area = Area(room.left, _AXIS, room.width, _BARS, room.x_range, (0.0, 1.08 * most))
    plot = Plot(drawing, area)
    _hatch(plot, reading)
    for low, high, tall in zip(edges, edges[1:], minutes, strict=False):
        left, right = (min(area.x(edge), area.right) for edge in (low, high))
        if tall > 0.0 and left < right:
            top = max(area.y(tall), area.bottom + _LEAST_BAR)
            corners = ((left, area.bottom), (left, top), (right, top), (right, area.bottom))
            plot.fill(corners, _GREY)
            plot.line(corners, 0.5)
    width = edges[1] - edges[0] if len(edges) > 1 else 0.0
    bins = texts.number(to_si(width, "rpm"), "rpm")
    _finish(plot, "time at speed [min]", f"in each {bins},", "repeats counted")
    return plot


def _hatch(plot: Plot, reading: Reading) -> None:
    for band in reading.plan["keep_outs"]:
        ends = (plot.area.x(from_si(band[key], "rpm")) for key in ("from_rad_s", "to_rad_s"))
        plot.hatch(*ends)


def _finish(plot: Plot, *notes: str) -> None:
    """Frame, time axis, and notes at the right."""
    plot.border()
    plot.y_axis("")
    for k, note in enumerate(notes):
        place = (plot.area.right + 12.0, plot.area.top - _NOTE_FROM - _NOTE_STEP * k)
        plot.text(place, note)
