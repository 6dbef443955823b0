"""A study: one part of the prediction, with exactly the inputs it declares."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from planner.model.canonical import digest_of_plain
from planner.model.results import Status
from planner.predict.kept import exact
from planner.predict.progress import silent

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from planner.model.plan import Plan, Segment
    from planner.model.results import Prediction, Requests
    from planner.predict.progress import Progress

PATHS = frozenset(
    {
        "site",
        "segments",
        "keep_outs",
        "shutdown",
        "abort",
        "rotor",
        "rotor.n_blades",
        "rotor.blade",
        "rotor.hub",
        "rotor.droop_stop",
        "rotor.up_stop",
        "rotor.control_stiffness_N_m_rad",
        "rotor.cyclic_authority_rad",
        "rotor.design_maximum_rad_s",
        "rotor.proven_rad_s",
        "rotor.balance",
        "stand.drive",
        "stand.hub_height_m",
        "stand.mounting",
        "stand.full_speed_rad_s",
        "stand.speed_gauge_error_rad_s",
        "stand.modes",
        "stand.column",
        "stand.drive_train",
        "stand.measured_modes",
        "stand.ratings",
        "stand.obstructions",
        "stand.brake_below_rad_s",
        "stand.brake_torque_N_m",
    }
)
"""Model paths that studies may take."""


BUILDS_ON = "builds on what was not assessed: "


class NotAssessedError(ValueError):
    """Something that a study builds on was not assessed; the study takes over its status."""

    def __init__(self, status: Status, reason: str) -> None:
        """Keep the status beside the words."""
        super().__init__(reason)
        self.status = status


@dataclass(frozen=True)
class Inputs:
    """What a study sees: the model paths it takes, the requests, and studies it needs."""

    values: Mapping[str, Any]
    requests: Requests
    prior: Mapping[str, Prediction]
    progress: Progress = silent
    """Told by a long study what it does and how far it is."""

    def __getitem__(self, path: str) -> Any:  # noqa: ANN401 - model parts of many types
        """Look up a model path.

        Raises:
            KeyError: the study did not declare the path in ``takes``.
        """
        return self.values[path]

    def allowance(self, allowance_id: str) -> tuple[float, float]:
        """Ends of a model allowance.

        Raises:
            NotAssessedError: the rule book states none.
        """
        found = self.requests.allowances.get(allowance_id)
        if found is None:
            msg = f"the rule book states no allowance '{allowance_id}'"
            raise NotAssessedError(Status.NOT_STATED, msg)
        return found

    def bounds(self, quantity: str) -> tuple[float, float, float]:
        """Value, low and high of a whole-run quantity of a study that is needed.

        Raises:
            NotAssessedError: the quantity was not assessed, so that nothing can build on it.
        """
        row = self.prior[quantity]
        if row.status[0] is not Status.OK:
            msg = f"{quantity} is {row.status[0].value}: {row.reasons[0]}"
            if row.reasons[0].startswith(BUILDS_ON):
                msg = row.reasons[0].removeprefix(BUILDS_ON)
            msg = f"{BUILDS_ON}{msg}"
            raise NotAssessedError(row.status[0], msg)
        return float(row.value[0]), float(row.low[0]), float(row.high[0])


@dataclass(frozen=True)
class Study:
    """One part of the prediction.

    ``run`` receives exactly the model paths in ``takes`` and the predictions of the studies in
    ``needs``, so that what a number depends on cannot drift from what is declared.
    """

    id: str
    version: int
    takes: tuple[str, ...]
    needs: tuple[str, ...]
    run: Callable[[Inputs], Mapping[str, Prediction]]
    kept: bool = False
    """A slow study: what it found is kept, and used again while its key is the same."""

    def inputs(
        self,
        plan: Plan,
        segments: tuple[Segment, ...],
        requests: Requests,
        prior: Mapping[str, Prediction],
    ) -> Inputs:
        """Cut out of a plan what this study takes."""
        values = {path: _resolve(plan, segments, path) for path in self.takes}
        needed = {key: p for key, p in prior.items() if p.study in self.needs}
        return Inputs(values, requests, needed)

    def key(self, inputs: Inputs, versions: Mapping[str, str], keys: Mapping[str, str]) -> str:
        """Digest of all that the result depends on.

        Args:
            inputs: what the study sees; of the predictions of other studies, their keys count.
            versions: of the program and of the libraries that the numbers depend on.
            keys: study id to key, at least of the studies that this one needs.

        Raises:
            KeyError: a study that is needed has no key.
        """
        parts = {
            "study": self.id,
            "version": self.version,
            "versions": versions,
            "takes": inputs.values,
            "requests": inputs.requests,
            "needs": {need: keys[need] for need in self.needs},
        }
        return digest_of_plain(exact(parts))


def _resolve(plan: Plan, segments: tuple[Segment, ...], path: str) -> Any:  # noqa: ANN401
    if path not in PATHS:
        msg = f"study takes unknown path {path!r}; known: {', '.join(sorted(PATHS))}"
        raise KeyError(msg)
    if path == "segments":
        return segments
    value: Any = plan
    for part in path.split("."):
        value = getattr(value, part)
    return value
