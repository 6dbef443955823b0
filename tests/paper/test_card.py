from __future__ import annotations

import copy
import hashlib
import io
import os
import re
import subprocess
import sys
from functools import cache
from itertools import pairwise
from pathlib import Path
from typing import Any

import pypdf
import pytest

from planner.paper.boxes import Gap, Lines, Paired, Picture, Ruled
from planner.paper.card import card_pages, card_pdf
from planner.paper.pages import frame_for
from planner.paper.reading import Reading
from planner.paper.tables import TableRow
from planner.paper.texts import UnprintableError
from tests.paper.sample_record import Json, sample_record

BANNERS = {
    "GO": "○ PLAN GO, not clearance to run",
    "CAUTION": "△ CAUTION",
    "NOT ASSESSED": "◇ NOT ASSESSED — do not run",
    "NO-GO": "■ NO-GO — do not run",
}
CONSOLE, ABORT, REFERENCE_SIZE = 12.0, 14.0, 9.0
HEADER_FROM_TOP, FOOTER = 80.0, 40.0


@cache
def reader(n_steps: int = 12, verdict: str = "CAUTION", paper: str = "a4") -> pypdf.PdfReader:
    return read(card_pdf(sample_record(n_steps, verdict), paper))


def read(data: bytes) -> pypdf.PdfReader:
    return pypdf.PdfReader(io.BytesIO(data))


@cache
def page_texts(n_steps: int = 12, verdict: str = "CAUTION", paper: str = "a4") -> tuple[str, ...]:
    return tuple(page.extract_text() for page in reader(n_steps, verdict, paper).pages)


def flat(record: Json, paper: str = "a4") -> str:
    pages = read(card_pdf(record, paper)).pages
    return " ".join(" ".join(page.extract_text() for page in pages).split())


def sizes(page: pypdf.PageObject) -> list[tuple[float, float, str]]:
    found: list[tuple[float, float, str]] = []

    def visit(text: str, _: Any, tm: Any, __: Any, size: float) -> None:
        if text.strip():
            found.append((float(tm[5]), float(size), text))

    page.extract_text(visitor_text=visit)
    return found


@pytest.mark.parametrize("verdict", BANNERS)
def test_every_page_says_what_it_belongs_to(verdict: str) -> None:
    texts = page_texts(12, verdict)
    for number, text in enumerate(texts, 1):
        for part in (
            "Demonstration run of invented rotor R-4",
            "Card WS-014",
            "revision B",
            f"Page {number} of {len(texts)}",
            "issued 2026-11-30 08:00 UTC",
            "0123456789ab ",
            "DRAFT until approved in ink",
            BANNERS[verdict],
            "EXAMPLE rule book, not approved",
            "approved procedures, local codes and licensed practice",
        ):
            assert part in text, (part, number)


@pytest.mark.parametrize(
    "part",
    [
        "Objective", "Planned start", "Authority to call ABORT: Test conductor, Drive operator",
        "A-104", "re-seats at 110 rpm", "No computed wind gate is kept for this plan",
        "Above the planned wind or the cap at any time: no start", "8 m/s (15.5 kt)",
        "UNWATCHED", "PASS WITHOUT STOPPING 141–156 rpm",
        "repeat 3 times", "Outside: HOLD", "Build-up rule", "STOP TEST", "CONTINUE",
        "ABORT, ABORT, ABORT", "Re-entry after an abort", "Coast-down",
        "the stand's brake is allowed only below this", "droop stops re-seat", "Deviations",
        "Exceedances", "Inspection after the run", "Disposition", "Prepared", "Reviewed",
        "Approved to run", "Fan chart", "Flap range against the stops", "RUN COMPLETE",
        "Chief of stand safety", "θ ≤ 8°, ψ = 0", "β₀", "SET-UP",
        "then: check data, CONTINUE called? ☐", "18 mm/s",
    ],
)  # fmt: skip
def test_card_holds(part: str) -> None:
    assert part in " ".join(" ".join(page_texts()).split())


