"""The command ``whirlcard``."""

from __future__ import annotations

import os

THREAD_VARIABLES = ("OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS", "OMP_NUM_THREADS")
"""How many threads the libraries of linear algebra take; read when numpy is first imported."""


def run() -> None:
    """Entry point of the installed command.

    One thread, unless the user says otherwise: matrices here are small, and threads that compete
    for the cores make a hundred of them take tens of times longer. Marching takes all cores by
    processes of its own.
    """
    for name in THREAD_VARIABLES:
        os.environ.setdefault(name, "1")
    from planner.cli.app import main

    main()
