"""Symbols standing on a sheet: parts with their references on every page, and supply symbols."""

from __future__ import annotations

from typing import TYPE_CHECKING

from .glyphs import STEP_MM
from .sexpr_text import NO, YES, Node, Word
from .symbols import LIBRARY
from .write_symbols import TEXT_MM, font

if TYPE_CHECKING:
    from .drawing import Placed
    from .schematics import Schematic, SheetFile

Place = tuple[float, float]

# Width of a letter and distance of two lines in steps, for text of the usual size: our estimate.
_LETTER = 0.45
_LINE = 0.8
# Pins at both sides, and names of nets on the wires below them.
_TALL = {"Relay_SPDT"}


def part_node(schematic: Schematic, file: SheetFile, placed: Placed) -> Node:
    """The symbol of a part, or of one unit of it."""
    circuit = schematic.circuit
    users = [schematic.parts(sheet)[placed.name] for sheet in file.shown]
    part = users[0]
    own = circuit.symbol_identifier(part)
    if placed.unit > 1:
        own = circuit.identifier("symbol", placed.name, "unit", placed.unit)
    top, bottom = _text_places(placed, part.ref, part.value)
    hidden = (
        ("Footprint", f"{LIBRARY}:{part.package}"),
        ("Datasheet", ""),
        ("Description", part.description or part.symbol.description),
        *part.fields,
    )
    return (
        "symbol",
        *_head(placed, in_bom=bool(part.symbol.pins), fitted=part.fitted),
        ("uuid", own),
        _property(placed, "Reference", part.ref, top),
        _property(placed, "Value", part.value, bottom),
        *(_property(placed, name, text, placed.at, hide=True) for name, text in hidden),
        *(("pin", pin.number, ("uuid", circuit.identifier(own, "pin", pin.number))) for pin in part.symbol.pins),
        ("instances", ("project", circuit.name, *_paths(schematic, file, placed, [user.ref for user in users]))),
    )


def power_node(schematic: Schematic, file: SheetFile, index: int, placed: Placed) -> Node:
    """The symbol of a supply net; its reference starts with # and counts from 100 times the page below the root."""
    circuit = schematic.circuit
    prefix = "#FLG" if placed.name == "PWR_FLAG" else "#PWR"
    refs = [f"{prefix}{100 * (schematic.page(sheet) - 1) + index:03d}" for sheet in file.shown]
    own = circuit.identifier("drawing", "" if file.shown == (None,) else file.name, "power", index)
    text_at = placed.point(0, -1.6 if placed.name == "GND" else 1.5)
    if placed.angle_deg in {90, 270}:
        text_at = placed.point(0, 1.3 + _LETTER * len(placed.name) / 2)
    return (
        "symbol",
        *_head(placed, in_bom=True, fitted=True),
        ("uuid", own),
        _property(placed, "Reference", refs[0], placed.at, hide=True),
        _property(placed, "Value", placed.name, text_at),
        *(_property(placed, name, "", placed.at, hide=True) for name in ("Footprint", "Datasheet")),
        _property(placed, "Description", placed.symbol.description, placed.at, hide=True),
        ("pin", "1", ("uuid", circuit.identifier(own, "pin", "1"))),
        ("instances", ("project", circuit.name, *_paths(schematic, file, placed, refs))),
    )


def _head(placed: Placed, *, in_bom: bool, fitted: bool) -> list[Node]:
    mirror: list[Node] = [("mirror", Word(placed.mirror))] if placed.mirror else []
    return [
        ("lib_id", f"{LIBRARY}:{placed.symbol.name}"),
        ("at", placed.at[0] * STEP_MM, placed.at[1] * STEP_MM, placed.angle_deg),
        *mirror,
        ("unit", placed.unit),
        ("exclude_from_sim", NO),
        ("in_bom", YES if in_bom else NO),
        ("on_board", YES),
        ("dnp", NO if fitted else YES),
    ]


def _paths(schematic: Schematic, file: SheetFile, placed: Placed, refs: list[str]) -> list[Node]:
    return [
        ("path", schematic.path(sheet), ("reference", ref), ("unit", placed.unit))
        for sheet, ref in zip(file.shown, refs, strict=True)
    ]


def _property(placed: Placed, name: str, text: str, at: Place, *, hide: bool = False) -> Node:
    """A text of the symbol, level on screen: its angle is counted from the symbol's."""
    x, y = (round(value * STEP_MM, 2) for value in at)
    hidden: list[Node] = [("hide", YES)] if hide else []
    return ("property", name, text, ("at", x, y, placed.angle_deg % 180), font(*hidden, size_mm=TEXT_MM))


def _text_places(placed: Placed, reference: str, value: str) -> tuple[Place, Place]:
    """Middles of reference and value: beside an upright part, else on the sides where no pin is in the way."""
    left, top, right, bottom = placed.body
    middle, points = (left + right) / 2, placed.pins.values()
    straddled = any(x < left for x, _ in points) and any(x > right for x, _ in points)
    has_above, has_below = any(y < top for _, y in points), any(y > bottom for _, y in points)
    if straddled and placed.symbol.name not in _TALL and not has_above and not has_below:
        return (middle, top - 0.5), (middle, bottom + 0.5)
    if not straddled and len(points) > 1 and placed.mirror != "y":
        return _column(right + 0.4, (top + bottom) / 2, reference, value)
    if has_above and has_below:
        return _column(right + 0.4, bottom + _LINE, reference, value)
    if has_above:
        return (middle, bottom + 0.5), (middle, bottom + 0.5 + _LINE)
    return (middle, top - 0.5 - _LINE), (middle, top - 0.5)


def _column(left: float, middle: float, upper: str, lower: str) -> tuple[Place, Place]:
    """Two lines of text that start at the same place."""
    return (
        (left + _LETTER * len(upper) / 2, middle - _LINE / 2),
        (left + _LETTER * len(lower) / 2, middle + _LINE / 2),
    )
