"""Everything that a march reads off the state of its units by one matrix product."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.flap_unit import FlapUnit

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]


class Viewer:
    """The matrix from x = (q, dq/dt) of a unit to what is linear in it."""

    def __init__(self, unit: FlapUnit, dtype: type[np.floating[Any]]) -> None:
        """Put the columns side by side."""
        inertial = inertial_rows(unit)
        still = unit.stiffness @ inertial.T
        columns = {
            "flap": (unit.rigid.T, None),
            "flap_rate": (None, unit.rigid.T),
            "bend": (unit.tip.T, None),
            "rotation": (unit.flap_view[:, None], None),
            "rotation_rate": (None, unit.flap_view[:, None]),
            "spun": (unit.spin_stiffness, None),
            "held": (still, unit.damping @ inertial.T),
            "held_by_spin": (unit.spin_stiffness @ inertial.T, None),
        }
        n, blocks, edge = unit.n_freedoms, [], 0
        self._places: dict[str, slice] = {}
        for name, (of_q, of_rate) in columns.items():
            width = (of_rate if of_q is None else of_q).shape[1]  # type: ignore[union-attr]
            block = np.zeros((2 * n, width))
            if of_q is not None:
                block[:n] = of_q
            if of_rate is not None:
                block[n:] = of_rate
            blocks.append(block)
            self._places[name] = slice(edge, edge + width)
            edge += width
        self._matrix = np.ascontiguousarray(np.hstack(blocks)).astype(dtype)

    def __call__(self, x: Array) -> View:
        """Look at a state, (cases, units, 2n)."""
        return View(np.matmul(x, self._matrix), self._places)


class View:
    """What was read off one state, by name, each (cases, units, columns).

    ``flap`` and ``flap_rate``: rigid flap without its built-in part; ``bend``: elastic height of
    the tip; ``rotation`` and ``rotation_rate``: what counts as flap; ``spun``: K1 q; ``held`` and
    ``held_by_spin``: inertial sums that stiffness and damping, and centrifugal stiffness over
    speed squared, take away.
    """

    def __init__(self, values: Array, places: dict[str, slice]) -> None:
        """Keep the product."""
        self._values, self._places = values, places

    def __getitem__(self, name: str) -> Array:
        """One part of it."""
        return self._values[..., self._places[name]]

    def of_blades(self, name: str) -> Array:
        """A part with one column a blade of the unit, (cases, blades)."""
        return self[name].reshape(self._values.shape[0], -1)


def inertial_rows(unit: FlapUnit) -> FloatArray:
    """Sums of a unit's inertial forces for unit loads on its freedoms, (rows, n).

    First the force of each blade; then, of blades that are built in, the moment at each root.
    """
    rows = unit.first_moment if unit.is_hinged else np.vstack([unit.first_moment, unit.root_mass])
    return rows / np.diag(unit.mass)
