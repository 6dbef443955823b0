"""Saying what is in work while a plan is predicted."""

from __future__ import annotations

from typing import Protocol


class Progress(Protocol):
    """Called as work goes on; what it does with the words is the caller's affair."""

    def __call__(self, text: str, share: float | None = None, /) -> None:
        """Say what is in work.

        Args:
            text: id of a study, or what it does just now.
            share: done of what the text names, from 0 to 1; None where it is not known.
        """


def silent(text: str, share: float | None = None, /) -> None:
    """Say nothing."""
