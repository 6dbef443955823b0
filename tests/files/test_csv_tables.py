"""Station and polar tables: places and messages of their faults."""

import re

import pytest

from planner.files.csv_tables import POLAR_COLUMNS, STATION_COLUMNS, read_csv
from planner.files.faults import Fault, PlanFaults

HEADER = (
    "radius [m], chord [m], twist [deg], mass [kg/m], flap stiffness [N m2],"
    " lag stiffness [N m2], torsion stiffness [N m2], pitch inertia [kg m],"
    " c.g. offset [mm], a.c. offset [mm]"
)
ROW = "{}, 0.3, 1, 7, 3e4, 8e5, 2.8e4, 0.05, 2, 0"


def faults_of(text: str) -> list[str]:
    faults: list[Fault] = []
    assert read_csv("t.csv", text, STATION_COLUMNS, faults) is None
    return [str(fault) for fault in PlanFaults(faults).faults]


def table_of(*rows: str) -> str:
    return "\n".join([HEADER, *rows])


def test_units_of_the_header_are_converted():
    text = table_of(ROW.format(1), ROW.format(2)).replace("radius [m]", "radius [ft]")
    table = read_csv("t.csv", text, STATION_COLUMNS, [])
    assert table is not None
    assert table.values["radius"] == pytest.approx([0.3048, 0.6096])
    assert table.values["c.g. offset"] == pytest.approx([0.002, 0.002])
    assert table.lines == (2, 3)


def test_a_unit_on_a_bare_column_may_be_empty():
    text = "angle [deg], lift [], drag\n-180, 0, 0.1\n180, 0, 0.1"
    table = read_csv("t.csv", text, POLAR_COLUMNS, [])
    assert table is not None
    assert set(table.values) == {"angle", "lift", "drag"}


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("2, 0.3", "2, abc", '3:4: chord: expected a number of at least 0, found "abc"; write'),
        ("2, 0.3", "2, ", '3:3: chord: expected a number of at least 0, found ""; write a plain'),
        ("2, 0.3", "2, nan", '3:4: chord: expected a number of at least 0, found "nan"; write'),
        ("2, 0.3", "2, inf", 'found "inf"; write a plain number'),
        ("2, 0.3", "2, 1e999", 'found "1e999"; write a finite number'),
        ("2, 0.3", "2, 1_0", 'found "1_0"; write a plain number'),
        ("2, 0.3", "2, ٣", 'found "٣"; write a plain number'),
        ("2, 0.3", "2, -0.3", 'chord: expected a number of at least 0, found "-0.3"; correct'),
        ("1, 7,", "1, 0,", '3:12: mass: expected a number above 0, found "0"; correct the value'),
        ("1, 7,", "1, -7,", '3:12: mass: expected a number above 0, found "-7"; correct the'),
        ("2, 0.3", "2, 0,3", "3:1: expected 10 cells, found 11 cells; fill every column, and wri"),
        (", 2, 0", ", 2", "3:1: expected 10 cells, found 9 cells; fill every column, and write"),
        ("2, 0.3", '2, "0.3"', 'found ""0.3""; write a plain number'),
    ],
)
def test_a_bad_cell_is_found_at_its_place(old, new, message):
    (fault,) = faults_of(table_of(ROW.format(1), ROW.format(2).replace(old, new, 1)))
    assert f":{message}" in fault or message in fault


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("chord [m]", "cord [m]", '1:13: expected one of the columns radius, chord, .* found "cord'
            ' \\[m\\]"; did you mean "chord"\\?'),
        ("chord [m]", "colour", 'found "colour"; remove the column'),
        ("chord [m]", "radius [m]", '1:13: radius: expected each column once, found "radius'),
        ("chord [m]", "chord [kg]", "1:13: chord: expected a unit of length: \\[m\\], \\[mm\\],"
            ' .* found "chord \\[kg\\]"; write for example "chord \\[m\\]"'),
        ("chord [m]", "chord", "chord: expected a unit of length"),
        (", chord [m]", "", '1:1: chord: expected a column "chord", found none; add the column'
            ' "chord \\[m\\]"'),
    ],
)  # fmt: skip
def test_a_bad_header_is_found_at_its_place(old, new, message):
    faults = faults_of(HEADER.replace(old, new) + "\n")
    assert any(re.search(f"^t.csv:.*{message}", fault) for fault in faults)


