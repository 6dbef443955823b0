"""Building the record of a plan, and reading one back.

The layout is an integer. Layout 3 is a JSON object with the keys below; numbers are SI, angles
radians, NaN is null. A reader refuses a layout that it does not know. Older layouts are read as
today's: rows of layout 1, which had no aborts, get an empty ``state``; the fan chart of layouts 1
and 2 had one set of harmonics and no time at speed. The plan stays as it was written.

    layout            3
    made_by           versions of whirlcard, Python, numpy and scipy
    files             [{name, sha256}] of every file that was read; files_digest over them all
    meaning_digest    digest of the plan in SI: unchanged by a comment or another unit
    plan              the model
    segments          the schedule walked once
    vocabulary        the register entries
    predictions       quantity -> {study, rows: [{segment, mode, harmonic, band, state, value,
                      low, high, status, reason, speed_rad_s, hand}]}; state: cause of an abort
    references        reference id -> value at 100 % rpm
    series            run, fan and flap charts
    findings, coverage, verdict, segment_verdicts
    wind_gate         the gate that is kept for this very plan, see planner.explore.wind_gate; null
                      where none is (records written before there were gates lack the key)
    content_digest    digest of everything above: an edit by hand is noticed when read back. It
                      shows change, not who made it
"""

from __future__ import annotations

import json
import platform
from importlib.metadata import version
from typing import TYPE_CHECKING, Any

import planner
from planner.judge.judge import judge
from planner.judge.references import reference_table
from planner.judge.requests import requests
from planner.judge.wind_gate import gate_key
from planner.model.canonical import digest_of_plain, plain
from planner.model.plan import segments
from planner.predict.histories import timed
from planner.predict.kept import NOTHING_KEPT
from planner.predict.progress import silent
from planner.predict.register import REGISTER
from planner.predict.run import predict
from planner.predict.series import series

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

    from planner.model.plan import Plan
    from planner.model.results import Prediction
    from planner.predict.kept import Store
    from planner.predict.progress import Progress

LAYOUT = 3
REQUIRED = (
    "layout",
    "made_by",
    "files",
    "files_digest",
    "meaning_digest",
    "plan",
    "segments",
    "vocabulary",
    "predictions",
    "references",
    "series",
    "findings",
    "coverage",
    "verdict",
    "segment_verdicts",
    "content_digest",
)


class RecordError(ValueError):
    """A file is not a record that this version can read."""


def build(
    plan: Plan,
    files: Sequence[tuple[str, str]],
    progress: Progress = silent,
    store: Store = NOTHING_KEPT,
) -> dict[str, Any]:
    """Predict and judge a plan and put everything into one record.

    Args:
        plan: the model.
        files: (name, sha256) of every file that was read.
        progress: called with the name of each part as it starts.
        store: where slow studies keep what they found; the record is the same without.
    """
    wanted = requests(plan.rule_book)
    walk = timed(plan, segments(plan), wanted)
    predictions = predict(plan, walk, wanted, progress, store, versions())
    progress("judging")
    meaning = plain(plan)
    gate = gate_of(digest_of_plain(meaning), store)
    judgement = judge(plan, walk, REGISTER, predictions, gate)
    listed = [{"name": name, "sha256": sha256} for name, sha256 in files]
    record = {
        "layout": LAYOUT,
        "made_by": plain(versions()),
        "files": listed,
        "files_digest": digest_of_plain(listed),
        "meaning_digest": digest_of_plain(meaning),
        "plan": meaning,
        "segments": plain(walk),
        "vocabulary": plain(list(REGISTER.values())),
        "predictions": {key: rows_of(predictions[key]) for key in sorted(predictions)},
        "references": plain(reference_table(plan, predictions, plan.stand.full_speed_rad_s)),
        "series": plain(series(plan, walk, predictions, wanted)),
        "findings": plain(judgement.findings),
        "coverage": plain(judgement.coverage),
        "verdict": judgement.verdict.value,
        "segment_verdicts": plain(judgement.segment_verdicts),
        "wind_gate": gate,
    }
    return {**record, "content_digest": digest_of_plain(record)}


def gate_of(meaning_digest: str, store: Store) -> dict[str, Any] | None:
    """The wind gate that is kept for this very plan; looked up, never computed on the way."""
    found = store.get_plain(gate_key(meaning_digest, versions()), even_if_fresh=True)
    return dict(found) if found and found.get("kept_for") == meaning_digest else None


def versions() -> dict[str, str]:
    """Versions that the numbers depend on."""
    return {
        "whirlcard": planner.__version__,
        "python": platform.python_version(),
        "numpy": version("numpy"),
        "scipy": version("scipy"),
    }


