"""How symbols are drawn: places of the pins and the strokes of the body, in grid steps with y pointing up.

A pin reads `number x,y angle length`: the point that connects, then where the line runs from there. A stroke is
`box corner corner`, `line point point ...` or `circle centre radius`; `filled` before it paints it.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from . import symbols

if TYPE_CHECKING:
    from collections.abc import Mapping

    from .symbols import Symbol

# The trade's grid of 0.1 inch.
STEP_MM = 2.54

Grid = tuple[int, int]
"""A point in steps."""


@dataclass(frozen=True, slots=True)
class PinPlace:
    """Where a pin connects, the direction from there to the body, and the length of its line."""

    number: str
    at: Grid
    angle_deg: int
    length: float


@dataclass(frozen=True, slots=True)
class Glyph:
    """The drawing of one unit; `body` is left, bottom, right, top."""

    pins: tuple[PinPlace, ...]
    strokes: tuple[str, ...]
    body: tuple[float, float, float, float]


def _glyph(pins: str, body: str, *strokes: str) -> Glyph:
    """`pins` separated by commas and blanks, `body` as two corners."""
    places = []
    for text in filter(None, pins.split("; ")):
        number, at, angle, length = text.split()
        x, y = at.split(",")
        places.append(PinPlace(number, (int(x), int(y)), int(angle), float(length)))
    left, bottom, right, top = (float(word) for word in body.replace(",", " ").split())
    return Glyph(tuple(places), strokes, (left, bottom, right, top))


_UPRIGHT = "1 0,2 270 1; 2 0,-2 90 1"
_LYING = "1 -2,0 0 1.5; 2 2,0 180 1.5"
_PLATES = ("line -0.8,0.25 0.8,0.25", "line -0.8,-0.25 0.8,-0.25")
_TRIANGLE = "line 0.5,0.5 0.5,-0.5 -0.5,0 0.5,0.5"
_LEADS = "line -0.5,0 0.5,0"

_RESISTOR = _glyph(_UPRIGHT, "-0.4,-1 0.4,1", "box -0.4,-1 0.4,1")
_CAPACITOR = _glyph("1 0,2 270 1.75; 2 0,-2 90 1.75", "-0.8,-0.25 0.8,0.25", *_PLATES)
_POLARIZED = _glyph(
    "1 0,2 270 1.75; 2 0,-2 90 1.75", "-0.8,-0.25 0.8,0.8", *_PLATES, "line -0.9,0.7 -0.5,0.7", "line -0.7,0.9 -0.7,0.5"
)
_BEAD = _glyph(_UPRIGHT, "-0.6,-1 0.6,1", "line -0.6,-0.5 0.2,0.9 0.6,0.5 -0.2,-0.9 -0.6,-0.5", "line 0,1 0,-1")


def _diode(*bar: str) -> Glyph:
    return _glyph(_LYING, "-0.6,-0.6 0.6,0.6", _TRIANGLE, _LEADS, *bar)


# Gate at the left, the other two at the right: the upper one and the lower one in the order of the numbers.
_CHANNEL = (
    *("line -0.6,-0.8 -0.6,0.8", "line -0.3,-0.9 -0.3,-0.5", "line -0.3,-0.2 -0.3,0.2", "line -0.3,0.5 -0.3,0.9"),
    *("line 1,1 1,0.7 -0.3,0.7", "line 1,-1 1,-0.7 -0.3,-0.7", "line -0.3,0 0.4,0 0.4,-0.7"),
)
_POINTS_IN, _POINTS_OUT = "filled line -0.3,0 0.1,0.2 0.1,-0.2 -0.3,0", "filled line 0.4,0 0,0.2 0,-0.2 0.4,0"


def _switch(upper: str, lower: str, *strokes: str) -> Glyph:
    pins = f"1 -2,0 0 1.4; {upper} 1,2 270 1; {lower} 1,-2 90 1"
    return _glyph(pins, "-0.6,-1 1,1", *strokes)


_NPN_STROKES = (
    *("line -0.6,-0.7 -0.6,0.7", "line -0.6,0.3 1,1", "line -0.6,-0.3 1,-1"),
    "filled line 0.8,-0.9 0.3,-0.9 0.5,-0.55 0.8,-0.9",
)


def _side(pins: Mapping[str, int], *, x: int, angle_deg: int) -> list[str]:
    return [f"{number} {x},{y} {angle_deg} 2" for number, y in pins.items()]


def _driver() -> Glyph:
    """Logic at the left, the two drive stages at the right, open leads below."""
    left = {"9": 8, "1": 4, "2": 1, "3": -2, "4": -5, "5": -9}
    right = {"14": 8, "12": 4, "13": 0, "10": -6, "8": -9}
    below = [f"{number} {x},-13 90 2" for number, x in (("6", -2), ("7", 0), ("11", 2))]
    pins = [*_side(left, x=-6, angle_deg=0), *_side(right, x=6, angle_deg=180), *below]
    return _glyph("; ".join(pins), "-4,-11 4,10", "box -4,-11 4,10")


def _microcontroller() -> Glyph:
    """Supplies above, grounds below, port B at the right, everything else at the left."""
    left = {
        number: 13 - 2 * i
        for i, number in enumerate(["9", "10", "11", "15", "1", "2", "3", "4", "5", "6", "12", "13", "14", "16"])
    }
    right = {
        number: 11 - 2 * i
        for i, number in enumerate(["17", "18", "19", "20", "21", "22", "23", "24", "27", "28", "29", "30"])
    }
    above = [f"{number} {x},17 270 2" for number, x in (("8", -4), ("26", 0), ("32", 4))]
    below = [f"{number} {x},-17 90 2" for number, x in (("7", -4), ("25", 0), ("31", 4))]
    pins = [*_side(left, x=-8, angle_deg=0), *_side(right, x=8, angle_deg=180), *above, *below]
    return _glyph("; ".join(pins), "-6,-15 6,15", "box -6,-15 6,15")


def _connector(count: int) -> Glyph:
    """Pin 1 at the symbol's own height, the others below it."""
    pins = "; ".join(f"{i + 1} -2,{-i} 0 1.5" for i in range(count))
    body = f"-0.5,{0.6 - count} 0.5,0.4"
    return _glyph(pins, body, f"box {body}", *(f"filled box -0.5,{-i - 0.1} 0.1,{-i + 0.1}" for i in range(count)))


