"""Stiff ordinary differential equations of a few states, for many corners at once.

Saturating beads, gate charge curves and a commutating drain are not linear, so their transients are
stepped. The method is a singly diagonal implicit Runge-Kutta scheme of order four: it stays stable on the
picosecond modes that leads and clamps bring without following them. Each corner has its own step size.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Protocol

import numpy as np

from gatecheck.physics.trajectory import Trajectory

if TYPE_CHECKING:
    from gatecheck.physics.arrays import BoolArray, Real, RealArray

# Scheme SDIRK 4 with five stages (Hairer and Wanner, Solving Ordinary Differential Equations II, table 6.5,
# from memory; its order is measured in the tests). The last stage is the new state.
_DIAGONAL = 0.25
_STAGES = (
    (),
    (1 / 2,),
    (17 / 50, -1 / 25),
    (371 / 1360, -137 / 2720, 15 / 544),
    (25 / 24, -49 / 48, 125 / 16, -85 / 12),
)
# Weights of the scheme minus those of the embedded third-order one: the error of a step.
_ERROR = (25 / 24 - 59 / 48, -49 / 48 + 17 / 96, 125 / 16 - 225 / 32, 0.0, 1 / 4)
_ERROR_ORDER = 4  # local error of the embedded scheme goes with the fourth power of the step
_NEWTON_ITERATIONS = 8
_NEWTON_SHARE = 0.01  # Newton's last correction in parts of the error tolerance; our choice
_MOST_ATTEMPTS = 20_000  # steps before giving up; a hundred times what the check cases need; our choice
_SAFETY, _SHRINK, _GROW = 0.9, 0.2, 4.0  # usual step size control (textbook)
_LEAST_STEP = 1e-14  # in parts of the record, where time stops resolving it
_FIRST_STEP = 1e-7  # in parts of the record; our choice


class StiffSystem(Protocol):
    """An autonomous system x' = f(x)."""

    def slope_au_per_s(self, state: RealArray) -> RealArray:
        """f(x), shapes (..., n)."""

    def jacobian_per_s(self, state: RealArray) -> RealArray:
        """df/dx, shape (..., n, n)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class StiffSolution:
    """States and their slopes at the steps taken, shape (..., m, n), at `time_s` (..., m).

    Slopes are those of the scheme's last stage: the equations' own slope at the new state would magnify
    its small error by the fastest rate.
    """

    time_s: RealArray
    state_au: RealArray
    slope_au_per_s: RealArray


class NotIntegrableError(ArithmeticError):
    """The steps shrank without end: the system has a singularity or is not what it was meant to be."""


def integrate(
    system: StiffSystem,
    *,
    start_au: RealArray,
    duration_s: Real,
    scale_au: RealArray,
    tolerance_ratio: float = 1e-5,
) -> StiffSolution:
    """Integrate from t = 0 over a duration.

    Source: SDIRK 4 of Hairer and Wanner with simplified Newton iteration and its embedded error estimate.
    Valid: slopes continuous, kinks allowed; the error of a step is held to the tolerance, not the sum.

    Args:
        system: the equations.
        start_au: x(0), shape (..., n); its leading axes must hold every corner of the system.
        duration_s: length, shape (...).
        scale_au: typical size of each state, shape (..., n); errors are counted in parts of it.
        tolerance_ratio: allowed error per step.

    Returns:
        The solution; corners that needed fewer steps repeat their last one.

    Raises:
        NotIntegrableError: a singularity, or no end after 20 000 steps.
    """
    state = np.array(start_au, dtype=np.float64)
    end_s = np.broadcast_to(np.asarray(duration_s, dtype=np.float64), state.shape[:-1])
    time_s, step_s = np.zeros(end_s.shape), end_s * _FIRST_STEP
    slope = system.slope_au_per_s(state)
    times, states, slopes = [time_s], [state], [slope]
    for _ in range(_MOST_ATTEMPTS):
        step_s = np.minimum(step_s, end_s - time_s)
        with np.errstate(over="ignore", invalid="ignore"):  # Newton may run away; the step is then refused
            new_state, new_slope, error = _step(system, state, step_s, scale_au * tolerance_ratio)
        accepted = error <= 1.0
        time_s = np.where(accepted, time_s + step_s, time_s)
        state = np.where(accepted[..., None], new_state, state)
        slope = np.where(accepted[..., None], new_slope, slope)
        factor = _SAFETY * np.maximum(error, 1e-12) ** (-1.0 / _ERROR_ORDER)
        step_s = step_s * np.clip(factor, _SHRINK, _GROW)
        if np.any(~accepted & (step_s < _LEAST_STEP * end_s)):
            raise NotIntegrableError("the step size fell to nothing")
        if accepted.any():
            times.append(time_s)
            states.append(state)
            slopes.append(slope)
        if np.all(time_s >= end_s * (1.0 - 1e-12)):
            return StiffSolution(
                time_s=np.stack(times, axis=-1),
                state_au=np.stack(states, axis=-2),
                slope_au_per_s=np.stack(slopes, axis=-2),
            )
    raise NotIntegrableError("no end after 20000 steps")


def state_trajectory(solution: StiffSolution, *, state_index: int) -> Trajectory:
    """One state as a trajectory.

    Source: the solution itself.
    Valid: any solution.

    Args:
        solution: from `integrate`.
        state_index: which state.

    Returns:
        The trajectory, corners (...).
    """
    return Trajectory(
        time_s=solution.time_s,
        value_au=solution.state_au[..., state_index],
        slope_au_per_s=solution.slope_au_per_s[..., state_index],
    )


@dataclass(frozen=True, slots=True)
class _Step:
    """One step of all corners: its size (..., 1), Newton's inverse matrix, and the allowed errors."""

    system: StiffSystem
    step: RealArray
    inverse: RealArray
    allowed: RealArray

    def stage(self, base: RealArray, slope: RealArray) -> tuple[RealArray, BoolArray]:
        """Slope k with k = f(base + diagonal * step * k), by Newton with the step's one matrix."""
        for _ in range(_NEWTON_ITERATIONS):
            residual = self.system.slope_au_per_s(base + _DIAGONAL * self.step * slope) - slope
            change = _times(self.inverse, residual)
            slope = slope + change
            size = np.abs(self.step * change / self.allowed).max(axis=-1)
            if np.all(size <= _NEWTON_SHARE):
                break
        return slope, size <= _NEWTON_SHARE


