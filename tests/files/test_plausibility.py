"""Values that read well but cannot be meant: places in the disc, slips of unit and of order."""

import re

import pytest

PLAN, ROTOR, STAND, RULES = "plan.toml", "rotor.toml", "stand.toml", "rules.toml"

BRIDGE = 'distance = "9 m"\nheight = "6 m"'
ROOM = 'distance = "60 m"\nheight = "-1.7 m"'
HINGELESS = """[hub]
kind = "hingeless"
root = "0.2 m"
precone = "2 deg"
pitch_flap_coupling = "0 deg"
flap_damper = "0 N m s/rad"
root_moment_rating = "5 kN m"
"""


def in_disc(lowest: str, found: str) -> str:
    return (
        f"expected a distance above the rotor radius 5.5 m, because blade tips reach down to"
        f" {lowest} m above ground, found {found};"
        " move it out of the disc, or correct distance or height"
    )


@pytest.mark.parametrize(
    ("key", "old", "distance", "height"),
    [
        ("obstruction", BRIDGE, "5.5 m", "11.3 m"),
        ("obstruction", BRIDGE, "18 ft", "40 m"),
        ("position", ROOM, "0.5 m", "12 m"),
    ],
)
def test_a_place_inside_an_upright_disc_is_a_fault(folder, key, old, distance, height):
    folder.edit(STAND, '"axis level"', '"upright"')
    folder.edit(STAND, old, f'distance = ¦"{distance}"\nheight = "{height}"')
    (line,) = folder.lines()
    found = in_disc("11.26", f'"{distance}" at height "{height}"')
    assert line == f"{folder.marks[0]}: {key}.distance: {found}"


@pytest.mark.parametrize(("distance", "height"), [("5.51 m", "12 m"), ("3 m", "11.2 m")])
def test_a_place_outside_an_upright_disc_is_none(folder, distance, height):
    folder.edit(STAND, '"axis level"', '"upright"')
    folder.edit(STAND, BRIDGE, f'distance = "{distance}"\nheight = "{height}"')
    assert folder.read().plan.stand.obstructions[0].name == "bridge"


def test_without_retraction_the_tip_falls_to_the_static_stop_only(folder):
    folder.edit(STAND, '"axis level"', '"upright"')
    folder.edit(STAND, BRIDGE, 'distance = "3 m"\nheight = "11.7 m"')
    retraction = '[droop_stop.retraction]\nrelease = "190 rpm"\nreseat = "160 rpm"\n'
    folder.edit(ROTOR, f'{retraction}retracted_angle = "-8 deg"\n', "")
    assert folder.read().plan.rotor.droop_stop.retraction is None
    folder.edit(STAND, 'height = "11.7 m"', 'height = "11.9 m"')
    (line,) = folder.lines()
    assert line.endswith(in_disc("11.82", '"3 m" at height "11.9 m"'))


def test_a_stop_above_the_hub_plane_does_not_lift_the_disc(folder):
    folder.edit(STAND, '"axis level"', '"upright"')
    folder.edit(STAND, BRIDGE, 'distance = "3 m"\nheight = "12 m"')
    folder.edit(ROTOR, 'angle = "-2 deg"', 'angle = "2 deg"')
    folder.edit(ROTOR, '"-8 deg"', '"1 deg"')
    (line,) = folder.lines()
    assert line.endswith(in_disc("12.00", '"3 m" at height "12 m"'))


def test_a_hub_without_stops_lets_its_tips_down_by_a_share_of_the_radius(folder):
    folder.edit(STAND, '"axis level"', '"upright"')
    folder.edit(STAND, BRIDGE, 'distance = "3 m"\nheight = "11.2 m"')
    folder.edit(STAND, '"12 m"', '"12.025 m"')
    text = (folder.path / ROTOR).read_text("utf-8")
    folder.write(ROTOR, (text[: text.index("[hub]")] + HINGELESS).encode())
    (line,) = folder.lines()
    assert line.endswith(in_disc("11.20", '"3 m" at height "11.2 m"'))
    folder.edit(STAND, '"11.2 m"', '"11.1 m"')
    assert folder.read().plan.rotor.hub.kind == "hingeless"


