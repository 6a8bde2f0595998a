"""From a gate outwards to what drives it, and the conducting ways of each edge.

1. Reach: from the gate net through resistors, beads, inductors, diodes, links and net ties, stopping at
   rails, the transistor's own source and drain, and at nets that something strong drives.
2. Choose: of all pins reached, the strongest rank drives the gate; a test header beside a driver does not.
3. Ways: all simple ways between driver and gate. Current of the on edge runs from driver to gate, of the off
   edge from gate to driver; a diode lets only one of them through. A part covers an edge if every conducting
   way of that edge passes it.
"""

from __future__ import annotations

from collections import deque
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, NamedTuple

from gatecheck.catalogue.load import pin_is
from gatecheck.networks.kinds import Sort
from gatecheck.networks.model import OFF, ON, Drive, EdgePaths, Step
from gatecheck.networks.ports import (
    CHIP_PIN,
    CONNECTOR,
    NO_DRIVE,
    OUTPUT,
    PUSH_PULL,
    SINGLE_PULL,
    Port,
    best_rank,
    ports,
)

if TYPE_CHECKING:
    from collections.abc import Iterable

    from gatecheck.design.model import Pin
    from gatecheck.networks.circuit import Circuit, Element
    from gatecheck.networks.terminals import Transistor

_SERIES = (Sort.RESISTOR, Sort.BEAD, Sort.INDUCTOR, Sort.DIODE, Sort.NET_TIE, Sort.FUSE)
# A gate resistor of a switch; common practice ends at some hundred ohm.
_SERIES_OHM = 1000.0
# Second try, for gates that are only fed slowly. Our choice.
_FEED_OHM = 10e6
# Our choice: longer chains or more ways than any gate drive has; bounds the search on hostile input.
_MAX_NETS, _MAX_HOPS, _MAX_WAYS = 60, 10, 200


class _Hop(NamedTuple):
    """One element of a way, with the nets at its inner (gate) and outer (driver) end."""

    element: Element
    inner: str
    outer: str

    def conducts(self, edge: str) -> bool:
        """A fitted part that lets the current of this edge through."""
        anode = self.outer if edge == ON else self.inner
        return self.element.fitted and (not self.element.one_way or self.element.a == anode)


_Way = tuple[_Hop, ...]  # from gate to driver


@dataclass(frozen=True, slots=True)
class Walk:
    """What a gate is driven by and over which ways; `nets` are all nets of the ways, both ends included."""

    drives: tuple[Drive, ...]
    rank: float
    on: EdgePaths
    off: EdgePaths
    nets: frozenset[str]
    open_parts: tuple[str, ...]
    feed_only: bool  # found only through resistors too large for a switch's gate


@dataclass(slots=True)
class _Reached:
    """Nets in reach of the gate and the ports on them."""

    nets: dict[str, list[Port]] = field(default_factory=dict)
    leaves: set[str] = field(default_factory=set)  # nets not passed through


def walk(circuit: Circuit, transistor: Transistor, gate_nets: frozenset[str]) -> Walk:
    """Find what drives a transistor's gate. `gate_nets` are the gate nets of all transistors."""
    barred = frozenset(
        {transistor.drain_net, transistor.kelvin_net, transistor.source_net}
        | circuit.tied(transistor.source_net)
        | circuit.tied(transistor.kelvin_net)
    ) - {transistor.gate_net, ""}
    for limit_ohm in (_SERIES_OHM, _FEED_OHM):
        reached = _reach(circuit, transistor, gate_nets, barred, limit_ohm)
        chosen = _choose(circuit, transistor, reached)
        if chosen:
            break
    drives = _drives(circuit, chosen)
    ways = {drive.net: _ways(circuit, transistor.gate_net, drive.net, reached, limit_ohm) for drive in drives}
    on, off = (_edge(edge, drives, ways) for edge in (ON, OFF))
    nets = {transistor.gate_net} | {drive.net for drive in drives}
    nets |= {net for edge in (on, off) for step in edge.steps for net in (step.near, step.far)}
    unfitted = {hop.element.part for found in ways.values() for way in found for hop in way if not hop.element.fitted}
    blocked = [edge for edge in (on, off) if not edge.conducts]
    open_parts = sorted(unfitted & {part for edge in blocked for part in edge.parts})
    return Walk(
        drives,
        best_rank(chosen),
        on,
        off,
        frozenset(nets),
        tuple(open_parts),
        limit_ohm == _FEED_OHM and bool(drives),
    )


def _reach(
    circuit: Circuit,
    transistor: Transistor,
    gate_nets: frozenset[str],
    barred: frozenset[str],
    limit_ohm: float,
) -> _Reached:
    start = transistor.gate_net
    reached, edge = _Reached(), [start]
    reached.nets[start] = ports(circuit, start, transistor.key)
    while edge and len(reached.nets) < _MAX_NETS:
        here = edge.pop(0)
        for element in circuit.elements(here):
            net = element.other(here)
            if net in reached.nets or net in barred or not _passes(element, limit_ohm) or circuit.is_rail(net):
                continue
            reached.nets[net] = ports(circuit, net, transistor.key)
            if net in gate_nets or best_rank(reached.nets[net]) >= CHIP_PIN:
                reached.leaves.add(net)
            else:
                edge.append(net)
    return reached


def _passes(element: Element, limit_ohm: float) -> bool:
    return element.sort in _SERIES and (element.ohm is None or element.ohm <= limit_ohm)


