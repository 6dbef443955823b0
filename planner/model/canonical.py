"""Model objects as plain JSON values: the form that is recorded, digested and compared."""

from __future__ import annotations

import dataclasses
import hashlib
import json
import math
from collections.abc import Mapping
from enum import Enum
from typing import Any

import numpy as np


def plain(value: Any) -> Any:  # noqa: ANN401, PLR0911 - one return for each kind of value
    """Turn dataclasses, enums, arrays and tuples into JSON values; NaN and infinities to null.

    Keys are sorted, so that a record is the same before it is written and after it is read back.

    Raises:
        TypeError: a value of a kind that has no JSON form.

    Example:
        >>> plain({"a": (1, float("nan"))})
        {'a': [1, None]}
    """
    if value is None or isinstance(value, str | bool | int):
        return value
    if isinstance(value, float | np.floating):
        return float(value) if math.isfinite(value) else None
    if isinstance(value, Enum):
        return value.value
    if isinstance(value, np.ndarray):
        return plain(value.tolist())
    if isinstance(value, Mapping):
        return {str(key): plain(value[key]) for key in sorted(value, key=str)}
    if isinstance(value, list | tuple):
        return [plain(item) for item in value]
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        names = sorted(field.name for field in dataclasses.fields(value))
        return {name: plain(getattr(value, name)) for name in names}
    msg = f"no JSON form for {type(value).__name__}"
    raise TypeError(msg)


def digest(value: Any) -> str:  # noqa: ANN401 - whatever plain accepts
    """SHA-256 of the canonical JSON form, in hex."""
    return digest_of_plain(plain(value))


def digest_of_plain(value: Any) -> str:  # noqa: ANN401 - JSON values
    """SHA-256 of JSON values that ``plain`` has made already."""
    text = json.dumps(value, sort_keys=True, separators=(",", ":"), ensure_ascii=False)
    return hashlib.sha256(text.encode()).hexdigest()
