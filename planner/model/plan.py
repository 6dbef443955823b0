"""The intended run: site, schedule and papers, and the segments that the schedule walks."""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import pairwise
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from planner.model.rotor import Rotor
    from planner.model.rules import RuleBook
    from planner.model.stand import Stand

SegmentKind = Literal["hold", "ramp", "stop"]
"""``stop`` is the run-down at the end: a ramp that may be without power."""

BlockKind = Literal["first of day", "track and balance", "pitch sweep", "endurance", "hot restart"]


ABORT_CAUSES: tuple[str, ...] = (
    "controls commanded",
    "controls frozen",
    "brake lost",
    "stop not re-seated",
)
"""What goes wrong when a run is broken off; each is marched from everywhere."""


@dataclass(frozen=True)
class GustLengths:
    """Times of the discrete gust from its start to its end; the worst between is sought."""

    shortest_s: float
    longest_s: float


@dataclass(frozen=True)
class Turbulence:
    """Series of gusty wind that are marched beside the discrete gust."""

    intensity: float
    """Standard deviation of the along-wind speed over its mean."""
    series: int
    seed: int
    """First number of the random series; the same seed gives the same wind."""


@dataclass(frozen=True)
class Sector:
    """Bearings from which the wind comes over ground of one kind."""

    name: str
    from_rad: float
    to_rad: float
    """Clockwise from ``from_rad``; may pass through north."""
    upflow_rad: float
    turbulence_intensity: float | None
    """Stands in for the plan's own intensity; None: the plan's."""
    shelter: float | None
    """Share of the wind that arrives behind a measured shelter; None: all of it."""
    shelter_source: str
    """The measurement of the shelter."""


@dataclass(frozen=True)
class Site:
    """Air and wind for which the run is planned."""

    elevation_m: float | None
    pressure_Pa: float | None
    temperature_K: float
    temperature_spread_K: float
    """Half width of the temperature range that the card covers."""
    relative_humidity: float
    wind_mean_m_s: float
    wind_gust_m_s: float
    averaging_time_s: float
    anemometer_height_m: float
    anemometer_error_m_s: float
    shear_exponent: float
    gust_lengths: GustLengths | None = None
    turbulence: Turbulence | None = None
    sectors: tuple[Sector, ...] = ()
    """Cover the whole circle once; empty: the wind is the same from everywhere."""


@dataclass(frozen=True)
class Cyclic:
    """Cyclic pitch: fixed, or trimmed to zero once-per-revolution flapping."""

    trimmed: bool
    cosine_rad: float = 0.0
    sine_rad: float = 0.0


@dataclass(frozen=True)
class Window:
    """Half widths within which a hold is kept."""

    speed_rad_s: float
    collective_rad: float


@dataclass(frozen=True)
class Step:
    """Go to a speed and pitch, then hold."""

    speed_rad_s: float
    collective_rad: float
    cyclic: Cyclic
    ramp_time_s: float
    hold_time_s: float
    window: Window
    note: str
    own_run_up: bool = False
    """The drive's own run-up: its time is found, not stated; ``ramp_time_s`` is NaN."""


@dataclass(frozen=True)
class Block:
    """Steps run as one part of the card."""

    name: str
    kind: BlockKind
    repeat: int
    steps: tuple[Step, ...]


@dataclass(frozen=True)
class Shutdown:
    """The way from the last hold to zero speed."""

    time_s: float
    collective_rad: float
    powered: bool
    brake: bool
    brake_from_rad_s: float


@dataclass(frozen=True)
class KeepOut:
    """A speed band that is passed without stopping."""

    id: str
    from_rad_s: float
    to_rad_s: float
    why: str


@dataclass(frozen=True)
class OutsideDocument:
    """An approved document that closes a hazard class which this tool did not assess."""

    hazard_class: str
    where: tuple[str, ...]
    title: str
    number: str
    revision: str
    approver: str
    date: str
    wind_limit_m_s: float
    speed_limit_rad_s: float


@dataclass(frozen=True)
class Role:
    """A person's part in the run; the name may be left for ink."""

    role: str
    name: str
    duties: str
    may_abort: bool


@dataclass(frozen=True)
class AbortActions:
    """What the crew does on an abort, as the plan orders it."""

    collective_rad: float
    cyclic: str
    actions: tuple[str, ...]
    collective_rate_rad_s: float | None = None
    reaction_time_s: float | None = None
    """From the cause to the crew's first action."""
    brake: bool = False
    brake_from_rad_s: float = 0.0
    reentries: int | None = None
    """How many aborts, each with a way back to where it began, the card allows for."""


@dataclass(frozen=True)
class Plan:
    """Everything a card is made from."""

    title: str
    card: str
    revision: str
    issued: str
    objective: str
    planned_start: str
    planned_finish: str
    roles: tuple[Role, ...]
    site: Site
    blocks: tuple[Block, ...]
    shutdown: Shutdown
    keep_outs: tuple[KeepOut, ...]
    documents: tuple[OutsideDocument, ...]
    extra_classes: tuple[str, ...]
    abort: AbortActions
    rotor: Rotor
    stand: Stand
    rule_book: RuleBook


