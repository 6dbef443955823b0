"""The rotor file: blades, sections, hub and stops, as people write them."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field

from planner.files.schema_texts import FileName, Text
from planner.files.schema_values import Choice, Number, Quantity, Table, Whole

Length = Annotated[float, Quantity("length", minimum="0 m", example="0.2 m")]
PositiveLength = Annotated[float, Quantity("length", positive=True, example="5.5 m")]
Offset = Annotated[float, Quantity("length", example="12 mm")]
Angle = Annotated[float, Quantity("angle", example="-4 deg")]
FlapAngle = Annotated[
    float, Quantity("angle", minimum="-90 deg", maximum="90 deg", example="-4 deg")
]
Precone = Annotated[float, Quantity("angle", minimum="-20 deg", maximum="20 deg", example="2 deg")]
Coupling = Annotated[
    float, Quantity("angle", minimum="-60 deg", maximum="60 deg", example="0 deg")
]
PositiveAngle = Annotated[float, Quantity("angle", positive=True, maximum="90 deg")]
AbsoluteSpeed = Annotated[float, Quantity("rotor speed", positive=True, example="380 rpm")]
Spring = Annotated[float, Quantity("angular stiffness", minimum="0 N m/rad", example="0 N m/rad")]
StiffSpring = Annotated[float, Quantity("angular stiffness", positive=True, example="80 kN m/rad")]
Damper = Annotated[
    float, Quantity("angular damping", minimum="0 N m s/rad", example="0 N m s/rad")
]
MomentRating = Annotated[float, Quantity("moment", positive=True, example="6 kN m")]
Stiffness = Annotated[float, Quantity("bending stiffness", positive=True, example="30 kN m2")]
Label = Annotated[str, Text(longest=120)]
Frequency = Annotated[float, Quantity("frequency", positive=True, example="2.3 Hz")]
Accuracy = Annotated[float, Quantity("share", positive=True, maximum="10 %", example="1 %")]
Bare = Annotated[float, Number(positive=True)]


class Station(Table):
    """One row of the station table, written inline."""

    radius: Length = Field(description="Radius of the station from the shaft axis.")
    chord: Length = Field(description="Chord; above zero wherever the blade lifts.")
    twist: Angle = Field(description="Built-in twist, nose up positive.")
    mass: Annotated[float, Quantity("mass per length", positive=True, example="7 kg/m")] = Field(
        description="Mass per length, without point masses."
    )
    flap_stiffness: Stiffness = Field(description="Bending stiffness EI in flap.")
    lag_stiffness: Stiffness = Field(description="Bending stiffness EI in lag.")
    torsion_stiffness: Stiffness = Field(description="Torsion stiffness GJ.")
    pitch_inertia: Annotated[
        float, Quantity("pitch inertia per length", positive=True, example="0.04 kg m")
    ] = Field(description="Pitch inertia per length about the pitch axis.")
    cg_offset: Offset = Field(
        description="Centre of gravity, positive aft of the pitch axis; it couples blade modes."
    )
    ac_offset: Offset = Field(
        description="Aerodynamic centre, positive aft of the pitch axis;"
        " kept for the record, not used yet."
    )


class PointMassTable(Table):
    """A lumped mass on the blade."""

    name: Label = Field(description="What the mass is, such as a tip weight.")
    radius: PositiveLength = Field(description="Radius of the mass from the shaft axis.")
    mass: Annotated[float, Quantity("mass", positive=True, example="2.5 kg")] = Field(
        description="Mass on one blade."
    )
    offset: Offset | None = Field(
        default=None,
        description="Chordwise place, positive aft of the pitch axis; left out, the mass lies on"
        " that axis.",
    )


class BladeTable(Table):
    """The blade set: equal blades with their serial numbers."""

    serials: list[Label] = Field(
        description="Serial number of each blade, in the order of the hub arms.", min_length=1
    )
    stations: Annotated[str, FileName(example="blade.csv")] | None = Field(
        default=None, description="CSV file with the spanwise stations, units in its header."
    )
    station: list[Station] = Field(
        default=[], description="Spanwise stations inline, root to tip, instead of a CSV file."
    )
    point_mass: list[PointMassTable] = Field(
        default=[], description="Lumped masses of one blade, such as balance and tip weights."
    )


class SymmetricTable(Table):
    """A section by a built-in symmetric law with the plan's own numbers."""

    name: Label = Field(description="Name of the section.")
    kind: Literal["symmetric"] = Field(description='"symmetric" or "polar".')
    from_: Length = Field(alias="from", description="Radius where this section begins.")
    to: PositiveLength = Field(description="Radius where this section ends.")
    lift_slope: Annotated[float, Quantity("per angle", positive=True, example="5.73 /rad")] = (
        Field(description="Lift slope in incompressible flow.")
    )
    zero_lift_drag: Bare = Field(description="Drag coefficient at zero lift.")
    drag_rise: Annotated[
        float, Quantity("per angle squared", minimum="0 /rad2", example="1.25 /rad2")
    ] = Field(description="Drag coefficient rise with the square of the angle of attack.")
    stall_angle: PositiveAngle = Field(description="Angle of attack where lift stops growing.")


