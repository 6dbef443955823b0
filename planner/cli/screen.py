"""Words to the screen: a lost pipe keeps the verdict's status, a broken output is status 2."""

from __future__ import annotations

import os
import sys
from contextlib import suppress
from typing import TYPE_CHECKING, NoReturn

import typer

if TYPE_CHECKING:
    from pathlib import Path

BAD_INPUT = 2
"""Status of unusable input or output; ``planner.judge.status`` holds them all (tested equal)."""


def say(text: str) -> None:
    """Print on stdout.

    A reader that went away (``| head``) is no fault of the plan: the rest is dropped and the
    command ends with its own status. Any other failure to write ends with status 2.
    """
    if sys.stdout is None:
        fail("standard output is closed: nothing could be printed")
    try:
        print(text, flush=True)
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
    except OSError as fault:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        fail(f"standard output: {fault.strerror or fault}")


def mention(message: str) -> None:
    """Print on stderr what changes neither result nor status; nobody need hear it."""
    if sys.stderr is not None:
        with suppress(OSError):
            print(message, file=sys.stderr)


def fail(message: str) -> NoReturn:
    """Print a message on stderr and end with the status of unusable input."""
    if sys.stderr is not None:
        print(message, file=sys.stderr)
    raise typer.Exit(BAD_INPUT)


def check_target(path: Path, suffixes: tuple[str, ...]) -> None:
    """End with status 2 where a file could not be written as asked."""
    kinds = " or ".join(suffixes)
    if path.suffix.lower() not in suffixes:
        fail(f"--out: expected a file name ending in {kinds}, found {str(path)!r}")
    if path.exists() and not path.is_file():
        fail(f"{path}: expected a regular file to replace, found something else")
    if not path.parent.is_dir():
        fail(f"{path}: expected an existing folder to write to; make {path.parent} first")
