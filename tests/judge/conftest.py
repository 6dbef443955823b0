"""A small invented run whose predictions are all well inside the example book, to be spoilt."""

from __future__ import annotations

import math
import tomllib
from dataclasses import dataclass, field, replace
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

from planner.files.build_rules import Library, check_book, merged
from planner.files.schema_rules import RulesFile
from planner.files.source import Shelf
from planner.files.validate import validated
from planner.judge.case import Case
from planner.judge.findings import judge_rules
from planner.judge.hand_checks import hand_check_findings
from planner.judge.judge import judge
from planner.judge.weather import wind_cap_findings
from planner.model.plan import (
    ABORT_CAUSES,
    AbortActions,
    Block,
    Cyclic,
    KeepOut,
    OutsideDocument,
    Plan,
    Segment,
    Shutdown,
    Site,
    Step,
    Window,
    segments,
)
from planner.model.results import Judgement, Labels, Prediction, Quantity, Status
from planner.model.rotor import (
    ArticulatedHub,
    Blade,
    HingelessHub,
    Hub,
    LagStop,
    Rotor,
    Stations,
    Stop,
)
from planner.model.stand import Drive, GivenMode, Ratings, Stand
from planner.predict.register import REFERENCES, REGISTER

if TYPE_CHECKING:
    from planner.model.rules import Rule, RuleBook

BOOK = Path(__file__).parents[2] / "rules" / "example_book.toml"
DEG = math.pi / 180.0

SAFE = {
    "droop_stop_clearance": 6.0 * DEG,
    "up_stop_clearance": 8.0 * DEG,
    "droop_stop_moment": 100.0,
    "droop_stop_rest_moment": 200.0,
    "root_flap_moment": 500.0,
    "harmonic_spacing": 0.3,
    "mode_damping": 0.02,
    "mode_frequency": 70.0,
    "fixed_frame_spacing": 0.3,
    "crossing_cover": 0.4,
    "band_rate": 0.04,
    "band_distance": 3.0,
    "thrust": 10_000.0,
    "root_centrifugal_force": 50_000.0,
    "hub_moment": 1_000.0,
    "speed_step": 0.2,
    "collective_step": 1.0 * DEG,
    "collective_rate": 0.5 * DEG,
    "cyclic_needed": 0.4,
    "card_speed": 36.0,
    "trip_above_card": 2.2,
    "trip_below_proven": 1.5,
    "torque": 2_000.0,
    "power": 80_000.0,
    "brake_speed": 10.0,
    "lift_off_speed_in_wind": 12.0,
    "stop_free_speed": 13.2,
    "wind_at_hub": 9.5,
    "droop_stop_peak_moment": 250.0,
    "up_stop_peak_moment": 0.0,
    "contacts_after_lift_off": 0.0,
    "contact_closing_speed": 10.0 * DEG,
    "contact_highest_speed": 5.0,
    "droop_stop_overrun": 0.5 * DEG,
    "root_flap_peak_moment": 600.0,
    "lag_peak": 4.0 * DEG,
    "lag_stop_peak_moment": 0.0,
    "blade_clearance": 0.8,
    "hub_moment_peak": 1_200.0,
    "thrust_peak": 12_000.0,
    "drive_torque_reserve": 1_500.0,
    "time_to_rest": 90.0,
    "band_cycles": 12.0,
    "passage_amplitude": 0.002,
}
"""SI numbers that keep every rule of the example book; other quantities read 1."""

BLADE_MODES = ("flap 1", "flap 2", "flap 3", "lag 1", "lag 2", "torsion 1")
HARMONICS = {"stand sway": ("1", "4", "8"), "shaft twist": ("4", "8")}
"""Harmonics of the given modes with four blades; blade modes have the first two only."""
AGAINST = ("stand sway, Ω - ω", "stand sway, Ω + ω")
"""What low flap and lag modes are held against as the stand sees them."""


@cache
def read_book() -> RuleBook:
    """The shipped example book, as a plan at 40 rad/s full speed reads it."""
    shelf = Shelf(BOOK.parent)
    document = shelf.toml(BOOK.name, None)
    assert document is not None
    file = validated(document, RulesFile, None)
    assert file is not None
    library = Library({q.id: (q.unit, q.axes) for q in REGISTER.values()}, REFERENCES, 40.0)
    rules = check_book(document, file, library)
    assert shelf.faults == []
    return merged([file], [rules])


def articulated() -> ArticulatedHub:
    return ArticulatedHub(0.2, 0.2, 0.0, 0.0, 0.0, 0.0, 300.0, 0.0, 0.0)


def hingeless() -> HingelessHub:
    return HingelessHub(0.2, 0.0, 0.0, None, None, 0.0, 1_000.0)


