"""The plan: checks between its values and against the stand, and the way into the model."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from planner.files.build_rules import check_class
from planner.files.build_wind import check_wind, gust_lengths, sector_of, turbulence
from planner.files.schema_texts import moment_of
from planner.model.plan import (
    AbortActions,
    Block,
    KeepOut,
    OutsideDocument,
    Plan,
    Role,
    Shutdown,
    Site,
)
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Iterable

    from planner.files.schema_plan import (
        AbortTable,
        DocumentTable,
        PlanFile,
        ShutdownTable,
        SiteTable,
    )
    from planner.files.schema_stand import StandFile
    from planner.files.schema_values import Measured
    from planner.files.source import Document
    from planner.model.rotor import Rotor
    from planner.model.rules import RuleBook
    from planner.model.stand import Stand

_SAME_HEIGHT = 0.1
"""Anemometer and hub within this share of the hub height count as one height."""
_ROUNDING = 1e-9
"""Speeds that differ by less than this share are one speed, written in two ways."""


def check_plan(
    document: Document, file: PlanFile, stand: StandFile | None, classes: Iterable[str]
) -> None:
    """Add the faults between values of the plan file, and between plan and stand."""
    _check_papers(document, file)
    _check_abort(document, file)
    _check_site(document, file.site)
    check_wind(document, file)
    if stand is not None:
        _check_shear(document, file.site, stand.hub_height)
    full_speed = stand.full_speed if stand is not None else math.nan
    _check_keep_outs(document, file, full_speed)
    for i, paper in enumerate(file.outside_document):
        check_class(document, ("outside_document", i, "class"), paper.class_, classes)
    highest = _highest_speed(file, full_speed)
    _check_brake(document, "abort", file.abort, stand, highest)
    _check_brake(document, "shutdown", file.shutdown, stand, highest)


def _check_papers(document: Document, file: PlanFile) -> None:
    start, finish = file.planned_start, file.planned_finish
    if file.issued and start and moment_of(file.issued) > moment_of(start):
        expected = f"a time at or before planned_start {start}"
        document.fault(("issued",), expected, "correct one of the two", file.issued)
    if start and finish and moment_of(finish) <= moment_of(start):
        expected = f"a time after planned_start {start}"
        document.fault(("planned_finish",), expected, "correct one of the two", finish)
    if file.role and not any(role.may_abort is not False for role in file.role):
        expected = "at least one role with may_abort = true"
        document.fault_at_key(("role",), expected, "say who may abort", "none")
    for key, names in (("extra_classes", file.extra_classes), ("rule_books", file.rule_books)):
        for i, name in enumerate(names):
            if name and name in names[:i]:
                document.fault((key, i), "each entry once", "remove one")


def _check_abort(document: Document, file: PlanFile) -> None:
    """An abort that adds pitch to the whole schedule would add load; unknown pitch is no fault."""
    held = [step.collective for block in file.block for step in block.step]
    if held and all(collective < file.abort.collective for collective in held):
        highest = from_si(max(held), "deg")
        expected = f"at most {highest:g} deg, the highest collective of the schedule"
        document.fault(("abort", "collective"), expected, "lower it, or correct the schedule")


def _check_site(document: Document, site: SiteTable) -> None:
    if (site.elevation is None) == (site.pressure is None):
        found = "neither" if site.elevation is None else "both"
        mend = "add one" if site.elevation is None else "remove one"
        document.fault_at_key(("site",), "exactly one of elevation and pressure", mend, found)
    if site.wind_gust < site.wind_mean:
        expected = "a gust at or above wind_mean"
        document.fault(("site", "wind_gust"), expected, "correct wind_gust or wind_mean")


def _check_shear(document: Document, site: SiteTable, hub_height: float) -> None:
    if site.shear_exponent is not None:
        return
    if abs(site.anemometer_height / hub_height - 1.0) > _SAME_HEIGHT:
        expected = 'key "shear_exponent", because anemometer and hub differ in height'
        found = f"none, with {site.anemometer_height:g} m against {hub_height:g} m"
        document.fault_at_key(
            ("site", "shear_exponent"), expected, "add for example shear_exponent = 0.14", found
        )


def _check_keep_outs(document: Document, file: PlanFile, full_speed: float) -> None:
    ids = [band.id for band in file.keep_out]
    for i, band in enumerate(file.keep_out):
        if band.id and band.id in ids[:i]:
            document.fault(("keep_out", i, "id"), "an id of its own", "rename one of the two")
        if band.to.resolved(full_speed) <= band.from_.resolved(full_speed):
            expected = "a speed above from"
            document.fault(("keep_out", i, "to"), expected, "correct from or to")


def _check_brake(
    document: Document,
    key: str,
    table: ShutdownTable | AbortTable,
    stand: StandFile | None,
    highest: float,
) -> None:
    """Judge when ``[shutdown]`` or ``[abort]`` brakes."""
    path = (key, "brake_from")
    if table.brake is True and table.brake_from is None:
        expected = 'key "brake_from", because brake = true'
        mend = "say from which speed the brake is used"
        document.fault_at_key(path, expected, mend, "no such key")
    if table.brake is False and table.brake_from is not None:
        expected = "no brake_from, because brake = false"
        mend = "remove it or set brake = true"
        document.fault_at_key(path, expected, mend, "one")
    if table.brake is True and stand is not None and stand.brake is None:
        expected = "brake = false, because the stand has no [brake]"
        document.fault((key, "brake"), expected, "add [brake] to the stand, or use none")
    if stand is not None and table.brake_from is not None:
        brake_from = table.brake_from.resolved(stand.full_speed)
        allowed, why = _brake_bound(stand, highest)
        if brake_from > allowed * (1.0 + _ROUNDING):
            expected = f"at most {from_si(allowed, 'rpm'):g} rpm, {why}"
            document.fault(path, expected, "brake later, or correct that speed")


def _brake_bound(stand: StandFile, highest: float) -> tuple[float, str]:
    """The lower of the two speeds above which the brake is never meant to act."""
    below = stand.brake.below.resolved(stand.full_speed) if stand.brake else math.inf
    if highest < below:
        return highest, "the highest speed of the schedule"
    return below, "the stand's [brake] below"


def _highest_speed(file: PlanFile, full_speed: float) -> float:
    """Highest speed of the schedule, infinite where a speed is unknown."""
    speeds = [step.rpm.resolved(full_speed) for block in file.block for step in block.step]
    return max(speeds) if speeds and all(map(math.isfinite, speeds)) else math.inf


def build_plan(
    file: PlanFile, blocks: tuple[Block, ...], parts: tuple[Rotor, Stand, RuleBook]
) -> Plan:
    """Build the model from files without faults."""
    rotor, stand, rule_book = parts
    full_speed = stand.full_speed_rad_s
    return Plan(
        title=file.title,
        card=file.card,
        revision=file.revision,
        issued=file.issued,
        objective=file.objective,
        planned_start=file.planned_start,
        planned_finish=file.planned_finish,
        roles=tuple(Role(r.role, r.name, r.duties, r.may_abort) for r in file.role),
        site=_site(file),
        blocks=blocks,
        shutdown=_shutdown(file.shutdown, full_speed),
        keep_outs=tuple(
            KeepOut(b.id, b.from_.resolved(full_speed), b.to.resolved(full_speed), b.why)
            for b in file.keep_out
        ),
        documents=tuple(_document(paper, full_speed) for paper in file.outside_document),
        extra_classes=tuple(file.extra_classes),
        abort=_abort(file.abort, full_speed),
        rotor=rotor,
        stand=stand,
        rule_book=rule_book,
    )


def _site(file: PlanFile) -> Site:
    site = file.site
    return Site(
        elevation_m=site.elevation,
        pressure_Pa=site.pressure,
        temperature_K=site.temperature,
        temperature_spread_K=site.temperature_spread,
        relative_humidity=site.relative_humidity,
        wind_mean_m_s=site.wind_mean,
        wind_gust_m_s=site.wind_gust,
        averaging_time_s=site.averaging_time,
        anemometer_height_m=site.anemometer_height,
        anemometer_error_m_s=site.anemometer_error,
        # left out only where anemometer and hub are at one height: nothing to convert
        shear_exponent=0.0 if site.shear_exponent is None else site.shear_exponent,
        gust_lengths=gust_lengths(file.gust),
        turbulence=turbulence(file.turbulence),
        sectors=tuple(sector_of(table) for table in file.sector),
    )


def _abort(abort: AbortTable, full_speed: float) -> AbortActions:
    return AbortActions(
        collective_rad=abort.collective,
        cyclic=abort.cyclic,
        actions=tuple(abort.actions),
        collective_rate_rad_s=abort.collective_rate,
        reaction_time_s=abort.reaction_time,
        brake=abort.brake,
        brake_from_rad_s=_or_zero(abort.brake_from, full_speed),
        reentries=abort.reentries,
    )


def _shutdown(shutdown: ShutdownTable, full_speed: float) -> Shutdown:
    return Shutdown(
        time_s=shutdown.time,
        collective_rad=shutdown.collective,
        powered=shutdown.powered,
        brake=shutdown.brake,
        brake_from_rad_s=_or_zero(shutdown.brake_from, full_speed),
    )


def _or_zero(speed: Measured | None, full_speed: float) -> float:
    return 0.0 if speed is None else speed.resolved(full_speed)


def _document(paper: DocumentTable, full_speed: float) -> OutsideDocument:
    return OutsideDocument(
        hazard_class=paper.class_,
        where=tuple(paper.where),
        title=paper.title,
        number=paper.number,
        revision=paper.revision,
        approver=paper.approver,
        date=paper.date,
        wind_limit_m_s=paper.wind_limit,
        speed_limit_rad_s=paper.speed_limit.resolved(full_speed),
    )
