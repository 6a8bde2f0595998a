"""One net's copper as a graph: where pieces touch are its nodes, the ways between them its edges.

Pieces touch where their copper does: track ends, tees without an end, crossings, vias anywhere on a track,
pads that a track enters, and everything that lies in one fill. Lengths run along centre lines; inside a fill
they are straight. A way inside the two pads it joins costs nothing: distances are from edge to edge.
"""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING, Any

import numpy as np

from gatecheck.copper.geometry import (
    clip_to_box,
    crosses_rim,
    crossing_parameters,
    distance_between,
    inside,
    overlapping_pairs,
    project,
)
from gatecheck.copper.model import pad_layers, pad_outline, to_pad

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray

    from gatecheck.copper.geometry import Points
    from gatecheck.copper.model import Fill, NetCopper, Stack
    from gatecheck.design.model import Pad

# (kind, index, layer or position): pads are ("pad", i, ""), via barrels ("via", i, layer), places on tracks
# ("on", piece, position).
Node = tuple[str, int, Any]
# Pads on one fill are joined each with each up to so many; beyond, each with its nearest (our choice).
_ALL_PAIRS, _NEAREST = 60, 8
# Our choice: copper drawn to touch may miss by the rounding of an old file.
_TOUCH_M = 1e-6
# Our choice: a net with more pieces is a plane, for which a way along tracks says nothing.
MAX_PIECES = 4000


@dataclass(frozen=True, slots=True)
class _Pieces:
    """All straight pieces of track of a net as arrays."""

    starts: Points
    ends: Points
    half_m: NDArray[np.float64]
    layers: NDArray[np.str_]

    def __len__(self) -> int:
        return len(self.starts)


