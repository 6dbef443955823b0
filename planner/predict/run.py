"""Run every study in order: from a plan to predictions of the whole register."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from planner.model.results import Labels, Status
from planner.predict.register import REGISTER
from planner.predict.rows import Rows
from planner.predict.study import NotAssessedError
from planner.predict.study_air import AIR, WIND
from planner.predict.study_holds import HOLDS
from planner.predict.study_inertia import INERTIA
from planner.predict.study_modes import MODES
from planner.predict.study_passages import PASSAGES
from planner.predict.study_schedule import SCHEDULE
from planner.predict.study_stops import STOPS
from planner.predict.study_tip import TIP

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from planner.model.plan import Plan, Segment
    from planner.model.results import Prediction, Requests
    from planner.predict.study import Study

STUDIES: tuple[Study, ...] = (AIR, WIND, INERTIA, SCHEDULE, TIP, STOPS, HOLDS, MODES, PASSAGES)
"""In an order in which each finds what it needs."""


def predict(
    plan: Plan,
    segments: tuple[Segment, ...],
    requests: Requests,
    progress: Callable[[str], None] = lambda _: None,
) -> Mapping[str, Prediction]:
    """Predict every quantity of the register.

    A method that refuses its input leaves all quantities of its study OUTSIDE VALIDITY with the
    method's own words. A study that builds on something not assessed takes over its status: a
    failed convergence stays one, a missing value of the rule book stays one. Nothing is left out.
    """
    found: dict[str, Prediction] = {}
    for study in STUDIES:
        progress(study.id)
        try:
            inputs = study.inputs(plan, segments, requests, found)
            found |= study.run(inputs)
        except NotAssessedError as refusal:
            found |= _refused(study, refusal.status, str(refusal))
        except np.linalg.LinAlgError as refusal:
            found |= _refused(study, Status.NOT_CONVERGED, str(refusal))
        except ValueError as refusal:
            found |= _refused(study, Status.OUTSIDE_VALIDITY, str(refusal))
    for quantity in REGISTER.values():
        if quantity.id not in found:
            found[quantity.id] = _flagged(
                quantity.id, quantity.study, Status.NOT_COMPUTED, "no study computed it"
            )
    return {quantity: found[quantity] for quantity in REGISTER}


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
