"""Boards of every era, from `(version 4)` to the formats that know nets by name.

What a review of gate networks needs is read: parts, pads, nets, layers. Graphics, fills, models and blobs
are left where they are. Lengths are millimetres and angles degrees, as in the file; y points down.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from itertools import chain
from typing import TYPE_CHECKING, Any

from gatecheck.parse.document import Document, Malformed, Span
from gatecheck.parse.fields import flag, number, numbers, text, whole
from gatecheck.parse.sexpr import Text

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from gatecheck.errors import InputError
    from gatecheck.parse.sexpr import Node

# Board format versions are dates. From this one on, layers are called by canonical names and the user's own
# name is a fourth column; before, items use the user's name.
_CANONICAL_LAYERS = 20200922
# From this one on there are no net codes, and a pad's function carries the pad number (`G_1`).
NETS_BY_NAME = 20251028
_LAST_COPPER = 31  # layer number of the bottom copper up to v8
_RESAVE = "open the board in its editor and save it again"


@dataclass(frozen=True, slots=True)
class PadForm:
    """One pad as the file has it.

    `x_mm`, `y_mm` are relative to the footprint; `angle_deg` is absolute.
    """

    number: str
    kind: str  # smd, thru_hole, connect, np_thru_hole
    shape: str
    x_mm: float
    y_mm: float
    angle_deg: float
    width_mm: float
    height_mm: float
    offset_mm: tuple[float, ...]
    corner_ratio: float
    layers: tuple[str, ...]
    net: str
    function: str
    electrical: str
    start: int


@dataclass(frozen=True, slots=True)
class FootprintForm:
    """One footprint as the file has it; positions in board axes."""

    library: str
    layer: str
    x_mm: float
    y_mm: float
    angle_deg: float
    reference: str
    value: str
    fields: Mapping[str, str]
    description: str
    tags: str
    symbol_path: str
    attributes: frozenset[str]
    units: tuple[tuple[str, tuple[str, ...]], ...]
    net_ties: tuple[tuple[str, ...], ...]
    pads: tuple[PadForm, ...]
    start: int


@dataclass(frozen=True, slots=True)
class StackForm:
    """The board's total thickness, and its layers from top to bottom as (name, is copper, thickness)."""

    thickness_mm: float | None = None
    layers: tuple[tuple[str, bool, float], ...] = ()


@dataclass(frozen=True, slots=True)
class BoardFile:
    """A board; `troubles` are the forms that could not be read, each with its place."""

    document: Document
    version: int
    layers: Mapping[str, str]  # name used in the file -> canonical name, copper only
    nets: Mapping[str, str]  # net code -> name; empty where nets go by name
    stack: StackForm
    footprints: tuple[FootprintForm, ...]
    troubles: tuple[InputError, ...]


def read_board(document: Document) -> BoardFile:
    """Read a board's parts and nets.

    Raises:
        InputError: if the file holds no footprint at all. A single bad form is no reason to stop: it is
            returned as a trouble, and the rest is read.
    """
    troubles: list[InputError] = []
    version, layers, nets, footprints, stack = 0, _Layers(), {}, [], StackForm()
    # The order of sections is not promised, and parts need all the others.
    order = (("version",), ("layers", "net"), ("general", "setup"), ("footprint", "module"))
    for head, span in chain.from_iterable(document.named(*heads) for heads in order):
        try:
            if head == "version":
                version = whole(document.read(span))
            elif head == "layers":
                layers = _layers(document.read(span), version)
            elif head == "general":
                stack = replace(stack, thickness_mm=_thickness(document.read(span)))
            elif head == "setup":
                stack = replace(stack, layers=_stackup(document, span))
            elif head == "net":
                node = document.read(span)
                nets[text(node)] = text(node, 2) if len(node) > 2 else text(node)  # noqa: PLR2004 (code, name)
            else:
                footprints.append(_Footprint(document, version, layers, nets).read(span))
        except Malformed as bad:
            troubles.append(document.trouble(span, bad, _RESAVE))
    if not footprints and not troubles:
        raise document.error(document.root.start, "an empty board: there is no footprint in it", "name another file")
    return BoardFile(document, version, layers.canonical, nets, stack, tuple(footprints), tuple(troubles))


@dataclass(slots=True)
class _Layers:
    """Copper layers by the name that items of this file use."""

    canonical: dict[str, str] = field(default_factory=lambda: {"F.Cu": "F.Cu", "B.Cu": "B.Cu"})

    def name(self, layer: str) -> str:
        return self.canonical.get(layer, layer)


