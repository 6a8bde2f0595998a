"""The design graph seen as a circuit: two-terminal elements between nets, rails, and what a net holds."""

from __future__ import annotations

import re
from collections import defaultdict
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise, product
from typing import TYPE_CHECKING

from gatecheck.networks.kinds import Kinded, Sort, kind_of

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    import networkx as nx

    from gatecheck.design.model import Design, Pin

# Names of supplies and grounds, as the last part of a net's name. Origin: common practice.
_RAIL = re.compile(
    r"[+-]?\d+V\d*[A-Z_]*|[+-]\d+(?:\.\d+)?V\w*|[+-]?V\d+(?:V\d+)?|\+\w+|[A-Z]?_?GND[A-Z0-9_]*|[A-Z]{1,2}GND|"
    r"V(?:CC|DD|SS|EE|BUS|BAT|IN|OUT|PP|M|MOT|SUPPLY|DRV|DRIVE|REF|SYS|DC|AA)\w*|V[+-]|[+-]?V?BATT?(?:ERY)?[+-]?|"
    r"[A-Z0-9]*VDC|EARTH|PE|DC[+-]|HV[+-]|[A-Z]+_?HV[+-]|V_SUPPLY",
    re.IGNORECASE,
)
# Our choice: more parts than any gate line has, fewer than a supply.
_RAIL_PINS = 26
# A shunt: small enough that its two ends are one node for a gate's return. Our choice.
_SHUNT_OHM = 0.11
_SHUNT_HOPS = 2
_TWO = 2


@dataclass(frozen=True, slots=True)
class Element:
    """A part between two nets. Current of a diode flows from `a` to `b` only; else `one_way` is False."""

    part: str
    sort: Sort
    a: str
    b: str
    one_way: bool = False
    ohm: float | None = None
    fitted: bool = True

    def other(self, net: str) -> str:
        """The net at the other end."""
        return self.b if net == self.a else self.a


class Circuit:
    """Look-ups that the walk and the evidence share; computed once per design, each when first asked for."""

    def __init__(self, design: Design) -> None:
        self.design = design
        self.kinds: Mapping[str, Kinded] = {key: kind_of(part) for key, part in design.parts.items()}

    @cached_property
    def graph(self) -> nx.MultiGraph[str]:
        """Nets as nodes, two-terminal elements as edges with the Element in `element`."""
        import networkx as nx  # noqa: PLC0415 (100 ms that `--help` need not pay)

        graph: nx.MultiGraph[str] = nx.MultiGraph()
        for key, part in self.design.parts.items():
            kinded = self.kinds[key]
            if kinded.sort in _ELEMENTS and 1 < len(part.nets()) <= _TWO + 1:
                for element in _elements_of(key, kinded, part.pins):
                    graph.add_edge(element.a, element.b, element=element)
        return graph

    def elements(self, net: str) -> list[Element]:
        """The two-terminal elements on a net."""
        known = self._elements.get(net)
        if known is None:
            edges = self.graph.edges(net, data="element") if net in self.graph else ()
            known = self._elements[net] = [element for _, _, element in edges]
        return known

    @cached_property
    def _elements(self) -> dict[str, list[Element]]:
        return {}

    def between(self, net: str, others: Iterable[str], *sorts: Sort) -> list[Element]:
        """Elements of these sorts from a net to any of the others."""
        targets = set(others)
        return [e for e in self.elements(net) if e.sort in sorts and e.other(net) in targets and e.other(net) != net]

    def pins(self, net: str) -> tuple[Pin, ...]:
        """The pins on a net."""
        return self.design.nets.get(net, ())

    def is_rail(self, net: str) -> bool:
        """A supply or a ground, by name or by the number of its pins."""
        known = self._rails.get(net)
        if known is None:
            last = net.rpartition("/")[2]
            known = len(self.pins(net)) >= _RAIL_PINS or _RAIL.fullmatch(last) is not None
            self._rails[net] = known
        return known

    @cached_property
    def _rails(self) -> dict[str, bool]:
        return {}

    def tied(self, net: str) -> frozenset[str]:
        """The net and those joined to it by net ties, links of 0 ohm and current shunts."""
        known = self._tied.get(net)
        if known is None:
            reached, edge = ({net}, {net}) if net else (set[str](), set[str]())
            for _ in range(_SHUNT_HOPS):
                edge = {other for here in edge for other in self._shunts.get(here, ())} - reached
                reached |= edge
            known = self._tied[net] = frozenset(reached)
        return known

    @cached_property
    def _tied(self) -> dict[str, frozenset[str]]:
        return {}

    @cached_property
    def _shunts(self) -> Mapping[str, list[str]]:
        """The nets at the other ends of a net's shunts. Grounds have thousands of elements and few shunts."""
        found: dict[str, list[str]] = defaultdict(list)
        for a, b, element in self.graph.edges(data="element"):
            if element.fitted and is_shunt(element):
                found[a].append(b)
                found[b].append(a)
        return found


