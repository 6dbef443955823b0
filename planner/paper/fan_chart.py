"""The fan chart: natural frequencies over rotor speed, rays of the harmonics, and the run."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import groupby
from typing import TYPE_CHECKING

from planner.paper.ink import PLAIN, clipped
from planner.paper.plot import DASHES, LABEL, Area, Plot, spread, text_width, time_scale
from planner.units import from_si

if TYPE_CHECKING:
    from reportlab.graphics.shapes import Drawing

    from planner.paper.reading import Reading

_LEFT, _RIGHT, _TRACK = 44.0, 190.0, 96.0
_MARKS = 7
_MOST_UPRIGHTS = 24
_LABEL_GAP = 11.0


@dataclass(frozen=True)
class Curve:
    """One mode in chart units; the frequency is None where there is none."""

    name: str
    speed_rpm: tuple[float, ...]
    frequency_hz: tuple[float | None, ...]
    doubt: str = ""


def curves(reading: Reading) -> list[Curve]:
    """All modes of the record, those that cannot be judged marked so."""
    fan = reading.record["series"]["fan"]
    speed = tuple(from_si(value, "rpm") for value in fan["speed_rad_s"])
    return [
        Curve(
            mode["name"],
            speed,
            tuple(
                None if value is None else from_si(value, "Hz")
                for value in mode["frequency_rad_s"]
            ),
            _doubt(reading, mode["name"]),
        )
        for mode in fan["modes"]
    ]


def _doubt(reading: Reading, name: str) -> str:
    for given in reading.plan["stand"]["modes"]:
        is_it = name in {given["name"], f"{given['family']} {given['name']}"}
        if is_it and given["rotor_fitted"] is not True:
            return "NOT ASSESSED"
    return ""


def fan_drawing(reading: Reading, width: float, height: float) -> Drawing:
    """Draw the chart; below it the run goes downward in time at its rotor speeds."""
    from reportlab.graphics.shapes import Drawing  # noqa: PLC0415  # only charts pay

    drawing = Drawing(width, height, initialFontName=PLAIN)
    modes = curves(reading)
    harmonics = [int(n) for n in reading.record["series"]["fan"]["harmonics"]]
    top_rpm = _top_speed(reading)
    top_hz = _top_frequency(modes, harmonics, top_rpm)
    inner = width - _LEFT - _RIGHT
    area = Area(_LEFT, _TRACK + 40.0, inner, height - _TRACK - 72.0, (0.0, top_rpm), (0.0, top_hz))
    plot = Plot(drawing, area)
    _draw_bands(plot, reading)
    _draw_harmonics(plot, harmonics)
    _draw_modes(plot, modes)
    plot.border()
    plot.y_axis("frequency [Hz]")
    _draw_track(drawing, area, reading)
    return drawing


def _top_speed(reading: Reading) -> float:
    speeds = [s for s in reading.record["series"]["fan"]["speed_rad_s"] if s is not None]
    speeds += [s for s in reading.record["series"]["run"]["speed_rad_s"] if s is not None]
    return from_si(max([*speeds, 1.0]), "rpm")


def _top_frequency(modes: list[Curve], harmonics: list[int], top_rpm: float) -> float:
    known = [f for mode in modes for f in mode.frequency_hz if f is not None and f > 0.0]
    highest_ray = max([*harmonics, 1]) * top_rpm / 60.0
    wanted = 1.06 * max(known) if known else highest_ray
    return max(min(wanted, 1.15 * highest_ray), 1.2 * top_rpm / 60.0)


def _draw_bands(plot: Plot, reading: Reading) -> None:
    area = plot.area
    bands = reading.plan["keep_outs"]
    middles: list[float] = []
    for band in bands:
        start, end = (area.x(from_si(band[key], "rpm")) for key in ("from_rad_s", "to_rad_s"))
        plot.hatch(start, end)
        middles.append(0.5 * (start + end))
    widest = max([text_width(f"keep-out {band['id']}") for band in bands], default=0.0)
    places = spread(middles, widest + 6.0, area.left + 10.0, area.right - 10.0)
    for band, place in zip(bands, places, strict=True):
        plot.text((place, area.top + 5.0), f"keep-out {band['id']}", "middle")


def _draw_harmonics(plot: Plot, harmonics: list[int]) -> None:
    area = plot.area
    top_rpm, top_hz = area.x_range[1], area.y_range[1]
    for n in harmonics:
        end_rpm = min(top_rpm, 60.0 * top_hz / n)
        end = area.x(end_rpm), area.y(n * end_rpm / 60.0)
        plot.line(((area.left, area.bottom), end), 0.5, grey=0.35)
        label = f"{n}P"
        # just inside the frame, so that ends at the top and at the right read alike
        along = 1.0 - 15.0 / max(1.0, math.dist((area.left, area.bottom), end))
        x = area.left + along * (end[0] - area.left) - 0.5 * text_width(label)
        y = min(area.bottom + along * (end[1] - area.bottom) - 3.0, area.top - 11.0)
        left, right = x - 1.0, x + text_width(label) + 1.0
        plot.fill(((left, y - 2), (right, y - 2), (right, y + 8), (left, y + 8)), 1.0)
        plot.text((x, y), label)


def _draw_modes(plot: Plot, modes: list[Curve]) -> None:
    area = plot.area
    ends: list[tuple[float, float]] = []
    shown: list[tuple[int, Curve]] = []
    for i, mode in enumerate(modes):
        runs = _inside(mode, area)
        for run in runs:
            plot.line(run, 1.5, DASHES[i % len(DASHES)])
            step = max(1, len(run) // _MARKS)
            for place in run[step // 2 :: step]:
                plot.marker(place, i)
        if runs:
            ends.append(runs[-1][-1])
            shown.append((i, mode))
    places = spread([y for _, y in ends], _LABEL_GAP, area.bottom + 4.0, area.top - 4.0)
    for (i, mode), end, y in zip(shown, ends, places, strict=True):
        start = area.right + 12.0
        plot.line((end, (area.right + 2.0, end[1]), (start, y)), 0.4, grey=0.4)
        plot.line(((start, y), (start + 26.0, y)), 1.5, DASHES[i % len(DASHES)])
        plot.marker((start + 13.0, y), i)
        doubt = f" ({mode.doubt})" if mode.doubt else ""
        plot.text((start + 31.0, y - 3.0), _fitting(f"{mode.name}{doubt}"))
    _say_missing(plot, [mode for mode in modes if mode not in [m for _, m in shown]])


def _fitting(text: str) -> str:
    return clipped(text, LABEL, _RIGHT - 46.0)


def _say_missing(plot: Plot, hidden: list[Curve]) -> None:
    area = plot.area
    for k, mode in enumerate(hidden[:4]):
        known = any(f is not None for f in mode.frequency_hz)
        why = "above the chart" if known else "NOT ASSESSED"
        place = (area.right + 12.0, area.bottom - 12.0 - 11.0 * k)
        plot.text(place, _fitting(f"{mode.name}: {why}"))


def _inside(mode: Curve, area: Area) -> list[list[tuple[float, float]]]:
    """Stretches of a curve that are known and below the top of the chart."""
    pairs = zip(mode.speed_rpm, mode.frequency_hz, strict=True)
    stretches: list[list[tuple[float, float]]] = []
    for visible, members in groupby(
        pairs, key=lambda p: p[1] is not None and p[1] <= area.y_range[1]
    ):
        if visible:
            stretches.append([(area.x(s), area.y(f)) for s, f in members if f is not None])
    return stretches


def _draw_track(drawing: Drawing, above: Area, reading: Reading) -> None:
    run = reading.record["series"]["run"]
    pairs = [
        (time, from_si(speed, "rpm"))
        for time, speed in zip(run["time_s"], run["speed_rad_s"], strict=True)
        if time is not None and speed is not None
    ]
    last = max([time for time, _ in pairs], default=1.0) or 1.0
    unit, scale = time_scale(last)
    area = Area(above.left, 34.0, above.width, _TRACK - 10.0, above.x_range, (last / scale, 0.0))
    plot = Plot(drawing, area)
    holds = sorted(
        {from_si(s["to_rad_s"], "rpm") for s in reading.record["segments"] if s["kind"] == "hold"}
    )
    # many speeds are marked between the panels only, so that the curves stay readable
    ends = (above.top, area.bottom) if len(holds) <= _MOST_UPRIGHTS else (above.bottom, area.top)
    for rpm in holds:
        x = above.x(rpm)
        plot.line(((x, ends[0]), (x, ends[1])), 0.4, (1.5, 3.0), grey=0.3)
    plot.line([(area.x(rpm), area.y(time / scale)) for time, rpm in pairs], 1.2)
    plot.border()
    plot.x_axis("rotor speed [rpm]")
    plot.y_axis("")
    notes = (f"run: time [{unit}] goes down,", "one pass of each block;",
             "dots up: speeds that are held")  # fmt: skip
    for k, note in enumerate(notes):
        plot.text((area.right + 12.0, area.top - 14.0 - 12.0 * k), note)