class PolarTable(Table):
    """A section by measured or computed coefficients.

    Over the full circle, or ending near stall on both sides: it is then continued.
    """

    name: Label = Field(description="Name of the section.")
    kind: Literal["polar"] = Field(description='"symmetric" or "polar".')
    from_: Length = Field(alias="from", description="Radius where this section begins.")
    to: PositiveLength = Field(description="Radius where this section ends.")
    polar: Annotated[str, FileName(example="polar.csv")] = Field(
        description="CSV file: angle [deg], lift, drag, optional moment, mach."
    )


class ArticulatedTable(Table):
    """Hub with flap and lag hinges."""

    kind: Literal["articulated"] = Field(description='"articulated", "hingeless" or "teetering".')
    flap_hinge: Length = Field(description="Flap hinge offset from the shaft axis.")
    lag_hinge: Length = Field(description="Lag hinge offset from the shaft axis.")
    flap_spring: Spring = Field(description="Flap hinge spring.")
    flap_spring_neutral: FlapAngle = Field(
        description="Flap angle where that spring is relaxed, counted from precone."
    )
    flap_damper: Damper = Field(description="Flap hinge damper.")
    lag_spring: Spring = Field(description="Lag hinge spring.")
    lag_damper: Damper = Field(description="Lag hinge damper.")
    pitch_flap_coupling: Coupling = Field(
        description="Delta-three: pitch falls by its tangent times flap."
    )
    precone: Precone = Field(description="Built-in cone angle, up positive.")


class HingelessTable(Table):
    """Hub with blades clamped at a root radius."""

    kind: Literal["hingeless"] = Field(description='"articulated", "hingeless" or "teetering".')
    root: Length = Field(description="Radius where the blade is clamped.")
    precone: Precone = Field(description="Built-in cone angle, up positive.")
    pitch_flap_coupling: Coupling = Field(
        description="Delta-three: pitch falls by its tangent times flap."
    )
    flap_damper: Damper = Field(description="Flap damping at the root.")
    root_moment_rating: MomentRating = Field(description="Flap moment that the root carries.")
    equivalent_hinge: Length | None = Field(
        default=None, description="Equivalent hinge offset, if you state one; with its spring."
    )
    equivalent_spring: Spring | None = Field(
        default=None, description="Equivalent hinge spring, if you state one; with its hinge."
    )


class TeeteringTable(Table):
    """Hub with two blades on one hinge at the shaft axis."""

    kind: Literal["teetering"] = Field(description='"articulated", "hingeless" or "teetering".')
    precone: Precone = Field(description="Built-in cone angle, up positive.")
    teeter_spring: Spring = Field(description="Teeter hinge spring.")
    teeter_damper: Damper = Field(description="Teeter hinge damper.")
    pitch_flap_coupling: Coupling = Field(
        description="Delta-three: pitch falls by its tangent times flap."
    )


class RetractionTable(Table):
    """A droop stop that swings clear under centrifugal force."""

    release: AbsoluteSpeed = Field(description="Running up: the stop is clear from this speed.")
    reseat: AbsoluteSpeed = Field(description="Running down: the stop is back at this speed.")
    retracted_angle: FlapAngle = Field(description="Lowest flap angle when retracted.")


class UpStopTable(Table):
    """A one-sided flap stop above the blade."""

    angle: FlapAngle = Field(description="Flap angle of first contact, up positive.")
    stiffness: StiffSpring = Field(description="Contact stiffness about the hinge, on one side.")
    damping: Damper = Field(
        description="Contact damping about the hinge where the stop carries its moment_rating;"
        " it grows with penetration from zero."
    )
    moment_rating: MomentRating = Field(description="Moment that the stop carries.")


class DroopStopTable(UpStopTable):
    """A one-sided flap stop below the blade."""

    retraction: RetractionTable | None = Field(
        default=None, description="Given only when the stop retracts with rotor speed."
    )


class LagStopTable(Table):
    """The two stops of a lag hinge, alike; angles count against the rotation, lag positive."""

    lead: Annotated[
        float, Quantity("angle", minimum="-90 deg", maximum="0 deg", example="-4 deg")
    ] = Field(description="Lag angle where a leading blade meets its stop: zero or negative.")
    lag: Annotated[
        float, Quantity("angle", minimum="0 deg", maximum="90 deg", example="15 deg")
    ] = Field(description="Lag angle where a lagging blade meets its stop: zero or positive.")
    stiffness: StiffSpring = Field(description="Contact stiffness about the lag hinge.")
    damping: Damper = Field(
        description="Contact damping about the lag hinge where the stop carries its"
        " moment_rating; it grows with penetration from zero."
    )
    moment_rating: MomentRating = Field(description="Moment that each of the two stops carries.")


