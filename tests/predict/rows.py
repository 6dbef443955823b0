"""Finding rows of predictions by their labels."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from planner.model.results import Prediction


def rows(prediction: Prediction, **labels: str) -> list[int]:
    """Places of all rows with these labels."""
    return [
        i
        for i, label in enumerate(prediction.labels)
        if all(getattr(label, key) == value for key, value in labels.items())
    ]


def row(prediction: Prediction, **labels: str) -> int:
    """Place of the one row with these labels."""
    (found,) = rows(prediction, **labels)
    return found
