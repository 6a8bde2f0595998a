"""One part as the footprint list of a board file."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from .circuit import human_path
from .sexpr_text import NO, YES, Node, Word
from .symbols import LIBRARY

if TYPE_CHECKING:
    from collections.abc import Iterator

    from .circuit import Circuit, Part
    from .footprints import Box, Pad, Point

_SILK_WIDTH_MM = 0.12
_YARD_WIDTH_MM = 0.05
_FAB_WIDTH_MM = 0.1


@dataclass(frozen=True, slots=True)
class Dialect:
    """What differs between the two board versions that are written."""

    version: int
    release: str
    nets_by_number: bool


V9 = Dialect(20241229, "9.0", nets_by_number=True)
V10 = Dialect(20260206, "10.0", nets_by_number=False)


def net_node(circuit: Circuit, dialect: Dialect, net: str, *, full: bool = False) -> Node:
    """The net of an item: by number (and name if `full`) up to v9, by name from v10 on."""
    if not dialect.nets_by_number:
        return ("net", net)
    number = circuit.nets.index(net) + 1
    return ("net", number, net) if full else ("net", number)


def footprint_node(circuit: Circuit, part: Part, dialect: Dialect) -> Node:
    """The whole footprint."""
    footprint = part.footprint
    flags = [footprint.attribute, *(["dnp"] if not part.fitted else [])]
    if not part.symbol.pins:
        flags.append("exclude_from_bom")
    tail: list[Node] = [("embedded_fonts", NO)]
    if not dialect.nets_by_number:
        tail.insert(0, ("duplicate_pad_numbers_are_jumpers", NO))
    return (
        "footprint",
        f"{LIBRARY}:{part.package}",
        ("layer", "F.Cu"),
        ("uuid", circuit.identifier(part.ref)),
        _at(part.at_mm, part.angle_deg),
        ("descr", footprint.description),
        ("tags", footprint.name.split("_")[0].lower()),
        *_properties(circuit, part),
        ("path", circuit.sheet_path(part.sheet) + circuit.symbol_identifier(part)),
        ("sheetname", human_path(part.sheet)),
        ("sheetfile", part.sheet.file if part.sheet else circuit.root_file),
        *_units(part, dialect),
        ("attr", *map(Word, flags)),
        *_drawings(circuit, part),
        *(_pad(circuit, part, i, dialect) for i in range(len(footprint.pads))),
        *tail,
    )


def text_effects(size_mm: float, *, thickness_mm: float) -> Node:
    """Font of a text."""
    return ("effects", ("font", ("size", size_mm, size_mm), ("thickness", thickness_mm)))


def stroke(width_mm: float) -> Node:
    """A solid line."""
    return ("stroke", ("width", width_mm), ("type", Word("solid")))


def _at(place: Point, angle_deg: float) -> Node:
    return ("at", *place, angle_deg) if angle_deg else ("at", *place)


def _properties(circuit: Circuit, part: Part) -> Iterator[Node]:
    left, top, right, bottom = part.footprint.courtyard_mm
    middle = (left + right) / 2
    shown = [
        ("Reference", part.ref, (middle, top - 0.75), "F.SilkS"),
        ("Value", part.value, (middle, bottom + 0.85), "F.Fab"),
    ]
    hidden = [("Datasheet", ""), ("Description", part.description or part.symbol.description), *part.fields]
    for name, text, place, layer in shown:
        yield (
            *_property_head(part, name, text, (round(place[0], 3), round(place[1], 3))),
            ("layer", layer),
            ("uuid", circuit.identifier(part.ref, "property", name)),
            text_effects(0.8, thickness_mm=0.12),
        )
    for name, text in hidden:
        yield (
            *_property_head(part, name, text, (0.0, 0.0)),
            ("unlocked", YES),
            ("layer", "F.Fab"),
            ("hide", YES),
            ("uuid", circuit.identifier(part.ref, "property", name)),
            text_effects(1.0, thickness_mm=0.15),
        )


def _property_head(part: Part, name: str, text: str, place: Point) -> Node:
    return ("property", name, text, ("at", *place, part.angle_deg % 180))


def _units(part: Part, dialect: Dialect) -> list[Node]:
    if dialect.nets_by_number or not part.symbol.pins:
        return []
    pins = (pin.number for pin in part.symbol.pins)
    return [("units", ("unit", ("name", "A"), ("pins", *pins)))]


def _drawings(circuit: Circuit, part: Part) -> Iterator[Node]:
    footprint = part.footprint
    lines = [(line, "F.SilkS", _SILK_WIDTH_MM) for line in footprint.silk_lines()]
    lines += [(line, "F.CrtYd", _YARD_WIDTH_MM) for line in _sides(footprint.courtyard_mm)]
    if footprint.round_body:
        yield from _circles(circuit, part)
    else:
        lines += [(line, "F.Fab", _FAB_WIDTH_MM) for line in _sides(footprint.body_mm)]
    for i, ((start, end), layer, width) in enumerate(lines):
        yield (
            "fp_line",
            ("start", *start),
            ("end", *end),
            stroke(width),
            ("layer", layer),
            ("uuid", circuit.identifier(part.ref, "line", i)),
        )
    yield (
        "fp_text",
        Word("user"),
        "${REFERENCE}",
        ("at", *_middle(footprint.body_mm), part.angle_deg % 180),
        ("layer", "F.Fab"),
        ("uuid", circuit.identifier(part.ref, "text")),
        text_effects(0.6, thickness_mm=0.09),
    )


def _middle(area: Box) -> Point:
    return round((area[0] + area[2]) / 2, 3), round((area[1] + area[3]) / 2, 3)


def _sides(area: Box) -> list[tuple[Point, Point]]:
    left, top, right, bottom = area
    corners = [(left, top), (right, top), (right, bottom), (left, bottom)]
    return [(corner, corners[(i + 1) % 4]) for i, corner in enumerate(corners)]


def _circles(circuit: Circuit, part: Part) -> Iterator[Node]:
    centre, right = _middle(part.footprint.body_mm), part.footprint.body_mm[2]
    for layer, width, grow in (("F.SilkS", _SILK_WIDTH_MM, 0.12), ("F.Fab", _FAB_WIDTH_MM, 0.0)):
        yield (
            "fp_circle",
            ("center", *centre),
            ("end", right + grow, centre[1]),
            stroke(width),
            ("fill", NO),
            ("layer", layer),
            ("uuid", circuit.identifier(part.ref, "circle", layer)),
        )


def _pad(circuit: Circuit, part: Part, index: int, dialect: Dialect) -> Node:
    pad = part.footprint.pads[index]
    items: list[Node] = [_at(pad.at_mm, part.angle_deg), ("size", *pad.size_mm)]
    if pad.drill_mm:
        items.append(("drill", pad.drill_mm))
    items.append(("layers", *_layers(pad, dialect)))
    if pad.kind == "thru_hole":
        items.append(("remove_unused_layers", NO))
    if pad.shape == "roundrect":
        items.append(("roundrect_rratio", pad.corner_share))
    items += _connection(circuit, part, pad, dialect)
    items.append(("uuid", circuit.identifier(part.ref, "pad", index)))
    return ("pad", pad.number, Word(pad.kind), Word(pad.shape), *items)


def _layers(pad: Pad, dialect: Dialect) -> list[str]:
    if dialect.nets_by_number:
        return list(pad.layers)
    return [layer.replace("F&B.Cu", "*.Cu") for layer in pad.layers]


def _connection(circuit: Circuit, part: Part, pad: Pad, dialect: Dialect) -> list[Node]:
    pin = part.pin_of(pad)
    if pin is None:
        return []
    items = [net_node(circuit, dialect, circuit.net_of(part, pin), full=True)]
    if pin.name:
        name = pin.name if dialect.nets_by_number else f"{pin.name}_{pin.number}"
        items.append(("pinfunction", name))
    items.append(("pintype", pin_type(circuit, part, pin.number)))
    return items


def pin_type(circuit: Circuit, part: Part, number: str) -> str:
    """The pin's kind; an open pin that could be used carries the no-connect mark besides."""
    kind = next(pin.kind for pin in part.symbol.pins if pin.number == number)
    is_open = circuit.net_names[part.ref, number].startswith("unconnected-")
    return f"{kind}+no_connect" if is_open and kind != "no_connect" else kind
