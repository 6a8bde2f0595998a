"""Plane geometry, with shapely as an independent second opinion."""

from __future__ import annotations

import math
import random

import numpy as np
import pytest

from gatecheck.copper.geometry import (
    arc_points,
    clip_to_box,
    distance_between,
    enclosed_area,
    inside,
    nearest_gap,
    overlapping_pairs,
    polygon_area,
)


def test_area_of_simple_and_crossing_lines() -> None:
    square = np.array([[0, 0], [2, 0], [2, 2], [0, 2]], dtype=float)
    assert abs(polygon_area(square)) == 4
    assert enclosed_area(square) == 4
    bow = np.array([[0, 0], [2, 2], [2, 0], [0, 2]], dtype=float)
    assert polygon_area(bow) == 0
    assert enclosed_area(bow) == pytest.approx(2)


@pytest.mark.parametrize("seed", range(20))
def test_enclosed_area_is_that_of_the_polygonised_line(seed: int) -> None:
    import shapely
    from shapely.ops import polygonize, unary_union

    rng = random.Random(seed)  # noqa: S311 (no secret)
    line = np.array([[rng.random(), rng.random()] for _ in range(rng.randint(3, 7))])
    ring = shapely.LineString([*line, line[0]])
    pieces = list(polygonize(unary_union(ring)))
    # A piece the line runs round twice counts twice: compare from below and above.
    assert enclosed_area(line) >= sum(piece.area for piece in pieces) * (1 - 1e-9) or len(pieces) > 2
    if ring.is_simple:
        assert enclosed_area(line) == pytest.approx(abs(shapely.Polygon(line).area))


@pytest.mark.parametrize("seed", range(10))
def test_inside_agrees_with_shapely(seed: int) -> None:
    import shapely

    rng = random.Random(seed)  # noqa: S311 (no secret)
    angles = sorted(rng.random() * 2 * math.pi for _ in range(40))
    outline = np.array([[math.cos(a), math.sin(a)] for a in angles]) * np.array([[0.3 + rng.random()] for _ in angles])
    points = np.array([[rng.uniform(-1.5, 1.5), rng.uniform(-1.5, 1.5)] for _ in range(300)])
    polygon = shapely.Polygon(outline)
    want = [polygon.contains(shapely.Point(point)) for point in points]
    assert inside(points, outline).tolist() == want


def test_holes_joined_by_a_slit_are_outside() -> None:
    slit = [(0, 0), (10, 0), (10, 10), (0, 10), (0, 5), (3, 5), (3, 7), (7, 7), (7, 3), (3, 3), (3, 5), (0, 5)]
    outline = np.array(slit, dtype=float)
    assert inside(np.array([[5.0, 5.0], [1.0, 1.0], [8.5, 5.0]]), outline).tolist() == [False, True, True]


@pytest.mark.parametrize("seed", range(20))
def test_distance_between_boxes_agrees_with_shapely(seed: int) -> None:
    import shapely
    from shapely import affinity

    rng = random.Random(seed)  # noqa: S311 (no secret)
    boxes = []
    for _ in range(2):
        box = affinity.rotate(shapely.box(0, 0, rng.uniform(0.2, 2), rng.uniform(0.2, 2)), rng.uniform(0, 180))
        boxes.append(affinity.translate(box, rng.uniform(-2, 2), rng.uniform(-2, 2)))
    outlines = [np.array(box.exterior.coords)[:-1] for box in boxes]
    assert distance_between(*outlines) == pytest.approx(boxes[0].distance(boxes[1]), abs=1e-9)


def test_arcs_turn_the_short_and_the_long_way_and_may_be_straight() -> None:
    half = arc_points(np.array([-1.0, 0]), np.array([0, 1.0]), np.array([1.0, 0]))
    assert np.hypot(*np.diff(half, axis=0).T).sum() == pytest.approx(math.pi, rel=4e-4)
    most = arc_points(np.array([1.0, 0]), np.array([-1.0, 0]), np.array([0, -1.0]))
    assert np.hypot(*np.diff(most, axis=0).T).sum() == pytest.approx(1.5 * math.pi, rel=4e-4)
    line = arc_points(np.array([0.0, 0]), np.array([1.0, 0]), np.array([2.0, 0]))
    assert line.tolist() == [[0, 0], [2, 0]]


def test_clipping_to_a_box() -> None:
    half = np.array([1.0, 2.0])
    assert clip_to_box(np.array([-4.0, 0]), np.array([4.0, 0]), half) == pytest.approx((0.375, 0.625))
    assert clip_to_box(np.array([0.0, 0]), np.array([0.0, 4.0]), half) == pytest.approx((0, 0.5))
    assert clip_to_box(np.array([3.0, 0]), np.array([3.0, 4.0]), half) is None


@pytest.mark.parametrize("seed", range(3))
def test_gaps_to_many_lines_agree_with_shapely(seed: int) -> None:
    import shapely

    draw = np.random.default_rng(seed)
    points, starts, ends = draw.random((700, 2)), draw.random((300, 2)), draw.random((300, 2))
    lines = shapely.MultiLineString([(a, b) for a, b in zip(starts, ends, strict=True)])
    assert nearest_gap(points, starts, ends) == pytest.approx(shapely.distance(shapely.points(points), lines))


@pytest.mark.parametrize(("seed", "count"), [(0, 1), (1, 40), (2, 900)])
def test_overlapping_pairs_are_those_found_one_by_one(seed: int, count: int) -> None:
    draw = np.random.default_rng(seed)
    low = draw.random((count, 2))
    high = low + draw.random((count, 2)) * 0.05
    found = [(i, k) for ones, others in overlapping_pairs(low, high) for i, k in zip(ones, others, strict=True)]
    wanted = {
        (i, k)
        for i in range(count)
        for k in range(i + 1, count)
        if (low[i] <= high[k]).all() and (low[k] <= high[i]).all()
    }
    assert len(found) == len(set(found))
    assert set(found) == wanted
