"""Finds the value proper of a part, and what kind of part the text describes."""

from __future__ import annotations

from dataclasses import dataclass, replace
from types import MappingProxyType
from typing import TYPE_CHECKING

from .choice import candidates, chosen
from .model import Amount, Kind
from .numeral import E24_AND_E96, is_preferred
from .ratings import labelled
from .reading import Candidate, capacitance, impedance, inductance, other_kind, resistance, voltage
from .scanner import Quantity, Scan, Word
from .vocabulary import (
    BEAD_WORDS,
    BIDIRECTIONAL_WORDS,
    COMMON_MODE,
    JUMPER_WORDS,
    RECTIFIER_WORDS,
    RESISTANCE_LABELS,
    SUPPRESSOR_WORDS,
    THERMISTOR_WORDS,
    ZENER_NAME,
    ZENER_WORDS,
)

if TYPE_CHECKING:
    from collections.abc import Callable

USUAL_BEAD_FREQUENCY_HZ = 100e6  # at which nearly all beads are specified; common practice
_LOWEST_BEAD_FREQUENCY_HZ = 1e6  # a lower one ("50Hz") is no bead's; our choice
_LOWEST_BEAD_OHM = 2.0  # a bead with less at 100 MHz is not made, a DC resistance is below it; our choice
_BEAD_TO_DC_RATIO = 10.0  # of two ohm values so far apart the smaller is the DC resistance; our choice
_BRIDGING_KINDS = frozenset({Kind.RESISTOR, Kind.THERMISTOR, Kind.BEAD, Kind.INDUCTOR, Kind.CHOKE})
_READERS: MappingProxyType[Kind, Callable[[Quantity], Candidate | None]] = MappingProxyType(
    {Kind.RESISTOR: resistance, Kind.THERMISTOR: resistance, Kind.CAPACITOR: capacitance}
)


@dataclass(frozen=True, slots=True)
class Principal:
    """The value of a part.

    Attributes:
        kind: The kind of part that the text describes.
        amount: The value in the unit of that kind, or None.
        quantity: Where it was read.
        frequency_hz: Frequency of an impedance.
        dc_resistance_ohm: Resistance of a winding.
        flags: Keys of ``FLAGS``.
    """

    kind: Kind
    amount: Amount | None = None
    quantity: Quantity | None = None
    frequency_hz: float | None = None
    dc_resistance_ohm: float | None = None
    flags: frozenset[str] = frozenset()


def principal(scan: Scan, *, kind: Kind) -> Principal:
    """Return the value that a text states for a part drawn as ``kind``."""
    found = _of_kind(scan, kind=_described_kind(scan, kind=kind))
    if found.amount is None and kind is not Kind.TRANSISTOR:
        found = _of_other_kind(scan, found)
    if found.amount is None and kind in _BRIDGING_KINDS and scan.words & JUMPER_WORDS:
        found = replace(found, amount=Amount.exactly(0.0))
    if found.amount is not None and found.amount.high == 0.0 and found.kind in _BRIDGING_KINDS:
        drawn_as = kind if kind in _BRIDGING_KINDS else Kind.RESISTOR
        return Principal(drawn_as, found.amount, found.quantity, flags=frozenset({"jumper"}))
    return found


def _described_kind(scan: Scan, *, kind: Kind) -> Kind:
    """Return the kind that words or a frequency in the text tell, else the kind asked for."""
    if kind not in {Kind.RESISTOR, Kind.BEAD, Kind.INDUCTOR}:
        return kind
    if COMMON_MODE.search(scan.text):
        return Kind.CHOKE
    if kind is Kind.RESISTOR and scan.words & THERMISTOR_WORDS:
        return Kind.THERMISTOR
    is_like_bead = scan.words & BEAD_WORDS or _frequency_hz(scan, kind=kind) is not None
    if is_like_bead and not any(quantity.unit == "H" for quantity in scan.quantities):
        return Kind.BEAD
    return kind


def _of_kind(scan: Scan, *, kind: Kind) -> Principal:
    if kind in _READERS:
        return _simple(scan, kind=kind)
    if kind is Kind.INDUCTOR:
        return _inductor(scan)
    if kind is Kind.DIODE:
        return _diode(scan)
    if kind is Kind.TRANSISTOR:
        return Principal(kind)
    if kind is Kind.CHOKE and any(quantity.unit == "H" for quantity in scan.quantities):
        return replace(_inductor(scan), kind=kind)
    return _bead(scan, kind=kind)


def _of_other_kind(scan: Scan, found: Principal) -> Principal:
    """Return the value of another kind of part if the text states one, else what was found."""
    for quantity in scan.quantities:
        other = other_kind(quantity, kind=found.kind)
        is_winding = other in {Kind.RESISTOR, Kind.BEAD} and found.dc_resistance_ohm is not None
        if other is not None and other is not found.kind and not is_winding:
            return _of_kind(scan, kind=other)
    return found


