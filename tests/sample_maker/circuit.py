"""A sample design as data: parts with their nets and places, and the copper between them."""

from __future__ import annotations

import math
import uuid
from collections import Counter
from dataclasses import dataclass, field, replace
from functools import cached_property
from typing import TYPE_CHECKING, Literal

from .footprints import FOOTPRINTS, Footprint, Pad, Point

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping

    from .symbols import Pin, Symbol

Layer = Literal["F.Cu", "B.Cu"]
Nets = tuple[str | None, ...]

# Any fixed value will do: it only makes the identifiers of the samples the same at every run.
_NAMESPACE = uuid.uuid5(uuid.NAMESPACE_URL, "urn:alder-weir:sample-boards")


@dataclass(frozen=True, slots=True)
class Sheet:
    """A sheet below the schematic's root; several may show the same file, each with its own name."""

    name: str
    file: str


def human_path(sheet: Sheet | None) -> str:
    """The sheet as people read it, between slashes; None is the root."""
    return f"/{sheet.name}/" if sheet else "/"


@dataclass(frozen=True, slots=True)
class Part:
    """One component. `nets` follow the symbol's pins; None leaves a pin open.

    A net that starts with `*` is named after its pins, as nets without a label are in board files.
    `drawn_as` is the reference in the sheet's file; a part without a sheet stands on the root.
    """

    ref: str
    symbol: Symbol
    value: str
    package: str
    nets: Nets
    at_mm: Point
    angle_deg: float = 0.0
    fields: tuple[tuple[str, str], ...] = ()
    description: str = ""
    fitted: bool = True
    sheet: Sheet | None = None
    drawn_as: str = ""

    @property
    def footprint(self) -> Footprint:
        """The land pattern."""
        return FOOTPRINTS[self.package]

    def place_mm(self, point: Point) -> Point:
        """A point of the footprint in board coordinates."""
        turn = math.radians(self.angle_deg)
        cos, sin = math.cos(turn), math.sin(turn)
        (x, y), (px, py) = self.at_mm, point
        return round(x + px * cos + py * sin, 6), round(y - px * sin + py * cos, 6)

    def pin_of(self, pad: Pad) -> Pin | None:
        """The symbol pin with the pad's number."""
        return next((pin for pin in self.symbol.pins if pin.number == pad.number), None)


@dataclass(frozen=True, slots=True)
class Track:
    """A straight track, or an arc if `middle_mm` is given."""

    net: str
    layer: Layer
    width_mm: float
    start_mm: Point
    end_mm: Point
    middle_mm: Point | None = None


@dataclass(frozen=True, slots=True)
class Via:
    """A through via."""

    net: str
    at_mm: Point
    size_mm: float = 0.7
    drill_mm: float = 0.35


@dataclass(frozen=True, slots=True)
class Zone:
    """A copper pour. `thermal` spares rings around the pads it joins; vias are always joined solidly."""

    name: str
    net: str
    layer: Layer
    outline_mm: tuple[Point, ...]
    priority: int = 0
    thermal: bool = False
    keeps_islands: bool = False


