"""The design graph seen as a circuit: two-terminal elements between nets, rails, and what a net holds."""

from __future__ import annotations

import re
from collections import defaultdict
from functools import cached_property
from typing import TYPE_CHECKING

from gatecheck.networks.elements import ELEMENT_SORTS, Element, elements_of, is_shunt
from gatecheck.networks.kinds import Kinded, Sort, kind_of

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    import networkx as nx

    from gatecheck.design.model import Design, Pin
    from gatecheck.networks.ports import Port

# Names that are supplies or grounds whatever hangs on them, as the last part of a net's name. Origin: common
# practice.
_SURE_RAIL = re.compile(
    r"[+-]?\d+V\d*(?:_[A-Z0-9]{1,6})?|[+-]\d+(?:\.\d+)?V[A-Z0-9_]{0,6}|\+[A-Z0-9_.]{1,12}|[A-Z]{0,4}_?GND[A-Z0-9_]*|"
    r"V(?:CC|DD|SS|EE|BUS|BATT?|AA|REF|SYS)(?:_?[A-Z0-9]{1,6})?|EARTH|PE|[+-]?BATT?(?:ERY)?[+-]?",
    re.IGNORECASE,
)
# Names that may also belong to a switch node or a gate line: a supply only where nothing says otherwise.
_LIKELY_RAIL = re.compile(
    r"[+-]?V\d+(?:V\d+)?|V(?:IN|OUT|PP|M|MOT|SUPPLY|DRV|DRIVE|DC)(?:_?[A-Z0-9]{1,6})?|V[+-]|[A-Z0-9]{0,6}VDC|DC[+-]|"
    r"[A-Z]{0,6}_?HV[+-]|V_SUPPLY",
    re.IGNORECASE,
)
# Our choice: more parts than any gate line has, fewer than a supply.
_RAIL_PARTS = 26
# A line between two or three parts is no supply, whatever its name. Our choice.
_LIKELY_PINS = 4
_LONGEST_NAME = 60
_SHUNT_HOPS = 2


class Circuit:
    """Look-ups that the walk and the evidence share; computed once per design, each when first asked for."""

    def __init__(self, design: Design) -> None:
        self.design = design
        self.kinds: Mapping[str, Kinded] = {key: kind_of(part) for key, part in design.parts.items()}
        self.ports: dict[str, list[Port]] = {}  # filled by networks.ports, net by net
        self._signals: frozenset[str] = frozenset()

    @cached_property
    def graph(self) -> nx.MultiGraph[str]:
        """Nets as nodes, two-terminal elements as edges with the Element in `element`."""
        import networkx as nx  # noqa: PLC0415 (100 ms that `--help` need not pay)

        graph: nx.MultiGraph[str] = nx.MultiGraph()
        for key, part in self.design.parts.items():
            kinded = self.kinds[key]
            if kinded.sort in ELEMENT_SORTS and len(part.nets()) > 1:
                for element in elements_of(key, kinded, part.pins):
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
        """Fitted elements of these sorts from a net to any of the others."""
        found = []
        for other in dict.fromkeys(others):
            if other != net and self.graph.has_edge(net, other):
                edges = self.graph[net][other].values()
                found += [e["element"] for e in edges if e["element"].sort in sorts and e["element"].fitted]
        return found

    def pins(self, net: str) -> tuple[Pin, ...]:
        """The pins on a net."""
        return self.design.nets.get(net, ())

    def not_rails(self, nets: Iterable[str]) -> None:
        """Say that these nets carry signals: gate lines, and what is both a drain and a source.

        A surer name is not overruled: a protection switch may well stand in the ground.
        """
        self._signals = frozenset(nets)
        self._rails.clear()

    def is_rail(self, net: str) -> bool:
        """A supply or a ground, by name or by the number of its parts."""
        known = self._rails.get(net)
        if known is None:
            last = net.rpartition("/")[2][:_LONGEST_NAME]
            known = _SURE_RAIL.fullmatch(last) is not None
            if not known and net not in self._signals:
                many = len(self.pins(net)) >= _RAIL_PARTS and len({pin.part for pin in self.pins(net)}) >= _RAIL_PARTS
                known = many or (len(self.pins(net)) >= _LIKELY_PINS and _LIKELY_RAIL.fullmatch(last) is not None)
            self._rails[net] = known
        return known

    @cached_property
    def _rails(self) -> dict[str, bool]:
        return {}

    def tied(self, net: str) -> frozenset[str]:
        """The net and those joined to it by net ties, links of 0 ohm and current shunts.

        A rail is where this ends: from one, only net ties lead on, else every shunt would tie all to all.
        """
        known = self._tied.get(net)
        if known is None:
            reached, edge = ({net}, {net}) if net else (set[str](), set[str]())
            for _ in range(_SHUNT_HOPS):
                # Looking at all shunts of a rail once per gate would take the square of the gates.
                edge = {
                    other
                    for here in edge
                    if here == net or not self.is_rail(here)
                    for other, sort in self._shunts.get(here, ())
                    if sort is Sort.NET_TIE or not self.is_rail(here)
                } - reached
                reached |= edge
            known = self._tied[net] = frozenset(reached)
        return known

    @cached_property
    def _tied(self) -> dict[str, frozenset[str]]:
        return {}

    @cached_property
    def _shunts(self) -> Mapping[str, list[tuple[str, Sort]]]:
        """The nets at the other ends of a net's shunts, with the shunt's sort."""
        found: dict[str, list[tuple[str, Sort]]] = defaultdict(list)
        for a, b, element in self.graph.edges(data="element"):
            if element.fitted and is_shunt(element):
                found[a].append((b, element.sort))
                found[b].append((a, element.sort))
        return found
