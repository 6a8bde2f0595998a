"""What sort of part each part is: resistor, bead, diode, driver-like chip, connector.

References are habits, not law (`RGate1`, `U7` for a transistor), so library name, footprint, value and pin
functions are heard first.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from enum import StrEnum
from typing import TYPE_CHECKING

from gatecheck.catalogue.load import pin_is, plain_pin_name, word_in
from gatecheck.values import Kind, Value, parse_value

if TYPE_CHECKING:
    from gatecheck.design.model import Part, Pin


class Sort(StrEnum):
    """Sorts of parts that a gate network cares about."""

    RESISTOR = "resistor"
    BEAD = "bead"
    INDUCTOR = "inductor"
    CAPACITOR = "capacitor"
    DIODE = "diode"
    ZENER = "zener"  # anything that limits a voltage: Zener, TVS, varistor
    LED = "led"
    TRANSISTOR = "transistor"
    CHIP = "chip"
    CONNECTOR = "connector"
    TEST_POINT = "test point"
    NET_TIE = "net tie"  # copper
    JUMPER = "jumper"  # a link that is closed or open as drawn or plugged
    ARRAY = "array"  # several resistors in one body
    FUSE = "fuse"
    WINDING = "winding"  # transformers and common-mode chokes
    OTHER = "other"


@dataclass(frozen=True, slots=True)
class Kinded:
    """A part with its sort and what its value text says."""

    sort: Sort
    value: Value | None
    fitted: bool


# Reference letters, longest first. Origin: IEC 81346-2 and ASME Y14.44 letters, and common practice.
_LETTERS: dict[str, Sort] = {
    "FB": Sort.BEAD, "FER": Sort.BEAD, "BEAD": Sort.BEAD,
    "LED": Sort.LED, "LD": Sort.LED,
    "DZ": Sort.ZENER, "ZD": Sort.ZENER, "TVS": Sort.ZENER, "VZ": Sort.ZENER, "DTVS": Sort.ZENER,
    "RV": Sort.ZENER, "MOV": Sort.ZENER, "VDR": Sort.ZENER,
    "TP": Sort.TEST_POINT, "TEST": Sort.TEST_POINT, "TPT": Sort.TEST_POINT,
    "NT": Sort.NET_TIE, "JP": Sort.JUMPER, "SJ": Sort.JUMPER, "W": Sort.JUMPER,
    "RN": Sort.ARRAY, "RA": Sort.ARRAY, "RP": Sort.ARRAY, "CR": Sort.DIODE,
    "CN": Sort.CONNECTOR, "CON": Sort.CONNECTOR, "CONN": Sort.CONNECTOR, "TB": Sort.CONNECTOR,
    "J": Sort.CONNECTOR, "P": Sort.CONNECTOR, "X": Sort.CONNECTOR,
    "IC": Sort.CHIP, "U": Sort.CHIP, "OK": Sort.CHIP, "OPTO": Sort.CHIP, "DRV": Sort.CHIP,
    "TX": Sort.WINDING, "TR": Sort.WINDING, "XFMR": Sort.WINDING, "CMC": Sort.WINDING,
    "RLY": Sort.OTHER, "REL": Sort.OTHER, "SW": Sort.OTHER, "BT": Sort.OTHER, "MH": Sort.OTHER,
    "FID": Sort.OTHER, "HOLE": Sort.OTHER, "LOGO": Sort.OTHER,
    "Q": Sort.TRANSISTOR, "FET": Sort.TRANSISTOR, "MOSFET": Sort.TRANSISTOR, "IGBT": Sort.TRANSISTOR,
    "R": Sort.RESISTOR, "C": Sort.CAPACITOR, "D": Sort.DIODE, "L": Sort.INDUCTOR, "F": Sort.FUSE,
}  # fmt: skip
# Words in library and footprint names, tried in this order. Origin: common practice.
_WORDS: tuple[tuple[re.Pattern[str], Sort], ...] = tuple(
    (re.compile(pattern, re.IGNORECASE), sort)
    for pattern, sort in (
        (r"net.?tie", Sort.NET_TIE),
        (r"solder.?jumper|jumper", Sort.JUMPER),
        (r"r_?array|r_?pack|resistor.?(?:array|network|pack)", Sort.ARRAY),
        (r"test.?(point|pad)|measurement.?point", Sort.TEST_POINT),
        (r"ferrite|bead", Sort.BEAD),
        (r"common.?mode|cmc|coupled.?(?:choke|inductor)|transformer|xfmr", Sort.WINDING),
        (r"varistor|zener|tvs|transil|suppressor", Sort.ZENER),
        (r"thermistor|ntc|fuse|polyfuse", Sort.FUSE),
        (r"\bleds?\b|led_", Sort.LED),
        (r"pin.?header|connector|terminal.?block|conn_|jst|molex|phoenix", Sort.CONNECTOR),
    )
)
_VALUE_KIND = {
    Sort.RESISTOR: Kind.RESISTOR,
    Sort.BEAD: Kind.BEAD,
    Sort.INDUCTOR: Kind.INDUCTOR,
    Sort.CAPACITOR: Kind.CAPACITOR,
    Sort.DIODE: Kind.DIODE,
    Sort.ZENER: Kind.DIODE,
    Sort.ARRAY: Kind.RESISTOR,
}
_SORT_OF_VALUE = {
    Kind.BEAD: Sort.BEAD,
    Kind.INDUCTOR: Sort.INDUCTOR,
    Kind.THERMISTOR: Sort.FUSE,
    Kind.CHOKE: Sort.WINDING,
}
_TWO_TERMINALS = (Sort.RESISTOR, Sort.BEAD, Sort.INDUCTOR, Sort.CAPACITOR, Sort.FUSE)
_MANY_PINS = 6
# Solder jumpers say in their names how they are drawn; one that says nothing is taken as closed.
_OPEN_JUMPER = re.compile(r"open", re.IGNORECASE)
# Our choice: words stand at the start of a name; bounds the search on hostile ones.
_LONGEST = 200


def kind_of(part: Part) -> Kinded:
    """Sort, value and fittedness of a part.

    `dnp` in the value counts as not fitted, like the flag.
    """
    sort = _sort(part)
    if sort is Sort.JUMPER:
        return Kinded(sort, None, part.fitted and _OPEN_JUMPER.search(_named(part)) is None)
    if sort not in _VALUE_KIND:
        return Kinded(sort, None, part.fitted)
    value = parse_value(part.value, kind=_VALUE_KIND[sort])
    override = _SORT_OF_VALUE.get(value.kind)
    if sort is Sort.BEAD and "jumper" in value.flags:
        sort = Sort.RESISTOR  # a link in the bead's place: there is no bead
    elif override is not None and sort in (Sort.RESISTOR, Sort.BEAD, Sort.INDUCTOR):
        sort = override
    return Kinded(sort, value, part.fitted and value.fitted)


def _sort(part: Part) -> Sort:
    letter = _by_letter(part)
    if letter is not Sort.CONNECTOR and (gated(part.pins) or bipolar(part)):
        return Sort.TRANSISTOR
    if part.net_ties:
        return Sort.NET_TIE
    named = _named(part)
    by_word = next((sort for pattern, sort in _WORDS if pattern.search(named)), None)
    by_letter = letter
    if by_word in (Sort.NET_TIE, Sort.JUMPER, Sort.ARRAY, Sort.TEST_POINT, Sort.CONNECTOR) or by_letter in (
        None,
        Sort.CHIP,
        Sort.OTHER,
    ):
        sort = by_word or by_letter or _by_pins(part)
    elif by_letter in (Sort.DIODE, Sort.INDUCTOR, Sort.RESISTOR, Sort.FUSE):
        sort = by_word or (Sort.ZENER if by_letter is Sort.DIODE and _limits_voltage(part) else by_letter)
    else:
        sort = by_letter
    nets = len(part.nets())
    if sort in _TWO_TERMINALS and nets > 2:  # noqa: PLR2004 (arrays, four-terminal shunts, chokes)
        if sort is Sort.RESISTOR and nets > 3:  # noqa: PLR2004 (four ends of two resistors at least)
            return Sort.ARRAY
        return Sort.WINDING if sort in (Sort.INDUCTOR, Sort.BEAD) else Sort.OTHER
    return sort


def _named(part: Part) -> str:
    """Symbol and footprint names, where words tell the sort; old boards tie nets with a tag."""
    tags = "net tie" if "net tie" in part.keywords.lower() else ""
    return f"{part.library.rpartition(':')[2]} {part.footprint}"[:_LONGEST] + tags


def _by_letter(part: Part) -> Sort | None:
    letters = re.match(r"[A-Za-z]*", part.reference[:_LONGEST]).group(0).upper()  # type: ignore[union-attr]  # matches empty
    if letters in _LETTERS:
        return _LETTERS[letters]
    # `Rdamp1`, `CBOOT2`, `Dz1`: the first letter says it when the part has two ends.
    if letters and len(part.nets()) <= 2 and letters[0] in "RCDLQ":  # noqa: PLR2004 (two ends)
        return _LETTERS[letters[0]]
    return Sort.CHIP if len({pin.number for pin in part.pins}) >= _MANY_PINS else None


def _by_pins(part: Part) -> Sort:
    return Sort.CHIP if len({pin.number for pin in part.pins}) >= _MANY_PINS else Sort.OTHER


def _limits_voltage(part: Part) -> bool:
    said = f"{part.value} {part.description} {part.keywords} {part.library}"[: 5 * _LONGEST]
    return re.search(r"zener|tvs|transil|suppressor|bidirectional", said, re.IGNORECASE) is not None


def gated(pins: tuple[Pin, ...]) -> bool:
    """Do the pin functions, or pads called G, S and D, make this a transistor with a gate?"""
    names = [name for name in (terminal_name(pin) for pin in pins) if name]
    if not any(_any_of(("gate",), name) for name in names):
        return False
    rest = [name for name in names if not _any_of(("gate",), name)]
    if not any(_any_of(("source", "drain", "emitter", "collector"), name) for name in rest):
        return False
    # A driver may well have pins G and S; a transistor has hardly anything else.
    known = [_any_of(("source", "drain", "emitter", "collector", "kelvin"), name) for name in rest]
    return sum(known) >= len(known) - 2


def bipolar(part: Part) -> bool:
    """Do pin functions or the symbol's name make this a transistor with a base?"""
    names = [plain_pin_name(pin.function) for pin in part.pins if pin.function]
    if any(pin_is("base", name) for name in names):
        return any(pin_is("emitter", name) for name in names) and any(pin_is("collector", name) for name in names)
    symbol = f"{part.library} {part.value} {part.description}"
    return bool(word_in("bipolar", symbol.replace("_", " "))) and not any(names)


def terminal_name(pin: Pin) -> str:
    """What the file calls a transistor's pin: its function, else the pad's own name if that is a letter."""
    if pin.function and pin.function != pin.number:
        return pin.function
    return pin.number if pin.number[:1].isalpha() else ""


def _any_of(groups: tuple[str, ...], name: str) -> bool:
    return any(pin_is(group, piece) for piece in name.split("/") for group in groups)
