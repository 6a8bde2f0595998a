"""Intervals through any function, and which input would shrink the answer most.

Inputs in which the function is monotone, with a known sign, only matter at their ends: all of them at the
ends that raise the result, or all at those that lower it. The others are sampled: all corners (or those of
the widest inputs, if there are many) and evenly spread inner points, always the same ones, so that an
unchanged design gives an unchanged answer.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np

from gatecheck.physics.arrays import RealArray

INNER_POINTS_COUNT = 64  # inner points beside the corners; our choice
_MOST_CORNER_INPUTS = 6  # 64 corners; further inputs are only sampled inside; our choice

Function = Callable[[Mapping[str, RealArray]], RealArray]


@dataclass(frozen=True, slots=True)
class Interval:
    """A number known between two bounds; `nominal_au` is the likeliest value."""

    low_au: float
    nominal_au: float
    high_au: float

    def centre_au(self) -> float:
        """Geometric mean of the bounds, or the arithmetic one where a bound is not above zero."""
        if self.low_au > 0.0:
            return math.sqrt(self.low_au * self.high_au)
        return 0.5 * (self.low_au + self.high_au)

    def width_neper(self) -> float:
        """Natural logarithm of high over low; infinite where low is not above zero and the two differ."""
        if self.low_au == self.high_au:
            return 0.0
        return math.log(self.high_au / self.low_au) if self.low_au > 0.0 else math.inf


@dataclass(frozen=True, slots=True, kw_only=True)
class Spread:
    """Result over intervals: the bounds, the value at the nominal inputs, and where the extremes lie."""

    interval: Interval
    at_low: Mapping[str, float]
    at_high: Mapping[str, float]
    sampled: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Gain:
    """What knowing one input would do: the answer with it fixed at its centre, and the width that leaves."""

    name: str
    fixed_au: float
    interval: Interval
    left_ratio: float


def propagate(function: Function, inputs: Mapping[str, Interval], *, signs: Mapping[str, int] | None = None) -> Spread:
    """Bounds of a function whose inputs are only known to intervals.

    Source: a monotone function has its extremes at corners; otherwise sampling, with a Kronecker sequence of
        the generalised golden ratio for the inner points (Roberts 2018, from memory).
    Valid: exact where every uncertain input has a sign and the signs are right; else a peak between the
        points is missed, and `sampled` says so. Values of nan are left out; only nan gives nan.

    Args:
        function: takes arrays of shape (m,) by input name, gives one value per point, shape (m,).
        inputs: intervals by name.
        signs: +1 where a larger input raises the result, -1 where it lowers it; inputs without a sign are
            sampled. None for no signs at all.

    Returns:
        The bounds and where they lie.
    """
    signs = {} if signs is None else signs
    points = _points(inputs, signs)
    sampled = any(interval.low_au != interval.high_au for name, interval in inputs.items() if name not in signs)
    values = np.asarray(function(points), dtype=np.float64)
    known = ~np.isnan(values)
    if not known.any():
        nowhere = dict.fromkeys(inputs, math.nan)
        interval = Interval(math.nan, math.nan, math.nan)
        return Spread(interval=interval, at_low=nowhere, at_high=nowhere, sampled=sampled)
    low, high = (
        int(np.argmin(np.where(known, values, np.inf))),
        int(np.argmax(np.where(known, values, -np.inf))),
    )
    return Spread(
        interval=Interval(float(values[low]), float(values[0]), float(values[high])),
        at_low={name: float(points[name][low]) for name in inputs},
        at_high={name: float(points[name][high]) for name in inputs},
        sampled=sampled,
    )


def rank_inputs(
    function: Function, inputs: Mapping[str, Interval], *, signs: Mapping[str, int] | None = None
) -> list[Gain]:
    """Inputs in the order in which knowing each alone would shrink the answer, the best question first.

    Widths are compared as logarithms of high over low where the answer is above zero, else as differences.

    Source: own rule: fix one input at its centre, propagate the rest, compare.
    Valid: as `propagate`; inputs that are known already are left out.

    Args:
        function: as in `propagate`.
        inputs: intervals by name.
        signs: as in `propagate`.

    Returns:
        One entry per uncertain input; `left_ratio` is the width that stays, 1 for a useless question.
        Ties keep the order of the inputs.
    """
    whole = propagate(function, inputs, signs=signs).interval
    gains = []
    for name, interval in inputs.items():
        if interval.low_au == interval.high_au:
            continue
        centre = interval.centre_au()
        fixed = {**inputs, name: Interval(centre, centre, centre)}
        left = propagate(function, fixed, signs=signs).interval
        gains.append(Gain(name=name, fixed_au=centre, interval=left, left_ratio=_left(whole, left)))
    return sorted(gains, key=lambda gain: gain.left_ratio)


def _left(whole: Interval, left: Interval) -> float:
    if whole.low_au > 0.0 and left.low_au > 0.0:
        width, remaining = whole.width_neper(), left.width_neper()
    else:
        width, remaining = whole.high_au - whole.low_au, left.high_au - left.low_au
    return remaining / width if width > 0.0 else 1.0


def _points(inputs: Mapping[str, Interval], signs: Mapping[str, int]) -> dict[str, RealArray]:
    """The nominal point, then every sample of the unsigned inputs at the lowering and at the raising ends."""
    unsigned = _sampled({name: interval for name, interval in inputs.items() if name not in signs})
    if len(unsigned) == len(inputs):
        return unsigned
    count = max((values.size for values in unsigned.values()), default=1)
    points = {}
    for name, interval in inputs.items():
        if name in unsigned:
            values = unsigned[name]
            points[name] = np.concatenate([values[:1], values, values])
            continue
        lowering, raising = interval.low_au, interval.high_au
        if signs[name] < 0:
            lowering, raising = raising, lowering
        points[name] = np.repeat([interval.nominal_au, lowering, raising], [1, count, count])
    return points


def _sampled(inputs: Mapping[str, Interval]) -> dict[str, RealArray]:
    """The nominal point, the corners of the widest inputs (others at nominal), and the inner points."""
    uncertain = [name for name, interval in inputs.items() if interval.low_au != interval.high_au]
    widest = sorted(uncertain, key=lambda name: -_relative_width(inputs[name]))[:_MOST_CORNER_INPUTS]
    corners = (np.arange(1 << len(widest))[:, None] >> np.arange(len(widest))) & 1
    inner = _kronecker(len(uncertain))
    points = {}
    for name, interval in inputs.items():
        nominal = np.full(1, interval.nominal_au)
        if name in widest:
            bounds = np.array([interval.low_au, interval.high_au])
            at_corners = bounds[corners[:, widest.index(name)]]
        else:
            at_corners = np.full(corners.shape[0], interval.nominal_au)
        share = inner[:, uncertain.index(name)] if name in uncertain else np.zeros(INNER_POINTS_COUNT)
        points[name] = np.concatenate([nominal, at_corners, _inside(interval, share)])
    return points


def _relative_width(interval: Interval) -> float:
    size = max(abs(interval.low_au), abs(interval.high_au))
    return (interval.high_au - interval.low_au) / size


def _inside(interval: Interval, share: RealArray) -> RealArray:
    """Points at parts of the way from low to high, on a logarithmic way where that exists."""
    if interval.low_au > 0.0:
        return interval.low_au * (interval.high_au / interval.low_au) ** share
    return interval.low_au + (interval.high_au - interval.low_au) * share


def _kronecker(dimensions: int) -> RealArray:
    """Evenly spread points of the unit cube, shape (INNER_POINTS_COUNT, dimensions)."""
    ratio = 2.0
    for _ in range(60):  # the root of x^(d+1) = x + 1 by fixed point; contracts at least threefold each time
        ratio = (1.0 + ratio) ** (1.0 / (dimensions + 1))
    steps = ratio ** -np.arange(1.0, dimensions + 1.0)
    return np.asarray((0.5 + np.arange(1, INNER_POINTS_COUNT + 1)[:, None] * steps) % 1.0)
