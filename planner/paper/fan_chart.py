"""The fan chart: natural frequencies over rotor speed, rays of the harmonics, and the run."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from planner.paper.fan_foot import draw_foot, foot_height
from planner.paper.fan_panels import Curve, panels
from planner.paper.fan_rays import draw_rays, name_rays
from planner.paper.ink import PLAIN, clipped
from planner.paper.plot import DASHES, LABEL, Area, Plot, spread, text_width, ticks
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from reportlab.graphics.shapes import Drawing

    from planner.paper.fan_panels import Panel
    from planner.paper.plot import Point
    from planner.paper.reading import Reading

_LEFT, _RIGHT = 44.0, 190.0
_BETWEEN, _TITLE, _BAND_NAMES = 6.0, 15.0, 12.0
"""Room under a panel, for its title, and for the names of keep-out bands over the first [pt]."""
_MARKS = 7
_MOST_UPRIGHTS = 24
_LABEL_GAP = 11.0
_LEAST_LABEL_GAP = 9.5
_FEWEST_LABELS = 6
_THICK, _THIN = 1.5, 0.8
_FREQUENCY = "frequency [Hz]"
_OVER_SHIFTED, _SQUEEZED, _NEARER = 1.08, 2.0, 2.0
_OVER_STAND, _OVER_ONCE = 1.3, 1.15
"""Above its highest mode, and above once per revolution: where a stand panel is cut that shares
its page, so that its lowest modes have height."""
_ASTRAY = 20.0
"""How far a name may stand beside its band [pt]."""


@dataclass(frozen=True)
class Label:
    """What stands at the right end: of a curve, or of one that is not drawn."""

    wanted: float
    text: str
    curve: Curve | None = None
    end: Point = (0.0, 0.0)


def fan_drawing(reading: Reading, families: Iterable[str], width: float, height: float) -> Drawing:
    """Draw panels over one axis of rotor speed; below them the run goes downward in time.

    Args:
        reading: the record.
        families: panels from top to bottom: ``blade``, ``stand``, ``shaft``.
        width: of the drawing [pt].
        height: of the drawing [pt].
    """
    from reportlab.graphics.shapes import Drawing  # noqa: PLC0415  # only charts pay

    drawing = Drawing(width, height, initialFontName=PLAIN)
    found = panels(reading, families)
    across = (_LEFT, width - _LEFT - _RIGHT)
    top_rpm = _top_speed(reading)
    if len(found) == 1:
        found += _close_up(found[0], top_rpm)
    else:
        found = [_cut(panel, top_rpm) for panel in found]
    foot = foot_height(reading)
    plots = _plots(drawing, found, across, (foot, height), top_rpm)
    _name_bands(plots[0], reading)
    for panel, plot in zip(found, plots, strict=True):
        _draw_uprights(plot, reading)
        _draw_panel(plot, panel, reading)
    room = Area(across[0], 0.0, across[1], foot, (0.0, top_rpm), (0.0, 1.0))
    draw_foot(drawing, room, reading)
    return drawing


def _plots(
    drawing: Drawing,
    found: Sequence[Panel],
    across: tuple[float, float],
    ends: tuple[float, float],
    top_rpm: float,
) -> list[Plot]:
    """Places of the panels; one with many curves gets more of the height."""
    weights = [
        max(len(panel.curves), _FEWEST_LABELS) * (_NEARER if panel.top_hz else 1.0)
        for panel in found
    ]
    room = ends[1] - ends[0] - _BAND_NAMES - len(found) * (_BETWEEN + _TITLE)
    top = ends[1] - _BAND_NAMES
    plots = []
    for panel, weight in zip(found, weights, strict=True):
        tall = room * weight / sum(weights)
        top -= _TITLE
        y_range = (0.0, _top_frequency(panel, top_rpm))
        area = Area(across[0], top - tall, across[1], tall, (0.0, top_rpm), y_range)
        plots.append(Plot(drawing, area))
        top -= tall + _BETWEEN
    return plots


def _top_speed(reading: Reading) -> float:
    series = reading.record["series"]
    speeds = [s for s in series["fan"]["speed_rad_s"] if s is not None]
    speeds += [s for s in series["run"]["speed_rad_s"] if s is not None]
    return from_si(max([*speeds, 1.0]), "rpm")


def _close_up(panel: Panel, top_rpm: float) -> list[Panel]:
    """The lowest frequencies once more, where a high mode leaves shifted modes no height."""
    seen = [f for c in panel.curves if c.is_shifted for f in c.frequency_hz if f is not None]
    top = _OVER_SHIFTED * max([top_rpm / 60.0, *seen])
    if not seen or _top_frequency(panel, top_rpm) < _SQUEEZED * top:
        return []
    return [replace(panel, title="The same, lowest frequencies", top_hz=top)]


def _cut(panel: Panel, top_rpm: float) -> Panel:
    """A stand panel without what lies above its own modes and once per revolution.

    A mode above the highest harmonic at the highest speed, which nothing excites, does not count.
    """
    highest = max([*panel.harmonics, 1]) * top_rpm / 60.0
    own = [
        max(known)
        for curve in panel.curves
        if not curve.is_shifted and (known := [f for f in curve.frequency_hz if f is not None])
    ]
    excited = [f for f in own if f < highest]
    if panel.family != "stand" or not excited:
        return panel
    top = max(_OVER_STAND * max(excited), _OVER_ONCE * top_rpm / 60.0)
    return replace(panel, top_hz=min(top, _top_frequency(panel, top_rpm)))


def _top_frequency(panel: Panel, top_rpm: float) -> float:
    if panel.top_hz:
        return panel.top_hz
    known = [f for c in panel.curves for f in c.frequency_hz if f is not None and f > 0.0]
    highest_ray = max([*panel.harmonics, 1]) * top_rpm / 60.0
    wanted = 1.06 * max(known) if known else highest_ray
    if not panel.harmonics:
        return max(wanted, 1.2 * top_rpm / 60.0)
    return max(min(wanted, 1.15 * highest_ray), 1.2 * top_rpm / 60.0)


def _name_bands(plot: Plot, reading: Reading) -> None:
    """Names of keep-out bands over the first panel; ids alone where names would go astray."""
    area, bands = plot.area, reading.plan["keep_outs"]
    middles = [
        0.5 * sum(area.x(from_si(band[key], "rpm")) for key in ("from_rad_s", "to_rad_s"))
        for band in bands
    ]
    ids = [str(band["id"]) for band in bands]
    names = [f"keep-out {one}" for one in ids]
    places = _beside(names, middles, area)
    if any(abs(x - m) > _ASTRAY for x, m in zip(places, middles, strict=True)):
        names, places = ids, _beside(ids, middles, area)
    for name, place in zip(names, places, strict=True):
        plot.text((place, area.top + _TITLE + 2.0), name, "middle")


def _beside(names: Sequence[str], middles: Sequence[float], area: Area) -> list[float]:
    """Middles of names beside one another, as near to what they name as may be."""
    apart = max(map(text_width, names), default=0.0) + 6.0
    return spread(middles, apart, area.left + 0.5 * apart, area.right - 0.5 * apart)


def _draw_panel(plot: Plot, panel: Panel, reading: Reading) -> None:
    area = plot.area
    for band in reading.plan["keep_outs"]:
        plot.hatch(*(area.x(from_si(band[key], "rpm")) for key in ("from_rad_s", "to_rad_s")))
    draw_rays(plot, panel.harmonics)
    _draw_modes(plot, panel.curves)
    lines = [run for curve in panel.curves for run in stretches(curve, area)]
    name_rays(plot, panel.harmonics, lines)
    plot.border()
    for value, _ in ticks(*area.x_range):
        plot.line(((area.x(value), area.bottom), (area.x(value), area.bottom - 3.0)))
    plot.y_axis("")
    place, indent = (area.left - 34.0, area.top + 4.0), text_width(_FREQUENCY) + 12.0
    plot.text(place, _FREQUENCY)
    title = clipped(panel.title, LABEL.bold, area.width + 34.0 - indent)
    plot.text((place[0] + indent, place[1]), title, face=LABEL.bold)
    if panel.missing:
        middle = (area.left + 0.5 * area.width, area.bottom + 0.5 * area.height)
        _boxed(plot, middle, panel.missing)


def _boxed(plot: Plot, place: Point, text: str) -> None:
    """Text on white, its middle at a place."""
    half, y = 0.5 * text_width(text) + 3.0, place[1]
    left, right = place[0] - half, place[0] + half
    plot.fill(((left, y - 4), (right, y - 4), (right, y + 10), (left, y + 10)), 1.0)
    plot.text(place, text, "middle")


def _draw_modes(plot: Plot, curves: Sequence[Curve]) -> None:
    area = plot.area
    labels: list[Label] = []
    for curve in curves:
        runs = stretches(curve, area)
        step = max(1, len(curve.speed_rpm) // _MARKS)
        for run in runs:
            _stroke(plot, run, curve)
            for place in run[min(step, len(run)) // 2 :: step]:
                plot.marker(place, curve.style)
        if runs:
            end = runs[-1][-1]
            labels.append(Label(end[1], curve.label, curve, end))
        elif any(f is not None for f in curve.frequency_hz):
            labels.append(Label(area.top, f"{curve.name}: above the chart"))
        else:
            labels.append(Label(area.bottom, f"{curve.name}: NOT ASSESSED"))
    labels = _most(labels, area)
    wanted = [label.wanted for label in labels]
    places = spread(wanted, _LABEL_GAP, area.bottom + 3.0, area.top - 3.0)
    for label, y in zip(labels, places, strict=True):
        _draw_label(plot, label, y)


def _stroke(plot: Plot, points: Sequence[Point], curve: Curve) -> None:
    width = _THIN if curve.is_shifted else _THICK
    plot.line(points, width, DASHES[curve.style % len(DASHES)])


def _most(labels: list[Label], area: Area) -> list[Label]:
    """As many labels as the height holds; curves that are not drawn give way to the others."""
    room = int((area.height - 6.0) / _LEAST_LABEL_GAP) + 1
    if len(labels) <= room:
        return labels
    drawn = [label for label in labels if label.curve is not None]
    others = [label for label in labels if label.curve is None]
    kept = others[: max(0, room - len(drawn) - 1)]
    left_out = len(others) - len(kept)
    rest = [Label(area.bottom, f"and {left_out} not drawn: see the table")] if left_out else []
    return [*drawn, *kept, *rest]


def _draw_label(plot: Plot, label: Label, y: float) -> None:
    right = plot.area.right
    start = right + 12.0
    if label.curve is None:
        plot.text((start, y - 3.0), clipped(label.text, LABEL, _RIGHT - 15.0))
        return
    plot.line((label.end, (right + 2.0, label.end[1]), (start, y)), 0.4, grey=0.4)
    _stroke(plot, ((start, y), (start + 26.0, y)), label.curve)
    plot.marker((start + 13.0, y), label.curve.style)
    plot.text((start + 31.0, y - 3.0), clipped(label.text, LABEL, _RIGHT - 46.0))


def stretches(curve: Curve, area: Area) -> list[list[Point]]:
    """Stretches of a curve that are known, below the top of the chart and of one branch."""
    found: list[list[Point]] = [[]]
    for k, (rpm, hertz) in enumerate(zip(curve.speed_rpm, curve.frequency_hz, strict=True)):
        if hertz is not None and hertz <= area.y_range[1]:
            found[-1].append((area.x(rpm), area.y(hertz)))
            if k not in curve.breaks:
                continue
        found.append([])
    return [stretch for stretch in found if stretch]


def _draw_uprights(plot: Plot, reading: Reading) -> None:
    """Dotted uprights at held speeds; many stay short, so that the curves stay readable."""
    area = plot.area
    holds = sorted(
        {from_si(s["to_rad_s"], "rpm") for s in reading.record["segments"] if s["kind"] == "hold"}
    )
    top = area.top if len(holds) <= _MOST_UPRIGHTS else area.bottom + 6.0
    for rpm in holds:
        x = area.x(rpm)
        plot.line(((x, top), (x, area.bottom - 4.0)), 0.4, (1.5, 3.0), grey=0.3)