class BalanceTable(Table):
    """What drives the stand once per revolution: a grade, or a measured unbalance."""

    grade: (
        Annotated[float, Quantity("balance grade", positive=True, example="6.3 mm/s")] | None
    ) = Field(
        default=None,
        description="Balance grade, with mass and reference_speed; or give measured.",
    )
    mass: Annotated[float, Quantity("mass", positive=True, example="320 kg")] | None = Field(
        default=None, description="Mass that the grade refers to: blades and hub; with grade."
    )
    reference_speed: AbsoluteSpeed | None = Field(
        default=None,
        description="Highest rotor speed in service, to which the grade refers; with grade.",
    )
    measured: (
        Annotated[float, Quantity("first moment", positive=True, example="0.2 kg m")] | None
    ) = Field(
        default=None,
        description="Measured residual unbalance of hub and rotor, without the two spreads; or"
        " give grade.",
    )
    static_moment_spread: Annotated[
        float, Quantity("first moment", minimum="0 kg m", example="0.03 kg m")
    ] = Field(description="Greatest difference of first mass moment between two blades.")
    lag_angle_spread: Annotated[
        float, Quantity("angle", minimum="0 deg", maximum="5 deg", example="0.2 deg")
    ] = Field(description="Greatest difference of lag angle between two blades, from even places.")
    source: Label = Field(description="Where the numbers come from.")


class BladeFrequencyTable(Table):
    """A natural frequency of a blade, found by a rap test or in an earlier run."""

    mode: Label = Field(
        description='Mode, such as "flap 2"; of a teetering hub such as "flap 2 cyclic".'
    )
    frequency: Frequency = Field(
        description="Natural frequency as seen on the turning blade; it corrects the model."
    )
    speed: Annotated[float, Quantity("rotor speed", minimum="0 rpm", example="0 rpm")] = Field(
        description='Rotor speed where it was found; "0 rpm" for a rap test.'
    )
    collective: FlapAngle = Field(description="Collective pitch where it was found.")
    accuracy: Accuracy = Field(
        description="Error of the measured frequency, either way, above 0 and up to 10 %."
    )
    source: Label = Field(description="Where the numbers come from.")


class RotorFile(Table):
    """The article under test."""

    name: Label = Field(description="Name of the rotor.")
    blades: Annotated[int, Whole(2, 20)] = Field(description="Number of blades.")
    radius: PositiveLength = Field(description="Tip radius from the shaft axis.")
    aero_root: Length = Field(description="Radius where lift begins (root cut-out).")
    collective_radius: PositiveLength = Field(
        description="Radius at which blade pitch equals the stated collective."
    )
    rotation: Annotated[str, Choice(("counter-clockwise", "clockwise"))] = Field(
        description="Sense of rotation seen from the thrust side."
    )
    design_maximum_speed: AbsoluteSpeed = Field(description="Highest speed by design.")
    proven_speed: AbsoluteSpeed = Field(description="Highest speed proven by test.")
    control_stiffness: StiffSpring = Field(
        description="Stiffness of the control system about one blade's pitch axis."
    )
    cyclic_authority: PositiveAngle = Field(description="Largest cyclic pitch that is available.")
    root_force_rating: Annotated[float, Quantity("force", positive=True, example="260 kN")] = (
        Field(description="Centrifugal force that one blade root carries.")
    )
    blade: BladeTable = Field(description="The blade set.")
    section: list[Annotated[SymmetricTable | PolarTable, Field(discriminator="kind")]] = Field(
        description="Sections from the aerodynamic root to the tip, without gaps.", min_length=1
    )
    hub: Annotated[
        ArticulatedTable | HingelessTable | TeeteringTable, Field(discriminator="kind")
    ] = Field(description="How the blades are held.")
    droop_stop: DroopStopTable | None = Field(
        default=None, description="Lower flap stop; articulated and teetering hubs need it."
    )
    up_stop: UpStopTable | None = Field(
        default=None, description="Upper flap stop; articulated and teetering hubs need it."
    )
    lag_stop: LagStopTable | None = Field(
        default=None, description="Lag stops; only an articulated hub has them."
    )
    balance: BalanceTable | None = Field(
        default=None,
        description="Unbalance of rotor and hub; without it no passage of a stand resonance is"
        " assessed.",
    )
    measured_mode: list[BladeFrequencyTable] = Field(
        default=[], description="Measured frequencies of the blades; they correct the model."
    )
