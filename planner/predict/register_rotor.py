"""Register entries for what the blade-element rotor predicts at each hold and along each ramp."""

from __future__ import annotations

from planner.model.results import Quantity

THEORY_BAND = (
    "Plain blade-element momentum theory reads the measured thrust of a slender five-blade model "
    "rotor about 2 to 19 % high (Knight & Hefner, NACA TN 626, 1937, read second hand) and of a "
    "stubby two-blade one 26 to 42 % high (Caradonna & Tung, NASA TM-81232, 1981, one point read "
    "second hand, others from memory)."
)
_VALIDITY = (
    "rigid blades, steady wind in the disc plane, section tables over the full circle, "
    "quasi-steady air loads, out of ground effect, no blade motion in lag or twist; turning, no "
    "more than 5 % of the loads from beyond the section data, and parked from its continuation "
    "over the full circle (Viterna & Corrigan, NASA CP-2230, 1981, from memory). Along ramps "
    "quasi-static: for information only where blades may touch their stops in wind; there marched "
    "numbers are judged. "
)
_SOURCE = (
    "blade-element momentum theory with Prandtl's loss factor, annulus by annulus after Glauert; "
    "Gessow & Myers 1952, Leishman 2006 (from memory); flap equation from Lagrange's equation, "
    "derived"
)
_METHOD = (
    "Periodic solution of the blade's flap equation with hinge offset, spring, damper, "
    "pitch-flap coupling, precone, twist, gravity for the mounting, and blade-element air loads "
    "with reverse flow; low and high are the extremes over the hold window, calm to gust, the "
    "temperature range and both ends of the air load allowance. "
)


def _rotor(  # noqa: PLR0913, PLR0917 - one line of a table
    quantity_id: str,
    name: str,
    unit: str,
    symbol: str,
    danger: str,
    detail: str,
    hand_check: str,
    hand_band: float = 0.0,
    allowance: str = "air_load",
    hand_floor: float = 0.0,
) -> Quantity:
    return Quantity(
        id=quantity_id,
        name=name,
        unit=unit,
        symbol=symbol,
        axes=("segment",),
        danger=danger,  # type: ignore[arg-type]  # literal checked by a test
        study="holds",
        method=_METHOD + detail,
        validity=_VALIDITY.strip(),
        accuracy=THEORY_BAND,
        source=_SOURCE,
        hand_check=hand_check,
        hand_band=hand_band,
        allowance=allowance,
        hand_floor=hand_floor,
    )


