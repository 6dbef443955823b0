"""Finds the data that ships with the program, in an installed package or in a checkout."""

from __future__ import annotations

from pathlib import Path

_PACKAGE = Path(__file__).resolve().parents[1]


def shipped(name: str, package: Path = _PACKAGE) -> Path:
    """Find a shipped file or folder, such as ``rules/example_book.toml``.

    A checkout's own folder stands beside the package; an installed package carries a copy in
    ``_data``.

    Raises:
        FileNotFoundError: There is no such data: the installation is broken.
    """
    for place in (package / "_data" / name, package.parent / name):
        if place.exists():
            return place
    msg = f"{name}: expected to be shipped with the program, found nothing; install it again"
    raise FileNotFoundError(msg)
