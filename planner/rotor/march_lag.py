"""Rigid lag of marched blades, driven by drag, by changes of speed and by flapping."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.march_stops import MarchStops

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.march_loads import UnitLoads
    from planner.rotor.march_model import LagModel

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]


class MarchLag:
    """Lag of every blade of a block; positive against rotation.

    I z'' + c z' + (k + Omega^2 e S) z = M_air + dOmega/dt (I + e S) - 2 Omega I b b' + M_stop
    with drag M_air, Coriolis moment of flapping b, and lag stops like flap stops. Lag does not
    act back on flap. Each (cases, blades).
    """

    def __init__(self, model: LagModel, shape: tuple[int, int], dtype: type[Any]) -> None:
        """All blades straight and still."""
        self._model, self._dtype, self._shape = model, dtype, shape
        self.x = np.zeros((*shape, 2), dtype)
        self.stop_N_m = np.zeros(shape, dtype)
        self._load = np.zeros(shape, dtype)
        self._stops = MarchStops(model.laws, shape, dtype)

    def take(self, where: NDArray[Any]) -> MarchLag:
        """The same for some of the cases."""
        kept = self.x[where]
        part = MarchLag(self._model, (kept.shape[0], kept.shape[1]), self._dtype)
        part.x, part.stop_N_m, part._load = kept, self.stop_N_m[where], self._load[where]
        return part

    @property
    def from_middle_rad(self) -> Array:
        """Lag angle from the middle of its stops."""
        angle: Array = self.x[..., 0] - self._dtype(self._model.middle_rad)
        return angle

    def step(
        self,
        node: NDArray[np.int64],
        loads: UnitLoads,
        speed: tuple[Array, Array],
        ratio: Array,
    ) -> None:
        """One step.

        Args:
            node: Nodes of the step table, (cases,).
            loads: Loads on the blades at the begin.
            speed: Rotor speed and its rate, each (cases,).
            ratio: This step over the one before, (cases,).
        """
        model = self._model
        whole = model.inertia_kg_m2 + model.hinge_m * model.first_moment_kg_m
        load = loads.flap_rad * loads.flap_rate_rad_s
        load *= (-2.0 * model.inertia_kg_m2 * speed[0])[:, None]
        load += loads.lag_air_N_m
        load += (whole * speed[1])[:, None]
        row = np.empty((*load.shape, 4), load.dtype)
        row[..., :2] = self.x
        row[..., 2] = load
        np.subtract(load, self._load, out=row[..., 3])
        row[..., 3] *= ratio[:, None]
        self._load = load
        after = np.matmul(row, model.table.whole.take(node, axis=0))
        self.x = after[..., :2]
        if model.laws.exist:
            self._press(node)

    def _press(self, node: NDArray[np.int64]) -> None:
        """Add what the stops do over the step."""
        by_stop = self._model.table.by_stop.take(node, axis=0)
        if np.count_nonzero(self.stop_N_m):
            self.x += self.stop_N_m[..., None] * by_stop[:, None, 0, :2]
        give = (by_stop[:, 1, :1], by_stop[:, 1, 1:2])
        reach = (self.x[..., 0], self.x[..., 1])
        self.stop_N_m = self._stops.moment(reach, self._stops.places, give)
        if np.count_nonzero(self.stop_N_m):
            self.x += self.stop_N_m[..., None] * by_stop[:, None, 1, :2]
