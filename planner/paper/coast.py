"""The coast-down table: time against rotor speed for the stop and for an abort from the top."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.abort_causes import COMMANDED, Aborts, top_rad_s
from planner.paper.boxes import Box, gap, heading, paragraph
from planner.paper.front import INK_HEIGHT
from planner.paper.ink import BODY
from planner.paper.steps import band_text, speed_text
from planner.paper.tables import Table, plain_row, table_boxes

if TYPE_CHECKING:
    from collections.abc import Sequence

    from planner.paper.pages import Frame
    from planner.paper.reading import Json, Reading, Shown

_TIMES = (
    (0.5, "time_to_half"),
    (0.3, "time_to_30"),
    (0.1, "time_to_10"),
    (0.0, "time_to_rest"),
)
"""Shares of the speed at which a way to rest begins, and the time to reach them."""
_NEAR_RAD_S = 1e-6
_NOT_YET = "—"
_NO_STOP = "NOT ASSESSED: the record holds no way to rest. Do not run."
_SNAP = 0.03
_Event = tuple[float, str]


@dataclass(frozen=True)
class Way:
    """A way to rest: predicted times at shares of the speed at which it begins."""

    start_rad_s: float
    points: tuple[tuple[float, Shown], ...]
    """Speed and time, fastest first; the beginning itself is left out."""
    planned: tuple[tuple[float, float], ...] = ()
    """Time and speed of a stop under power, which follows straight lines."""

    @property
    def speeds(self) -> list[float]:
        """Speeds at which a time is known, the beginning too."""
        return [self.start_rad_s, *(speed for speed, _ in self.points)]

    @property
    def fault(self) -> str:
        """Why a time is missing; empty where all are there."""
        if self.planned:
            return ""
        return next((shown.why for _, shown in self.points if not shown.is_number), "")

    def time_text(self, speed_rad_s: float) -> str:
        """Time at a speed; between two known ones from the earliest to the latest of them."""
        if speed_rad_s > self.start_rad_s + _NEAR_RAD_S:
            return _NOT_YET
        if self.planned:
            return self._planned_text(speed_rad_s)
        if self.start_rad_s - speed_rad_s < _NEAR_RAD_S:
            return texts.number(0.0, "s")
        early = 0.0
        for speed, shown in self.points:
            if not shown.is_number:
                break
            if speed < speed_rad_s + _NEAR_RAD_S:
                met = abs(speed - speed_rad_s) < _NEAR_RAD_S
                return texts.span(shown.low if met else early, shown.high, "s")
            early = shown.low
        return texts.NOT_ASSESSED

    def _planned_text(self, speed_rad_s: float) -> str:
        """Time at which the planned line passes a speed."""
        for (time, above), (later, below) in pairwise(self.planned):
            if below <= speed_rad_s <= above and below < above:
                passed = time + (later - time) * (above - speed_rad_s) / (above - below)
                return texts.number(passed, "s", "up")
        return "not passed"


def coast_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """Rotor speed against time on the way to rest, with what happens at each speed."""
    title = heading("10  Coast-down", frame.width)
    stop = next((s for s in reading.record["segments"] if s["kind"] == "stop"), None)
    if stop is None:
        return [title, paragraph(_NO_STOP, frame.width, BODY.bold)]
    aborts = Aborts(reading)
    hold = aborts.highest_hold
    ways = [_stop_way(reading, stop), *([_abort_way(aborts, hold)] if hold else [])]
    names = ("Stop", *([f"Abort from {hold['id']}"] if hold else []))
    table = Table(
        frame.shares(19, *(16 for _ in ways), 13, 8, 28),
        ("Rotor speed", *names, "Time found", "Initials", "What this speed means"),
    )
    rows = [
        plain_row(
            _speed_text(reading, speed),
            *(way.time_text(speed) for way in ways),
            "",
            "",
            words,
            least_height=INK_HEIGHT,
        )
        for speed, words in _rows(reading, ways, stop["id"])
    ]
    faults = [
        paragraph(f"{name}: {texts.NOT_ASSESSED}, {way.fault}.", frame.width, BODY.bold)
        for name, way in zip(names, ways, strict=True)
        if way.fault
    ]
    said = paragraph(_said(reading, ways), frame.width, keep_next=True)
    return [title, said, gap(3.0), *table_boxes(table, rows), *faults]


def _said(reading: Reading, ways: Sequence[Way]) -> str:
    reaction = reading.plan["abort"].get("reaction_time_s")
    said = "Times from power off, earliest to latest; between the speeds that were computed, "
    said += "from the earliest of the one before to the latest of the one after."
    if ways[0].planned:
        said = f"Stop: the planned line, under power. Abort: {said[0].lower()}{said[1:]}"
    if reaction is not None:
        said += f" Abort: controls commanded {texts.setting(reaction, 's')} after power off."
    return f"{said} A time outside its range is a HOLD on the next run."


def _stop_way(reading: Reading, stop: Json) -> Way:
    shown = {quantity: reading.shown(quantity, stop["id"]) for _, quantity in _TIMES}
    way = _way(float(stop["from_rad_s"]), shown)
    if not reading.plan["shutdown"]["powered"]:
        return way
    return Way(way.start_rad_s, way.points, _planned(reading, stop["id"]))


def _planned(reading: Reading, stop_id: str) -> tuple[tuple[float, float], ...]:
    """Time since the start of the stop, and speed, along the charted run."""
    run = reading.record["series"]["run"]
    points = [
        (time, speed)
        for time, speed, segment in zip(
            run["time_s"], run["speed_rad_s"], run["segment"], strict=True
        )
        if segment == stop_id and time is not None and speed is not None
    ]
    return tuple((time - points[0][0], speed) for time, speed in points)


def _abort_way(aborts: Aborts, hold: Json) -> Way:
    shown = {quantity: aborts.shown(quantity, hold["id"], COMMANDED) for _, quantity in _TIMES}
    return _way(top_rad_s(hold), shown)


def _way(start_rad_s: float, shown: dict[str, Shown]) -> Way:
    return Way(start_rad_s, tuple((share * start_rad_s, shown[name]) for share, name in _TIMES))


def _rows(reading: Reading, ways: Sequence[Way], stop_id: str) -> list[_Event]:
    """Speeds from the fastest down with what they mean: points of the ways, and events."""
    start = max(way.start_rad_s for way in ways)
    planned = _plan_events(reading)
    events = [*planned, *(_snapped(e, planned) for e in _contact_events(reading, stop_id))]
    events = [event for event in events if 0.0 <= event[0] <= start]
    speeds = list(dict.fromkeys((*(speed for speed, _ in events), 0.0)))
    for speed in (speed for way in ways for speed in way.speeds):
        if all(abs(speed - other) > _NEAR_RAD_S for other in speeds):
            speeds.append(speed)
    return [
        (speed, "; ".join(text for at, text in events if abs(at - speed) < _NEAR_RAD_S))
        for speed in sorted(speeds, reverse=True)
    ]


def _snapped(event: _Event, planned: Sequence[_Event]) -> _Event:
    """A predicted speed, moved up to a planned one that lies close above it."""
    above = [speed for speed, _ in planned if event[0] <= speed <= (1.0 + _SNAP) * event[0]]
    return min(above, default=event[0]), event[1]


def _speed_text(reading: Reading, speed_rad_s: float) -> str:
    """A speed that the plan sets in full, any other rounded up."""
    segments = (s[key] for s in reading.record["segments"] for key in ("from_rad_s", "to_rad_s"))
    planned = (speed for speed, _ in _plan_events(reading))
    if any(abs(speed - speed_rad_s) < _NEAR_RAD_S for speed in (*segments, *planned)):
        return speed_text(reading, speed_rad_s)
    share = speed_rad_s / reading.plan["stand"]["full_speed_rad_s"]
    return f"{texts.number(speed_rad_s, 'rpm', 'up')} ({texts.number(share, '%')})"


def _plan_events(reading: Reading) -> list[_Event]:
    """Brake, stops that move, and keep-out bands, as stand, rotor and plan state them."""
    plan = reading.plan
    events: list[_Event] = []
    brake = plan["stand"]["brake_below_rad_s"]
    if brake is not None:
        events.append((brake, "the stand's brake is allowed only below this"))
    if plan["shutdown"]["brake"]:
        events.append((plan["shutdown"]["brake_from_rad_s"], "brake planned from here down"))
    stop = plan["rotor"]["droop_stop"]
    swing = stop["retraction"] if stop is not None else None
    if swing is not None:
        events += [
            (swing["release_rad_s"], "droop stops release running up"),
            (swing["reseat_rad_s"], "droop stops re-seat; listen for contact"),
        ]
    for band in plan["keep_outs"]:
        events.append((band["to_rad_s"], f"keep-out {band['id']} {band_text(band)} begins"))
        events.append((band["from_rad_s"], f"keep-out {band['id']} ends"))
    return events


def _contact_events(reading: Reading, stop_id: str) -> list[_Event]:
    """Where blades meet their droop stops: by the marches, for fixed stops by lift-off too."""
    stop = reading.plan["rotor"]["droop_stop"]
    if stop is None:
        return []
    events: list[_Event] = []
    if stop["retraction"] is None:
        lift = reading.shown("lift_off_speed_in_wind")
        words = "blades may rest on or touch the droop stops from here down"
        missing = f"speed of droop stop contact: {lift.text} ({lift.why})"
        events.append((lift.high, words) if lift.is_number else (0.0, missing))
    marched = {
        "stop": reading.shown("contact_highest_speed", stop_id),
        "abort": Aborts(reading).worst("contact_highest_speed", COMMANDED).shown,
    }
    for name, shown in marched.items():
        words = f"{name}: blades touch their droop stops from here down"
        missing = f"{name}: speed of stop contact {shown.text} ({shown.why})"
        events.append((shown.high, words) if shown.is_number else (0.0, missing))
    return events
