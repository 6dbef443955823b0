"""Keys for starts, stops and aborts in wind: their values, and a message for each slip."""

import json
import math
import tomllib

import pytest

from planner.files.schema import json_schemas
from planner.model.plan import GustLengths, Turbulence, segments
from tests.files.test_schema import complaints

PLAN, ROTOR, STAND = "plan.toml", "rotor.toml", "stand.toml"
RPM = math.pi / 30.0

WIND = """[gust]
shortest = "1 s"
longest = "8 s"

[turbulence]
intensity = "15 %"
series = 4
seed = 7

[[sector]]
name = "hill"
from = "315 deg"
to = "45 deg"
upflow = "3 deg"
turbulence_intensity = "22 %"
shelter = "85 %"
shelter_source = "record W-2"

[[sector]]
name = "field"
from = "45 deg"
to = "315 deg"
upflow = "-1 deg"

"""
ACTIONS = 'actions = ["Torque off.", "Wait."]'
ABORT = """collective_rate = "2 deg/s"
reaction_time = "1.5 s"
brake = true
brake_from = "30 % rpm"
"""
TRIP = 'overspeed_trip = "105 % rpm"\n'
DRIVE = """friction = "240 N m"
torque_by_speed = [["0 rpm", "24 kN m"], ["60 % rpm", "24 kN m"], ["440 rpm", "20 kN m"]]
"""
BELOW = 'below = "35 % rpm"\n'
LAG_STOP = """[lag_stop]
lead = "-4 deg"
lag = "15 deg"
stiffness = "150 kN m/rad"
damping = "400 N m s/rad"
moment_rating = "4 kN m"

"""
RAMP = 'ramp_time = "30 s"'


@pytest.fixture
def marching(folder):
    """The sound plan folder with every key that marching reads."""
    folder.edit(PLAN, "[[role]]", WIND + "[[role]]")
    folder.edit(PLAN, ACTIONS, ABORT + ACTIONS)
    folder.edit(PLAN, RAMP, 'ramp = "drive"')
    folder.edit(STAND, TRIP, TRIP + DRIVE)
    folder.edit(STAND, BELOW, BELOW + 'torque = "1.2 kN m"\n')
    return folder.edit(ROTOR, "[droop_stop]\n", LAG_STOP + "[droop_stop]\n")


def test_wind_is_read(marching):
    site = marching.read().plan.site
    assert site.gust_lengths == GustLengths(1.0, 8.0)
    assert site.turbulence == Turbulence(0.15, 4, 7)
    hill, field = site.sectors
    assert (hill.from_rad, hill.to_rad) == pytest.approx((1.75 * math.pi, 0.25 * math.pi))
    assert hill.turbulence_intensity == pytest.approx(0.22)
    assert hill.shelter == pytest.approx(0.85)
    assert hill.shelter_source == "record W-2"
    assert field.upflow_rad == pytest.approx(math.radians(-1.0))
    assert (field.turbulence_intensity, field.shelter, field.shelter_source) == (None, None, "")


def test_abort_drive_brake_and_lag_stop_are_read(marching):
    plan = marching.read().plan
    assert plan.abort.collective_rate_rad_s == pytest.approx(math.radians(2.0))
    assert plan.abort.reaction_time_s == 1.5
    assert plan.abort.brake
    assert plan.abort.brake_from_rad_s == pytest.approx(114.0 * RPM)
    assert plan.stand.drive.friction_N_m == 240.0
    last = plan.stand.drive.torque_by_speed[-1]
    assert last == pytest.approx((440.0 * RPM, 20e3))
    assert plan.stand.brake_torque_N_m == pytest.approx(1200.0)
    assert plan.rotor.lag_stop is not None
    assert plan.rotor.lag_stop.lead_angle_rad == pytest.approx(math.radians(-4.0))
    assert plan.rotor.lag_stop.moment_rating_N_m == pytest.approx(4e3)


