"""Fills the copper pours: outline minus clearances, thermal spokes, holes joined to the rim by a slit."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from shapely import LineString, Polygon, make_valid
from shapely.ops import unary_union

from .copper import Piece, bare_holes, outline_shape, polygons

if TYPE_CHECKING:
    from .circuit import Circuit, Zone
    from .footprints import Point

# Our choice: ordinary values for two layers of 35 um copper at tens of volts.
CLEARANCE_MM = 0.3
EDGE_CLEARANCE_MM = 0.5
MIN_THICKNESS_MM = 0.25
THERMAL_GAP_MM = 0.4
SPOKE_MM = 1.0
# Polygons stand inside the circles they approximate, and points that hardly bend a rim are dropped;
# this much more keeps the stated clearance everywhere.
_FLATTENING_MM = 0.003
_ROUNDING_MM = 0.006 + _FLATTENING_MM
# Our choice: cut-off copper smaller than this is not worth keeping.
ISLAND_AREA_MM2 = 5.0


@dataclass(frozen=True, slots=True)
class Fill:
    """One filled piece of a zone: its ring with slits, and the same copper as a shape."""

    zone: Zone
    ring_mm: tuple[Point, ...]
    shape: Any
    island: bool


def fill_zones(circuit: Circuit, found: list[Piece]) -> list[Fill]:
    """All filled pieces, zone by zone; higher priorities are poured first."""
    done: list[Fill] = []
    for zone in sorted(circuit.zones, key=lambda z: -z.priority):
        done += _fill(circuit, zone, found, done)
    return sorted(done, key=lambda fill: circuit.zones.index(fill.zone))


def ring_shape(ring: tuple[Point, ...]) -> Any:
    """The copper a slit ring stands for."""
    return unary_union(polygons(make_valid(Polygon(ring))))


def _fill(circuit: Circuit, zone: Zone, found: list[Piece], done: list[Fill]) -> list[Fill]:
    here = [piece for piece in found if zone.layer in piece.layers]
    own = [piece for piece in here if piece.net == zone.net]
    others = [piece.shape for piece in here if piece.net != zone.net]
    others += [fill.shape for fill in done if fill.zone.layer == zone.layer and fill.zone.net != zone.net]
    others += bare_holes(circuit)
    gap = CLEARANCE_MM + _ROUNDING_MM
    blocked = unary_union([shape.buffer(gap, quad_segs=8) for shape in others])
    inside = Polygon(zone.outline_mm).intersection(outline_shape(circuit).buffer(-EDGE_CLEARANCE_MM))
    poured = _opened(inside.difference(blocked))
    if zone.thermal:
        pads = [piece.shape for piece in own if piece.what.startswith("pad")]
        poured = _with_spokes(poured, pads, inside.difference(blocked))
    fills = [_as_fill(zone, polygon, own) for polygon in _in_order(poured.simplify(_FLATTENING_MM))]
    return [fill for fill in fills if not fill.island or _is_kept(fill)]


def _is_kept(fill: Fill) -> bool:
    return fill.zone.keeps_islands and fill.shape.area > ISLAND_AREA_MM2


def _opened(shape: Any) -> Any:
    """Without the parts thinner than the minimum thickness."""
    half = MIN_THICKNESS_MM / 2
    return shape.buffer(-half, quad_segs=8).buffer(half, quad_segs=8).intersection(shape)


def _with_spokes(poured: Any, pads: list[Any], allowed: Any) -> Any:
    """A spared ring around each pad, crossed by four spokes where there is copper to reach."""
    rings = unary_union([pad.buffer(THERMAL_GAP_MM + _ROUNDING_MM, quad_segs=8) for pad in pads])
    cut = _opened(poured.difference(rings))
    spokes = []
    for pad in pads:
        left, top, right, bottom = pad.bounds
        x, y = (left + right) / 2, (top + bottom) / 2
        reach = THERMAL_GAP_MM + MIN_THICKNESS_MM
        width = min(SPOKE_MM, right - left, bottom - top)
        for tip in ((left - reach, y), (right + reach, y), (x, top - reach), (x, bottom + reach)):
            spoke = LineString([(x, y), tip]).buffer(width / 2, cap_style="flat")
            if allowed.covers(spoke) and spoke.intersection(cut).area > 0:
                spokes.append(spoke)
    return unary_union([cut, *spokes])


def _in_order(shape: Any) -> list[Polygon]:
    return sorted(polygons(shape), key=lambda polygon: polygon.bounds)


def _as_fill(zone: Zone, polygon: Polygon, own: list[Piece]) -> Fill:
    ring = slit_ring(polygon)
    shape = ring_shape(ring)
    return Fill(zone, ring, shape, island=not any(piece.shape.intersects(shape) for piece in own))


def slit_ring(polygon: Polygon) -> tuple[Point, ...]:
    """One closed way around a polygon with holes: each hole is reached over a slit of no width.

    Holes are taken from left to right, so the first copper edge to the left of a hole belongs to the
    rim or to a hole that is already part of the way.
    """
    ring = _corners(polygon.exterior)
    holes = sorted((_from_left(_corners(hole)) for hole in polygon.interiors), key=lambda hole: hole[0])
    for hole in holes:
        index, point = _edge_to_the_left(ring, hole[0])
        ring = [*ring[: index + 1], point, *hole, hole[0], point, *ring[index + 1 :]]
    return tuple(ring)


def _corners(ring: Any) -> list[Point]:
    rounded = [(round(x, 6), round(y, 6)) for x, y in ring.coords[:-1]]
    return [point for i, point in enumerate(rounded) if point != rounded[i - 1]]


def _from_left(hole: list[Point]) -> list[Point]:
    first = hole.index(min(hole))
    return hole[first:] + hole[:first]


def _edge_to_the_left(ring: list[Point], at: Point) -> tuple[int, Point]:
    """The nearest edge that a ray from `at` to the left meets: index of its start, and where."""
    x, y = at
    best: tuple[float, int] | None = None
    for i, (x1, y1) in enumerate(ring):
        x2, y2 = ring[(i + 1) % len(ring)]
        if (y1 <= y) == (y2 <= y):
            continue
        crossing = x1 + (x2 - x1) * (y - y1) / (y2 - y1)
        if crossing < x and (best is None or crossing > best[0]):
            best = (crossing, i)
    if best is None:
        raise ValueError(f"nothing to the left of the hole at {at}")
    return best[1], (round(best[0], 6), y)
