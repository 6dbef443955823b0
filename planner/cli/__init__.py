"""The command ``whirlcard``."""

from __future__ import annotations


def run() -> None:
    """Entry point of the installed command."""
    from planner.cli.app import main

    main()
