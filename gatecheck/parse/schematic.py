"""One schematic sheet file (v6 to v10): symbols, wires, labels, sheets, buses. Drawing units are integers.

Which points touch is decided by exact comparison, so coordinates are counted in tenths of a micrometre. y
points down on a sheet; in library symbols it points up and is turned over where pins are placed.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import pairwise
from typing import TYPE_CHECKING

from gatecheck.parse.document import Document, Malformed, Span
from gatecheck.parse.fields import flag, number, text, unescaped, whole
from gatecheck.parse.symbols import LibrarySymbol, read_library

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from gatecheck.errors import InputError
    from gatecheck.parse.sexpr import Node

_UNIT = 10_000  # steps per millimetre
_RESAVE = "open the sheet in its editor and save it again"

Point = tuple[int, int]
Line = tuple[Point, Point]


@dataclass(frozen=True, slots=True)
class Instance:
    """What a symbol is called on one path through the hierarchy."""

    path: str
    reference: str
    unit: int


@dataclass(frozen=True, slots=True)
class SymbolForm:
    """One symbol on the sheet."""

    library_key: str
    at: Point
    angle: int
    mirror: str  # "", "x", "y"
    unit: int
    style: int
    uuid: str
    fields: Mapping[str, str]
    fitted: bool
    on_board: bool
    instances: tuple[Instance, ...]
    alternates: Mapping[str, str]  # pin number -> alternate function chosen
    start: int


@dataclass(frozen=True, slots=True)
class Label:
    """A label: local, global or hierarchical, or the pin of a sheet symbol."""

    kind: str
    text: str
    at: Point
    shape: str = ""


@dataclass(frozen=True, slots=True)
class SheetSymbol:
    """A sheet drawn as a box: the file behind it and its pins."""

    uuid: str
    name: str
    file: str
    pins: tuple[Label, ...]
    start: int


@dataclass(slots=True)
class SheetFile:
    """One file; it may be drawn many times. `named_instances` is the root's list of v6: path -> fields."""

    document: Document
    version: int = 0
    uuid: str = ""
    library: dict[str, LibrarySymbol] = field(default_factory=dict)
    symbols: list[SymbolForm] = field(default_factory=list)
    sheets: list[SheetSymbol] = field(default_factory=list)
    labels: list[Label] = field(default_factory=list)
    wires: list[Line] = field(default_factory=list)
    buses: list[Line] = field(default_factory=list)
    bus_entries: list[Line] = field(default_factory=list)
    junctions: list[Point] = field(default_factory=list)
    bus_aliases: dict[str, list[str]] = field(default_factory=dict)
    named_instances: dict[str, dict[str, str]] = field(default_factory=dict)
    variants: set[str] = field(default_factory=set)
    troubles: list[InputError] = field(default_factory=list)


def read_sheet(document: Document) -> SheetFile:
    """Read one sheet file. A single bad form is kept as a trouble, and the rest is read."""
    sheet = SheetFile(document)
    for head, span in document.named(*_READERS):
        try:
            _READERS[head](sheet, span)
        except Malformed as bad:
            sheet.troubles.append(document.trouble(span, bad, _RESAVE))
    return sheet


def _point(node: Node, position: int = 1) -> Point:
    return round(number(node, position) * _UNIT), round(number(node, position + 1) * _UNIT)


def _form(node: Node, head: str) -> Node:
    found = node.form(head)
    if found is None:
        raise Malformed(node.start, f"({node.head}) has no ({head}) in it")
    return found


def _version(sheet: SheetFile, span: Span) -> None:
    sheet.version = whole(sheet.document.read(span))


def _uuid(sheet: SheetFile, span: Span) -> None:
    sheet.uuid = text(sheet.document.read(span))


def _library(sheet: SheetFile, span: Span) -> None:
    sheet.library.update(read_library(sheet.document, span))


def _line(into: str) -> Callable[[SheetFile, Span], None]:
    def read(sheet: SheetFile, span: Span) -> None:
        points = [_point(form) for form in _form(sheet.document.read(span), "pts").forms("xy")]
        lines: list[Line] = getattr(sheet, into)
        lines += list(pairwise(points))

    return read


def _bus_entry(sheet: SheetFile, span: Span) -> None:
    node = sheet.document.read(span)
    start, size = _point(_form(node, "at")), _point(_form(node, "size"))
    sheet.bus_entries.append((start, (start[0] + size[0], start[1] + size[1])))


