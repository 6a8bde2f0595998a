"""The symbols that a schematic file keeps copies of, as the version 20250114 (v9) writes them."""

from __future__ import annotations

from typing import TYPE_CHECKING

from .glyphs import STEP_MM, shows_names, units
from .sexpr_text import NO, YES, Node, Word
from .symbols import LIBRARY

if TYPE_CHECKING:
    from collections.abc import Iterator

    from .glyphs import Glyph, PinPlace
    from .symbols import Symbol

TEXT_MM = 1.27
_LINE_MM = 0.254


def font(*extra: Node, size_mm: float = TEXT_MM) -> Node:
    """Effects of a text."""
    return ("effects", ("font", ("size", size_mm, size_mm)), *extra)


def is_power(symbol: Symbol) -> bool:
    """Whether the symbol names a net or marks one as supplied instead of being a part."""
    return symbol.name in {"GND", "PWR_FLAG"} or symbol.name.startswith("+")


def library_symbol(symbol: Symbol, prefix: str) -> Node:
    """The whole symbol; `prefix` is the letter of its references."""
    properties = (
        ("Reference", prefix, ()),
        ("Value", symbol.name, ()),
        ("Footprint", "", (("hide", YES),)),
        ("Datasheet", "", (("hide", YES),)),
        ("Description", symbol.description, (("hide", YES),)),
    )
    return (
        "symbol",
        f"{LIBRARY}:{symbol.name}",
        *_heads(symbol),
        ("exclude_from_sim", NO),
        ("in_bom", YES),
        ("on_board", YES),
        *(("property", name, text, ("at", 0, 0, 0), font(*hidden)) for name, text, hidden in properties),
        *_units(symbol),
        ("embedded_fonts", NO),
    )


def _heads(symbol: Symbol) -> Iterator[Node]:
    if is_power(symbol):
        yield ("power",)
    if not shows_names(symbol):
        yield ("pin_numbers", ("hide", YES))
        yield ("pin_names", ("offset", 0), ("hide", YES))


def _units(symbol: Symbol) -> Iterator[Node]:
    for i, glyph in enumerate(units(symbol), start=1):
        strokes = (_stroke(text) for text in glyph.strokes)
        yield ("symbol", f"{symbol.name}_{i}_1", *strokes, *_pins(symbol, glyph))


def _stroke(text: str) -> Node:
    """One line of the drawing; the words are those of `glyphs.py`."""
    kind, *points = text.removeprefix("filled ").split()
    filled = text.startswith("filled")
    look: tuple[Node, ...] = (
        ("stroke", ("width", _LINE_MM), ("type", Word("default"))),
        ("fill", ("type", Word("outline" if filled else "background" if kind == "box" else "none"))),
    )
    if kind == "circle":
        centre, radius = points
        return ("circle", ("center", *_place(centre)), ("radius", float(radius) * STEP_MM), *look)
    if kind == "box":
        return ("rectangle", ("start", *_place(points[0])), ("end", *_place(points[1])), *look)
    return ("polyline", ("pts", *(("xy", *_place(point)) for point in points)), *look)


def _place(text: str) -> tuple[float, float]:
    x, y = text.split(",")
    return float(x) * STEP_MM, float(y) * STEP_MM


def _pins(symbol: Symbol, glyph: Glyph) -> Iterator[Node]:
    by_number = {pin.number: pin for pin in symbol.pins}
    for place in glyph.pins:
        pin = by_number[place.number]
        yield (
            "pin",
            Word(pin.kind),
            Word("line"),
            _pin_at(place),
            ("length", place.length * STEP_MM),
            ("name", pin.name or "~", font()),
            ("number", pin.number, font()),
        )


def _pin_at(place: PinPlace) -> Node:
    return ("at", place.at[0] * STEP_MM, place.at[1] * STEP_MM, place.angle_deg)