_RELAY_UNITS = (
    _glyph("A1 0,2 270 1; A2 0,-2 90 1", "-1,-1 1,1", "box -1,-1 1,1", "line -1,-0.5 1,0.5"),
    _glyph(
        "11 -3,0 0 1.5; 12 3,1 180 1.5; 14 3,-1 180 1.5",
        *("-1.5,-1 1.5,1", "circle -1.5,0 0.15", "circle 1.5,1 0.15", "circle 1.5,-1 0.15", "line -1.4,0.1 1.4,0.9"),
    ),
)

_UNITS: dict[str, tuple[Glyph, ...]] = {
    symbols.RESISTOR.name: (_RESISTOR,),
    symbols.CAPACITOR.name: (_CAPACITOR,),
    symbols.POLARIZED.name: (_POLARIZED,),
    symbols.BEAD.name: (_BEAD,),
    symbols.DIODE.name: (_diode("line -0.5,0.5 -0.5,-0.5"),),
    symbols.SCHOTTKY.name: (_diode("line -0.3,0.3 -0.3,0.5 -0.5,0.5 -0.5,-0.5 -0.7,-0.5 -0.7,-0.3"),),
    symbols.ZENER.name: (_diode("line -0.3,0.5 -0.5,0.5 -0.5,-0.5 -0.7,-0.5"),),
    symbols.LED.name: (_diode("line -0.5,0.5 -0.5,-0.5", "line -0.2,0.7 -0.7,1.2", "line 0.2,0.7 -0.3,1.2"),),
    symbols.TEST_POINT.name: (_glyph("1 0,-1 90 1", "-0.3,0 0.3,0.6", "circle 0,0.3 0.3"),),
    symbols.MOUNTING_HOLE.name: (_glyph("", "-0.6,-0.6 0.6,0.6", "circle 0,0 0.6", "circle 0,0 0.3"),),
    symbols.MOSFET_N_GDS.name: (_switch("2", "3", *_CHANNEL, _POINTS_IN),),
    symbols.MOSFET_N_GSD.name: (_switch("3", "2", *_CHANNEL, _POINTS_IN),),
    symbols.MOSFET_P_GDS.name: (_switch("2", "3", *_CHANNEL, _POINTS_OUT),),
    symbols.MOSFET_P_GSD.name: (_switch("3", "2", *_CHANNEL, _POINTS_OUT),),
    symbols.NPN_BEC.name: (_switch("3", "2", *_NPN_STROKES),),
    symbols.REGULATOR.name: (_glyph("3 -4,0 0 1; 2 4,0 180 1; 1 0,-3 90 1", "-3,-2 3,1", "box -3,-2 3,1"),),
    symbols.HALF_BRIDGE_DRIVER.name: (_driver(),),
    symbols.MICROCONTROLLER.name: (_microcontroller(),),
    symbols.RELAY.name: _RELAY_UNITS,
    "PWR_FLAG": (_glyph("1 0,0 90 0", "-0.4,0 0.4,1", "line 0,0 0,0.4 -0.4,0.7 0,1 0.4,0.7 0,0.4"),),
    "GND": (_glyph("1 0,0 270 0", "-0.5,-1 0.5,0", "line 0,0 0,-0.5 0.5,-0.5 0,-1 -0.5,-0.5 0,-0.5"),),
}
_RAIL = _glyph("1 0,0 90 0", "-0.3,0 0.3,1", "line -0.3,0.5 0,1 0.3,0.5", "line 0,0 0,1")

# Symbols whose pin names are drawn; the others say by their form what each pin is.
_NAMED = {symbols.REGULATOR.name, symbols.HALF_BRIDGE_DRIVER.name, symbols.MICROCONTROLLER.name}


def units(symbol: Symbol) -> tuple[Glyph, ...]:
    """The drawings of a symbol's units; a symbol that is not listed is a connector or a supply rail."""
    if symbol.name in _UNITS:
        return _UNITS[symbol.name]
    return (_RAIL,) if symbol.name.startswith("+") else (_connector(len(symbol.pins)),)


def shows_names(symbol: Symbol) -> bool:
    """Whether the pins' names are drawn."""
    return symbol.name in _NAMED
