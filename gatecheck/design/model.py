"""The nouns of a design: Part, Pin, Pad, Net, and the graph that joins them."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from collections.abc import Mapping

    import networkx as nx


@dataclass(frozen=True, slots=True)
class Place:
    """Where something stands: byte offset in a file of the design, and on the board where there is one."""

    file: str
    offset: int
    x_m: float | None = None
    y_m: float | None = None
    layer: str = ""


@dataclass(frozen=True, slots=True)
class Pad:
    """One piece of copper of a pin. Centre of the copper in board axes, y down, angle counter-clockwise."""

    number: str
    kind: str
    shape: str
    x_m: float
    y_m: float
    angle_deg: float
    width_m: float
    height_m: float
    corner_ratio: float
    layers: tuple[str, ...]
    offset: int


@dataclass(frozen=True, slots=True)
class Pin:
    """One terminal of a part on one net; `net` is empty when it is on none."""

    part: str
    number: str
    function: str
    electrical: str
    net: str
    pads: tuple[Pad, ...] = ()


@dataclass(frozen=True, slots=True)
class Part:
    """One part. `id` tells it from every other one; references need not."""

    id: str
    reference: str
    value: str
    footprint: str
    library: str
    description: str
    keywords: str
    fields: Mapping[str, str]
    fitted: bool
    symbol_path: str
    units: tuple[tuple[str, tuple[str, ...]], ...]
    net_ties: tuple[tuple[str, ...], ...]
    pins: tuple[Pin, ...]
    place: Place
    side: str = ""  # "top", "bottom", or empty without a board

    def nets(self) -> tuple[str, ...]:
        """The nets its pins are on, each once, in pin order."""
        return tuple(dict.fromkeys(pin.net for pin in self.pins if pin.net))


@dataclass(frozen=True)
class Design:
    """Parts and nets of one design, joined in one graph.

    `source` is the path of the file it came from, `kind` what that is (board, netlist). `graph` has the nets
    `("net", name)` and the parts `("part", id)` as nodes, and the pins as edges with the Pin in `pin`.
    """

    source: str
    kind: str
    parts: Mapping[str, Part]
    graph: nx.MultiGraph[Any]

    @cached_property
    def nets(self) -> Mapping[str, tuple[Pin, ...]]:
        """The pins of every net."""
        return {
            name: tuple(pin for _, _, pin in self.graph.edges((what, name), data="pin"))
            for what, name in self.graph.nodes
            if what == "net"
        }


def joined(source: str, kind: str, parts: Mapping[str, Part]) -> Design:
    """The Design of some parts: the graph is made from their pins."""
    import networkx as nx  # noqa: PLC0415 (100 ms that `--help` need not pay)

    graph = nx.MultiGraph()
    graph.add_nodes_from(("part", key) for key in parts)
    graph.add_edges_from(
        (("net", pin.net), ("part", key), {"pin": pin}) for key, part in parts.items() for pin in part.pins if pin.net
    )
    return Design(source, kind, parts, graph)
