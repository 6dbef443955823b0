"""A whole plan folder into the model: values, files, and faults of several files at once."""

import hashlib
import math
import time

import pytest

from planner.files.source import LARGEST_FILE_BYTES
from planner.model.plan import Cyclic, segments
from planner.model.rotor import ArticulatedHub, PolarSection, SymmetricSection

RPM = math.pi / 30.0


def test_papers_and_site_are_read_in_si(folder):
    plan = folder.read().plan
    assert plan.issued == "2026-11-30 08:00 UTC"
    assert plan.planned_finish == "2026-12-01 12:00 +01:00"
    assert plan.site.temperature_K == pytest.approx(283.15)
    assert plan.site.relative_humidity == pytest.approx(0.6)
    assert plan.site.averaging_time_s == pytest.approx(120.0)
    assert plan.site.pressure_Pa is None
    assert plan.roles[0].name == ""
    assert plan.extra_classes == ("noise",)
    assert plan.documents[0].date == "2026-10-01"
    assert plan.documents[0].speed_limit_rad_s == pytest.approx(1.05 * 380.0 * RPM)
    assert plan.keep_outs[0].to_rad_s == pytest.approx(0.65 * 380.0 * RPM)
    assert plan.shutdown.brake_from_rad_s == pytest.approx(95.0 * RPM)


def test_schedule_is_read_with_its_ramp_times(folder):
    first, second = folder.read().plan.blocks[0].steps
    assert first.speed_rad_s == pytest.approx(190.0 * RPM)
    assert first.cyclic == Cyclic(trimmed=True)
    assert first.window.speed_rad_s == pytest.approx(1.9 * RPM)
    assert second.ramp_time_s == pytest.approx(190.0 / 5.0)
    assert second.cyclic.sine_rad == pytest.approx(math.radians(1.0))
    assert second.note == "look"


def test_one_speed_written_in_two_ways_is_one_speed(folder):
    plan = folder.read().plan
    endurance = plan.blocks[1]
    assert endurance.steps[0].speed_rad_s == plan.blocks[0].steps[1].speed_rad_s
    assert endurance.steps[1].ramp_time_s == 0.0
    ids = [segment.id for segment in segments(plan)]
    assert ids == ["1.1r", "1.1h", "1.2r", "1.2h", "2.1r", "2.1h", "2.2h", "stop"]


def test_rotor_is_read(folder):
    rotor = folder.read().plan.rotor
    assert rotor.clockwise
    assert isinstance(rotor.hub, ArticulatedHub)
    assert rotor.hub.flap_hinge_m == pytest.approx(0.2)
    assert rotor.blade.stations.chord_m == pytest.approx([0.0, 0.36, 0.36, 0.36])
    assert rotor.blade.stations.mass_kg_m[0] == 11.0
    inner, outer = (span.section for span in rotor.blade.sections)
    assert isinstance(inner, SymmetricSection)
    assert inner.lift_slope_per_rad == pytest.approx(0.1 * 180.0 / math.pi)
    assert isinstance(outer, PolarSection)
    assert outer.mach == pytest.approx([0.3, 0.6])
    ten = math.radians(10.0)
    assert outer.angle_rad[0] == pytest.approx([-math.pi, -ten, 0.0, ten, math.pi])
    assert outer.drag[1] == pytest.approx([0.06, 0.03, 0.02, 0.03, 0.06])
    assert outer.moment[0] == pytest.approx([0.0] * 5)
    assert rotor.droop_stop is not None
    assert rotor.droop_stop.retraction is not None
    assert rotor.droop_stop.retraction.release_rad_s == pytest.approx(190.0 * RPM)


def test_inline_stations_equal_the_same_stations_in_csv(folder):
    from_csv = folder.read().plan.rotor.blade.stations
    rows = [(0.2, 0), (1.1, 0.36), (5.5, 0.36)]
    folder.edit("rotor.toml", 'stations = "blade.csv"\n', "\n".join(inline(*row) for row in rows))
    inlined = folder.read().plan.rotor.blade.stations
    assert inlined.radius_m == pytest.approx(from_csv.radius_m[[0, 1, 3]])
    assert inlined.chord_m == pytest.approx([0.0, 0.36, 0.36])


def inline(radius: float, chord: float) -> str:
    return f"""[[blade.station]]
radius = "{radius} m"
chord = "{chord} m"
twist = "1 deg"
mass = "7 kg/m"
flap_stiffness = "30 kN m2"
lag_stiffness = "800 kN m2"
torsion_stiffness = "28 kN m2"
pitch_inertia = "0.05 kg m"
cg_offset = "2 mm"
ac_offset = "0 mm"
"""