@dataclass(frozen=True)
class Circuit:
    """A whole board: parts, routes in the notation of `routes.py`, stitching vias, pours, outline.

    `base` names the board that a variant was made from: both come from one schematic and share identifiers.
    """

    name: str
    title: str
    origin_mm: Point
    size_mm: Point
    parts: tuple[Part, ...]
    routes: tuple[str, ...]
    stitches: Mapping[str, tuple[Point, ...]]
    zones: tuple[Zone, ...]
    notes: tuple[tuple[str, Point], ...] = field(default=())
    base: str = ""

    @property
    def root_file(self) -> str:
        """The file of the schematic's root sheet."""
        return f"{self.base or self.name}.kicad_sch"

    @property
    def sheets(self) -> list[Sheet]:
        """The sheets below the root, in the order of their parts."""
        return list(dict.fromkeys(part.sheet for part in self.parts if part.sheet))

    def variant(self, name: str) -> Circuit:
        """The same board under another name."""
        return replace(self, name=name, base=self.base or self.name)

    def part(self, ref: str) -> Part:
        """The part with that reference."""
        return next(part for part in self.parts if part.ref == ref)

    def moved(self, ref: str, by_mm: Point) -> Circuit:
        """The same board with one part shifted; routes that end on its pads follow it."""
        x, y = self.part(ref).at_mm
        place = (round(x + by_mm[0], 6), round(y + by_mm[1], 6))
        return self.changed(ref, at_mm=place)

    def changed(self, ref: str, **changes: object) -> Circuit:
        """The same board with some attributes of one part replaced."""
        parts = tuple(
            replace(part, **changes) if part.ref == ref else part  # type: ignore[arg-type]
            for part in self.parts
        )
        return replace(self, parts=parts)

    def without(self, ref: str) -> Circuit:
        """The same board with one part taken out, and the routes that start, end or pass there."""
        parts = tuple(part for part in self.parts if part.ref != ref)
        routes = tuple(route for route in self.routes if not any(word.startswith(f"{ref}.") for word in route.split()))
        return replace(self, parts=parts, routes=routes)

    def rerouted(self, away: tuple[str, ...], instead: tuple[str, ...]) -> Circuit:
        """The same board with some routes exchanged for others.

        Raises:
            ValueError: a route to take away is not there.
        """
        if missing := set(away) - set(self.routes):
            raise ValueError(f"no such routes: {sorted(missing)}")
        return replace(self, routes=(*(route for route in self.routes if route not in away), *instead))

    def joined(self, net: str, into: str) -> Circuit:
        """The same board with one net made part of another."""
        parts = (replace(part, nets=tuple(into if key == net else key for key in part.nets)) for part in self.parts)
        return replace(self, parts=tuple(parts))

    def identifier(self, *path: object) -> str:
        """A universally unique identifier that depends on the design and the path only."""
        return str(uuid.uuid5(_NAMESPACE, "/".join([self.base or self.name, *map(str, path)])))

    def sheet_path(self, sheet: Sheet | None) -> str:
        """The identifiers of the sheets down to this one, a slash around each."""
        return f"/{self.identifier('sheet', sheet.name)}/" if sheet else "/"

    def symbol_identifier(self, part: Part) -> str:
        """The symbol's identifier: parts drawn once on a sheet that is shown several times have the same."""
        return self.identifier("symbol", *([part.sheet.file, part.drawn_as] if part.sheet else [part.ref]))

    def net_of(self, part: Part, pin: Pin) -> str:
        """The final name of the net on a pin."""
        return self.net_names[part.ref, pin.number]

    @cached_property
    def net_names(self) -> dict[tuple[str, str], str]:
        """Every (reference, pin number) with the name of its net."""
        members: dict[str, list[tuple[Part, Pin]]] = {}
        names: dict[tuple[str, str], str] = {}
        for part, pin, key in self._pins():
            if key is None:
                names[part.ref, pin.number] = _open_pin_name(part, pin)
            else:
                members.setdefault(key, []).append((part, pin))
        for key, pins in members.items():
            name = _name_after_pins(pins) if key.startswith("*") else key
            names |= {(part.ref, pin.number): name for part, pin in pins}
        return names

    @cached_property
    def nets(self) -> list[str]:
        """All net names, sorted."""
        return sorted(set(self.net_names.values()))

    def _pins(self) -> Iterator[tuple[Part, Pin, str | None]]:
        for part in self.parts:
            for pin, key in zip(part.symbol.pins, part.nets, strict=True):
                yield part, pin, key


def _open_pin_name(part: Part, pin: Pin) -> str:
    name = f"{pin.name}-Pad{pin.number}" if pin.name and pin.name != pin.number else f"Pad{pin.number}"
    return f"unconnected-({part.ref}-{name})"


def _name_after_pins(pins: list[tuple[Part, Pin]]) -> str:
    """The alphabetically first pin, named pins before plain pads, as board files name such nets."""
    return min((_pin_label(part, pin) for part, pin in pins), key=lambda name: ("-Pad" in name, name))


def _pin_label(part: Part, pin: Pin) -> str:
    if not pin.name:
        return f"Net-({part.ref}-Pad{pin.number})"
    twice = Counter(other.name for other in part.symbol.pins)[pin.name] > 1
    return f"Net-({part.ref}-{pin.name}{f'-Pad{pin.number}' if twice else ''})"
