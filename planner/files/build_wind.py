"""Gust, turbulence and wind sectors of the plan: checks, and the way into the model."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from planner.files.faults import shown
from planner.model.plan import GustLengths, Sector, Turbulence
from planner.units import from_si

if TYPE_CHECKING:
    from planner.files.schema_plan import GustTable, PlanFile, SectorTable, TurbulenceTable
    from planner.files.source import Document

_TURN = 2.0 * math.pi
_SAME = 1e-6
"""Bearings that differ by less than this [rad] are one bearing."""


def check_wind(document: Document, file: PlanFile) -> None:
    """Add the faults between values of gust, turbulence and sectors."""
    gust = file.gust
    if gust is not None and gust.longest < gust.shortest:
        expected = "a time at or above shortest"
        document.fault(("gust", "longest"), expected, "swap shortest and longest")
    for i, sector in enumerate(file.sector):
        _check_sector(document, file, i, sector)
    _check_circle(document, file.sector)


def _check_sector(document: Document, file: PlanFile, i: int, sector: SectorTable) -> None:
    path = ("sector", i)
    if sector.name and sector.name in [other.name for other in file.sector[:i]]:
        document.fault((*path, "name"), "a name of its own", "rename one of the two")
    if sector.turbulence_intensity is not None and file.turbulence is None:
        expected = "no turbulence_intensity, because there is no [turbulence]"
        mend = "remove it or add [turbulence]"
        document.fault_at_key((*path, "turbulence_intensity"), expected, mend, "one")
    if sector.shelter is not None and sector.shelter >= 1.0:
        expected = "a share below 100 %"
        document.fault((*path, "shelter"), expected, "leave shelter out where none was measured")
    if sector.shelter is not None and sector.shelter_source is None:
        expected = 'key "shelter_source", because a shelter counts only where it was measured'
        mend = "name the measurement, or remove shelter"
        document.fault_at_key((*path, "shelter_source"), expected, mend, "no such key")
    if sector.shelter is None and sector.shelter_source is not None:
        expected = "no shelter_source, because there is no shelter"
        mend = "remove it or add shelter"
        document.fault_at_key((*path, "shelter_source"), expected, mend, "one")


def _check_circle(document: Document, sectors: list[SectorTable]) -> None:
    """Each sector must begin where the one before it ends, once around the circle."""
    if not all(math.isfinite(sector.from_ + sector.to) for sector in sectors):
        return
    order = sorted(range(len(sectors)), key=lambda i: sectors[i].from_)
    for i, before in zip(order, [*order[-1:], *order[:-1]], strict=True):
        sector, end = sectors[i], sectors[before].to
        whole = len(sectors) == 1 and abs(sector.to - sector.from_ - _TURN) < _SAME
        if _one_bearing(sector.from_, sector.to) and not whole:
            expected = "a bearing other than from"
            mend = 'for one sector all around write from = "0 deg", to = "360 deg"'
            document.fault(("sector", i, "to"), expected, mend)
        elif not _one_bearing(sector.from_, end):
            name = shown(sectors[before].name)
            expected = f"{from_si(end, 'deg'):g} deg, where sector {name} ends: no gap, no overlap"
            mend = "let the sectors join once around the circle"
            document.fault(("sector", i, "from"), expected, mend)


def _one_bearing(first: float, second: float) -> bool:
    return abs(math.remainder(first - second, _TURN)) < _SAME


def gust_lengths(gust: GustTable | None) -> GustLengths | None:
    """Build the model from a table without faults."""
    return None if gust is None else GustLengths(gust.shortest, gust.longest)


def turbulence(table: TurbulenceTable | None) -> Turbulence | None:
    """Build the model from a table without faults."""
    return None if table is None else Turbulence(table.intensity, table.series, table.seed)


def sector_of(table: SectorTable) -> Sector:
    """Build the model from a table without faults."""
    return Sector(
        name=table.name,
        from_rad=table.from_,
        to_rad=table.to,
        upflow_rad=table.upflow,
        turbulence_intensity=table.turbulence_intensity,
        shelter=table.shelter,
        shelter_source=table.shelter_source or "",
    )
