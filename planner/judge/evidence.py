"""What has to be judged before a built-in hazard class counts as closed by rules.

Without this a thin rule book could close a class with a rule that says nothing about the hazard.
Each class asks, in each segment and each abort, for every number below; a facility's book chooses
the limits, not whether the hazard is looked at. A class without numbers is closed by an outside
document only: its methods are not there. A method that is added later adds its quantities here.

Holds are judged by periodic states. In ramps, the stop and aborts the blades may meet their stops
and gusts pass, so that marched numbers are asked for; no periodic state stands in for them.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from planner.model.rules import HAZARD_CLASSES
from planner.predict.blade_modes import COLLECTIVE, CYCLIC

if TYPE_CHECKING:
    from collections.abc import Callable

    from planner.judge.case import Case, Place
    from planner.model.results import Quantity
    from planner.model.rules import Rule

TOP_SHARE = 0.9
"""Holds from this share of the card's highest speed have to be judged for blade modes too: the
loads that drive these grow with speed squared, so a book may leave out slow build-up holds."""


@dataclass(frozen=True)
class Evidence:
    """One kind of number that speaks of a hazard."""

    quantity: str
    family: str = ""
    """Mode family; empty: any."""
    harmonic: str = ""
    """Rotor harmonic; empty: any."""
    order: int = 0
    """Order of the mode in its family; zero: any."""
    mode: str = ""
    """Label of one mode; empty: any."""
    band: str = ""
    """Keep-out band; empty: any."""
    must_apply: bool = False
    """Nothing can make it not apply: a row that says so is no evidence."""

    def __str__(self) -> str:
        """Words for a reason."""
        words = self.quantity
        if self.mode:
            words += f" of {self.mode}"
        elif self.family:
            order = f" {self.order}" if self.order else ""
            words += f" of {self.family}{order} modes"
        if self.band:
            words += f" of band {self.band}"
        return f"{words} at {self.harmonic} per revolution" if self.harmonic else words


def wanted(hazard_class: str, place: Place | None, case: Case) -> tuple[Evidence, ...] | None:
    """Numbers that must all be judged to close a class in a segment or an abort.

    Args:
        hazard_class: a built-in class, or one that the book or plan adds.
        place: where; None for the run as a whole.
        case: plan and predictions.

    Returns:
        The numbers; empty where any judged rule of the class serves (added classes) or where
        nothing of the kind can occur (a ramp that enters no keep-out band); None where no
        quantity there is can close the class.
    """
    if hazard_class not in HAZARD_CLASSES:
        return ()
    if place is None:
        return _ON_RUN.get(hazard_class)
    if hazard_class not in _BY_PLACE:
        return None
    return _BY_PLACE[hazard_class](place, case)


def faces_danger(rule: Rule, quantity: Quantity) -> bool:
    """Tell whether a rule limits its quantity on the dangerous side."""
    if quantity.danger in {"high", "both"}:
        return rule.sense == "at most"
    return quantity.danger != "low" or rule.sense == "at least"


def _stops(place: Place, case: Case) -> tuple[Evidence, ...]:
    """A hingeless blade by its root moment; others by both stops.

    Holds: both margins and the moment of resting. Elsewhere: what the blades do to their stops,
    and that none is met once the blades have left it.
    """
    hingeless = case.plan.rotor.hub.kind == "hingeless"
    if place.kind == "hold":
        at_holds = ("droop_stop_clearance", "up_stop_clearance", "droop_stop_moment")
        return _all("root_flap_moment") if hingeless else _all(*at_holds)
    marched = (
        "droop_stop_peak_moment",
        "up_stop_peak_moment",
        "contacts_after_lift_off",
        "contact_highest_speed",
    )
    flap = _all("root_flap_peak_moment") if hingeless else _all(*marched)
    return (
        flap
        if case.plan.rotor.lag_stop is None
        else (*flap, *_all("lag_peak", "lag_stop_peak_moment"))
    )


def _clearance(_: Place, __: Case) -> tuple[Evidence, ...]:
    return _all("blade_clearance")


def _aborts(place: Place, case: Case) -> tuple[Evidence, ...]:
    """What a ramp and the stop are asked for that an abort may exceed, and that it ends."""
    asked = ("blade_clearance", "hub_moment_peak", "time_to_rest")
    always = tuple(Evidence(q, must_apply=place.must_occur) for q in asked)
    return (*_stops(place, case), *always, *_unpowered(place, case))


def _unpowered(place: Place, case: Case) -> tuple[Evidence, ...]:
    """A passage that cannot choose its rate: by cycles, and by how far the stand sways."""
    must_apply = place.must_occur if place.state else True
    return (*_sway(place, case), *_entered("band_cycles", place, case, must_apply=must_apply))


def _sway(place: Place, case: Case) -> tuple[Evidence, ...]:
    """What each mode of the stand answers to unbalance while it is passed."""
    return _passages("passage_amplitude", place, case)


def _passages(quantity: str, place: Place, case: Case) -> tuple[Evidence, ...]:
    """A number of each mode of the stand at once per revolution.

    That the mode is not passed is taken only where the plan's speeds keep off its frequency. A
    stand file that gives no mode leaves open what is passed.
    """
    can_occur = place.must_occur if place.state else True
    return tuple(
        Evidence(
            quantity, "stand", "1", mode=mode, must_apply=can_occur and case.passes(place, mode)
        )
        for mode in _given("stand", case) or ("",)
    )


def _entered(quantity: str, place: Place, case: Case, *, must_apply: bool) -> tuple[Evidence, ...]:
    """A number of each keep-out band that a place enters."""
    return tuple(
        Evidence(quantity, band=band.id, must_apply=must_apply)
        for band in case.plan.keep_outs
        if place.enters(band)
    )


def _resonance(place: Place, case: Case) -> tuple[Evidence, ...]:
    if place.kind == "hold":
        return (*_blade_modes(place, case), *_given_modes(place, case), *_bands(case))
    covers = _passages("crossing_cover", place, case)
    if place.kind == "stop" and not case.plan.shutdown.powered:
        return (*covers, *_unpowered(place, case))
    rates = _entered("band_rate", place, case, must_apply=True)
    return (*covers, *_sway(place, case), *rates)


def _blade_modes(place: Place, case: Case) -> tuple[Evidence, ...]:
    """The lowest modes of each family, at the fastest holds; of a teetering pair both motions."""
    top = TOP_SHARE * case.whole_run.highest_rad_s
    if place.span.highest_rad_s < top:
        return ()
    lowest = (("flap", 1), ("flap", 2), ("lag", 1), ("torsion", 1))
    is_pair = case.plan.rotor.hub.kind == "teetering"
    motions = (CYCLIC, COLLECTIVE) if is_pair else ("",)
    return tuple(
        Evidence(
            "harmonic_spacing",
            family,
            order=n,
            mode=f"{family} {n}{motion}" if motion else "",
            must_apply=_turns(place),
        )
        for family, n in lowest
        for motion in motions
    )


def _turns(place: Place) -> bool:
    """Tell whether a hold is not one at rest, where there are no harmonics."""
    return place.span.highest_rad_s > 0.0


def _given_modes(place: Place, case: Case) -> tuple[Evidence, ...]:
    """Each stand mode against unbalance and the blades, each shaft mode against the blades.

    A family of which the stand file gives no mode is asked for all the same: it stays open.
    """
    blades = str(case.plan.rotor.n_blades)
    wanted_of = {"stand": ("1", blades), "shaft": (blades,)}
    return tuple(
        Evidence("harmonic_spacing", family, harmonic, mode=mode, must_apply=_turns(place))
        for family, harmonics in wanted_of.items()
        for mode in _given(family, case) or ("",)
        for harmonic in (harmonics if mode else ("",))
    )


def _given(family: str, case: Case) -> tuple[str, ...]:
    """Labels of a family's modes that the stand file gives or that follow from it."""
    return case.plan.stand.mode_labels(family)


