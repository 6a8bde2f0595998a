"""The exponential of small state matrices and the integral of a decaying quadratic form.

Both work on a stack of matrices at once. States are best given in energy coordinates (current times the
root of its inductance, voltage times the root of its capacitance): a passive network is then a
contraction, and scaling and squaring loses no digits to mixed units.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from gatecheck.physics.arrays import BoolArray, RealArray

# Coefficients of the [7/7] Pade approximant of exp, 17297280 * (7! (14 - k)!) / (14! k! (7 - k)!).
_PADE = (17297280.0, 8648640.0, 1995840.0, 277200.0, 25200.0, 1512.0, 56.0, 1.0)
# Largest 1-norm at which that approximant is exact to double precision (Higham 2005, table 2.3; from memory).
_PADE_NORM = 0.95
_SMITH_DOUBLINGS = 60  # 2^60 exceeds any spread of time constants that a double can hold; our choice
_SMITH_DONE = 1e-15  # relative size of the last addend; our choice, some bits above rounding


def matrix_exponential(*, state_matrix_per_s: RealArray, time_s: RealArray) -> RealArray:
    """Exponential exp(A t) of square matrices, by scaling, a Pade approximant and squaring.

    Source: Higham, SIAM J. Matrix Anal. Appl. 26(4) (2005) p. 1179, algorithm 2.3 at degree 7 (from memory).
    Valid: any finite matrix; a non-finite entry gives a matrix of nan.

    Args:
        state_matrix_per_s: A, shape (..., n, n).
        time_s: t, shape (...), broadcast against the leading axes of A.

    Returns:
        exp(A t), shape (..., n, n), without unit in energy coordinates.
    """
    exponent = np.asarray(state_matrix_per_s) * np.asarray(time_s)[..., None, None]
    norm = np.abs(exponent).sum(axis=-2).max(axis=-1)
    finite = np.isfinite(norm)
    norm = np.where(finite, norm, 0.0)
    squarings = np.ceil(np.log2(np.maximum(norm / _PADE_NORM, 1.0))).astype(np.int64)
    scaled = np.where(finite[..., None, None], exponent, 0.0) * np.exp2(-squarings)[..., None, None]
    result = _pade(scaled)
    for count in range(int(squarings.max(initial=0))):
        result = np.where((squarings > count)[..., None, None], result @ result, result)
    return np.where(finite[..., None, None], result, np.nan)


def _pade(matrix: RealArray) -> RealArray:
    identity = np.eye(matrix.shape[-1])
    square = matrix @ matrix
    fourth = square @ square
    sixth = fourth @ square
    odd = matrix @ (_PADE[7] * sixth + _PADE[5] * fourth + _PADE[3] * square + _PADE[1] * identity)
    even = _PADE[6] * sixth + _PADE[4] * fourth + _PADE[2] * square + _PADE[0] * identity
    return np.asarray(np.linalg.solve(even - odd, even + odd), dtype=np.float64)


def quadratic_integral(*, state_matrix_per_s: RealArray, start_au: RealArray) -> RealArray:
    """Integral over all time of x x^T for x' = A x, exact without stepping through time.

    The integral W solves A W + W A^T = -x0 x0^T. The Cayley transform turns that into a geometric series,
    which is summed by doubling.

    Source: R. A. Smith, SIAM J. Appl. Math. 16(1) (1968) p. 198 (from memory).
    Valid: every eigenvalue of A in the left half plane; a decay slower than 1e-15 of the fastest, or none,
        gives nan.

    Args:
        state_matrix_per_s: A, shape (..., n, n).
        start_au: x0, shape (..., n).

    Returns:
        W in seconds times the square of the state's unit, shape (..., n, n).
    """
    matrix = np.asarray(state_matrix_per_s)
    identity = np.eye(matrix.shape[-1])
    poles = np.linalg.eigvals(matrix)
    stable = np.asarray((poles.real < 0.0).all(axis=-1))
    matrix = np.where(stable[..., None, None], matrix, -identity)
    # Any positive shift converges; the geometric mean of the slowest rate and the row sums lies in between.
    slowest = np.where(stable, np.abs(poles).min(axis=-1), 1.0)
    shift = 1.0 / np.sqrt(np.abs(matrix).sum(axis=-1).max(axis=-1) * slowest)[..., None, None]
    resolvent = np.linalg.inv(identity - shift * matrix)
    power = resolvent @ (identity + shift * matrix)
    column = resolvent @ np.asarray(start_au)[..., None]
    total = 2.0 * shift * (column @ column.swapaxes(-1, -2))
    for _ in range(_SMITH_DOUBLINGS):
        addend = power @ total @ power.swapaxes(-1, -2)
        total = total + addend
        power = power @ power
        settled: BoolArray = np.asarray(_size(addend) <= _SMITH_DONE * _size(total))
        if settled.all():
            break
    return np.where((settled & stable)[..., None, None], total, np.nan)


def _size(matrix: RealArray) -> RealArray:
    return np.asarray(np.abs(matrix).max(axis=(-2, -1)))
