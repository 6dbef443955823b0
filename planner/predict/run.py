"""Run every study in order: from a plan to predictions of the whole register."""

from __future__ import annotations

from dataclasses import replace
from types import MappingProxyType
from typing import TYPE_CHECKING

import numpy as np

from planner.model.results import Labels, Status
from planner.predict.kept import NOTHING_KEPT
from planner.predict.progress import silent
from planner.predict.register import REGISTER
from planner.predict.rows import Rows
from planner.predict.study import NotAssessedError
from planner.predict.study_air import AIR, WIND
from planner.predict.study_holds import HOLDS
from planner.predict.study_inertia import INERTIA
from planner.predict.study_marches import MARCHES
from planner.predict.study_modes import MODES
from planner.predict.study_passages import PASSAGES
from planner.predict.study_schedule import SCHEDULE
from planner.predict.study_speeds import SPEEDS
from planner.predict.study_stops import STOPS
from planner.predict.study_tip import TIP
from planner.predict.study_unbalance import UNBALANCE

if TYPE_CHECKING:
    from collections.abc import Container, Mapping, Sequence

    from planner.model.plan import Plan, Segment
    from planner.model.results import Prediction, Requests
    from planner.predict.kept import Store
    from planner.predict.progress import Progress
    from planner.predict.study import Inputs, Study

STUDIES: tuple[Study, ...] = (
    AIR,
    WIND,
    INERTIA,
    SCHEDULE,
    TIP,
    STOPS,
    HOLDS,
    MODES,
    UNBALANCE,
    PASSAGES,
    SPEEDS,
    MARCHES,
)
"""In an order in which each finds what it needs."""


def predict(
    plan: Plan,
    segments: tuple[Segment, ...],
    requests: Requests,
    progress: Progress = silent,
    store: Store = NOTHING_KEPT,
    versions: Mapping[str, str] = MappingProxyType({}),
) -> Mapping[str, Prediction]:
    """Predict every quantity of the register.

    A method that refuses its input leaves all quantities of its study OUTSIDE VALIDITY with the
    method's own words. A study that builds on something not assessed takes over its status: a
    failed convergence stays one, a missing value of the rule book stays one. Nothing is left out.

    Args:
        plan: the model.
        segments: its schedule walked once.
        requests: what the rules need computed.
        progress: told which study is in work.
        store: where slow studies keep what they found. A refusal is never kept.
        versions: of the program and its libraries; part of the key of what is kept.
    """
    return _whole(_found(STUDIES, (plan, segments, requests), progress, (store, versions)))


def predict_only(
    studies: Container[str],
    plan: Plan,
    segments: tuple[Segment, ...],
    requests: Requests,
    known: Mapping[str, Prediction] = MappingProxyType({}),
) -> Mapping[str, Prediction]:
    """Predict what some studies tell; what they and ``known`` leave open is NOT COMPUTED.

    Args:
        studies: ids of those that are wanted.
        plan: the model.
        segments: its schedule walked once, or stretches of one.
        requests: what the rules need computed.
        known: predictions that the studies may build on.
    """
    wanted = [study for study in STUDIES if study.id in studies]
    asked = (plan, segments, requests)
    told = _found(wanted, asked, silent, (NOTHING_KEPT, {}), known)
    return _whole({**known, **told})


def _found(
    studies: Sequence[Study],
    asked: tuple[Plan, tuple[Segment, ...], Requests],
    progress: Progress,
    keeping: tuple[Store, Mapping[str, str]],
    known: Mapping[str, Prediction] = MappingProxyType({}),
) -> dict[str, Prediction]:
    """Run studies in their order, each with what it needs of those before."""
    found: dict[str, Prediction] = {}
    keys: dict[str, str] = {}
    store, versions = keeping
    for study in studies:
        progress(study.id)
        inputs = replace(study.inputs(*asked, {**known, **found}), progress=progress)
        if store is not NOTHING_KEPT:
            keys[study.id] = study.key(inputs, versions, keys)
        try:
            found |= _kept_or_run(study, inputs, store, keys)
        except NotAssessedError as refusal:
            found |= _refused(study, refusal.status, str(refusal))
        except np.linalg.LinAlgError as refusal:
            found |= _refused(study, Status.NOT_CONVERGED, str(refusal))
        except ValueError as refusal:
            found |= _refused(study, Status.OUTSIDE_VALIDITY, str(refusal))
    return found


def _whole(found: dict[str, Prediction]) -> Mapping[str, Prediction]:
    """The whole register in its order; what no study told is NOT COMPUTED."""
    for quantity in REGISTER.values():
        if quantity.id not in found:
            found[quantity.id] = _flagged(
                quantity.id, quantity.study, Status.NOT_COMPUTED, "no study computed it"
            )
    return {quantity: found[quantity] for quantity in REGISTER}


def _kept_or_run(
    study: Study, inputs: Inputs, store: Store, keys: Mapping[str, str]
) -> Mapping[str, Prediction]:
    """Take a kept result where it is whole, else run the study and keep what it found."""
    if not study.kept or study.id not in keys:
        return study.run(inputs)
    before = store.get(keys[study.id])
    if before is not None and _is_whole(study, before):
        return before
    result = study.run(inputs)
    if _is_whole(study, result):
        store.put(keys[study.id], result)
    return result


def _is_whole(study: Study, predictions: Mapping[str, Prediction]) -> bool:
    """Whether predictions are this study's and all that the register expects of it."""
    expected = {quantity.id for quantity in REGISTER.values() if quantity.study == study.id}
    return predictions.keys() == expected and all(
        found.quantity == quantity and found.study == study.id
        for quantity, found in predictions.items()
    )


def _refused(study: Study, status: Status, words: str) -> dict[str, Prediction]:
    return {
        quantity.id: _flagged(quantity.id, study.id, status, words)
        for quantity in REGISTER.values()
        if quantity.study == study.id
    }


def _flagged(quantity: str, study: str, status: Status, words: str) -> Prediction:
    rows = Rows(quantity, study)
    rows.flag(Labels(), status, words)
    return rows.prediction()
