"""The copper of a design as shapes, with shapely."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from shapely import LineString, Point, Polygon, box
from shapely.affinity import rotate

if TYPE_CHECKING:
    from .circuit import Circuit, Part, Track, Via
    from .footprints import Pad
    from .footprints import Point as Place

COPPER_LAYERS = ("F.Cu", "B.Cu")


@dataclass(frozen=True, slots=True)
class Piece:
    """One piece of copper; `what` names it in messages."""

    what: str
    net: str
    layers: frozenset[str]
    shape: Any


def pad_shape(part: Part, pad: Pad) -> Any:
    """The copper of a pad in board coordinates."""
    x, y = part.place_mm(pad.at_mm)
    w, h = pad.size_mm
    if pad.shape == "circle":
        return Point(x, y).buffer(w / 2, quad_segs=16)
    radius = {"rect": 0.0, "roundrect": pad.corner_share * min(w, h), "oval": min(w, h) / 2}[pad.shape]
    inner = box(x - w / 2 + radius, y - h / 2 + radius, x + w / 2 - radius, y + h / 2 - radius)
    # shapely's axes point up, so its positive turn is clockwise on a board whose y points down
    return rotate(inner.buffer(radius, quad_segs=8), -part.angle_deg, origin=(x, y))


def track_shape(track: Track) -> Any:
    """The copper of a track with its round ends."""
    points = [track.start_mm, track.end_mm]
    if track.middle_mm:
        points = arc_points(track.start_mm, track.middle_mm, track.end_mm)
    return LineString(points).buffer(track.width_mm / 2, quad_segs=8)


def via_shape(via: Via) -> Any:
    """The copper disc of a via."""
    return Point(via.at_mm).buffer(via.size_mm / 2, quad_segs=16)


def arc_points(start: Place, middle: Place, end: Place, steps: int = 24) -> list[Place]:
    """Points along the arc through three places."""
    (ax, ay), (bx, by), (cx, cy) = start, middle, end
    d = 2 * (ax * (by - cy) + bx * (cy - ay) + cx * (ay - by))
    a2, b2, c2 = ax * ax + ay * ay, bx * bx + by * by, cx * cx + cy * cy
    ux = (a2 * (by - cy) + b2 * (cy - ay) + c2 * (ay - by)) / d
    uy = (a2 * (cx - bx) + b2 * (ax - cx) + c2 * (bx - ax)) / d
    first, via, last = (math.atan2(y - uy, x - ux) for x, y in (start, middle, end))
    turn = (last - first) % math.tau
    if (via - first) % math.tau > turn:
        turn -= math.tau
    radius = math.hypot(ax - ux, ay - uy)
    angles = [first + turn * i / steps for i in range(steps + 1)]
    return [(ux + radius * math.cos(a), uy + radius * math.sin(a)) for a in angles]


def pad_layers(pad: Pad) -> frozenset[str]:
    """The copper layers a pad is on."""
    if pad.drill_mm:
        return frozenset(COPPER_LAYERS) if pad.number else frozenset()
    return frozenset(layer for layer in pad.layers if layer in COPPER_LAYERS)


def outline_shape(circuit: Circuit) -> Any:
    """The board's outline, corners taken as square."""
    (x, y), (w, h) = circuit.origin_mm, circuit.size_mm
    return box(x, y, x + w, y + h)


def pieces(circuit: Circuit, tracks: list[Track], vias: list[Via]) -> list[Piece]:
    """Pads, tracks and vias; pours come later because they depend on these."""
    found: list[Piece] = []
    for part in circuit.parts:
        for pad in part.footprint.pads:
            if pad.number and (layers := pad_layers(pad)):
                net = circuit.net_names[part.ref, pad.number]
                found.append(Piece(f"pad {part.ref}.{pad.number}", net, layers, pad_shape(part, pad)))
    found += [Piece(f"track at {t.start_mm}", t.net, frozenset([t.layer]), track_shape(t)) for t in tracks]
    found += [Piece(f"via at {v.at_mm}", v.net, frozenset(COPPER_LAYERS), via_shape(v)) for v in vias]
    return found


def bare_holes(circuit: Circuit) -> list[Any]:
    """Holes without copper."""
    return [
        pad_shape(part, pad) for part in circuit.parts for pad in part.footprint.pads if pad.drill_mm and not pad.number
    ]


def polygons(shape: Any) -> list[Polygon]:
    """The polygons a shape is made of."""
    parts = getattr(shape, "geoms", [shape])
    return [part for part in parts if isinstance(part, Polygon) and not part.is_empty]
