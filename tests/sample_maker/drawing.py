"""A sheet of a schematic as data: where symbols stand, and the wires and names between them, in grid steps.

Symbols read `ref place [angle [mirror]]`, with `ref:unit` for parts of several units, wires `point point ...`,
labels `kind:text point [angle]`, power symbols `name point [angle]` and sheets `name place size pin ...`. A point is
`x,y`, or `x,` and `,y` for one that keeps the other coordinate, or a pin `ref.number`.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from itertools import pairwise
from typing import TYPE_CHECKING

from .glyphs import Glyph, Grid, units
from .symbols import Pin, Symbol

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping

# Turned counter-clockwise on screen, y from up to down: (x, y) -> factors of x and y in the new x, then in the new y.
_TURNS = {0: (1, 0, 0, -1), 90: (0, -1, -1, 0), 180: (-1, 0, 0, 1), 270: (0, 1, 1, 0)}
# So many wire ends and pins at one point are drawn with a dot: the trade's custom.
MEETING = 3


class DrawingFault(ValueError):  # noqa: N818 - a fault is what it reports
    """The sheet cannot be drawn as its data says."""


@dataclass(frozen=True, slots=True)
class Drawing:
    """One sheet. `ports` are labels that are hierarchical where the sheet stands below another."""

    paper: str
    symbols: tuple[str, ...]
    wires: tuple[str, ...]
    labels: tuple[str, ...] = ()
    power: tuple[str, ...] = ()
    ports: tuple[str, ...] = ()
    sheets: tuple[str, ...] = ()
    notes: tuple[tuple[str, str], ...] = field(default=())

    def plus(self, other: Drawing) -> Drawing:
        """Both drawings on one sheet."""
        both = {name: getattr(self, name) + getattr(other, name) for name in _LISTS}
        return replace(self, **both)

    def without(self, *refs: str) -> Drawing:
        """The same sheet with some symbols taken out."""
        return replace(self, symbols=tuple(text for text in self.symbols if text.split()[0] not in refs))

    def rewired(self, away: tuple[str, ...], instead: tuple[str, ...]) -> Drawing:
        """The same sheet with some wires exchanged for others.

        Raises:
            ValueError: a wire to take away is not there.
        """
        if missing := set(away) - set(self.wires):
            raise ValueError(f"no such wires: {sorted(missing)}")
        return replace(self, wires=(*(wire for wire in self.wires if wire not in away), *instead))


_LISTS = ("symbols", "wires", "labels", "power", "ports", "sheets", "notes")


@dataclass(frozen=True, slots=True)
class Placed:
    """One symbol on the sheet: `name` is the reference as drawn, or the net of a power symbol."""

    name: str
    symbol: Symbol
    unit: int
    at: Grid
    angle_deg: int
    mirror: str

    @property
    def glyph(self) -> Glyph:
        """The drawing of its unit."""
        return units(self.symbol)[self.unit - 1]

    @property
    def pins(self) -> dict[str, Grid]:
        """Number -> the point that connects."""
        return {pin.number: self._whole(pin.at) for pin in self.glyph.pins}

    @property
    def body(self) -> tuple[float, float, float, float]:
        """Left, top, right, bottom of the body on the sheet."""
        left, bottom, right, top = self.glyph.body
        (x1, y1), (x2, y2) = self.point(left, bottom), self.point(right, top)
        return min(x1, x2), min(y1, y2), max(x1, x2), max(y1, y2)

    def point(self, x: float, y: float) -> tuple[float, float]:
        """A point of the symbol on the sheet: turned first, then mirrored."""
        xx, xy, yx, yy = _TURNS[self.angle_deg]
        dx, dy = x * xx + y * xy, x * yx + y * yy
        return (
            self.at[0] + (-dx if self.mirror == "y" else dx),
            self.at[1] + (-dy if self.mirror == "x" else dy),
        )

    def _whole(self, point: Grid) -> Grid:
        x, y = self.point(*point)
        return int(x), int(y)


@dataclass(frozen=True, slots=True)
class Label:
    """A name on the sheet; `kind` is the token of the file format."""

    kind: str
    text: str
    at: Grid
    angle_deg: int
    shape: str = ""


@dataclass(frozen=True, slots=True)
class SheetBox:
    """A sheet drawn as a box; its pins as name, shape and place. A blank of its title is a `_` in its name."""

    name: str
    at: Grid
    size: Grid
    pins: tuple[tuple[str, str, Grid], ...]

    @property
    def title(self) -> str:
        """The sheet's name."""
        return self.name.replace("_", " ")


def power_symbol(net: str) -> Symbol:
    """The symbol of a supply net, or the flag that tells a checker of the drawing where a supply comes from."""
    if net == "PWR_FLAG":
        return Symbol(net, "Marks a net as supplied", (Pin("1", "", "power_out"),))
    return Symbol(net, f"Power symbol, net {net}", (Pin("1", "", "power_in"),))


