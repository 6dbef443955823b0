"""Exact steps of linear equations of motion under a load that changes linearly in time."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    FloatArray = NDArray[np.float64]

SMALL_NORM = 0.25
TERMS = 12
"""With a norm of a quarter twelve terms leave less than 1e-17."""


@dataclass(frozen=True, eq=False)
class StepMatrices:
    """One step of x = (q, dq/dt) at each node of a table.

    x(h) = E x(0) + G0 f(0) + G1 (f(h) - f(0)) for a load f that is linear over the step h.

    Attributes:
        step_s: Length of the step at each node, (nodes,).
        free: E, (nodes, 2n, 2n).
        by_load: G0, (nodes, 2n, n).
        by_rise: G1, (nodes, 2n, n).
    """

    step_s: FloatArray
    free: FloatArray
    by_load: FloatArray
    by_rise: FloatArray


def step_matrices(
    mass: FloatArray, damping: FloatArray, stiffness: FloatArray, step_s: FloatArray
) -> StepMatrices:
    """Propagate M q'' + C q' + K q = f exactly over one step, for many stiffnesses at once.

    exp(h [[A, B, 0], [0, 0, 1/h], [0, 0, 0]]) holds E, G0 and G1 in its upper rows, with
    A = [[0, 1], [-K/M, -C/M]] and B = [0, 1/M].

    Args:
        mass: M, (n, n), positive definite.
        damping: C, (nodes, n, n).
        stiffness: K, (nodes, n, n).
        step_s: Step of each node, (nodes,) [s].

    Returns:
        The matrices of the steps.

    Source:
        C. F. Van Loan: Computing Integrals Involving the Matrix Exponential, IEEE Transactions
        on Automatic Control 23, 1978 (from memory).
    """
    nodes, n = stiffness.shape[0], mass.shape[0]
    inverse = np.linalg.inv(mass)
    whole = np.zeros((nodes, 4 * n, 4 * n))
    unit = np.eye(n)
    whole[:, :n, n : 2 * n] = unit
    whole[:, n : 2 * n, :n] = -inverse @ stiffness
    whole[:, n : 2 * n, n : 2 * n] = -inverse @ damping
    whole[:, n : 2 * n, 2 * n : 3 * n] = inverse
    whole[:, 2 * n : 3 * n, 3 * n :] = unit / step_s[:, None, None]
    raised = exponentials(whole * step_s[:, None, None])[:, : 2 * n]
    return StepMatrices(
        step_s=step_s,
        free=np.ascontiguousarray(raised[:, :, : 2 * n]),
        by_load=np.ascontiguousarray(raised[:, :, 2 * n : 3 * n]),
        by_rise=np.ascontiguousarray(raised[:, :, 3 * n :]),
    )


def exponentials(matrices: FloatArray) -> FloatArray:
    """Exponential of each of many small matrices, by scaling, Taylor series and squaring.

    Args:
        matrices: Matrices, (many, size, size).

    Returns:
        Their exponentials, to about 1e-12 of the largest entry.

    Validity:
        Real matrices whose powers stay finite. Solvers that call a factorisation for each matrix
        take hundreds of times longer where their threads compete for the cores.

    Source:
        C. Moler, C. Van Loan: Nineteen Dubious Ways to Compute the Exponential of a Matrix, SIAM
        Review 20, 1978, method 3 (from memory).
    """
    largest = float(np.max(np.sum(np.abs(matrices), axis=-1), initial=0.0))
    halvings = max(0, math.ceil(math.log2(max(largest, 1e-300) / SMALL_NORM)))
    small = matrices / 2.0**halvings
    unit = np.eye(matrices.shape[-1])
    total = unit + small / TERMS
    for term in range(TERMS - 1, 0, -1):
        total = unit + small @ total / term
    for _ in range(halvings):
        total = total @ total
    return total
