"""Cuts a value text into quantities and words.

One regular expression walks over the text once. A quantity is a number with what belongs to it (metric
prefix, unit, tolerance letter, a count in front or behind); numbers inside part numbers are none, because a
quantity must begin and end where a run of letters and digits does. Size codes and fractions of a watt are
taken before numbers. What a prefix without unit means is left to ``reading``, which knows the kind of part.
"""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass

from .numeral import EXPONENTS, TOLERANCES, decimal_readings, scaled, significant_digits
from .vocabulary import METRIC_SIZES, NAMED_OUTLINE, SIZES

MAX_LENGTH = 400  # characters that are parsed; our choice, far above any value text and most descriptions

# After compatibility normalisation (NFKC) these are left. There the micro sign becomes a mu, the ohm sign an
# omega, the square kilo-ohm sign two letters, the ellipsis three points, a wide digit a digit.
_SPACED = str.maketrans({"\u00bc": " 1/4", "\u00bd": " 1/2", "\u215b": " 1/8"})  # else they stick to a digit
_REPLACED = str.maketrans(
    {"\u03bc": "u", "\u00d7": "x", "\u2225": "||"} | dict.fromkeys("\u2010\u2011\u2012\u2013\u2014\u2015\u2212", "-")
)

_NUMBER = r"""
    \d{1,3}(?:\.\d{3})+,\d{1,9}             # 1.000,0
  | \d{1,3}(?:,\d{3})+(?:\.\d{1,9})?(?!\d)  # 1,000 and 1,000.5
  | \d{1,3}(?:\ 000)+(?!\d)                 # 10 000
  | \d{1,15}(?:\.|,(?!0\d{3}(?!\d)))\d{1,15}  # 4.7 and 4,7, but not the comma in 10,0603
  | \d{1,15}
  | (?<!\.)\.\d{1,15}
"""
_UNIT = r"(?:[Oo][Hh][Mm][Ss]?|\u03a9|[Rr]|E|[Hh][Zz]|[FfHhAaVvWw]|\u00b0?C|%|mm)"
_QUALIFIER = r"(?i:dc|ac|rms|pk|max|dss?|gs|amps?|mps?|olts?|atts?|arads?|enry|d)"

_TOKEN = re.compile(
    rf"""
    (?P<variable>(?<!~)\$?\{{[^{{}}]*\}})
  | (?P<deviation>(?:\u00b1|\+/?-)\s?\d{{1,4}}(?:[.,]\d{{1,4}})?\s?
        [pnumkM]?(?:[Oo]hm|[\u03a9RFHVA])(?![A-Za-z0-9]))
  | (?P<asymmetric>\+(?P<above>\d{{1,3}})\s?%?\s?/?\s?-(?P<below>\d{{1,3}})\s?%)
  | (?P<aside>(?<![A-Za-z0-9])(?:
        \d{{1,5}}\s?ppm(?:/[KC])?
      | AEC-?\ ?Q\d{{3}}
      | B\s?=?\s?\d{{4}}K?
      | [+]?-?\d{{1,3}}\s?(?:\u00b0|deg)\s?C
      | \d{{1,3}}(?:\.\d{{1,3}})?x\d{{1,3}}(?:\.\d{{1,3}})?(?:x\d{{1,3}}(?:\.\d{{1,3}})?)?\s?mm
    )(?![A-Za-z0-9]))
  | (?P<size>(?<![A-Za-z0-9.])(?:(?:MELF|MINIMELF|SMD|CHIP|RES|CAP|IND|LED|FB|[RCLD])-?)?
        (?P<size_code>{"|".join(sorted(SIZES, reverse=True))})(?![A-Za-z0-9.\u03a9]|\ ?[Oo]hm))
  | (?P<outline>(?<![A-Za-z0-9])(?:{NAMED_OUTLINE})(?![A-Za-z0-9]))
  | (?:@\s{{0,3}}|(?<![A-Za-z0-9]))(?:
        (?P<fraction>(?P<upper>\d{{1,3}})/(?P<lower>[1-9]\d{{0,2}})\s?[Ww](?:att)?(?![A-Za-z0-9]))
      | (?P<coded>
            (?:(?P<coded_count>[1-9]\d?)\s?[xX*]\s?)?
            (?:(?P<whole>\d{{1,9}})(?P<letter>[RrEKkMmGUunpVvA\u03a9]|[NP](?=\d{{1,2}}(?!\d)))
              |(?P<lead>[Rrunp\u03a9]))
            (?P<part>\d{{1,4}})
            (?:\s?(?P<coded_ohm>[Oo][Hh][Mm][Ss]?|\u03a9)|(?P<coded_unit>[FfHhRr]))?
            (?P<coded_tolerance>[BCDFGJKMN])?
            (?:\s?[x*]\s?(?P<coded_after>[1-9]\d?)(?!\.))?
            (?![A-Za-z0-9%\u03a9]|\.\d)
        )
      | (?P<plain>
            (?:(?P<count>[1-9]\d?)\s?[xX*]\s?(?!0\d{{3}}))?
            (?P<number>{_NUMBER})(?P<exponent>[eE][-+]?\d{{1,2}})?
            (?:\s{{0,2}}
               (?P<prefix>[Mm][Ee][Gg][Aa]?|milli|micro|kilo|[pPnNuUmkKMG])?\s?
               (?:(?P<unit>{_UNIT})(?P<qualifier>{_QUALIFIER})?)?
            )?
            (?:(?<!\s)(?P<tolerance>[BCDFGJKMNZ]))?
            (?:(?<=[A-Za-z\u03a9])(?P<percent>\d{{1,2}}(?:\.\d)?)%)?
            (?:\s?[x*]\s?(?P<after>[1-9]\d?)(?!\.))?
            (?![A-Za-z0-9\u03a9]|\.\d)
        )
    )
  | (?P<word>[A-Za-z]+(?![A-Za-z0-9])|[A-Za-z0-9]+(?:[-.][A-Za-z0-9]+)*)
    """,
    re.VERBOSE | re.ASCII,
)

