"""Reads what stands beside the value: ratings, tolerance, and which quantity a label word belongs to."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from .model import Kind
from .numeral import TOLERANCES
from .reading import ends_in_tolerance_f
from .scanner import Quantity, Scan, Word
from .vocabulary import PEAK_LABELS, SATURATION_LABELS

if TYPE_CHECKING:
    from collections.abc import Set as AbstractSet

_FILLERS = frozenset({"max", "typ"})
_CODE_LETTER_KINDS = frozenset({Kind.CAPACITOR, Kind.INDUCTOR})
_OHMIC_KINDS = frozenset({Kind.RESISTOR, Kind.THERMISTOR})


@dataclass(frozen=True, slots=True)
class Ratings:
    """Ratings of a part in SI units; None where the text has none."""

    current_a: float | None
    peak_current_a: float | None
    voltage_v: float | None
    power_w: float | None


def ratings(scan: Scan) -> Ratings:
    """Return the first rating of each sort in a text; what stands behind an "@" is a condition, no rating."""
    peaks = labelled(scan, labels=PEAK_LABELS)
    saturations = labelled(scan, labels=SATURATION_LABELS)
    firsts: dict[str, float] = {}
    for quantity in scan.quantities:
        sort = quantity.unit
        if sort not in {"A", "V", "W"} or quantity.at:
            continue
        if sort == "A":
            if quantity in saturations:
                continue
            if quantity.label == "pk" or quantity in peaks:
                sort = "peak"
        firsts.setdefault(sort, quantity.number)
    return Ratings(firsts.get("A"), firsts.get("peak"), firsts.get("V"), firsts.get("W"))


def tolerance(scan: Scan, *, quantity: Quantity | None, kind: Kind) -> float | None:
    """Return the tolerance as a fraction: a percentage, or the IEC 60062 letter at the value.

    Args:
        scan: The scanned text.
        quantity: The quantity that is the value.
        kind: The kind of part that the text describes.
    """
    percentages = [percent.number for percent in scan.quantities if percent.unit == "%"]
    if percentages:
        return max(percentages) / 100
    if quantity is None:
        return None
    if quantity.tolerance is not None:
        is_of_capacitors = quantity.tolerance == TOLERANCES["Z"]  # "600Z" on a bead is no tolerance
        return None if is_of_capacitors and kind is not Kind.CAPACITOR else quantity.tolerance
    if kind in _OHMIC_KINDS and ends_in_tolerance_f(quantity):
        return TOLERANCES["F"]
    if kind in _CODE_LETTER_KINDS and not quantity.unit and quantity.prefix in {"k", "M"}:
        return TOLERANCES[quantity.prefix.upper()]
    return _letter_behind(scan, quantity)


def _letter_behind(scan: Scan, quantity: Quantity) -> float | None:
    place = next((place for place, token in enumerate(scan.tokens) if token is quantity), len(scan.tokens))
    for token in scan.tokens[place + 1 : place + 2]:
        if isinstance(token, Word):
            return TOLERANCES.get(token.text)
    return None


def labelled(scan: Scan, *, labels: AbstractSet[str]) -> tuple[Quantity, ...]:
    """Return the quantities that a label word stands at: one right behind it, else one right before it."""
    if not scan.words & labels:
        return ()
    found: list[Quantity] = []
    tokens = [token for token in scan.tokens if not (isinstance(token, Word) and token.text.lower() in _FILLERS)]
    for place, token in enumerate(tokens):
        if isinstance(token, Word) and token.text.lower() in labels:
            behind, before = tokens[place + 1 : place + 2], tokens[max(place - 1, 0) : place]
            found += [near for near in behind if isinstance(near, Quantity)] or [
                near for near in before if isinstance(near, Quantity)
            ]
    return tuple(found)