@dataclass(frozen=True)
class Segment:
    """One stretch of the run: a hold, a ramp, or the final stop."""

    id: str
    kind: SegmentKind
    block: int
    """Index of the block it belongs to; the final stop has the last block's."""
    step: int
    from_rad_s: float
    to_rad_s: float
    from_collective_rad: float
    to_collective_rad: float
    from_cyclic: Cyclic
    cyclic: Cyclic
    duration_s: float
    window: Window
    times: int
    """How often the run passes this segment, repeats counted."""
    own_run_up: bool = False
    """The drive's own run-up; ``duration_s`` is NaN until it is predicted."""
    course: tuple[tuple[float, float], ...] = ()
    """Time [s] and speed [rad/s] of a change of speed that is not even, once it is predicted."""
    slow_course: tuple[tuple[float, float], ...] = ()
    """The same at the worse end of the torque allowance."""

    @property
    def pieces(self) -> tuple[tuple[float, float, float], ...]:
        """Stretches of even rate: duration, first and last speed."""
        if not self.course:
            return ((self.duration_s, self.from_rad_s, self.to_rad_s),)
        return tuple((b[0] - a[0], a[1], b[1]) for a, b in pairwise(self.course))

    @property
    def slowest(self) -> Segment:
        """The segment as slow as the torque allowance lets it be."""
        return replace(self, course=self.slow_course) if self.slow_course else self

    @property
    def top_rad_s(self) -> float:
        """Highest target speed that this segment reaches."""
        return max(self.from_rad_s, self.to_rad_s)

    def ends_rad_s(self, gauge_error_rad_s: float) -> tuple[float, float]:
        """Lowest and highest speed, hold window and gauge error included."""
        lowest = max(0.0, self.lowest_rad_s - gauge_error_rad_s)
        return lowest, self.highest_rad_s + gauge_error_rad_s

    def enters(self, band: KeepOut) -> bool:
        """Tell whether its target speeds enter a keep-out band."""
        low, high = sorted((self.from_rad_s, self.to_rad_s))
        return low < band.to_rad_s and high > band.from_rad_s

    @property
    def lowest_rad_s(self) -> float:
        """Lower end of the speeds that this segment covers, hold window included."""
        return max(0.0, min(self.from_rad_s, self.to_rad_s) - self.window.speed_rad_s)

    @property
    def highest_rad_s(self) -> float:
        """Upper end of the speeds that this segment covers, hold window included."""
        return max(self.from_rad_s, self.to_rad_s) + self.window.speed_rad_s


def segments(plan: Plan) -> tuple[Segment, ...]:
    """Walk the schedule once, from rest to rest, as ramps, holds and the final stop.

    Segment ids are ``block.step`` counted from one, with ``r`` for the ramp into a step, ``h``
    for its hold, ``b`` for the way back to a repeated block's first step, and ``stop``.
    """
    walk: list[Segment] = []
    at = replace(_state(plan.blocks[0].steps[0]), speed_rad_s=0.0)
    for b, block in enumerate(plan.blocks):
        for s, step in enumerate(block.steps):
            times = 1 if s == 0 else block.repeat
            to = _state(step)
            if at != to:
                walk.append(_ramp(f"{b + 1}.{s + 1}r", (b, s), at, step, times))
            walk.append(_hold(f"{b + 1}.{s + 1}h", (b, s), step, block.repeat))
            at = to
        first = block.steps[0]
        if block.repeat > 1 and at != _state(first):
            walk.append(_ramp(f"{b + 1}.1b", (b, 0), at, first, block.repeat - 1))
    end = _State(0.0, plan.shutdown.collective_rad, at.cyclic)
    last = _way("stop", (len(plan.blocks) - 1, 0), at, end)
    return (*walk, replace(last, kind="stop", duration_s=plan.shutdown.time_s))


@dataclass(frozen=True)
class _State:
    speed_rad_s: float
    collective_rad: float
    cyclic: Cyclic


def _state(step: Step) -> _State:
    return _State(step.speed_rad_s, step.collective_rad, step.cyclic)


def _ramp(label: str, place: tuple[int, int], start: _State, step: Step, times: int) -> Segment:
    way = _way(label, place, start, _state(step))
    return replace(way, duration_s=step.ramp_time_s, times=times, own_run_up=step.own_run_up)


def _way(label: str, place: tuple[int, int], start: _State, end: _State) -> Segment:
    return Segment(
        id=label,
        kind="ramp",
        block=place[0],
        step=place[1],
        from_rad_s=start.speed_rad_s,
        to_rad_s=end.speed_rad_s,
        from_collective_rad=start.collective_rad,
        to_collective_rad=end.collective_rad,
        from_cyclic=start.cyclic,
        cyclic=end.cyclic,
        duration_s=0.0,
        window=Window(0.0, 0.0),
        times=1,
    )


def _hold(label: str, place: tuple[int, int], step: Step, times: int) -> Segment:
    return Segment(
        id=label,
        kind="hold",
        block=place[0],
        step=place[1],
        from_rad_s=step.speed_rad_s,
        to_rad_s=step.speed_rad_s,
        from_collective_rad=step.collective_rad,
        to_collective_rad=step.collective_rad,
        from_cyclic=step.cyclic,
        cyclic=step.cyclic,
        duration_s=step.hold_time_s,
        window=step.window,
        times=times,
    )
