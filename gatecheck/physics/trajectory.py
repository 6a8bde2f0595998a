"""A sampled quantity with its first two derivatives, and what is read off it: peaks, crossings, values.

Between samples the curve is the polynomial that has the value, the slope and, where it is known, the
curvature of both ends. With curvature and six samples per period of a ring it misses the truth by less
than 3e-5 of the amplitude, so peaks and delays need no fine time step.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from gatecheck.physics.arrays import Real, RealArray

# A root is bracketed to 1/256 of an interval; three steps of Newton then reach rounding. Our choice.
_BISECTIONS, _NEWTON_STEPS = 8, 3
# Columns: coefficients of 1, u, u^2 ... u^5 for value, slope, curvature at u = 0 and then at u = 1.
_QUINTIC = np.array(
    [
        [1.0, 0.0, 0.0, -10.0, 15.0, -6.0],
        [0.0, 1.0, 0.0, -6.0, 8.0, -3.0],
        [0.0, 0.0, 0.5, -1.5, 1.5, -0.5],
        [0.0, 0.0, 0.0, 10.0, -15.0, 6.0],
        [0.0, 0.0, 0.0, -4.0, 7.0, -3.0],
        [0.0, 0.0, 0.0, 0.5, -1.0, 0.5],
    ]
)
# The same for value and slope alone.
_CUBIC = np.array([[1.0, 0.0, -3.0, 2.0], [0.0, 1.0, -2.0, 1.0], [0.0, 0.0, 3.0, -2.0], [0.0, 0.0, -1.0, 1.0]])


@dataclass(frozen=True, slots=True, kw_only=True)
class Trajectory:
    """One quantity along time for every corner; `au` stands for the unit of the quantity.

    All arrays have shape (..., n). Times rise along the last axis; equal neighbours are allowed. The
    curvature is None where it is not known well, as after a stiff integration.
    """

    time_s: RealArray
    value_au: RealArray
    slope_au_per_s: RealArray
    curvature_au_per_s2: RealArray | None = None

    def scaled(self, *, factor_ratio: Real) -> Trajectory:
        """The same quantity times a factor, shape (...)."""
        factor = np.asarray(factor_ratio)[..., None]
        return Trajectory(
            time_s=self.time_s,
            value_au=self.value_au * factor,
            slope_au_per_s=self.slope_au_per_s * factor,
            curvature_au_per_s2=None if self.curvature_au_per_s2 is None else self.curvature_au_per_s2 * factor,
        )

    def joined(self, later: Trajectory) -> Trajectory:
        """This trajectory followed by another one that starts where this one ends."""
        own, other = self.curvature_au_per_s2, later.curvature_au_per_s2
        return Trajectory(
            time_s=np.concatenate([self.time_s, self.time_s[..., -1:] + later.time_s], axis=-1),
            value_au=np.concatenate([self.value_au, later.value_au], axis=-1),
            slope_au_per_s=np.concatenate([self.slope_au_per_s, later.slope_au_per_s], axis=-1),
            curvature_au_per_s2=None if own is None or other is None else np.concatenate([own, other], axis=-1),
        )


def maximum(trajectory: Trajectory) -> tuple[RealArray, RealArray]:
    """Largest value and the time of it, each of shape (...).

    Source: Hermite interpolation between samples (textbook numerical analysis).
    Valid: samples dense enough to hold at least four points per oscillation; outside, a peak may be missed.

    Args:
        trajectory: the quantity, shape (..., n).

    Returns:
        The maximum in the unit of the quantity, and its time in seconds. A curve still rising at its last
        sample gives that sample.
    """
    last = trajectory.time_s.shape[-1] - 1
    best = np.argmax(trajectory.value_au, axis=-1)
    rising = _take(trajectory.slope_au_per_s, best) > 0.0
    start = np.clip(np.where(rising, best, best - 1), 0, last - 1)
    cubic = _interval_polynomial(trajectory, start)
    position = _falling_zero(_derivative(cubic))
    inside = _value(cubic, position)
    sampled = _take(trajectory.value_au, best)
    better = inside > sampled
    start_s, step_s = _interval(trajectory, start)
    at_s = np.where(better, start_s + position * step_s, _take(trajectory.time_s, best))
    return np.where(better, inside, sampled), at_s


def first_maxima(
    trajectory: Trajectory, *, maxima_count: int, above_au: RealArray | float
) -> tuple[RealArray, RealArray]:
    """The first few local maxima above a level, in order of time.

    Source: Hermite interpolation between samples (textbook numerical analysis).
    Valid: as `maximum`; places beyond the number of maxima found hold nan.

    Args:
        trajectory: the quantity, shape (..., n).
        maxima_count: how many to return.
        above_au: only maxima higher than this count, shape (...); a bead's own gigahertz ring makes
            ripples on the way up that nobody means.

    Returns:
        Values in the unit of the quantity and times in seconds, each of shape (..., maxima_count).
    """
    slope = trajectory.slope_au_per_s
    high = np.maximum(trajectory.value_au[..., :-1], trajectory.value_au[..., 1:])
    turns = (slope[..., :-1] > 0.0) & (slope[..., 1:] <= 0.0) & (high > np.asarray(above_au)[..., None])
    order = np.argsort(~turns, axis=-1, kind="stable")[..., :maxima_count]
    values, times = [], []
    for place in np.moveaxis(order, -1, 0):
        polynomial = _interval_polynomial(trajectory, place)
        position = _falling_zero(_derivative(polynomial))
        start_s, step_s = _interval(trajectory, place)
        found = _take(turns, place)
        values.append(np.where(found, _value(polynomial, position), np.nan))
        times.append(np.where(found, start_s + position * step_s, np.nan))
    return np.stack(values, axis=-1), np.stack(times, axis=-1)


def first_crossing_s(trajectory: Trajectory, *, level_au: RealArray | float) -> RealArray:
    """First time the quantity reaches a level, from either side.

    Source: Hermite interpolation between samples (textbook numerical analysis).
    Valid: as `maximum`; a level that is not crossed inside the record gives nan.

    Args:
        trajectory: the quantity, shape (..., n).
        level_au: the level in the unit of the quantity, shape (...).

    Returns:
        Time in seconds, shape (...).
    """
    level = np.broadcast_to(level_au, trajectory.time_s.shape[:-1])
    above = trajectory.value_au >= level[..., None]
    changes = above[..., 1:] != above[..., :-1]
    start = np.argmax(changes, axis=-1)
    polynomial = _interval_polynomial(trajectory, start)
    falling = _take(above, start)
    sign = np.where(falling, 1.0, -1.0)
    polynomial = polynomial * sign[..., None]
    polynomial[..., 0] -= sign * level
    start_s, step_s = _interval(trajectory, start)
    crossing = start_s + _falling_zero(polynomial) * step_s
    return np.where(np.any(changes, axis=-1), crossing, np.nan)


def value_at(trajectory: Trajectory, *, time_s: RealArray | float) -> RealArray:
    """Value at given times, one per corner.

    Source: Hermite interpolation between samples (textbook numerical analysis).
    Valid: times inside the record; outside, the nearest end's value is returned.

    Args:
        trajectory: the quantity, shape (..., n).
        time_s: the times, shape (...).

    Returns:
        Values in the unit of the quantity, shape (...).
    """
    wanted = np.clip(time_s, trajectory.time_s[..., 0], trajectory.time_s[..., -1])
    past = (trajectory.time_s <= wanted[..., None]).sum(axis=-1)
    start = np.clip(past - 1, 0, trajectory.time_s.shape[-1] - 2)
    start_s, step_s = _interval(trajectory, start)
    position = (wanted - start_s) / np.where(step_s > 0.0, step_s, 1.0)
    return _value(_interval_polynomial(trajectory, start), position)


def _take(samples: NDArray[Any], place: NDArray[np.intp]) -> RealArray:
    return np.asarray(np.take_along_axis(samples, place[..., None], axis=-1)[..., 0])


def _interval(trajectory: Trajectory, start: NDArray[np.intp]) -> tuple[RealArray, RealArray]:
    start_s = _take(trajectory.time_s, start)
    return start_s, _take(trajectory.time_s, start + 1) - start_s


def _interval_polynomial(trajectory: Trajectory, start: NDArray[np.intp]) -> RealArray:
    """Coefficients, lowest power first, of the polynomial over [start, start + 1], shape (..., 4 or 6)."""
    _, step_s = _interval(trajectory, start)
    known = [trajectory.value_au, trajectory.slope_au_per_s]
    if trajectory.curvature_au_per_s2 is not None:
        known.append(trajectory.curvature_au_per_s2)
    ends = [
        _take(samples, place) * step_s**power for place in (start, start + 1) for power, samples in enumerate(known)
    ]
    return np.asarray(np.stack(ends, axis=-1) @ (_CUBIC if trajectory.curvature_au_per_s2 is None else _QUINTIC))


def _value(polynomial: RealArray, position: RealArray) -> RealArray:
    total = np.zeros(position.shape)
    for power in reversed(range(polynomial.shape[-1])):
        total = total * position + polynomial[..., power]
    return total


def _derivative(polynomial: RealArray) -> RealArray:
    return polynomial[..., 1:] * np.arange(1, polynomial.shape[-1])


def _falling_zero(polynomial: RealArray) -> RealArray:
    """Place in [0, 1] where the polynomial goes from positive to not positive; 1 where it does not."""
    low = np.zeros(polynomial.shape[:-1])
    high = np.ones(polynomial.shape[:-1])
    for _ in range(_BISECTIONS):
        middle = 0.5 * (low + high)
        positive = _value(polynomial, middle) > 0.0
        low, high = np.where(positive, middle, low), np.where(positive, high, middle)
    slope, root = _derivative(polynomial), 0.5 * (low + high)
    for _ in range(_NEWTON_STEPS):
        steepness = _value(slope, root)
        change = _value(polynomial, root) / np.where(steepness < 0.0, steepness, -np.inf)
        root = np.clip(root - change, low, high)
    return root
