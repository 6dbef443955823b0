"""Files are written whole or not at all."""

from __future__ import annotations

import os
import secrets
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pathlib import Path


def write_whole(path: Path, content: bytes) -> None:
    """Write a file beside its place and then move it there.

    A reader sees the old file or the new one, never a part; after a failure nothing is left.

    Raises:
        OSError: The folder is missing, full or not writable, or the path is a directory.
    """
    part = path.with_name(f".{path.name}.{secrets.token_hex(4)}.part")
    try:
        with part.open("xb") as stream:
            stream.write(content)
            stream.flush()
            os.fsync(stream.fileno())
        part.replace(path)
    except BaseException:
        part.unlink(missing_ok=True)
        raise
