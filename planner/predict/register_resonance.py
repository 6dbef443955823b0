"""Register entries for natural frequencies, their spacing from harmonics, and keep-out bands."""

from __future__ import annotations

from planner.model.results import Quantity

_BEAM = (
    "Rotating-beam finite elements of flap, lag and torsion together, with twist, pitch setting, "
    "offset centre of gravity, control stiffness, hinge springs, pitch-flap coupling and point "
    "masses under tension; a teetering pair moves alike (collective) or opposite (cyclic). Modes "
    "are named by their shape, after the uncoupled mode that they are most like. "
)
_GIVEN = (
    "Stand modes as measured, corrected for a rotor that was not fitted, or of a uniform column; "
    "shaft modes as given, or of the drive train with the blades free to lag on the hub. A "
    "measured frequency corrects the model. "
)
_BEAM_SOURCE = (
    "Euler-Bernoulli beam under tension, coupled after Houbolt and Brooks, NACA Report 1346, 1958 "
    "(from memory); checked against Wright, Smith, Thresher, Wang, J. Appl. Mech. 49 (1982) "
    "197-202 and Hodges, Rutkowski, AIAA J. 19 (1981) 1459-1466 (from memory)"
)
_BEAM_VALID = (
    "straight slender blades about their unloaded shape: no Coriolis coupling by coning, no "
    "steady bending, no untwisting by tension"
)
_ON_STAND = (
    "one mode at a time, linear, damping up to half of critical; all unbalance in one plane at "
    "the hub and in the worst phase"
)
_SWEEP_SOURCE = (
    "oscillator under a sweep, derived; fit of the peak: Cronin, Shock and Vibration Bulletin "
    "38, 1968 (from memory)"
)

