"""Tracks as one line of text each, so that a board's copper reads like a list.

    0.5 F Q1.1 131.5, ,80 ~133.1,80.6 134,82 @ U1.3

Width in mm, layer (F or B), then the way: `Q1.1` is the middle of that pad, `x,y` a point, `x,` and `,y`
keep the other coordinate, `~x,y` is the middle of an arc to the next point, `@` a via to the other side.
A step that is neither straight nor diagonal goes straight first and ends in a diagonal.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from .circuit import Layer, Track, Via

if TYPE_CHECKING:
    from .circuit import Circuit
    from .footprints import Point

_LAYERS: dict[str, Layer] = {"F": "F.Cu", "B": "B.Cu"}


@dataclass
class _Pen:
    """Where a route has got to, and what it has drawn."""

    net: str
    layer: Layer
    width_mm: float
    at_mm: Point
    middle_mm: Point | None = None
    tracks: list[Track] = field(default_factory=list)
    vias: list[Via] = field(default_factory=list)

    def change_side(self) -> None:
        self.vias.append(Via(self.net, self.at_mm))
        self.layer = "B.Cu" if self.layer == "F.Cu" else "F.Cu"

    def go(self, target: Point) -> None:
        for point in [target] if self.middle_mm else _bent(self.at_mm, target):
            if point != self.at_mm:
                self.tracks.append(Track(self.net, self.layer, self.width_mm, self.at_mm, point, self.middle_mm))
            self.at_mm = point
        self.middle_mm = None


def copper(circuit: Circuit) -> tuple[list[Track], list[Via]]:
    """All tracks and vias of a design.

    Raises:
        ValueError: a route touches pads of two nets or none at all.
    """
    tracks: list[Track] = []
    vias = [Via(net, at, 0.8, 0.4) for net, places in circuit.stitches.items() for at in places]
    for route in circuit.routes:
        drawn = _draw(circuit, route)
        tracks += drawn.tracks
        vias += drawn.vias
    return tracks, vias


def _draw(circuit: Circuit, route: str) -> _Pen:
    width, layer, *steps = route.split()
    nets = {_pad(circuit, step)[1] for step in steps if _names_pad(step)}
    if len(nets) != 1:
        raise ValueError(f"route {route!r} belongs to nets {sorted(nets)}")
    pen = _Pen(nets.pop(), _LAYERS[layer], float(width), _point(circuit, steps[0], (0.0, 0.0)))
    for step in steps[1:]:
        if step == "@":
            pen.change_side()
        elif step.startswith("~"):
            pen.middle_mm = _point(circuit, step[1:], pen.at_mm)
        else:
            pen.go(_point(circuit, step, pen.at_mm))
    return pen


def _names_pad(step: str) -> bool:
    return step[0].isalpha()


def _point(circuit: Circuit, step: str, here: Point) -> Point:
    if _names_pad(step):
        return _pad(circuit, step)[0]
    x, y = step.split(",")
    return float(x) if x else here[0], float(y) if y else here[1]


def _pad(circuit: Circuit, step: str) -> tuple[Point, str]:
    """Centre and net of the pad; of several with one number, the first."""
    ref, number = step.split(".", 1)
    part = circuit.part(ref)
    pad = next(pad for pad in part.footprint.pads if pad.number == number)
    return part.place_mm(pad.at_mm), circuit.net_names[ref, number]


def _bent(start: Point, end: Point) -> list[Point]:
    dx, dy = end[0] - start[0], end[1] - start[1]
    short = min(abs(dx), abs(dy))
    if short < 1e-6 or abs(abs(dx) - abs(dy)) < 1e-6:
        return [end]
    if abs(dx) > abs(dy):
        corner = (end[0] - short * (1 if dx > 0 else -1), start[1])
    else:
        corner = (start[0], end[1] - short * (1 if dy > 0 else -1))
    return [(round(corner[0], 6), round(corner[1], 6)), end]
