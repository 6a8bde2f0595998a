"""How numbers are written on parts: preferred numbers, digit codes, decimal commas, metric prefixes.

Letter codes ("4R7", "4k7") and tolerance letters follow IEC 60062, preferred numbers IEC 60063.
"""

from __future__ import annotations

from types import MappingProxyType

EXPONENTS = MappingProxyType({"p": -12, "n": -9, "u": -6, "m": -3, "": 0, "k": 3, "M": 6, "G": 9})
"""Power of ten of each metric prefix (SI brochure, 9th edition, table 7)."""

TOLERANCES = MappingProxyType(
    {
        "B": 0.001,
        "C": 0.0025,
        "D": 0.005,
        "F": 0.01,
        "G": 0.02,
        "J": 0.05,
        "K": 0.1,
        "M": 0.2,
        "N": 0.3,
        "Z": 0.8,
    }
)
"""Fraction for each tolerance letter, IEC 60062 (from memory); for the asymmetric Z the larger side."""

# IEC 60063. E12 and E24 are a table of their own; from E48 on the numbers follow the formula.
_E12 = ("10", "12", "15", "18", "22", "27", "33", "39", "47", "56", "68", "82")
_BETWEEN_E12 = ("11", "13", "16", "20", "24", "30", "36", "43", "51", "62", "75", "91")
_E96 = [round(100 * 10 ** (step / 96)) for step in range(96)]
_CODE_LENGTHS = {3, 4}  # IEC 60062: two or three significant digits and a power of ten
_SMALL_POWERS = {"8": -2, "9": -1}  # IEC 60062 (from memory): 8 and 9 stand for 0.01 and 0.1


def significant_digits(number: str) -> str:
    """Return the significant digits of a decimal number, at least two: "0.047" gives "47", "5" gives "50"."""
    return number.replace(".", "").lstrip("0").rstrip("0").ljust(2, "0")


E12 = frozenset(_E12)
E24 = E12 | frozenset(_BETWEEN_E12)
E24_AND_E96 = E24 | frozenset(significant_digits(str(number)) for number in _E96)


def is_preferred(number: str, *, series: frozenset[str]) -> bool:
    """Tell whether a decimal number belongs to a series of preferred numbers (IEC 60063), in any decade."""
    return significant_digits(number) in series


def digit_code(digits: str, *, exponent: int = 0) -> float | None:
    """Read a code of two or three significant digits and a power of ten: "103" is 10e3, "4701" is 470e1.

    Args:
        digits: The code.
        exponent: Power of ten of the unit that the code counts in, such as -12 for pF.

    Returns:
        The number, or None when the text is no such code. Source: IEC 60062.
    """
    if len(digits) not in _CODE_LENGTHS or not digits.isdecimal() or digits.startswith("0"):
        return None
    head, power = digits[:-1], digits[-1]
    return scaled(head, exponent=exponent + _SMALL_POWERS.get(power, int(power)))


def scaled(number: str, *, exponent: int) -> float:
    """Return a decimal number times a power of ten, rounded once: "4.7" and -6 give the float 4.7e-6."""
    return float(f"{number}e{exponent}")


def decimal_readings(written: str) -> tuple[str, ...]:
    """Return the decimal numbers that digits with points and commas can mean, at least one.

    "4,7" is 4.7; "10 000" is grouped; "1.000,0" and "1,000.5" show which mark groups; "1,000" may be 1 or
    1000.
    """
    if "," not in written:
        return (written.replace(" ", ""),)
    if "." in written:
        if written.rindex(",") > written.rindex("."):
            return (written.replace(".", "").replace(",", "."),)
        return (written.replace(",", ""),)
    if written.count(",") > 1:
        return (written.replace(",", ""),)
    whole, part = written.split(",")
    decimal = f"{whole}.{part}"
    if len(part) == 3 and not whole.startswith("0"):  # noqa: PLR2004 - digits are grouped by three
        return (decimal, whole + part)
    return (decimal,)