def _step(
    system: StiffSystem, state: RealArray, step_s: RealArray, allowed: RealArray
) -> tuple[RealArray, RealArray, RealArray]:
    """New state, its slope, and its error in parts of what is allowed (infinite where Newton failed)."""
    step = step_s[..., None]
    matrix = np.eye(state.shape[-1]) - _DIAGONAL * step[..., None] * system.jacobian_per_s(state)
    inverse = np.asarray(np.linalg.inv(matrix), dtype=np.float64)
    stepping = _Step(system, step, inverse, allowed)
    slopes: list[RealArray] = []
    succeeded = np.ones(step_s.shape, dtype=np.bool_)
    slope = system.slope_au_per_s(state)
    for weights in _STAGES:
        base = state + step * _weighted(weights, slopes, state)
        slope, converged = stepping.stage(base, slope)
        slopes.append(slope)
        succeeded = succeeded & converged
    new_state = base + _DIAGONAL * step * slope
    error = np.abs(_times(inverse, step * _weighted(_ERROR, slopes, state)) / allowed).max(axis=-1)
    return new_state, slope, np.where(succeeded & np.isfinite(error), error, np.inf)


def _weighted(weights: tuple[float, ...], slopes: list[RealArray], like: RealArray) -> RealArray:
    total = np.zeros(like.shape)
    for weight, slope in zip(weights, slopes, strict=True):
        total = total + weight * slope
    return total


def _times(matrix: RealArray, vector: RealArray) -> RealArray:
    return (matrix @ vector[..., None])[..., 0]