def test_hingeless_and_teetering_hubs_are_read(folder):
    text = (folder.path / "rotor.toml").read_text("utf-8")
    head = text[: text.index("[hub]")]
    hingeless = """[hub]
kind = "hingeless"
root = "0.2 m"
precone = "2 deg"
pitch_flap_coupling = "0 deg"
flap_damper = "0 N m s/rad"
root_moment_rating = "5 kN m"
"""
    folder.write("rotor.toml", (head + hingeless).encode())
    rotor = folder.read().plan.rotor
    assert rotor.hub.kind == "hingeless"
    assert rotor.droop_stop is None
    teetering = """[hub]
kind = "teetering"
precone = "2 deg"
teeter_spring = "0 N m/rad"
teeter_damper = "0 N m s/rad"
pitch_flap_coupling = "0 deg"
"""
    stops = text[text.index("[droop_stop]") :]
    two = head.replace("blades = 4", "blades = 2").replace('"S1", "S2", "S3", "S4"', '"S1", "S2"')
    folder.write("rotor.toml", (two + teetering + stops).encode())
    folder.edit("blade.csv", "11.0, 0.2,", "11.0, 0.0,")
    assert folder.read().plan.rotor.hub.kind == "teetering"


def test_stand_is_read(folder):
    stand = folder.read().plan.stand
    assert stand.mounting == "axis level"
    assert stand.speed_gauge_error_rad_s == pytest.approx(1.9 * RPM)
    assert stand.drive.overspeed_trip_rad_s == pytest.approx(399.0 * RPM)
    assert stand.brake_below_rad_s == pytest.approx(133.0 * RPM)
    assert stand.modes[0].rotor_fitted is None
    assert stand.modes[1].rotor_fitted is True
    assert stand.modes[0].frequency_rad_s == pytest.approx(9.2 * 2.0 * math.pi)
    assert stand.positions[0].height_m == -1.7


def test_rule_book_is_read(folder):
    book = folder.read().plan.rule_book
    droop, spacing, speed, tip, bearing, heads = book.rules
    assert droop.limit is not None
    assert droop.limit.constant == pytest.approx(math.radians(2.0))
    assert droop.unit == "deg"
    assert droop.caution is not None
    assert droop.caution.table is not None
    assert droop.caution.table[1] == pytest.approx((380.0 * RPM, math.radians(3.0)))
    assert droop.speed_range.from_reference == "stop_free_speed"
    assert droop.speed_range.from_rad_s == 1.0
    assert droop.speed_range.to_rad_s == pytest.approx(418.0 * RPM)
    assert spacing.mode_orders == (1, 2)
    assert spacing.exempt_damping == pytest.approx(0.1)
    assert speed.limit is not None
    assert speed.limit.share == pytest.approx(0.95)
    assert speed.limit.reference == "proven_speed"
    assert tip.limit is not None
    assert tip.limit.constant == 0.8
    assert (bearing.caution_text, bearing.abort_text) == ("90 degC", "100 degC")
    assert heads.when == "before rotation"
    assert book.extra_classes == (("vibration", "Vibration"),)
    assert book.stop_free_margin == pytest.approx(0.1)


def test_several_books_are_merged_to_the_stricter(folder):
    folder.edit("plan.toml", '["rules.toml"]', '["rules.toml", "more.toml"]')
    more = b"""name = "More"
revision = "1"
owner = "office"
approved = true
stop_free_margin = "15 %"
wind_cap = { mean = "10 m/s", gust = "20 m/s", basis = "stand" }
"""
    book = folder.write("more.toml", more).read().plan.rule_book
    assert book.name == "Test book + More"
    assert book.owner == "office"
    assert not book.approved
    assert (book.wind_mean_cap_m_s, book.wind_gust_cap_m_s) == (10.0, 17.0)
    assert book.stop_free_margin == pytest.approx(0.15)


def test_files_carry_their_digests_in_reading_order(folder):
    files = folder.read().files
    names = ["plan.toml", "rotor.toml", "blade.csv", "outer.csv", "stand.toml", "rules.toml"]
    assert [file.name for file in files] == names
    raw = (folder.path / "blade.csv").read_bytes()
    assert files[2].sha256 == hashlib.sha256(raw).hexdigest()
    assert files[2].size == len(raw)


def test_the_plan_file_may_be_named_itself_and_others_may_lie_elsewhere(folder):
    (folder.path.parent / "books").mkdir()
    (folder.path / "rules.toml").rename(folder.path.parent / "books" / "rules.toml")
    folder.edit("plan.toml", '["rules.toml"]', '["../books/rules.toml"]')
    folder.path = folder.path / "plan.toml"
    loaded = folder.read()
    assert loaded.files[-1].name == "../books/rules.toml"