ROTOR = (
    _rotor(
        "flap_mean",
        "Mean flap angle (coning)",
        "deg",
        "β₀",
        "none",
        "Mean over the turn.",
        "closed form for uniform inflow (light wind, turning at half of 100 % rpm or more)",
        0.25,
        hand_floor=0.004,
    ),
    _rotor(
        "flap_cosine",
        "Flap, cosine harmonic",
        "deg",
        "β₁c",
        "none",
        "First harmonic towards azimuth zero (downwind).",
        "closed form of first-harmonic flapping in edgewise wind: bounds the sign and size, "
        "tested, not compared for each hold",
    ),
    _rotor(
        "flap_sine",
        "Flap, sine harmonic",
        "deg",
        "β₁s",
        "none",
        "First harmonic towards azimuth 90°.",
        "as for the cosine harmonic",
    ),
    _rotor(
        "flap_highest",
        "Highest flap angle in a turn",
        "deg",
        "β max",
        "high",
        "Largest value around the azimuth.",
        "none of its own: mean plus first harmonic, each checked",
    ),
    _rotor(
        "flap_lowest",
        "Lowest flap angle in a turn",
        "deg",
        "β min",
        "low",
        "Smallest value around the azimuth; a blade at rest on its stop has the stop's angle.",
        "none of its own: mean less first harmonic, each checked",
    ),
    _rotor(
        "droop_stop_clearance",
        "Flap margin to the droop stop",
        "deg",
        "Δβ",
        "low",
        "Lowest flap less the droop stop's angle in force. Along a ramp: least over the part "
        "above the speed where the stop is left behind.",
        "none of its own: difference of two numbers on the card",
    ),
    _rotor(
        "up_stop_clearance",
        "Flap margin to the up stop",
        "deg",
        "Δβ",
        "low",
        "Up stop angle less the highest flap.",
        "none of its own: difference of two numbers on the card",
    ),
    _rotor(
        "droop_stop_moment",
        "Moment on the droop stop, blade resting",
        "N m",
        "M",
        "high",
        "Where the blade rests on its droop stop through the whole turn: the largest moment "
        "on the stop. Zero where it is clear. Contact in part of a turn is an impact, which a "
        "periodic solution does not predict: see droop_stop_peak_moment.",
        "none: bounded by the rest moment, which has one",
    ),
    _rotor(
        "thrust",
        "Thrust",
        "N",
        "T",
        "both",
        "Mean force along the shaft; multiplied through the air load allowance.",
        "uniform-inflow momentum theory in light wind (advance ratio to 0.1)",
        0.15,
    ),
    _rotor(
        "torque",
        "Shaft torque",
        "N m",
        "Q",
        "both",
        "Mean air load torque at the rotor, low and high with the torque allowance; on a powered "
        "ramp with the torque that accelerates blades and drive. An unpowered stop has the air "
        "load alone. Judged by size, whichever its sign.",
        "momentum theory with induced factor 1.15 plus mean profile drag (light wind)",
        0.25,
        "torque",
    ),
    _rotor(
        "power",
        "Rotor power",
        "kW",
        "P",
        "both",
        "Torque times rotor speed; judged by size, whichever its sign.",
        "as for torque",
        0.25,
        "torque",
    ),
    _rotor(
        "blade_loading",
        "Blade loading",
        "",
        "CT/σ",
        "high",
        "Thrust coefficient over solidity from the thrust-weighted blade area.",
        "none of its own: from thrust",
    ),
    _rotor(
        "root_centrifugal_force",
        "Centrifugal force at the blade root",
        "kN",
        "F",
        "high",
        "Ω² times the integral of mass times radius outboard of the flap hinge.",
        "trapezoidal sum over the stations",
        0.03,
        "",
    ),
    _rotor(
        "hub_moment",
        "Hub moment",
        "N m",
        "M",
        "high",
        "Largest moment of all blades at the rotor centre over a turn, from hinge offset shear "
        "and hinge spring, with what shakes at multiples of the blade number.",
        "none: zero for a central hinge without spring (tested)",
    ),
    _rotor(
        "root_flap_moment",
        "Flap moment at the blade root spring",
        "N m",
        "M",
        "high",
        "Largest moment carried by the equivalent root spring of a hingeless blade; does not "
        "apply to other hubs, whose stops are judged.",
        "none of its own: spring times flap angle from precone",
    ),
    _rotor(
        "cyclic_needed",
        "Cyclic needed to trim, share of authority",
        "%",
        "θ₁",
        "high",
        "Where the step trims flapping to zero: cyclic needed over the authority; where the "
        "cyclic is fixed: cyclic used over the authority.",
        "none: tested against the equivalence of flapping and feathering",
    ),
    _rotor(
        "flap_frequency_ratio",
        "Flap frequency, rigid blade",
        "",
        "ν",
        "none",
        "√(1 + e S/I + k/(I Ω²)).",
        "same closed form with mass moments from a trapezoidal sum over the stations; the elastic "
        "blade's first mode stands under mode_frequency",
        0.01,
        "",
    ),
    _rotor(
        "flap_damping_ratio",
        "Flap damping ratio from the air",
        "",
        "ζ",
        "low",
        "Air load damping of the linear section in hover, γ D₁/(4 ν), from the local chord and "
        "lift slope by quadrature, plus the flap damper; vanishes as speed goes to zero and "
        "falls near stall, which is not counted here.",
        "γ/16 scaled for hinge offset with constant chord",
        0.35,
        "air_load",
    ),
)
