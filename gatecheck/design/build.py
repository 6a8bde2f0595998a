"""Syntax to Design: the one place where millimetres become metres and pads become pins."""

from __future__ import annotations

import math
import re
from collections import Counter, defaultdict
from typing import TYPE_CHECKING

from gatecheck.design.model import Pad, Part, Pin, Place, joined
from gatecheck.parse.fields import unescaped

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from gatecheck.design.model import Design
    from gatecheck.parse.board import BoardFile, FootprintForm, PadForm
    from gatecheck.parse.netlist import Component, NetlistFile, NetNode

_MM = 1e-3
# Bare or flagged words in a part's attributes that say it is not fitted.
_NOT_FITTED = "dnp"
_DIGITS = re.compile(r"([0-9]+)")
_LONGEST_NAME = 200
_NUMBERED_FUNCTIONS = 10


def from_board(board: BoardFile) -> Design:
    """The Design of a board alone."""
    path = board.document.path
    names = identities(form.reference for form in board.footprints)
    parts = {name: _part_of_footprint(name, form, path) for name, form in zip(names, board.footprints, strict=True)}
    return joined(path, "board", parts)


def from_netlist(netlist: NetlistFile) -> Design:
    """The Design of an exported netlist alone."""
    path = netlist.document.path
    nodes: dict[str, list[tuple[str, NetNode]]] = defaultdict(list)
    for net, entries in netlist.nets.items():
        for node in entries:
            nodes[node.reference].append((net, node))
    parts = {}
    names = identities(component.reference for component in netlist.components)
    for name, component in zip(names, netlist.components, strict=True):
        # Of duplicate references a netlist joins the pins; they go to the first part of that name.
        mine = nodes.pop(component.reference, [])
        parts[name] = _part_of_component(name, component, mine, netlist, path)
    for reference, mine in nodes.items():
        # Pins of a part that the file does not list: kept, so that nothing of the net is lost.
        name = reference if reference not in parts else f"{reference}~"
        parts[name] = _unlisted_part(name, reference, mine, path)
    return joined(path, "netlist", parts)


def identities(references: Iterable[str]) -> list[str]:
    """`R5` where there is one R5, `R5~2` for the second in file order; unnamed parts are `~1`, `~2`."""
    listed = list(references)
    taken, seen = set(listed), Counter[str]()
    names = []
    for reference in listed:
        seen[reference] += 1
        name = reference if seen[reference] == 1 and reference else f"{reference}~{seen[reference]}"
        while name != reference and name in taken:  # somebody may have called a part `R5~2`
            seen[reference] += 1
            name = f"{reference}~{seen[reference]}"
        taken.add(name)
        names.append(name)
    return names


def _part_of_footprint(name: str, form: FootprintForm, path: str) -> Part:
    attributes = form.attributes
    return Part(
        id=name,
        reference=form.reference,
        value=form.value,
        footprint=form.library,
        library="",
        description=form.fields.get("Description", "") or form.fields.get("ki_description", ""),
        keywords=" ".join(filter(None, (form.fields.get("ki_keywords", ""), form.description, form.tags))),
        fields=form.fields,
        fitted=_NOT_FITTED not in attributes,
        symbol_path=form.symbol_path,
        units=form.units,
        net_ties=form.net_ties,
        pins=_pins_of_pads(name, form),
        place=Place(path, form.start, form.x_mm * _MM, form.y_mm * _MM, form.layer),
        side="bottom" if form.layer == "B.Cu" else "top",
    )


def _pins_of_pads(name: str, form: FootprintForm) -> tuple[Pin, ...]:
    """Pads of one number and one net are one terminal; pads without a number or without copper are none."""
    grouped: dict[tuple[str, str], list[PadForm]] = defaultdict(list)
    for pad in form.pads:
        if pad.number and pad.kind != "np_thru_hole" and any(".Cu" in layer for layer in pad.layers):
            grouped[pad.number, pad.net].append(pad)
    turn = math.radians(form.angle_deg)
    cos, sin = math.cos(turn), math.sin(turn)
    return tuple(
        Pin(
            part=name,
            number=number,
            function=unescaped(next((pad.function for pad in pads if pad.function), "")),
            electrical=next((pad.electrical for pad in pads if pad.electrical), ""),
            net=net,
            pads=tuple(_pad(pad, form, cos, sin) for pad in pads),
        )
        for (number, net), pads in grouped.items()
    )


