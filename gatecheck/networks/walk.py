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
from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING, NamedTuple

from gatecheck.networks.choose import choose, drives, local_turn_off
from gatecheck.networks.kinds import Sort
from gatecheck.networks.model import OFF, ON, Drive, EdgePaths, Step
from gatecheck.networks.ports import OUTPUT, SINGLE_PULL, Port, best_rank, ports

if TYPE_CHECKING:
    from collections.abc import Iterable

    from gatecheck.networks.circuit import Circuit
    from gatecheck.networks.elements import Element
    from gatecheck.networks.terminals import Transistor

_SERIES = (Sort.RESISTOR, Sort.BEAD, Sort.INDUCTOR, Sort.DIODE, Sort.NET_TIE, Sort.JUMPER, Sort.FUSE)
# A gate resistor of a switch; common practice ends at some hundred ohm.
_SERIES_OHM = 1000.0
# Second try, for gates that are only fed slowly. Our choice.
_FEED_OHM = 10e6
# Our choice: longer chains or more ways than any gate drive has; bounds the search on hostile input.
_MAX_NETS, _MAX_HOPS, _MAX_WAYS = 100, 16, 400


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
    """Nets in reach of the gate: parts between, and the ports on each. `leaves` are not passed through."""

    nets: dict[str, tuple[int, list[Port]]] = field(default_factory=dict)
    leaves: set[str] = field(default_factory=set)
    truncated: bool = False


def walk(circuit: Circuit, transistor: Transistor, gate_nets: frozenset[str]) -> Walk:
    """Find what drives a transistor's gate. `gate_nets` are the gate nets of all transistors."""
    home = circuit.tied(transistor.source_net) | circuit.tied(transistor.kelvin_net)
    barred = (home | {transistor.drain_net, transistor.kelvin_net, transistor.source_net}) - {transistor.gate_net, ""}
    # Fitted parts first: an unfitted way is looked at only where no fitted one leads to a driver.
    tries = [(ohm, fitted) for ohm in (_SERIES_OHM, _FEED_OHM) for fitted in (True, False)]
    for limit_ohm, only_fitted in tries:
        reached = _reach(circuit, transistor, gate_nets, barred, _Passing(limit_ohm, only_fitted))
        chosen = choose(circuit, transistor, reached.nets)
        if best_rank(chosen) > SINGLE_PULL or (chosen and limit_ohm == _FEED_OHM):
            break
    found = drives(circuit, chosen, home)
    passing = _Passing(limit_ohm, only_fitted=False)
    everything = _reach(circuit, transistor, gate_nets, barred, passing)
    ways = {drive.net: _ways(circuit, transistor.gate_net, drive.net, everything, passing) for drive in found}
    on, off = (_edge(edge, found, ways) for edge in (ON, OFF))
    if found and not off.conducts:
        helpers = local_turn_off(circuit, sorted(everything.nets), home)
        if helpers:
            found = (*(replace(drive, edge=ON) for drive in found), *drives(circuit, helpers, home))
            ways |= {h.pin.net: _ways(circuit, transistor.gate_net, h.pin.net, everything, passing) for h in helpers}
            off = _edge(OFF, found, ways)
    if everything.truncated:
        on, off = (replace(edge, covering=frozenset(), truncated=True) for edge in (on, off))
    unfitted = {hop.element.part for way in ways.values() for hops in way for hop in hops if not hop.element.fitted}
    open_parts = sorted(unfitted & {part for edge in (on, off) if not edge.conducts for part in edge.parts})
    nets = {transistor.gate_net} | {drive.net for drive in found}
    nets |= {net for edge in (on, off) for step in edge.steps for net in (step.near, step.far)}
    feed_only = limit_ohm == _FEED_OHM and bool(found)
    return Walk(found, best_rank(chosen), on, off, frozenset(nets), tuple(open_parts), feed_only)


class _Passing(NamedTuple):
    """Which parts the walk goes through."""

    limit_ohm: float
    only_fitted: bool

    def lets(self, element: Element) -> bool:
        """A series part, small enough, and fitted if only those count."""
        small = element.ohm is None or element.ohm <= self.limit_ohm
        return element.sort in _SERIES and small and (element.fitted or not self.only_fitted)


def _reach(
    circuit: Circuit, transistor: Transistor, gate_nets: frozenset[str], barred: frozenset[str], passing: _Passing
) -> _Reached:
    start = transistor.gate_net
    reached, edge = _Reached(), deque([start])
    reached.nets[start] = (0, ports(circuit, start, transistor.part))
    if circuit.is_rail(start):
        return reached
    while edge:
        here = edge.popleft()
        for element in circuit.elements(here):
            net = element.other(here)
            if net in reached.nets or net in barred or not passing.lets(element) or circuit.is_rail(net):
                continue
            if len(reached.nets) >= _MAX_NETS:
                reached.truncated = True
                return reached
            reached.nets[net] = (reached.nets[here][0] + 1, ports(circuit, net, transistor.part))
            if net in gate_nets or best_rank(reached.nets[net][1]) >= OUTPUT:
                reached.leaves.add(net)
            else:
                edge.append(net)
    return reached


def _ways(circuit: Circuit, gate: str, driver: str, reached: _Reached, passing: _Passing) -> list[_Way]:
    """All simple ways from the gate to a driver's net, within what was reached.

    Marks `reached` as truncated where a bound cuts the search off.
    """
    if gate == driver:
        return [()]
    found: list[_Way] = []
    # Shortest first, so that a bound that is hit cuts off the long ones.
    open_ways: deque[tuple[str, _Way, frozenset[str]]] = deque([(gate, (), frozenset({gate}))])
    while open_ways:
        here, way, seen = open_ways.popleft()
        for element in circuit.elements(here):
            net = element.other(here)
            if net in seen or net not in reached.nets or not passing.lets(element):
                continue
            hop = _Hop(element, here, net)
            if len(found) >= _MAX_WAYS or len(open_ways) >= _MAX_WAYS or len(way) >= _MAX_HOPS:
                reached.truncated = True
            elif net == driver:
                found.append((*way, hop))
            elif net not in reached.leaves:
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
