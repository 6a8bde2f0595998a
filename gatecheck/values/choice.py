"""Joins the quantities of a text that belong together and picks the one that is the value.

A quantity with a unit, prefix or letter code beats a bare number; the first beats later ones; a later one
that differs makes the answer ambiguous.
"""

from __future__ import annotations

from dataclasses import replace
from types import MappingProxyType
from typing import TYPE_CHECKING

from .model import Kind
from .numeral import scaled
from .reading import Candidate
from .vocabulary import ARRAY_WORDS, PARALLEL_WORDS, SERIES_WORDS

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable

    from .scanner import Quantity, Scan

_OPERATORS = MappingProxyType(
    {"||": "parallel", "//": "parallel", "+": "sum"} | dict.fromkeys(("-", "..", "...", "~", "to"), "range")
)
_AMBIGUOUS = frozenset({"ambiguous"})


def candidates(
    scan: Scan,
    quantities: Iterable[Quantity],
    *,
    reader: Callable[[Quantity], Candidate | None],
    kind: Kind,
) -> list[Candidate]:
    """Read quantities in order and join those with an operator between them.

    Args:
        scan: The scanned text.
        quantities: The quantities to read.
        reader: What each can mean.
        kind: Resistances in parallel add as reciprocals, capacitances plainly.

    Returns:
        One candidate for each value that the text states.
    """
    found: list[Candidate] = []
    last_end: int | None = None
    for quantity in quantities:
        candidate = reader(quantity)
        if candidate is None:
            last_end = None
            continue
        if quantity.count > 1:
            candidate = _repeated(candidate, words=scan.words, kind=kind)
        operator = None if last_end is None else _OPERATORS.get(scan.text[last_end : quantity.start].strip())
        is_odd_sum = operator == "sum" and candidate.stated != found[-1].stated  # "100nF +20"
        if operator is None or is_odd_sum:
            found.append(candidate)
        else:
            found[-1] = _joined(found[-1], candidate, operator=operator, kind=kind)
        last_end = quantity.end
    return found


def chosen(found: list[Candidate]) -> Candidate | None:
    """Return the candidate that is the value, or None when there is none.

    Its readings include those of its rivals, which makes it ambiguous where they differ.
    """
    if not found:
        return None
    pool = [candidate for candidate in found if candidate.stated] or found
    # Beside farads or henries a prefix alone is something else: "10uH 20m", "470uF ESR 30m".
    pool = [candidate for candidate in pool if candidate.quantity.unit in {"F", "H"}] or pool
    first = pool[0]
    rivals = [candidate for candidate in pool[1:] if candidate.readings != first.readings]
    if not rivals:
        return first
    readings = first.readings + tuple(reading for rival in rivals for reading in rival.readings)
    return replace(first, readings=readings, flags=first.flags | _AMBIGUOUS)


def _repeated(candidate: Candidate, *, words: frozenset[str], kind: Kind) -> Candidate:
    """Read "2x10R": a word may tell how the parts are connected, else both connections are possible."""
    count = candidate.quantity.count
    if words & ARRAY_WORDS:
        return candidate
    more = tuple(reading * count for reading in candidate.readings)
    less = tuple(reading / count for reading in candidate.readings)
    in_parallel, in_series = (more, less) if kind is Kind.CAPACITOR else (less, more)
    one_reading = len(candidate.readings) == 1
    for known, readings in ((PARALLEL_WORDS, in_parallel), (SERIES_WORDS, in_series)):
        if words & known:
            return replace(candidate, readings=readings, favoured=readings[0] if one_reading else None)
    return replace(candidate, readings=less + more, favoured=None, flags=candidate.flags | _AMBIGUOUS)


def _joined(first: Candidate, second: Candidate, *, operator: str, kind: Kind) -> Candidate:
    if operator == "range":
        return _range(first, second, kind=kind)
    adds_up = operator == "sum" or kind is Kind.CAPACITOR
    combine = float.__add__ if adds_up else _in_parallel
    low = combine(min(first.readings), min(second.readings))
    high = combine(max(first.readings), max(second.readings))
    readings = (low,) if low == high else (low, high)
    favoured = low if low == high else None
    stated = first.stated or second.stated
    return Candidate(second.quantity, readings, favoured, stated, first.flags | second.flags)


def _range(first: Candidate, second: Candidate, *, kind: Kind) -> Candidate:
    flags = (first.flags | second.flags | {"range"}) if first.stated == second.stated else frozenset({"range"})
    lower = first.readings
    if second.stated and not first.stated:
        # "1-10k": the prefix counts for both ends; ohm may also be meant as written, farad and henry may not.
        lower = (scaled(first.quantity.digits, exponent=second.quantity.exponent),)
        if kind in {Kind.RESISTOR, Kind.THERMISTOR, Kind.BEAD} and lower != first.readings:
            lower += first.readings
            flags |= _AMBIGUOUS
    return Candidate(second.quantity, lower + second.readings, None, second.stated or first.stated, flags)


def _in_parallel(one_ohm: float, other_ohm: float) -> float:
    total = one_ohm + other_ohm
    return one_ohm * other_ohm / total if total else 0.0