def test_every_rule_prints_with_its_basis() -> None:
    record = sample_record(4)
    for rule in record["plan"]["rule_book"]["rules"]:
        rule["basis"] = f"basis-of-{rule['id']}"
    text = flat(record)
    for rule in record["plan"]["rule_book"]["rules"]:
        assert rule["title"] in text
        assert f"Basis: basis-of-{rule['id']}." in text


def test_each_step_row_carries_its_verdict_word() -> None:
    for page in page_texts(12, "NOT ASSESSED"):
        lines = page.splitlines() if "Outside: HOLD" in page else []
        for i, line in enumerate(lines):
            if re.fullmatch(r"\d+\.\d+[rhb]|stop|end", line):
                following = lines[i + 1]
                assert following.startswith(("○ GO", "◇ NOT", "K")), following


def test_rows_that_are_not_go_say_why() -> None:
    text = " ".join(" ".join(page_texts(12, "NOT ASSESSED")).split())
    n_ramps = sum(s["kind"] != "hold" for s in sample_record(12)["segments"])
    assert text.count("Not GO: NOT ASSESSED: Clearance to the droop stop.") == n_ramps


def test_open_hazard_class_is_named_on_the_rows_it_holds_up() -> None:
    record = sample_record(2)
    opened = {"hazard_class": "stops", "where": "hold", "closed_by": ""}
    reason = {"verdict": "NOT ASSESSED", "reason": "no rule judges it"}
    record["coverage"].append(opened | reason)
    record["segment_verdicts"]["1.1h"] = "NOT ASSESSED"
    text = flat(record)
    assert "Not GO: NOT ASSESSED: nothing closes Flap range and stop contact." in text
    assert "nothing: no rule judges it" in text


@pytest.mark.parametrize("paper", ["a4", "letter"])
@pytest.mark.parametrize("n_steps", [2, 3, 12, 60, 200])
def test_every_row_is_placed_once_and_inside_the_page(n_steps: int, paper: str) -> None:
    record, frame = sample_record(n_steps), frame_for(paper)
    pages = card_pages(Reading(record), frame)
    assert all(max(p.down + p.box.height for p in page) <= frame.height + 1e-6 for page in pages)
    assert all(isinstance(page[-1].box, TableRow | Lines | Paired | Picture | Ruled | Gap)
               for page in pages)  # fmt: skip
    assert min(sum(p.box.height for p in page) for page in pages) > 60.0
    rows = [
        p.box.lines[0][0][0]
        for page in pages
        for p in page
        if isinstance(p.box, TableRow) and p.box.table.most_rows and not p.box.row.grey
    ]
    ids = [s["id"] for s in record["segments"]]
    assert rows == [*ids, "end"]


@pytest.mark.parametrize(("paper", "size"), [("a4", (841.89, 595.28)), ("letter", (792.0, 612.0))])
def test_sheets_are_of_the_asked_size_and_none_is_empty(
    paper: str, size: tuple[float, float]
) -> None:
    for page in reader(12, "CAUTION", paper).pages:
        assert (float(page.mediabox.width), float(page.mediabox.height)) == pytest.approx(size)
    assert min(len(text) for text in page_texts(12, "CAUTION", paper)) > 250


@pytest.mark.parametrize("paper", ["a4", "letter"])
def test_step_rows_are_not_split_and_at_most_twelve_a_page(paper: str) -> None:
    most = 0
    for text in page_texts(30, "CAUTION", paper):
        if "Outside: HOLD" not in text:
            assert "RUN: hold" not in text
            continue
        rows = re.findall(r"^(?:\d+\.\d+[rhb]|stop|end)$", text, re.MULTILINE)
        assert 0 < len(rows) <= 12
        most = max(most, len(rows))
        holds = re.findall(r"^\d+\.\d+h$", text, re.MULTILINE)
        assert len(re.findall(r"^Power$", text, re.MULTILINE)) == len(holds)
    assert most >= 5


