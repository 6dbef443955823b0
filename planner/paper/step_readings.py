"""What a step row says of each reading: predicted, where to hold, margin, and room for ink."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.stop_loads import PEAKS, governing_peak
from planner.paper.tables import Cell

if TYPE_CHECKING:
    from planner.paper.reading import Reading, Shown

_GAPS = (("Droop gap", "droop_stop_clearance"), ("Up gap", "up_stop_clearance"))
_GAP_IDS = tuple(quantity for _, quantity in _GAPS)
_WATCHED = (*_GAPS, ("Thrust", "thrust"), ("Torque", "torque"), ("Power", "power"))
_ROOT = ("Root", "root_flap_moment")
_FLAP = ("flap_lowest", "flap_highest")
_MARCHED = ("lowest_flap_marched", "highest_flap_marched")
_NO_LIMIT = "no limit"

SubRow = tuple[Cell, ...]
"""Reading, predicted, outside which to hold, margin, blank."""

MOVING_KEY = (
    "On the way, marched through wind and gusts: flap at its ends; Stop: peak moment of the stop "
    "named, as a share of its rating; Contact: touches where the stops are left behind, and the "
    "rpm up to which blades touch. Margins there hold for aborts out of the row too."
)


def hold_readings(reading: Reading, segment_id: str) -> list[SubRow]:
    """Readings of a hold: flap and both gaps, or the root, then what the stand carries."""
    watched = (_ROOT, *_WATCHED) if is_hingeless(reading) else _WATCHED
    return [
        _flap(reading, segment_id, _FLAP, _FLAP),
        *(
            _one(reading, name, quantity, segment_id)
            for name, quantity in watched
            if reading.applies(quantity)
        ),
    ]


def moving_readings(reading: Reading, segment_id: str) -> list[SubRow]:
    """Readings of a ramp or the stop: marched flap, stop and contacts, and torque.

    A record of before ramps were marched has their periodic flap only.
    """
    torque = _one(reading, "Torque", "torque", segment_id)
    if _MARCHED[0] not in reading.record["predictions"]:
        return [_flap(reading, segment_id, _FLAP, (*_FLAP, *_GAP_IDS)), torque]
    judged = (*_MARCHED, *_GAP_IDS)
    rows = [_flap(reading, segment_id, _MARCHED, judged), _stop(reading, segment_id)]
    if not is_hingeless(reading):
        rows.append(_contact(reading, segment_id))
    return [*rows, torque]


def is_hingeless(reading: Reading) -> bool:
    """Whether the hub has no flap hinge, so that its root is judged in place of stops."""
    return bool(reading.plan["rotor"]["hub"]["kind"] == "hingeless")


def _flap(
    reading: Reading, segment_id: str, ends: tuple[str, str], judged: tuple[str, ...]
) -> SubRow:
    """Flap with its margin; on the way it stands for both gaps, which at holds have rows."""
    low, high = (reading.shown(quantity, segment_id) for quantity in ends)
    margin = reading.margin(segment_id, *judged)
    if margin == _NO_LIMIT:
        where = "see stop" if ends == _MARCHED else "see gaps"
        margin = "see root" if is_hingeless(reading) else where
    if not (low.is_number and high.is_number):
        return _missing("Flap", high if low.is_number else low, margin)
    predicted = texts.span(low.value, high.value, "deg")
    band = texts.hold_band(low.low, high.high, "deg")
    return (Cell("Flap"), Cell(predicted), Cell(band), Cell(margin), Cell())


def _stop(reading: Reading, segment_id: str) -> SubRow:
    """The stop, or the hingeless root, that comes nearest to its rating."""
    peak = governing_peak(reading, lambda quantity: reading.shown(quantity, segment_id))
    name = "Root" if is_hingeless(reading) else "Stop"
    judged = [quantity for quantity in PEAKS if reading.applies(quantity)]
    margin = reading.margin(segment_id, *judged) if judged else _NO_LIMIT
    if not peak.shown.is_number:
        return _missing(name, peak.shown, margin)
    if peak.shown.high <= 0.0:
        return (Cell(name), Cell("none met"), Cell("any: HOLD"), Cell(margin), Cell())
    which = "" if name == "Root" else f"{peak.name} "
    band = texts.hold_band(0.0, peak.shown.high, "N m")
    return (Cell(name), Cell(f"{which}{peak.share_text}"), Cell(band), Cell(margin), Cell())


def _contact(reading: Reading, segment_id: str) -> SubRow:
    """Touches where the stops are left behind, and up to which speed there are any."""
    number = reading.shown("contacts_after_lift_off", segment_id)
    speed = reading.shown("contact_highest_speed", segment_id)
    margin = reading.margin(segment_id, "contacts_after_lift_off").removesuffix(".0")
    missing = next((shown for shown in (number, speed) if not shown.is_number), None)
    if missing is not None:
        return _missing("Contact", missing, margin)
    band = f"up to {speed.text}" if speed.high > 0.0 else "none"
    return (
        Cell("Contact"),
        Cell(f"{count_text(number.high)} at speed"),
        Cell(band),
        Cell(margin),
        Cell(),
    )


def count_text(number: float) -> str:
    """Print how many things there are, part of one as one.

    Example:
        >>> count_text(0.0), count_text(2.2)
        ('none', '3')
    """
    whole = -int(-number // 1)
    return f"{whole}" if whole else "none"


def _one(reading: Reading, name: str, quantity: str, segment_id: str) -> SubRow:
    shown = reading.shown(quantity, segment_id)
    margin = reading.margin(segment_id, quantity)
    if not shown.is_number:
        return _missing(name, shown, margin)
    unit = reading.vocabulary[quantity]["unit"]
    danger = reading.vocabulary[quantity]["danger"]
    return (
        Cell(name),
        Cell(texts.toward_danger(shown.value, unit, danger)),
        Cell(texts.hold_band(shown.low, shown.high, unit)),
        Cell(margin),
        Cell(),
    )


def _missing(name: str, shown: Shown, margin: str) -> SubRow:
    return (Cell(name), Cell(shown.text), Cell(shown.why), Cell(margin), Cell())