RESONANCE = (
    Quantity(
        id="mode_frequency",
        name="Natural frequency",
        unit="Hz",
        symbol="f",
        axes=("segment", "mode"),
        danger="none",
        study="modes",
        method=_BEAM + _GIVEN + "Low and high: hold window of speed and collective, and the "
        "frequency allowance or what a measurement leaves of it.",
        validity=_BEAM_VALID,
        source=_BEAM_SOURCE,
        hand_check="first flap mode (hingeless: about the equivalent hinge) and first lag mode of "
        "articulated hubs: rigid blade about its hinge",
        hand_band=0.06,
        allowance="frequency",
    ),
    Quantity(
        id="mode_damping",
        name="Modal damping",
        unit="%",
        symbol="ζ",
        axes=("segment", "mode"),
        danger="low",
        study="modes",
        method="First flap modes: from the air, as flap_damping_ratio; first lag mode of an "
        "articulated hub: damper over critical; both times the share of the mode's motion in its "
        "family, and not computed below half; stand and shaft modes as stated, with the damping "
        "allowance; other blade modes are not computed.",
        validity="light coupling between modes",
        source="definitions",
        hand_check="none: see flap_damping_ratio",
        allowance="air_load",
    ),
    Quantity(
        id="mode_share",
        name="Share of a blade mode's motion in its own family",
        unit="%",
        symbol="κ",
        axes=("segment", "mode"),
        danger="none",
        study="modes",
        method="Kinetic energy of the mode in flap, lag or torsion over all of it.",
        validity=_BEAM_VALID,
        source="definition",
        hand_check="none: tells how far a mode is a mixture",
    ),
    Quantity(
        id="frequency_correction",
        name="Correction of a mode's frequency by measurement",
        unit="%",
        symbol="Δf",
        axes=("mode",),
        danger="none",
        study="modes",
        method="The stiffness part of the squared frequency is scaled to fit the measurements; "
        "told is the change of frequency where it was first measured. A free hinge has no "
        "stiffness to scale.",
        validity="measured and computed within 20 % of each other",
        source="common practice",
        hand_check="none: redone from measured and computed frequency",
    ),
    Quantity(
        id="frequency_residual",
        name="What a measurement leaves open of a mode's frequency",
        unit="%",
        symbol="r",
        axes=("mode",),
        danger="none",
        study="modes",
        method="Largest difference between measurements and the corrected model, plus the "
        "accuracy of measuring. It takes the place of the frequency allowance up to the highest "
        "speed of measuring; what the squared frequency gains beyond keeps the allowance.",
        validity="as for the correction",
        source="common practice",
        hand_check="none: one subtraction",
    ),
    Quantity(
        id="harmonic_spacing",
        name="Distance of a mode from a rotor harmonic",
        unit="%",
        symbol="Δf",
        axes=("segment", "mode", "harmonic"),
        danger="low",
        study="modes",
        method="Least |f / (n Ω) - 1| over the hold window and the frequency allowance. Blade "
        "modes against each harmonic n from 1 to 8. Stand modes against 1 and one, two and three "
        "times the blade number; shaft modes against one, two and three times the blade number.",
        validity="as for the natural frequencies",
        source="common practice",
        hand_check="none: redone from frequency and speed on the card",
        allowance="frequency",
    ),
    Quantity(
        id="crossing_speed",
        name="Rotor speed where a mode meets a harmonic",
        unit="rpm",
        symbol="Ω",
        axes=("mode", "harmonic"),
        danger="none",
        study="modes",
        method="Speeds, up to a fifth beyond full speed and the card's, where the natural "
        "frequency equals n Ω; low and high: where it may do so within its allowance.",
        validity="as for the natural frequencies",
        source="common practice",
        hand_check="none: read off the fan chart",
        allowance="frequency",
    ),
    Quantity(
        id="crossing_cover",
        name="Room of a passed resonance inside its keep-out band",
        unit="rpm",
        symbol="ΔΩ",
        axes=("segment", "mode", "harmonic"),
        danger="low",
        study="passages",
        method="For each ramp and each harmonic that excites a stand or shaft mode: the speeds at "
        "which they meet, with the frequency allowance and the gauge's error, against the "
        "declared keep-out bands. Inside a band: distance to its nearer edge. Outside all: not "
        "computed, because nobody watches the passage.",
        validity="modes with the rotor on, as measured, corrected or computed",
        source="common practice",
        hand_check="none: one division and one subtraction",
        allowance="frequency",
    ),
    Quantity(
        id="fixed_frame_spacing",
        name="Distance of a blade mode, seen from the stand, from a mode of the stand",
        unit="%",
        symbol="Δf",
        axes=("segment", "mode", "harmonic"),
        danger="low",
        study="modes",
        method="Blades that move in a wave around the rotor shake the stand at |Ω - ω| and "
        "Ω + ω. Least distance of these from each mode of the stand, over that mode's frequency, "
        "over the hold window and both frequency allowances; two lowest flap and lag modes. "
        "Only a wave that falls behind the rotation, Ω above ω, can be fed by it: the others are "
        "told for information and not judged.",
        validity="nearness alone: whether the two together are stable is another question; three "
        "blades and more, two blades to first order",
        source="Coleman, Feingold, NACA Report 1351, 1958 (abstract read; which waves are fed is "
        "from memory)",
        hand_check="none: redone from frequency and speed on the card",
        allowance="frequency",
    ),
    Quantity(
        id="unbalance",
        name="Unbalance that passages are computed for",
        unit="kg m",
        symbol="U",
        axes=(),
        danger="high",
        study="unbalance",
        method="Residual unbalance of hub and rotor, measured or by balance grade (mass times "
        "grade over reference speed), plus what blades of unequal static moment and uneven lag "
        "angle add, all in the worst phase and the worst order of blades.",
        validity="unbalance in one plane at the hub",
        source="ISO 21940-11:2016 (read second hand); sums derived",
        hand_check="none: products and a sum, redone with a pencil",
    ),
    Quantity(
        id="passage_amplitude",
        name="Sway of the hub while a stand mode is passed",
        unit="mm",
        symbol="x",
        axes=("segment", "mode", "harmonic", "state"),
        danger="high",
        study="speeds",
        method="Each stand mode as one degree of freedom with its modal mass, driven once per "
        "revolution by the unbalance, whose force grows with the square of speed, and marched "
        "through the actual ramp, stop or abort; power may also fail in the middle of a ramp, a "
        "little above the mode. Frequency and damping allowances change the mode, in run-downs "
        "the torque allowance the rate. High end of a ramp: also if its last speed is then held. "
        "Does not apply where the mode is not passed.",
        validity=_ON_STAND,
        source=_SWEEP_SOURCE,
        hand_check="even ramps and run-downs: U/M times steady peak 1/(2 ζ) times 1 - exp(-2.86 "
        "η^-0.445), η the rate over the bandwidth squared",
        hand_band=0.2,
        hand_floor=2e-4,
        allowance="frequency",
    ),
    Quantity(
        id="passage_peak_speed",
        name="Rotor speed at the peak of a passage",
        unit="rpm",
        symbol="Ω",
        axes=("segment", "mode", "harmonic", "state"),
        danger="none",
        study="speeds",
        method="Speed at which the sway is largest: above the resonance on the way up, below it "
        "on the way down.",
        validity=_ON_STAND,
        source=_SWEEP_SOURCE,
        hand_check="none: undamped it is the resonance ± 2.157 times the root of the rate",
        allowance="frequency",
    ),
    Quantity(
        id="passage_rate_needed",
        name="Rate of run-up that keeps the hub's sway below its rating",
        unit="rpm/s",
        symbol="dΩ/dt",
        axes=("mode",),
        danger="none",
        study="passages",
        method="Slowest even rate of rotor speed, from half the mode's frequency to well beyond, "
        "whose marched passage stays below the hub_amplitude of the stand's ratings; zero where "
        "even standing on the resonance does.",
        validity=_ON_STAND,
        source=_SWEEP_SOURCE,
        hand_check="the fit of the peak solved for the rate",
        hand_band=0.35,
        hand_floor=0.05,
        allowance="frequency",
    ),
    Quantity(
        id="band_distance",
        name="Distance of a hold from a keep-out band",
        unit="rpm",
        symbol="ΔΩ",
        axes=("segment", "band"),
        danger="low",
        study="schedule",
        method="From the hold's window (with gauge error) to the band's nearer edge; negative: "
        "inside.",
        validity="bands that the plan declares",
        source="the schedule itself",
        hand_check="none: one subtraction",
    ),
    Quantity(
        id="band_rate",
        name="Rate of passage through a keep-out band",
        unit="%",
        symbol="dΩ/dt",
        axes=("segment", "band"),
        danger="low",
        study="schedule",
        method="Rate of change of speed over 100 % rpm, for each second.",
        validity="powered, prescribed ramps; an unpowered passage cannot choose its rate and is "
        "judged by band_cycles and passage_amplitude",
        source="the schedule itself",
        hand_check="none: one division",
    ),
)