def test_the_drives_own_run_up_has_no_time_yet(marching):
    plan = marching.read().plan
    assert plan.blocks[0].steps[0].own_run_up
    first, _, second, *_ = segments(plan)
    assert (first.id, first.own_run_up) == ("1.1r", True)
    assert math.isnan(first.duration_s)
    assert not second.own_run_up
    assert second.duration_s == pytest.approx(38.0)


def test_all_of_it_may_be_left_out(folder):
    plan = folder.read().plan
    assert (plan.site.gust_lengths, plan.site.turbulence, plan.site.sectors) == (None, None, ())
    assert (plan.abort.collective_rate_rad_s, plan.abort.reaction_time_s) == (None, None)
    assert (plan.abort.brake, plan.abort.brake_from_rad_s) == (False, 0.0)
    assert (plan.stand.drive.friction_N_m, plan.stand.drive.torque_by_speed) == (None, ())
    assert (plan.stand.brake_torque_N_m, plan.rotor.lag_stop) == (None, None)


@pytest.mark.parametrize("kind", ["plan", "rotor", "stand"])
def test_the_schemas_accept_what_the_reader_accepts(marching, kind):
    schema = json_schemas()[f"{kind}.schema.json"]
    data = tomllib.loads((marching.path / f"{kind}.toml").read_text("utf-8"))
    assert complaints(json.loads(json.dumps(data, default=str)), schema, schema) == []