@pytest.mark.parametrize("mounting", ["inverted", "axis level"])
def test_an_inverted_or_level_disc_reaches_one_radius_down(folder, mounting):
    folder.edit(STAND, '"axis level"', f'"{mounting}"')
    folder.edit(STAND, BRIDGE, 'distance = "5.5 m"\nheight = "6.4 m"')
    assert folder.read().plan.stand.mounting == mounting
    folder.edit(STAND, '"6.4 m"', '"6.5 m"')
    (line,) = folder.lines()
    assert line.endswith(in_disc("6.50", '"5.5 m" at height "6.5 m"'))


@pytest.mark.parametrize(
    ("name", "old", "new"),
    [
        (STAND, '"axis level"', '"level"'),
        (STAND, 'hub_height = "12 m"', "hub_height = 12"),
        (ROTOR, 'radius = "5.5 m"', "radius = 5.5"),
        (ROTOR, 'angle = "-2 deg"', "angle = -2"),
    ],
)
def test_an_unknown_value_blames_no_place(folder, name, old, new):
    folder.edit(STAND, BRIDGE, 'distance = "3 m"\nheight = "12 m"')
    if old != '"axis level"':
        folder.edit(STAND, '"axis level"', '"upright"')
    folder.edit(name, old, new)
    assert not [line for line in folder.lines() if "obstruction" in line]


SLIPS = {
    "abort above the schedule": (PLAN, '[abort]\ncollective = "1 deg"',
        '[abort]\ncollective = ¦"4.1 deg"',
        "abort.collective: expected at most 4 deg, the highest collective of the schedule,"
        ' found "4.1 deg"; lower it, or correct the schedule'),
    "issued after the start": (PLAN, "2026-11-30T08:00:00Z", "¦2026-12-01T10:00:01+01:00",
        "issued: expected a time at or before planned_start 2026-12-01 08:59 UTC,"
        " found 2026-12-01 10:00 +01:00; correct one of the two"),
    "short ramp": (PLAN, 'ramp_time = "30 s"', 'ramp_time = ¦"0.09 s"',
        'block.step.ramp_time: expected a ramp of at least 0.1 s, found "0.09 s";'
        " give the ramp its time"),
    "steep ramp": (PLAN, '"5 rpm/s"', '¦"2000 rpm/s"',
        "block.step.ramp_rate: expected a rate that gives the ramp at least 0.1 s,"
        ' found "2000 rpm/s", which gives 0.095 s; lower the rate'),
    "short shutdown": (PLAN, '[shutdown]\ntime = "60 s"', '[shutdown]\ntime = ¦"0.9 s"',
        'shutdown.time: expected a time of at least 1 s in s, min or h, such as "60 s",'
        ' found "0.9 s"; correct the value'),
    "wide pitch window": (PLAN, 'window_collective = "0.2 deg"\nnote',
        'window_collective = ¦"10.1 deg"\nnote',
        "block.step.window_collective: expected an angle of at least 0 deg and of at most 10 deg"
        ' in deg or rad, such as "0.2 deg", found "10.1 deg"; correct the value'),
    "precone": (ROTOR, 'precone = "0 deg"', 'precone = ¦"-20.1 deg"',
        "hub.precone: expected an angle of at least -20 deg and of at most 20 deg in deg or rad,"
        ' such as "2 deg", found "-20.1 deg"; correct the value'),
    "coupling": (ROTOR, 'pitch_flap_coupling = "0 deg"', 'pitch_flap_coupling = ¦"60.1 deg"',
        "hub.pitch_flap_coupling: expected an angle of at least -60 deg and of at most 60 deg in"
        ' deg or rad, such as "0 deg", found "60.1 deg"; correct the value'),
    "gauge": (STAND, '"0.5 % rpm"', '¦"19.1 rpm"',
        'speed_gauge_error: expected at most 5% of full_speed, found "19.1 rpm";'
        " correct the error or full_speed"),
    "c.g. offset": ("blade.csv", "0.05, 2, 0\n6.8", "0.05, ¦-361, 0\n6.8",
        "c.g. offset: expected an offset of at most the chord 0.36 m, either way,"
        " found -0.361 m; correct the offset or its unit"),
    "a.c. offset": ("blade.csv", "2, -1", "2, ¦400",
        "a.c. offset: expected an offset of at most the chord 0.36 m, either way,"
        " found 0.4 m; correct the offset or its unit"),
    "minus sign": (ROTOR, 'angle = "-2 deg"', 'angle = ¦"−1.5 deg"',
        "droop_stop.angle: expected an angle of at least -90 deg and of at most 90 deg in deg or"
        ' rad, such as "-4 deg", found "−1.5 deg"; write the minus sign as the keyboard\'s "-"'),
    "minus sign in an exponent": (ROTOR, 'radius = "5.5 m"', 'radius = ¦"55e−1 m"',
        'radius: expected a length above 0 in m, mm, cm, km, ft or in, such as "5.5 m",'
        ' found "55e−1 m"; write the minus sign as the keyboard\'s "-"'),
    "minus sign in a limit": (RULES, 'limit = "2 deg"', 'limit = ¦"–2 deg"',
        "rule.limit: expected a value in deg or rad, the unit of the quantity,"
        ' found "–2 deg"; write the minus sign as the keyboard\'s "-"'),
    "minus sign in a table": ("blade.csv", "360, -2.75", "360, ¦−2.75",
        'twist: expected a number, found "−2.75"; write the minus sign as the keyboard\'s "-"'),
    "impossible date": (PLAN, '"2026-12-01 09:00 UTC"', '¦"2026-13-01 09:00 UTC"',
        'planned_start: expected a date and time with its zone, such as "2026-11-30 08:00 UTC",'
        ' found "2026-13-01 09:00 UTC"; write a day, time and zone that exist'),
    "impossible day": (PLAN, "date = 2026-10-01", 'date = ¦"2026-02-30"',
        'outside_document.date: expected a date such as "2026-11-30", found "2026-02-30";'
        " write a day that exists"),
}  # fmt: skip


