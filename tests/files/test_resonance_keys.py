"""Keys for resonances and their passages: their values, and a message for each slip."""

import json
import math
import tomllib
from typing import Any

import pytest

from planner.files.build_balance import blade_labels
from planner.files.build_train import computed_labels
from planner.files.schema import json_schemas
from planner.files.schema_rotor import HingelessTable, RotorFile, TeeteringTable
from planner.files.schema_stand import StandFile
from planner.files.source import Shelf
from planner.files.start import write_starter
from planner.files.validate import validated
from planner.model.rotor import Balance, MeasuredMode
from planner.model.stand import Column
from planner.predict.blade_modes import COLLECTIVE, CYCLIC, FAMILY_MODES
from tests.files.test_schema import complaints

PLAN, ROTOR, STAND = "plan.toml", "rotor.toml", "stand.toml"
RPM = math.pi / 30.0
HZ = 2.0 * math.pi

BALANCE = """[balance]
grade = "6.3 mm/s"
mass = "190 kg"
reference_speed = "380 rpm"
static_moment_spread = "0.03 kg m"
lag_angle_spread = "0.2 deg"
source = "balance record"

"""
GRADE = 'grade = "6.3 mm/s"\nmass = "190 kg"\nreference_speed = "380 rpm"\n'
RAPPED = """[[measured_mode]]
mode = "flap 2"
frequency = "2.3 Hz"
speed = "0 rpm"
collective = "3 deg"
accuracy = "1 %"
source = "rap test"

[[measured_mode]]
mode = "flap 2"
frequency = "16 Hz"
speed = "300 rpm"
collective = "3 deg"
accuracy = "2 %"
source = "run 4"

"""
COLUMN = """[column]
height = "11 m"
bending_stiffness = "40000 kN m2"
mass = "2000 kg"
head_mass = "0 kg"
damping = "1.5 %"
source = "drawing"

"""
TRAIN = """[drive_train]
damping = "1 %"
source = "report"

[[drive_train.inertia]]
name = "motor"
inertia = "4 kg m2"
turns = 4

[[drive_train.inertia]]
name = "hub"
inertia = "30 kg m2"
turns = 1

[[drive_train.shaft]]
name = "coupling"
stiffness = "80 kN m/rad"
turns = 4

"""
FOUND = """[[measured_mode]]
mode = "stand column 1"
frequency = "3.2 Hz"
speed = "0 rpm"
accuracy = "1 %"
source = "tap test"

[[measured_mode]]
mode = "shaft train 2"
frequency = "18 Hz"
speed = "50 % rpm"
accuracy = "3 %"
source = "run 2"

"""
TWIST = 'name = "twist"\nfamily = "shaft"\n'
LATERAL = 'source = "tap test"\n\n[[mode]]'
BARE = 'rotor_fitted = false\nmodal_mass = "900 kg"\nmissing_mass = "260 kg"\n'


@pytest.fixture
def resonant(folder):
    """The sound plan folder with every key about resonances and their passages."""
    folder.edit(PLAN, 'actions = ["Torque', 'reentries = 2\nactions = ["Torque')
    folder.edit(ROTOR, 'mass = "2.5 kg"\n', 'mass = "2.5 kg"\noffset = "-40 mm"\n')
    folder.edit(ROTOR, "[droop_stop]\n", BALANCE + RAPPED + "[droop_stop]\n")
    folder.edit(
        STAND, 'hub_moment = "25 kN m"\n', 'hub_moment = "25 kN m"\nhub_amplitude = "4 mm"\n'
    )
    folder.edit(STAND, LATERAL, BARE + LATERAL)
    return folder.edit(STAND, "[[obstruction]]\n", COLUMN + TRAIN + FOUND + "[[obstruction]]\n")


def about(value: Any) -> Any:
    """A number that stands in a dataclass of numbers."""
    return pytest.approx(value)


def test_the_rotors_keys_are_read(resonant):
    plan = resonant.read().plan
    assert plan.abort.reentries == 2
    assert plan.rotor.blade.point_masses[0].cg_offset_m == about(-0.04)
    assert plan.rotor.balance == Balance(
        static_moment_spread_kg_m=0.03,
        lag_angle_spread_rad=about(math.radians(0.2)),
        source="balance record",
        grade_m_s=about(0.0063),
        mass_kg=190.0,
        reference_rad_s=about(380.0 * RPM),
    )
    at_rest, turning = plan.rotor.measured_modes
    pitch = about(math.radians(3.0))
    assert at_rest == MeasuredMode("flap 2", about(2.3 * HZ), 0.0, pitch, 0.01, "rap test")
    assert turning.speed_rad_s == about(300.0 * RPM)