def _choose(circuit: Circuit, transistor: Transistor, reached: _Reached) -> list[Port]:
    """The ports that drive: all of the best rank, and both halves of a split output."""
    found = [(net, port) for net, here in reached.nets.items() for port in here]
    top = best_rank(port for _, port in found)
    if top == NO_DRIVE:
        return []
    best = [(net, port) for net, port in found if port.rank == top]
    if top == CHIP_PIN:
        # Nothing names the pins. One that also touches the source is the likely driver, and of one chip the
        # pin behind the resistor rather than the one straight on the gate, which will be a clamp or a sense.
        near = circuit.tied(transistor.source_net) | circuit.tied(transistor.kelvin_net)
        holding = [
            (net, port)
            for net, port in best
            if any(pin.net in near and not circuit.is_rail(pin.net) for pin in circuit.design.parts[port.pin.part].pins)
        ]
        best = holding or best
    if top <= CHIP_PIN:
        behind = [(net, port) for net, port in best if net != transistor.gate_net]
        best = behind or best
    if top == CONNECTOR and len({port.pin.part for _, port in best}) > 1:
        best = _largest(circuit, best)
    return [port for _, port in best]


def _largest(circuit: Circuit, best: list[tuple[str, Port]]) -> list[tuple[str, Port]]:
    """Of several connectors the one with most pins: test headers have one."""
    most = max(len(circuit.design.parts[port.pin.part].pins) for _, port in best)
    return [(net, port) for net, port in best if len(circuit.design.parts[port.pin.part].pins) == most]


def _drives(circuit: Circuit, chosen: list[Port]) -> tuple[Drive, ...]:
    """Ports of one part on one net are one drive."""
    grouped: dict[tuple[str, str], list[Port]] = {}
    for port in chosen:
        grouped.setdefault((port.pin.part, port.pin.net), []).append(port)
    split = len(grouped) > 1
    return tuple(
        Drive(part, tuple(port.pin for port in here), _edge_of(circuit, here[0], split))
        for (part, _), here in grouped.items()
    )


def _edge_of(circuit: Circuit, port: Port, split: bool) -> str:
    pin = port.pin
    if port.rank in (PUSH_PULL, SINGLE_PULL):
        return _pull_of(circuit, pin)
    if not split or port.rank < OUTPUT:
        return "both"
    if pin_is("split_on", pin.function):
        return ON
    return OFF if pin_is("split_off", pin.function) else "both"


def _pull_of(circuit: Circuit, pin: Pin) -> str:
    """A transistor pulls up if its other main terminal is at a supply, down if at a ground or the source."""
    others = [p.net for p in circuit.design.parts[pin.part].pins if p.net and p.net != pin.net]
    low = any("GND" in net.upper() or net.upper().endswith(("VSS", "VEE", "COM")) for net in others)
    high = any(circuit.is_rail(net) and "GND" not in net.upper() for net in others)
    return OFF if low or not high else ON


def _ways(circuit: Circuit, gate: str, driver: str, reached: _Reached, limit_ohm: float) -> list[_Way]:
    """All simple ways from the gate to a driver's net, within what was reached."""
    if gate == driver:
        return [()]
    found: list[_Way] = []
    # Shortest first, so that a bound that is hit cuts off the long ones.
    open_ways: deque[tuple[str, _Way, frozenset[str]]] = deque([(gate, (), frozenset({gate}))])
    while open_ways and len(found) < _MAX_WAYS:
        here, way, seen = open_ways.popleft()
        for element in circuit.elements(here):
            net = element.other(here)
            if net in seen or net not in reached.nets or not _passes(element, limit_ohm):
                continue
            hop = _Hop(element, here, net)
            if net == driver:
                found.append((*way, hop))
            elif net not in reached.leaves and len(way) < _MAX_HOPS and len(open_ways) < _MAX_WAYS:
                open_ways.append((net, (*way, hop), seen | {net}))
    return found


def _edge(edge: str, drives: Iterable[Drive], ways: dict[str, list[_Way]]) -> EdgePaths:
    nets = dict.fromkeys(drive.net for drive in drives if drive.edge in (edge, "both"))
    mine = [way for net in nets for way in ways[net]]
    conducting = [way for way in mine if all(hop.conducts(edge) for hop in way)]
    position: dict[str, int] = {}
    steps: dict[str, Step] = {}
    # Where nothing conducts, the ways are shown all the same, so that the report can name what is in the way.
    for way in _main(conducting or mine):
        for i, hop in enumerate(_hops(way)):
            part = hop.element.part
            position[part] = max(position.get(part, 0), i)
            steps.setdefault(part, Step(part, hop.element.sort, hop.outer, hop.inner))
    ordered = tuple(steps[part] for part in sorted(steps, key=lambda part: position[part]))
    passed = [frozenset(hop.element.part for hop in way) for way in conducting]
    all_ways = tuple(dict.fromkeys(tuple(hop.element.part for hop in _hops(way)) for way in conducting or mine))
    elements = tuple(
        dict.fromkeys(Step(h.element.part, h.element.sort, h.outer, h.inner) for way in conducting for h in way)
    )
    return EdgePaths(
        ordered, elements, all_ways, frozenset.intersection(*passed) if passed else frozenset(), bool(conducting)
    )


def _hops(way: _Way) -> list[_Hop]:
    """From driver to gate, without the net ties, which are copper and no parts."""
    return [hop for hop in reversed(way) if hop.element.sort is not Sort.NET_TIE]


def _main(ways: list[_Way]) -> list[_Way]:
    """The ways that carry most of an edge's current: a diode branch bypasses the branch beside it."""
    through_diode = [way for way in ways if any(hop.element.sort is Sort.DIODE for hop in way)]
    return through_diode or ways
