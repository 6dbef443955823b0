"""Register entries for rotor speed over time: reserve, run-downs and stay in keep-out bands."""

from __future__ import annotations

from planner.model.results import Quantity

_COAST = (
    "Balance of rotor speed: torque of the air load from periodic states at the speed and pitch "
    "of the moment with its allowance, friction, and the brake from the speed where it is "
    "applied, over the inertia of drive and blades. A powered stop has its stated time. "
)
_COAST_VALIDITY = (
    "torque of periodic states; friction and brake torque as stated; a rotor that the wind keeps "
    "turning has no time to rest and is not computed"
)
_COAST_HAND = (
    "closed form for torque k Ω² plus friction and brake, t = I/√(k Q₀) (atan(Ω₁ √(k/Q₀)) - "
    "atan(Ω₂ √(k/Q₀))), k fitted at the highest speed"
)
_DERIVED = "balance of moments, derived"


def _time(quantity_id: str, name: str, detail: str) -> Quantity:
    return Quantity(
        id=quantity_id,
        name=name,
        unit="s",
        symbol="t",
        axes=("segment", "state"),
        danger="high",
        study="speeds",
        method=_COAST + detail,
        validity=_COAST_VALIDITY,
        source=_DERIVED,
        hand_check=_COAST_HAND,
        hand_band=0.25,
        hand_floor=1.0,
        allowance="torque",
    )


_TOTAL = (
    "All holds, ramps at their even rate and the stop, repeats counted, and for each abort that "
    "the card allows for (reentries) the longest stay of any abort with every ramp from rest back "
    "to where it began. "
)


def _total(names: tuple[str, str], unit: tuple[str, str], hand_check: str) -> Quantity:
    """Stay in a band over the whole card: id and name, unit and symbol."""
    return Quantity(
        id=names[0],
        name=names[1],
        unit=unit[0],
        symbol=unit[1],
        axes=("band",),
        danger="high",
        study="speeds",
        method=_TOTAL,
        validity=_COAST_VALIDITY,
        source=_DERIVED,
        hand_check=hand_check,
        allowance="torque",
    )


SPEEDS = (
    Quantity(
        id="drive_torque_reserve",
        name="Torque that the drive has left in a ramp",
        unit="N m",
        symbol="ΔQ",
        axes=("segment",),
        danger="low",
        study="speeds",
        method="Torque that the drive can give at the speed of the moment, by its table or else "
        "its torque and power ratings, less what air load (with its allowance), friction and "
        "acceleration need; least of the ramp.",
        validity="speed follows the schedule; does not apply to holds and unpowered stops",
        source=_DERIVED,
        hand_check="none of its own: one subtraction, torque has its own",
        allowance="torque",
    ),
    _time("time_to_half", "Time to half of the first speed", "Time to 50 % of the first speed."),
    _time("time_to_30", "Time to 30 % of the first speed", "Time to 30 % of the first speed."),
    _time("time_to_10", "Time to 10 % of the first speed", "Time to 10 % of the first speed."),
    _time("time_to_rest", "Time to rest", "Time to zero speed."),
    Quantity(
        id="band_cycles",
        name="Turns inside a keep-out band without power",
        unit="",
        symbol="n",
        axes=("segment", "band", "state"),
        danger="high",
        study="speeds",
        method=_COAST + "Turns of the rotor between the band's edges; an abort from a ramp counts "
        "from its highest speed. Does not apply to powered passages, whose rate is judged.",
        validity=_COAST_VALIDITY,
        source=_DERIVED,
        hand_check="I/(4 π k) ln((k Ω₂² + Q₀) / (k Ω₁² + Q₀)) for torque k Ω² plus friction and "
        "brake Q₀",
        hand_band=0.25,
        hand_floor=1.0,
        allowance="torque",
    ),
    _total(
        ("band_time_total", "Time inside a keep-out band over the whole card"),
        ("s", "t"),
        "none of its own: sum of divisions and of times of run-downs",
    ),
    _total(
        ("band_cycles_total", "Turns inside a keep-out band over the whole card"),
        ("", "n"),
        "none of its own: sum of products, and of turns with their own",
    ),
)
