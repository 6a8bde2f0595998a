"""The shortest way along the copper of one net, and along a chain of nets and parts."""

from __future__ import annotations

from dataclasses import dataclass
from heapq import heappop, heappush
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np

from gatecheck.copper.geometry import distance_between
from gatecheck.copper.graph import CopperGraph
from gatecheck.copper.model import pad_outline

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

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
        self._ways: dict[tuple[str, frozenset[Node], frozenset[Node]], CopperWay | None] = {}

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
        found = self._way(net, starts, goals, starts | goals)
        if found is not None:
            return found
        if self.source.net(net).unfilled:
            return NoWay(f"a zone of {net} is not filled in the file")
        return NoWay(f"{net} is not routed between the two pads")

    def way_into_fill(self, net: str, start: Sequence[Pad], fill: int) -> CopperWay | None:
        """The shortest way from some pads to where their net's copper enters a fill; None if it does not."""
        graph = self.graph(net)
        starts = _nodes(graph, start)
        return self._way(net, starts, set(graph.held.get(fill, ())), starts)

    def way_between_fills(self, net: str, start: int, goal: int) -> CopperWay | None:
        """The shortest way along a net's copper from one of its fills to another; None if there is none."""
        held = self.graph(net).held
        return self._way(net, set(held.get(start, ())), set(held.get(goal, ())), set())

    def _way(self, net: str, starts: set[Node], goals: set[Node], free: set[Node]) -> CopperWay | None:
        """Searched once: both edges of a gate, and gates in parallel, ask for the same."""
        key = net, frozenset(starts), frozenset(goals)
        if key not in self._ways:
            self._ways[key] = _shortest(self.graph(net), starts, goals, free)
        return self._ways[key]


def _nodes(graph: CopperGraph, pads: Sequence[Pad]) -> set[Node]:
    return {graph.node_of[pad.offset] for pad in pads if pad.offset in graph.node_of}


def _shortest(graph: CopperGraph, starts: set[Node], goals: set[Node], free: set[Node]) -> CopperWay | None:
    """The shortest way from any start to any goal. Inside the `free` pads it costs nothing."""
    if starts & goals:
        node = min(starts & goals)
        return CopperWay((0.0, 0.0), (graph.place(node),), 0)
    way = _search(graph, starts, goals, free)
    if not way:
        return None
    lengths = [_cost(graph, a, b, free) for a, b in pairwise(way)]
    unsure = sum(length for length, (a, b) in zip(lengths, pairwise(way), strict=True) if graph.leaves_fill(a, b))
    low = sum(lengths)
    vias = len({node[1] for a, b in pairwise(way) for node in (a, b) if a[0] == b[0] == "via"})
    return CopperWay((low, low + (_DETOUR - 1) * unsure), tuple(map(graph.place, way)), vias)


def _cost(graph: CopperGraph, one: Node, two: Node, free: set[Node]) -> float:
    """Length of an edge without what lies inside the free pads at its ends."""
    length_m = graph.edges[one][two][0]
    for pad, other in ((one, two), (two, one)):
        if pad in free:
            length_m -= graph.inside_m(pad, other)
    return max(length_m, 0.0)


def _search(graph: CopperGraph, starts: set[Node], goals: set[Node], free: set[Node]) -> list[Node]:
    """Dijkstra's search, ended at the first goal: the library's own neither ends at one of many nor is as fast.

    Returns the nodes from start to goal; none if no goal is reached.
    """
    neighbours = graph.edges
    lengths = {node: 0.0 for node in sorted(starts) if node in neighbours}
    before: dict[Node, Node] = {}
    queue = [(0.0, i, node) for i, node in enumerate(lengths)]
    count = len(queue)
    done: set[Node] = set()
    while queue:
        length_m, _, here = heappop(queue)
        if here in done:
            continue
        done.add(here)
        if here in goals:
            way = [here]
            while way[-1] in before:
                way.append(before[way[-1]])
            return way[::-1]
        for node, (step_m, _) in neighbours[here].items():
            if here in free or node in free:
                step_m = _cost(graph, here, node, free)  # noqa: PLW2901 (the rare case of the same number)
            if length_m + step_m < lengths.get(node, np.inf):
                lengths[node], before[node] = length_m + step_m, here
                count += 1
                heappush(queue, (length_m + step_m, count, node))
    return []


def straight_m(start: Iterable[Pad], goal: Iterable[Pad]) -> float:
    """Shortest distance from edge to edge between two groups of pads, as if on one layer."""
    return min((distance_between(pad_outline(a), pad_outline(b)) for a in start for b in goal), default=float(np.inf))
