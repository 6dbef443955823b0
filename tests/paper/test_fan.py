from __future__ import annotations

import io
import itertools

import pypdf
import pytest
from reportlab.graphics.shapes import Drawing, Polygon, PolyLine

from planner.paper.card import card_pdf
from planner.paper.fan import fan_boxes, fan_csv, fan_pdf, fan_svg
from planner.paper.fan_chart import fan_drawing, stretches
from planner.paper.fan_panels import FAMILIES, counts_rotor, panels
from planner.paper.fan_rays import name_rays
from planner.paper.fan_tables import measured_boxes
from planner.paper.fan_words import exempting_damping
from planner.paper.pages import frame_for, paginate
from planner.paper.plot import Area, Plot
from planner.paper.reading import Reading
from tests.paper.sample_record import Json, sample_record, without_panels
from tests.paper.test_charts import labels, words

BLADE, STAND, SHAFT = ((family,) for family in FAMILIES)


def drawn(record: Json, families: tuple[str, ...] = BLADE) -> list[str]:
    return words(fan_drawing(Reading(record), families, 760.0, 420.0))


def curve(record: Json, name: str) -> Json:
    found: Json = next(m for m in record["series"]["fan"]["modes"] if m["name"] == name)
    return found


def flat(data: bytes) -> list[str]:
    pages = pypdf.PdfReader(io.BytesIO(data)).pages
    return [" ".join(page.extract_text().split()).replace("\xa0", " ") for page in pages]


@pytest.mark.parametrize(
    ("families", "there", "absent"),
    [
        (BLADE, {"Blade modes, turning frame, pitch 8°", "flap 1", "lag 1", "torsion 1", "1P",
                 "8P"}, {"stand rocking", "lag 1, Ω - ω", "12P"}),
        (STAND, {"Stand modes, fixed frame; thin: blade modes as the stand sees them", "1P", "4P",
                 "8P", "12P", "stand rocking", "stand twist (NOT ASSESSED)", "lag 1, Ω - ω",
                 "lag 1, Ω + ω"}, {"flap 1", "2P", "shaft first"}),
        (SHAFT, {"Shaft modes, torsion", "shaft first", "4P", "8P", "12P"}, {"1P", "flap 1"}),
    ],
)  # fmt: skip
def test_each_panel_names_its_modes_rays_and_bands(
    families: tuple[str, ...], there: set[str], absent: set[str]
) -> None:
    found = set(drawn(sample_record(12), families))
    common = {"keep-out K1", "keep-out K2", "rotor speed [rpm]", "frequency [Hz]",
              "time at speed [min]"}  # fmt: skip
    assert there | common <= found
    assert not absent & found


def test_mode_labels_do_not_overlap_with_many_modes() -> None:
    record = sample_record(2)
    fan = record["series"]["fan"]
    fan["modes"] = [{**fan["modes"][0], "name": f"flap {i}"} for i in range(1, 15)]
    drawing = fan_drawing(Reading(record), BLADE, 720.0, 400.0)
    heights = sorted(label.y for label in labels(drawing) if label.text.startswith("flap "))
    assert len(heights) == 14
    assert min(b - a for a, b in itertools.pairwise(heights)) >= 9.0


def test_no_two_words_stand_on_each_other_on_the_stacked_page() -> None:
    record = sample_record(12)
    first = curve(record, "shaft first")
    record["series"]["fan"]["modes"] += [
        {**first, "name": f"shaft train {i}", "frequency_rad_s": [w] * 41}
        for i, w in enumerate((0.0, 60.0, 90.0, 2e3, 3e3, 4e3, 5e3))
    ]
    drawing = fan_drawing(Reading(record), (*STAND, *SHAFT), 736.0, 415.0)
    right = sorted(label.y for label in labels(drawing) if label.x > 560.0)
    assert min(b - a for a, b in itertools.pairwise(right)) >= 9.0


