"""Register entries for what is marched: ramps, the stop, and aborts from anywhere."""

from __future__ import annotations

from planner.model.results import Quantity

_METHOD = (
    "Marched through the ramp, the stop or the abort, blade by blade: flap about the hinge with "
    "elastic flap modes and the shape of a blade that lies on its stop, stops that only push, and "
    "inflow that takes time to build up. Cases: calm, the mean wind, a gust of 1-cosine form with "
    "start and length searched for the worst, turbulence where the plan states it, parked or "
    "entry azimuths, and both ends of the air load allowance; low and high are the extremes over "
    "all cases. Aborts: for each cause, from each hold and from the worst moment of each ramp. "
)
_VALIDITY = (
    "blades straight in plan, elastic bending linear, no motion in twist, section tables over the "
    "full circle, quasi-steady section loads, one wind over the whole disc at a time; a march "
    "that does not resolve its stop's stiffness is not assessed"
)
_SOURCE = (
    "equations of the hinged beam derived; inflow with apparent mass: Carpenter & Fridovich, NACA "
    "TN 3044, 1953 (summary read); moment of a stop: Hunt & Crossley, J. Appl. Mech. 42, 1975 "
    "(from memory); blades on droop stops: Keller & Smith, J. Aircraft 36 (1999) 443-450 (from "
    "memory)"
)
_ACCURACY = (
    "Integration held to 1 % of the lowest tip, 4 % of the stop moment and 2 ms of the time of "
    "contact of a converged adaptive integration of the same equations; not compared with "
    "measured engagements."
)
_STOP_HAND = (
    "none for each ramp: the weight moment g S of a resting blade is its floor, and a rigid drop "
    "at closing rate ω₀ peaks at g S + √((g S)² + k I ω₀²) (tested)"
)
_FLAP_HAND = (
    "the periodic solution in steady wind where cyclic is fixed and the ramp stays above the "
    "speed at which the stops are left behind; gusts pass on top of it, hence the wide band"
)
_LEFT_BEHIND = "the speed from which the stops are left behind (stop_free_speed)"


def _march(  # noqa: PLR0913, PLR0917 - one line of a table
    quantity_id: str,
    name: str,
    unit: str,
    symbol: str,
    danger: str,
    detail: str,
    hand_check: str,
    hand_band: float = 0.0,
    hand_floor: float = 0.0,
) -> Quantity:
    return Quantity(
        id=quantity_id,
        name=name,
        unit=unit,
        symbol=symbol,
        axes=("segment", "state"),
        danger=danger,  # type: ignore[arg-type]  # literal checked by a test
        study="marches",
        method=_METHOD + detail,
        validity=_VALIDITY,
        accuracy=_ACCURACY,
        source=_SOURCE,
        hand_check=hand_check,
        hand_band=hand_band,
        hand_floor=hand_floor,
        allowance="air_load",
    )