def test_body_is_twelve_points_and_abort_sheet_fourteen() -> None:
    pages = reader().pages
    body_sizes: set[float] = set()
    for page in pages:
        height = float(page.mediabox.height)
        words = " ".join(page.extract_text().split())
        charts = "[Hz]" in page.extract_text() or "flap [" in page.extract_text()
        least = ABORT if page in pages[-2:] else CONSOLE
        for y, size, text in sizes(page):
            looked_up = size == REFERENCE_SIZE and "Channel / watcher" in words
            if charts or looked_up or y > height - HEADER_FROM_TOP or y < FOOTER:
                assert size >= 9.0
                continue
            assert size >= least, text
            body_sizes.add(size)
    assert {12.0, 14.0} <= body_sizes


def test_line_gap_is_a_quarter_to_a_third_of_the_type() -> None:
    column = sorted({y for y, size, _ in sizes(reader().pages[0]) if size == CONSOLE})
    gaps = [b - a for a, b in pairwise(column)]
    assert min(gaps) >= 1.25 * CONSOLE
    last = sorted({y for y, size, _ in sizes(reader().pages[-2]) if size == ABORT})
    assert min(b - a for a, b in pairwise(last)) >= 1.25 * ABORT


@pytest.mark.parametrize("n_steps", [2, 5, 12])
def test_abort_sheet_is_last_face_and_back_on_paper_of_its_own(n_steps: int) -> None:
    texts = page_texts(n_steps)
    assert len(texts) % 2 == 0
    face, back = texts[-2:]
    assert sum("At once, in this order" in text for text in texts) == 1
    places = [
        face.index(words)
        for words in ("OFF", "0.5° at 1 deg/s", "not above 150 rpm", "Drive torque off",
                      "Everyone stays inside; count heads", "Zero rpm seen", "Drive locked out")
    ]  # fmt: skip
    assert places == sorted(places)
    assert "Abort: what to expect, by cause" in back
    assert "Steps" not in face + back


def test_abort_sheet_says_what_is_not_assessed() -> None:
    record = sample_record(2)
    record["coverage"] = [c for c in record["coverage"] if c["where"] != "abort"]
    record["plan"]["abort"]["actions"] = []
    record["plan"]["stand"]["brake_below_rad_s"] = None
    text = flat(record)
    assert "NOT ASSESSED: flap, stop contact and loads after an abort are not known" in text
    assert "NOT ASSESSED: the plan orders no abort actions. Do not run." in text
    assert "DO NOT BRAKE: no brake speed is stated" in text


def test_fonts_are_embedded() -> None:
    pdf = reader(2)
    shown: set[str] = set()

    def visit(text: str, _: Any, __: Any, font: Any, ___: float) -> None:
        if text.strip():
            shown.add(str(font["/BaseFont"]))

    for page in pdf.pages:
        page.extract_text(visitor_text=visit)
    assert shown
    for page in pdf.pages:
        fonts = [f.get_object() for f in page["/Resources"]["/Font"].values()]  # type: ignore[index]  # a mapping
        for font in fonts:
            assert "/FontFile2" in font["/FontDescriptor"].get_object(), font["/BaseFont"]
        assert len(fonts) >= 2


def test_title_outline_and_language_are_set() -> None:
    pdf = reader()
    assert pdf.metadata is not None
    assert pdf.metadata.title == "Test card: Demonstration run of invented rotor R-4"
    assert "0123456789ab" in str(pdf.metadata.subject)
    titles = [str(item.title) for item in pdf.outline if not isinstance(item, list)]
    assert titles[0] == "1 The run"
    assert titles[-1] == "ABORT, ABORT, ABORT"
    assert pdf.trailer["/Root"]["/Lang"] == "en-GB"  # type: ignore[index]  # a mapping