@pytest.mark.parametrize("slip", SLIPS)
def test_a_slip_is_a_fault_with_this_message(folder, slip):
    name, old, new, message = SLIPS[slip]
    if slip == "issued after the start":
        folder.edit(PLAN, '"2026-12-01 09:00 UTC"', '"2026-12-01 08:59 UTC"')
    folder.edit(name, old, new)
    assert folder.lines() == [f"{folder.marks[0]}: {message}"]


@pytest.mark.parametrize(
    ("name", "old", "new"),
    [
        (PLAN, '[abort]\ncollective = "1 deg"', '[abort]\ncollective = "4 deg"'),
        (PLAN, "2026-11-30T08:00:00Z", "2026-12-01T10:00:00+01:00"),
        (PLAN, 'ramp_time = "30 s"', 'ramp_time = "0.1 s"'),
        (PLAN, '"5 rpm/s"', '"1900 rpm/s"'),
        (PLAN, '[shutdown]\ntime = "60 s"', '[shutdown]\ntime = "1 s"'),
        (ROTOR, 'precone = "0 deg"', 'precone = "20 deg"'),
        (ROTOR, 'pitch_flap_coupling = "0 deg"', 'pitch_flap_coupling = "-60 deg"'),
        (STAND, '"0.5 % rpm"', '"5 % rpm"'),
        (STAND, '"0.5 % rpm"', '"19 rpm"'),
        ("blade.csv", "2, -1", "360, -360"),
        ("blade.csv", "0.05, 0, 0", "0.05, 9, 9"),
    ],
)
def test_a_value_at_the_bound_is_read(folder, name, old, new):
    assert folder.edit(name, old, new).read().plan.title == "Run-up"


def test_an_inline_offset_beyond_the_chord_points_to_its_key(folder):
    station = """[[blade.station]]
radius = "{}"
chord = "360 mm"
twist = "1 deg"
mass = "7 kg/m"
flap_stiffness = "30 kN m2"
lag_stiffness = "800 kN m2"
torsion_stiffness = "28 kN m2"
pitch_inertia = "0.05 kg m"
cg_offset = "{}"
ac_offset = "0 mm"
"""
    both = station.format("0.2 m", "0 mm") + station.format("5.5 m", "¦2 m").replace('"¦', '¦"')
    folder.edit(ROTOR, 'stations = "blade.csv"\n', both)
    assert folder.lines() == [
        f"{folder.marks[0]}: blade.station.cg_offset: expected an offset of at most the chord"
        " 0.36 m, either way, found 2 m; correct the offset or its unit"
    ]


def test_an_abort_beside_an_unknown_collective_is_not_judged(folder):
    folder.edit(PLAN, '[abort]\ncollective = "1 deg"', '[abort]\ncollective = "9 deg"')
    folder.edit(PLAN, 'collective = "1 deg"\ncyclic = "trim"', 'collective = 1\ncyclic = "trim"')
    (line,) = folder.lines()
    assert re.search(r"block\.step\.collective: expected an angle", line)
