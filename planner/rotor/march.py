"""March: whole rotors through spin-up, hold and run-down in wind and gusts, stops included."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.rotor.march_block import Block
from planner.rotor.march_case import STILL
from planner.rotor.march_track import Contacts, Extremes

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from planner.rotor.march_case import Histories, MarchCases, Turbulence
    from planner.rotor.march_model import MarchModel

    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]

BLADES_AT_ONCE = 4096
"""Blades in a block: few enough for its arrays to stay in the processor's cache."""
LOOK_EVERY = 32
"""Steps between looks for cases that are done."""


@dataclass(frozen=True, eq=False)
class MarchResult:
    """What marched cases did.

    Attributes:
        extremes: Greatest and least values.
        contacts: Touches of the droop stop.
        converged: Every number of a case stayed finite, and the march resolves its stops,
            (cases,).
    """

    extremes: Extremes
    contacts: Contacts
    converged: BoolArray


def march(
    model: MarchModel,
    histories: Histories,
    cases: MarchCases,
    rough: Turbulence = STILL,
    progress: Callable[[float], None] = lambda _: None,
) -> MarchResult:
    """March cases through their histories.

    Args:
        model: The rotor.
        histories: Speed and pitch over time.
        cases: The cases. What one yields does not depend on which others are marched with it.
        rough: Turbulence series.
        progress: Called with the share of blades that are done.

    Returns:
        The results.

    Validity:
        Wind even over the disc; steady sections at every instant; rigid lag that does not act
        back on flap; small elastic deflections. What did not stay finite is marked.
    """
    units = (cases.count, model.units)
    blades = model.units * model.unit.n_blades
    extremes, contacts = Extremes.none(*units, blades), Contacts.none(units)
    converged = np.zeros(cases.count, dtype=bool)
    if not model.resolves_stops:
        return MarchResult(extremes, contacts, converged)
    at_once = max(1, BLADES_AT_ONCE // blades)
    order = np.argsort(histories.end_s[cases.history], kind="stable")
    for edge in range(0, cases.count, at_once):
        where = order[edge : edge + at_once]
        block = Block(model, histories, rough, cases.take(where))
        _run(block, where, (extremes, contacts, converged))
        progress(min(1.0, (edge + at_once) / cases.count))
    return MarchResult(extremes, contacts, converged)


def _run(
    block: Block, where: NDArray[np.int64], into: tuple[Extremes, Contacts, BoolArray]
) -> None:
    """March one block to the end of its last case."""
    with np.errstate(all="ignore"):  # what overflows is found and marked
        while True:
            for _ in range(LOOK_EVERY):
                block.step()
            finite = np.all(np.isfinite(block.x), axis=(1, 2))
            finite &= np.all(np.isfinite(block.induced_m_s), axis=1)
            if block.lag is not None:
                finite &= np.all(np.isfinite(block.lag.x), axis=(1, 2))
            stop = block.is_done | ~finite
            if not np.any(stop):
                continue
            into[0].put(where[stop], block.extremes.take(stop))
            into[1].put(where[stop], block.contacts.take(stop))
            into[2][where[stop]] = finite[stop]
            if np.all(stop):
                return
            where = where[~stop]
            block.keep(np.flatnonzero(~stop))
