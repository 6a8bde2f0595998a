"""Reads the value text of a two-terminal part: placement, value, ratings, part number."""

from __future__ import annotations

from dataclasses import replace

from .model import Amount, Kind, Value
from .part_number import hint, part_number
from .principal import USUAL_BEAD_FREQUENCY_HZ, Principal, principal
from .ratings import Ratings, ratings, tolerance
from .scanner import MAX_LENGTH, Scan, normalised, scanned
from .vocabulary import NOT_FITTED

_BRACKETS = frozenset({"()", "[]", "<>"})


def parse_value(text: str, *, kind: Kind) -> Value:
    """Read the value of a part.

    Letter codes and tolerance letters follow IEC 60062, preferred numbers IEC 60063. Where engineers' habits
    go beyond them the reading is common practice, and a flag tells when it may be wrong.

    Args:
        text: The value field, or value and comment with a separator between; any string.
        kind: What the symbol says that the part is. The text may say otherwise, and then wins.

    Returns:
        What the text says. Never raises; the work is linear in the length of the text, of which no more than
        400 characters are parsed.
    """
    fitted, clean = _placement(normalised(text), kind=kind)
    scan = scanned(clean)
    number = part_number(scan, kind=kind)
    found, hinted_package = _with_hint(principal(scan, kind=kind), number=number)
    rated = ratings(scan)
    flags = set(found.flags)
    if len(text) > MAX_LENGTH:
        flags.add("cut")
    if scan.unresolved:
        flags.add("unresolved")
    if found.kind is not kind:
        flags.add("kind-mismatch")
    if fitted and _is_optional(clean):
        flags.add("optional")
    if fitted and number is None and not scan.unresolved and _is_silent(found, rated=rated):
        flags.add("unread" if _has_numbers(scan) else "placeholder")
    is_clamp = found.kind is Kind.DIODE and found.amount is not None
    return Value(
        raw=text,
        kind=found.kind,
        amount=found.amount,
        frequency_hz=found.frequency_hz,
        current_a=rated.current_a,
        peak_current_a=rated.peak_current_a,
        dc_resistance_ohm=found.dc_resistance_ohm,
        voltage_v=None if is_clamp else rated.voltage_v,
        power_w=rated.power_w,
        tolerance=tolerance(scan, quantity=found.quantity, kind=found.kind),
        package=scan.package or hinted_package,
        fitted=fitted,
        part_number=number,
        flags=frozenset(flags),
    )


def _placement(clean: str, *, kind: Kind) -> tuple[bool, str]:
    """Return whether the part is fitted, and the text without the words that say so."""
    if "-" in clean and not clean.strip(" -"):
        return False, ""
    match = NOT_FITTED.search(clean)
    if match is None:
        return True, clean
    rest = f"{clean[: match.start()]} {clean[match.end() :]}"
    if kind is Kind.CAPACITOR and any(map(str.isdecimal, rest)):
        if match[0] == "NP":  # "10u 25V NP" has no polarity
            return True, rest
        if match[0] in {"NF", "nf"} and clean[: match.start()].rstrip()[-1:].isdecimal():  # "100 NF"
            return True, clean
    return False, rest


def _with_hint(found: Principal, *, number: str | None) -> tuple[Principal, str | None]:
    """Return the value, filled from a part number's pattern if need be, and the package of that pattern."""
    guess = hint(number, kind=found.kind) if number is not None and found.amount is None else None
    if guess is None:
        return found, None
    frequency_hz = USUAL_BEAD_FREQUENCY_HZ if found.kind is Kind.BEAD else None
    filled = replace(
        found,
        amount=Amount.exactly(guess.amount),
        frequency_hz=found.frequency_hz or frequency_hz,
        flags=found.flags | guess.flags,
    )
    return filled, guess.package


def _is_optional(clean: str) -> bool:
    stripped = clean.strip()
    return stripped[:1] + stripped[-1:] in _BRACKETS or (stripped.endswith("*") and len(stripped) > 1)


def _has_numbers(scan: Scan) -> bool:
    in_words = any(character.isdecimal() for word in scan.words for character in word)
    return in_words or any(quantity.unit != "%" for quantity in scan.quantities)


def _is_silent(found: Principal, *, rated: Ratings) -> bool:
    given = (found.amount, found.dc_resistance_ohm, rated.current_a, rated.voltage_v, rated.power_w)
    return all(datum is None for datum in given)