def test_what_is_not_drawn_gives_way_and_is_counted() -> None:
    record = sample_record(2)
    mode = curve(record, "shaft first")
    record["series"]["fan"]["modes"] += [
        {**mode, "name": f"shaft train {i}", "frequency_rad_s": [9e4] * 41} for i in range(30)
    ]
    found = words(fan_drawing(Reading(record), SHAFT, 760.0, 250.0))
    counted = [text for text in found if "not drawn: see the table" in text]
    assert len(counted) == 1
    assert "shaft first" in found


def test_chart_says_what_it_cannot_draw() -> None:
    record = sample_record(2)
    curve(record, "flap 1")["frequency_rad_s"] = [None] * 41
    curve(record, "flap 2")["frequency_rad_s"] = [9e4] * 41
    found = drawn(record)
    assert "flap 1: NOT ASSESSED" in found
    assert "flap 2: above the chart" in found


@pytest.mark.parametrize("part", [None, {"height_m": 8.0}])
def test_family_without_a_mode_is_not_assessed(part: Json | None) -> None:
    record = sample_record(2)
    fan = record["series"]["fan"]
    fan["modes"] = [mode for mode in fan["modes"] if mode["panel"] == "blade"]
    record["plan"]["stand"] |= {"modes": [], "drive_train": None, "column": part}
    why = "the stand file gives no stand mode" if part is None else "no stand mode was computed"
    assert f"{why}: NOT ASSESSED" in drawn(record, STAND)
    assert "the stand file gives no shaft mode: NOT ASSESSED" in drawn(record, SHAFT)


@pytest.mark.parametrize(
    ("given", "counts"),
    [
        ({"rotor_fitted": True, "family": "shaft"}, True),
        ({"rotor_fitted": None, "family": "stand"}, False),
        ({"rotor_fitted": False, "family": "stand"}, False),
        ({"rotor_fitted": False, "family": "stand", "modal_mass_kg": 1.0,
          "missing_mass_kg": 2.0}, True),
        ({"rotor_fitted": False, "family": "shaft", "modal_mass_kg": 1.0,
          "missing_mass_kg": 2.0}, False),
    ],
)  # fmt: skip
def test_given_mode_counts_the_rotor_fitted_or_mended(given: Json, *, counts: bool) -> None:
    assert counts_rotor(given) is counts


@pytest.mark.parametrize("families", [BLADE, STAND, SHAFT])
def test_lines_differ_without_colour(families: tuple[str, ...]) -> None:
    drawing = fan_drawing(Reading(sample_record(2)), families, 760.0, 420.0)
    for shape in drawing.contents:
        colour = getattr(shape, "strokeColor", None)
        if colour is not None:
            assert colour.red == colour.green == colour.blue
    styles = {
        tuple(shape.strokeDashArray or ())
        for shape in drawing.contents
        if isinstance(shape, PolyLine) and shape.strokeWidth in {0.8, 1.5}
    }
    (panel,) = panels(Reading(sample_record(2)), families)
    assert len(styles) >= min(6, len(panel.curves))


def test_high_stand_mode_brings_a_close_up_of_the_lowest() -> None:
    record = sample_record(2)
    assert "The same, lowest frequencies" not in drawn(record, STAND)
    curve(record, "stand twist")["frequency_rad_s"] = [500.0] * 41
    found = drawn(record, STAND)
    assert "The same, lowest frequencies" in found
    assert found.count("stand rocking") == found.count("lag 1, Ω - ω") == 2
    assert "stand twist: above the chart" in found


def test_bands_close_together_are_named_by_their_ids() -> None:
    record = sample_record(2)
    band = record["plan"]["keep_outs"][0]
    record["plan"]["keep_outs"] = [
        {**band, "id": f"B{i}", "from_rad_s": 10.0 + i, "to_rad_s": 10.5 + i} for i in range(6)
    ]
    found = drawn(record)
    assert {f"B{i}" for i in range(6)} <= set(found)
    assert not [text for text in found if text.startswith("keep-out")]