class Layout:
    """A drawing with all its points worked out; `used` holds the symbol of every reference."""

    def __init__(self, drawing: Drawing, used: Mapping[str, Symbol], *, below_another: bool) -> None:
        self.boxes = [_sheet_box(text) for text in drawing.sheets]
        self.parts = [_placed(text, used) for text in drawing.symbols]
        self._pins = {f"{part.name}.{number}": at for part in self.parts for number, at in part.pins.items()}
        self._pins |= {f"{box.name}.{name}": at for box in self.boxes for name, _, at in box.pins}
        self.power = [self._power(text) for text in drawing.power]
        self.labels = [self._label(text) for text in drawing.labels]
        self.labels += [self._port(text, below_another=below_another) for text in drawing.ports]
        lines = [line for text in drawing.wires for line in self._lines(text)]
        self.pin_points = [*self._pins.values(), *(symbol.at for symbol in self.power)]
        self.wires = _split(lines)
        _check_bodies([*self.parts, *self.power], self.wires)

    @property
    def junctions(self) -> list[Grid]:
        """Where three or more wire ends and pins meet."""
        ends = [end for wire in self.wires for end in wire]
        meeting = [*ends, *self.pin_points]
        return sorted(point for point in {*ends} if meeting.count(point) >= MEETING)

    def _point(self, text: str, before: Grid | None = None) -> Grid:
        if text in self._pins:
            return self._pins[text]
        x, comma, y = text.partition(",")
        if not comma or not (before or (x and y)):
            raise DrawingFault(f"no such point: {text}")
        last = before or (0, 0)
        return int(x) if x else last[0], int(y) if y else last[1]

    def _lines(self, text: str) -> Iterator[tuple[Grid, Grid]]:
        before = None
        for word in text.split():
            point = self._point(word, before)
            if before and (before == point or (before[0] != point[0] and before[1] != point[1])):
                raise DrawingFault(f"{text}: {word} is not straight ahead of {before}")
            if before:
                yield before, point
            before = point

    def _power(self, text: str) -> Placed:
        name, at, *angle = text.split()
        return Placed(name, power_symbol(name), 1, self._point(at), int(angle[0]) if angle else 0, "")

    def _label(self, text: str) -> Label:
        name, at, *angle = text.split()
        kind, colon, rest = name.rpartition(":")
        kind = {"": "label", "global": "global_label"}[kind] if colon else "label"
        return Label(kind, rest, self._point(at), int(angle[0]) if angle else 0, "" if kind == "label" else "input")

    def _port(self, text: str, *, below_another: bool) -> Label:
        name, shape, at, angle = text.split()
        if below_another:
            return Label("hierarchical_label", name, self._point(at), int(angle), shape)
        return Label("label", name, self._point(at), 0)


def _placed(text: str, used: Mapping[str, Symbol]) -> Placed:
    name, at, *rest = text.split()
    ref, _, unit = name.partition(":")
    x, y = at.split(",")
    angle, mirror = [*rest, *["0", ""][len(rest) :]]
    return Placed(ref, used[ref], int(unit or 1), (int(x), int(y)), int(angle), mirror)


def _sheet_box(text: str) -> SheetBox:
    """Pins read `name:shape:side:height below the upper edge`."""
    name, at, size, *pins = text.split()
    (x, y), (width, height) = (tuple(map(int, pair.split(","))) for pair in (at, size))
    places = []
    for pin in pins:
        label, shape, side, down = pin.split(":")
        places.append((label, shape, (x if side == "left" else x + width, y + int(down))))
    return SheetBox(name, (x, y), (width, height), tuple(places))


def _inside(point: Grid, line: tuple[Grid, Grid]) -> bool:
    (x1, y1), (x2, y2) = sorted(line)
    x, y = point
    return (x1 == x == x2 and y1 < y < y2) or (y1 == y == y2 and x1 < x < x2)


def _split(lines: list[tuple[Grid, Grid]]) -> list[tuple[Grid, Grid]]:
    """Wires end wherever another one ends on them, as an editor of schematics keeps them."""
    ends = {end for line in lines for end in line}
    pieces = []
    for line in lines:
        stops = sorted({*line, *(end for end in ends if _inside(end, line))}, reverse=line[0] > line[1])
        pieces += list(pairwise(stops))
    if len({frozenset(piece) for piece in pieces}) < len(pieces):
        raise DrawingFault("two wires lie on each other")
    return pieces


def _check_bodies(symbols: list[Placed], wires: list[tuple[Grid, Grid]]) -> None:
    """No body on another one, no wire through one."""
    boxes = [(symbol.name, symbol.body) for symbol in symbols]
    boxes += [(f"wire {wire}", (*map(min, *wire), *map(max, *wire))) for wire in wires]  # type: ignore[misc]
    for i in range(len(symbols)):
        name, (left, top, right, bottom) = boxes[i]
        for other, (x1, y1, x2, y2) in boxes[i + 1 :]:
            if left < x2 and x1 < right and top < y2 and y1 < bottom:
                raise DrawingFault(f"{other} runs into {name}")
