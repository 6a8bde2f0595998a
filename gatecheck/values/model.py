"""What a value text says: kinds, amounts, flags, and the two results."""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import StrEnum
from types import MappingProxyType
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from collections.abc import Iterable


class Kind(StrEnum):
    """What sort of part a value belongs to."""

    RESISTOR = "resistor"
    BEAD = "bead"
    INDUCTOR = "inductor"
    CAPACITOR = "capacitor"
    DIODE = "diode"
    TRANSISTOR = "transistor"
    THERMISTOR = "thermistor"
    CHOKE = "choke"


FLAGS = MappingProxyType(
    {
        "ambiguous": "the text has more than one reading; the amount spans those that are plausible",
        "assumed-frequency": "a bead impedance without a frequency, taken at 100 MHz",
        "assumed-unit": "a bare number whose unit is the habit for this kind of part (uH; pF, or uF below 1)",
        "bidirectional": "a clamp that works in both directions",
        "code": "read from a digit or letter code that stands for another unit or a power of ten",
        "cut": "the text was longer than what is parsed; its end was not looked at",
        "hint": "guessed from the pattern of a part number: low trust, wants a table or a data sheet",
        "jumper": "a short circuit in place of the part; the amount is 0 ohm",
        "kind-mismatch": "the text describes another kind of part than the one asked for",
        "optional": "bracketed or starred: often, but not surely, a part that is not always fitted",
        "placeholder": "no value, part number or rating: a library name, a size, a question mark, nothing",
        "range": "the text states a range itself",
        "standoff": "the voltage of a suppressor is its stand-off voltage; it clamps well above it",
        "unread": "there are numbers in the text, but none is a value or rating of this kind of part",
        "unresolved": "holds a text variable that was not replaced",
    }
)
"""Every flag a Value can carry, and what it means."""


@dataclass(frozen=True, slots=True)
class Amount:
    """A number in SI units with its bounds.

    ``low == nominal == high`` when the text is exact and has one reading. Bounds come from readings and
    written ranges only, never from the tolerance of the part. ``nominal`` is the favoured reading or, where
    none is favoured, the geometric mean of the bounds (the arithmetic one from zero).
    """

    low: float
    nominal: float
    high: float

    @classmethod
    def exactly(cls, number: float) -> Amount:
        """Return the amount that is one number."""
        return cls(number, number, number)

    @classmethod
    def spanning(cls, readings: Iterable[float], *, favoured: float | None = None) -> Amount:
        """Return the amount over several readings, at least one, in SI units."""
        known = sorted(readings)
        low, high = known[0], known[-1]
        middle = math.sqrt(low) * math.sqrt(high) if low > 0.0 else (low + high) / 2
        nominal = middle if favoured is None else favoured
        return cls(low, min(max(nominal, low), high), high)


@dataclass(frozen=True, slots=True)
class Value:
    """What the value text of one part says, in SI units.

    Attributes:
        raw: The text as it was given.
        kind: The kind of part the text describes: the kind asked for unless the text says otherwise.
        amount: The value proper: ohm for resistors, thermistors and beads (the impedance magnitude), henry
            for inductors, farad for capacitors, volt for diodes (Zener or stand-off voltage); for chokes ohm
            where ``frequency_hz`` is set, else henry. None when the text has none.
        frequency_hz: For beads and chokes, the frequency of the impedance.
        current_a: Rated current.
        peak_current_a: Current labelled as peak, pulse or surge.
        dc_resistance_ohm: For beads, inductors and chokes, the resistance of the winding.
        voltage_v: Rated voltage.
        power_w: Rated power.
        tolerance: As a fraction; the larger side of an asymmetric one.
        package: Size code in hundredths of an inch ("0603"), or the name of an outline ("SOT-23").
        fitted: False when the text says that the part is not placed.
        part_number: An order code found in the text.
        flags: Keys of ``FLAGS``.
    """

    raw: str
    kind: Kind
    amount: Amount | None
    frequency_hz: float | None
    current_a: float | None
    peak_current_a: float | None
    dc_resistance_ohm: float | None
    voltage_v: float | None
    power_w: float | None
    tolerance: float | None
    package: str | None
    fitted: bool
    part_number: str | None
    flags: frozenset[str]


@dataclass(frozen=True, slots=True)
class TransistorText:
    """What the library description of a transistor says; magnitudes in SI units, None where it is silent.

    Attributes:
        channel: Conduction type of the channel.
        technology: Only where the text names it; a plain "MOSFET" is not taken for silicon.
        voltage_v: Rated drain-source or collector-emitter voltage.
        current_a: Rated continuous drain or collector current.
        on_resistance_ohm: Drain-source resistance when on.
        gate_charge_c: Total gate charge, or a charge that is not told apart from it (see the next).
        gate_charge_kind: "typ" or "max" for a total gate charge (an unqualified "Qg" is typical by common
            practice), "unknown" for a charge whose label is missing or not understood, None without a charge.
    """

    channel: Literal["n", "p"] | None
    technology: Literal["si", "sic", "gan", "igbt"] | None
    voltage_v: float | None
    current_a: float | None
    on_resistance_ohm: float | None
    gate_charge_c: float | None
    gate_charge_kind: Literal["typ", "max", "unknown"] | None
