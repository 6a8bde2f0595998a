"""The maker's own check of a schematic: reads the finished token lists and finds the circuit's parts and nets again.

It knows nothing of the drawings, only of the file format. Points are whole numbers of 100 nm.
"""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

import networkx as nx

from .drawing import MEETING, DrawingFault

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator, Mapping

    from .circuit import Circuit
    from .sexpr_text import Node

Point = tuple[int, int]
Key = tuple[object, ...]

_GRID = 12700
# Angle and mirror -> sheet coordinates of a library point (x, y with y up), as the format notes tabulate them.
_TO_SHEET: dict[tuple[int, str], Callable[[int, int], Point]] = {
    (0, ""): lambda x, y: (x, -y),
    (90, ""): lambda x, y: (-y, -x),
    (180, ""): lambda x, y: (-x, y),
    (270, ""): lambda x, y: (y, x),
    (90, "x"): lambda x, y: (-y, x),
    (270, "x"): lambda x, y: (y, -x),
    (0, "x"): lambda x, y: (x, y),
    (0, "y"): lambda x, y: (-x, -y),
}
# Names of nets, strongest first.
_GLOBAL, _POWER, _LOCAL, _HIERARCHICAL, _SHEET_PIN = range(5)


@dataclass
class _Found:
    """What the walk over all sheets collects: `names` holds rank, depth and text for points that carry a name."""

    graph: nx.Graph = field(default_factory=nx.Graph)
    names: dict[Key, tuple[int, int, str]] = field(default_factory=dict)
    pins: dict[Key, list[tuple[str, str, str]]] = field(default_factory=dict)
    parts: dict[str, tuple[object, ...]] = field(default_factory=dict)
    labels: Counter[tuple[str, str]] = field(default_factory=Counter)
    marked: set[Key] = field(default_factory=set)


def check_schematic(circuit: Circuit, trees: Mapping[str, Node], root_file: str) -> None:
    """Raises `DrawingFault` unless parts, attributes, paths, pin sets and net names are the circuit's."""
    found = _Found()
    _sheet(found, trees, root_file, f"/{_value(trees[root_file], 'uuid')}", "/")
    _compare("parts", found.parts, _wanted_parts(circuit))
    _compare("nets", _nets(found), circuit.net_names)
    open_pins = {pin for pin, name in circuit.net_names.items() if name.startswith("unconnected-")}
    marked = {(ref, number) for key in found.marked for ref, number, _ in found.pins.get(key, [])}
    _compare("marks of open pins", dict.fromkeys(marked), dict.fromkeys(open_pins))


def _compare(what: str, found: Mapping[Any, Any], wanted: Mapping[Any, Any]) -> None:
    wrong = [key for key in [*wanted, *(found.keys() - wanted.keys())] if found.get(key, ()) != wanted.get(key, ())]
    if wrong:
        cases = "; ".join(f"{key}: {found.get(key)} instead of {wanted.get(key)}" for key in wrong[:5])
        raise DrawingFault(f"{what} of the schematic: {cases}")


def _wanted_parts(circuit: Circuit) -> dict[str, tuple[object, ...]]:
    return {
        part.ref: (
            circuit.sheet_path(part.sheet) + circuit.symbol_identifier(part),
            part.fitted,
            {
                "Value": part.value,
                "Footprint": f"AlderWeir:{part.package}",
                "Datasheet": "",
                "Description": part.description or part.symbol.description,
                **dict(part.fields),
            },
            {pin.number: (pin.name, pin.kind) for pin in part.symbol.pins},
        )
        for part in circuit.parts
    }


# --- one sheet ----------------------------------------------------------------------------------------


def _lists(node: Any, head: str) -> list[Any]:
    return [item for item in node[1:] if isinstance(item, tuple) and item[0] == head]


def _value(node: Any, head: str) -> Any:
    return next((item[1] for item in _lists(node, head)), "")