def _layers(node: Node, version: int) -> _Layers:
    found = {}
    for row in node.forms():
        code, name = row.head, text(row, 1)
        if version < _CANONICAL_LAYERS and code.isdecimal() and len(code) < 3 and int(code) <= _LAST_COPPER:  # noqa: PLR2004
            found[name] = {0: "F.Cu", _LAST_COPPER: "B.Cu"}.get(int(code), f"In{int(code)}.Cu")
        elif name.endswith(".Cu"):
            found[name] = name
    return _Layers(found)


def _thickness(general: Node) -> float | None:
    form = general.form("thickness")
    return number(form) if form is not None else None


def _stackup(document: Document, setup: Span) -> tuple[tuple[str, bool, float], ...]:
    """Layers with a thickness, top to bottom. A dielectric of several sheets repeats its thickness: the sum."""
    rows = []
    for child in document.children(setup):
        if document.head_of(child.start) == "stackup":
            for layer in document.read(child).forms("layer"):
                thickness_mm = sum(number(form) for form in layer.forms("thickness"))
                kind = layer.form("type")
                rows.append((text(layer), kind is not None and text(kind) == "copper", thickness_mm))
    return tuple(rows)


@dataclass(slots=True)
class _Footprint:
    """Gathers one footprint from its child forms."""

    document: Document
    version: int
    board_layers: _Layers
    nets: Mapping[str, str]
    layer: str = "F.Cu"
    at: tuple[float, ...] = (0.0, 0.0, 0.0)
    texts: dict[str, str] = field(default_factory=dict)  # reference, value, descr, tags, path
    fields: dict[str, str] = field(default_factory=dict)
    attributes: set[str] = field(default_factory=set)
    units: list[tuple[str, tuple[str, ...]]] = field(default_factory=list)
    net_ties: list[tuple[str, ...]] = field(default_factory=list)
    pads: list[PadForm] = field(default_factory=list)

    def read(self, span: Span) -> FootprintForm:
        children = self.document.children(span)
        opening = self.document.opening(span, children[0] if children else None)
        atoms = opening.atoms()
        for child in children:
            reader = _CHILDREN.get(self.document.head_of(child.start))
            if reader is None:
                continue
            try:
                reader(self, child)
            except Malformed as bad:
                raise Malformed(child.start - span.start + bad.offset, bad.message) from None
        return FootprintForm(
            library=atoms[0] if atoms else "",
            layer=self.board_layers.name(self.layer),
            x_mm=self.at[0],
            y_mm=self.at[1],
            angle_deg=self.at[2],
            reference=self.texts.get("reference", ""),
            value=self.texts.get("value", ""),
            fields=self.fields,
            description=self.texts.get("descr", ""),
            tags=self.texts.get("tags", ""),
            symbol_path=self.texts.get("path", ""),
            attributes=frozenset(self.attributes),
            units=tuple(self.units),
            net_ties=tuple(self.net_ties),
            pads=tuple(self.pads),
            start=span.start,
        )

    def read_layer(self, span: Span) -> None:
        self.layer = text(self.document.read(span))

    def read_at(self, span: Span) -> None:
        self.at = numbers(self.document.read(span), 3, at_least=2)

    def read_text(self, span: Span) -> None:
        """`(descr …)`, `(tags …)`, `(path …)`; an empty one has no atom at all in some files."""
        node = self.document.read(span)
        self.texts[node.head] = (node.atoms() or [""])[0]

    def read_fp_text(self, span: Span) -> None:
        """`(fp_text reference locked "R7" …)`: quoted from v6 on, bare words before, flags in any place."""
        children = self.document.children(span)
        words = self.document.opening(span, children[0] if children else None).atoms()
        if len(words) > 1 and words[0] in ("reference", "value"):
            said = [word for word in words[1:] if isinstance(word, Text)]
            bare = [word for word in words[1:] if word not in ("locked", "hide")]
            self.texts[words[0]] = (said or bare or [""])[0]

    def read_property(self, span: Span) -> None:
        """`(property "Reference" "Q7" …)`; a bare `private` may stand before the key, and keys may be bare."""
        children = self.document.children(span)
        words = self.document.opening(span, children[0] if children else None).atoms()
        if words and words[0] == "private" and not isinstance(words[0], Text):
            words = words[1:]
        if words:
            key, value = words[0], words[1] if len(words) > 1 else ""
            if key in ("Reference", "Value"):
                self.texts[key.lower()] = value
            else:
                self.fields[key] = value

    def read_attributes(self, span: Span) -> None:
        node = self.document.read(span)
        self.attributes.update(node.atoms())
        self.attributes.update(form.head for form in node.forms() if flag(form))

    def read_units(self, span: Span) -> None:
        for unit in self.document.read(span).forms("unit"):
            name, pins = unit.form("name"), unit.form("pins")
            if name is not None and pins is not None:
                self.units.append((text(name), tuple(pins.atoms())))

    def read_net_ties(self, span: Span) -> None:
        """Each string is one group of pads that are one piece of copper: `"1, 2" "3,4"`."""
        for group in self.document.read(span).atoms():
            self.net_ties.append(tuple(number.strip() for number in group.split(",")))

    def read_pad(self, span: Span) -> None:
        children = self.document.children(span)
        words = self.document.opening(span, children[0] if children else None).atoms()
        if len(words) < 3:  # noqa: PLR2004 (number, kind, shape)
            raise Malformed(0, "a pad needs a number, a kind and a shape")
        said: dict[str, Any] = {}
        for child in children:
            convert = _PAD_FORMS.get(self.document.head_of(child.start))
            if convert is not None:
                try:
                    node = self.document.read(child)
                    said[node.head] = convert(node)
                except Malformed as bad:
                    raise Malformed(child.start - span.start + bad.offset, bad.message) from None
        self.pads.append(self._pad(words, said, span))

    def _pad(self, words: list[str], said: Mapping[str, Any], span: Span) -> PadForm:
        x_mm, y_mm, angle_deg = said.get("at", (0.0, 0.0, 0.0))
        width_mm, height_mm = said.get("size", (0.0, 0.0))
        function: str = said.get("pinfunction", "")
        if self.version >= NETS_BY_NAME and words[0] and function.endswith(f"_{words[0]}"):
            function = function[: -len(words[0]) - 1]
        return PadForm(
            number=words[0],
            kind=words[1],
            shape=words[2],
            x_mm=x_mm,
            y_mm=y_mm,
            angle_deg=angle_deg,
            width_mm=width_mm,
            height_mm=height_mm,
            offset_mm=said.get("drill", (0.0, 0.0)),
            corner_ratio=said.get("roundrect_rratio", 0.0),
            layers=tuple(map(self.board_layers.name, said.get("layers", ()))),
            net=self._net(said["net"]) if "net" in said else "",
            function="" if function == "~" else function,
            electrical=said.get("pintype", ""),
            start=span.start,
        )

    def _net(self, words: list[str]) -> str:
        """`(net 3 "HS_GATE")` up to v9; `(net "HS_GATE")` after, where a net may well be called "3"."""
        if len(words) > 1:
            return words[1]
        return words[0] if self.version >= NETS_BY_NAME or not self.nets else self.nets.get(words[0], "")


