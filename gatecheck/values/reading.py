"""Decides what one quantity means as the value of each kind of part.

A reader takes a quantity and returns a candidate for the value, or None. ``choice`` picks among candidates.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from .model import Amount, Kind
from .numeral import E12, E24, E24_AND_E96, EXPONENTS, digit_code, is_preferred, scaled

if TYPE_CHECKING:
    from .scanner import Quantity

_MICRO = EXPONENTS["u"]
_PICO = EXPONENTS["p"]
_LETTER_E_LIMIT_OHM = 1e7  # "4E7" is no 47 megohm: hardly anything is made above this; our choice
_BEAD_LIMIT_OHM = 1e4  # no bead has more at its frequency; tells codes from numbers; our choice
_CODE_DIGITS = 3  # the codes of capacitors, inductors and beads; four digits are for resistors (IEC 60062)
_SMALL_PREFIXES = frozenset("pnum")
_OHMIC_PREFIXES = frozenset({"", "u", "m", "k", "M", "G"})
_TOLERANCE_LIKE_PREFIXES = frozenset("kM")  # the K and M of "104K" and "104M" are tolerances (IEC 60062)
_NONE: frozenset[str] = frozenset()
_CODE = frozenset({"code"})
_AMBIGUOUS = frozenset({"ambiguous"})
_ASSUMED_UNIT = frozenset({"assumed-unit"})


@dataclass(frozen=True, slots=True)
class Candidate:
    """What one quantity, or several that belong together, can mean.

    Attributes:
        quantity: The quantity as written; the last one of those joined.
        readings: The amounts it can mean, SI units, at least one.
        favoured: The likeliest of them, or None where none is.
        stated: Whether a unit, prefix or letter code says so.
        flags: Keys of ``FLAGS``.
    """

    quantity: Quantity
    readings: tuple[float, ...]
    favoured: float | None
    stated: bool
    flags: frozenset[str]

    def amount(self) -> Amount:
        """Return the interval over the readings."""
        return Amount.spanning(self.readings, favoured=self.favoured)


def _candidate(quantity: Quantity, *, stated: bool = True, flags: frozenset[str] = _NONE, shift: int = 0) -> Candidate:
    """Return the quantity as it stands, in the unit of ten to the power of ``shift``."""
    readings = quantity.readings(shift=shift)
    if len(readings) > 1:
        return Candidate(quantity, readings, None, stated, flags | _AMBIGUOUS)
    return Candidate(quantity, readings, readings[0], stated, flags)


def resistance(quantity: Quantity) -> Candidate | None:
    """Read a quantity as the value of a resistor, ohm."""
    if quantity.at or quantity.prefix not in _OHMIC_PREFIXES:
        return None
    if quantity.unit not in {"", "ohm"} and not ends_in_tolerance_f(quantity):
        return None
    if quantity.letter == "E":
        return _with_letter_e(quantity)
    if quantity.leads:
        return _with_leading_r(quantity)
    if quantity.unit == "ohm" or quantity.prefix:
        return _candidate(quantity)
    return _bare_resistance(quantity)


def ends_in_tolerance_f(quantity: Quantity) -> bool:
    """Tell whether an F is the tolerance letter of a resistance ("10F", "10kF")."""
    return quantity.unit == "F" and quantity.prefix in {"", "k", "M"}


def _with_letter_e(quantity: Quantity) -> Candidate:
    """Read "4E7": the letter as decimal point (as R in IEC 60062; common practice) or as exponent."""
    whole, _, part = quantity.digits.partition(".")
    as_letter = quantity.number
    as_exponent = scaled(whole, exponent=int(part)) if len(part) == 1 else as_letter
    if as_letter == as_exponent:
        return _candidate(quantity)
    if not is_preferred(quantity.digits, series=E12 if len(whole) == 1 else E24_AND_E96):
        return Candidate(quantity, (as_exponent,), as_exponent, stated=True, flags=_NONE)
    plausible = (as_letter,) if as_exponent >= _LETTER_E_LIMIT_OHM else (as_letter, as_exponent)
    return Candidate(quantity, plausible, as_letter, stated=True, flags=_AMBIGUOUS)


def _with_leading_r(quantity: Quantity) -> Candidate:
    """Read "R47" as 0.47 ohm; "R5", "R10", "R100" may be a sloppy 5, 10, 100 or a reference designator."""
    part = quantity.digits[1:]
    looks_whole = not part.startswith("0") and (len(part) == 1 or part.endswith("0"))
    if not looks_whole:
        return _candidate(quantity)
    fraction = quantity.number
    return Candidate(quantity, (fraction, float(part)), fraction, stated=True, flags=_AMBIGUOUS)


def _bare_resistance(quantity: Quantity) -> Candidate:
    """Read a bare number as ohm; one in no series of preferred numbers may be a digit code ("103")."""
    plain = _candidate(quantity, stated=False)
    as_code = _code(quantity, unit_exponent=0)
    if as_code is None or is_preferred(quantity.digits, series=E24_AND_E96):
        return plain
    if not is_preferred(quantity.digits[:-1], series=E24_AND_E96):
        return plain
    return Candidate(quantity, (*plain.readings, as_code), plain.favoured, stated=False, flags=_AMBIGUOUS)


def impedance(quantity: Quantity) -> Candidate | None:
    """Read a quantity as the impedance magnitude of a bead or its DC resistance, ohm."""
    if quantity.at:
        return None
    if quantity.unit == "ohm" or (not quantity.unit and quantity.prefix in {"m", "k"}):
        return _candidate(quantity)
    if not quantity.bare:
        return None
    as_code = _code(quantity, unit_exponent=0)
    if as_code is None or as_code > _BEAD_LIMIT_OHM or len(quantity.digits) != _CODE_DIGITS:
        return _candidate(quantity, stated=False)
    return _code_or_number(quantity, as_code=as_code, unit_exponent=0, flags=_NONE)


def capacitance(quantity: Quantity) -> Candidate | None:
    """Read a quantity as the value of a capacitor, farad.

    Three bare digits may be a code of pF (IEC 60062); bare numbers are pF, below one uF (common practice).
    """
    if quantity.unit or quantity.at:
        return _farads(quantity) if quantity.unit == "F" and not quantity.at else None
    if quantity.prefix in _SMALL_PREFIXES:
        return _candidate(quantity)
    as_code = _code(quantity, unit_exponent=_PICO)
    if as_code is not None and _ends_in_tolerance(quantity):
        return Candidate(quantity, (as_code,), as_code, stated=True, flags=_CODE)
    if not quantity.bare:
        return None
    if as_code is not None and len(quantity.digits) == _CODE_DIGITS:
        return _code_or_number(quantity, as_code=as_code, unit_exponent=_PICO, flags=_ASSUMED_UNIT)
    unit_exponent = _MICRO if 0 < quantity.number < 1 else _PICO
    return _candidate(quantity, stated=False, flags=_ASSUMED_UNIT, shift=unit_exponent)


def _farads(quantity: Quantity) -> Candidate | None:
    if quantity.prefix in {"k", "G"}:
        return None
    if quantity.prefix != "M":
        return _candidate(quantity)
    micro = scaled(quantity.digits, exponent=_MICRO)
    if quantity.label == "d":  # "MFD" is the old spelling of microfarad
        return Candidate(quantity, (micro,), micro, stated=True, flags=_NONE)
    milli = scaled(quantity.digits, exponent=EXPONENTS["m"])
    return Candidate(quantity, (micro, milli), None, stated=True, flags=_AMBIGUOUS)


def inductance(quantity: Quantity) -> Candidate | None:
    """Read a quantity as the value of an inductor, henry.

    The letter R is the decimal point of uH (IEC 60062), bare numbers are uH, and three bare digits are a code
    first, but may be uH as they stand (common practice).
    """
    if quantity.at:
        return None
    if quantity.unit == "H" or (not quantity.unit and quantity.prefix in _SMALL_PREFIXES):
        return _candidate(quantity)
    if quantity.letter in {"R", "r"}:
        return _candidate(quantity, flags=_CODE, shift=_MICRO)
    return _digits_of_inductance(quantity)


def _digits_of_inductance(quantity: Quantity) -> Candidate | None:
    as_code = _code(quantity, unit_exponent=_MICRO)
    if as_code is not None and _ends_in_tolerance(quantity):
        return Candidate(quantity, (as_code,), as_code, stated=True, flags=_CODE)
    if not quantity.bare:
        return None
    if as_code is not None and len(quantity.digits) == _CODE_DIGITS:
        readings = (as_code, scaled(quantity.digits, exponent=_MICRO))
        return Candidate(quantity, readings, as_code, stated=False, flags=_CODE | _AMBIGUOUS)
    return _candidate(quantity, stated=False, flags=_ASSUMED_UNIT, shift=_MICRO)


def voltage(quantity: Quantity) -> Candidate | None:
    """Read a quantity as the voltage of a diode, volt."""
    return _candidate(quantity) if quantity.unit == "V" and not quantity.at else None


def other_kind(quantity: Quantity, *, kind: Kind) -> Kind | None:
    """Tell which other kind of part a quantity would be the value of, or None.

    Args:
        quantity: The quantity.
        kind: The kind asked for; an ohm value on an inductor is a bead, on others a resistor.
    """
    if quantity.at:
        return None
    if quantity.unit == "ohm" or (not quantity.unit and quantity.prefix == "k"):
        return Kind.BEAD if kind is Kind.INDUCTOR else Kind.RESISTOR
    if quantity.unit == "H" or (quantity.prefix == "u" and not quantity.unit):
        return Kind.INDUCTOR
    is_small = quantity.prefix in _SMALL_PREFIXES
    if is_small and (quantity.unit == "F" or (not quantity.unit and quantity.prefix != "m")):
        return Kind.CAPACITOR
    return None


def _code(quantity: Quantity, *, unit_exponent: int) -> float | None:
    """Return what the digits mean as a code, or None when they have a unit, a letter or an exponent."""
    if quantity.letter or quantity.unit or quantity.exponent != EXPONENTS[quantity.prefix]:
        return None
    return digit_code(quantity.digits, exponent=unit_exponent)


def _ends_in_tolerance(quantity: Quantity) -> bool:
    is_code = len(quantity.digits) == _CODE_DIGITS
    return is_code and bool(quantity.tolerance or quantity.prefix in _TOLERANCE_LIKE_PREFIXES)


def _code_or_number(quantity: Quantity, *, as_code: float, unit_exponent: int, flags: frozenset[str]) -> Candidate:
    """Read three bare digits as a code, unless they end in zero.

    There the number itself is the likelier reading; the code stays in the interval where its two digits are
    preferred ones ("330", but not "600"). Common practice.
    """
    if not quantity.digits.endswith("0"):
        return Candidate(quantity, (as_code,), as_code, stated=False, flags=_CODE)
    literal = scaled(quantity.digits, exponent=unit_exponent)
    if not is_preferred(quantity.digits, series=E24):
        return Candidate(quantity, (literal,), literal, stated=False, flags=flags)
    return Candidate(quantity, (as_code, literal), literal, stated=False, flags=flags | _AMBIGUOUS)