def _pad(pad: PadForm, form: FootprintForm, cos: float, sin: float) -> Pad:
    """To board axes: y points down, so a positive angle turns counter-clockwise on screen."""
    x_mm = form.x_mm + pad.x_mm * cos + pad.y_mm * sin
    y_mm = form.y_mm - pad.x_mm * sin + pad.y_mm * cos
    if pad.offset_mm != (0.0, 0.0):
        own = math.radians(pad.angle_deg)
        dx, dy = pad.offset_mm
        x_mm += dx * math.cos(own) + dy * math.sin(own)
        y_mm += dy * math.cos(own) - dx * math.sin(own)
    return Pad(
        number=pad.number,
        kind=pad.kind,
        shape=pad.shape,
        x_m=x_mm * _MM,
        y_m=y_mm * _MM,
        angle_deg=pad.angle_deg,
        width_m=pad.width_mm * _MM,
        height_m=pad.height_mm * _MM,
        corner_ratio=pad.corner_ratio,
        layers=pad.layers,
        offset=pad.start,
    )


def _part_of_component(
    name: str, component: Component, nodes: list[tuple[str, NetNode]], netlist: NetlistFile, path: str
) -> Part:
    library = {pin.number: pin for pin in netlist.library_pins.get((component.library, component.part), ())}
    pins = []
    for net, node in nodes:
        known = library.get(node.pin)
        pins.append(
            Pin(
                part=name,
                number=node.pin,
                function=unescaped(known.name if known is not None and known.name else _plain(node, netlist)),
                electrical=node.electrical or (known.electrical if known is not None else ""),
                net=net,
            )
        )
    on_nets = {node.pin for _, node in nodes}
    pins += [
        Pin(name, pin.number, pin.name, pin.electrical, "") for pin in library.values() if pin.number not in on_nets
    ]
    flags = {flag.lower() for flag in component.flags}
    return Part(
        id=name,
        reference=component.reference,
        value=component.value,
        footprint=component.footprint or component.fields.get("Footprint", ""),
        library=f"{component.library}:{component.part}" if component.part else "",
        description=component.description,
        keywords=component.fields.get("ki_keywords", ""),
        fields=component.fields,
        fitted=_NOT_FITTED not in flags,
        symbol_path=component.symbol_path,
        units=component.units,
        net_ties=(),
        pins=tuple(pins),
        place=Place(path, component.start),
    )


def _unlisted_part(name: str, reference: str, nodes: list[tuple[str, NetNode]], path: str) -> Part:
    pins = tuple(Pin(name, node.pin, unescaped(node.function), node.electrical, net) for net, node in nodes)
    return Part(
        id=name,
        reference=reference,
        value="",
        footprint="",
        library="",
        description="",
        keywords="",
        fields={},
        fitted=True,
        symbol_path="",
        units=(),
        net_ties=(),
        pins=pins,
        place=Place(path, nodes[0][1].start),
    )


def _plain(node: NetNode, netlist: NetlistFile) -> str:
    """Exporters from version 10 on append the pin number to the function: `G_1` on pin 1 is `G`."""
    suffix = f"_{node.pin}"
    if netlist.release < _NUMBERED_FUNCTIONS or node.function == suffix:
        return node.function
    return node.function.removesuffix(suffix)


def pins_by_net(design: Design) -> Mapping[str, list[tuple[str, str]]]:
    """(reference, pin number) of every net, each once, in natural order: what `gatecheck nets` shows."""
    return {
        name: sorted({(design.parts[pin.part].reference, pin.number) for pin in design.nets[name]}, key=_natural_pair)
        for name in sorted(design.nets)
    }


def _natural_pair(pair: tuple[str, str]) -> tuple[object, ...]:
    return (natural(pair[0]), natural(pair[1]))


def natural(word: str) -> tuple[tuple[int, int, str], ...]:
    """A sort key by which R9 comes before R10; only the start of a very long word counts."""
    pieces = _DIGITS.split(word[:_LONGEST_NAME])
    return tuple((0, int(piece[:18]), piece) if piece.isdecimal() else (1, 0, piece) for piece in pieces if piece)