def test_same_record_gives_same_bytes_everywhere() -> None:
    record = sample_record(5)
    once = card_pdf(record)
    assert card_pdf(copy.deepcopy(record)) == once
    script = (
        "import hashlib; from tests.paper.sample_record import sample_record;"
        "from planner.paper.card import card_pdf;"
        "print(hashlib.sha256(card_pdf(sample_record(5))).hexdigest())"
    )
    root = Path(__file__).parents[2]
    environment = {**os.environ, "PYTHONHASHSEED": "1", "PYTHONPATH": str(root)}
    done = subprocess.run(
        [sys.executable, "-c", script], env=environment, capture_output=True, text=True,
        check=True, cwd=root,
    )  # fmt: skip
    assert done.stdout.strip() == hashlib.sha256(once).hexdigest()


def test_user_text_is_never_markup() -> None:
    record = sample_record(2)
    nasty = '<font color="white" size="1">R&D</font> <img src="x.png"/> &lt;b&gt; [b]x[/b]'
    plan = record["plan"]
    plan["title"] = plan["objective"] = plan["roles"][0]["name"] = nasty
    plan["blocks"][0]["name"] = plan["keep_outs"][0]["why"] = nasty
    plan["blocks"][0]["steps"][0]["note"] = nasty
    plan["rule_book"]["rules"][0]["title"] = nasty
    record["findings"][0]["reason"] = nasty
    squeezed = flat(record).replace(" ", "")
    assert squeezed.count(nasty.replace(" ", "")) >= 8


@pytest.mark.parametrize(
    ("keys", "bad"),
    [
        (("title",), "a\u202eb"),
        (("objective",), "漢字"),
        (("blocks", 0, "name"), "x\x07y"),
        (("blocks", 0, "steps", 0, "note"), "🚁"),
        (("roles", 0, "name"), "שלום"),
        (("stand", "modes", 0, "name"), "fine"),
        (("card",), "\u200b"),
        (("abort", "actions", 0), "\ufeff"),
    ],
)
def test_unprintable_text_is_refused_not_blanked(keys: tuple[Any, ...], bad: str) -> None:
    record = sample_record(2)
    place: Any = record["plan"]
    for key in keys[:-1]:
        place = place[key]
    place[keys[-1]] = bad
    if bad == "fine":
        assert card_pdf(record)
        return
    with pytest.raises(UnprintableError, match=r"U\+[0-9A-F]{4}"):
        card_pdf(record)


def test_long_text_wraps_and_loses_nothing() -> None:
    record = sample_record(2)
    plan = record["plan"]
    long = " ".join(f"w{i:03d}" for i in range(400))[:2000]
    word = "Donaudampfschifffahrtsgesellschaftskapitänsmützenabzeichenträger"
    plan["objective"] = plan["blocks"][0]["steps"][0]["note"] = long
    plan["roles"][0]["name"] = long
    plan["rotor"]["blade"]["serials"][0] = word
    plan["title"] = f"{word} {long}"
    record["plan"]["rule_book"]["rules"][0]["basis"] = long
    for paper in ("a4", "letter"):
        text = flat(record, paper)
        for i in range(390):
            assert text.count(f"w{i:03d}") >= 5, i
        assert word in text.replace(" ", "")
        frame = frame_for(paper)
        for page in card_pages(Reading(record), frame):
            assert max(p.down + p.box.height for p in page) <= frame.height + 1e-6


@pytest.mark.parametrize("status", ["not computed", "not converged", "outside validity"])
def test_missing_prediction_prints_its_status(status: str) -> None:
    record = sample_record(2)
    for row in record["predictions"]["thrust"]["rows"]:
        row.update(status=status, value=None, low=None, high=None)
    text = flat(record)
    assert re.search(rf"Thrust NOT ASSESSED {status}", text)


