"""Exit statuses of the command line, in one place."""

from __future__ import annotations

from enum import IntEnum

from planner.model.results import Verdict


class ExitStatus(IntEnum):
    """What a command returns to the shell; 1 is left to crashes and is never a verdict."""

    DONE = 0
    """Nothing exceeded and all assessed; a CAUTION is printed."""
    BAD_INPUT = 2
    """Unusable input, wrong usage, or output that cannot be written."""
    LIMIT_EXCEEDED = 3
    NOT_ASSESSED = 4
    OUT_OF_DATE = 5
    """Paper no longer matches its sources or must be issued again."""


def exit_status(verdict: Verdict) -> ExitStatus:
    """Turn the verdict of a run into an exit status.

    Example:
        >>> int(exit_status(Verdict.NO_GO))
        3
    """
    if verdict is Verdict.GO or verdict is Verdict.CAUTION:
        return ExitStatus.DONE
    return ExitStatus.LIMIT_EXCEEDED if verdict is Verdict.NO_GO else ExitStatus.NOT_ASSESSED
