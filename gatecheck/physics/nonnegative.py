"""Least squares with non-negative unknowns, which is what keeps a fitted bead passive."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from gatecheck.physics.arrays import RealArray

_ROUNDING = 64 * float(np.finfo(np.float64).eps)  # gradients below this part of their terms count as zero; our choice
_ROUNDS_PER_UNKNOWN = 10  # the method ends in about one round per unknown; beyond that it cycles on rounding


def nonnegative_least_squares(*, columns_au: RealArray, target_au: RealArray) -> RealArray:
    """Vector x >= 0 that minimises |A x - b|, by the active set method.

    Source: Lawson and Hanson, Solving Least Squares Problems (1974), chapter 23 (from memory).
    Valid: finite input; with more unknowns than rows one of the minimisers is returned.

    Args:
        columns_au: A, shape (m, n).
        target_au: b, shape (m,).

    Returns:
        x in the unit of b over that of A, shape (n,).
    """
    matrix, target = columns_au, target_au
    if matrix.shape[0] > matrix.shape[1]:  # the triangular factor has the same minimiser and fewer rows
        orthogonal, matrix = np.linalg.qr(columns_au)
        target = orthogonal.T @ target_au
    count = matrix.shape[1]
    solution, active = np.zeros(count), np.zeros(count, dtype=bool)
    slack = _ROUNDING * np.linalg.norm(matrix, axis=0) * np.linalg.norm(target)
    for _ in range(_ROUNDS_PER_UNKNOWN * count):
        gradient = matrix.T @ (target - matrix @ solution)
        wanting = np.where(active, -np.inf, gradient - slack)
        entering = int(np.argmax(wanting))
        if wanting[entering] <= 0.0:
            break
        active[entering] = True
        solution = _pulled_back(matrix, target, solution, active)
    return solution


def _pulled_back(matrix: RealArray, target: RealArray, solution: RealArray, active: NDArray[np.bool_]) -> RealArray:
    """Unconstrained solution on the active unknowns; those that would turn negative leave it (in place)."""
    while True:
        trial = np.zeros(solution.size)
        trial[active] = np.linalg.lstsq(matrix[:, active], target, rcond=None)[0]
        negative = np.flatnonzero(active & (trial <= 0.0))
        if not negative.size:
            return trial
        fall = solution[negative] - trial[negative]  # zero only where both are
        way = np.where(fall > 0.0, solution[negative] / np.where(fall > 0.0, fall, 1.0), 0.0)
        solution = solution + float(way.min()) * (trial - solution)
        active[negative[way <= way.min()]] = False
        solution = np.where(active, solution, 0.0)
