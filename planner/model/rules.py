"""A rule book as data: what is judged, watched and confirmed, and what every plan must close."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

RuleKind = Literal["predicted", "watched", "confirmed"]
Sense = Literal["at most", "at least"]
Where = Literal["hold", "ramp", "stop", "abort", "run"]

HAZARD_CLASSES: dict[str, tuple[str, tuple[Where, ...]]] = {
    "stops": ("Flap range and stop contact", ("run", "hold", "ramp", "stop")),
    "clearance": ("Blade to stand and obstructions", ("hold", "ramp", "stop")),
    "resonance": ("Nearness to and passage through resonances", ("hold", "ramp", "stop")),
    "lag and stand stability": ("Lag motion against the stand", ("run",)),
    "pitch and flap stability": ("Flutter and divergence", ("run",)),
    "loads": ("Blade root, hub and stand loads", ("hold", "ramp", "stop")),
    "drive and overspeed": ("Torque, power and rotor speed", ("run", "hold", "ramp", "stop")),
    "aborts": ("Abort from any point of the run", ("abort",)),
    "people": ("Exclusion, outwash, entry", ("run",)),
}
"""Classes that every plan must close: id to title and the parts of a run it must cover.

A rule book and a plan may add classes; none can take one away.
"""

ABORTS = "aborts"
"""Class that numbers of aborts close, whatever the class of the rule that judges them."""


@dataclass(frozen=True)
class Limit:
    """A number, a table over rotor speed, or a share of a reference value.

    Exactly one of ``constant``, ``table`` and ``share`` is given. Values are SI.
    """

    constant: float | None = None
    table: tuple[tuple[float, float], ...] | None = None
    """(speed_rad_s, value) pairs, speed increasing; not extrapolated."""
    share: float | None = None
    reference: str | None = None
    """Id of the reference value that the share refers to."""


@dataclass(frozen=True)
class SpeedRange:
    """Speeds where a rule applies; each end is a speed or a share of a reference speed."""

    from_rad_s: float = 0.0
    to_rad_s: float | None = None
    from_reference: str | None = None
    to_reference: str | None = None


@dataclass(frozen=True)
class Rule:
    """One rule of a book.

    ``predicted`` rules name a quantity; ``watched`` ones a channel with its panel values;
    ``confirmed`` ones a sentence to initial.
    """

    id: str
    kind: RuleKind
    hazard_class: str
    title: str
    why: str
    basis: str
    where: tuple[Where, ...]
    quantity: str = ""
    sense: Sense = "at most"
    limit: Limit | None = None
    caution: Limit | None = None
    unit: str = ""
    """Display unit of limit and caution."""
    speed_range: SpeedRange = SpeedRange()
    mode_family: str = ""
    mode_orders: tuple[int, ...] = ()
    """Modes of the family that the rule covers, counted from one; empty: all."""
    harmonics: tuple[int, ...] = ()
    """Rotor harmonics that the rule covers; empty: all."""
    exempt_damping: float | None = None
    """Modes damped at least this much are exempt (ratio of critical)."""
    caution_acceptor: str = ""
    channel: str = ""
    watcher: str = ""
    caution_text: str = ""
    abort_text: str = ""
    when: str = ""
    """When a confirmed rule is initialled."""


@dataclass(frozen=True)
class Allowance:
    """Model allowance: the true value lies between low and high times the prediction."""

    id: str
    low: float
    high: float
    basis: str


@dataclass(frozen=True)
class RuleBook:
    """Rules with the office that owns them; several files of one plan are merged into one."""

    name: str
    revision: str
    owner: str
    approved: bool
    """False for an example book, which paper then says."""
    rules: tuple[Rule, ...]
    allowances: tuple[Allowance, ...]
    extra_classes: tuple[tuple[str, str], ...]
    wind_mean_cap_m_s: float | None
    wind_gust_cap_m_s: float | None
    wind_cap_basis: str
    stop_free_margin: float | None
    """Share above lift-off speed from which fixed stops count as left behind."""

    def allowance(self, allowance_id: str) -> Allowance | None:
        """Find an allowance, None where the book has none."""
        return next((a for a in self.allowances if a.id == allowance_id), None)
