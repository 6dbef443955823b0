"""Marching on all cores: cases are dealt out to processes, numbers stay the same."""

from __future__ import annotations

import os
from concurrent.futures import ProcessPoolExecutor, as_completed
from concurrent.futures.process import BrokenProcessPool
from contextlib import contextmanager
from contextvars import ContextVar
from dataclasses import dataclass, fields
from multiprocessing import get_context
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.march import MarchResult, march
from planner.rotor.march_model import march_model
from planner.rotor.march_track import Contacts, Extremes

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator, Sequence

    from numpy.typing import NDArray

    from planner.model.rotor import Rotor
    from planner.model.stand import Mounting
    from planner.rotor.march_case import Histories, MarchCases, MarchSettings, Turbulence

    IndexArray = NDArray[np.int64]

WORTH_BLADE_STEPS = 2e6
"""Work below this is done in the process itself: starting others takes about a second."""
WORTH_SHARING = 2e5
"""The same where the others are at work already."""


@dataclass(frozen=True, eq=False)
class Job:
    """What is to be marched, apart from which cases.

    Attributes:
        rotor: The article under test.
        mounting: How it stands.
        top_rad_s: Highest speed of all histories.
        settings: Fineness.
        n_stations: Air-load stations.
        histories: Speed and controls over time.
        rough: Turbulence.
    """

    rotor: Rotor
    mounting: Mounting
    top_rad_s: float
    settings: MarchSettings
    n_stations: int
    histories: Histories
    rough: Turbulence


def march_cases(job: Job, cases: MarchCases) -> MarchResult:
    """March cases in this process."""
    model = march_model(
        job.rotor, job.top_rad_s, job.settings, job.n_stations, mounting=job.mounting
    )
    return march(model, job.histories, cases, job.rough)


class Crew:
    """Processes that march; started when there is first enough to do."""

    def __init__(self, workers: int) -> None:
        """Nobody is called yet."""
        self._workers = workers
        self._pool: ProcessPoolExecutor | None = None

    def march(
        self, job: Job, cases: MarchCases, progress: Callable[[float], None] = lambda _: None
    ) -> MarchResult:
        """March cases on all cores; what a case yields does not depend on how they are dealt.

        Args:
            job: What is to be marched.
            cases: The cases.
            progress: Called with the share of the work that is done.

        Returns:
            The results, in the order of the cases.
        """
        work = blade_steps(job, cases)
        least = WORTH_BLADE_STEPS if self._pool is None else WORTH_SHARING
        if self._workers < 2 or float(np.sum(work)) < least:  # noqa: PLR2004
            result = march_cases(job, cases)
            progress(1.0)
            return result
        parts = dealt(work, self._workers)
        try:
            results = self._all(job, [(part, cases.take(part)) for part in parts], progress)
        except (BrokenProcessPool, OSError):
            return march_cases(job, cases)
        order = np.argsort(np.concatenate(parts), kind="stable")
        return _put_together([results[i] for i in range(len(parts))], order)

    def _all(
        self,
        job: Job,
        parts: Sequence[tuple[IndexArray, MarchCases]],
        progress: Callable[[float], None],
    ) -> dict[int, MarchResult]:
        if self._pool is None:
            # each starts afresh: a copy of this process would take its threads' locks along
            self._pool = ProcessPoolExecutor(self._workers, mp_context=get_context("spawn"))
        waiting = {
            self._pool.submit(march_cases, job, part): i for i, (_, part) in enumerate(parts)
        }
        results = {}
        for done in as_completed(waiting):
            results[waiting[done]] = done.result()
            progress(len(results) / len(parts))
        return results

    def dismiss(self) -> None:
        """Stop the processes."""
        if self._pool is not None:
            self._pool.shutdown(wait=True, cancel_futures=True)
            self._pool = None


_AT_WORK: ContextVar[Crew | None] = ContextVar("crew at work", default=None)


@contextmanager
def crew(workers: int | None = None) -> Iterator[Crew]:
    """Processes for one study; gone when it is done or fails.

    Within another such context the same crew stays at work.

    Args:
        workers: How many; None: as many as there are cores.
    """
    before = _AT_WORK.get()
    if before is not None:
        yield before
        return
    found = Crew(workers or os.cpu_count() or 1)
    token = _AT_WORK.set(found)
    try:
        yield found
    finally:
        _AT_WORK.reset(token)
        found.dismiss()


def blade_steps(job: Job, cases: MarchCases) -> NDArray[np.float64]:
    """About how many steps of how many blades each case takes, (cases,)."""
    histories, settings = job.histories, job.settings
    per_turn = 2.0 * np.pi / settings.steps_per_turn
    rate = np.maximum(histories.speed_rad_s / per_turn, 1.0 / settings.longest_step_s)
    time = histories.step_s * np.arange(histories.speed_rad_s.shape[1])
    lasts = time < histories.end_s[:, None]
    steps = histories.step_s * np.sum(np.where(lasts, rate, 0.0), axis=1)
    return np.asarray(job.rotor.n_blades * steps[cases.history])


def dealt(work: NDArray[np.float64], n_parts: int) -> list[IndexArray]:
    """Cases dealt out in turns from the longest to the shortest, so that all parts end together.

    A part is marched side by side: the fewer parts, the fewer steps in all.
    """
    order = np.argsort(-work, kind="stable")
    return [order[i::n_parts] for i in range(n_parts) if order[i::n_parts].size]


def _put_together(results: Sequence[MarchResult], order: IndexArray) -> MarchResult:
    """Results of all parts in the order of the cases."""

    def joined(parts: Sequence[Any], kind: type[Any]) -> Any:  # noqa: ANN401 - of that kind
        names = [field.name for field in fields(kind)]
        columns = [np.concatenate([getattr(part, name) for part in parts]) for name in names]
        return kind(*(column[order] for column in columns))

    return MarchResult(
        extremes=joined([result.extremes for result in results], Extremes),
        contacts=joined([result.contacts for result in results], Contacts),
        converged=np.concatenate([result.converged for result in results])[order],
    )
