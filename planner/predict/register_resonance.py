"""Register entries for natural frequencies, their spacing from harmonics, and keep-out bands."""

from __future__ import annotations

from planner.model.results import Quantity

_BEAM = (
    "Rotating-beam finite elements (cubic in bending, centrifugal stiffening with point masses), "
    "flap, lag and torsion each by itself at zero pitch: coupling by twist, pitch and offset "
    "centre of gravity is not included. "
)
_BEAM_SOURCE = (
    "Euler-Bernoulli beam under tension; checked against Wright, Smith, Thresher, Wang, J. Appl. "
    "Mech. 49 (1982) 197-202 and Hodges, Rutkowski, AIAA J. 19 (1981) 1459-1466 (from memory)"
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
        method=_BEAM + "Stand and shaft modes as given. Low and high: hold window and the "
        "frequency allowance.",
        validity="straight slender blades, uncoupled modes; speeds 0 to 120 % rpm",
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
        method="First flap modes: from the air, as flap_damping_ratio; first lag mode: damper "
        "over critical; stand and shaft modes as given; other blade modes are not computed.",
        validity="light coupling between modes",
        source="definitions",
        hand_check="none: see flap_damping_ratio",
        allowance="air_load",
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
        "modes against each harmonic n from 1 to 8. Stand modes against 1 and the blade number "
        "and its multiple; shaft modes against the blade number and its multiple.",
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
        method="Speeds up to 120 % rpm where the natural frequency equals n Ω, between computed "
        "speeds by linear interpolation.",
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
        validity="modes as given, with the rotor fitted",
        source="common practice",
        hand_check="none: one division and one subtraction",
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
        "judged by band_cycles and band_amplification",
        source="the schedule itself",
        hand_check="none: one division",
    ),
    Quantity(
        id="band_time",
        name="Time inside a keep-out band",
        unit="s",
        symbol="t",
        axes=("band",),
        danger="high",
        study="schedule",
        method="Sum over all holds, ramps and the stop, repeats counted; ramps at constant rate.",
        validity="prescribed ramps; the stop with its stated time at constant rate",
        source="the schedule itself",
        hand_check="none: one division for each passage",
    ),
)