def is_shunt(element: Element) -> bool:
    """A net tie, a link, or a resistor that measures current."""
    if element.sort is Sort.NET_TIE:
        return True
    return element.sort is Sort.RESISTOR and element.ohm is not None and element.ohm <= _SHUNT_OHM


_ELEMENTS = (
    Sort.RESISTOR,
    Sort.BEAD,
    Sort.INDUCTOR,
    Sort.CAPACITOR,
    Sort.DIODE,
    Sort.ZENER,
    Sort.LED,
    Sort.NET_TIE,
    Sort.FUSE,
)


def _elements_of(key: str, kinded: Kinded, pins: tuple[Pin, ...]) -> list[Element]:
    nets = list(dict.fromkeys(pin.net for pin in pins if pin.net))
    ohm = None
    if kinded.sort is Sort.RESISTOR and kinded.value is not None and kinded.value.amount is not None:
        ohm = kinded.value.amount.nominal
    if kinded.sort in (Sort.DIODE, Sort.ZENER, Sort.LED):
        return [
            Element(key, kinded.sort, a, b, one_way=sure, fitted=kinded.fitted) for a, b, sure in _junctions(pins, nets)
        ]
    if kinded.sort is Sort.NET_TIE:
        return [Element(key, kinded.sort, a, b, fitted=kinded.fitted) for a, b in pairwise(nets)]
    if len(nets) != _TWO:
        return []
    return [Element(key, kinded.sort, nets[0], nets[1], ohm=ohm, fitted=kinded.fitted)]


def _junctions(pins: tuple[Pin, ...], nets: list[str]) -> list[tuple[str, str, bool]]:
    """(anode net, cathode net, direction known) of each junction.

    By pin names (A, K, A1, COM); pad 1 is the cathode where there are none (common practice, IPC-7351
    orientation of two-pad diodes). Two anodes and no cathode: it conducts both ways.
    """
    names = {pin: _end(pin) for pin in pins}
    anodes = [pin.net for pin, end in names.items() if end == "A" and pin.net]
    cathodes = [pin.net for pin, end in names.items() if end == "K" and pin.net]
    middle = [pin.net for pin, end in names.items() if end == "M" and pin.net]
    if anodes and cathodes:
        ways = (
            set(product(anodes, middle)) | set(product(middle, cathodes)) if middle else set(product(anodes, cathodes))
        )
        return [(a, k, True) for a, k in sorted(ways) if a != k]
    if middle and (anodes or cathodes):
        ways = set(product(anodes or middle, cathodes or middle))
        return [(a, k, True) for a, k in sorted(ways) if a != k]
    if len(nets) != _TWO:
        return []
    first = next((pin.net for pin in pins if pin.number == "1" and pin.net), "")
    if anodes or not first:
        return [(nets[0], nets[1], False)]
    return [(next(net for net in nets if net != first), first, True)]


def _end(pin: Pin) -> str:
    name = (pin.function or (pin.number if pin.number.isalpha() else "")).upper().strip("~")
    if re.fullmatch(r"(?:K|C|CATHODE|KATHODE|CAT)\d?", name):
        return "K"
    if re.fullmatch(r"(?:A|ANODE|AN)\d?", name):
        return "A"
    return "M" if name in ("COM", "COMMON", "AK", "KA", "A/K", "K/A") else ""