def test_bom_and_windows_line_ends_are_read_with_the_same_places(folder):
    for name in ("plan.toml", "rotor.toml", "blade.csv", "rules.toml"):
        raw = (folder.path / name).read_bytes()
        folder.write(name, b"\xef\xbb\xbf" + raw.replace(b"\n", b"\r\n"))
    assert folder.read().plan.title == "Run-up"
    text = (folder.path / "rotor.toml").read_bytes()
    folder.write("rotor.toml", text.replace(b'"5.5 m"\r\naero', b'"5.5 kg"\r\naero'))
    assert folder.lines()[0].startswith("rotor.toml:3:10: radius: expected a length above 0 in m")


def test_faults_of_all_files_come_at_once_and_in_order(folder):
    folder.edit("plan.toml", 'wind_gust = "5 m/s"', 'wind_gust = ¦"2 m/s"')
    folder.edit("rotor.toml", 'mass = "2.5 kg"', 'mass = ¦"-2.5 kg"')
    folder.edit("blade.csv", "7.2, 3.3,", "¦-7.2, 3.3,")
    folder.edit("outer.csv", "0.3, 0, 0, 0.01", "0.3, 0, ¦nan, 0.01")
    folder.edit("stand.toml", 'hub_height = "12 m"', "hub_height = ¦12")
    folder.edit("rules.toml", 'limit = "10 %"', 'limit = ¦"10 deg"')
    places = [f"{f.file}:{f.line}:{f.column}" for f in folder.faults()]
    assert places == folder.marks
    assert len(places) == 6


def test_cross_checks_still_run_in_a_file_with_other_faults(folder):
    folder.edit("rotor.toml", 'name = "Test rotor"\n', "")
    folder.edit("rotor.toml", 'collective_radius = "4.125 m"', 'collective_radius = ¦"4.125"')
    folder.edit("rotor.toml", 'angle = "20 deg"', 'angle = "-3 deg"')
    folder.edit("rotor.toml", 'angle = "-2 deg"', 'angle = ¦"-2 deg"')
    places = [f"{f.file}:{f.line}:{f.column}" for f in folder.faults()]
    assert places == ["rotor.toml:1:1", *folder.marks]


def test_a_broken_rotor_file_does_not_hide_faults_elsewhere(folder):
    folder.edit("rotor.toml", 'name = "Test rotor"', "name = ¦Test")
    folder.edit("stand.toml", "gear_ratio = 4", "gear_ratio = ¦0")
    lines = folder.lines()
    assert len(lines) == 2
    assert lines[0].startswith(
        "rotor.toml:1:8: expected valid TOML, found no text, number, date, "
    )
    assert lines[1].startswith("stand.toml:9:14: drive.gear_ratio: expected a bare number above 0")


def test_a_stand_without_full_speed_is_one_fault(folder):
    """Percent values cannot be resolved then, and none of them is blamed."""
    folder.edit("stand.toml", 'full_speed = "380 rpm"\n', "")
    (line,) = folder.lines()
    assert line.startswith('stand.toml:1:1: full_speed: expected key "full_speed" (rotor speed')


def test_a_repeated_block_needs_time_for_its_way_back(folder):
    second = 'collective = "4 deg"\ncyclic = "trim"\nhold_time'
    folder.edit("plan.toml", second, second.replace("hold_time", 'ramp_time = "9 s"\nhold_time'))
    folder.edit(
        "plan.toml",
        'rpm = "100 % rpm"\ncollective = "4 deg"\ncyclic = "trim"\nramp_time = "9',
        'rpm = "90 % rpm"\ncollective = "4 deg"\ncyclic = "trim"\nramp_time = "9',
    )
    assert folder.read().plan.blocks[1].repeat == 3
    folder.edit(
        "plan.toml",
        'collective = "4 deg"\ncyclic = "trim"\nramp_time = "10 s"',
        'collective = "1 deg"\ncyclic = "trim"\n¦ramp_rate = "5 rpm/s"',
    )
    places = [line.partition(": ")[0] for line in folder.lines()]
    assert places == [folder.marks[0]] * 2


def test_a_broken_plan_file_is_one_fault(folder):
    folder.write("plan.toml", b"title = 'x'\n[site\n")
    (line,) = folder.lines()
    assert line.startswith(
        "plan.toml:2:6: expected valid TOML, found a table header without its ]; "
    )


def test_empty_files_name_every_missing_key(folder):
    folder.write("stand.toml", b"").write("blade.csv", b"# nothing\n")
    lines = folder.lines()
    assert (
        "blade.csv:1:1: expected a header and rows, found an empty table; fill the table in"
        in (lines)
    )
    expected = (
        'stand.toml:1:1: full_speed: expected key "full_speed" (rotor speed that reads 100 % rpm),'
        ' found no such key; add for example full_speed = "380 rpm"'
    )
    assert expected in lines


