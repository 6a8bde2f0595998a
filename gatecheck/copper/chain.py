"""The current path of one edge through the board: copper of nets and bodies of parts, and its way back."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np

from gatecheck.catalogue.load import pin_is
from gatecheck.copper.path import Copper, CopperWay, NoWay
from gatecheck.networks.elements import is_shunt

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from gatecheck.copper.path import Point
    from gatecheck.design.model import Pad
    from gatecheck.networks.circuit import Circuit
    from gatecheck.networks.model import Drive, GateNetwork

_Pads = tuple["Pad", ...]


@dataclass(frozen=True, slots=True)
class Leg:
    """One stretch of the way: along a net's copper, or through the body of a part from pad to pad."""

    what: str  # the net's name, or the part's id
    body: bool
    points: tuple[Point, ...]
    length_m: tuple[float, float]
    vias: int = 0


@dataclass(frozen=True, slots=True)
class Chain:
    """Legs in the order of current."""

    legs: tuple[Leg, ...]

    def copper_m(self) -> tuple[float, float]:
        """Length from edge to edge: copper as it runs, bodies straight."""
        return sum(leg.length_m[0] for leg in self.legs), sum(leg.length_m[1] for leg in self.legs)

    def points(self) -> list[Point]:
        """The whole way as one line, pad centres included."""
        return [point for leg in self.legs for point in leg.points]

    def vias(self) -> int:
        """Vias on the way."""
        return sum(leg.vias for leg in self.legs)


class Chains:
    """Follows the ways of gate networks over a board's copper."""

    def __init__(self, copper: Copper, circuit: Circuit) -> None:
        self.copper, self.circuit = copper, circuit

    def pads(self, part: str, net: str) -> _Pads:
        """A part's pads on a net."""
        pins = self.circuit.design.parts[part].pins
        return tuple(pad for pin in pins if pin.net == net for pad in pin.pads)

    def forward(self, network: GateNetwork, edge: str, *, after: str | None = None) -> Chain | NoWay:
        """From the driver's pin to the gate; with `after`, only what follows that part."""
        drive = next((d for d in network.drives if d.edge in (edge, "both")), None)
        steps = {step.part: step for step in network.edge(edge).steps}
        way = next((way for way in network.edge(edge).ways if set(way) <= steps.keys()), ())
        if drive is None:
            return NoWay(f"nothing drives the {edge} edge")
        stops: list[tuple[str, _Pads, _Pads]] = [("", (), tuple(pad for pin in drive.pins for pad in pin.pads))]
        nets = [drive.net]
        for part in way:
            stops.append((part, self.pads(part, steps[part].near), self.pads(part, steps[part].far)))
            nets += [steps[part].near, steps[part].far]
        gate = network.transistor
        stops.append(("", tuple(pad for pin in gate.gate for pad in pin.pads), ()))
        nets.append(gate.gate_net)
        if after is not None:
            at = next((i for i, stop in enumerate(stops) if stop[0] == after), 0)
            stops, nets = [("", (), stops[at][2]), *stops[at + 1 :]], nets[2 * at :]
        return self._chained(stops, nets)

    def back(self, network: GateNetwork, drive: Drive) -> Chain | NoWay:
        """From the source, or the Kelvin source, to the driver's reference pin."""
        transistor = network.transistor
        start_net = transistor.kelvin_net or transistor.source_net
        pins = transistor.kelvin or transistor.source
        reference = self.reference(network, drive)
        if reference is None:
            return NoWay("no pin of the driver is on the source's net")
        net, goal = reference
        start = tuple(pad for pin in pins if pin.net == start_net for pad in pin.pads)
        return self._chained([("", (), start), ("", goal, ())], [start_net, net])

    def reference(self, network: GateNetwork, drive: Drive) -> tuple[str, _Pads] | None:
        """The driver's reference: net and pads of its pins at the source, or across a shunt or net tie."""
        transistor = network.transistor
        own = transistor.kelvin_net or transistor.source_net
        near = self.circuit.tied(own) | self.circuit.tied(transistor.source_net)
        pins = [pin for pin in self.circuit.design.parts[drive.part].pins if pin.net in near and pin.pads]
        pins.sort(key=lambda pin: (pin.net != own, not pin_is("reference", pin.function), pin.net, pin.number))
        if not pins:
            return None
        return pins[0].net, tuple(pad for pin in pins if pin.net == pins[0].net for pad in pin.pads)

    def _chained(self, stops: Sequence[tuple[str, _Pads, _Pads]], nets: Sequence[str]) -> Chain | NoWay:
        """Legs through the stops (part, pads towards the driver, pads towards the gate); `nets` as they follow."""
        legs: list[Leg] = []
        for i, (before, stop) in enumerate(pairwise(stops)):
            found = self._between(nets[2 * i], before[2], nets[2 * i + 1], stop[1])
            if isinstance(found, NoWay):
                return found
            legs += found
            if stop[0]:
                legs.append(_body(stop[0], stop[1], stop[2]))
        return Chain(tuple(legs))

    def _between(self, net: str, start: _Pads, other: str, goal: _Pads) -> list[Leg] | NoWay:
        """Copper from pads of one net to pads of the same or a tied one, over the ties between them."""
        if not start or not goal:
            return NoWay(f"a pin on {net} has no pad")
        if net == other:
            return self._leg(net, start, goal)
        for element in self.circuit.elements(net):
            if not is_shunt(element) or not element.fitted:
                continue
            far = element.other(net)
            if far != other and not any(e.other(far) == other for e in self.circuit.elements(far) if is_shunt(e)):
                continue
            here, there = self.pads(element.part, net), self.pads(element.part, far)
            first = self._leg(net, start, here)
            rest = self._leg(far, there, goal) if far == other else self._between(far, there, other, goal)
            if not isinstance(first, NoWay) and not isinstance(rest, NoWay):
                return [*first, _body(element.part, here, there), *rest]
        return NoWay(f"{net} and {other} are not tied on the board")

    def _leg(self, net: str, start: _Pads, goal: _Pads) -> list[Leg] | NoWay:
        way = self.copper.way(net, start, goal)
        return [Leg(net, False, way.points, way.length_m, way.vias)] if isinstance(way, CopperWay) else way


def _body(part: str, near: Iterable[Pad], far: Iterable[Pad]) -> Leg:
    """Through a part: straight between the nearest two of its pads."""
    pairs = [(a, b) for a in near for b in far]
    a, b = min(pairs, key=lambda pair: (np.hypot(pair[0].x_m - pair[1].x_m, pair[0].y_m - pair[1].y_m), pair[0].offset))
    length_m = float(np.hypot(a.x_m - b.x_m, a.y_m - b.y_m))
    return Leg(part, True, ((a.x_m, a.y_m, ""), (b.x_m, b.y_m, "")), (length_m, length_m))
