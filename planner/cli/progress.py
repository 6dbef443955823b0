"""One line on a terminal: a bar, what is in work and the time gone; nothing anywhere else."""

from __future__ import annotations

import sys
import time
from contextlib import suppress
from typing import TYPE_CHECKING, Self

if TYPE_CHECKING:
    from types import TracebackType

    from rich.progress import Progress, TaskID

PATIENCE_S = 1.0
"""A quick answer shows no bar."""
NEARLY_DONE = 0.999
"""A bar that is full stops its clock, and the next part fills it anew."""
BAR_COLUMNS = 24
REFRESH_HZ = 4.0


class ProgressLine:
    """Called with what is in work and how far it is; see `planner.predict.progress.Progress`.

    The line is on stderr, appears once a second has passed, and is wiped when the work ends,
    however it ends. A share that is not known gives a bar that only moves.
    """

    def __init__(self) -> None:
        """Start the clock."""
        self._begin = time.monotonic()
        self._shown: tuple[Progress, TaskID] | None = None

    def __enter__(self) -> Self:
        """Begin; the line comes later."""
        return self

    def __exit__(
        self,
        kind: type[BaseException] | None,
        fault: BaseException | None,
        trace: TracebackType | None,
    ) -> None:
        """Wipe the line and give the cursor back."""
        if self._shown is not None:
            with suppress(OSError):  # a terminal that went away does not change the status
                self._shown[0].stop()
            self._shown = None

    def __call__(self, text: str, share: float | None = None, /) -> None:
        """Say what is in work.

        Args:
            text: id of a study, or what it does just now.
            share: done of what the text names, from 0 to 1; None where it is not known.
        """
        if self._shown is None:
            if time.monotonic() - self._begin < PATIENCE_S or not _on_terminal():
                return
            self._shown = _line(text, time.monotonic() - self._begin)
        bar, task = self._shown
        bar.update(
            task,
            description=text,
            total=None if share is None else 1.0,
            completed=0.0 if share is None else min(max(share, 0.0), NEARLY_DONE),
        )


def _on_terminal() -> bool:
    return sys.stderr is not None and sys.stderr.isatty()


def _line(words: str, gone_s: float) -> tuple[Progress, TaskID]:
    """A running line whose clock began some seconds ago."""
    from rich.console import Console
    from rich.progress import BarColumn, Progress, TextColumn, TimeElapsedColumn
    from rich.table import Column

    text = Column(no_wrap=True, overflow="crop", ratio=1)
    bar = Progress(
        BarColumn(BAR_COLUMNS),
        TimeElapsedColumn(),
        TextColumn("{task.description}", markup=False, table_column=text),
        console=Console(file=sys.stderr),
        refresh_per_second=REFRESH_HZ,
        transient=True,
        expand=True,
        redirect_stdout=False,
        redirect_stderr=False,
    )
    task = bar.add_task(words, total=None)
    bar.tasks[0].start_time = bar.get_time() - gone_s
    bar.start()
    return bar, task