FIELD = 'name = "field"\nfrom = "45 deg"\nto = "315 deg"'
SLIPS = {
    # wind
    "gust backwards": (PLAN, 'longest = "8 s"', 'longest = ¦"0.5 s"',
        'gust.longest: expected a time at or above shortest, found "0.5 s";'
        " swap shortest and longest"),
    "turbulence": (PLAN, 'intensity = "15 %"', 'intensity = ¦"61 %"',
        "turbulence.intensity: expected a share of at least 0 % and of at most 60 % in %,"
        ' such as "15 %", found "61 %"; correct the value'),
    "sector turbulence": (PLAN, '"22 %"', '¦"-1 %"',
        "sector.turbulence_intensity: expected a share of at least 0 % and of at most 60 % in %,"
        ' such as "15 %", found "-1 %"; correct the value'),
    "sector turbulence alone": (PLAN, "[turbulence]\nintensity = \"15 %\"\nseries = 4\nseed = 7\n",
        "", 'plan.toml:35:1: sector.turbulence_intensity: expected no turbulence_intensity,'
        " because there is no [turbulence], found one; remove it or add [turbulence]"),
    "no series": (PLAN, "series = 4", "series = ¦0",
        "turbulence.series: expected a whole number from 1 to 100, found 0; write for example 1,"
        " without quotes"),
    "sector gap": (PLAN, FIELD, FIELD.replace('from = "45', 'from = ¦"50'),
        'sector.from: expected 45 deg, where sector "hill" ends: no gap, no overlap,'
        ' found "50 deg"; let the sectors join once around the circle'),
    "sector overlap": (PLAN, FIELD, FIELD.replace('from = "45', 'from = ¦"40'),
        'sector.from: expected 45 deg, where sector "hill" ends: no gap, no overlap,'
        ' found "40 deg"; let the sectors join once around the circle'),
    "circle not closed": (PLAN, 'from = "315 deg"', 'from = ¦"320 deg"',
        'sector.from: expected 315 deg, where sector "field" ends: no gap, no overlap,'
        ' found "320 deg"; let the sectors join once around the circle'),
    "sector of no width": (PLAN, FIELD, 'name = "point"\nfrom = "45 deg"\nto = ¦"45 deg"\n'
        'upflow = "0 deg"\n\n[[sector]]\n' + FIELD,
        'sector.to: expected a bearing other than from, found "45 deg"; for one sector all around'
        ' write from = "0 deg", to = "360 deg"'),
    "sector name twice": (PLAN, 'name = "field"', 'name = ¦"hill"',
        'sector.name: expected a name of its own, found "hill"; rename one of the two'),
    "shelter without source": (PLAN, 'shelter_source = "record W-2"\n', "",
        'plan.toml:34:3: sector.shelter_source: expected key "shelter_source", because a shelter'
        " counts only where it was measured, found no such key; name the measurement, or remove"
        " shelter"),
    "source without shelter": (PLAN, 'shelter = "85 %"\nshelter', "¦shelter",
        "sector.shelter_source: expected no shelter_source, because there is no shelter,"
        " found one; remove it or add shelter"),
    "no shelter at all": (PLAN, '"85 %"', '¦"100 %"',
        'sector.shelter: expected a share below 100 %, found "100 %"; leave shelter out where none'
        " was measured"),
    "shelter of everything": (PLAN, '"85 %"', '¦"0 %"',
        'sector.shelter: expected a share above 0 in %, such as "85 %", found "0 %";'
        " correct the value"),
    # abort and brake
    "abort rate": (PLAN, '"2 deg/s"', '¦"0 deg/s"',
        'abort.collective_rate: expected an angle rate above 0 in deg/s, such as "1 deg/s",'
        ' found "0 deg/s"; correct the value'),
    "abort brake without speed": (PLAN, '\nbrake_from = "30 % rpm"', "",
        'abort.brake_from: expected key "brake_from", because brake = true, found no such key;'
        " say from which speed the brake is used"),
    "abort speed without brake": (PLAN, 'brake = true\nbrake_from = "30', '¦brake_from = "30',
        "abort.brake_from: expected no brake_from, because brake = false, found one;"
        " remove it or set brake = true"),
    "abort brake above the stand's": (PLAN, '"30 % rpm"', '¦"36 % rpm"',
        "abort.brake_from: expected at most 133 rpm, the stand's [brake] below,"
        ' found "36 % rpm"; brake later, or correct that speed'),
    "shutdown brake above the stand's": (PLAN, '"25 % rpm"', '¦"36 % rpm"',
        "shutdown.brake_from: expected at most 133 rpm, the stand's [brake] below,"
        ' found "36 % rpm"; brake later, or correct that speed'),
    # schedule
    "run-up beside a time": (PLAN, 'ramp = "drive"', 'ramp_time = "9 s"\n¦ramp = "drive"',
        'block.step.ramp: expected exactly one of ramp_time, ramp_rate and ramp = "drive",'
        " found ramp_time and ramp; keep one"),
    "run-up without speed": (PLAN, 'ramp_time = "10 s"', 'ramp = ¦"drive"',
        "block.step.ramp: expected ramp_time or ramp_rate, because this step does not raise rotor"
        ' speed, found "drive"; keep the drive\'s own run-up for rising speed'),
    "run-up of another kind": (PLAN, '"drive"', '¦"motor"',
        'block.step.ramp: expected "drive", found "motor"; write one of these'),
    # drive
    "negative friction": (STAND, '"240 N m"', '¦"-240 N m"',
        "drive.friction: expected a moment of at least 0 N m in N m, kN m or lb ft, such as"
        ' "300 N m", found "-240 N m"; correct the value'),
    "torque speeds": (STAND, '["60 % rpm", "24 kN m"]', '[¦"0 rpm", "24 kN m"]',
        "drive.torque_by_speed: expected a speed above 0 rpm of the row before,"
        ' found "0 rpm"; order the rows by speed'),
    "negative torque": (STAND, '["60 % rpm", "24 kN m"]', '¦["60 % rpm", "-1 N m"]',
        "drive.torque_by_speed: expected a moment of at least 0 N m in N m, kN m or lb ft, such"
        ' as "30 kN m", found "-1 N m"; correct the value'),
    "no torque pair": (STAND, '["60 % rpm", "24 kN m"]', '¦["60 % rpm"]',
        'drive.torque_by_speed: expected a speed and a value, such as ["245 rpm", "30 kN m"],'
        " found an array of 1; write two texts in brackets"),
    "no torque at rest": (STAND, '[["0 rpm"', '[[¦"5 rpm"',
        'drive.torque_by_speed: expected 0 rpm in the first row, found "5 rpm"; add the torque at'
        " standstill"),
    "torque ends early": (STAND, '["440 rpm"', '[¦"439 rpm"',
        "drive.torque_by_speed: expected at least maximum_speed 440 rpm in the last row,"
        ' found "439 rpm"; add the torque up to there, or correct maximum_speed'),
    "torqueless brake": (STAND, '"1.2 kN m"', '¦"0 N m"',
        'brake.torque: expected a moment above 0 in N m, kN m or lb ft, such as "1.3 kN m",'
        ' found "0 N m"; correct the value'),
    # stops
    "stop of no stiffness": (ROTOR, 'angle = "20 deg"\nstiffness = "80 kN m/rad"',
        'angle = "20 deg"\nstiffness = ¦"0 N m/rad"',
        "up_stop.stiffness: expected an angular stiffness above 0 in N m/rad, kN m/rad or"
        ' N m/deg, such as "80 kN m/rad", found "0 N m/rad"; correct the value'),
    "stop without stiffness": (ROTOR, '[droop_stop]\nangle = "-2 deg"\nstiffness = "80 kN m/rad"',
        '[¦droop_stop]\nangle = "-2 deg"',
        'droop_stop.stiffness: expected key "stiffness" (contact stiffness about the hinge, on one'
        ' side), found no such key; add for example stiffness = "80 kN m/rad"'),
    "lag stop of no stiffness": (ROTOR, '"150 kN m/rad"', '¦"0 N m/rad"',
        "lag_stop.stiffness: expected an angular stiffness above 0 in N m/rad, kN m/rad or"
        ' N m/deg, such as "80 kN m/rad", found "0 N m/rad"; correct the value'),
    "lead stop on the lag side": (ROTOR, 'lead = "-4 deg"', 'lead = ¦"4 deg"',
        "lag_stop.lead: expected an angle of at least -90 deg and of at most 0 deg in deg or rad,"
        ' such as "-4 deg", found "4 deg"; correct the value'),
    "lag stops that cross": (ROTOR, 'lead = "-4 deg"\nlag = "15 deg"',
        'lead = "0 deg"\nlag = ¦"0 deg"',
        'lag_stop.lag: expected an angle above the lead stop\'s 0 deg, found "0 deg";'
        " correct the stops: they cross"),
}  # fmt: skip


