"""A made-up record for the tests of paper: the real layout, invented numbers."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import numpy as np

from planner.model.canonical import plain
from planner.model.plan import (
    ABORT_CAUSES,
    AbortActions,
    Block,
    Cyclic,
    KeepOut,
    OutsideDocument,
    Plan,
    Role,
    Segment,
    Shutdown,
    Site,
    Step,
    Window,
    segments,
)
from planner.model.rotor import (
    ArticulatedHub,
    Blade,
    PointMass,
    Retraction,
    Rotor,
    SectionSpan,
    Stations,
    Stop,
    SymmetricSection,
)
from planner.model.rules import Allowance, Limit, Rule, RuleBook
from planner.model.stand import Drive, GivenMode, Obstruction, Ratings, Stand
from planner.predict.register import REGISTER
from planner.units import to_si

Json = dict[str, Any]

FULL_SPEED = to_si(395.0, "rpm")
LOW_SPEED = to_si(120.0, "rpm")
CLASSES = ("stops", "clearance", "resonance", "loads")


def sample_record(n_steps: int = 12, verdict: str = "CAUTION") -> Json:
    """Build the record of an invented articulated rotor with a number of steps."""
    plan = sample_plan(n_steps)
    walk = segments(plan)
    rules = plan.rule_book.rules
    findings = _findings(rules, walk, verdict)
    record: Json = {
        "layout": 3,
        "made_by": {"whirlcard": "0.1.0", "python": "3.11", "numpy": "2.4.6", "scipy": "1.17.1"},
        "files": [
            {"name": name, "sha256": digit * 64}
            for name, digit in (("plan.toml", "3"), ("rotor.toml", "a"), ("stand.toml", "7"))
        ],
        "files_digest": "0123456789abcdef" * 4,
        "meaning_digest": "fedcba9876543210" * 4,
        "plan": plan,
        "segments": walk,
        "vocabulary": list(REGISTER.values()),
        "predictions": _predictions(plan, walk),
        "references": {"full_speed": FULL_SPEED},
        "series": {"run": _run(walk), "fan": _fan(walk), "flap": _flap(plan, walk)},
        "findings": findings,
        "coverage": _coverage(),
        "verdict": verdict,
        "segment_verdicts": {s.id: "NOT ASSESSED" if _is_open(s, verdict) else "GO" for s in walk},
    }
    out: Json = plain(record)
    return out


def _is_open(segment: Segment, verdict: str) -> bool:
    return segment.kind != "hold" and verdict in {"NOT ASSESSED", "NO-GO"}


def sample_plan(n_steps: int) -> Plan:
    """Build the plan: run-up, a repeated pitch sweep where steps suffice, and the way down."""
    steps = [_step(i, n_steps) for i in range(n_steps)]
    cut = max(1, n_steps // 3)
    blocks = [Block("Run-up of the day", "first of day", 1, tuple(steps[:cut]))]
    if steps[cut : 2 * cut]:
        blocks.append(Block("Pitch sweep", "pitch sweep", 3, tuple(steps[cut : 2 * cut])))
    if steps[2 * cut :]:
        blocks.append(Block("Endurance at speed", "endurance", 1, tuple(steps[2 * cut :])))
    return Plan(
        title="Demonstration run of invented rotor R-4",
        card="WS-014",
        revision="B",
        issued="2026-11-30 08:00 UTC",
        objective="Step the invented four-blade rotor to 95 % rpm and read flap and thrust at "
        "each hold, so that the predicted coning β₀ can be compared (θ ≤ 8°, ψ = 0 downwind).",
        planned_start="2026-12-02 09:00 UTC",
        planned_finish="2026-12-02 11:30 UTC",
        roles=(
            Role("Test conductor", "", "reads the card, makes the calls", may_abort=True),
            Role("Drive operator", "", "speed and torque", may_abort=True),
            Role("Data watcher", "", "flap, loads, vibration: four channels", may_abort=False),
        ),
        site=Site(120.0, None, 288.15, 5.0, 0.6, 4.0, 6.0, 120.0, 10.0, 0.3, 0.15),
        blocks=tuple(blocks),
        shutdown=Shutdown(95.0, to_si(1.0, "deg"), powered=False, brake=True,
                          brake_from_rad_s=to_si(140.0, "rpm")),
        keep_outs=(
            KeepOut("K1", to_si(141.0, "rpm"), to_si(156.0, "rpm"), "stand rocking mode at 1P"),
            KeepOut("K2", to_si(250.0, "rpm"), to_si(262.0, "rpm"), "first lag mode, 2P"),
        ),
        documents=(
            OutsideDocument("aborts", ("abort",), "Abort analysis of the invented rotor", "DOC-7",
                            "A", "Chief of stand safety", "2026-10-01", 8.0, FULL_SPEED),
        ),
        extra_classes=(),
        abort=AbortActions(
            to_si(0.5, "deg"),
            "centred",
            ("Drive torque off", "Collective to 0.5°, cyclic centred",
             "No brake above 150 rpm", "Call ABORT on the loop, three times"),
            to_si(1.0, "deg/s"), 2.0, brake=True, brake_from_rad_s=to_si(140.0, "rpm"),
        ),
        rotor=_rotor(),
        stand=_stand(),
        rule_book=_book(),
    )  # fmt: skip


def _step(i: int, n_steps: int) -> Step:
    share = min(1.0, (i + 1) / max(1, n_steps // 3))
    speed = LOW_SPEED + (0.95 * FULL_SPEED - LOW_SPEED) * share
    note = "Listen for stop contact." if i == 0 else ""
    return Step(
        speed, to_si(1.0 + 0.5 * (i % 14), "deg"), Cyclic(trimmed=i % 2 == 1), 40.0, 60.0,
        Window(to_si(2.0, "rpm"), to_si(0.2, "deg")), note,
    )  # fmt: skip


def _rotor() -> Rotor:
    radius = np.linspace(0.2, 5.0, 7)
    ones = np.ones_like(radius)
    stations = Stations(
        radius, 0.3 * ones, 0.0 * ones, 6.5 * ones, 2e4 * ones, 4e5 * ones, 1e4 * ones,
        0.04 * ones, 0.0 * ones, 0.0 * ones,
    )  # fmt: skip
    section = SymmetricSection("plain", 5.73, 0.009, 1.25, to_si(12.0, "deg"))
    blade = Blade(
        5.0, 0.9, 3.75, stations, (PointMass("tip weight", 4.9, 0.5),),
        (SectionSpan(section, 0.9, 5.0),), ("A-101", "A-102", "A-103", "A-104"),
    )  # fmt: skip
    droop = Stop(
        to_si(-4.0, "deg"),
        5e5,
        1e3,
        4000.0,
        Retraction(to_si(130.0, "rpm"), to_si(110.0, "rpm"), to_si(-7.0, "deg")),
    )
    up = Stop(to_si(20.0, "deg"), 5e5, 1e3, 4000.0)
    hub = ArticulatedHub(0.2, 0.35, 0.0, 0.0, 0.0, 0.0, 900.0, to_si(10.0, "deg"), 0.0)
    return Rotor("Invented rotor R-4", 4, False, blade, hub, droop, up, 2e4,  # noqa: FBT003
                 to_si(8.0, "deg"), 42.0, 43.0, 2.2e5)  # fmt: skip


def _stand() -> Stand:
    fitted = True
    modes = (
        GivenMode("rocking", "stand", to_si(2.5, "Hz"), 0.02, "fore and aft", fitted, "tap test"),
        GivenMode("twist", "stand", to_si(9.1, "Hz"), 0.02, "about the axis", None, "drawing"),
        GivenMode("first", "shaft", to_si(14.0, "Hz"), 0.01, "torsion", fitted, "maker"),
    )
    return Stand(
        "Invented stand 2", 8.0, "upright", FULL_SPEED, to_si(1.0, "rpm"), modes,
        Drive("electric drive", 4.5, 9000.0, 4e5, 43.0, 80.0, to_si(405.0, "rpm")),
        to_si(150.0, "rpm"), Ratings(4e4, 2e4),
        (Obstruction("mast", 0.0, 9.0, 10.0),), (Obstruction("control room", 1.0, 90.0, 2.0),),
    )  # fmt: skip


def _book() -> RuleBook:
    practice = "common practice"
    predicted = [
        _rule(
            "droop-gap",
            "stops",
            "Clearance to the droop stop",
            "droop_stop_clearance",
            "at least",
            Limit(constant=to_si(2.0, "deg")),
            channel="blade flap 1 to 4",
        ),
        _rule(
            "up-gap",
            "stops",
            "Clearance to the up stop",
            "up_stop_clearance",
            "at least",
            Limit(share=0.2, reference="flap_travel"),
            channel="blade flap 1 to 4",
        ),
        _rule(
            "thrust",
            "loads",
            "Thrust on the stand",
            "thrust",
            "at most",
            Limit(share=0.95, reference="stand_thrust_rating"),
            channel="load cell sum",
        ),
        _rule(
            "torque",
            "loads",
            "Shaft torque",
            "torque",
            "at most",
            Limit(table=((0.0, 7000.0), (FULL_SPEED, 8500.0))),
            channel="torque meter",
        ),
        _rule("power", "loads", "Drive power", "power", "at most", Limit(constant=3.8e5)),
        _rule(
            "spacing",
            "resonance",
            "Flap modes away from whole harmonics",
            "harmonic_spacing",
            "at least",
            Limit(constant=0.1),
        ),
        _rule(
            "rate",
            "resonance",
            "Passage through keep-out bands",
            "band_rate",
            "at least",
            Limit(constant=0.01),
        ),
        _rule(
            "stop-peak",
            "stops",
            "Peak moment on a droop stop",
            "droop_stop_peak_moment",
            "at most",
            Limit(share=0.66, reference="droop_stop_moment_rating"),
            channel="strain gauge",
            where=("ramp", "stop", "abort"),
        ),
        _rule(
            "rest",
            "aborts",
            "Time to rest",
            "time_to_rest",
            "at most",
            Limit(constant=300.0),
            channel="clock",
            where=("abort",),
        ),
    ]
    confirmed = [
        Rule(f"confirm-{i}", "confirmed", "people", title, "", practice, ("run",), when=when)
        for i, (title, when) in enumerate(
            (
                ("Emergency stop and trip tested", "run day, before the first start"),
                ("Head count done, zone closed and locked", "before every start"),
                ("Rotor lock and lockout removed, signed off", "before every start"),
                ("No lightning within 30 min", "before every block"),
            )
        )
    ]
    watched = [
        Rule("vibration", "watched", "loads", "Stand vibration", "", practice, ("run",),
             channel="accelerometer 1", watcher="Data watcher", caution_text="7.1 mm/s",
             abort_text="18 mm/s"),
    ]  # fmt: skip
    return RuleBook(
        "Example book", "3", "Invented safety office", False,  # noqa: FBT003
        (*predicted, *watched, *confirmed),
        (Allowance("air_load", 0.7, 1.05, practice), Allowance("torque", 0.85, 1.15, practice),
         Allowance("frequency", 0.95, 1.05, practice)),
        (), 8.0, 11.0, "common practice, to be set by the facility", 0.1,
    )  # fmt: skip


def _rule(  # noqa: PLR0917, PLR0913
    rule_id: str, hazard_class: str, title: str, quantity: str, sense: Any, limit: Limit,
    channel: str = "", where: tuple[Any, ...] = ("hold", "ramp", "stop"),
) -> Rule:  # fmt: skip
    caution = replace(limit, constant=limit.constant * 1.2) if limit.constant else None
    return Rule(
        rule_id, "predicted", hazard_class, title, "keeps the article whole",
        "common practice; the facility sets the value", where,
        quantity=quantity, sense=sense, limit=limit, caution=caution,
        unit=REGISTER[quantity].unit, channel=channel,
        watcher="Data watcher" if channel else "", caution_acceptor="Stand safety officer",
    )  # fmt: skip


def _state(segment: Segment) -> tuple[float, float]:
    speed = max(segment.from_rad_s, segment.to_rad_s) / FULL_SPEED
    return speed, math.degrees(max(segment.to_collective_rad, segment.from_collective_rad))


def _predictions(plan: Plan, walk: tuple[Segment, ...]) -> Json:
    numbers: dict[str, list[tuple[str, str, float, float, float]]] = {}

    def put(name: str, segment: str, value: float, spread: float, band: str = "") -> None:
        low, high = sorted((value * (1.0 - spread), value * (1.0 + spread)))
        numbers.setdefault(name, []).append((segment, band, value, low, high))

    for s in walk:
        speed, pitch = _state(s)
        cone = math.radians(0.6 * pitch)
        swing = math.radians(1.5 + 2.0 * (1.0 - speed))
        put("flap_lowest", s.id, cone - swing, 0.1)
        put("flap_highest", s.id, cone + swing, 0.1)
        put("droop_stop_clearance", s.id, cone - swing + math.radians(7.0), 0.1)
        put("up_stop_clearance", s.id, math.radians(20.0) - cone - swing, 0.05)
        put("thrust", s.id, 3000.0 * pitch * speed**2 + 412.0, 0.15)
        put("torque", s.id, (900.0 + 300.0 * pitch) * speed**2 + 11.0, 0.12)
        put("power", s.id, ((900.0 + 300.0 * pitch) * speed**2 + 11.0) * speed * 41.4, 0.12)
        if s.kind != "hold" and s.duration_s > 0.0:
            rate = abs(s.to_rad_s - s.from_rad_s) / FULL_SPEED / s.duration_s
            for band in plan.keep_outs:
                put("band_rate", s.id, rate, 0.0, band.id)
    found: Json = {name: {"study": "sample", "rows": [_row(*row) for row in rows]}
                   for name, rows in numbers.items()}  # fmt: skip
    found |= _marched(plan, walk) | _resonances(plan, walk)
    for name, low in (("flap 1", 1.02), ("lag 1", 0.3), ("stand rocking", 0.5236)):
        rows = found.setdefault("crossing_speed", {"study": "sample", "rows": []})["rows"]
        row = _row("", "", 30.0 * low, 29.0 * low, 31.0 * low)
        rows.append({**row, "mode": name, "harmonic": "1"})
    return found


MARCHED = {
    "lowest_flap_marched": -0.08, "highest_flap_marched": 0.12, "droop_stop_peak_moment": 1000.0,
    "up_stop_peak_moment": 0.0, "contacts_after_lift_off": 0.0,
}  # fmt: skip
ALONG_RAMPS = {"contact_highest_speed", "passage_amplitude", "passage_peak_speed"}
TIMES = {"time_to_half": 20.0, "time_to_30": 34.0, "time_to_10": 50.0, "time_to_rest": 60.0}


def _marched(plan: Plan, walk: tuple[Segment, ...]) -> Json:
    """Numbers of ramps, the stop and aborts; a lost brake takes half as long again."""
    found: Json = {}
    for s in walk:
        share = _state(s)[0]
        for state in [""] if s.kind == "stop" else ["", *ABORT_CAUSES]:
            numbers = _of_place(plan, share * (1.5 if state == "brake lost" else 1.0))
            for name, place, value in numbers:
                own = name in MARCHED or name in ALONG_RAMPS
                if state or s.kind == "stop" or (own and s.kind == "ramp"):
                    row = _row(s.id, "", value, *sorted((0.9 * value, 1.1 * value)))
                    rows = found.setdefault(name, {"study": "sample", "rows": []})["rows"]
                    hand = 1.04 * value if name == "passage_amplitude" else None
                    rows.append({**row, "state": state, "hand": hand, **place})
        for name in ("passage_amplitude", "passage_peak_speed"):
            for row in found.get(name, {"rows": []})["rows"]:
                if row["segment"] == s.id and not _passes_rocking(s, row["state"]):
                    row |= {"value": None, "low": None, "high": None, "status": "does not apply"}
    return found


def _passes_rocking(segment: Segment, state: str) -> bool:
    low = 0.0 if state else min(segment.from_rad_s, segment.to_rad_s)
    top = max(segment.from_rad_s, segment.to_rad_s)
    return low < to_si(156.0, "rpm") and top > to_si(145.0, "rpm")


def _of_place(plan: Plan, longer: float) -> list[tuple[str, Json, float]]:
    bands: list[Json] = [{"band": band.id} for band in plan.keep_outs]
    return [
        *((name, {}, value) for name, value in MARCHED.items()),
        ("contact_highest_speed", {}, to_si(100.0, "rpm")),
        *((name, {}, longer * value) for name, value in TIMES.items()),
        *(("band_cycles", band, longer * 12.0) for band in bands),
        ("passage_amplitude", {"mode": "stand rocking", "harmonic": "1"}, 6e-3),
        ("passage_peak_speed", {"mode": "stand rocking", "harmonic": "1"}, to_si(146.0, "rpm")),
    ]


def _resonances(plan: Plan, walk: tuple[Segment, ...]) -> Json:
    """Numbers of modes and bands; the twist mode of the stand cannot be judged."""
    stands = [
        (hold, side, near)
        for hold in walk
        if hold.kind == "hold"
        for side, near in (("Ω - ω", 0.21), ("Ω + ω", 0.4))
    ]
    numbers: list[tuple[str, str, Json, float]] = [
        ("unbalance", "", {}, 0.85),
        ("passage_rate_needed", "", {"mode": "stand rocking"}, to_si(1.6, "rpm/s")),
        ("frequency_correction", "", {"mode": "flap 2"}, -0.021),
        ("frequency_residual", "", {"mode": "flap 2"}, 0.013),
        *(("band_time_total", "", {"band": band.id}, 240.0) for band in plan.keep_outs),
        *(("band_cycles_total", "", {"band": band.id}, 610.0) for band in plan.keep_outs),
        *(
            ("fixed_frame_spacing", s.id, {"mode": "lag 1", "harmonic": f"stand rocking, {side}"},
             near * (1.0 + 0.1 * _state(s)[0]))
            for s, side, near in stands
        ),
    ]  # fmt: skip
    found: Json = {}
    for name, segment, place, value in numbers:
        row = _row(segment, "", value, *sorted((0.95 * value, 1.05 * value)))
        found.setdefault(name, {"study": "sample", "rows": []})["rows"].append(row | place)
    unknown = {**_row("", "", 0.0, 0.0, 0.0), "mode": "stand twist", "status": "not stated",
               "value": None, "low": None, "high": None, "reason": UNKNOWN}  # fmt: skip
    found["passage_rate_needed"]["rows"].append(unknown)
    return found


UNKNOWN = "the stand file does not say whether the rotor's mass was fitted"


def _row(segment: str, band: str, value: float, low: float, high: float) -> Json:
    return {
        "segment": segment, "mode": "", "harmonic": "", "band": band, "state": "", "value": value,
        "low": low, "high": high, "status": "ok", "reason": "", "speed_rad_s": None, "hand": None,
    }  # fmt: skip


def _findings(rules: tuple[Rule, ...], walk: tuple[Segment, ...], verdict: str) -> list[Json]:
    findings: list[Json] = []
    for i, rule in enumerate(r for r in rules if r.kind == "predicted"):
        kinds = {*rule.where, *(("hold", "ramp") if "abort" in rule.where else ())}
        words = {s.id: "GO" for s in walk if s.kind in kinds}
        if i == 0 and verdict in {"NOT ASSESSED", "NO-GO"}:
            words |= {s.id: "NOT ASSESSED" for s in walk if s.kind != "hold"}
        worst = walk[len(walk) // 2]
        word = {0: verdict, 5: "CAUTION" if verdict != "GO" else "GO"}.get(i, "GO")
        limit = rule.limit.constant if rule.limit and rule.limit.constant else None
        limit = limit or {"thrust": 3.8e4, "torque": 8000.0}.get(rule.quantity, to_si(5.0, "deg"))
        sign = -1.0 if word == "NO-GO" else 1.0
        findings.append({
            "rule": rule.id, "where": worst.id, "segment": worst.id, "value": 1.1 * limit,
            "low": 1.05 * limit, "high": 1.15 * limit, "limit": limit, "caution": None,
            "margin": 0.05 * limit * sign, "verdict": word,
            "reason": "" if word == "GO" else f"the invented number is near at {worst.id}",
            "tested": len(walk), "not_assessed": 0, "closed_by": "", "segment_verdicts": words,
            "segment_margins": {s.id: (0.05 + 0.01 * j) * limit for j, s in enumerate(walk)},
            "by_state": by_state("GO", worst.id, limit) if "abort" in rule.where else {},
        })  # fmt: skip
    return findings


def by_state(verdict: str, segment: str, limit: float = 1.0) -> Json:
    """What a rule comes to for each cause of an abort."""
    said = {
        "verdict": verdict, "segment": segment, "low": 0.5 * limit, "high": 0.6 * limit,
        "limit": limit, "margin": 0.4 * limit, "closed_by": "",
    }  # fmt: skip
    return {cause: dict(said) for cause in ABORT_CAUSES}


def _coverage() -> list[Json]:
    closed = [
        {"hazard_class": c, "where": where, "closed_by": "droop-gap", "verdict": "GO",
         "reason": ""}
        for c in CLASSES
        for where in ("hold", "ramp")
    ]  # fmt: skip
    return [*closed, {"hazard_class": "aborts", "where": "abort",
                      "closed_by": "stop-peak, rest", "verdict": "GO", "reason": ""}]  # fmt: skip


def _times(walk: tuple[Segment, ...]) -> list[tuple[Segment, float, float]]:
    at, out = 0.0, []
    for s in walk:
        out.append((s, at, at + s.duration_s))
        at += s.duration_s
    return out


def _run(walk: tuple[Segment, ...]) -> Json:
    corners = [
        (time, speed, s.id)
        for s, start, end in _times(walk)
        for time, speed in ((start, s.from_rad_s), (end, s.to_rad_s))
    ]
    keys = ("time_s", "speed_rad_s", "segment")
    return {key: [c[i] for c in corners] for i, key in enumerate(keys)}


def _fan(walk: tuple[Segment, ...]) -> Json:
    speed = np.linspace(0.0, 1.2 * FULL_SPEED, 41)

    def risen(still_hz: float, factor: float) -> list[float]:
        return [float(v) for v in np.sqrt((2 * math.pi * still_hz) ** 2 + factor * speed**2)]

    modes = [
        ("flap 1", "flap", risen(0.0, 1.06)), ("flap 2", "flap", risen(3.0, 7.2)),
        ("flap 3", "flap", risen(9.0, 18.0)), ("lag 1", "lag", risen(0.0, 0.09)),
        ("lag 2", "lag", risen(14.0, 2.0)), ("torsion 1", "torsion", risen(27.0, 1.0)),
        ("stand rocking", "stand", risen(2.5, 0.0)), ("stand twist", "stand", risen(9.1, 0.0)),
        ("shaft first", "shaft", risen(14.0, 0.0)),
    ]  # fmt: skip
    return {
        "speed_rad_s": [float(v) for v in speed],
        "collective_rad": to_si(8.0, "deg"),
        "modes": [{"name": n, "family": f, "panel": f if f in {"stand", "shaft"} else "blade",
                   "frequency_rad_s": w, "damping": None, "doubt": "", "note": ""}
                  for n, f, w in modes],
        "shifted": [
            {"name": f"lag 1, {words}",
             "frequency_rad_s": [float(v) for v in (1.0 + side * 0.3) * speed]}
            for words, side in (("Ω - ω", -1.0), ("Ω + ω", 1.0))
        ],
        "harmonics": {"blade": list(range(1, 9)), "stand": [1, 4, 8, 12], "shaft": [4, 8, 12]},
        "time_at_speed": _time_at_speed(walk),
    }  # fmt: skip


def _time_at_speed(walk: tuple[Segment, ...]) -> Json:
    """The time of each segment, repeats counted, in the bin of its last speed."""
    edges = 0.02 * FULL_SPEED * np.arange(51)
    seconds = np.zeros(50)
    for s in walk:
        seconds[min(49, int(s.to_rad_s / (0.02 * FULL_SPEED)))] += s.times * s.duration_s
    return {"edges_rad_s": edges.tolist(), "seconds": seconds.tolist()}


def without_panels(record: Json) -> Json:
    """Leave of a record what those of before the fan chart had panels had, brought forward."""
    fan = record["series"]["fan"]
    for mode in fan["modes"]:
        del mode["note"]
    fan |= {"collective_rad": None, "shifted": [], "time_at_speed": None,
            "harmonics": {"blade": list(range(1, 9)), "stand": [], "shaft": []}}  # fmt: skip
    for quantity in NEWER:
        record["predictions"].pop(quantity, None)
    record["vocabulary"] = [e for e in record["vocabulary"] if e["id"] not in NEWER]
    for key in ("balance", "measured_modes"):
        del record["plan"]["rotor"][key]
    for key in ("column", "drive_train", "measured_modes"):
        del record["plan"]["stand"][key]
    del record["plan"]["stand"]["ratings"]["hub_amplitude_m"], record["plan"]["abort"]["reentries"]
    return record


NEWER = (
    "passage_amplitude", "passage_peak_speed", "passage_rate_needed", "unbalance", "mode_share",
    "frequency_correction", "frequency_residual", "fixed_frame_spacing", "band_time_total",
    "band_cycles_total",
)  # fmt: skip


def _flap(plan: Plan, walk: tuple[Segment, ...]) -> Json:
    keys = ("time_s", "segment", "lowest_rad", "highest_rad", "droop_rad", "up_rad", "assessed")
    rows: list[tuple[Any, ...]] = []
    for s, start, end in _times(walk):
        speed, pitch = _state(s)
        cone, swing = math.radians(0.6 * pitch), math.radians(1.5 + 2.0 * (1.0 - speed))
        for time, at in ((start, s.from_rad_s), (end, s.to_rad_s)):
            droop = plan.rotor.droop_stop.lowest_angle_rad(at) if plan.rotor.droop_stop else None
            rows.append((time, s.id, cone - swing, cone + swing, droop, math.radians(20.0),
                         s.kind == "hold"))  # fmt: skip
    return {key: [row[i] for row in rows] for i, key in enumerate(keys)}
