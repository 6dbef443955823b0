"""What comes out: predictions with their status, findings, and the verdict order."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from enum import Enum
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

Axis = Literal["segment", "mode", "harmonic", "band", "state"]


class Status(Enum):
    """How far a predicted number can be trusted."""

    OK = "ok"
    NOT_COMPUTED = "not computed"
    NOT_CONVERGED = "not converged"
    OUTSIDE_VALIDITY = "outside validity"
    NOT_STATED = "not stated"
    """The plan or the rule book lacks a value that it must have; no document stands in for it."""
    NOT_APPLICABLE = "does not apply"
    """The hub has no such part (a hingeless hub has no droop stop): nothing to judge."""


class Verdict(Enum):
    """Order of verdicts, mildest first."""

    GO = "GO"
    CAUTION = "CAUTION"
    NOT_ASSESSED = "NOT ASSESSED"
    NO_GO = "NO-GO"

    @property
    def rank(self) -> int:
        """Position in the order; the greater, the worse."""
        return _ORDER[self]

    @staticmethod
    def worst(verdicts: list[Verdict]) -> Verdict:
        """Pick the worst; none at all is NOT ASSESSED."""
        return max(verdicts, key=lambda v: v.rank) if verdicts else Verdict.NOT_ASSESSED


_ORDER = {verdict: rank for rank, verdict in enumerate(Verdict)}


@dataclass(frozen=True)
class Quantity:
    """An entry of the register: the one vocabulary of rules, paper and commands."""

    id: str
    name: str
    unit: str
    symbol: str
    axes: tuple[Axis, ...]
    danger: Literal["high", "low", "both", "none"]
    study: str
    validity: str
    source: str
    hand_check: str
    """What the independent check is, or why there is none."""
    allowance: str = ""
    """Id of the rule book's allowance that widens it; empty: exact arithmetic of inputs."""
    hand_band: float = 0.0
    """Relative difference from the hand check beyond which the two disagree."""
    hand_floor: float = 0.0
    """Difference in SI below which the two agree in any case."""
    method: str = ""
    accuracy: str = ""
    """What is known of its error against measurements, printed on paper."""


@dataclass(frozen=True)
class Labels:
    """Where one number of a prediction belongs; unused axes stay empty."""

    segment: str = ""
    mode: str = ""
    harmonic: str = ""
    band: str = ""
    state: str = ""
    """Cause of an abort, out of ``ABORT_CAUSES``; ``segment`` is then where the abort begins.

    Empty: the number belongs to the segment itself.
    """


@dataclass(frozen=True)
class Prediction:
    """Numbers of one quantity, one row per label, all SI; arrays have shape (rows,)."""

    quantity: str
    labels: tuple[Labels, ...]
    value: NDArray[np.float64]
    low: NDArray[np.float64]
    high: NDArray[np.float64]
    status: tuple[Status, ...]
    reasons: tuple[str, ...]
    speed_rad_s: NDArray[np.float64]
    """Rotor speed that each row belongs to, for limits over speed; NaN for the whole run."""
    hand: NDArray[np.float64]
    """Independent closed form; NaN where it does not compare."""
    study: str


Predictions = Mapping[str, Prediction]


@dataclass(frozen=True)
class Requests:
    """What the rules need computed: goes forward, before predicting; never a limit."""

    allowances: Mapping[str, tuple[float, float]]
    stop_free_margin: float | None
    is_thrifty: bool = False
    """Marches end with their search; for scans over many winds."""


@dataclass(frozen=True)
class OfCause:
    """What a rule comes to over the aborts of one cause, filled from the worst; numbers in SI."""

    verdict: str
    segment: str
    """Where the worst abort begins."""
    low: float
    high: float
    limit: float
    margin: float
    closed_by: str = ""
    """Numbers of outside documents that stand in for what was not assessed."""


@dataclass(frozen=True)
class Finding:
    """One rule judged over everything it covers."""

    rule: str
    where: str
    """Label of the worst row, in words."""
    segment: str
    value: float
    low: float
    high: float
    limit: float
    caution: float
    margin: float
    """Distance to the limit in SI, negative when exceeded."""
    verdict: Verdict
    reason: str
    tested: int
    not_assessed: int
    closed_by: str = ""
    """Number of the outside document that stands in for what was not assessed."""
    segment_verdicts: Mapping[str, str] = field(default_factory=dict)
    segment_margins: Mapping[str, float] = field(default_factory=dict)
    """Least margin of the assessed rows of each segment, SI."""
    by_state: Mapping[str, OfCause] = field(default_factory=dict)
    """The same for the aborts of each cause."""


@dataclass(frozen=True)
class Coverage:
    """How a hazard class is closed in one part of the run."""

    hazard_class: str
    where: str
    closed_by: str
    verdict: Verdict
    reason: str = ""
    """Why the class is not closed there."""


@dataclass(frozen=True)
class Judgement:
    """All findings, the coverage and what they come to."""

    findings: tuple[Finding, ...]
    coverage: tuple[Coverage, ...]
    verdict: Verdict
    segment_verdicts: Mapping[str, Verdict]