def _junction(sheet: SheetFile, span: Span) -> None:
    sheet.junctions.append(_point(_form(sheet.document.read(span), "at")))


def _label(sheet: SheetFile, span: Span) -> None:
    node = sheet.document.read(span)
    kind = {"label": "local", "global_label": "global", "hierarchical_label": "hierarchical"}[node.head]
    sheet.labels.append(Label(kind, text(node), _point(_form(node, "at"))))


def _bus_alias(sheet: SheetFile, span: Span) -> None:
    node = sheet.document.read(span)
    sheet.bus_aliases[unescaped(text(node))] = _form(node, "members").atoms()


def _sheet(sheet: SheetFile, span: Span) -> None:
    node = sheet.document.read(span)
    properties = _properties(node)
    name, file = (
        next((properties[key] for key in keys if key in properties), "")
        for keys in (("Sheetname", "Sheet name"), ("Sheetfile", "Sheet file"))
    )
    pins = [Label("sheet pin", text(pin), _point(_form(pin, "at")), text(pin, 2)) for pin in node.forms("pin")]
    uuid = node.form("uuid")
    sheet.sheets.append(SheetSymbol(text(uuid) if uuid is not None else "", name, file, tuple(pins), span.start))


def _properties(node: Node) -> dict[str, str]:
    """`(property "Key" "value" …)`; a bare `private` may stand before the key."""
    found: dict[str, str] = {}
    for form in node.forms("property"):
        words = form.atoms()
        if words[:1] == ["private"]:
            words = words[1:]
        if words:
            found.setdefault(words[0], words[1] if len(words) > 1 else "")
    return found


def _symbol(sheet: SheetFile, span: Span) -> None:
    node = sheet.document.read(span)
    at = _form(node, "at")
    said = {form.head: form for form in node.forms() if form.head in _SYMBOL_FORMS}
    key = said.get("lib_name") or said.get("lib_id")
    style = said.get("body_style") or said.get("convert")
    words = at.atoms()
    sheet.symbols.append(
        SymbolForm(
            library_key=text(key) if key is not None else "",
            at=_point(at),
            angle=round(number(at, 3)) % 360 if len(words) > 2 else 0,  # noqa: PLR2004 (x, y, angle)
            mirror=text(said["mirror"]) if "mirror" in said else "",
            unit=whole(said["unit"]) if "unit" in said else 1,
            style=whole(style) if style is not None else 1,
            uuid=text(said["uuid"]) if "uuid" in said else "",
            fields=_properties(node),
            fitted=not ("dnp" in said and flag(said["dnp"])),
            on_board="on_board" not in said or flag(said["on_board"]),
            instances=_instances(sheet, node),
            alternates={
                text(pin): text(chosen) for pin in node.forms("pin") if (chosen := pin.form("alternate")) is not None
            },
            start=span.start,
        )
    )


_SYMBOL_FORMS = frozenset(("lib_name", "lib_id", "mirror", "unit", "convert", "body_style", "uuid", "dnp", "on_board"))


def _instances(sheet: SheetFile, node: Node) -> tuple[Instance, ...]:
    found = []
    for group in node.forms("instances"):
        for project in group.forms("project"):
            for path in project.forms("path"):
                reference, unit = path.form("reference"), path.form("unit")
                if reference is not None:
                    found.append(Instance(text(path), text(reference), whole(unit) if unit is not None else 1))
                # What they change is left unread; that they exist is said.
                names = (form.form("name") or form for form in path.forms("variant"))
                sheet.variants.update(text(name) for name in names if name.atoms())
    return tuple(found)


def _symbol_instances(sheet: SheetFile, span: Span) -> None:
    """v6 keeps references of the whole hierarchy in the root file, by paths without the root's uuid."""
    for child in sheet.document.children(span):
        path = sheet.document.read(child)
        if path.head == "path":
            sheet.named_instances[text(path)] = {form.head: (form.atoms() or [""])[0] for form in path.forms()}


_READERS: Mapping[str, Callable[[SheetFile, Span], None]] = {
    "version": _version,
    "uuid": _uuid,
    "lib_symbols": _library,
    "symbol": _symbol,
    "sheet": _sheet,
    "wire": _line("wires"),
    "bus": _line("buses"),
    "bus_entry": _bus_entry,
    "junction": _junction,
    "label": _label,
    "global_label": _label,
    "hierarchical_label": _label,
    "bus_alias": _bus_alias,
    "symbol_instances": _symbol_instances,
}
