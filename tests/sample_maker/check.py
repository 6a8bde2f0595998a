"""The maker's own check: nets stay apart, every net is one piece, parts do not overlap."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import networkx as nx
from shapely import STRtree, box

from .copper import Piece, bare_holes, outline_shape

if TYPE_CHECKING:
    from .circuit import Circuit
    from .fill import Fill

# Our choice: what any board house can make; tracks are drawn with more.
MIN_GAP_MM = 0.2
# Shapes that should touch may miss by the rounding of file coordinates to a nanometre.
_TOUCH_MM = 1e-5


class CopperFault(ValueError):  # noqa: N818 - a fault is what it reports
    """The board cannot be what its data says."""


def check(circuit: Circuit, found: list[Piece], fills: list[Fill]) -> None:
    """Raises `CopperFault` at the first thing that is wrong."""
    poured = [
        Piece(
            f"{'island' if fill.island else 'pour'} {fill.zone.name}",
            fill.zone.net,
            frozenset([fill.zone.layer]),
            fill.shape,
        )
        for fill in fills
    ]
    copper = found + poured
    pairs = _near_pairs(copper)
    _check_gaps(pairs)
    _check_rims(circuit, copper)
    _check_connected(copper, pairs)
    _check_courtyards(circuit)


def _near_pairs(copper: list[Piece]) -> list[tuple[Piece, Piece]]:
    """Pieces that share a layer and lie closer together than the gap."""
    tree = STRtree([piece.shape for piece in copper])
    return [
        (piece, copper[j])
        for i, piece in enumerate(copper)
        for j in tree.query(piece.shape, predicate="dwithin", distance=MIN_GAP_MM)
        if i < j and piece.layers & copper[j].layers
    ]


def _check_gaps(pairs: list[tuple[Piece, Piece]]) -> None:
    for one, other in pairs:
        if one.net != other.net:
            gap = one.shape.distance(other.shape)
            raise CopperFault(f"{one.what} ({one.net}) is {gap:.3f} mm from {other.what} ({other.net})")


def _check_rims(circuit: Circuit, copper: list[Piece]) -> None:
    board = outline_shape(circuit).buffer(-MIN_GAP_MM, join_style="mitre")
    holes = bare_holes(circuit)
    for piece in copper:
        if not board.covers(piece.shape):
            raise CopperFault(f"{piece.what} ({piece.net}) leaves the board or comes near its edge")
        if any(hole.distance(piece.shape) < MIN_GAP_MM for hole in holes):
            raise CopperFault(f"{piece.what} ({piece.net}) comes near a hole")


def _check_connected(copper: list[Piece], pairs: list[tuple[Piece, Piece]]) -> None:
    graph = nx.Graph()
    names: dict[int, Piece] = {id(piece): piece for piece in copper if not piece.what.startswith("island")}
    graph.add_nodes_from(names)
    for one, other in pairs:
        if {id(one), id(other)} <= names.keys() and one.shape.distance(other.shape) <= _TOUCH_MM:
            graph.add_edge(id(one), id(other))
    _join_pads_of_one_pin(graph, names)
    seen: dict[str, Piece] = {}
    for group in nx.connected_components(graph):
        piece = names[min(group, key=lambda key: names[key].what)]
        if piece.net in seen:
            raise CopperFault(f"net {piece.net} is in pieces: {piece.what} and {seen[piece.net].what}")
        seen[piece.net] = piece


def _join_pads_of_one_pin(graph: Any, names: dict[int, Piece]) -> None:
    """Pads with one number are one terminal: the part itself joins them."""
    first: dict[str, int] = {}
    for key, piece in names.items():
        if piece.what.startswith("pad"):
            graph.add_edge(first.setdefault(piece.what, key), key)


def _check_courtyards(circuit: Circuit) -> None:
    yards = []
    for part in circuit.parts:
        left, top, right, bottom = part.footprint.courtyard_mm
        (x1, y1), (x2, y2) = part.place_mm((left, top)), part.place_mm((right, bottom))
        yards.append((part.ref, box(min(x1, x2), min(y1, y2), max(x1, x2), max(y1, y2))))
    for i, (ref, yard) in enumerate(yards):
        for other_ref, other in yards[:i]:
            if yard.intersection(other).area > 1e-6:
                raise CopperFault(f"{ref} and {other_ref} stand in each other's courtyard")