def rotor(hub: Hub) -> Rotor:
    line = np.linspace(0.2, 5.0, 3)
    ones = np.ones(3)
    stations = Stations(line, ones, ones, ones, ones, ones, ones, ones, ones, ones)
    blade = Blade(5.0, 1.0, 3.75, stations, (), (), ("a", "b", "c", "d"))
    stops = hub.kind != "hingeless"
    return Rotor(
        name="invented",
        n_blades=4,
        clockwise=False,
        blade=blade,
        hub=hub,
        droop_stop=Stop(-3.0 * DEG, 1e4, 10.0, 600.0) if stops else None,
        up_stop=Stop(20.0 * DEG, 1e4, 10.0, 900.0) if stops else None,
        control_stiffness_N_m_rad=1e4,
        cyclic_authority_rad=8.0 * DEG,
        design_maximum_rad_s=42.0,
        proven_rad_s=40.0,
        root_force_rating_N=100_000.0,
        lag_stop=LagStop(-4.0 * DEG, 10.0 * DEG, 1e4, 10.0, 500.0)
        if hub.kind == articulated().kind
        else None,
    )


def stand() -> Stand:
    def mode(name: str, family: Any, frequency: float) -> GivenMode:
        return GivenMode(
            name, family, frequency, 0.02, "lateral", rotor_fitted=True, source="tap test"
        )

    return Stand(
        name="invented stand",
        hub_height_m=8.0,
        mounting="upright",
        full_speed_rad_s=40.0,
        speed_gauge_error_rad_s=0.1,
        modes=(mode("sway", "stand", 70.0), mode("twist", "shaft", 300.0)),
        drive=Drive("motor", 5.0, 4_000.0, 150_000.0, 45.0, 90.0, 38.5),
        brake_below_rad_s=16.0,
        ratings=Ratings(20_000.0, 3_000.0, hub_amplitude_m=0.005),
        obstructions=(),
        positions=(),
    )


def document(hazard_class: str, *where: str) -> OutsideDocument:
    return OutsideDocument(
        hazard_class,
        where,
        "study",
        f"DOC {hazard_class}",
        "A",
        "safety office",
        "2026-01-01",
        15.0,
        38.0,
    )


PAPERS = (
    document("lag and stand stability", "run"),
    document("pitch and flap stability", "run"),
    document("people", "run"),
)


def plan(
    hub: Hub | None = None, speeds: tuple[float, ...] = (10.0, 20.0, 30.0, 36.0), **changes: Any
) -> Plan:
    """Holds at some speeds [rad/s], a keep-out band between 13 and 15 rad/s."""
    steps = tuple(
        Step(speed, 0.1, Cyclic(trimmed=True), 10.0, 60.0, Window(0.2, 0.01), "")
        for speed in speeds
    )
    whole = Plan(
        title="t",
        card="c",
        revision="1",
        issued="2026-01-01",
        objective="o",
        planned_start="",
        planned_finish="",
        roles=(),
        site=Site(0.0, None, 288.15, 10.0, 0.5, 6.0, 9.0, 600.0, 10.0, 0.5, 0.14),
        blocks=(Block("run", "first of day", 1, steps),),
        shutdown=Shutdown(40.0, 0.0, powered=True, brake=True, brake_from_rad_s=10.0),
        keep_outs=(KeepOut("lag", 13.0, 15.0, "lag mode"),),
        documents=PAPERS,
        extra_classes=(),
        abort=AbortActions(0.0, "centred", ()),
        rotor=rotor(hub or articulated()),
        stand=stand(),
        rule_book=read_book(),
    )
    return replace(whole, **changes)


def table(
    quantity: str, rows: list[tuple[Labels, float, Status, float]], reason: str = ""
) -> Prediction:
    """A prediction out of (labels, value, status, speed) rows, without spread or hand check."""
    value = np.array([row[1] for row in rows], dtype=np.float64)
    return Prediction(
        quantity=quantity,
        labels=tuple(row[0] for row in rows),
        value=value,
        low=value.copy(),
        high=value.copy(),
        status=tuple(row[2] for row in rows),
        reasons=tuple("" if row[2] is Status.OK else reason or "made so" for row in rows),
        speed_rad_s=np.array([row[3] for row in rows], dtype=np.float64),
        hand=np.full(len(rows), math.nan),
        study="test",
    )


def _labels(quantity: Quantity, run: Plan, walk: tuple[Segment, ...]) -> list[Labels]:
    if "segment" not in quantity.axes:
        return _labels_of_run(quantity, run)
    found = []
    for segment, state in _places(quantity, walk):
        inside = segment.from_rad_s != segment.to_rad_s and (
            min(segment.from_rad_s, segment.to_rad_s) < 15.0
            and max(segment.from_rad_s, segment.to_rad_s) > 13.0
        )
        if state:
            inside = max(segment.from_rad_s, segment.to_rad_s) > 13.0
        held = segment.kind == "hold" and not state
        bands = [k.id for k in run.keep_outs] if inside or held else []
        for mode in _modes(quantity, segment):
            for harmonic in _harmonics(quantity, mode):
                found += [
                    Labels(segment.id, mode, harmonic, band, state)
                    for band in (bands if "band" in quantity.axes else [""])
                ]
    return found