def test_the_stands_keys_are_read(resonant):
    stand = resonant.read().plan.stand
    assert stand.ratings.hub_amplitude_m == about(0.004)
    lateral, twist = stand.modes
    assert (lateral.modal_mass_kg, lateral.missing_mass_kg, lateral.is_corrected) == (
        900,
        260,
        True,
    )
    assert (twist.modal_mass_kg, twist.missing_mass_kg) == (None, None)
    assert stand.column == Column(11.0, about(4e7), 2000.0, 0.0, 0.015, "drawing")
    train = stand.drive_train
    assert [(b.name, b.inertia_kg_m2, b.turns) for b in train.inertias] == [
        ("motor", 4.0, 4.0),
        ("hub", 30.0, 1.0),
    ]
    assert [(s.name, s.stiffness_N_m_rad, s.turns) for s in train.shafts] == [
        ("coupling", about(80e3), 4.0)
    ]
    assert (train.damping_ratio, train.source) == (0.01, "report")
    column, shaft = stand.measured_modes
    assert (column.mode, column.collective_rad) == ("stand column 1", 0.0)
    assert (shaft.speed_rad_s, shaft.accuracy) == about((190.0 * RPM, 0.03))


def test_all_of_it_may_be_left_out(folder):
    plan = folder.read().plan
    rotor, stand = plan.rotor, plan.stand
    assert (plan.abort.reentries, rotor.balance, rotor.measured_modes) == (None, None, ())
    assert rotor.blade.point_masses[0].cg_offset_m == 0.0
    assert (stand.column, stand.drive_train, stand.measured_modes) == (None, None, ())
    assert stand.ratings.hub_amplitude_m is None
    assert {(mode.modal_mass_kg, mode.missing_mass_kg) for mode in stand.modes} == {(None, None)}


def test_a_measured_unbalance_stands_alone(resonant):
    resonant.edit(ROTOR, GRADE, 'measured = "180 kg mm"\n')
    balance = resonant.read().plan.rotor.balance
    assert balance.measured_kg_m == about(0.18)
    assert (balance.grade_m_s, balance.mass_kg, balance.reference_rad_s) == (None, None, None)


def test_two_modes_may_share_a_direction(resonant):
    resonant.edit(STAND, TWIST, 'name = "second"\nfamily = "stand"\n')
    resonant.edit(STAND, 'direction = "about the shaft"', 'direction = "across"')
    assert len(resonant.read().plan.stand.mode_labels("stand")) == 3


def test_labels_in_the_file_are_those_of_the_model(resonant):
    document = Shelf(resonant.path).toml(STAND, None)
    assert document is not None
    file = validated(document, StandFile, None)
    assert file is not None
    stand = resonant.read().plan.stand
    modelled = [*stand.mode_labels("stand"), *stand.mode_labels("shaft")]
    given = [mode.label for mode in stand.modes]
    assert computed_labels(file) == [label for label in modelled if label not in given]


@pytest.mark.parametrize(
    ("hub", "motions"), [(HingelessTable, [""]), (TeeteringTable, [CYCLIC, COLLECTIVE])]
)
def test_every_computed_blade_mode_can_be_measured_and_no_other(hub, motions):
    file = RotorFile.model_construct(hub=hub.model_construct())
    computed = [
        f"{family} {order + 1}{motion}"
        for motion in motions
        for family, most in FAMILY_MODES.items()
        for order in range(most)
    ]
    assert blade_labels(file) == computed


@pytest.mark.parametrize("kind", ["plan", "rotor", "stand"])
def test_the_schemas_accept_what_the_reader_accepts(resonant, kind):
    schema = json_schemas()[f"{kind}.schema.json"]
    data = tomllib.loads((resonant.path / f"{kind}.toml").read_text("utf-8"))
    assert complaints(json.loads(json.dumps(data, default=str)), schema, schema) == []


def test_a_new_plan_shows_what_passages_need(tmp_path):
    write_starter(tmp_path)
    rotor, stand, plan = ((tmp_path / name).read_text("utf-8") for name in (ROTOR, STAND, PLAN))
    assert "Balance grade, with mass and reference_speed; or give measured.\ngrade = " in rotor
    assert "no passage of the mode is assessed.\nmodal_mass = " in stand
    assert "bears while a resonance is passed.\nhub_amplitude = " in stand
    assert "turns in keep-out bands.\nreentries = " in plan


