"""Plane geometry on arrays of points: pure functions, any unit of length, shapes (n, 2) unless said otherwise."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Iterator

    from numpy.typing import NDArray

    Points = NDArray[np.float64]


def polygon_area(points: Points) -> float:
    """Signed area of a simple polygon (shoelace formula); counter-clockwise in y-up axes is positive."""
    x, y = points[:, 0], points[:, 1]
    return float(np.dot(x, np.roll(y, -1)) - np.dot(y, np.roll(x, -1))) / 2


def enclosed_area(points: Points) -> float:
    """Area between a closed line and itself: every lobe of a line that crosses itself counts as positive.

    Splits at the first crossing found and goes on with both parts; lines of gate loops cross a few times at most.
    """
    total, open_lines = 0.0, [points]
    for _ in range(_MAX_SPLITS):
        if not open_lines:
            break
        line = open_lines.pop()
        cross = _first_crossing(line)
        if cross is None:
            total += abs(polygon_area(line))
            continue
        i, j, point = cross
        open_lines.append(np.vstack([point, line[i + 1 : j + 1]]))
        open_lines.append(np.vstack([line[: i + 1], point, line[j + 1 :]]))
    return total + sum(abs(polygon_area(line)) for line in open_lines)


# Our choice: bounds the work on lines that cross themselves all the time.
_MAX_SPLITS = 200
_TINY = 1e-12
_MOST_PAIRS = 200_000  # of points and lines looked at in one go; bounds memory, our choice


def _first_crossing(line: Points) -> tuple[int, int, Points] | None:
    """The first two edges of a closed line that cross properly, and where."""
    count = len(line)
    if count < 4:  # noqa: PLR2004 (a triangle cannot cross itself)
        return None
    starts, ends = line, np.roll(line, -1, axis=0)
    for i in range(count - 2):
        last = count - 1 if i == 0 else count  # the first and the last edge share a corner
        others = np.arange(i + 2, last)
        if not len(others):
            continue
        t, u, parallel = crossing_parameters(starts[i], ends[i], starts[others], ends[others])
        hit = ~parallel & (t > _TINY) & (t < 1 - _TINY) & (u > _TINY) & (u < 1 - _TINY)
        if hit.any():
            first = int(np.argmax(hit))
            return i, int(others[first]), starts[i] + t[first] * (ends[i] - starts[i])
    return None


def crossing_parameters(
    a: Points, b: Points, starts: Points, ends: Points
) -> tuple[NDArray[np.float64], NDArray[np.float64], NDArray[np.bool_]]:
    """Where the line a-b meets each line start-end: position on a-b, on the other, and whether parallel.

    `a` and `b` are one line, shape (2,), or one for each of the others, shape (n, 2).
    """
    r, s = b - a, ends - starts
    det = r[..., 0] * s[:, 1] - r[..., 1] * s[:, 0]
    scale = np.hypot(r[..., 0], r[..., 1]) * np.hypot(s[:, 0], s[:, 1])
    parallel = np.abs(det) <= _TINY * np.maximum(scale, _TINY)
    safe = np.where(parallel, 1.0, det)
    d = starts - a
    t = (d[:, 0] * s[:, 1] - d[:, 1] * s[:, 0]) / safe
    u = (d[:, 0] * r[..., 1] - d[:, 1] * r[..., 0]) / safe
    return t, u, parallel


def project(point: Points, starts: Points, ends: Points) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Nearest position (0 to 1) of a point on each line, and its distance from there.

    `point` is one point, shape (2,), or one for each line, shape (n, 2).
    """
    along = ends - starts
    length2 = np.maximum((along**2).sum(axis=1), _TINY**2)
    t = np.clip(((point - starts) * along).sum(axis=1) / length2, 0, 1)
    return t, np.hypot(*(starts + t[:, None] * along - point).T)


