"""Finds an order code in a value text and guesses what its pattern tells.

No part number is known here. Many makers write size, value and direction into their codes in the same few
ways; a guess from them is a hint of low trust (common practice, from memory).
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from .model import Kind
from .numeral import digit_code
from .scanner import Scan, Word
from .vocabulary import METRIC_SIZES, SIZES, ZENER_NAME

# Two digits that stand for a chip size in inductor and bead codes: tenths of a millimetre of its length.
_SHORT_SIZES = {"03": "0201", "10": "0402", "15": "0402", "18": "0603", "21": "0805", "31": "1206"}
_LONGEST_BEAD_CODE_OHM = 1e4  # as for the values: no bead has more; our choice
_BEAD = re.compile(r"[A-Z]{2,5}(?P<size>\d{4}|\d{2})[A-Z]{1,3}(?P<code>[1-9]\d{2})(?:[A-Z-]|$)")
_SUPPRESSOR = re.compile(r"[A-Z]{3}J(?P<volt>\d{1,3}(?:\.\d)?)(?P<direction>CA|C|A)?")
_ZENER = re.compile(r"[A-Z]{2,4}\d{2}-?[ABC](?P<whole>\d{1,2})(?:V(?P<tenth>\d))?")
_SHORTEST_PASSIVE = 6  # letters and digits; shorter runs in a passive's value are codes of dielectric and the like
_SHORTEST_ACTIVE = 4


@dataclass(frozen=True, slots=True)
class Hint:
    """What the pattern of a part number suggests.

    Attributes:
        amount: Ohm at 100 MHz for a bead, volt for a diode.
        package: Size code, or None.
        flags: Keys of ``FLAGS``.
    """

    amount: float
    package: str | None
    flags: frozenset[str]


def part_number(scan: Scan, *, kind: Kind) -> str | None:
    """Return the first word of a text that looks like an order code, or None."""
    shortest = _SHORTEST_ACTIVE if kind in {Kind.DIODE, Kind.TRANSISTOR} else _SHORTEST_PASSIVE
    for token in scan.tokens:
        if isinstance(token, Word) and len(token.text) >= shortest:
            digits = sum(character.isdecimal() for character in token.text)
            letters = sum(character.isalpha() for character in token.text)
            is_code = digits == len(token.text) or (digits >= 2 and letters >= 1)  # noqa: PLR2004 - not "4PIN"
            if is_code and not ZENER_NAME.fullmatch(token.text):
                return token.text
    return None


def hint(number: str, *, kind: Kind) -> Hint | None:
    """Guess from the pattern of a part number, or return None. Beads and diodes only."""
    code = number.upper()
    if kind is Kind.BEAD:
        return _bead_hint(code)
    if kind is Kind.DIODE:
        return _diode_hint(code)
    return None


def _bead_hint(code: str) -> Hint | None:
    match = _BEAD.match(code)
    impedance_ohm = digit_code(match["code"]) if match else None
    if match is None or impedance_ohm is None or impedance_ohm > _LONGEST_BEAD_CODE_OHM:
        return None
    size = METRIC_SIZES.get(match["size"]) or _SHORT_SIZES.get(match["size"])
    if size is None and match["size"] in SIZES:
        size = match["size"]
    return Hint(impedance_ohm, size, frozenset({"hint", "assumed-frequency"}))


def _diode_hint(code: str) -> Hint | None:
    if match := _SUPPRESSOR.fullmatch(code):
        is_both_ways = (match["direction"] or "").startswith("C")
        flags = {"hint", "standoff", "bidirectional"} if is_both_ways else {"hint", "standoff"}
        return Hint(float(match["volt"]), None, frozenset(flags))
    if match := _ZENER.fullmatch(code):
        return Hint(float(f"{match['whole']}.{match['tenth'] or 0}"), None, frozenset({"hint"}))
    return None
