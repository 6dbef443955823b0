"""Predictions against their independent closed forms: a disagreement is a finding."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from planner.judge.case import place_words
from planner.model.results import Finding, Status, Verdict
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Mapping

    from planner.model.results import Prediction, Predictions, Quantity

ROUNDING = 1e-9
"""Relative difference that is allowed on top of every band, for exact hand checks."""


def hand_check_findings(
    vocabulary: Mapping[str, Quantity], predictions: Predictions
) -> tuple[Finding, ...]:
    """List the quantities whose number and hand check differ by more than the stated band.

    The difference is measured against the hand check. Rows that are not OK are not compared,
    nor are rows whose hand check is NaN: it does not compare there.
    """
    found = (
        _finding(quantity, predictions[quantity.id])
        for quantity in vocabulary.values()
        if quantity.id in predictions
    )
    return tuple(finding for finding in found if finding is not None)


def _finding(quantity: Quantity, prediction: Prediction) -> Finding | None:
    band = quantity.hand_band + ROUNDING
    numbers = zip(
        prediction.value.tolist(), prediction.hand.tolist(), prediction.status, strict=True
    )
    compared = [
        (i, value, hand)
        for i, (value, hand, status) in enumerate(numbers)
        if status is Status.OK and not math.isnan(hand)
    ]
    apart = [
        row
        for row in compared
        if not abs(row[1] - row[2]) <= max(band * abs(row[2]), quantity.hand_floor) < math.inf
    ]
    if not apart:
        return None
    worst, value, hand = max(apart, key=lambda row: _difference(row[1], row[2]))
    labels = prediction.labels[worst]
    unit = quantity.unit
    segments = {prediction.labels[i].segment for i, _, _ in apart} - {""}
    return Finding(
        rule=f"hand check: {quantity.id}",
        where=place_words(labels),
        segment=labels.segment,
        value=value,
        low=float(prediction.low[worst]),
        high=float(prediction.high[worst]),
        limit=hand,
        caution=math.nan,
        margin=max(quantity.hand_band * abs(hand), quantity.hand_floor) - abs(value - hand),
        verdict=Verdict.NOT_ASSESSED,
        reason=(
            f"predicted {from_si(value, unit):.6g} {unit}, by hand {from_si(hand, unit):.6g} "
            f"{unit}: further apart than {quantity.hand_band:.3%} ({len(apart)} of "
            f"{len(compared)} disagree); hand check: {quantity.hand_check}"
        ),
        tested=len(compared),
        not_assessed=len(apart),
        segment_verdicts=dict.fromkeys(sorted(segments), Verdict.NOT_ASSESSED.value),
    )


def _difference(value: float, hand: float) -> float:
    difference = abs(value - hand) / max(abs(hand), math.ulp(1.0))
    return math.inf if math.isnan(difference) else difference