def _point(node: Any) -> Point:
    """The first two numbers of an `at` or `xy`; everything that connects stands on the grid of 1.27 mm."""
    x, y = (round(value * 10_000) for value in node[1:3])
    if x % _GRID or y % _GRID:
        raise DrawingFault(f"{node} is off the grid")
    return x, y


def _sheet(found: _Found, trees: Mapping[str, Node], file: str, path: str, shown: str) -> None:
    tree = trees[file]
    wires = [tuple(_point(xy) for xy in _lists(wire, "pts")[0][1:]) for wire in _lists(tree, "wire")]
    for one, other in wires:
        found.graph.add_edge((path, one), (path, other))
    _symbols(found, tree, path)
    _labels(found, tree, path, shown, wires)
    for mark in _lists(tree, "no_connect"):
        found.marked.add((path, _point(_lists(mark, "at")[0])))
    for junction in _lists(tree, "junction"):
        at = _point(_lists(junction, "at")[0])
        _join_wires(found, path, at, wires)
    for box in _lists(tree, "sheet"):
        names = {item[1]: item[2] for item in _lists(box, "property")}
        below = f"{path}/{_value(box, 'uuid')}"
        for pin in _lists(box, "pin"):
            key = (path, _point(_lists(pin, "at")[0]))
            found.graph.add_edge(key, (below, "port", pin[1]))
            found.names.setdefault((below, "port", pin[1]), (_SHEET_PIN, path.count("/"), shown + pin[1]))
        _sheet(found, trees, names["Sheetfile"], below, f"{shown}{names['Sheetname']}/")
    _check_meetings(found, tree, path, wires)


def _on(at: Point, wire: tuple[Point, ...]) -> bool:
    (x1, y1), (x2, y2) = wire
    across = (x2 - x1) * (at[1] - y1) - (y2 - y1) * (at[0] - x1)
    return across == 0 and min(x1, x2) <= at[0] <= max(x1, x2) and min(y1, y2) <= at[1] <= max(y1, y2)


def _join_wires(found: _Found, path: str, at: Point, wires: list[tuple[Point, ...]]) -> None:
    """A label or a dot takes any wire that it lies on."""
    found.graph.add_node((path, at))
    found.graph.add_edges_from(((path, at), (path, wire[0])) for wire in wires if _on(at, wire))


def _labels(found: _Found, tree: Node, path: str, shown: str, wires: list[tuple[Point, ...]]) -> None:
    for kind, rank in (("global_label", _GLOBAL), ("label", _LOCAL), ("hierarchical_label", _HIERARCHICAL)):
        for label in _lists(tree, kind):
            text, at = label[1], _point(_lists(label, "at")[0])
            _join_wires(found, path, at, wires)
            if not any(_on(at, wire) for wire in wires):
                raise DrawingFault(f"{kind} {text} hangs in the air")
            found.graph.add_edge((path, at), (path, "text", text))
            name = text if rank == _GLOBAL else shown + text
            key = (path, at) if rank == _GLOBAL else (path, "text", text)
            found.names[key] = min(found.names.get(key, (99, 0, "")), (rank, path.count("/"), name))
            if rank == _GLOBAL:
                found.graph.add_edge((path, "text", text), ("everywhere", text))
            if rank == _HIERARCHICAL:
                found.graph.add_edge((path, "text", text), (path, "port", text))


def _check_meetings(found: _Found, tree: Node, path: str, wires: list[tuple[Point, ...]]) -> None:
    """Pins and wire ends never touch a wire in its middle, and three ends have a dot."""
    dots = {_point(_lists(dot, "at")[0]) for dot in _lists(tree, "junction")}
    ends: Counter[Any] = Counter(end for wire in wires for end in wire)
    pins: Counter[Any] = Counter({key[1]: len(there) for key, there in found.pins.items() if key[0] == path})
    for at in ends + pins:
        if any(_on(at, wire) and at not in wire for wire in wires):
            raise DrawingFault(f"a wire passes over the end or pin at {at}")
    needed = {at for at in ends if (ends + pins)[at] >= MEETING}
    if not needed <= dots:
        raise DrawingFault(f"no dot at {sorted(needed - dots)}")


