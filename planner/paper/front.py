"""Opening pages of the card: the run, its people, the configuration, what must be true first."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from planner.model.results import Verdict
from planner.paper import texts
from planner.paper.boxes import Box, gap, heading, paragraph
from planner.paper.gate import NO_GATE, gate_boxes, kept_gate
from planner.paper.ink import BODY
from planner.paper.reading import SYMBOLS, Json, Reading, banner_text
from planner.paper.tables import Cell, Row, Table, plain_row, table_boxes

if TYPE_CHECKING:
    from planner.paper.pages import Frame

INK_HEIGHT = 26.0
"""Least height of a row that is written into by hand."""

EXAMPLE_BOOK = "EXAMPLE rule book, not approved"
_MEANINGS = {
    Verdict.GO: "all assessed, no limit passed",
    Verdict.CAUTION: "past a caution level, to be accepted by name",
    Verdict.NOT_ASSESSED: "not known: do not run",
    Verdict.NO_GO: "a limit is passed: do not run",
}
_MAY_ABORT = {True: "yes", False: "no"}


def run_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """The run: what it is for, when, and what the plan came to."""
    plan = reading.plan
    table = Table(frame.shares(20, 80), ("The run", "As planned"))
    rows = [
        plain_row("Title", f"{plan['title']}: card {plan['card']}, revision {plan['revision']}"),
        plain_row("Stand and rotor", f"{plan['stand']['name']}; {plan['rotor']['name']}"),
        plain_row("Objective", plan["objective"]),
        plain_row("Planned start", f"{plan['planned_start']}, to {plan['planned_finish']}"),
        plain_row("Actual start", "", least_height=INK_HEIGHT),
        plain_row("Plan verdict", _verdict_text(reading)),
        plain_row("Rule book", book_text(reading)),
    ]
    return [
        heading("1  The run", frame.width),
        *table_boxes(table, rows),
        gap(2.0),
        paragraph(_key(), frame.width),
        *_role_boxes(reading, frame),
    ]


def book_text(reading: Reading) -> str:
    """Name the rule book; one that is not approved says so first."""
    book = reading.book
    name = f"{book['name']}, revision {book['revision']}, owner {book['owner']}"
    return name if book["approved"] else f"{EXAMPLE_BOOK}: {name}"


def _verdict_text(reading: Reading) -> str:
    counts = dict.fromkeys(reversed(Verdict), 0)
    for finding in reading.findings:
        counts[Verdict(finding["verdict"])] += 1
    listed = ", ".join(f"{n} {verdict.value}" for verdict, n in counts.items() if n)
    return (
        f"{banner_text(reading.record['verdict'])}. Findings: {listed or 'none'}. "
        "A verdict is about the plan; the people named below clear the run."
    )


def _key() -> str:
    glue = "\N{NO-BREAK SPACE}"
    parts = [f"{SYMBOLS[v]}{glue}{v.value}: {meaning}" for v, meaning in _MEANINGS.items()]
    return "Verdicts, mildest first: " + ";  ".join(parts) + "."


def _role_boxes(reading: Reading, frame: Frame) -> list[Box]:
    roles: list[Json] = reading.plan["roles"]
    table = Table(frame.shares(20, 26, 34, 8, 12), ("Role", "Name", "Duties", "Abort", "Initials"))
    rows = [
        Row(
            (
                Cell(role["role"], bold=True),
                Cell(role["name"]),
                Cell(role["duties"]),
                Cell(_MAY_ABORT[bool(role["may_abort"])], bold=bool(role["may_abort"])),
                Cell(),
            ),
            least_height=INK_HEIGHT,
        )
        for role in roles
    ]
    who = ", ".join(role["role"] for role in roles if role["may_abort"])
    said = (
        f"Authority to call ABORT: {who}."
        if who
        else "NOT ASSESSED: the plan gives no one authority to call ABORT. Do not run."
    )
    empty = [paragraph("NOT ASSESSED: the plan names no roles. Do not run.", frame.width)]
    return [
        gap(),
        heading("Roles and abort authority", frame.width, level=1),
        paragraph(said, frame.width, BODY.bold, keep_next=True),
        gap(3.0),
        *(table_boxes(table, rows) or empty),
    ]


def configuration_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """Planned against found: everything that must match the article before the run."""
    table = Table(
        frame.shares(26, 40, 24, 10),
        ("Item", "As planned", "As found (write; ring what differs)", "Initials"),
    )
    rows = [
        plain_row(name, planned, "", "", least_height=INK_HEIGHT)
        for name, planned in _configuration(reading)
    ]
    return [
        heading("2  Configuration, as planned against as found", frame.width),
        paragraph(
            "A difference is a HOLD on the whole run until the plan has been checked again.",
            frame.width,
            keep_next=True,
        ),
        *table_boxes(table, rows),
    ]


def _configuration(reading: Reading) -> list[tuple[str, str]]:
    plan = reading.plan
    rotor, stand = plan["rotor"], plan["stand"]
    blade, drive = rotor["blade"], stand["drive"]
    sense = "clockwise" if rotor["clockwise"] else "counter-clockwise"
    trip = drive["overspeed_trip_rad_s"]
    brake = stand["brake_below_rad_s"]
    return [
        ("Rotor", f"{rotor['name']}: {rotor['n_blades']} blades, radius "
         f"{texts.setting(blade['radius_m'], 'm')}, {sense} seen from the thrust side"),
        *((f"Blade {i}, serial", serial) for i, serial in enumerate(blade["serials"], 1)),
        *((f"Weight: {mass['name']}", f"{texts.setting(mass['mass_kg'], 'kg')} at radius "
           f"{texts.setting(mass['radius_m'], 'm')}") for mass in blade["point_masses"]),
        ("Hub", _hub_text(rotor["hub"])),
        *_stop_items(rotor),
        ("Stand", f"{stand['name']}, hub height {texts.setting(stand['hub_height_m'], 'm')}"),
        ("Mounting", stand["mounting"]),
        ("100 % rpm reads", texts.setting(stand["full_speed_rad_s"], "rpm")),
        ("Drive", f"{drive['name']}, {drive['gear_ratio']:.5g} motor turns a rotor turn"),
        ("Overspeed trip", texts.limit(trip, "rpm", "at most") if trip is not None
         else "none stated in the plan"),
        ("Brake allowed below", texts.limit(brake, "rpm", "at most") if brake is not None
         else "none stated: no brake"),
        ("Rule book", book_text(reading)),
        ("Software", ", ".join(f"{k} {v}" for k, v in reading.record["made_by"].items())),
        *((f"File {i}", f"{file['name']}, SHA-256 {file['sha256'][:12]}")
          for i, file in enumerate(reading.record["files"], 1)),
    ]  # fmt: skip


def _hub_text(hub: Json) -> str:
    parts = [f"precone {texts.setting(hub['precone_rad'], 'deg')}"]
    coupling = texts.setting(hub["pitch_flap_coupling_rad"], "deg")
    if hub["kind"] == "articulated":
        parts += [
            f"flap hinge at {texts.setting(hub['flap_hinge_m'], 'm')}",
            f"lag hinge at {texts.setting(hub['lag_hinge_m'], 'm')}",
        ]
    if hub["kind"] == "hingeless":
        parts.append(f"blade clamped at {texts.setting(hub['root_m'], 'm')}")
    return f"{hub['kind']}: {', '.join(parts)}, pitch-flap coupling δ₃ {coupling}"


def _stop_items(rotor: Json) -> list[tuple[str, str]]:
    items: list[tuple[str, str]] = []
    for name, stop in (("Droop stop", rotor["droop_stop"]), ("Up stop", rotor["up_stop"])):
        if stop is None:
            items.append((name, "none on this hub"))
            continue
        text = f"at {texts.setting(stop['angle_rad'], 'deg')}"
        swing = stop["retraction"]
        if swing is not None:
            text += (
                f", retracts to {texts.setting(swing['retracted_angle_rad'], 'deg')}: releases at "
                f"{texts.setting(swing['release_rad_s'], 'rpm')}, re-seats at "
                f"{texts.setting(swing['reseat_rad_s'], 'rpm')}"
            )
        items.append((name, text))
    return items


def prerequisite_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """What people confirm with their initials before and during the run."""
    table = Table(
        frame.shares(46, 24, 7, 10, 13), ("To be confirmed", "When", "Done", "Initials", "Time")
    )
    rows = [
        Row(
            (
                Cell(rule["title"], bold=True),
                Cell(rule["when"]),
                Cell(tick=True),
                Cell(),
                Cell(),
            ),
            tails=(Cell(_why(rule)),),
            least_height=INK_HEIGHT,
        )
        for rule in reading.rules_of_kind("confirmed")
    ]
    none = "NOT ASSESSED: the rule book asks for no confirmation before the run. Do not run."
    return [
        heading("3  Prerequisites", frame.width),
        *(table_boxes(table, rows) or [paragraph(none, frame.width, BODY.bold)]),
    ]


def _why(rule: Json) -> str:
    basis = texts.sentence(f"Basis: {rule['basis']}")
    return f"{texts.sentence(rule['why'])} {basis}" if rule["why"].strip() else basis


def weather_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """Wind and air against what the plan was made for, with blanks for what is met."""
    book = reading.book
    table = Table(
        frame.shares(18, 19, 26, 21, 9, 7),
        ("Weather", "Cap", "Planned for", "Found, before start", "Time", "Init."),
    )
    caps = (book["wind_mean_cap_m_s"], book["wind_gust_cap_m_s"])
    rows = [
        plain_row(name, cap, planned, "", "", "", least_height=INK_HEIGHT)
        for name, cap, planned in _weather(reading.plan["site"], caps)
    ]
    basis = book["wind_cap_basis"] or "none stated"
    gate = kept_gate(reading.record)
    said = "" if gate else f"{NO_GATE} "
    if None in caps:
        said += "The rule book gives no cap for all of the wind: NOT ASSESSED, do not run. "
    above = "the gate, the planned wind or the cap" if gate else "the planned wind or the cap"
    said += f"Basis of the cap: {basis}. Above {above} at any time: no start; if running, HOLD."
    return [
        heading("4  Weather gate", frame.width),
        paragraph(said, frame.width, keep_next=True),
        gap(3.0),
        *table_boxes(table, rows),
        *(_gate_part(reading, gate, frame) if gate else []),
        *_document_limits(reading, frame),
    ]


def _gate_part(reading: Reading, gate: Json, frame: Frame) -> list[Box]:
    title = heading("Computed wind gate", frame.width, level=1)
    return [gap(), title, *gate_boxes(reading, gate, frame)]


def _weather(site: Json, caps: tuple[float | None, float | None]) -> list[tuple[str, str, str]]:
    mean, gust = (_wind(cap) if cap is not None else texts.NOT_ASSESSED for cap in caps)
    spread = texts.setting(site["temperature_spread_K"], "K")
    pressure, elevation = site["pressure_Pa"], site["elevation_m"]
    air = (
        f"pressure {texts.setting(pressure, 'hPa')}"
        if pressure is not None
        else f"standard air at {texts.setting(elevation, 'm')} elevation"
    )
    anemometer = (
        f"{texts.setting(site['anemometer_height_m'], 'm')} above ground, over "
        f"{texts.duration(site['averaging_time_s'])}, error ± "
        f"{texts.setting(site['anemometer_error_m_s'], 'm/s')}"
    )
    return [
        ("Wind, mean", mean, _wind(site["wind_mean_m_s"])),
        ("Wind, gust", gust, _wind(site["wind_gust_m_s"])),
        ("Wind measured at", "as planned", anemometer),
        ("Temperature", "planned range", f"{texts.setting(site['temperature_K'], 'degC')} ± "
         f"{spread}"),
        ("Humidity", "no cap", texts.setting(site["relative_humidity"], "%")),
        ("Air", "no cap", air),
        ("Lightning", "see prerequisites", "—"),
        ("Icing", "see prerequisites", "—"),
    ]  # fmt: skip


def _wind(speed_m_s: float) -> str:
    return f"{texts.limit(speed_m_s, 'm/s', 'at most')} ({texts.number(speed_m_s, 'kt', 'down')})"


def _document_limits(reading: Reading, frame: Frame) -> list[Box]:
    said: dict[str, list[str]] = {}
    for document in reading.plan["documents"]:
        wind, speed = document["wind_limit_m_s"], document["speed_limit_rad_s"]
        limits = [
            f"wind {_wind(wind)}" if _given(wind) else "",
            f"rotor speed {texts.limit(speed, 'rpm', 'at most')}" if _given(speed) else "",
        ]
        listed = " and ".join(part for part in limits if part) or "limits that it does not state"
        said.setdefault(listed, []).append(document["number"])
    lines: list[Box] = [
        paragraph(f"{', '.join(dict.fromkeys(numbers))}: only up to {listed}.", frame.width)
        for listed, numbers in said.items()
    ]
    return [gap(3.0), *lines] if lines else []


def _given(value: float | None) -> bool:
    return value is not None and math.isfinite(value)
