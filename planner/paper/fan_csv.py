"""The fan chart as tables of numbers in one text file."""

from __future__ import annotations

import csv
import io
from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.banner import banner_of
from planner.paper.fan_panels import FRAMES, panels
from planner.paper.pages import FOOTING
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

    from planner.paper.fan_panels import Curve
    from planner.paper.reading import Reading

_NOISE = 1e-6
"""Numbers of smaller size are left over from rounding, in any unit of these tables."""
_NOT_THERE = "not in this record"


def csv_text(reading: Reading) -> str:
    """Frequencies, keep-out bands, the run and time at speed, with an empty line between."""
    out = io.StringIO()
    out.writelines(f"# {' '.join(line.split())}\n" for line in _banner(reading))
    writer = csv.writer(out, lineterminator="\n")
    tables = (_frequencies, _bands, _run, _time_at_speed)
    for i, rows in enumerate(tables):
        if i:
            writer.writerow([])
        writer.writerows(rows(reading))
    return out.getvalue()


def _banner(reading: Reading) -> Iterator[str]:
    banner = banner_of(reading, "Fan chart")
    yield f"{banner.document}: {banner.title}"
    yield banner.reference
    yield f"{banner.verdict} ({banner.status})"
    yield FOOTING
    yield banner.maker


def _frequencies(reading: Reading) -> Iterator[list[str]]:
    found = panels(reading)
    curves = [(panel.family, curve) for panel in found for curve in panel.curves]
    harmonics = sorted({n for panel in found for n in panel.harmonics})
    yield [
        "rotor speed [rpm]",
        *(_column(family, curve) for family, curve in curves),
        *(f"{n} per revolution [Hz]" for n in harmonics),
    ]
    speeds = curves[0][1].speed_rpm if curves else ()
    for i, rpm in enumerate(speeds):
        frequencies = [curve.frequency_hz[i] for _, curve in curves]
        yield _numbers([rpm, *frequencies, *(n * rpm / 60.0 for n in harmonics)])


def _column(family: str, curve: Curve) -> str:
    """Head of a column: mode, what makes it doubtful, and the frame."""
    return f"{curve.label}, {FRAMES[family]} [Hz]"


def _bands(reading: Reading) -> Iterator[list[str]]:
    yield ["keep-out band", "from [rpm]", "to [rpm]", "why"]
    bands = reading.plan["keep_outs"]
    for band in bands:
        ends = (from_si(band[key], "rpm") for key in ("from_rad_s", "to_rad_s"))
        yield [band["id"], *_numbers(ends), " ".join(band["why"].split())]
    if not bands:
        yield ["none is declared"]


def _run(reading: Reading) -> Iterator[list[str]]:
    run = reading.record["series"]["run"]
    yield ["run, one pass of each block: time [s]", "rotor speed [rpm]", "row"]
    for time, speed, row in zip(run["time_s"], run["speed_rad_s"], run["segment"], strict=True):
        rpm = None if speed is None else from_si(speed, "rpm")
        yield [*_numbers([time, rpm]), row]


def _time_at_speed(reading: Reading) -> Iterator[list[str]]:
    yield ["time at speed, repeats counted: from [rpm]", "to [rpm]", "time [s]"]
    found = reading.record["series"]["fan"]["time_at_speed"]
    if found is None:
        yield [_NOT_THERE]
        return
    edges = [from_si(edge, "rpm") for edge in found["edges_rad_s"]]
    for low, high, seconds in zip(edges, edges[1:], found["seconds"], strict=False):
        yield _numbers([low, high, seconds])


def _numbers(values: Iterable[float | None]) -> list[str]:
    """Print numbers to six digits; what is not known says so."""
    return [
        texts.NOT_ASSESSED if v is None else f"{0.0 if abs(v) < _NOISE else v:.6g}" for v in values
    ]