def test_semicolons_are_explained():
    (fault,) = faults_of(HEADER.replace(",", ";"))
    assert fault.endswith("separate columns by commas, decimals by points")
    assert "1:1: expected columns separated by commas" in fault


def test_a_table_needs_two_rows():
    (fault,) = faults_of(table_of(ROW.format(1)))
    assert fault == "t.csv:2:1: expected 2 to 20000 rows, found 1; add or thin out rows"


def test_an_endless_table_of_faults_is_cut_short():
    faults = faults_of(table_of(*["x"] * 15_000))
    assert len(faults) == 21
    assert "found 14980 more faults; mend those above first" in faults[-1]


@pytest.mark.parametrize(
    ("name", "old", "new", "message"),
    [
        ("blade.csv", "7.2, 3.3,", "7.2, ¦1.1,",
            "radius: expected a radius above 1.1 m of the row before, found 1.1 m; order the"),
        ("blade.csv", "11.0, 0.2,", "11.0, ¦0.3,",
            "radius: expected a first station at or inside 0.2 m, where the blade is hinged"),
        ("blade.csv", "6.8, 5.5,", "6.8, ¦5.4,",
            "radius: expected a last station at the tip radius 5.5 m, found 5.4 m"),
        ("blade.csv", "8.0, 1.1, 360", "8.0, 1.1, ¦0",
            "chord: expected a chord above 0 from aero_root 1.1 m on, found 0 m"),
        ("outer.csv", "0.3, 0, 0, 0.01", "0.3, ¦-180, 0, 0.01",
            "angle: expected an angle above -10 deg of the row before, found -180 deg"),
        ("outer.csv", "0.6, -180,", "0.6, ¦-90,",
            "angle: expected a first angle of -180 deg, or between -60 deg and -4 deg, found -90"),
        ("outer.csv", "0.6, 180,", "0.6, ¦15,",
            "angle: expected a last angle of 180 deg, or between 4 deg and 60 deg, found 15 deg"),
        ("outer.csv", "0.3, 0, 0, 0.01", "0.3, 0, 0, ¦-0.01",
            'drag: expected a number of at least 0, found "-0.01"'),
    ],
)  # fmt: skip
def test_tables_of_a_plan_are_checked_at_their_place(folder, name, old, new, message):
    (line,) = folder.edit(name, old, new).lines()
    assert line.startswith(f"{folder.marks[0]}: {message}")


def test_polar_blocks_are_in_order_of_mach(folder):
    text = (folder.path / "outer.csv").read_text("utf-8")
    block = text[text.index("0.6, -180") :]
    folder.edit("outer.csv", block, "¦" + block.replace("0.6,", "0.2,"))
    (line,) = folder.lines()
    assert line.startswith(f"{folder.marks[0]}: mach: expected mach of at least 0.3 of the row")


def test_inline_stations_are_checked_too(folder):
    station = """[[blade.station]]
radius = {}
chord = "0.3 m"
twist = "1 deg"
mass = "7 kg/m"
flap_stiffness = "30 kN m2"
lag_stiffness = "800 kN m2"
torsion_stiffness = "28 kN m2"
pitch_inertia = "0.05 kg m"
cg_offset = "2 mm"
ac_offset = "0 mm"
"""
    rows = [station.format(text) for text in ('"0.2 m"', '"2 m"', '¦"2 m"', '"5.5 m"')]
    folder.edit("rotor.toml", 'stations = "blade.csv"\n', "".join(rows))
    (line,) = folder.lines()
    assert line.startswith(
        f"{folder.marks[0]}: blade.station.radius: expected a radius above 2 m of the row before"
    )


def test_one_inline_station_is_too_few(folder):
    folder.edit("rotor.toml", 'stations = "blade.csv"\n', '[[blade.station]]\nradius = "1 m"\n')
    assert any("expected at least 2 stations, found 1" in line for line in folder.lines())


def test_csv_in_another_encoding_is_refused(folder):
    raw = (folder.path / "blade.csv").read_bytes()
    folder.write("blade.csv", raw.replace(b"stations", b"\xfcber"))
    (line,) = folder.lines()
    assert line == "blade.csv:1:3: expected UTF-8 text, found byte 0xFC; save it as UTF-8"


def test_polar_with_too_few_angles_is_refused(folder):
    folder.edit("outer.csv", "0.6, -10, -0.8, 0.03\n", "")
    (line,) = folder.lines()
    assert "angle: expected at least 5 angles for each mach, found 4; tabulate more" in line