def test_time_at_speed_stands_above_its_bin() -> None:
    record = sample_record(2)
    record["series"]["fan"]["time_at_speed"] = {
        "edges_rad_s": [0.0, 10.0, 20.0, 30.0], "seconds": [0.0, 600.0, 1.0]
    }  # fmt: skip
    drawing = fan_drawing(Reading(record), BLADE, 760.0, 420.0)
    bars = [
        shape.points
        for shape in drawing.contents
        if isinstance(shape, PolyLine) and len(shape.points) == 8 and shape.strokeWidth == 0.5
    ]
    assert len(bars) == 2
    tall, low = (bar[3] - bar[1] for bar in bars)
    assert 30.0 < tall < 42.0
    assert 1.0 < low < 2.0
    assert bars[0][4] == pytest.approx(bars[1][0])


def test_record_of_before_there_were_panels_prints() -> None:
    record = without_panels(sample_record(6))
    found = drawn(record, STAND)
    assert "time at speed: not in this record" in found
    assert "Stand modes, fixed frame; harmonics: not in this record" in found
    assert {"stand rocking", "stand twist (NOT ASSESSED)"} <= set(found)
    assert "Blade modes, turning frame" in drawn(record)
    text = " ".join(flat(fan_pdf(record)))
    for words_ in (
        "Blade modes are uncoupled.",
        "Sway of the hub while a stand mode is passed: NOT ASSESSED (not computed).",
        "Rate of run-up needed Slowest even rate of run-up whose sway stays below what the stand "
        "bears. NOT ASSESSED (not computed).",
        "does not state how many (reentries).",
        "No frequency was measured",
        "Distance of shifted blade modes from stand modes: NOT ASSESSED (not computed).",
    ):
        assert words_ in text
    assert fan_svg(record)
    assert fan_csv(record)


def test_card_has_one_page_for_blades_and_one_for_stand_and_shaft() -> None:
    for paper in ("a4", "letter"):
        frame = frame_for(paper)
        pages = paginate(fan_boxes(Reading(sample_record(3)), frame, "Fan"), frame.height)
        assert len(pages) == 2
        assert all(max(p.down + p.box.height for p in page) <= frame.height for page in pages)


@pytest.mark.parametrize("paper", ["a4", "letter"])
def test_pdf_prints_a_page_a_panel_and_tables(paper: str) -> None:
    data = fan_pdf(sample_record(5), paper)
    assert data == fan_pdf(sample_record(5), paper)
    pages = flat(data)
    for number, family in enumerate(FAMILIES, 1):
        assert f"Page {number} of {len(pages)}" in pages[number - 1]
        assert f"Fan chart: {family} modes" in pages[number - 1]
        assert "frequency [Hz]" in pages[number - 1]
    rest = " ".join(pages[3:])
    assert pages[3].count("Passing resonances") == 1
    assert "Mode 1 per rev 2 per rev 3 per rev" in rest
    assert "flap 1 292 (282–302) — — —" in rest
    assert "stand rocking 150 (145–156) — — — shaft first" in rest


def test_pdf_tells_measurements_beside_the_correction() -> None:
    record = sample_record(2)
    one = {"mode": "flap 2", "frequency_rad_s": 22.0, "speed_rad_s": 0.0, "collective_rad": 0.0,
           "accuracy": 0.01, "source": "rap test"}  # fmt: skip
    record["plan"]["rotor"]["measured_modes"] = [one, {**one, "speed_rad_s": 30.0}]
    record["plan"]["stand"]["measured_modes"] = [{**one, "mode": "stand column 1"}]
    text = " ".join(flat(fan_pdf(record))[3:])
    assert "flap 2 3.5014 Hz ± 1 % at rest, pitch 0° 3.5014 Hz ± 1 % at 286.48 rpm" in text
    assert "rap test −2.1 % (−2.3 to −1.9 %) 1.3 % (1.2 to 1.4 %)" in text
    assert "stand column 1 3.5014 Hz ± 1 % at rest, pitch 0° rap test NOT ASSESSED" in text
    for row in record["predictions"]["frequency_correction"]["rows"]:
        row.update(value=0.03, low=0.03, high=0.03)
    assert "rap test +3.0 %" in " ".join(flat(fan_pdf(record))[3:])