@pytest.mark.parametrize("slip", SLIPS)
def test_a_slip_is_a_fault_with_this_message(marching, slip):
    name, old, new, message = SLIPS[slip]
    marching.edit(name, old, new)
    (line,) = marching.lines()
    assert line.endswith(message)
    if marching.marks:
        assert line == f"{marching.marks[0]}: {message}"


def test_a_brake_above_every_speed_of_the_schedule_is_a_fault(marching):
    for old, new in (('rpm = "50 % rpm"', '"20 % rpm"'), ('rpm = "380 rpm"', '"100 rpm"')):
        marching.edit(PLAN, old, f"rpm = {new}")
    text = (marching.path / PLAN).read_text("utf-8").replace('rpm = "100 % rpm"', 'rpm = "90 rpm"')
    marching.write(PLAN, text.encode())
    marching.edit(PLAN, '"30 % rpm"', '¦"101 rpm"')
    (line,) = marching.lines()
    assert line == (
        f"{marching.marks[0]}: abort.brake_from: expected at most 100 rpm, the highest speed of"
        ' the schedule, found "101 rpm"; brake later, or correct that speed'
    )
    marching.edit(PLAN, '"101 rpm"', '"100 rpm"')
    assert marching.read().plan.abort.brake


def test_a_brake_on_an_abort_needs_one_on_the_stand(marching):
    brake = '[brake]\nbelow = "35 % rpm"\ntorque = "1.2 kN m"\n'
    marching.edit(STAND, brake, "")
    assert [line.partition(": ")[2] for line in marching.lines()] == [
        f"{key}.brake: expected brake = false, because the stand has no [brake], found true;"
        " add [brake] to the stand, or use none"
        for key in ("abort", "shutdown")
    ]


