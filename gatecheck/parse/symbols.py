"""Library symbols as they are embedded in a sheet: units, body styles, pins, power symbols.

Graphics, which are most of a symbol, are left unparsed.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from gatecheck.parse.document import Malformed
from gatecheck.parse.fields import flag, number, text, unescaped

if TYPE_CHECKING:
    from collections.abc import Mapping

    from gatecheck.parse.document import Document, Span
    from gatecheck.parse.sexpr import Node

_UNIT = 10_000
# `NAME_2_1` is unit 2, style 1; names contain underscores themselves.
_SUFFIX = re.compile(r"_(\d{1,4})_(\d{1,4})$")
_STACKED = re.compile(r"\[([^\[\]]{1,200})\]")
_MOST_STACKED = 500


@dataclass(frozen=True, slots=True)
class LibraryPin:
    """A pin; its electrical point in symbol axes (y up). `alternates` are the other functions it may take."""

    numbers: tuple[str, ...]
    name: str
    electrical: str
    x: int
    y: int
    hidden: bool
    alternates: Mapping[str, str]


@dataclass(slots=True)
class LibrarySymbol:
    """A symbol: its pins by (unit, style), where unit 0 and style 0 stand for all."""

    power: str = ""  # "", "global", "local"
    extends: str = ""
    fields: dict[str, str] = field(default_factory=dict)
    pins: dict[tuple[int, int], list[LibraryPin]] = field(default_factory=dict)
    jumpers: list[tuple[str, ...]] = field(default_factory=list)
    same_numbers_joined: bool = False

    @property
    def units(self) -> int:
        """How many units it has."""
        return max((unit for unit, _ in self.pins), default=1) or 1

    def active(self, unit: int, style: int) -> list[LibraryPin]:
        """The pins of one unit in one body style."""
        return [pin for (u, s), pins in self.pins.items() if u in (0, unit) and s in (0, style) for pin in pins]


def read_library(document: Document, span: Span) -> dict[str, LibrarySymbol]:
    """The symbols of a `lib_symbols` section by their keys."""
    found: dict[str, LibrarySymbol] = {}
    for child in document.children(span):
        if document.head_of(child.start) == "symbol":
            inner = document.children(child)
            name = document.opening(child, inner[0] if inner else None).atoms()[:1]
            if name:
                found[name[0]] = _symbol(document, inner)
    for symbol in found.values():
        parent = found.get(symbol.extends) if symbol.extends else None
        if parent is not None and not symbol.pins:
            symbol.pins, symbol.power = parent.pins, symbol.power or parent.power
    return found


def _symbol(document: Document, children: list[Span]) -> LibrarySymbol:
    symbol = LibrarySymbol()
    for child in children:
        head = document.head_of(child.start)
        if head == "symbol":
            _unit(document, child, symbol)
        elif head == "power":
            symbol.power = (document.read(child).atoms() or ["global"])[0]
        elif head == "extends":
            symbol.extends = text(document.read(child))
        elif head == "property":
            words = [word for word in document.read(child).atoms() if word != "private"]
            symbol.fields[words[0] if words else ""] = words[1] if len(words) > 1 else ""
        elif head == "jumper_pin_groups":
            symbol.jumpers += [(group.head, *group.atoms()) for group in document.read(child).forms()]
        elif head in ("duplicate_pin_numbers_are_jumpers", "duplicate_pad_numbers_are_jumpers"):
            symbol.same_numbers_joined = flag(document.read(child))
    return symbol


def _unit(document: Document, span: Span, symbol: LibrarySymbol) -> None:
    children = document.children(span)
    name = (document.opening(span, children[0] if children else None).atoms() or [""])[0]
    match = _SUFFIX.search(name)
    key = (int(match.group(1)), int(match.group(2))) if match else (0, 0)
    pins = [child for child in children if document.head_of(child.start) == "pin"]
    symbol.pins.setdefault(key, []).extend(_pin(document.read(child)) for child in pins)


def _pin(node: Node) -> LibraryPin:
    at, name, number_form, hide = node.form("at"), node.form("name"), node.form("number"), node.form("hide")
    if at is None:
        raise Malformed(node.start, "a pin needs a place")
    said = text(name) if name is not None else ""
    return LibraryPin(
        numbers=_numbers(text(number_form) if number_form is not None else ""),
        name="" if said == "~" else unescaped(said),
        electrical=text(node),
        x=round(number(at) * _UNIT),
        y=round(number(at, 2) * _UNIT),
        hidden=flag(hide) if hide is not None else "hide" in node.atoms(),
        alternates={text(form): text(form, 2) for form in node.forms("alternate")},
    )


def _numbers(said: str) -> tuple[str, ...]:
    """`[1-3,7]` stacks pads 1, 2, 3 and 7 on one pin."""
    match = _STACKED.fullmatch(said)
    if match is None:
        return ("",) if said == "~" else (said,)
    found: list[str] = []
    for piece in match.group(1).split(","):
        first, dash, last = piece.strip().partition("-")
        if dash and first.isdecimal() and last.isdecimal() and int(last) - int(first) < _MOST_STACKED:
            found += [str(i) for i in range(int(first), int(last) + 1)]
        else:
            found.append(piece.strip())
    return tuple(found[:_MOST_STACKED]) or ("",)