def _places(quantity: Quantity, walk: tuple[Segment, ...]) -> list[tuple[Segment, str]]:
    """Segments that have numbers of a quantity, and what aborts begin in them."""
    if "state" not in quantity.axes:
        return [(segment, "") for segment in walk]
    kinds = {
        "blade_clearance": ("hold", "ramp", "stop"),
        "band_cycles": (),
    }
    of_time = ("stop",) if quantity.id.startswith("time_to") else ("ramp", "stop")
    here = [(s, "") for s in walk if s.kind in kinds.get(quantity.id, of_time)]
    return here + [(s, cause) for s in walk if s.kind != "stop" for cause in ABORT_CAUSES]


def _labels_of_run(quantity: Quantity, run: Plan) -> list[Labels]:
    if "band" in quantity.axes:
        return [Labels(band=band.id) for band in run.keep_outs]
    if "mode" in quantity.axes:
        modes = ("stand sway",) if quantity.id in OF_STAND else HARMONICS
        return [Labels(mode=m, harmonic=n) for m in modes for n in _harmonics(quantity, m)]
    return [Labels()]


def _harmonics(quantity: Quantity, mode: str) -> tuple[str, ...]:
    if "harmonic" not in quantity.axes:
        return ("",)
    if quantity.id == "fixed_frame_spacing":
        return AGAINST
    return ("1",) if quantity.id in OF_STAND else HARMONICS.get(mode, ("1", "2"))


OF_STAND = ("passage_amplitude", "passage_peak_speed", "passage_rate_needed")
OF_BLADES = {"mode_share": BLADE_MODES, "fixed_frame_spacing": BLADE_MODES[:2] + BLADE_MODES[3:5]}


def _modes(quantity: Quantity, segment: Segment) -> tuple[str, ...]:
    """Modes that have numbers: passages in ramps for given modes only, the rest in holds."""
    if "mode" not in quantity.axes:
        return ("",)
    if quantity.id in OF_STAND:
        return ("stand sway",)
    if quantity.id == "crossing_cover":
        return () if segment.kind == "hold" else tuple(HARMONICS)
    every = OF_BLADES.get(quantity.id, (*BLADE_MODES, *HARMONICS))
    return every if segment.kind == "hold" else ()


OF_STOPS = ("droop_stop", "up_stop", "lift_off", "contact", "lag_peak", "lag_stop")


def predictions(run: Plan) -> dict[str, Prediction]:
    """Every quantity of the register, safe; parts that the hub lacks do not apply.

    The stop is powered, so that its passage is judged by rate alone.
    """
    walk = segments(run)
    absent = (
        {q for q in REGISTER if q.startswith(OF_STOPS)}
        if run.rotor.hub.kind == "hingeless"
        else {"root_flap_moment", "root_flap_peak_moment"}
    )
    tops = {s.id: max(s.from_rad_s, s.to_rad_s) for s in walk}
    found = {}
    for quantity in REGISTER.values():
        value = SAFE.get(quantity.id, 1.0)
        if quantity.id in absent:
            rows = [(Labels(), math.nan, Status.NOT_APPLICABLE, math.nan)]
            found[quantity.id] = table(quantity.id, rows, "the hub has no such part")
            continue
        rows = [
            (labels, value, Status.OK, tops.get(labels.segment, math.nan))
            for labels in _labels(quantity, run, walk)
        ]
        if quantity.id == "band_cycles":
            rows += [
                (Labels("stop", band=band.id), math.nan, Status.NOT_APPLICABLE, math.nan)
                for band in run.keep_outs
            ]
        found[quantity.id] = table(quantity.id, rows)
    return found