# --- symbols ------------------------------------------------------------------------------------------


def _instance(symbol: Any, path: str) -> tuple[str, int]:
    for entry in _lists(_lists(_lists(symbol, "instances")[0], "project")[0], "path"):
        if entry[1] == path:
            return _value(entry, "reference"), _value(entry, "unit")
    raise DrawingFault(f"no reference on {path}: {symbol[:2]}")


def _unit_pins(library: Any, unit: int) -> Iterator[Any]:
    for part in _lists(library, "symbol"):
        if int(part[1].rsplit("_", 2)[1]) in {0, unit}:
            yield from _lists(part, "pin")


def _symbols(found: _Found, tree: Node, path: str) -> None:
    library = {symbol[1]: symbol for symbol in _lists(_lists(tree, "lib_symbols")[0], "symbol")}
    for symbol in _lists(tree, "symbol"):
        reference, unit = _instance(symbol, path)
        drawn = library[_value(symbol, "lib_id")]
        at = _lists(symbol, "at")[0]
        (x, y), turn = _point(at), _TO_SHEET[at[3], _value(symbol, "mirror")]
        fields = {item[1]: item[2] for item in _lists(symbol, "property")}
        kinds = {}
        for pin in _unit_pins(drawn, unit):
            dx, dy = turn(*_point(_lists(pin, "at")[0]))
            key: Key = (path, (x + dx, y + dy))
            number, name = _value(pin, "number"), _value(pin, "name")
            found.graph.add_node(key)
            kinds[number] = ("" if name == "~" else name, str(pin[1]))
            found.pins.setdefault(key, []).append((reference, number, kinds[number][0]))
            if _lists(drawn, "power") and pin[1] == "power_in":
                found.graph.add_edge(key, ("everywhere", fields["Value"]))
                found.graph.add_edge(key, (path, "text", fields["Value"]))
                found.names["everywhere", fields["Value"]] = (_POWER, 0, fields["Value"])
        if not reference.startswith("#"):
            _part(found, reference, (path, symbol, fields, kinds))


def _part(found: _Found, reference: str, what: tuple[str, Any, dict[str, str], dict[str, tuple[str, str]]]) -> None:
    """Enters a part; the first unit gives the path, the others add their pins."""
    path, symbol, fields, kinds = what
    del fields["Reference"]
    own = f"/{'/'.join([*path.split('/')[2:], _value(symbol, 'uuid')])}"
    entry = (own, _value(symbol, "dnp") == "no", fields, kinds)
    if before := found.parts.get(reference):
        entry = (str(before[0]), entry[1], fields, {**before[3], **kinds})  # type: ignore[dict-item]
    found.parts[reference] = entry


# --- nets ---------------------------------------------------------------------------------------------


def _nets(found: _Found) -> dict[tuple[str, str], str]:
    """(Reference, pin) -> name of the net."""
    names: dict[tuple[str, str], str] = {}
    twins = Counter((ref, name) for pins in found.pins.values() for ref, _, name in pins)
    for points in nx.connected_components(found.graph):
        pins = sorted(pin for key in points for pin in found.pins.get(key, []) if not pin[0].startswith("#"))
        given = sorted(found.names[key] for key in points if key in found.names)
        name = given[0][2] if given else _name_after_pins(pins, twins)
        names |= {(ref, number): name for ref, number, _ in pins}
    return names


def _name_after_pins(pins: list[tuple[str, str, str]], twins: Counter[tuple[str, str]]) -> str:
    if len(pins) == 1:
        [(ref, number, name)] = pins
        return (
            f"unconnected-({ref}-{name}-Pad{number})"
            if name not in {"", number}
            else f"unconnected-({ref}-Pad{number})"
        )
    texts = []
    for ref, number, name in pins:
        pad = f"-Pad{number}" if not name or twins[ref, name] > 1 else ""
        texts.append(f"Net-({ref}{f'-{name}' if name else ''}{pad})")
    return min(texts, key=lambda text: ("-Pad" in text, text), default="")
