"""One line on a terminal, nothing anywhere else."""

from __future__ import annotations

import io
import sys

import pytest

from planner.cli import progress
from planner.cli.progress import ProgressLine

PARTS = (("holds", None), ("marches: ramp 1.2r [b]", 0.25), ("marches: ramp 1.2r [b]", 1.0))


class Terminal(io.StringIO):
    def isatty(self) -> bool:
        return True


@pytest.fixture
def show(monkeypatch):
    """What a stream shows of some parts of work; a part that is no text is a fault."""
    for variable in ("NO_COLOR", "FORCE_COLOR", "TTY_COMPATIBLE", "TTY_INTERACTIVE"):
        monkeypatch.delenv(variable, raising=False)
    monkeypatch.setenv("TERM", "xterm")
    monkeypatch.setenv("COLUMNS", "80")

    def _show(stream, parts=PARTS, patience_s=0.0):
        monkeypatch.setattr(progress, "PATIENCE_S", patience_s)
        monkeypatch.setattr(sys, "stderr", stream)
        with ProgressLine() as line:
            for text, share in parts:
                line(text, share)
        return stream and stream.getvalue()

    return _show


def test_a_terminal_shows_what_is_in_work(show):
    shown = show(Terminal())
    assert "marches: ramp 1.2r [b]" in shown
    assert "0:00:00" in shown
    assert shown.endswith("\033[2K")  # wiped


def test_a_fault_wipes_the_line_and_gives_the_cursor_back(show):
    terminal = Terminal()
    with pytest.raises(TypeError, match=r"not supported between"):
        show(terminal, [("holds", None), ("holds", "half")])
    assert "\033[?25h" in terminal.getvalue()


def test_a_quick_answer_shows_nothing(show):
    assert show(Terminal(), patience_s=60.0) == ""


@pytest.mark.parametrize("stream", [io.StringIO(), None])
def test_nothing_is_shown_without_a_terminal(show, stream):
    assert not show(stream)
