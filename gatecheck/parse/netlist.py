"""Exported netlists in S-expressions: versions D (up to v5) and E (from v6).

Types of pins are written differently in the two; both come out in the words of version E.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from gatecheck.parse.document import Document, Malformed, Span
from gatecheck.parse.fields import text

if TYPE_CHECKING:
    from collections.abc import Mapping

    from gatecheck.errors import InputError
    from gatecheck.parse.sexpr import Node

_REEXPORT = "export the netlist again"
_RELEASE = re.compile(r"(\d{1,3})\.\d")
_NEWEST = 999

_OLD_PIN_TYPES = {
    "BiDi": "bidirectional",
    "3state": "tri_state",
    "unspc": "unspecified",
    "openCol": "open_collector",
    "openEm": "open_emitter",
    "NotConnected": "no_connect",
}


@dataclass(frozen=True, slots=True)
class LibraryPin:
    """A pin as the symbol library has it."""

    number: str
    name: str
    electrical: str


@dataclass(frozen=True, slots=True)
class Component:
    """A part of the netlist. `units` as (name, pin numbers), where the exporter wrote them."""

    reference: str
    value: str
    footprint: str
    fields: Mapping[str, str]
    flags: frozenset[str]
    library: str
    part: str
    description: str
    symbol_path: str
    units: tuple[tuple[str, tuple[str, ...]], ...]
    start: int


@dataclass(frozen=True, slots=True)
class NetNode:
    """One pin on one net."""

    reference: str
    pin: str
    function: str
    electrical: str
    start: int


@dataclass(frozen=True, slots=True)
class NetlistFile:
    """A netlist; `troubles` are the forms that could not be read, each with its place."""

    document: Document
    release: int  # of the program that exported it; newest where the file does not say
    components: tuple[Component, ...]
    library_pins: Mapping[tuple[str, str], tuple[LibraryPin, ...]]
    nets: Mapping[str, tuple[NetNode, ...]]
    troubles: tuple[InputError, ...]


@dataclass(slots=True)
class _Gathered:
    components: list[Component] = field(default_factory=list)
    library_pins: dict[tuple[str, str], tuple[LibraryPin, ...]] = field(default_factory=dict)
    nets: dict[str, list[NetNode]] = field(default_factory=dict)


def read_netlist(document: Document) -> NetlistFile:
    """Read a netlist's parts, library pins and nets.

    Raises:
        InputError: if there is no part in it. A single bad form is returned as a trouble.
    """
    found, troubles = _Gathered(), []
    sections = list(document.named("components", "libparts", "nets"))
    for _, section in sections:
        for span in document.children(section):
            try:
                _read_entry(document, span, found)
            except Malformed as bad:
                troubles.append(document.trouble(span, bad, _REEXPORT))
    if not found.components and not troubles:
        raise document.error(document.root.start, "an empty netlist: there is no part in it", _REEXPORT)
    nets = {name: tuple(nodes) for name, nodes in found.nets.items()}
    return NetlistFile(document, _release(document), tuple(found.components), found.library_pins, nets, tuple(troubles))


def _release(document: Document) -> int:
    """`(tool "Eeschema 9.0.2")` is 9."""
    for _, span in document.named("design"):
        for child in document.children(span):
            if document.head_of(child.start) == "tool":
                found = _RELEASE.search((document.read(child).atoms() or [""])[0][:100])
                return int(found.group(1)) if found else _NEWEST
    return _NEWEST


def _read_entry(document: Document, span: Span, found: _Gathered) -> None:
    node = document.read(span)
    if node.head == "comp":
        found.components.append(_component(node, span.start))
    elif node.head == "libpart":
        pins = tuple(_library_pin(pin) for pins in node.forms("pins") for pin in pins.forms("pin"))
        library = _said(node, "lib")
        found.library_pins[library, _said(node, "part")] = pins
        for aliases in node.forms("aliases"):
            for alias in aliases.forms("alias"):
                found.library_pins[library, text(alias)] = pins
    elif node.head == "net":
        name = _said(node, "name")
        nodes = [_net_node(entry, span.start + entry.start) for entry in node.forms("node")]
        found.nets.setdefault(name, []).extend(nodes)


def _component(node: Node, start: int) -> Component:
    fields: dict[str, str] = {}
    flags: set[str] = set()
    for group in node.forms("fields"):
        for entry in group.forms("field"):
            fields[_said(entry, "name")] = (entry.atoms() or [""])[0]
    for entry in node.forms("property"):
        name = _said(entry, "name")
        if entry.form("value") is None:
            flags.add(name)
        else:
            fields.setdefault(name, _said(entry, "value"))
    source = node.form("libsource")
    stamps = node.form("tstamps") or node.form("tstamp")
    sheet = node.form("sheetpath")
    return Component(
        reference=_required(node, "ref"),
        value=_blank(_said(node, "value")),
        footprint=_said(node, "footprint"),
        fields=fields,
        flags=frozenset(flags),
        library=_said(source, "lib") if source is not None else "",
        part=_said(source, "part") if source is not None else "",
        description=_said(node, "description") or (_said(source, "description") if source is not None else ""),
        symbol_path=(_said(sheet, "tstamps") if sheet is not None else "/") + (stamps.atoms() or [""])[0]
        if stamps is not None
        else "",
        units=_units(node),
        start=start,
    )


def _units(node: Node) -> tuple[tuple[str, tuple[str, ...]], ...]:
    return tuple(
        (
            _said(unit, "name"),
            tuple(_said(pin, "num") for pins in unit.forms("pins") for pin in pins.forms("pin")),
        )
        for units in node.forms("units")
        for unit in units.forms("unit")
    )


def _library_pin(node: Node) -> LibraryPin:
    return LibraryPin(_said(node, "num"), _blank(_said(node, "name")), _pin_type(_said(node, "type")))


def _net_node(node: Node, start: int) -> NetNode:
    return NetNode(
        _required(node, "ref"),
        _required(node, "pin"),
        _blank(_said(node, "pinfunction")),
        _pin_type(_said(node, "pintype")),
        start,
    )


def _pin_type(word: str) -> str:
    return _OLD_PIN_TYPES.get(word, word)


def _blank(word: str) -> str:
    """Up to v9 a lone tilde stands for empty text."""
    return "" if word == "~" else word


def _said(node: Node, head: str) -> str:
    """The text of a form inside, empty if there is none."""
    form = node.form(head)
    return (form.atoms() or [""])[0] if form is not None else ""


def _required(node: Node, head: str) -> str:
    form = node.form(head)
    if form is None:
        raise Malformed(node.start, f"({node.head}) has no ({head}) in it")
    return text(form)