SLIPS = {
    # balance
    "grade and measured": (ROTOR, "[balance]\n", '[¦balance]\nmeasured = "0.2 kg m"\n',
        "balance: expected exactly one of grade and measured, found both; remove one"),
    "neither grade nor measured": (ROTOR, "[balance]\n" + GRADE, "[¦balance]\n",
        "balance: expected exactly one of grade and measured, found neither; add one"),
    "grade without mass": (ROTOR, '[balance]\ngrade = "6.3 mm/s"\nmass = "190 kg"\n',
        '[¦balance]\ngrade = "6.3 mm/s"\n',
        'balance.mass: expected key "mass", because a grade refers to a mass and a speed,'
        " found no such key; add mass"),
    "grade without speed": (ROTOR, '[balance]\ngrade = "6.3 mm/s"\nmass = "190 kg"\n'
        'reference_speed = "380 rpm"\n', '[¦balance]\ngrade = "6.3 mm/s"\nmass = "190 kg"\n',
        'balance.reference_speed: expected key "reference_speed", because a grade refers to a mass'
        " and a speed, found no such key; add reference_speed"),
    "mass beside measured": (ROTOR, GRADE, 'measured = "0.2 kg m"\n¦mass = "190 kg"\n',
        "balance.mass: expected no mass, because a measured unbalance refers to none, found one;"
        " remove it, or give a grade instead of measured"),
    "mass below the blades'": (ROTOR, 'mass = "190 kg"', 'mass = ¦"172.6 kg"',
        "balance.mass: expected at least 172.68 kg, what 4 blades weigh by their table,"
        ' found "172.6 kg"; give the mass of blades and hub together, or correct the blade table'),
    "grade at too high a speed": (ROTOR, 'reference_speed = "380 rpm"',
        'reference_speed = ¦"3800 rpm"',
        "balance.reference_speed: expected at most design_maximum_speed 420 rpm,"
        ' found "3800 rpm"; give the highest speed in service, to which a grade refers'),
    "grade in another unit": (ROTOR, '"6.3 mm/s"', '¦"6.3 m/s"',
        'balance.grade: expected a balance grade above 0 in mm/s, such as "6.3 mm/s",'
        ' found "6.3 m/s"; did you mean "mm/s"?'),
    "no unbalance at all": (ROTOR, GRADE, 'measured = ¦"0 kg m"\n',
        "balance.measured: expected a first moment above 0 in kg m, kg mm or g m, such as"
        ' "0.2 kg m", found "0 kg m"; correct the value'),
    "no spread": (ROTOR, 'static_moment_spread = "0.03 kg m"\n', "",
        'rotor.toml:52:2: balance.static_moment_spread: expected key "static_moment_spread"'
        " (greatest difference of first mass moment between two blades), found no such key; add"
        ' for example static_moment_spread = "0.03 kg m"'),
    "wide lag spread": (ROTOR, '"0.2 deg"', '¦"5.1 deg"',
        "balance.lag_angle_spread: expected an angle of at least 0 deg and of at most 5 deg in deg"
        ' or rad, such as "0.2 deg", found "5.1 deg"; correct the value'),
    "point mass off the blade": (ROTOR, '"-40 mm"', '¦"-40 cm"',
        "blade.point_mass.offset: expected an offset of at most the greatest chord 0.36 m, either"
        ' way, found "-40 cm"; correct the offset or its unit'),
    # measured frequencies of the blades
    "mode of no hub": (ROTOR, '"flap 2"\nfrequency = "2.3', '¦"flap 5"\nfrequency = "2.3',
        'measured_mode.mode: expected a mode of this hub, "flap 1" to "flap 4", "lag 1" to "lag 2"'
        ' or "torsion 1" to "torsion 2", found "flap 5"; write one of these'),
    "measured twice": (ROTOR, 'mode = "flap 2"\nfrequency = "16 Hz"\nspeed = "300 rpm"',
        'mode = ¦"flap 2"\nfrequency = "16 Hz"\nspeed = "0 rad/s"',
        'measured_mode.mode: expected each mode once at one speed and collective, found "flap 2";'
        " remove one of the two, or correct it"),
    "blade accuracy": (ROTOR, '"2 %"', '¦"10.1 %"',
        'measured_mode.accuracy: expected a share above 0 and of at most 10 % in %, such as "1 %",'
        ' found "10.1 %"; correct the value'),
    "relative speed": (ROTOR, '"300 rpm"', '¦"80 % rpm"',
        "measured_mode.speed: expected a rotor speed of at least 0 rpm in rpm or rad/s, such as"
        ' "0 rpm", found "80 % rpm"; did you mean "rpm"?'),
    # stand modes and their masses
    "missing mass of a fitted rotor": (STAND, "rotor_fitted = false\n" + BARE[21:],
        'rotor_fitted = true\nmodal_mass = "900 kg"\n¦missing_mass = "260 kg"\n',
        "mode.missing_mass: expected no missing_mass unless rotor_fitted = false, found one;"
        " remove it, or say that the rotor was not fitted"),
    "missing mass alone": (STAND, BARE, BARE[:21] + BARE[43:],
        'stand.toml:24:3: mode.modal_mass: expected key "modal_mass", without which missing_mass'
        " corrects nothing, found no such key; add modal_mass, or remove missing_mass"),
    "modal mass of a shaft mode": (STAND, TWIST, TWIST + '¦modal_mass = "3 kg"\n',
        "mode.modal_mass: expected no modal_mass, because a shaft mode turns and moves no mass at"
        " the hub, found one; remove it"),
    "name of a computed stand mode": (STAND, 'name = "lateral"', 'name = ¦"column 1"',
        "mode.name: expected a name that is not that of a computed mode of [column],"
        ' found "column 1"; rename it, or remove [column]'),
    "name of a computed shaft mode": (STAND, 'name = "twist"', 'name = ¦"train 2"',
        "mode.name: expected a name that is not that of a computed mode of [drive_train],"
        ' found "train 2"; rename it, or remove [drive_train]'),
    "amplitude": (STAND, '"4 mm"', '¦"0 mm"',
        "ratings.hub_amplitude: expected a length above 0 in m, mm, cm, km, ft or in, such as"
        ' "12 m", found "0 mm"; correct the value'),
    # drive train
    "two shafts": (STAND, "[[drive_train.shaft]]\n", '[[drive_train.¦shaft]]\nname = "mast"\n'
        'stiffness = "1 kN m/rad"\nturns = 1\n\n[[drive_train.shaft]]\n',
        "drive_train.shaft: expected 1, one fewer than the 2 inertias, found 2 shafts; give one"
        " shaft between each inertia and the next"),
    "one inertia": (STAND, '[[drive_train.inertia]]\nname = "hub"\ninertia = "30 kg m2"\n'
        "turns = 1\n\n", "", "drive_train.inertia: expected at least 2, found an array of 1;"
        " add what is missing"),
    "body name twice": (STAND, 'name = "hub"', 'name = ¦"motor"',
        'drive_train.inertia.name: expected a name of its own, found "motor"; rename one of the'
        " two"),
    "hub not last": (STAND, '"30 kg m2"\nturns = 1', '"30 kg m2"\nturns = ¦1.01',
        "drive_train.inertia.turns: expected 1, because the last inertia is the hub, found 1.01;"
        " let the hub be the last inertia, or correct its turns"),
    "gear ratio": (STAND, "gear_ratio = 4", "gear_ratio = 4.3",
        "stand.toml:59:9: drive_train.inertia.turns: expected drive.gear_ratio 4.3 within 5%: the"
        " first is the motor, found 4; correct one of the two"),
    "sum of inertia": (STAND, 'inertia = "95 kg m2"', 'inertia = "89 kg m2"',
        "stand.toml:56:15: drive_train.inertia: expected inertias that come to drive.inertia"
        " 89 kg m2 within 5%, each times its turns squared, found 94 kg m2; correct the inertias,"
        " their turns or drive.inertia"),
    "no turns": (STAND, 'stiffness = "80 kN m/rad"\nturns = 4', 'stiffness = "80 kN m/rad"\n'
        "turns = ¦0", "drive_train.shaft.turns: expected a bare number above 0, found 0;"
        " correct the value"),
    "turns of neither neighbour": (STAND, 'stiffness = "80 kN m/rad"\nturns = 4',
        'stiffness = "80 kN m/rad"\nturns = ¦5', "drive_train.shaft.turns: expected turns of its"
        " neighbours, 1 to 4, found 5; give the turns of the shaft itself: its stiffness counts"
        " times turns squared"),
    # measured frequencies of the stand
    "second mode of a column": (STAND, '"stand column 1"', '¦"stand column 2"',
        'measured_mode.mode: expected a mode of column or drive train, "stand column 1",'
        ' "shaft train 1" or "shaft train 2", found "stand column 2"; give any other'
        " mode as [[mode]]"),
    "measured mode that is given": (STAND, '"shaft train 2"', '¦"shaft twist"',
        'measured_mode.mode: expected a mode of column or drive train, "stand column 1",'
        ' "shaft train 1" or "shaft train 2", found "shaft twist"; write the measured frequency of'
        " this mode into its [[mode]]"),
    "no such key": (STAND, 'speed = "50 % rpm"\n', 'speed = "50 % rpm"\n¦collective = "3 deg"\n',
        "measured_mode.collective: expected one of the keys mode, frequency, speed, accuracy or"
        ' source, found key "collective"; remove it'),
    # aborts
    "re-entries": (PLAN, "reentries = 2", "reentries = ¦21",
        "abort.reentries: expected a whole number from 0 to 20, found 21; write for example 0,"
        " without quotes"),
}  # fmt: skip