class CopperGraph:
    """The graph of one net.

    `edges` holds (length in metres, index of the fill it runs through) by node and neighbour, both ways: plain
    dictionaries, since a board has a hundred thousand of them and all that is asked of them is a search.
    """

    def __init__(self, copper: NetCopper, pads: Iterable[Pad], stack: Stack) -> None:
        self.edges: dict[Node, dict[Node, tuple[float, int | None]]] = defaultdict(dict)
        self.pads = tuple(pads)
        self.node_of: dict[int, Node] = {pad.offset: ("pad", i, "") for i, pad in enumerate(self.pads)}
        self._copper, self._stack = copper, stack
        self.held: dict[int, list[Node]] = {}  # the nodes inside each fill, by its index
        self._pieces = _pieces(copper)
        self._lengths_m: list[float] = np.hypot(*(self._pieces.ends - self._pieces.starts).T).tolist()
        self.too_large = len(self._pieces) + len(copper.vias) > MAX_PIECES
        if self.too_large:
            return
        self._stations: dict[int, dict[float, Points]] = defaultdict(dict)
        links = [*self._touching_tracks(), *self._touching_vias(), *self._touching_pads()]
        self._add_pieces()
        for one, two, length_m in links:
            self._join(one, two, length_m)
        self._add_vias()
        self._add_pad_contacts()
        self._add_fills()

    def _join(self, one: Node, two: Node, length_m: float, *, fill: int | None = None) -> None:
        """Keep the shortest edge. `fill` names the fill that a straight way runs through."""
        known = self.edges[one].get(two)
        if known is None or known[0] > length_m:
            self.edges[one][two] = self.edges[two][one] = max(length_m, 0.0), fill

    def inside_m(self, pad: Node, other: Node) -> float:
        """How much of an edge from a pad's centre lies inside the pad: all of it where a track or via touches."""
        length_m, fill = self.edges[pad][other]
        if fill is None and other[0] != "pad":
            return length_m
        here, there = np.array(self.place(pad)[:2]), np.array(self.place(other)[:2])
        form = self.pads[pad[1]]
        a, b = to_pad(np.stack([here, there]), form)
        part = clip_to_box(a, b, np.array([form.width_m, form.height_m]) / 2)
        return (part[1] if part else 0.0) * float(np.hypot(*(there - here)))

    def leaves_fill(self, one: Node, two: Node) -> bool:
        """Does an edge through a fill leave it on its straight way? Then the way round is longer."""
        fill = self.edges[one][two][1]
        if fill is None:
            return False
        a, b = np.array(self.place(one)[:2]), np.array(self.place(two)[:2])
        return crosses_rim(a, b, self._copper.fills[fill].outline)

    def place(self, node: Node) -> tuple[float, float, str]:
        """Where a node is: x, y, and the layer (empty for pads, which may be on several)."""
        kind, i, what = node
        if kind == "pad":
            return self.pads[i].x_m, self.pads[i].y_m, ""
        if kind == "via":
            return self._copper.vias[i].x_m, self._copper.vias[i].y_m, what
        x, y = self._stations[i][what]
        return float(x), float(y), str(self._pieces.layers[i])

    def _station(self, piece: int, t: float) -> Node:
        """A place on a piece; places closer than the touch limit are one."""
        stations = self._stations[piece]
        if t not in stations:
            for known in stations:
                if abs(known - t) * self._lengths_m[piece] <= _TOUCH_M / 10:
                    return "on", piece, known
            start, end = self._pieces.starts[piece], self._pieces.ends[piece]
            stations[t] = start + t * (end - start)
        return "on", piece, t

    def _on_layer(self, layer: str) -> NDArray[np.int64]:
        return np.flatnonzero(self._pieces.layers == layer)

    def _touching_tracks(self) -> list[tuple[Node, Node, float]]:
        """Ends on ends and on bodies of other tracks, and crossings."""
        pieces = self._pieces
        for i in range(len(pieces)):
            self._stations[i] = {0.0: pieces.starts[i], 1.0: pieces.ends[i]}
        links: list[tuple[Node, Node, float]] = []
        for layer in sorted(set(pieces.layers.tolist())):
            here = self._on_layer(layer)
            grown = pieces.half_m[here][:, None] + _TOUCH_M
            low = np.minimum(pieces.starts[here], pieces.ends[here]) - grown
            high = np.maximum(pieces.starts[here], pieces.ends[here]) + grown
            for first, second in overlapping_pairs(low, high):
                one, other = here[first], here[second]
                links += [*self._ends_on(one, other), *self._ends_on(other, one), *self._crossings(one, other)]
        return links

    def _ends_on(self, one: NDArray[np.int64], other: NDArray[np.int64]) -> list[tuple[Node, Node, float]]:
        """Where an end of one piece of each pair lies on the copper of the other."""
        pieces = self._pieces
        links: list[tuple[Node, Node, float]] = []
        for t, points in ((0.0, pieces.starts), (1.0, pieces.ends)):
            at, gap = project(points[one], pieces.starts[other], pieces.ends[other])
            links += [
                (("on", int(one[k]), t), self._station(int(other[k]), float(at[k])), float(gap[k]))
                for k in np.flatnonzero(gap <= pieces.half_m[other] + _TOUCH_M)
            ]
        return links

    def _crossings(self, one: NDArray[np.int64], other: NDArray[np.int64]) -> list[tuple[Node, Node, float]]:
        pieces = self._pieces
        t, u, parallel = crossing_parameters(
            pieces.starts[one], pieces.ends[one], pieces.starts[other], pieces.ends[other]
        )
        hit = ~parallel & (t > 0) & (t < 1) & (u > 0) & (u < 1)
        return [
            (self._station(int(one[k]), float(t[k])), self._station(int(other[k]), float(u[k])), 0.0)
            for k in np.flatnonzero(hit)
        ]

    def _touching_vias(self) -> list[tuple[Node, Node, float]]:
        links: list[tuple[Node, Node, float]] = []
        for i, via in enumerate(self._copper.vias):
            centre = np.array([via.x_m, via.y_m])
            for layer in via.layers:
                near = self._on_layer(layer)
                if not len(near):
                    continue
                at, gap = project(centre, self._pieces.starts[near], self._pieces.ends[near])
                links += [
                    (("via", i, layer), self._station(int(near[k]), float(at[k])), float(gap[k]))
                    for k in np.flatnonzero(gap <= self._pieces.half_m[near] + via.diameter_m / 2)
                ]
        return links

    def _touching_pads(self) -> list[tuple[Node, Node, float]]:
        """Where a centre line enters a pad, and where it stops inside; a track that only brushes it touches too."""
        links: list[tuple[Node, Node, float]] = []
        for i, pad in enumerate(self.pads):
            half = np.array([pad.width_m, pad.height_m]) / 2
            reach = float(np.hypot(*half))
            for layer in pad_layers(pad, self._stack):
                near = self._on_layer(layer)
                if not len(near):
                    continue
                _, gap = project(np.array([pad.x_m, pad.y_m]), self._pieces.starts[near], self._pieces.ends[near])
                for j in near[gap <= reach + self._pieces.half_m[near] + _TOUCH_M].tolist():
                    a, b = to_pad(np.stack([self._pieces.starts[j], self._pieces.ends[j]]), pad)
                    part = clip_to_box(a, b, half) or clip_to_box(a, b, half + self._pieces.half_m[j] + _TOUCH_M)
                    links += [
                        (("pad", i, ""), self._station(j, t), float(np.hypot(*(a + t * (b - a))))) for t in part or ()
                    ]
        return links

    def _add_pieces(self) -> None:
        """The places on each piece in a row. Reaching into a pad is settled by the pad's own edges."""
        for i, stations in self._stations.items():
            ordered = sorted(stations)
            for before, after in pairwise(ordered):
                self._join(("on", i, before), ("on", i, after), (after - before) * self._lengths_m[i])

    def _add_vias(self) -> None:
        for i, via in enumerate(self._copper.vias):
            for upper, lower in pairwise(via.layers):
                self._join(("via", i, upper), ("via", i, lower), self._stack.height_m(upper, lower))

    def _add_pad_contacts(self) -> None:
        """Vias in pads, and pads of one net on each other."""
        outlines = [pad_outline(pad) for pad in self.pads]
        layers = [set(pad_layers(pad, self._stack)) for pad in self.pads]
        centres = np.array([(via.x_m, via.y_m) for via in self._copper.vias]).reshape(-1, 2)
        reaches = np.array([np.hypot(*np.ptp(outline, axis=0)) / 2 for outline in outlines])
        places = np.array([(pad.x_m, pad.y_m) for pad in self.pads]).reshape(-1, 2)
        for i, pad in enumerate(self.pads):
            offsets = to_pad(centres, pad)
            held = (np.abs(offsets) <= np.array([pad.width_m, pad.height_m]) / 2).all(axis=1)
            for k in np.flatnonzero(held).tolist():
                for layer in layers[i] & set(self._copper.vias[k].layers):
                    self._join(("pad", i, ""), ("via", k, layer), float(np.hypot(*offsets[k])))
            apart = np.hypot(*(places[:i] - places[i]).T)
            for j in np.flatnonzero(apart <= reaches[:i] + reaches[i]).tolist():
                if layers[i] & layers[j] and distance_between(outlines[i], outlines[j]) <= _TOUCH_M:
                    self._join(("pad", i, ""), ("pad", j, ""), float(apart[j]))

    def _add_fills(self) -> None:
        """Everything a fill holds is joined by straight ways."""
        for index, fill in enumerate(self._copper.fills):
            nodes = self._fill_candidates(fill)
            if len(nodes) < 2:  # noqa: PLR2004 (one node is joined to nothing)
                continue
            points = np.array([self.place(node)[:2] for node in nodes])
            held = inside(points, fill.outline)
            for k in np.flatnonzero(~held).tolist():
                held[k] = self._reaches(nodes[k], points[k], fill)
            chosen = np.flatnonzero(held)
            self.held[index] = [nodes[k] for k in chosen]
            self._join_in_fill(self.held[index], points[chosen], index)

    def _fill_candidates(self, fill: Fill) -> list[Node]:
        """The nodes on the fill's layer that are near enough to touch it."""
        pads: list[Node] = [
            ("pad", i, "") for i, pad in enumerate(self.pads) if fill.layer in pad_layers(pad, self._stack)
        ]
        vias: list[Node] = [
            ("via", i, fill.layer) for i, via in enumerate(self._copper.vias) if fill.layer in via.layers
        ]
        tracks: list[Node] = [("on", i, t) for i in self._on_layer(fill.layer).tolist() for t in self._stations[i]]
        nodes = [*pads, *vias, *tracks]
        if not nodes:
            return []
        reach = fill.spread_m + max((max(pad.width_m, pad.height_m) for pad in self.pads), default=0.0)
        low, high = fill.outline.min(axis=0) - reach, fill.outline.max(axis=0) + reach
        points = np.array([self.place(node)[:2] for node in nodes])
        near = ((points >= low) & (points <= high)).all(axis=1)
        return [nodes[k] for k in np.flatnonzero(near)]

    def _reaches(self, node: Node, point: Points, fill: Fill) -> bool:
        """Does copper of a node whose centre lies outside a fill touch it? Teardrops meet pads at their edge."""
        if node[0] == "pad":
            pad = self.pads[node[1]]
            corners = np.abs(to_pad(fill.outline, pad))
            half = np.array([pad.width_m, pad.height_m]) / 2 + fill.spread_m
            return bool((corners <= half).all(axis=1).any()) or bool(inside(pad_outline(pad), fill.outline).any())
        radius = self._copper.vias[node[1]].diameter_m / 2 if node[0] == "via" else float(self._pieces.half_m[node[1]])
        gap = project(point, fill.outline, np.roll(fill.outline, -1, axis=0))[1].min()
        return bool(gap <= radius + fill.spread_m)

    def _join_in_fill(self, nodes: list[Node], points: Points, fill: int) -> None:
        pairs: set[tuple[int, int]] = set()
        many = len(nodes) > _ALL_PAIRS
        for i, node in enumerate(nodes):
            near = np.argsort(np.hypot(*(points - points[i]).T))[1 : _NEAREST + 1] if many else np.arange(i)
            pads = [k for k, other in enumerate(nodes) if other[0] == "pad"] if node[0] == "pad" else []
            pairs |= {(min(i, k), max(i, k)) for k in {*near.tolist(), *pads} if k != i}
        pairs |= set(_spanning(points)) if many else set()
        for i, k in sorted(pairs):
            length_m = float(np.hypot(*(points[i] - points[k])))
            self._join(nodes[i], nodes[k], length_m, fill=fill)


