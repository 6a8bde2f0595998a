"""Two-terminal elements: what a part is between its nets, and which way current may pass."""

from __future__ import annotations

import re
from collections import defaultdict
from dataclasses import dataclass
from itertools import pairwise, product
from typing import TYPE_CHECKING

from gatecheck.design.build import natural
from gatecheck.networks.kinds import Sort

if TYPE_CHECKING:
    from gatecheck.design.model import Pin
    from gatecheck.networks.kinds import Kinded

# A shunt: small enough that its two ends are one node for a gate's return. Our choice.
_SHUNT_OHM = 0.11
_TWO = 2
# Our choice: no tie joins more nets.
_MOST_TIED = 8


@dataclass(frozen=True, slots=True)
class Element:
    """A part between two nets. Current of a diode flows from `a` to `b` only; else `one_way` is False."""

    part: str
    sort: Sort
    a: str
    b: str
    one_way: bool = False
    ohm: float | None = None
    fitted: bool = True

    def other(self, net: str) -> str:
        """The net at the other end."""
        return self.b if net == self.a else self.a


def is_shunt(element: Element) -> bool:
    """A net tie, a link, or a resistor that measures current."""
    if element.sort is Sort.NET_TIE:
        return True
    return element.sort is Sort.RESISTOR and element.ohm is not None and element.ohm <= _SHUNT_OHM


ELEMENT_SORTS = (
    Sort.RESISTOR,
    Sort.BEAD,
    Sort.INDUCTOR,
    Sort.CAPACITOR,
    Sort.DIODE,
    Sort.ZENER,
    Sort.LED,
    Sort.NET_TIE,
    Sort.JUMPER,
    Sort.FUSE,
    Sort.ARRAY,
)


def elements_of(key: str, kinded: Kinded, pins: tuple[Pin, ...]) -> list[Element]:
    """The two-terminal elements of one part: several for an array, a dual diode or a tie of many nets."""
    nets = list(dict.fromkeys(pin.net for pin in pins if pin.net))
    sort, fitted = kinded.sort, kinded.fitted
    if sort in (Sort.DIODE, Sort.ZENER, Sort.LED):
        return [Element(key, sort, a, b, one_way=sure, fitted=fitted) for a, b, sure in _junctions(pins, nets)]
    if sort in (Sort.NET_TIE, Sort.JUMPER):
        return [Element(key, sort, a, b, fitted=fitted) for a, b in pairwise(nets[:_MOST_TIED])]
    ohm = kinded.value.amount.nominal if kinded.value is not None and kinded.value.amount is not None else None
    if sort is Sort.ARRAY:
        return [Element(key, Sort.RESISTOR, a, b, ohm=ohm, fitted=fitted) for a, b in _array_pairs(pins)]
    if len(nets) != _TWO:
        return []
    return [Element(key, sort, nets[0], nets[1], ohm=ohm if sort is Sort.RESISTOR else None, fitted=fitted)]


def _array_pairs(pins: tuple[Pin, ...]) -> list[tuple[str, str]]:
    """The ends of each resistor of an array of separate ones.

    By pin names (`R1.1`, `R1.2`); else pins that face each other across the package (common practice: the
    first with the last).
    """
    named: dict[str, list[str]] = defaultdict(list)
    for pin in pins:
        if "." in pin.function:
            named[pin.function.partition(".")[0]].append(pin.net)
    pairs = [(ends[0], ends[1]) for ends in named.values() if len(ends) == _TWO]
    if not pairs and len(pins) % _TWO == 0:
        ordered = sorted(pins, key=lambda pin: natural(pin.number))
        pairs = [(a.net, b.net) for a, b in zip(ordered, reversed(ordered), strict=True)][: len(pins) // _TWO]
    return [(a, b) for a, b in pairs if a and b and a != b]


def _junctions(pins: tuple[Pin, ...], nets: list[str]) -> list[tuple[str, str, bool]]:
    """(anode net, cathode net, direction known) of each junction.

    By pin names (A, K, A1, COM); pad 1 is the cathode where there are none (common practice, IPC-7351
    orientation of two-pad diodes). Two anodes and no cathode: it conducts both ways.
    """
    names = {pin: _end(pin) for pin in pins}
    anodes = [pin.net for pin, end in names.items() if end == "A" and pin.net]
    cathodes = [pin.net for pin, end in names.items() if end == "K" and pin.net]
    middle = [pin.net for pin, end in names.items() if end == "M" and pin.net]
    if anodes and cathodes:
        ways = (
            set(product(anodes, middle)) | set(product(middle, cathodes)) if middle else set(product(anodes, cathodes))
        )
        return [(a, k, True) for a, k in sorted(ways) if a != k]
    if middle and (anodes or cathodes):
        ways = set(product(anodes or middle, cathodes or middle))
        return [(a, k, True) for a, k in sorted(ways) if a != k]
    if len(nets) != _TWO:
        return []
    first = next((pin.net for pin in pins if pin.number == "1" and pin.net), "")
    if anodes or not first:
        return [(nets[0], nets[1], False)]
    return [(next(net for net in nets if net != first), first, True)]


def _end(pin: Pin) -> str:
    name = (pin.function or (pin.number if pin.number.isalpha() else "")).upper().strip("~")
    if re.fullmatch(r"(?:K|C|CATHODE|KATHODE|CAT)\d?", name):
        return "K"
    if re.fullmatch(r"(?:A|ANODE|AN)\d?", name):
        return "A"
    return "M" if name in ("COM", "COMMON", "AK", "KA", "A/K", "K/A") else ""