def _drill_offset(node: Node) -> tuple[float, ...]:
    """How far the copper is shifted against the hole; written inside `drill` even for pads without one."""
    offset = node.form("offset")
    return numbers(offset, 2) if offset is not None else (0.0, 0.0)


# What is read of a pad, and how. Converted form by form, so that trouble is reported at the form that has it.
_PAD_FORMS: Mapping[str, Callable[[Node], Any]] = {
    "at": lambda node: numbers(node, 3, at_least=2),
    "size": lambda node: numbers(node, 2),
    "drill": _drill_offset,
    "layers": lambda node: node.atoms(),
    "net": lambda node: [text(node), *node.atoms()[1:]],
    "pinfunction": text,
    "pintype": text,
    "roundrect_rratio": number,
}

_CHILDREN: Mapping[str, Callable[[_Footprint, Span], None]] = {
    "layer": _Footprint.read_layer,
    "at": _Footprint.read_at,
    "descr": _Footprint.read_text,
    "tags": _Footprint.read_text,
    "path": _Footprint.read_text,
    "fp_text": _Footprint.read_fp_text,
    "property": _Footprint.read_property,
    "attr": _Footprint.read_attributes,
    "units": _Footprint.read_units,
    "net_tie_pad_groups": _Footprint.read_net_ties,
    "pad": _Footprint.read_pad,
}