MARCHED = (
    _march(
        "lowest_flap_marched",
        "Lowest flap angle, marched",
        "deg",
        "β min",
        "low",
        "Lowest flap angle of any blade at its hinge.",
        _FLAP_HAND,
        0.5,
        0.07,
    ),
    _march(
        "highest_flap_marched",
        "Highest flap angle, marched",
        "deg",
        "β max",
        "high",
        "Highest flap angle of any blade at its hinge.",
        _FLAP_HAND,
        0.5,
        0.07,
    ),
    _march(
        "droop_stop_peak_moment",
        "Peak moment on a droop stop",
        "N m",
        "M",
        "high",
        "Largest moment of a droop stop on a blade, resting or struck; does not apply to hubs "
        "without stops, whose root moment is judged.",
        _STOP_HAND,
    ),
    _march(
        "up_stop_peak_moment",
        "Peak moment on an up stop",
        "N m",
        "M",
        "high",
        "Largest moment of an up stop on a blade, zero where none is met; does not apply to hubs "
        "without stops.",
        "none: as for the droop stop, without the resting blade",
    ),
    _march(
        "droop_stop_overrun",
        "Blade below its droop stop on the way from or to rest",
        "deg",
        "Δβ",
        "high",
        "How far a blade sinks below the static droop stop: the stop's own give, or a retracting "
        "stop that could not come back under a low blade. Does not apply where the stop is taken "
        "not to come back, nor to parts that neither begin nor end at rest.",
        "none of its own: the stop's angle less lowest_flap_marched",
    ),
    _march(
        "contacts_after_lift_off",
        "Droop-stop contacts where the stops are left behind",
        "",
        "n",
        "high",
        "Touches of a droop stop, after the blade has left it for the first time, at rotor speeds "
        f"at and above {_LEFT_BEHIND}; most of any one blade. Below that speed blades touch their "
        "stops in every start and stop: there the moment is judged.",
        "none: a count",
    ),
    _march(
        "contact_highest_speed",
        "Highest rotor speed of a droop-stop contact",
        "rpm",
        "Ω",
        "high",
        "Highest rotor speed at which a blade that has left its droop stop touches it, at any "
        "speed; zero where none does.",
        "none: compare lift_off_speed_in_wind",
    ),
    _march(
        "contact_first",
        "First droop-stop contact after lift-off",
        "s",
        "t",
        "none",
        "Time from the begin of a ramp or the stop to the first touch of a blade that was off "
        "its droop stop for a turn, earliest of all cases; aborts tell it by rotor speed.",
        "none: the rigid drop from rest, t = √(2 Δβ I/(g S)), is tested",
    ),
    _march(
        "contact_last",
        "Last droop-stop contact after lift-off",
        "s",
        "t",
        "none",
        "As the first one, latest over all cases.",
        "none: as for the first",
    ),
    _march(
        "contact_longest",
        "Longest droop-stop contact after lift-off",
        "s",
        "t",
        "high",
        "Longest touch of a blade that has been off its droop stop for a whole turn, of touches "
        "that end: resting after the stop is none. Zero where there is none.",
        "none: read off the flap chart",
    ),
    _march(
        "contact_closing_speed",
        "Closing speed at a droop stop",
        "deg/s",
        "dβ/dt",
        "high",
        "Largest rate at which the hinge of a blade meets its droop stop, bending included, "
        "of all touches; zero where there is none.",
        "none: a rigid blade that falls by Δβ closes at √(2 g S Δβ / I) without air",
    ),
    _march(
        "contact_energy",
        "Energy of a droop-stop contact",
        "J",
        "E",
        "high",
        "Energy in the spring of a droop stop at its peak moment, M²/(2 K), resting included.",
        "none of its own: one formula of droop_stop_peak_moment",
    ),
    _march(
        "lowest_tip",
        "Lowest blade tip",
        "m",
        "z min",
        "low",
        "Height of the lowest tip from the hub plane, thrust side positive, elastic bending "
        "included.",
        "none of its own: tip arm times sine of the lowest flap, less the droop of the blade",
    ),
    _march(
        "highest_tip",
        "Highest blade tip",
        "m",
        "z max",
        "high",
        "Height of the highest tip from the hub plane, thrust side positive, elastic bending "
        "included.",
        "none of its own: as for the lowest tip",
    ),
    _march(
        "blade_clearance",
        "Blade to stand and obstructions",
        "m",
        "d",
        "low",
        "Least distance of any blade, as low as it comes at any azimuth, straight from hinge to "
        "tip, from the ground and each stated obstruction, whichever way the wind turns the "
        "low side; at holds from the periodic solution in the gust. What of the stand reaches out "
        "counts where it is stated as an obstruction.",
        "none of its own: distances of the stand file less lowest_tip, redone with a pencil",
    ),
    _march(
        "lag_peak",
        "Lag angle from the middle of its travel",
        "deg",
        "ζ",
        "high",
        "Largest angle of a blade in lag, either way from the middle between its two lag stops, "
        f"at and above {_LEFT_BEHIND}: below it a blade without a lag spring lies on a stop "
        "whenever speed changes, which lag_stop_peak_moment tells. Rigid blade on its damper; "
        "does not apply where the hub states no lag stops.",
        "none: steady lag is torque over the centrifugal stiffness",
    ),
    _march(
        "lag_stop_peak_moment",
        "Peak moment on a lag stop",
        "N m",
        "M",
        "high",
        "Largest moment of a lag stop on a blade, zero where none is met. Does not apply where "
        "the hub states no lag stops.",
        "none: as for the droop stop, without weight",
    ),
    _march(
        "root_flap_peak_moment",
        "Peak flap moment at a hingeless blade's root",
        "N m",
        "M",
        "high",
        "Largest flap moment at the clamped root; does not apply to other hubs, whose stops are "
        "judged.",
        "none of its own: the weight moment is its floor, root_flap_moment the periodic answer",
    ),
    _march(
        "hub_moment_peak",
        "Peak hub moment",
        "N m",
        "M",
        "high",
        "Largest moment of all blades at the rotor centre: hinge shear, springs, and what the "
        "stops put into the hub.",
        "none of its own: hub_moment is the periodic answer where no stop is met",
    ),
    _march(
        "thrust_peak",
        "Peak thrust",
        "N",
        "T",
        "both",
        "Largest air load of all blades along the shaft, either way; their inertia is not in it.",
        "none of its own: thrust is the periodic answer",
    ),
)

COURSE = Quantity(
    id="flap_course_marched",
    name="Flap along the start and the stop, marched",
    unit="deg",
    symbol="β",
    axes=("segment", "mode"),
    danger="none",
    study="marches",
    method=_METHOD + "The case with the highest flap and the one with the lowest, marched again: "
    "rotor speed and the middle, lowest and highest flap of all blades, stretch by stretch of "
    "time, for the chart. The extremes over all cases stand under their own names.",
    validity=_VALIDITY,
    source=_SOURCE,
    hand_check="none: a picture of the cases behind highest_flap_marched and lowest_flap_marched",
    allowance="air_load",
)