def test_one_sector_covers_the_circle_from_north_to_north(marching):
    marching.edit(PLAN, WIND[WIND.index('[[sector]]\nname = "field"') :], "")
    marching.edit(PLAN, 'from = "315 deg"\nto = "45 deg"', 'from = "0 deg"\nto = "360 deg"')
    (sector,) = marching.read().plan.site.sectors
    assert sector.to_rad == pytest.approx(2.0 * math.pi)
    marching.edit(PLAN, 'to = "360 deg"', 'to = ¦"270 deg"')
    (line,) = marching.lines()
    assert 'sector.from: expected 270 deg, where sector "hill" ends' in line


def test_an_unknown_bearing_blames_no_other_sector(marching):
    marching.edit(PLAN, 'from = "315 deg"', "from = 315")
    (line,) = marching.lines()
    assert "sector.from: expected an angle of at least 0 deg and of at most 360 deg" in line


def test_a_repeated_block_comes_back_by_the_drive_only_from_below(marching):
    endurance = 'ramp_time = "10 s"\nhold_time = "60 s"\nwindow_rpm = "2 rpm"\n'
    marching.edit(PLAN, 'rpm = "380 rpm"', 'rpm = "370 rpm"')
    marching.edit(PLAN, endurance, endurance.replace('_time = "10 s"', ' = ¦"drive"', 1))
    second = 'rpm = "100 % rpm"\ncollective = "4 deg"\ncyclic = "trim"\nhold_time'
    timed = second.replace("hold_time", 'ramp_time = "9 s"\nhold_time')
    marching.edit(PLAN, second, timed.replace("100 % rpm", "390 rpm"))
    (line,) = marching.lines()
    assert line == (
        f"{marching.marks[0]}: block.step.ramp: expected ramp_time or ramp_rate, because a"
        " repeated block comes back to this step from no lower speed"
        ', found "drive"; keep the drive\'s own run-up for rising speed'
    )
    marching.edit(PLAN, '"390 rpm"', '"350 rpm"')
    back = [segment for segment in segments(marching.read().plan) if segment.id == "2.1b"]
    assert [(segment.own_run_up, segment.times) for segment in back] == [(True, 2)]


@pytest.mark.parametrize("kind", ["hingeless", "teetering"])
def test_only_a_lag_hinge_has_lag_stops(marching, kind):
    text = (marching.path / ROTOR).read_text("utf-8")
    hubs = {
        "hingeless": 'root = "0.2 m"\nroot_moment_rating = "5 kN m"\nflap_damper = "0 N m s/rad"',
        "teetering": 'teeter_spring = "0 N m/rad"\nteeter_damper = "0 N m s/rad"',
    }
    common = '\nprecone = "2 deg"\npitch_flap_coupling = "0 deg"\n\n'
    hub = f'[hub]\nkind = "{kind}"\n{hubs[kind]}{common}'
    stops = text[text.index("[lag_stop]") :]
    if kind == "hingeless":
        stops = stops[: stops.index("[droop_stop]")]
    marching.write(ROTOR, (text[: text.index("[hub]")] + hub + stops).encode())
    expected = (
        f"lag_stop: expected no lag stop on a hub of kind {kind}, which has no lag hinge,"
        " found table lag_stop; remove the table or correct hub.kind"
    )
    assert any(line.endswith(expected) for line in marching.lines())