def _principal(kind: Kind, candidate: Candidate | None) -> Principal:
    if candidate is None:
        return Principal(kind)
    return Principal(kind, candidate.amount(), candidate.quantity, flags=candidate.flags)


def _simple(scan: Scan, *, kind: Kind) -> Principal:
    if kind is Kind.RESISTOR and scan.lone_size and not scan.words:
        if is_preferred(scan.lone_size, series=E24_AND_E96) and not scan.lone_size.startswith("0"):
            return Principal(kind, Amount.exactly(float(scan.lone_size)))  # 1210 ohm, not the size 1210
        return Principal(kind)
    return _principal(kind, chosen(candidates(scan, scan.quantities, reader=_READERS[kind], kind=kind)))


def _inductor(scan: Scan) -> Principal:
    labelled_dc = _labelled_resistances(scan)
    rest = [quantity for quantity in scan.quantities if quantity not in labelled_dc]
    main = chosen(candidates(scan, rest, reader=inductance, kind=Kind.INDUCTOR))
    plain = [quantity for quantity in rest if quantity.unit == "ohm" and not quantity.letter]
    if main is not None and main.quantity.unit == "H":
        plain += [quantity for quantity in rest if quantity.prefix == "m" and not quantity.unit]
    dc = labelled_dc or (plain if main is not None else [])
    found = _principal(Kind.INDUCTOR, main)
    return replace(found, dc_resistance_ohm=dc[0].number) if dc else found


def _bead(scan: Scan, *, kind: Kind) -> Principal:
    """Read a bead or choke: of several ohm values the large one is the impedance, a small one DC."""
    labelled_dc = _labelled_resistances(scan)
    rest = [quantity for quantity in scan.quantities if quantity not in labelled_dc]
    found = candidates(scan, rest, reader=impedance, kind=kind)
    largest = max((max(candidate.readings) for candidate in found if candidate.stated), default=0.0)
    limit = max(_LOWEST_BEAD_OHM, largest / _BEAD_TO_DC_RATIO)
    windings = [
        candidate
        for candidate in found
        if 0.0 < max(candidate.readings) < limit and (candidate.stated or len(found) == 1)
    ]
    main = chosen([candidate for candidate in found if candidate not in windings])
    dc = labelled_dc or [candidate.quantity for candidate in windings]
    principal = _principal(kind, main)
    flags = principal.flags
    frequency = _frequency_hz(scan, kind=kind)
    if main is None and windings:
        flags |= {"ambiguous"}  # the only ohm value is too small for an impedance
    if main is not None and frequency is None:
        flags |= {"assumed-frequency"}
        frequency = USUAL_BEAD_FREQUENCY_HZ
    return replace(principal, frequency_hz=frequency, dc_resistance_ohm=dc[0].number if dc else None, flags=flags)


def _labelled_resistances(scan: Scan) -> list[Quantity]:
    return [quantity for quantity in labelled(scan, labels=RESISTANCE_LABELS) if quantity.unit in {"", "ohm"}]


def _frequency_hz(scan: Scan, *, kind: Kind) -> float | None:
    """Return the frequency of an impedance; without a unit it is in MHz ("600@100", "600R/100M")."""
    is_bead = kind in {Kind.BEAD, Kind.CHOKE}
    for quantity in scan.quantities:
        if quantity.unit == "Hz" and quantity.number >= _LOWEST_BEAD_FREQUENCY_HZ:
            return quantity.number
        if quantity.unit or quantity.letter:
            continue
        if quantity.prefix in {"M", "G"} and (quantity.at or (is_bead and len(scan.quantities) > 1)):
            return quantity.number
        # On other symbols "10k@25" is a temperature, but 100 is the frequency of beads.
        if quantity.bare and quantity.at and (is_bead or quantity.digits == "100"):
            return quantity.number * 1e6
    return None


def _diode(scan: Scan) -> Principal:
    """Read the voltage of a Zener diode or suppressor; a rectifier's voltage is a rating, not its value."""
    has_current = any(quantity.unit == "A" for quantity in scan.quantities)
    if scan.words & RECTIFIER_WORDS or (has_current and not scan.words & ZENER_WORDS):
        return Principal(Kind.DIODE)
    found = _principal(Kind.DIODE, chosen(candidates(scan, scan.quantities, reader=voltage, kind=Kind.DIODE)))
    if found.amount is None:
        found = replace(found, amount=_named_voltage(scan))
    flags = found.flags
    if scan.words & SUPPRESSOR_WORDS and found.amount is not None:
        flags |= {"standoff"}
    if scan.words & BIDIRECTIONAL_WORDS:
        flags |= {"bidirectional"}
    return replace(found, flags=flags)


def _named_voltage(scan: Scan) -> Amount | None:
    """Return the voltage in the name of a Zener diode ("Z16", "ZD5V1"), or None."""
    for token in scan.tokens:
        if isinstance(token, Word) and (match := ZENER_NAME.fullmatch(token.text)):
            return Amount.exactly(float(match["volt"].upper().replace("V", ".")))
    return None
