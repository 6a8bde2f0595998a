"""Exact response of a linear network to a step, a ramp or a constant injection.

The state is a particular solution, linear in time, plus a decaying part that is carried from sample to
sample by matrix exponentials. Samples are dense at the start and thin out by octaves: every mode is well
resolved during its first few periods, which is where its extremes lie, whatever the spread of time scales
(a bead's own capacitance rings at gigahertz while the gate rises in a microsecond).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from gatecheck.physics.matrix_exponential import matrix_exponential
from gatecheck.physics.trajectory import Trajectory

if TYPE_CHECKING:
    from gatecheck.physics.arrays import RealArray

OCTAVES_COUNT = 16  # record length over first block 2^16: picoseconds to microseconds; our choice
_STEPS_LOG2 = 4  # 16 samples per octave: at least 6 per period up to the third period; our choice
_TIME_CONSTANTS = 10.0  # a decaying mode is followed down to 5e-5; our choice
_PERIODS = 4.0  # a ringing one only so long: its extremes lie in the first two; our choice


@dataclass(frozen=True, slots=True, kw_only=True)
class LinearResponse:
    """Sampled states of x' = A x + u + w t.

    `offset_au` and `drift_au_per_s` (..., n) are the particular solution, `decay_au` (..., n, m) what
    decays, at `time_s` (..., m); `state_matrix_per_s` is A.
    """

    state_matrix_per_s: RealArray
    offset_au: RealArray
    drift_au_per_s: RealArray
    time_s: RealArray
    decay_au: RealArray


def record_length_s(*, state_matrix_per_s: RealArray) -> RealArray:
    """Length of record that shows every mode: ten time constants, or four periods if those are over sooner.

    Source: our choice; extremes and crossings lie in the first two periods of the slowest mode.
    Valid: no eigenvalue at zero; growing modes count by their periods.

    Args:
        state_matrix_per_s: A, shape (..., n, n).

    Returns:
        Seconds, shape (...).
    """
    poles = np.linalg.eigvals(state_matrix_per_s)
    settling = np.maximum(-poles.real, 0.0) / _TIME_CONSTANTS
    ringing = np.abs(poles.imag) / (2.0 * math.pi * _PERIODS)
    return np.asarray(1.0 / np.maximum(settling, ringing).min(axis=-1))


def linear_response(
    *,
    state_matrix_per_s: RealArray,
    start_au: RealArray,
    source_au_per_s: RealArray,
    source_slope_au_per_s2: RealArray,
    duration_s: RealArray,
) -> LinearResponse:
    """Response of x' = A x + u + w t over a given duration.

    Source: variation of constants for a constant and a ramp source (textbook linear systems).
    Valid: invertible A; a singular one raises numpy's LinAlgError.

    Args:
        state_matrix_per_s: A, shape (..., n, n).
        start_au: x at t = 0, shape (..., n).
        source_au_per_s: u, shape (..., n).
        source_slope_au_per_s2: w, shape (..., n).
        duration_s: length of the record, shape (...).

    Returns:
        The samples, dense at the start, with the last one exactly at `duration_s`.
    """
    drift = -_solve(state_matrix_per_s, source_slope_au_per_s2)
    offset = _solve(state_matrix_per_s, drift - source_au_per_s)
    time_s, decay = _decay(state_matrix_per_s, start_au - offset, np.asarray(duration_s))
    return LinearResponse(
        state_matrix_per_s=state_matrix_per_s,
        offset_au=offset,
        drift_au_per_s=drift,
        time_s=time_s,
        decay_au=decay,
    )


def observed(response: LinearResponse, *, weights_au: RealArray) -> Trajectory:
    """One linear combination of the states as a trajectory.

    Source: derivatives from the state equation, x' = A x (textbook linear systems).
    Valid: any response.

    Args:
        response: sampled states.
        weights_au: factor of each state, shape (..., n).

    Returns:
        The combination with slope and curvature, shape (..., m).
    """
    row = np.asarray(weights_au)[..., None, :]
    slope_row = row @ response.state_matrix_per_s
    rows = np.concatenate(np.broadcast_arrays(row, slope_row, slope_row @ response.state_matrix_per_s), axis=-2)
    value, slope, curvature = np.moveaxis(rows @ response.decay_au, -2, 0)
    drift = (weights_au * response.drift_au_per_s).sum(axis=-1)[..., None]
    offset = (weights_au * response.offset_au).sum(axis=-1)[..., None]
    return Trajectory(
        time_s=response.time_s,
        value_au=value + offset + drift * response.time_s,
        slope_au_per_s=slope + drift,
        curvature_au_per_s2=curvature,
    )


def final_state_au(response: LinearResponse) -> RealArray:
    """State at the end of the record, to start the next piece of drive from.

    Source: the response itself.
    Valid: any response.

    Args:
        response: sampled states.

    Returns:
        The state, shape (..., n).
    """
    end_s = response.time_s[..., -1:]
    return response.offset_au + response.drift_au_per_s * end_s + response.decay_au[..., -1]


def _solve(matrix: RealArray, vector: RealArray) -> RealArray:
    return np.asarray(np.linalg.solve(matrix, vector[..., None])[..., 0], dtype=np.float64)


def _decay(matrix: RealArray, start: RealArray, duration_s: RealArray) -> tuple[RealArray, RealArray]:
    """Samples of exp(A t) x0: one block of equal steps from zero, then one block per octave."""
    steps = 1 << _STEPS_LOG2
    first_step_s = duration_s / (steps << OCTAVES_COUNT)
    shape = np.broadcast_shapes(matrix.shape[:-2], start.shape[:-1], duration_s.shape)
    powers = [
        np.broadcast_to(
            matrix_exponential(state_matrix_per_s=matrix, time_s=first_step_s), (*shape, *matrix.shape[-2:])
        )
    ]
    for _ in range(OCTAVES_COUNT + _STEPS_LOG2 - 1):
        powers.append(powers[-1] @ powers[-1])
    column = np.broadcast_to(start, (*shape, start.shape[-1]))[..., None]
    blocks = [_block(powers[:_STEPS_LOG2], column)]
    grid = [np.arange(steps)]
    for octave in range(OCTAVES_COUNT):
        column = powers[_STEPS_LOG2 + max(octave - 1, 0)] @ column
        blocks.append(_block(powers[octave : octave + _STEPS_LOG2], column))
        grid.append((steps + np.arange(steps)) << octave)
    blocks.append(powers[_STEPS_LOG2 + OCTAVES_COUNT - 1] @ column)
    grid.append(np.array([steps << OCTAVES_COUNT]))
    time_s = first_step_s[..., None] * np.concatenate(grid)
    return np.broadcast_to(time_s, (*shape, time_s.shape[-1])), np.concatenate(blocks, axis=-1)


def _block(powers: list[RealArray], column: RealArray) -> RealArray:
    """The column and its images under 1, 2, 3 ... steps, doubling their number with every power."""
    for power in powers:
        column = np.concatenate([column, power @ column], axis=-1)
    return column
