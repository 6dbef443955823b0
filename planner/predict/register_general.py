"""Register entries for the air, the blade as a body, the schedule and the stops at rest."""

from __future__ import annotations

from planner.model.results import Quantity

_MEMORY = "from memory"

_AIR = (
    Quantity(
        id="air_density", name="Air density", unit="kg/m3", symbol="ρ", axes=(), danger="none",
        study="air",
        method="Ideal mixture of dry air and water vapour at the site's pressure (stated, or from "
        "the standard atmosphere at its elevation); low and high are the ends of the stated "
        "temperature range.",
        validity="elevation -1,000 to 11,000 m, 200 to 330 K, humidity 0 to 100 %",
        source=f"ISO 2533:1975 ({_MEMORY}); saturation pressure in the CIPM form, Picard, Davis, "
        f"Gläser, Fujii, Metrologia 45 (2008) 149-155 ({_MEMORY})",
        hand_check="dry air, p / (287.05 T)", hand_band=0.03,
    ),
    Quantity(
        id="speed_of_sound", name="Speed of sound", unit="m/s", symbol="a", axes=(),
        danger="none", study="air",
        method="Square root of the ratio of specific heats times pressure over density.",
        validity="as for air density",
        source=f"ISO 2533:1975 ({_MEMORY})",
        hand_check="20.05 √T", hand_band=0.02,
    ),
    Quantity(
        id="wind_at_hub", name="Wind at the hub", unit="m/s", symbol="V", axes=(), danger="high",
        study="air",
        method="Mean wind carried from the anemometer to the hub by a power law with the plan's "
        "own exponent; low is calm, high is the gust plus the anemometer's error.",
        validity="open ground; no shelter or speed-up by buildings is credited",
        source="power law of the wind profile, common practice",
        hand_check="none: one multiplication, to be redone by hand",
    ),
)

_BODY = (
    Quantity(
        id="blade_flap_inertia", name="Blade flap inertia about the hinge", unit="kg m2",
        symbol="I", axes=(), danger="none", study="inertia",
        method="Integral of mass times squared distance from the flap hinge, exact for the "
        "piecewise linear table, plus point masses.",
        validity="rigid blade outboard of the flap hinge",
        source="definition",
        hand_check="trapezoidal sum over the stations", hand_band=0.03,
    ),
    Quantity(
        id="blade_first_moment", name="Blade first mass moment about the hinge", unit="kg m",
        symbol="S", axes=(), danger="none", study="inertia",
        method="Integral of mass times distance from the flap hinge, plus point masses.",
        validity="rigid blade outboard of the flap hinge",
        source="definition",
        hand_check="trapezoidal sum over the stations", hand_band=0.03,
    ),
    Quantity(
        id="lock_number", name="Lock number", unit="", symbol="γ", axes=(), danger="none",
        study="inertia",
        method="ρ a c R⁴ / I with the lift slope and chord at 75 % radius.",
        validity="a measure only; the rotor itself uses the local chord and section",
        source="definition (read second hand)",
        hand_check="none: definition",
    ),
)