def _bands(case: Case) -> tuple[Evidence, ...]:
    return tuple(
        Evidence("band_distance", band=band.id, must_apply=True) for band in case.plan.keep_outs
    )


def _loads(place: Place, __: Case) -> tuple[Evidence, ...]:
    if place.kind == "hold":
        return _all("thrust", "root_centrifugal_force", "hub_moment")
    return _all("thrust_peak", "root_centrifugal_force", "hub_moment_peak")


def _drive(place: Place, __: Case) -> tuple[Evidence, ...]:
    """Torque and power; in ramps also that the drive has torque left to follow the schedule."""
    both = _all("torque", "power")
    return (*both, *_all("drive_torque_reserve")) if place.kind == "ramp" else both


def _all(*quantities: str) -> tuple[Evidence, ...]:
    return tuple(Evidence(quantity) for quantity in quantities)


_ON_RUN: dict[str, tuple[Evidence, ...]] = {
    "drive and overspeed": _all("card_speed", "trip_above_card", "trip_below_proven"),
    "stops": _all("droop_stop_rest_moment"),
}
_BY_PLACE: dict[str, Callable[[Place, Case], tuple[Evidence, ...]]] = {
    "stops": _stops,
    "clearance": _clearance,
    "resonance": _resonance,
    "loads": _loads,
    "drive and overspeed": _drive,
    "aborts": _aborts,
}