def test_number_outside_validity_or_without_allowance_is_not_printed() -> None:
    record = sample_record(2)
    for row in record["predictions"]["thrust"]["rows"]:
        row.update(status="outside validity", value=6543.0, low=6543.0, high=6543.0)
    book = record["plan"]["rule_book"]
    book["allowances"] = [a for a in book["allowances"] if a["id"] != "torque"]
    entry = next(e for e in record["vocabulary"] if e["id"] == "torque")
    entry["allowance"] = "torque"
    text = flat(record)
    assert "654" not in text
    assert "Torque NOT ASSESSED no allowance torque" in text


def test_absent_quantity_is_not_assessed_and_absent_part_is_left_out() -> None:
    record = sample_record(2)
    del record["predictions"]["torque"]
    for row in record["predictions"]["up_stop_clearance"]["rows"]:
        row.update(status="does not apply", value=None, low=None, high=None)
    text = flat(record)
    assert "Torque NOT ASSESSED not computed" in text
    assert "Up gap" not in text


def test_missing_wind_cap_roles_and_confirmations_stop_the_run() -> None:
    record = sample_record(2)
    plan = record["plan"]
    plan["rule_book"]["wind_gust_cap_m_s"] = None
    plan["roles"] = []
    plan["rule_book"]["rules"] = [
        r for r in plan["rule_book"]["rules"] if r["kind"] != "confirmed"
    ]
    text = flat(record)
    assert "The rule book gives no cap for all of the wind: NOT ASSESSED, do not run." in text
    assert "the plan gives no one authority to call ABORT. Do not run." in text
    assert "NOT ASSESSED: the rule book asks for no confirmation" in text


def test_hingeless_hub_prints_without_stops() -> None:
    record = sample_record(3)
    rotor = record["plan"]["rotor"]
    rotor["droop_stop"] = rotor["up_stop"] = None
    rotor["hub"] = {
        "root_m": 0.1, "precone_rad": 0.04, "pitch_flap_coupling_rad": 0.0,
        "equivalent_hinge_m": None, "equivalent_spring_N_m_rad": None,
        "flap_damper_N_m_s_rad": 0.0, "root_moment_rating_N_m": 100.0, "kind": "hingeless",
    }  # fmt: skip
    flap = record["series"]["flap"]
    flap["droop_rad"] = flap["up_rad"] = [None] * len(flap["time_s"])
    text = flat(record)
    assert "none on this hub" in text
    assert re.search(r"Root NOT ASSESSED not computed", text)
    assert "see root" in text
    assert "this hub has no flap stops" in text


def test_approved_book_is_not_called_an_example() -> None:
    record = sample_record(2)
    record["plan"]["rule_book"]["approved"] = True
    assert "EXAMPLE" not in flat(record)


def test_fixed_stops_take_the_contact_speed_from_the_prediction() -> None:
    record = sample_record(2)
    record["plan"]["rotor"]["droop_stop"]["retraction"] = None
    text = flat(record)
    assert "speed of droop stop contact: NOT ASSESSED (not computed)" in text


def test_unknown_verdict_is_refused() -> None:
    record = sample_record(2)
    record["verdict"] = "FINE"
    with pytest.raises(ValueError, match=r"verdict must be one of .*; the record has 'FINE'"):
        card_pdf(record)


def test_every_margin_that_is_printed_has_a_unit() -> None:
    record = sample_record(2)
    for finding in record["findings"]:
        finding["segment_margins"] = {}
    text = flat(record)
    assert "see limits" in text
    for match in re.finditer(r"Droop gap (\S+)° \S+ to \S+° (\S+)", text):
        assert match.group(2).endswith("°") or match.group(2) == "see"