_PREFIXES = {"K": "k", "U": "u", "N": "n", "P": "p", "milli": "m", "micro": "u", "kilo": "k"}
_UNITS = dict.fromkeys(("r", "e", "ohm", "ohms", "\u03c9"), "ohm") | {"hz": "Hz", "\u00b0c": "degC"}
_UNITS |= {"f": "F", "h": "H", "a": "A", "v": "V", "w": "W", "c": "C", "%": "%", "mm": "mm"}
_ORDER_CODE_DIGITS = 7  # so many digits, more than four of them significant, are no value; our choice
_VALUE_DIGITS = 4


@dataclass(frozen=True, slots=True)
class Quantity:
    """A number as written, with what belongs to it.

    Attributes:
        numbers: The decimal numbers it can mean; two where a comma may group or divide.
        exponent: The power of ten that belongs to them, from the metric prefix and a written exponent.
        prefix: Metric prefix, one of the keys of ``EXPONENTS``.
        unit: "ohm", "H", "F", "A", "V", "W", "Hz", "C", "degC", "%", "mm", or "" when none is written.
        letter: The IEC 60062 letter in place of the decimal point, as written, or "".
        leads: Whether that letter stands in front of all digits ("R47").
        label: What is glued to the unit, lower case: "pk", "dc", "ds".
        tolerance: The tolerance glued to it as a fraction, from a letter or percentage, or None.
        count: The 2 of "2x10R".
        at: True behind an "@".
        start: Place of the first character in the scanned text.
        end: Place behind the last one.
    """

    numbers: tuple[str, ...]
    exponent: int
    prefix: str
    unit: str
    letter: str
    leads: bool
    label: str
    tolerance: float | None
    count: int
    at: bool
    start: int
    end: int

    @property
    def digits(self) -> str:
        """The number as a decimal number, without prefix and exponent; the smaller one of two."""
        return self.numbers[0]

    @property
    def number(self) -> float:
        """The number in its unit, prefix applied; the smaller one of two."""
        return scaled(self.numbers[0], exponent=self.exponent)

    def readings(self, *, shift: int = 0) -> tuple[float, ...]:
        """Return the numbers it can mean, prefix applied, times ten to the power of ``shift``."""
        return tuple([scaled(number, exponent=self.exponent + shift) for number in self.numbers])

    @property
    def bare(self) -> bool:
        """Whether neither prefix, unit nor code letter is written."""
        return not (self.unit or self.prefix or self.letter)


@dataclass(frozen=True, slots=True)
class Word:
    """A run of letters, or of letters and digits that is no quantity."""

    text: str


@dataclass(frozen=True, slots=True)
class Scan:
    """A scanned text.

    Attributes:
        text: What was scanned.
        tokens: Quantities and words in their order.
        quantities: The quantities alone.
        words: The words, lower case.
        package: The first size code or outline in the text.
        lone_size: The size code where it is the only number in the text, so that it may be the value, or "".
        unresolved: Whether a text variable is left in the text.
    """

    text: str
    tokens: tuple[Quantity | Word, ...]
    quantities: tuple[Quantity, ...]
    words: frozenset[str]
    package: str | None
    lone_size: str
    unresolved: bool