def test_a_missing_file_is_a_fault_where_it_is_named(folder):
    folder.edit("plan.toml", 'rotor = "rotor.toml"', 'rotor = ¦"roter.toml"')
    (line,) = folder.lines()
    assert line == (
        'plan.toml:8:9: rotor: expected a readable file, found no file "roter.toml";'
        ' did you mean "rotor.toml"?'
    )


def test_a_directory_instead_of_a_file_is_a_fault(folder):
    (folder.path / "stand.toml").unlink()
    (folder.path / "stand.toml").mkdir()
    (line,) = folder.lines()
    assert line == (
        'plan.toml:9:9: stand: expected a readable file, found "stand.toml",'
        " which is a directory; name a file in it"
    )


def test_a_device_instead_of_a_file_is_a_fault(folder):
    (folder.path / "stand.toml").unlink()
    (folder.path / "stand.toml").symlink_to("/dev/zero")
    (line,) = folder.lines()
    assert 'found "stand.toml", which is no regular file; name a regular file' in line


def test_a_file_that_cannot_be_read_is_a_fault(folder, monkeypatch):
    kind = type(folder.path)
    real = kind.open

    def refuse(self, *args, **kwargs):
        if self.name == "stand.toml":
            raise PermissionError(13, "Permission denied")
        return real(self, *args, **kwargs)

    monkeypatch.setattr(kind, "open", refuse)
    (line,) = folder.lines()
    assert 'found "stand.toml", which cannot be read: you have no permission; check its' in line


def test_a_name_that_no_file_can_have_is_a_fault(folder):
    folder.edit("plan.toml", '"stand.toml"', f'¦"{"s" * 400}"')
    (line,) = folder.lines()
    assert line.startswith(f"{folder.marks[0]}: stand: expected a readable file, found ")


def test_a_missing_plan_folder_is_a_fault(folder):
    folder.path = folder.path / "nowhere"
    (line,) = folder.lines()
    assert "expected a readable file, found no file" in line


def test_a_folder_without_plan_is_a_fault(folder):
    (folder.path / "plan.toml").rename(folder.path / "plant.toml")
    (line,) = folder.lines()
    assert line == (
        'plan.toml:1:1: expected a readable file, found no file "plan.toml";'
        ' did you mean "plant.toml"?'
    )


@pytest.mark.parametrize("name", ["plan.toml", "stand.toml", "blade.csv"])
def test_an_enormous_file_is_refused_unread(folder, name):
    folder.write(name, b"#" * (LARGEST_FILE_BYTES + 1))
    begun = time.perf_counter()
    (line,) = folder.lines()
    assert time.perf_counter() - begun < 2.0
    assert line == (
        f"{name}:1:1: expected a file of at most 2000000 bytes,"
        " found more than 2000000 bytes; make it smaller"
    )


@pytest.mark.parametrize(
    ("raw", "message"),
    [
        ("name = 'ä'".encode("utf-16"), "stand.toml:1:1: expected UTF-8 text, found UTF-16; save"),
        (b"a = 1\nname = '\xe4'", "stand.toml:2:9: expected UTF-8 text, found byte 0xE4; save it"),
        (b"\xef\xbb\xbfname = '\xff'", "stand.toml:1:9: expected UTF-8 text, found byte 0xFF;"),
        (b"a = 1\x00", "stand.toml:1:6: expected valid TOML, found "),
        (b"x = " + b"[" * 20_000, "stand.toml:1:1: expected a plain structure, found arrays"),
        (b"x = " + b"9" * 10_000, "stand.toml:1:5: expected valid TOML, found an integer of thou"),
        (b"x = 1\nx = 2\n", "stand.toml:2:6: expected valid TOML, found a key or table that"),
        (b"x = 2026-02-31", "stand.toml:1:5: expected valid TOML, found a date or time that"),
        (b'x = """\n\n', "stand.toml:3:1: expected valid TOML, found a text without its"),
    ],
)
def test_text_that_is_no_toml_is_a_fault_with_its_place(folder, raw, message):
    (line,) = folder.write("stand.toml", raw).lines()
    assert line.startswith(message)


def test_sixty_steps_are_read_quickly(folder):
    text = (folder.path / "plan.toml").read_text("utf-8")
    start = text.index('[[block]]\nname = "Endurance"')
    step = text[
        text.index("[[block.step]]", start) : text.index(
            "[[block.step]]", text.index("hold_time", start)
        )
    ]
    head, tail = text[: text.index("[[block]]")], text[text.index("[shutdown]") :]
    block = '[[block]]\nname = "Many"\nkind = "endurance"\n\n'
    folder.write("plan.toml", (head + block + step * 60 + tail).encode())
    assert len(folder.read().plan.blocks[0].steps) == 60
    begun = time.perf_counter()
    folder.read()
    assert time.perf_counter() - begun < 0.5