def test_run_numbers_print_with_range_and_status() -> None:
    record = sample_record(2)
    predictions = record["predictions"]
    predictions["air_density"] = {"study": "air", "rows": [run_row(1.21, 1.18, 1.24)]}
    missing = run_row(None, None, None) | {"status": "not converged", "reason": "it went round"}
    predictions["stop_free_speed"] = {"study": "stops", "rows": [missing]}
    book = record["plan"]["rule_book"]
    for entry in record["vocabulary"]:
        if entry["id"] == "air_density" and entry["allowance"]:
            book["allowances"].append({"id": entry["allowance"], "low": 1.0, "high": 1.0})
    text = flat(record)
    section = text[text.index("7 Predicted numbers") : text.index("8 Build-up rule")]
    assert "Air density 1.21 kg/m³ 1.18 to 1.24 kg/m³ ok" in section
    assert re.search(r"NOT ASSESSED — not converged: it went round", section)
    assert "Lock number NOT ASSESSED — not computed" in section


def run_row(value: float | None, low: float | None, high: float | None) -> Json:
    place = dict.fromkeys(("segment", "mode", "harmonic", "band", "state", "reason"), "")
    numbers = {"value": value, "low": low, "high": high, "status": "ok"}
    return {**place, **numbers, "speed_rad_s": None, "hand": None}


def test_hold_numbers_have_a_row_a_hold_and_words_for_what_is_missing() -> None:
    record = sample_record(3)
    holds = [s["id"] for s in record["segments"] if s["kind"] == "hold"]
    rows = [run_row(0.412, 0.412, 0.412) | {"segment": name} for name in holds]
    rows[1].update(value=None, low=None, high=None, status="outside validity")
    rows[2].update(value=None, low=None, high=None, status="does not apply")
    record["predictions"]["tip_mach"] = {"study": "tip", "rows": rows}
    text = flat(record)
    section = text[text.index("Of each hold") : text.index("8 Build-up rule")]
    assert all(name in section for name in holds)
    assert section.count("0.412") == 1
    assert "NOT ASSESSED: outside validity" in section
    assert "does not apply" in section


@pytest.mark.parametrize("accuracy", ["reads 2 to 19 % high (source, read)", "", None])
def test_accuracy_of_the_theory_is_a_caution_where_it_is_known(accuracy: str | None) -> None:
    record = sample_record(2)
    entry = next(e for e in record["vocabulary"] if e["id"] == "thrust")
    entry.pop("accuracy", None)
    if accuracy is not None:
        entry["accuracy"] = accuracy
    text = flat(record)
    assert ("How good: reads 2 to 19 % high (source, read)." in text) == bool(accuracy)
    assert ("How good" in text) == bool(accuracy)


def limit_part(record: Json) -> str:
    text = flat(record)
    return text[text.index("5 Limits") : text.index("6 Findings")]


def test_what_no_reading_shows_is_told_from_what_is_not_watched() -> None:
    record = sample_record(2)
    part = limit_part(record)
    assert part.count("nothing to watch") == 2  # spacing and rate
    assert part.count("no channel UNWATCHED") == 1  # power
    rule = next(r for r in record["plan"]["rule_book"]["rules"] if r["id"] == "spacing")
    rule["channel"] = "vibration"
    assert "vibration UNWATCHED" in limit_part(record)


def test_limits_table_breaks_no_word_that_a_wider_column_holds() -> None:
    record = sample_record(2)
    rules = record["plan"]["rule_book"]["rules"]
    word = "once-per-revolution-vibration"
    next(r for r in rules if r["id"] == "vibration")["channel"] = word
    for paper in ("a4", "letter"):
        pages = card_pages(Reading(record), frame_for(paper))
        lines = [
            line
            for page in pages
            for p in page
            if isinstance(p.box, TableRow) and "Channel / watcher" in p.box.table.head
            for cell in p.box.lines
            for line, _ in cell
        ]
        assert word in lines