def rows_of(prediction: Prediction) -> dict[str, Any]:
    """One prediction in the record's form."""
    rows = [
        {
            "segment": label.segment,
            "mode": label.mode,
            "harmonic": label.harmonic,
            "band": label.band,
            "state": label.state,
            "value": value,
            "low": low,
            "high": high,
            "status": status.value,
            "reason": reason,
            "speed_rad_s": speed,
            "hand": hand,
        }
        for label, value, low, high, status, reason, speed, hand in zip(
            prediction.labels,
            prediction.value,
            prediction.low,
            prediction.high,
            prediction.status,
            prediction.reasons,
            prediction.speed_rad_s,
            prediction.hand,
            strict=True,
        )
    ]
    return {"study": prediction.study, "rows": plain(rows)}


def to_bytes(record: Mapping[str, Any], *, ascii_only: bool = False) -> bytes:
    """Write a record: the same record gives the same bytes; in ASCII for any terminal."""
    text = json.dumps(record, indent=1, sort_keys=True, ensure_ascii=ascii_only, allow_nan=False)
    return (text + "\n").encode()


def from_bytes(data: bytes, name: str) -> dict[str, Any]:
    """Read a record back, one of an older layout in the form of today's.

    The digests are checked before an older layout is brought forward; its content digest is then
    that of the new form.

    Raises:
        RecordError: not JSON, not a record, another layout, or a plan that was edited by hand.
    """
    try:
        record = json.loads(data.decode("utf-8"))
    except (UnicodeDecodeError, json.JSONDecodeError, RecursionError) as fault:
        msg = f"{name}: expected a whirlcard record in JSON, found {fault}; build it with `card`"
        raise RecordError(msg) from fault
    if not isinstance(record, dict) or "layout" not in record:
        msg = f"{name}: expected a whirlcard record, found JSON without a layout number"
        raise RecordError(msg)
    layout = record["layout"]
    if not isinstance(layout, int) or layout not in {LAYOUT, *_FORWARD}:
        msg = f"{name}: expected record layout {LAYOUT}, found {layout!r}"
        raise RecordError(msg)
    missing = [key for key in REQUIRED if key not in record]
    if missing:
        msg = f"{name}: expected a whole record, found none of: {', '.join(missing)}"
        raise RecordError(msg)
    _check_digests(record, name)
    return _FORWARD[layout](record) if layout in _FORWARD else record


def _from_layout_1(record: dict[str, Any]) -> dict[str, Any]:
    """Give every row an empty ``state``: layout 1 knew no aborts."""
    predictions = {
        quantity: {**found, "rows": [{**row, "state": ""} for row in found["rows"]]}
        for quantity, found in record["predictions"].items()
    }
    kept = {key: value for key, value in record.items() if key != "content_digest"}
    return _from_layout_2({**kept, "layout": 2, "predictions": predictions})


_PANELS = {"stand": "stand", "shaft": "shaft"}


def _from_layout_2(record: dict[str, Any]) -> dict[str, Any]:
    """Give the fan chart its panels; shifted modes and time at speed were not computed."""
    fan = record["series"]["fan"]
    modes = [
        {"doubt": "", **mode, "panel": _PANELS.get(mode["family"], "blade")}
        for mode in fan["modes"]
    ]
    harmonics = {"blade": fan["harmonics"], "stand": [], "shaft": []}
    told = {
        "modes": modes,
        "harmonics": harmonics,
        "collective_rad": None,
        "shifted": [],
        "time_at_speed": None,
    }
    series = {**record["series"], "fan": {**fan, **told}}
    kept = {key: value for key, value in record.items() if key != "content_digest"}
    forward = {**kept, "layout": LAYOUT, "series": series}
    return {**forward, "content_digest": digest_of_plain(forward)}


_FORWARD: Mapping[int, Callable[[dict[str, Any]], dict[str, Any]]] = {
    1: _from_layout_1,
    2: _from_layout_2,
}
"""How a record of an older layout becomes one of today's."""


def _check_digests(record: Mapping[str, Any], name: str) -> None:
    content = {key: value for key, value in record.items() if key != "content_digest"}
    for key, value in (("meaning", record["plan"]), ("content", content)):
        if digest_of_plain(value) != record[f"{key}_digest"]:
            msg = (
                f"{name}: expected the {key} digest {record[f'{key}_digest']!s:.12}..., found "
                f"{digest_of_plain(value):.12}...; the record was edited: build it again"
            )
            raise RecordError(msg)