def _spanning(points: Points) -> list[tuple[int, int]]:
    """Pairs that join all points with the least length (Prim's algorithm): nearest pairs alone may leave islands."""
    joined = np.zeros(len(points), dtype=bool)
    joined[0] = True
    best, to = np.hypot(*(points - points[0]).T), np.zeros(len(points), dtype=int)
    pairs = []
    for _ in range(len(points) - 1):
        nearest = int(np.argmin(np.where(joined, np.inf, best)))
        pairs.append((min(nearest, int(to[nearest])), max(nearest, int(to[nearest]))))
        joined[nearest] = True
        apart = np.hypot(*(points - points[nearest]).T)
        closer = apart < best
        best, to = np.where(closer, apart, best), np.where(closer, nearest, to)
    return pairs


def _pieces(copper: NetCopper) -> _Pieces:
    """Arcs become chains of straight pieces."""
    starts, ends, half, layers = [], [], [], []
    for track in copper.tracks:
        for i in range(len(track.points) - 1):
            starts.append(track.points[i])
            ends.append(track.points[i + 1])
            half.append(track.width_m / 2)
            layers.append(track.layer)
    empty = np.zeros((0, 2))
    return _Pieces(
        np.array(starts) if starts else empty,
        np.array(ends) if ends else empty,
        np.array(half),
        np.array(layers, dtype=np.str_),
    )
