"""A circuit repeated on one board: one sheet of the schematic, shown several times under different names."""

from __future__ import annotations

import re
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from .sexpr_text import number_text

if TYPE_CHECKING:
    from collections.abc import Mapping

    from .circuit import Circuit, Part, Sheet, Zone
    from .footprints import Point

# Power symbols carry the same net on every sheet.
_EVERYWHERE = frozenset({"GND", "+12V", "+48V"})


@dataclass(frozen=True, slots=True)
class Channel:
    """One use of a circuit.

    `number` counts the references in hundreds (R1 becomes R101), `ports` says which nets of the board the nets
    of the sheet's pins are, and all other nets get the sheet's name in front.
    """

    sheet: Sheet
    number: int
    by_mm: Point
    ports: Mapping[str, str]

    def placed(self, circuit: Circuit) -> Circuit:
        """The circuit as it appears on the board, without outline and notes of its own."""
        return replace(
            circuit,
            parts=tuple(map(self._part, circuit.parts)),
            routes=tuple(map(self._route, circuit.routes)),
            stitches={self._net(net): tuple(map(self._point, at)) for net, at in circuit.stitches.items()},
            zones=tuple(map(self._zone, circuit.zones)),
            notes=(),
        )

    def _part(self, part: Part) -> Part:
        return replace(
            part,
            ref=self._reference(part.ref),
            drawn_as=part.ref,
            sheet=self.sheet,
            nets=tuple(net and self._net(net) for net in part.nets),
            at_mm=self._point(part.at_mm),
        )

    def _reference(self, ref: str) -> str:
        return re.sub(r"\d+", lambda digits: str(100 * self.number + int(digits[0])), ref)

    def _net(self, net: str) -> str:
        if net in _EVERYWHERE:
            return net
        if net.startswith("*"):
            return f"{net} {self.number}"
        return self.ports.get(net, f"/{self.sheet.name}{net}")

    def _point(self, point: Point) -> Point:
        return round(point[0] + self.by_mm[0], 6), round(point[1] + self.by_mm[1], 6)

    def _zone(self, zone: Zone) -> Zone:
        outline = tuple(map(self._point, zone.outline_mm))
        return replace(zone, name=f"{zone.name}_{self.number}", net=self._net(zone.net), outline_mm=outline)

    def _route(self, route: str) -> str:
        width, layer, *steps = route.split()
        return " ".join([width, layer, *map(self._step, steps)])

    def _step(self, step: str) -> str:
        if step[0].isalpha():
            ref, pad = step.split(".", 1)
            return f"{self._reference(ref)}.{pad}"
        if step == "@":
            return step
        numbers = zip(step.removeprefix("~").split(","), self.by_mm, strict=True)
        place = ",".join(number_text(float(number) + by) if number else "" for number, by in numbers)
        return f"~{place}" if step.startswith("~") else place
