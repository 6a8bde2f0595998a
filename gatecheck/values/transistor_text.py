"""Reads library descriptions of transistors, such as "60A Id, 100V Vds, N-Channel MOSFET, 4.1mOhm Ron"."""

from __future__ import annotations

import re
from dataclasses import dataclass
from itertools import takewhile
from typing import TYPE_CHECKING, Literal

from .model import TransistorText
from .scanner import Quantity, Word, normalised, scanned

if TYPE_CHECKING:
    from collections.abc import Iterator

    from .scanner import Scan

# A comma between two digits may divide or group; any other ends a statement.
_STATEMENT_END = re.compile(r";|,(?!\d)|(?<![0-9]),")
_CHANNEL = re.compile(r"(?i)(?<![a-z0-9])(?P<channel>[np])[- ]?(?:channel|chan|ch|mosfet|mos|fet|type)(?![a-z])")
_BOTH_CHANNELS = re.compile(
    r"(?i)(?<![a-z0-9])(?:n[- ]{0,2}(?:and|[/&+])[- ]?p|p[- ]{0,2}(?:and|[/&+])[- ]?n|complementary)(?![a-z])"
)
# A silicon carbide diode beside an IGBT does not make it a silicon carbide switch.
_CARBIDE_DIODE = re.compile(r"(?i)(?:sic|silicon carbide)[- ](?:schottky|diode|sbd)")
_TECHNOLOGIES: tuple[tuple[Literal["sic", "gan", "igbt"], re.Pattern[str]], ...] = (
    ("sic", re.compile(r"(?i)(?<![a-z0-9])(?:sic|silicon[- ]carbide)(?![a-z])")),
    ("gan", re.compile(r"(?i)(?<![a-z0-9])(?:e?gan|gallium[- ]nitride|hemt)(?![a-z])")),
    ("igbt", re.compile(r"(?i)(?<![a-z0-9])[np]?igbt")),
)
_SILICON = re.compile(r"(?i)(?<![a-z0-9])(?:si|silicon|super[- ]?junction|trench)(?![a-z])")

# Words that tell what a quantity is: what we want, and what must not be taken for it. Common practice.
_RATED = {
    "A": frozenset({"id", "ic", "ids", "idmax", "icmax"}),
    "V": frozenset({"vds", "vdss", "vdsmax", "vce", "vces", "vceo", "bvdss", "bvces", "vbr"}),
    "ohm": frozenset({"ron", "rds", "rdson"}),
}
_NOT_RATED = {
    "A": frozenset({"idm", "icm", "idpulse", "icpulse", "pulse", "pulsed", "peak", "igss", "is", "if", "ias"}),
    "V": frozenset({"vgs", "vge", "vgss", "vges", "vth", "vgsth", "th", "vf", "vsd", "sat", "gate", "drive"}),
    "ohm": frozenset({"rg", "rgint", "rth"}),
}
_TOTAL_CHARGES = frozenset({"qg", "qgtyp", "qgmax", "qgtot", "qgtotal"})
_PARTIAL_CHARGES = frozenset({"qgd", "qgs", "qrr", "qoss", "qsync"})
_LONGEST_CHARGE_LABEL = 7
_CONNECTORS = frozenset({"-", "..", "...", "~", "to"})


@dataclass(frozen=True, slots=True)
class _Statement:
    """One quantity with the words next to it, lower case, nearest first."""

    quantity: Quantity
    before: tuple[str, ...]
    behind: tuple[str, ...]

    def label(self, *, known: frozenset[str]) -> str | None:
        """Return the nearest known word: one before the quantity, else one behind it, else None."""
        return next((word for word in self.before + self.behind if word in known), None)


def parse_transistor_text(text: str) -> TransistorText:
    """Read a transistor's description or value text.

    Args:
        text: Any string; no more than 400 characters are parsed.

    Returns:
        What the text says. Never raises.
    """
    clean = normalised(text)
    statements = [statement for part in _STATEMENT_END.split(clean) for statement in _statements(scanned(part))]
    charge_c, charge_kind = _gate_charge(statements)
    return TransistorText(
        channel=_channel(clean),
        technology=_technology(clean),
        voltage_v=_rated(statements, unit="V"),
        current_a=_rated(statements, unit="A"),
        on_resistance_ohm=_rated(statements, unit="ohm"),
        gate_charge_c=charge_c,
        gate_charge_kind=charge_kind,
    )


def _statements(scan: Scan) -> Iterator[_Statement]:
    """Yield the quantities that are ratings: neither a test condition behind an "@" nor an end of a range."""
    before: list[str] = []
    last: Quantity | None = None
    for place, token in enumerate(scan.tokens):
        if isinstance(token, Word):
            before.insert(0, token.text.lower())
            continue
        gap = scan.text[last.end if last else 0 : token.start].strip()
        if not (token.at or "@" in gap or (last is not None and gap in _CONNECTORS)):
            yield _Statement(token, tuple(before), _words_behind(scan, place))
        before, last = [], token


def _words_behind(scan: Scan, place: int) -> tuple[str, ...]:
    following = takewhile(lambda token: isinstance(token, Word), scan.tokens[place + 1 :])
    return tuple([token.text.lower() for token in following if isinstance(token, Word)])


def _rated(statements: list[_Statement], *, unit: str) -> float | None:
    """Return the rating of a unit in SI: one with the right label before one without, the first of more."""
    rated, not_rated = _RATED[unit], _NOT_RATED[unit]
    unlabelled: float | None = None
    for statement in statements:
        quantity = statement.quantity
        if quantity.unit != unit or quantity.label == "gs":
            continue
        label = statement.label(known=rated | not_rated)
        if label in not_rated:
            continue
        if label in rated or quantity.label in {"ds", "dss"}:
            return quantity.number
        unlabelled = quantity.number if unlabelled is None else unlabelled
    return unlabelled


def _gate_charge(
    statements: list[_Statement],
) -> tuple[float | None, Literal["typ", "max", "unknown"] | None]:
    """Return the gate charge, coulomb, and what it is; a total gate charge beats one of unknown kind."""
    unknown: float | None = None
    for statement in statements:
        quantity = statement.quantity
        if quantity.unit != "C" or not quantity.prefix:  # "25C" is a temperature
            continue
        words = statement.before + statement.behind
        label = next((word for word in words if word[0] == "q" and len(word) <= _LONGEST_CHARGE_LABEL), None)
        if label in _PARTIAL_CHARGES:
            continue
        if label in _TOTAL_CHARGES:
            return quantity.number, "max" if label.endswith("max") or "max" in words else "typ"
        unknown = quantity.number if unknown is None else unknown
    return unknown, None if unknown is None else "unknown"


def _channel(text: str) -> Literal["n", "p"] | None:
    if _BOTH_CHANNELS.search(text):
        return None
    channels = {match["channel"].lower() for match in _CHANNEL.finditer(text)}
    if channels == {"n"}:
        return "n"
    return "p" if channels == {"p"} else None


def _technology(text: str) -> Literal["si", "sic", "gan", "igbt"] | None:
    rest = _CARBIDE_DIODE.sub(" ", text)
    named = [technology for technology, pattern in _TECHNOLOGIES if pattern.search(rest)]
    if len(named) == 1:
        return named[0]
    return "si" if not named and _SILICON.search(rest) else None