def normalised(text: str) -> str:
    """Return the text as it is scanned: cut, one character for each sign, no underscores."""
    clean = text[:MAX_LENGTH]
    if not clean.isascii():
        clean = unicodedata.normalize("NFKC", clean.translate(_SPACED)).translate(_REPLACED)[:MAX_LENGTH]
    if "{" in clean:
        clean = clean.replace("{slash}", "/")  # KiCad's escape for a stroke
    return clean.replace("_", " ")


def scanned(text: str) -> Scan:
    """Cut a normalised text into tokens; characters that mean nothing are dropped."""
    tokens: list[Quantity | Word] = []
    package = None
    unresolved = False
    size_code = ""
    for match in _TOKEN.finditer(text):
        match match.lastgroup:
            case "plain":
                tokens.append(_plain(match))
            case "coded":
                tokens.append(_coded(match))
            case "word":
                tokens.append(Word(match["word"]))
            case "size":
                size_code = match["size_code"]
                package = package or METRIC_SIZES.get(size_code, size_code)
            case "outline":
                package = package or match["outline"]
            case "fraction":
                power_w = int(match["upper"]) / int(match["lower"])
                tokens.append(_single(match, number=f"{power_w:.9f}", unit="W"))
            case "asymmetric":
                percentage = max(match["above"], match["below"], key=int)
                tokens.append(_single(match, number=percentage, unit="%"))
            case "variable":
                unresolved = True
            case _:
                pass  # temperature, temperature coefficient, dimensions of a case, deviation in its unit
    quantities = tuple([token for token in tokens if isinstance(token, Quantity)])
    return Scan(
        text=text,
        tokens=tuple(tokens),
        quantities=quantities,
        words=frozenset([token.text.lower() for token in tokens if isinstance(token, Word)]),
        package=package,
        lone_size="" if quantities else size_code,
        unresolved=unresolved,
    )


def _plain(match: re.Match[str]) -> Quantity | Word:
    number, prefix = match["number"], match["prefix"] or ""
    unit = _UNITS[match["unit"].lower()] if match["unit"] else ""
    if not prefix and not unit and _is_order_code(number):
        return Word(number)
    if prefix:
        prefix = _PREFIXES.get(prefix) or ("M" if len(prefix) > 1 else prefix)
        if prefix == "m" and unit == "Hz":
            prefix = "M"  # nobody means millihertz
    exponent = EXPONENTS[prefix] + int((match["exponent"] or "e0")[1:])
    return Quantity(
        numbers=decimal_readings(number),
        exponent=exponent,
        prefix=prefix,
        unit=unit,
        letter="",
        leads=False,
        label=(match["qualifier"] or "").lower(),
        tolerance=_tolerance(match["tolerance"], percent=match["percent"]),
        count=int(match["count"] or match["after"] or 1),
        at=match[0].startswith("@"),
        start=match.start(),
        end=match.end(),
    )


def _coded(match: re.Match[str]) -> Quantity:
    letter = match["letter"] or match["lead"]
    digits = f"{match['whole'] or ''}.{match['part']}"
    unit, prefix = "", ""
    if letter in "RrE\u03a9":
        unit = "ohm"
    elif letter in "VvA":
        unit = letter.upper()
    else:
        prefix = _PREFIXES.get(letter, letter)
    letter_behind = match["coded_tolerance"]
    written = match["coded_unit"] or match["coded_ohm"]
    if written in {"F", "f"} and (unit or prefix in "kMG"):
        letter_behind = "F"  # "4R7F" and "4k7F" are resistors of one percent, not farads
    elif written:
        unit = _UNITS[written.lower()]
    return Quantity(
        numbers=(digits,),
        exponent=EXPONENTS[prefix],
        prefix=prefix,
        unit=unit,
        letter=letter,
        leads=match["lead"] is not None,
        label="",
        tolerance=_tolerance(letter_behind),
        count=int(match["coded_count"] or match["coded_after"] or 1),
        at=match[0].startswith("@"),
        start=match.start(),
        end=match.end(),
    )


def _tolerance(letter: str | None, *, percent: str | None = None) -> float | None:
    if percent:
        return float(percent) / 100
    return TOLERANCES[letter] if letter else None


def _single(match: re.Match[str], *, number: str, unit: str) -> Quantity:
    return Quantity(
        numbers=(number,),
        exponent=0,
        prefix="",
        unit=unit,
        letter="",
        leads=False,
        label="",
        tolerance=None,
        count=1,
        at=False,
        start=match.start(),
        end=match.end(),
    )


def _is_order_code(number: str) -> bool:
    is_long = len(number) >= _ORDER_CODE_DIGITS and number.isdecimal()
    return is_long and len(significant_digits(number)) > _VALUE_DIGITS
