"""Kept results: what a slow study found is found again under the digest of all it depends on.

The key of a result is the digest of the study's id and version, the library versions, the slice
of the model that the study takes, the requests, and the keys of the studies that it needs (see
`planner.predict.study.Study.key`). So a changed comment, or a value that the study does not take,
finds the kept result, and anything that could move a number does not.

A store is a convenience, never a source of truth: what is not whole and valid is computed anew.
"""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Mapping
from typing import TYPE_CHECKING, Any, Protocol

import numpy as np

from planner.model.canonical import plain

if TYPE_CHECKING:
    from planner.model.results import Prediction


class Store(Protocol):
    """Keeps the predictions of studies, and other results in plain JSON values.

    A store that computes afresh gives nothing back and still keeps what is put. It never raises
    for what it cannot read or write.
    """

    def get(self, key: str) -> Mapping[str, Prediction] | None:
        """Predictions kept under a key; None where there are none, or not whole."""

    def put(self, key: str, predictions: Mapping[str, Prediction]) -> None:
        """Keep the predictions of one study."""

    def get_plain(self, key: str, *, even_if_fresh: bool = False) -> Mapping[str, Any] | None:
        """Another kept result.

        Args:
            key: any text that names the result and all it depends on.
            even_if_fresh: also from a store that computes afresh, for a result that is only
                looked up and not computed on the way.
        """

    def put_plain(self, key: str, content: Mapping[str, Any]) -> None:
        """Keep another result: anything that `planner.model.canonical.plain` takes."""


class NothingKept:
    """The store that keeps nothing."""

    def get(self, key: str) -> None:
        """Nothing is ever found."""

    def put(self, key: str, predictions: Mapping[str, Prediction]) -> None:
        """Let go."""

    def get_plain(self, key: str, *, even_if_fresh: bool = False) -> None:
        """Nothing is ever found."""

    def put_plain(self, key: str, content: Mapping[str, Any]) -> None:
        """Let go."""


NOTHING_KEPT = NothingKept()


class MemoryStore:
    """Keeps results as long as it lives: for loops within one run of the program."""

    def __init__(self) -> None:
        """Begin with nothing."""
        self._predictions: dict[str, Mapping[str, Prediction]] = {}
        self._others: dict[str, Mapping[str, Any]] = {}

    def get(self, key: str) -> Mapping[str, Prediction] | None:
        """Predictions kept under a key."""
        return self._predictions.get(key)

    def put(self, key: str, predictions: Mapping[str, Prediction]) -> None:
        """Keep the predictions of one study."""
        self._predictions[key] = dict(predictions)

    def get_plain(
        self,
        key: str,
        *,
        even_if_fresh: bool = False,  # noqa: ARG002 - memory is never older than the program
    ) -> Mapping[str, Any] | None:
        """Another kept result."""
        return self._others.get(key)

    def put_plain(self, key: str, content: Mapping[str, Any]) -> None:
        """Keep another result in its plain form."""
        self._others[key] = plain(content)


def exact(value: Any) -> Any:  # noqa: ANN401 - whatever plain accepts
    """The plain form with nothing lost, for keys.

    `plain` gives None, NaN and the infinities one form and drops the names of classes; two models
    that differ in these alone must not share a result.

    Raises:
        TypeError: a value of a kind that has no JSON form.

    Example:
        >>> exact({"a": (1.0, float("-inf")), "b": None})
        {'a': [1.0, {'not finite': '-inf'}], 'b': None}
    """
    if isinstance(value, np.ndarray):
        value = value.tolist()
    if isinstance(value, float | np.floating) and not math.isfinite(value):
        return {"not finite": str(float(value))}
    if isinstance(value, Mapping):
        return {str(key): exact(value[key]) for key in sorted(value, key=str)}
    if isinstance(value, list | tuple):
        return [exact(item) for item in value]
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        names = sorted(field.name for field in dataclasses.fields(value))
        told = {name: exact(getattr(value, name)) for name in names}
        return {"class": type(value).__name__, "fields": told}
    return plain(value)
