"""The names of nets, as boards store them.

The strongest thing on a net names it; among equals the one nearer the root, then the first by letters. A net
that nothing names takes its name from a pin.
"""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from typing import TYPE_CHECKING

from gatecheck.design.wiring import Strength

if TYPE_CHECKING:
    from collections.abc import Sequence

    from gatecheck.design.wiring import Naming, PlacedPin

# From this version on, pins' names stand in the names of nets.
_NAMES_OF_PINS = 20230121


@dataclass(frozen=True, slots=True)
class NetPin:
    """A pin of a part, under one of its numbers. `alone_in_unit`: no other pin of its unit has its name."""

    pin: PlacedPin
    number: str
    alone_in_unit: bool


def net_name(namings: Sequence[Naming], pins: Sequence[NetPin], *, version: int) -> str:
    """The name of one net, from what could name it and the pins of its parts (at least one)."""
    if namings:
        best = min(namings, key=_order)
        return _full(best)
    if len({(pin.pin.symbol.reference, pin.number) for pin in pins}) == 1:
        return f"unconnected-({_pin_name(pins[0], version, single=True)})"
    names = [_pin_name(pin, version, single=False) for pin in pins]
    return f"Net-({min(names, key=lambda name: ('-Pad' in name, name))})"


def _order(naming: Naming) -> tuple[int, bool, int, str]:
    # Among sheet pins an output comes first; nothing else is ever not loud.
    return naming.strength, not naming.loud, naming.use.depth, _full(naming)


def _full(naming: Naming) -> str:
    text = naming.text.replace("/", "{slash}")
    return text if naming.strength in (Strength.GLOBAL, Strength.POWER) else naming.use.name + text


def _pin_name(entry: NetPin, version: int, *, single: bool) -> str:
    symbol = entry.pin.symbol
    reference, name = symbol.reference, entry.pin.name.replace("/", "{slash}")
    if version < _NAMES_OF_PINS or not name or name == entry.number:
        return f"{reference}-Pad{entry.number}"
    letter = unit_letter(symbol.unit) if symbol.library.units > 1 else ""
    tail = f"-Pad{entry.number}" if single or not entry.alone_in_unit else ""
    return f"{reference}{letter}-{name}{tail}"


def unit_letter(unit: int) -> str:
    """A, B, ... Z, AA for units 1, 2, ... 26, 27."""
    letters = ""
    while unit > 0:
        unit, rest = divmod(unit - 1, 26)
        letters = chr(ord("A") + rest) + letters
    return letters


def told_apart(names: Sequence[str]) -> list[str]:
    """Equal names of different nets get `_1`, `_2` in the order given."""
    seen: Counter[str] = Counter()
    result = []
    for name in names:
        result.append(f"{name}_{seen[name]}" if seen[name] else name)
        seen[name] += 1
    return result