def overlapping_pairs(low: Points, high: Points) -> Iterator[tuple[NDArray[np.int64], NDArray[np.int64]]]:
    """Pairs (i, k), i below k, of upright boxes that touch or overlap, corners `low` and `high`; in portions."""
    rows = max(_MOST_PAIRS // max(len(low), 1), 1)
    for first in range(0, len(low), rows):
        part = slice(first, first + rows)
        meet = np.ones((len(low[part]), len(low) - first), dtype=bool)
        for axis in (0, 1):
            meet &= low[part, axis][:, None] <= high[first:, axis]
            meet &= high[part, axis][:, None] >= low[first:, axis]
        i, k = np.nonzero(np.triu(meet, 1))
        yield i + first, k + first


def nearest_gap(points: Points, starts: Points, ends: Points) -> NDArray[np.float64]:
    """Distance of each point from the nearest of some lines, shape (n,)."""
    along = ends - starts
    length2 = np.maximum((along**2).sum(axis=1), _TINY**2)
    rows = max(_MOST_PAIRS // max(len(starts), 1), 1)
    gaps = []
    for part in (points[i : i + rows] for i in range(0, len(points), rows)):
        x, y = part[:, :1] - starts[:, 0], part[:, 1:] - starts[:, 1]
        t = np.clip((x * along[:, 0] + y * along[:, 1]) / length2, 0, 1)
        gaps.append(np.sqrt(((x - t * along[:, 0]) ** 2 + (y - t * along[:, 1]) ** 2).min(axis=1)))
    return np.concatenate(gaps) if gaps else np.zeros(0)


def inside(points: Points, polygon: Points) -> NDArray[np.bool_]:
    """Which points lie in a polygon, by the even-odd rule; holes joined to the rim by a slit come out right.

    Only edges that reach the points' range of y are looked at: a plane has thousands, a gate trace is short.
    """
    if (polygon.max(axis=0) < points.min(axis=0)).any() or (polygon.min(axis=0) > points.max(axis=0)).any():
        return np.zeros(len(points), dtype=bool)
    ends = np.roll(polygon, -1, axis=0)
    low, high = np.minimum(polygon[:, 1], ends[:, 1]), np.maximum(polygon[:, 1], ends[:, 1])
    near = (high > points[:, 1].min()) & (low <= points[:, 1].max()) & (high > low)
    a, b = polygon[near], ends[near]
    y = points[:, 1][:, None]
    spans = (a[:, 1] > y) != (b[:, 1] > y)
    x = a[:, 0] + (y - a[:, 1]) / (b[:, 1] - a[:, 1]) * (b[:, 0] - a[:, 0])
    odd: NDArray[np.bool_] = (spans & (points[:, 0][:, None] < x)).sum(axis=1) % 2 == 1
    return odd


def crosses_rim(a: Points, b: Points, polygon: Points) -> bool:
    """Does the line a-b cross an edge of the polygon?"""
    t, u, parallel = crossing_parameters(a, b, polygon, np.roll(polygon, -1, axis=0))
    return bool((~parallel & (t > 0) & (t < 1) & (u >= 0) & (u <= 1)).any())


def arc_points(start: Points, middle: Points, end: Points, *, step_deg: float = 5.0) -> Points:
    """Points on the arc through three points, close enough that its length is right to 0.04 % at 5 degrees.

    Three points in line give the straight line.
    """
    ax, ay = middle - start
    bx, by = end - start
    det = 2 * (ax * by - ay * bx)
    if abs(det) <= _TINY * max(float(np.hypot(bx, by)), _TINY) ** 2:
        return np.array([start, end])
    ux = (by * (ax**2 + ay**2) - ay * (bx**2 + by**2)) / det
    uy = (ax * (bx**2 + by**2) - bx * (ax**2 + ay**2)) / det
    centre, radius = start + np.array([ux, uy]), float(np.hypot(ux, uy))
    angles = [float(np.arctan2(*(point - centre)[::-1])) for point in (start, middle, end)]
    turn = (angles[2] - angles[0]) % (2 * np.pi)
    if (angles[1] - angles[0]) % (2 * np.pi) > turn:
        turn -= 2 * np.pi
    count = max(int(np.ceil(abs(np.degrees(turn)) / step_deg)), 1)
    sweep = angles[0] + turn * np.linspace(0, 1, count + 1)
    points: Points = centre + radius * np.stack([np.cos(sweep), np.sin(sweep)], axis=1)
    points[0], points[-1] = start, end
    return points


def clip_to_box(a: Points, b: Points, half: Points) -> tuple[float, float] | None:
    """The part (from, to) of the line a-b inside an upright box around the origin, by its half sizes."""
    low, high = 0.0, 1.0
    for axis in (0, 1):
        step = b[axis] - a[axis]
        if abs(step) <= _TINY:
            if abs(a[axis]) > half[axis]:
                return None
            continue
        first, second = sorted(((-half[axis] - a[axis]) / step, (half[axis] - a[axis]) / step))
        low, high = max(low, float(first)), min(high, float(second))
        if low > high:
            return None
    return low, high


def distance_between(one: Points, two: Points) -> float:
    """Shortest distance between two convex polygons; zero where they touch or overlap."""
    if inside(one[:1], two)[0] or inside(two[:1], one)[0]:
        return 0.0
    shortest = np.inf
    for polygon, other in ((one, two), (two, one)):
        starts, ends = other, np.roll(other, -1, axis=0)
        for i, corner in enumerate(polygon):
            shortest = min(shortest, float(project(corner, starts, ends)[1].min()))
            if crosses_rim(corner, polygon[(i + 1) % len(polygon)], other):
                return 0.0
    return float(shortest)
