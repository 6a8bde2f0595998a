"""The shortest way along the copper of one net, and along a chain of nets and parts."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING, Any

import numpy as np

from gatecheck.copper.geometry import distance_between
from gatecheck.copper.graph import CopperGraph
from gatecheck.copper.model import pad_outline

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping, Sequence

    from gatecheck.copper.graph import Node
    from gatecheck.copper.source import CopperSource
    from gatecheck.design.model import Design, Pad

Point = tuple[float, float, str]
# Of a way through a fill that leaves it when drawn straight: how much longer it may be. Our choice, until the
# way round is searched for.
_DETOUR = 1.5


@dataclass(frozen=True, slots=True)
class CopperWay:
    """A way along copper from pad edge to pad edge.

    `length_m` is an interval (low, high): wider than a number where a fill makes the way uncertain. `points`
    run from pad centre to pad centre with the layer each lies on.
    """

    length_m: tuple[float, float]
    points: tuple[Point, ...]
    vias: int


@dataclass(frozen=True, slots=True)
class NoWay:
    """Why there is no way along copper in the file."""

    reason: str


class Copper:
    """The copper of a design, as distances."""

    def __init__(self, design: Design, source: CopperSource) -> None:
        self.design, self.source = design, source
        self._graphs: dict[str, CopperGraph] = {}

    def graph(self, net: str) -> CopperGraph:
        """The graph of one net's copper, made when first asked for."""
        known = self._graphs.get(net)
        if known is None:
            pads = [pad for pin in self.design.nets.get(net, ()) for pad in pin.pads]
            known = self._graphs[net] = CopperGraph(self.source.net(net), pads, self.source.stack)
        return known

    def way(self, net: str, start: Sequence[Pad], goal: Sequence[Pad]) -> CopperWay | NoWay:
        """The shortest way along one net's copper between two groups of pads."""
        graph = self.graph(net)
        if graph.too_large:
            return NoWay(f"the copper of {net} has too many pieces to follow")
        starts, goals = _nodes(graph, start), _nodes(graph, goal)
        if not starts or not goals:
            return NoWay(f"a pad is not on {net}")
        found = _shortest(graph, starts, goals)
        if found is not None:
            return found
        if self.source.net(net).unfilled:
            return NoWay(f"a zone of {net} is not filled in the file")
        return NoWay(f"{net} is not routed between the two pads")

    def way_into_fill(self, net: str, start: Sequence[Pad], fill: int) -> CopperWay | None:
        """The shortest way from some pads to where their net's copper enters a fill; None if it does not."""
        graph = self.graph(net)
        if graph.too_large:
            return None
        return _shortest(graph, _nodes(graph, start), set(graph.held.get(fill, ())))


def _nodes(graph: CopperGraph, pads: Sequence[Pad]) -> set[Node]:
    ends: dict[int, Node] = {pad.offset: ("pad", i, "") for i, pad in enumerate(graph.pads)}
    return {ends[pad.offset] for pad in pads if pad.offset in ends}


def _shortest(graph: CopperGraph, starts: set[Node], goals: set[Node]) -> CopperWay | None:
    import networkx as nx  # noqa: PLC0415 (already loaded by the graph)

    free = {node for node in starts | goals if node[0] == "pad"}

    def cost(one: Node, two: Node, edge: Mapping[str, Any]) -> float:
        """Inside the two pads a way costs nothing: the distance is from edge to edge."""
        inside = sum(graph.inside_m(a, b) for a, b in ((one, two), (two, one)) if a in free)
        return max(float(edge["length_m"]) - inside, 0.0)

    if starts & goals:
        node = min(starts & goals)
        return CopperWay((0.0, 0.0), (graph.place(node),), 0)
    present = [node for node in sorted(starts) if node in graph.graph]
    if not present or not goals:
        return None
    lengths, ways = nx.multi_source_dijkstra(graph.graph, present, weight=cost)
    reached = [node for node in goals if node in lengths]
    if not reached:
        return None
    way = ways[min(reached, key=lambda node: (lengths[node], node[0], node[1]))]
    edges = [(a, b, graph.graph.edges[a, b]) for a, b in pairwise(way)]
    low = sum(cost(*edge) for edge in edges)
    unsure = sum(cost(*edge) for edge in edges if graph.leaves_fill(edge[0], edge[1]))
    vias = len({node[1] for a, b in pairwise(way) for node in (a, b) if a[0] == b[0] == "via"})
    return CopperWay((low, low + (_DETOUR - 1) * unsure), tuple(map(graph.place, way)), vias)


def straight_m(start: Iterable[Pad], goal: Iterable[Pad]) -> float:
    """Shortest distance from edge to edge between two groups of pads, as if on one layer."""
    return min((distance_between(pad_outline(a), pad_outline(b)) for a in start for b in goal), default=float(np.inf))
