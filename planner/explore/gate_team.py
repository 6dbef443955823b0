"""Trials side by side: one a process, for a wind by itself is marched fastest in one piece."""

from __future__ import annotations

import os
from concurrent.futures import ProcessPoolExecutor, as_completed
from concurrent.futures.process import BrokenProcessPool
from dataclasses import replace
from multiprocessing import get_context
from typing import TYPE_CHECKING, Self

from planner.explore.gate_trial import Desk, tried
from planner.predict.march_pool import crew

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence
    from types import TracebackType

    from planner.explore.gate_trial import Trial, Tried
    from planner.model.plan import Plan
    from planner.predict.progress import Progress

MOST = 4
"""Each process takes some 300 MB."""


class Team:
    """Tries winds on all cores; what a trial yields does not depend on who does it."""

    def __init__(self, plan: Plan, desk: Desk, size: int | None = None) -> None:
        """Nobody is called yet.

        Args:
            plan: The model.
            desk: What trials are predicted with.
            size: Processes; None: as many as there are cores, up to a few.
        """
        self._size = size or min(os.cpu_count() or 1, MOST)
        self._plan, self._desk = plan, desk
        self._pool: ProcessPoolExecutor | None = None

    def __enter__(self) -> Self:
        """Begin; processes come with the first trials that can share the work."""
        return self

    def __exit__(
        self,
        kind: type[BaseException] | None,
        fault: BaseException | None,
        trace: TracebackType | None,
    ) -> None:
        """Stop the processes."""
        if self._pool is not None:
            self._pool.shutdown(wait=True, cancel_futures=True)
            self._pool = None

    def __call__(self, trials: Sequence[Trial]) -> list[Tried]:
        """Try winds; one by itself is shared out case by case instead."""
        if len(trials) > 1 and self._size > 1:
            try:
                return self._shared(trials)
            except (BrokenProcessPool, OSError):
                pass  # no processes to be had: one after the other
        return [
            tried(self._plan, t, replace(self._desk, progress=_told(self._desk.progress, t)))
            for t in trials
        ]

    def _shared(self, trials: Sequence[Trial]) -> list[Tried]:
        if self._pool is None:
            # each starts afresh: a copy of this process would take its threads' locks along
            self._pool = ProcessPoolExecutor(self._size, mp_context=get_context("spawn"))
        words = " and ".join(wind_words(trial) for trial in trials)
        self._desk.progress(f"trying {words}", 0.0)
        waiting = [self._pool.submit(alone, self._plan, t, self._desk.versions) for t in trials]
        for done, _ in enumerate(as_completed(waiting), 1):
            self._desk.progress(f"trying {words}", done / len(trials))
        return [one.result() for one in waiting]


def alone(plan: Plan, trial: Trial, versions: Mapping[str, str]) -> Tried:
    """Try a wind in this process, which calls nobody else."""
    with crew(1):
        return tried(plan, trial, Desk(versions))


def wind_words(trial: Trial) -> str:
    """A trial's wind in words.

    Example:
        >>> from planner.explore.gate_trial import Trial, Wind
        >>> wind_words(Trial(Wind(4.0, 5.5), ()))
        '4 m/s'
    """
    return f"{trial.wind.mean_m_s:.3g} m/s" if trial.wind.gust_m_s > 0.0 else "calm"


def _told(progress: Progress, trial: Trial) -> Progress:
    """Progress that says which wind is tried."""

    def tell(text: str, share: float | None = None, /) -> None:
        progress(
            f"{'confirming' if trial.is_full else 'trying'} {wind_words(trial)}: {text}", share
        )

    return tell