_SCHEDULE = (
    Quantity(
        id="card_speed", name="Highest rotor speed of the card", unit="rpm", symbol="Ω",
        axes=(), danger="high", study="schedule",
        method="Highest target speed; high adds the hold window and the speed gauge's error.",
        validity="always", source="the schedule itself",
        hand_check="none: read off the schedule",
    ),
    Quantity(
        id="brake_speed", name="Rotor speed at which the brake is applied", unit="rpm",
        symbol="Ω", axes=(), danger="high", study="schedule",
        method="As the shutdown states it; high adds the speed gauge's error.",
        validity="does not apply where the shutdown uses no brake", source="the schedule itself",
        hand_check="none: read off the schedule",
    ),
    Quantity(
        id="tip_speed", name="Tip speed", unit="m/s", symbol="ΩR", axes=("segment",),
        danger="high", study="schedule", method="Rotor speed times radius.",
        validity="always", source="definition", hand_check="π D rpm / 60", hand_band=1e-6,
    ),
    Quantity(
        id="tip_mach", name="Tip Mach number in still air", unit="", symbol="M",
        axes=("segment",), danger="high", study="schedule",
        method="Tip speed over the speed of sound of the coldest air that the card covers (high) "
        "and the warmest (low).",
        validity="always", source="definition",
        hand_check="tip speed over 20.05 √T", hand_band=0.02,
    ),
    Quantity(
        id="advancing_tip_mach", name="Advancing tip Mach number", unit="", symbol="M₉₀",
        axes=("segment",), danger="high", study="schedule",
        method="Tip speed plus wind at the hub, over the speed of sound.",
        validity="always", source="definition",
        hand_check="none: tip Mach number plus wind over speed of sound",
    ),
    Quantity(
        id="advance_ratio", name="Advance ratio of the wind", unit="", symbol="μ",
        axes=("segment",), danger="high", study="schedule",
        method="Wind at the hub over tip speed; does not apply at rest.",
        validity="rotor turning", source="definition",
        hand_check="none: one division",
    ),
    Quantity(
        id="speed_step", name="Rise of rotor speed in one ramp", unit="%", symbol="ΔΩ",
        axes=("segment",), danger="high", study="schedule",
        method="Rise of speed as a share of 100 % rpm.",
        validity="always", source="the schedule itself", hand_check="none: one subtraction",
    ),
    Quantity(
        id="collective_step", name="Rise of collective in one ramp", unit="deg", symbol="Δθ",
        axes=("segment",), danger="high", study="schedule",
        method="Rise of collective pitch between two steps.",
        validity="always", source="the schedule itself", hand_check="none: one subtraction",
    ),
    Quantity(
        id="ramp_rate", name="Rate of change of rotor speed", unit="rpm/s", symbol="dΩ/dt",
        axes=("segment",), danger="high", study="schedule",
        method="Change of speed over the ramp's time, taken as constant.",
        validity="prescribed ramps; an unpowered stop has no prescribed rate",
        source="the schedule itself", hand_check="none: one division",
    ),
)

_STOPS = (
    Quantity(
        id="lift_off_speed_still_air", name="Lift-off speed from the droop stop, still air",
        unit="rpm", symbol="Ω", axes=(), danger="high", study="stops",
        method="Lowest speed at which the moment of centrifugal force and air load on the blade, "
        "held at the static stop angle, lifts it; at the lowest collective of the schedule.",
        validity="rigid blade (a soft blade needs a few per cent more), steady speed",
        source="moment equilibrium at the flap hinge, Lagrange's equation, derived; classical "
        "limit Gessow & Myers 1952 (from memory)",
        hand_check="closed form without air load, which bounds it from above when lift is "
        "positive: shown for orientation in `method`, not compared",
        allowance="air_load",
    ),
    Quantity(
        id="lift_off_speed_in_wind", name="Speed above which the blade stays off the droop stop",
        unit="rpm", symbol="Ω", axes=(), danger="high", study="stops",
        method="Searched downward from the top speed for the highest speed at which the periodic "
        "solution touches the static stop anywhere around the azimuth, in the gust at the hub.",
        validity="steady wind equal to the gust; no transients: contact in gusts below this speed "
        "is not predicted",
        source="periodic blade-element solution, see flap_lowest",
        hand_check="equals the still-air lift-off speed as the wind goes to zero (tested)",
        allowance="air_load",
    ),
    Quantity(
        id="droop_stop_rest_moment", name="Moment on the droop stop, rotor at rest",
        unit="N m", symbol="M", axes=(), danger="high", study="stops",
        method="Weight moment of the blade resting at the static stop angle, with the air load of "
        "the wind on the parked blade; high is the worst parked azimuth in the gust.",
        validity="static; no impact",
        source="statics; sections over the full circle",
        hand_check="g S cos β without wind", hand_band=0.01,
        allowance="air_load",
    ),
)

GENERAL = (*_AIR, *_BODY, *_SCHEDULE, *_STOPS)