@dataclass
class Bench:
    """A plan and its predictions, to be spoilt one thing at a time and judged."""

    plan: Plan
    predictions: dict[str, Prediction] = field(default_factory=dict)

    def __post_init__(self) -> None:
        self.predictions = self.predictions or predictions(self.plan)

    @property
    def segments(self) -> tuple[Segment, ...]:
        return segments(self.plan)

    @property
    def rules(self) -> tuple[Rule, ...]:
        return self.plan.rule_book.rules

    @property
    def case(self) -> Case:
        walk = {s.id: s for s in self.segments}
        return Case(self.plan, walk, REGISTER, self.predictions)

    def judge(self) -> Judgement:
        return judge(self.plan, self.segments, REGISTER, self.predictions)

    def finding(self, rule: str) -> Any:
        """Judge one rule of the book, or what is no rule of it, without the others."""
        book = self.plan.rule_book
        alone = replace(book, rules=tuple(r for r in book.rules if r.id == rule))
        case = replace(self.case, plan=replace(self.plan, rule_book=alone))
        others = (*wind_cap_findings(self.plan), *hand_check_findings(REGISTER, self.predictions))
        found = (*(one.finding for one in judge_rules(case)), *others)
        return next(f for f in found if f.rule == rule)

    def covered(self, hazard_class: str, where: str) -> Any:
        return next(
            c for c in self.judge().coverage if (c.hazard_class, c.where) == (hazard_class, where)
        )

    def change(self, **changes: Any) -> None:
        self.plan = replace(self.plan, **changes)

    def change_book(self, **changes: Any) -> None:
        self.change(rule_book=replace(self.plan.rule_book, **changes))

    def add_rule(self, **changes: Any) -> None:
        """Add a rule made from the first of the book."""
        rules = self.plan.rule_book.rules
        self.change_book(
            rules=(*rules, replace(rules[0], **{"id": "added", "unit": ""} | changes))
        )

    def change_rule(self, rule: str, **changes: Any) -> None:
        rules = tuple(
            replace(r, **changes) if r.id == rule else r for r in self.plan.rule_book.rules
        )
        self.change_book(rules=rules)

    def rule(self, rule: str) -> Rule:
        return next(r for r in self.plan.rule_book.rules if r.id == rule)

    def rows(self, quantity: str, **labels: str) -> list[int]:
        """Indices of the rows whose labels agree."""
        return [
            i
            for i, row in enumerate(self.predictions[quantity].labels)
            if all(getattr(row, axis) == label for axis, label in labels.items())
        ]

    def put(self, quantity: str, rows: list[int], **numbers: float) -> None:
        """Overwrite value, low, high or hand of some rows."""
        for column, number in numbers.items():
            getattr(self.predictions[quantity], column)[rows] = number

    def flag(self, quantity: str, rows: list[int], status: Status, reason: str = "why") -> None:
        """Overwrite the status of some rows."""
        old = self.predictions[quantity]
        picked = set(rows)
        self.predictions[quantity] = replace(
            old,
            status=tuple(status if i in picked else s for i, s in enumerate(old.status)),
            reasons=tuple(reason if i in picked else r for i, r in enumerate(old.reasons)),
        )

    def drop(self, quantity: str, rows: list[int]) -> None:
        """Leave some rows out."""
        old = self.predictions[quantity]
        kept = [i for i in range(len(old.labels)) if i not in set(rows)]
        self.predictions[quantity] = replace(
            old,
            labels=tuple(old.labels[i] for i in kept),
            status=tuple(old.status[i] for i in kept),
            reasons=tuple(old.reasons[i] for i in kept),
            **{
                column: getattr(old, column)[kept]
                for column in ("value", "low", "high", "speed_rad_s", "hand")
            },
        )


ALL_HOLDS, TWO_HOLDS = (10.0, 20.0, 30.0, 36.0), (10.0, 36.0)


@cache
def _untouched(kind: str, speeds: tuple[float, ...]) -> Bench:
    return Bench(plan(hingeless() if kind == "hingeless" else None, speeds))


def fresh(kind: str, speeds: tuple[float, ...] = ALL_HOLDS) -> Bench:
    """A bench of its own, with a copy of what is predicted once."""
    base = _untouched(kind, speeds)
    columns = ("value", "low", "high", "speed_rad_s", "hand")
    copied = {
        quantity: replace(found, **{name: getattr(found, name).copy() for name in columns})
        for quantity, found in base.predictions.items()
    }
    return Bench(base.plan, copied)


@pytest.fixture
def bench() -> Bench:
    """An articulated rotor's run that comes out GO."""
    return fresh("articulated")


@pytest.fixture
def hingeless_bench() -> Bench:
    """A hingeless rotor's run that comes out GO."""
    return fresh("hingeless")


@pytest.fixture
def paper() -> Any:
    """Make an outside document: ``paper("stops", "hold")``."""
    return document


def pytest_generate_tests(metafunc: pytest.Metafunc) -> None:
    """One test for each predicted rule, and for each quantity that the book uses."""
    rules = tomllib.loads(BOOK.read_text(encoding="utf-8"))["rule"]
    used = [r for r in rules if r["kind"] == "predicted"]
    if "book_rule" in metafunc.fixturenames:
        metafunc.parametrize("book_rule", used, ids=[r["id"] for r in used])
    if "used_quantity" in metafunc.fixturenames:
        metafunc.parametrize("used_quantity", sorted({r["quantity"] for r in used}))
