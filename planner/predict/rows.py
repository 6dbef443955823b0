"""Collecting rows of a prediction one label at a time."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np

from planner.model.results import Labels, Prediction, Status


@dataclass
class Rows:
    """Rows of one quantity while a study fills them."""

    quantity: str
    study: str
    _rows: list[tuple[Labels, float, float, float, Status, str, float, float]] = field(
        default_factory=list
    )

    def add(
        self,
        labels: Labels,
        value: float,
        *,
        low: float | None = None,
        high: float | None = None,
        speed_rad_s: float = math.nan,
        hand: float = math.nan,
    ) -> None:
        """Add an assessed row; a number that is not finite becomes NOT COMPUTED instead."""
        low = value if low is None else low
        high = value if high is None else high
        if not (math.isfinite(value) and math.isfinite(low) and math.isfinite(high)):
            self.flag(
                labels,
                Status.NOT_COMPUTED,
                "the result is not a finite number",
                speed_rad_s=speed_rad_s,
            )
            return
        low, high = min(low, value), max(high, value)
        self._rows.append((labels, value, low, high, Status.OK, "", speed_rad_s, hand))

    def flag(
        self,
        labels: Labels,
        status: Status,
        reason: str,
        *,
        numbers: tuple[float, float, float] = (math.nan, math.nan, math.nan),
        speed_rad_s: float = math.nan,
    ) -> None:
        """Add a row that is not assessed, with its reason and any number for information."""
        value, low, high = numbers
        self._rows.append((labels, value, low, high, status, reason, speed_rad_s, math.nan))

    def prediction(self) -> Prediction:
        """Freeze the rows."""
        columns = list(zip(*self._rows, strict=True)) or [()] * 8
        numbers = [np.array(columns[i], dtype=np.float64) for i in (1, 2, 3, 6, 7)]
        return Prediction(
            quantity=self.quantity,
            study=self.study,
            labels=tuple(columns[0]),
            value=numbers[0],
            low=numbers[1],
            high=numbers[2],
            status=tuple(columns[4]),
            reasons=tuple(columns[5]),
            speed_rad_s=numbers[3],
            hand=numbers[4],
        )


def single(quantity: str, study: str, value: float, **rest: float) -> Prediction:
    """Prediction of a whole-run quantity with one assessed row."""
    rows = Rows(quantity, study)
    rows.add(Labels(), value, **rest)
    return rows.prediction()