def test_go_by_document_is_named_at_the_rows_that_rest_on_it() -> None:
    record = sample_record(2)
    ramp = next(s for s in record["segments"] if s["kind"] == "ramp")["id"]
    for quantity in ("droop_stop_clearance", "band_rate"):
        for row in record["predictions"][quantity]["rows"]:
            if row["segment"] in {ramp, "stop"}:
                row.update(status="outside validity", value=None, low=None, high=None)
    for finding in record["findings"]:
        finding["closed_by"] = {"droop-gap": "DOC-7, DOC-9", "rate": "DOC-8"}.get(
            finding["rule"], ""
        )
        if finding["rule"] == "rate":
            finding["segment_verdicts"] = {ramp: "GO", "stop": "GO"}
    documents = record["plan"]["documents"]
    for number, where, hazard_class in (("DOC-7", "ramp", "stops"), ("DOC-9", "stop", "stops")):
        about = {"number": number, "where": [where], "hazard_class": hazard_class}
        documents.append(documents[0] | about)
    for segment in record["segments"]:
        record["segment_verdicts"][segment["id"]] = "GO"
    reading = Reading(record)
    assert reading.documents_behind(ramp) == ["DOC-7", "DOC-8"]
    assert reading.documents_behind("stop") == ["DOC-9", "DOC-8"]
    assert reading.documents_behind("1.1h") == []
    text = flat(record)
    assert re.search(rf"{re.escape(ramp)} ○ GO by DOC-7, DOC-8 ", text)
    assert "stop ○ GO by DOC-9, DOC-8" in text
    assert re.search(r"stop K1 GO by DOC-8 PASS WITHOUT STOPPING", text)
    assert "1.1h ○ GO RUN" in text


def test_verdict_that_is_not_go_names_the_document_below() -> None:
    record = sample_record(2, "NOT ASSESSED")
    for row in record["predictions"]["torque"]["rows"]:
        row.update(status="not computed", value=None, low=None, high=None)
    next(f for f in record["findings"] if f["rule"] == "torque")["closed_by"] = "DOC-7"
    text = flat(record)
    assert "What is NOT ASSESSED here rests on DOC-7, not on a prediction." in text
    assert "1.1h ○ GO by DOC-7" in text


def test_missing_part_that_does_not_apply_rests_on_no_document() -> None:
    record = sample_record(2)
    for row in record["predictions"]["up_stop_clearance"]["rows"]:
        row.update(status="does not apply", value=None, low=None, high=None)
    next(f for f in record["findings"] if f["rule"] == "up-gap")["closed_by"] = "DOC-7"
    assert Reading(record).documents_behind("1.1h") == []


def test_weather_gate_has_blanks_for_lightning_and_icing() -> None:
    text = flat(sample_record(2))
    assert "Lightning see prerequisites — Icing see prerequisites —" in text


def test_loads_dangerous_on_both_sides_print_their_worse_end() -> None:
    record = sample_record(2)
    for row in record["predictions"]["thrust"]["rows"]:
        row.update(value=-1234.4, low=-2345.6, high=-345.6)
    entry = next(e for e in record["vocabulary"] if e["id"] == "thrust")
    assert entry["danger"] == "both"
    if entry["allowance"]:
        record["plan"]["rule_book"]["allowances"].append(
            {"id": entry["allowance"], "low": 0.7, "high": 1.05, "basis": "common practice"}
        )
    finding = next(f for f in record["findings"] if f["rule"] == "thrust")
    finding.update(low=-2345.6, high=-345.6)
    finding["segment_margins"]["1.1h"] = 777.7
    assert Reading(record).shown("thrust", "1.1h").text == "−2350\xa0N"
    text = flat(record)
    assert "Thrust −1240 N −2340 to −350 N 777 N" in text
    assert f"−2350 N at {finding['where']}" in text


def test_margin_that_is_not_known_of_one_gap_is_not_hidden_by_the_other() -> None:
    record = sample_record(2)
    reading = Reading(record)
    gaps = ("droop_stop_clearance", "up_stop_clearance")
    margins = [reading.margin("1.1r", gap) for gap in gaps]
    assert reading.margin("1.1r", *gaps) in margins
    next(f for f in record["findings"] if f["rule"] == "up-gap")["segment_verdicts"]["1.1r"] = (
        "NOT ASSESSED"
    )
    assert Reading(record).margin("1.1r", *gaps) == "NOT ASSESSED"