def test_pdf_tells_the_nearest_hold_of_each_pair_or_what_is_missing() -> None:
    record = sample_record(6)
    rows = record["predictions"]["fixed_frame_spacing"]["rows"]
    mine = [row for row in rows if row["harmonic"] == "stand rocking, Ω - ω"]
    mine[2].update(low=0.031)
    text = " ".join(flat(fan_pdf(record))[3:])
    assert f"lag 1 stand rocking, Ω - ω 3.1 % {mine[2]['segment']} no limit" in text
    mine[1].update(status="not converged", reason="it wanders", value=None, low=None, high=None)
    text = " ".join(flat(fan_pdf(record))[3:])
    assert "NOT ASSESSED (not converged: it wanders)" in text
    for row in rows:
        row.update(status="does not apply", mode="", harmonic="", reason="there is no stand mode")
    text = " ".join(flat(fan_pdf(record))[3:])
    assert "Does not apply (there is no stand mode): all blade modes against stand modes" in text


def test_pairs_that_do_not_apply_share_a_sentence_with_their_numbers() -> None:
    record = sample_record(2)
    for row in record["predictions"]["fixed_frame_spacing"]["rows"]:
        if row["harmonic"].endswith("Ω + ω"):
            row.update(status="does not apply", reason="seen ahead", low=0.1234)
    text = " ".join(flat(fan_pdf(record))[3:])
    assert (
        "Does not apply (seen ahead): lag 1 against stand rocking Ω + ω (for information" in text
    )
    assert "(for information 12.3 %)." in text
    assert "NOT ASSESSED (seen ahead" not in text


def test_exempting_damping_is_printed_and_a_hold_that_is_judged_comes_first() -> None:
    record = sample_record(3)
    first = record["plan"]["rule_book"]["rules"][0]
    record["plan"]["rule_book"]["rules"].append(
        {**first, "id": "shifted", "quantity": "fixed_frame_spacing", "where": ["hold"],
         "mode_family": "lag", "mode_orders": [1], "exempt_damping": 0.1, "unit": "%"}
    )  # fmt: skip
    record["findings"].append({**record["findings"][0], "rule": "shifted", "limit": 0.05})
    rows = record["predictions"]["fixed_frame_spacing"]["rows"]
    holds = list(dict.fromkeys(row["segment"] for row in rows))
    made = [
        {**rows[0], "segment": hold, "mode": "lag 1", "harmonic": "", "value": d, "low": d - 0.01,
         "high": d, "hand": None}
        for hold, d in zip(holds, (0.31, 0.21, 0.105), strict=True)
    ]  # fmt: skip
    record["predictions"]["mode_damping"] = {"study": "sample", "rows": made}
    reading = Reading(record)
    told = [exempting_damping(reading, "fixed_frame_spacing", row) for row in rows[::2]]
    assert [text.replace("\xa0", " ") for text in told] == ["30.0 %", "20.0 %", ""]
    text = " ".join(flat(fan_pdf(record))[3:])
    assert f"{holds[2]} at least 5 %" in text
    made[2].update(low=0.1)
    text = " ".join(flat(fan_pdf(record))[3:])
    assert "exempt by damping 30.0 %" in text
    assert "Damping that exempts counts dampers in order." in text


def test_modes_without_crossings_and_those_unknown_are_told_apart() -> None:
    record = sample_record(2)
    rows = record["predictions"]["crossing_speed"]["rows"]
    rows += [{**rows[0], "value": 20.0, "low": 20.0, "high": 20.0}]
    flag = {"harmonic": "", "status": "not stated", "reason": "no mass", "value": None}
    rows += [{**rows[0], **flag, "mode": "stand twist"}]
    text = " ".join(flat(fan_pdf(record))[3:])
    assert "flap 1 292 (282–302) 191 — — —" in text
    assert "flap 3 — — — — — — — —" in text
    assert "stand twist: NOT ASSESSED (not stated: no mass)." in text
    assert "stand twist —" not in text