@pytest.mark.parametrize("slip", SLIPS)
def test_a_slip_is_a_fault_with_this_message(resonant, slip):
    name, old, new, message = SLIPS[slip]
    resonant.edit(name, old, new)
    (line,) = resonant.lines()
    assert line.endswith(message)
    if resonant.marks:
        assert line == f"{resonant.marks[0]}: {message}"


def test_without_column_and_train_no_frequency_of_theirs_is_read(resonant):
    resonant.edit(STAND, COLUMN + TRAIN, "")
    resonant.edit(STAND, '"stand column 1"', '¦"stand column 1"')
    first, second = resonant.lines()
    assert first == (
        f"{resonant.marks[0]}: measured_mode.mode: expected a mode of [column] or [drive_train],"
        ' of which there is none, found "stand column 1"; give any other mode as [[mode]]'
    )
    assert 'found "shaft train 2"' in second


def test_each_motion_of_a_teetering_pair_is_measured_by_itself(resonant):
    text = (resonant.path / ROTOR).read_text("utf-8")
    hub = """[hub]
kind = "teetering"
precone = "2 deg"
teeter_spring = "0 N m/rad"
teeter_damper = "0 N m s/rad"
pitch_flap_coupling = "0 deg"

"""
    text = text[: text.index("[hub]")] + hub + text[text.index("[balance]") :]
    text = text.replace("blades = 4", "blades = 2").replace('"S2", "S3", "S4"', '"S2"')
    text = text.replace('from = "0.2 m"', 'from = "0 m"').replace('"flap 2"', '"flap 2 cyclic"', 1)
    resonant.write(ROTOR, text.encode())
    resonant.edit("blade.csv", "11.0, 0.2,", "11.0, 0,")
    (line,) = resonant.lines()
    assert line.endswith(
        'measured_mode.mode: expected a mode of this hub, "flap 1" to "flap 4", "lag 1" to "lag 2"'
        ' or "torsion 1" to "torsion 2", each followed by "cyclic" or "collective", found'
        ' "flap 2"; say which of the two motions was measured'
    )
    resonant.edit(ROTOR, '"flap 2"', '"flap 2 collective"')
    modes = resonant.read().plan.rotor.measured_modes
    assert [mode.mode for mode in modes] == ["flap 2 cyclic", "flap 2 collective"]


@pytest.mark.parametrize(
    ("name", "old", "new"),
    [
        (STAND, "rotor_fitted = false", 'rotor_fitted = ["no"]'),
        (STAND, 'modal_mass = "900 kg"', "modal_mass = 900"),
        (STAND, 'inertia = "4 kg m2"', "inertia = 4"),
        (STAND, "gear_ratio = 4", 'gear_ratio = "4"'),
        (STAND, 'mode = "shaft train 2"', "mode = 2"),
        (ROTOR, 'grade = "6.3 mm/s"', "grade = 6.3"),
        (ROTOR, 'mode = "flap 2"\nfrequency = "16', 'mode = 2\nfrequency = "16'),
        ("blade.csv", "11.0, 0.2,", "heavy, 0.2,"),
    ],
)
def test_an_unknown_value_blames_no_other(resonant, name, old, new):
    resonant.edit(name, old, new)
    assert len(resonant.lines()) == 1
