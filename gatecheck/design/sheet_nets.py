"""What touches what on one sheet file, whatever path it is drawn on: wires, junctions, labels and buses.

Wires join at their ends only; a junction joins every wire through its point; a label joins every wire its anchor
lies on. Buses join among themselves and are no wires.
"""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from gatecheck.parse.buses import bus_members
from gatecheck.parse.fields import unescaped

if TYPE_CHECKING:
    from collections.abc import Hashable, Iterable, Mapping, Sequence

    from gatecheck.parse.schematic import Label, Line, Point, SheetFile


class Groups:
    """Disjoint sets of keys."""

    def __init__(self) -> None:
        self._above: dict[Hashable, Hashable] = {}

    def find(self, key: Hashable) -> Hashable:
        """The key that stands for the whole set."""
        above = self._above
        top = key
        while (next_up := above.get(top, top)) != top:
            top = next_up
        while (next_up := above.get(key, key)) != top:
            above[key] = top
            key = next_up
        return top

    def join(self, one: Hashable, other: Hashable) -> None:
        """Make two sets one."""
        one, other = self.find(one), self.find(other)
        if one != other:
            self._above[other] = one


@dataclass(slots=True)
class Bus:
    """One bus of a sheet: the labels on it, sheet pins among them (with their sheet symbol's number)."""

    labels: list[Label] = field(default_factory=list)
    sheet_pins: list[tuple[int, Label]] = field(default_factory=list)


@dataclass(slots=True)
class SheetNets:
    """The joints of one sheet file."""

    points: Groups
    labels: list[Label]
    sheet_pins: list[tuple[int, Label]]
    buses: list[Bus]


class _Lines:
    """Lines by where they may be met: upright and level ones by their one coordinate."""

    def __init__(self, lines: Iterable[Line]) -> None:
        self._level: dict[int, list[Line]] = defaultdict(list)
        self._upright: dict[int, list[Line]] = defaultdict(list)
        self._slanted: list[Line] = []
        for line in lines:
            (x0, y0), (x1, y1) = line
            if y0 == y1:
                self._level[y0].append(line)
            elif x0 == x1:
                self._upright[x0].append(line)
            else:
                self._slanted.append(line)

    def through(self, point: Point) -> list[Line]:
        """The lines a point lies on, ends included."""
        x, y = point
        found = [line for line in self._level.get(y, ()) if _between(line[0][0], x, line[1][0])]
        found += [line for line in self._upright.get(x, ()) if _between(line[0][1], y, line[1][1])]
        for line in self._slanted:
            (x0, y0), (x1, y1) = line
            if _between(x0, x, x1) and _between(y0, y, y1) and (x - x0) * (y1 - y0) == (y - y0) * (x1 - x0):
                found.append(line)
        return found


def _between(one: int, middle: int, other: int) -> bool:
    return one <= middle <= other or other <= middle <= one


def sheet_nets(file: SheetFile, aliases: Mapping[str, Sequence[str]]) -> SheetNets:
    """Join what touches on a sheet file. `aliases` are the bus aliases of the whole project."""
    points, wires = Groups(), _Lines(file.wires)
    for start, end in file.wires:
        points.join(start, end)
    for junction in file.junctions:
        for line in wires.through(junction):
            points.join(junction, line[0])
    found = SheetNets(points, [], [], [])
    buses = _Buses(file)
    for label in file.labels:
        if bus_members(unescaped(label.text), aliases) is not None:
            buses.at(label.at).labels.append(label)
            continue
        found.labels.append(label)
        for line in wires.through(label.at):
            points.join(label.at, line[0])
    for number, symbol in enumerate(file.sheets):
        for pin in symbol.pins:
            if bus_members(unescaped(pin.text), aliases) is not None:
                buses.at(pin.at).sheet_pins.append((number, pin))
            else:
                found.sheet_pins.append((number, pin))
    found.buses = list(buses.found.values())
    return found


class _Buses:
    """The buses of a sheet, found by a point on them."""

    def __init__(self, file: SheetFile) -> None:
        self._lines, self._points = _Lines(file.buses), Groups()
        self.found: dict[Hashable, Bus] = {}
        for start, end in file.buses:
            self._points.join(start, end)
        for point in file.junctions:
            self._join_at(point)
        for start, end in file.bus_entries:
            if self._lines.through(start) and self._lines.through(end):
                self._join_at(start)
                self._join_at(end)
                self._points.join(start, end)

    def _join_at(self, point: Point) -> None:
        for line in self._lines.through(point):
            self._points.join(point, line[0])

    def at(self, point: Point) -> Bus:
        """The bus through a point; a label in the open is one of its own."""
        self._join_at(point)
        return self.found.setdefault(self._points.find(point), Bus())