def test_card_lists_measured_frequencies_only_where_there_are_any() -> None:
    record = sample_record(2)
    frame = frame_for("a4")
    assert not measured_boxes(Reading(record), frame, is_short=True)
    one = {"mode": "flap 2", "frequency_rad_s": 22.0, "speed_rad_s": 0.0, "collective_rad": 0.0,
           "accuracy": 0.01, "source": "rap test"}  # fmt: skip
    record["plan"]["rotor"]["measured_modes"] = [one]
    text = " ".join(flat(card_pdf(record)))
    assert "Mode Measured Correction Left open flap 2 3.5014 Hz ± 1 % at rest, pitch 0°" in text
    assert "below the lowest the rule book's allowance on the uncorrected model counts too" in text
    record["predictions"]["frequency_correction"]["rows"] = []
    row = record["predictions"]["crossing_speed"]["rows"][0]
    row = {**row, "mode": "flap 2", "status": "outside validity", "reason": "30 % apart"}
    record["predictions"]["mode_frequency"] = {"study": "sample", "rows": [row]}
    text = " ".join(flat(fan_pdf(record))[3:])
    assert "NOT ASSESSED (outside validity: 30 % apart)" in text


def test_a_name_that_goes_over_to_another_branch_leaves_a_gap() -> None:
    record = sample_record(2)
    assert "a gap: two modes" not in drawn(record)
    for mode in (curve(record, "flap 2"), record["series"]["fan"]["shifted"][0]):
        mode["breaks"] = [0, 19]
    assert {"a gap: two modes", "exchange their names"} <= set(drawn(record))
    for family, name in (("blade", "flap 2"), ("stand", "lag 1, Ω - ω")):
        (panel,) = panels(Reading(record), (family,))
        broken = next(c for c in panel.curves if c.name == name)
        area = Area(0.0, 0.0, 500.0, 300.0, (0.0, 500.0), (0.0, 1e3))
        assert [len(piece) for piece in stretches(broken, area)] == [1, 19, 21]


def test_names_of_rays_keep_off_curves_where_they_can_and_lie_above_them() -> None:
    drawing = Drawing(500.0, 300.0)
    plot = Plot(drawing, Area(0.0, 0.0, 500.0, 300.0, (0.0, 300.0), (0.0, 12.0)))
    curve_ = [(0.0, 100.0), (300.0, 110.0), (500.0, 125.0)]  # ends where the ray 1P ends
    name_rays(plot, (1, 2), [curve_])
    places = {label.text: (label.x, label.y) for label in labels(drawing)}
    assert places["1P"][1] + 8.0 < 110.0 + (places["1P"][0] - 300.0) * 15.0 / 200.0
    assert places["2P"][1] > 200.0
    everywhere = [[(0.0, y), (500.0, y)] for y in range(0, 300, 4)]
    name_rays(plot, (1,), everywhere)
    assert labels(drawing)[-1].x > 460.0
    assert isinstance(drawing.contents[-2], Polygon)


def test_stand_panel_that_shares_a_page_is_cut_above_its_own_modes() -> None:
    record = sample_record(2)
    curve(record, "stand twist")["frequency_rad_s"] = [900.0] * 41
    drawing = fan_drawing(Reading(record), (*STAND, *SHAFT), 760.0, 420.0)
    assert "stand twist: above the chart" in words(drawing)
    titles = {label.text: label.y for label in labels(drawing)}
    stand = next(y for text, y in titles.items() if text.startswith("Stand modes"))
    rocking, shaft = (titles[name] for name in ("stand rocking", "Shaft modes, torsion"))
    assert 0.2 < (rocking - shaft) / (stand - shaft) < 0.4


def test_pdf_without_crossings_says_so() -> None:
    record = sample_record(2)
    del record["predictions"]["crossing_speed"]
    assert "Crossing speeds: NOT ASSESSED (not computed)." in " ".join(flat(fan_pdf(record)))
