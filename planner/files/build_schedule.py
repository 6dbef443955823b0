"""The schedule: from steps as written to steps with speeds and ramp times, front to back."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from planner.files.faults import listed, shown
from planner.files.schema_plan import BlockTable, CyclicTable, PlanFile, StepTable
from planner.model.plan import Block, Cyclic, Step, Window

if TYPE_CHECKING:
    from planner.files.positions import KeyPath
    from planner.files.schema_values import Measured
    from planner.files.source import Document

_SHORTEST_RAMP_S = 0.1
_RAMP_KEYS = 'ramp_time, ramp_rate and ramp = "drive"'
_SAME = 1e-9
"""Speeds that differ by less than this share are one speed, written in two ways."""


def read_blocks(document: Document, file: PlanFile, full_speed: float) -> tuple[Block, ...]:
    """Walk the schedule from rest, adding faults; sound only when there are none."""
    walk = _Walk(document, full_speed)
    return tuple(walk.block(("block", b), table) for b, table in enumerate(file.block))


def _ramp_keys(step: StepTable) -> list[str]:
    keys = ("ramp_time", "ramp_rate", "ramp")
    return [key for key in keys if getattr(step, key) is not None]


@dataclass(frozen=True)
class _State:
    speed: float
    collective: float
    cyclic: Cyclic

    @property
    def known(self) -> bool:
        numbers = (self.speed, self.collective, self.cyclic.cosine_rad, self.cyclic.sine_rad)
        return not any(math.isnan(number) for number in numbers)


@dataclass
class _Walk:
    """Where the walk through the schedule stands."""

    document: Document
    full_speed: float
    at: _State | None = None
    speeds: list[float] = field(default_factory=lambda: [0.0])

    def block(self, path: KeyPath, table: BlockTable) -> Block:
        entry = self.at
        steps = [self._step((*path, "step", s), step) for s, step in enumerate(table.step)]
        if table.step and table.repeat > 1:
            self._check_way_back((*path, "step", 0), table.step[0], entry)
        return Block(table.name, table.kind, table.repeat, tuple(steps))

    def _target(self, step: StepTable) -> _State:
        cyclic = (
            Cyclic(trimmed=False, cosine_rad=step.cyclic.cosine, sine_rad=step.cyclic.sine)
            if isinstance(step.cyclic, CyclicTable)
            else Cyclic(trimmed=True)
        )
        speed = step.rpm.resolved(self.full_speed)
        same = next((s for s in self.speeds if math.isclose(s, speed, rel_tol=_SAME)), None)
        if same is None:
            self.speeds.append(speed)
        return _State(speed if same is None else same, step.collective, cyclic)

    def _step(self, path: KeyPath, step: StepTable) -> Step:
        to = self._target(step)
        start = self.at or _State(0.0, to.collective, to.cyclic)
        self.at = to
        window = step.window_rpm.resolved(self.full_speed)
        if to.known and 0.0 < to.speed <= window:
            expected = "a window smaller than the rotor speed"
            self.document.fault((*path, "window_rpm"), expected, "correct window_rpm or rpm")
        return Step(
            speed_rad_s=to.speed,
            collective_rad=to.collective,
            cyclic=to.cyclic,
            ramp_time_s=self._ramp_time(path, step, start, to),
            hold_time_s=step.hold_time,
            window=Window(window, step.window_collective),
            note=step.note,
            own_run_up=step.ramp is not None,
        )

    def _ramp_time(self, path: KeyPath, step: StepTable, start: _State, to: _State) -> float:
        changes = start.known and to.known and start != to
        why = ", because rpm or pitch changes"
        given = _ramp_keys(step)
        if len(given) > 1:
            self._key_fault(
                (*path, given[-1]), f"exactly one of {_RAMP_KEYS}", listed(given, "and")
            )
        elif step.ramp_rate is not None:
            if changes and start.speed == to.speed:
                expected = "ramp_time, because only pitch changes"
                self._key_fault((*path, "ramp_rate"), expected, "ramp_rate")
            return self._time_at_rate(path, step.ramp_rate, to.speed - start.speed)
        elif step.ramp is not None:
            self._check_run_up(path, start, to, "this step does not raise rotor speed")
            return math.nan
        elif not given and changes:
            expected = f"exactly one of {_RAMP_KEYS}{why}"
            self._key_fault((*path, "ramp_time"), expected, "none of them")
        else:
            self._check_time(path, step.ramp_time, why if changes else "")
        return step.ramp_time or 0.0

    def _check_time(self, path: KeyPath, time: float | None, why: str) -> None:
        if time == 0.0 and why:
            expected = f"a ramp longer than 0 s{why}"
            self.document.fault((*path, "ramp_time"), expected, "give the ramp its time")
        elif time is not None and 0.0 < time < _SHORTEST_RAMP_S:
            expected = f"a ramp of at least {_SHORTEST_RAMP_S:g} s"
            self.document.fault((*path, "ramp_time"), expected, "give the ramp its time")

    def _check_run_up(self, path: KeyPath, start: _State, to: _State, why: str) -> None:
        """The drive's own run-up can only raise the rotor's speed."""
        if to.speed <= start.speed and start.known and to.known:
            expected = f"ramp_time or ramp_rate, because {why}"
            mend = "keep the drive's own run-up for rising speed"
            self.document.fault((*path, "ramp"), expected, mend)

    def _time_at_rate(self, path: KeyPath, rate: Measured, change: float) -> float:
        time = abs(change) / rate.resolved(self.full_speed)
        if 0.0 < time < _SHORTEST_RAMP_S:
            expected = f"a rate that gives the ramp at least {_SHORTEST_RAMP_S:g} s"
            found = f"{shown(self.document.value((*path, 'ramp_rate')))}, which gives {time:.2g} s"
            self.document.fault((*path, "ramp_rate"), expected, "lower the rate", found)
        return time

    def _check_way_back(self, path: KeyPath, step: StepTable, entry: _State | None) -> None:
        """A repeated block returns to its first step in that step's ramp time."""
        first, end = self._target(step), self.at
        if end is None or not (end.known and first.known) or first == end:
            return
        up = abs(first.speed - (entry.speed if entry else 0.0))
        back = abs(first.speed - end.speed)
        if step.ramp_rate is not None and not math.isclose(up, back, rel_tol=_SAME):
            expected = "ramp_time here, because a repeated block comes to this step in two ways"
            self._key_fault((*path, "ramp_rate"), expected, "ramp_rate")
        if step.ramp is not None:
            why = "a repeated block comes back to this step from no lower speed"
            self._check_run_up(path, end, first, why)
        elif step.ramp_rate is None and not step.ramp_time:
            expected = "a ramp longer than 0 s, because the repeated block comes back to this step"
            found = "none" if step.ramp_time is None else None
            self.document.fault((*path, "ramp_time"), expected, "give the ramp its time", found)

    def _key_fault(self, path: KeyPath, expected: str, found: str) -> None:
        mends = {"ramp_rate": "give a ramp_time instead that suits all of them"}
        mend = mends.get(found, "add one" if found == "none of them" else "keep one")
        self.document.fault_at_key(path, expected, mend, found)
