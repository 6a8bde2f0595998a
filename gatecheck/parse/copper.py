"""Tracks, arcs, vias and zone fills of chosen nets. Everything else on the board stays unparsed.

A board has tens of thousands of tracks, a review looks at a few gate nets: their forms are found by the net
they name, over the bytes of the whole file at once, and only those are parsed. Millimetres, as in the file.
"""

from __future__ import annotations

import re
from collections import defaultdict
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from gatecheck.parse.board import NETS_BY_NAME
from gatecheck.parse.document import Malformed, Span
from gatecheck.parse.fields import flag, number, numbers, text

if TYPE_CHECKING:
    from collections.abc import Mapping

    from numpy.typing import NDArray

    from gatecheck.errors import InputError
    from gatecheck.parse.board import BoardFile
    from gatecheck.parse.sexpr import Node

_NET = re.compile(rb'\(net\s+(?:"((?:[^"\\]|\\.)*)"|([^\s()"]+))')
_POINT = re.compile(rb"\(xy\s+([+-]?[\d.]{1,20})\s+([+-]?[\d.]{1,20})\s*\)")
_SIZE = rb"([+-]?\d{1,5}(?:\.\d{1,12})?)"
# A track as programs write it. Thousands of them are read; what looks otherwise goes through the parser.
_TRACK = re.compile(
    rb"\(segment\s+\(start %b %b\)\s+\(end %b %b\)\s+\(width %b\)\s+" % ((_SIZE,) * 5)
    + rb'\(layer (?:"([\w.]+)"|([\w.]+))\)\s+\(net[ )]'
)
# From this version on, fills are drawn as they are; before, and where a zone says so, the outline is stroked.
_UNSTROKED_FILLS = 20220211
# Our choice: more points than the densest ground plane seen; bounds memory.
_MAX_POINTS = 500_000
_RESAVE = "open the board in its editor and save it again"


@dataclass(frozen=True, slots=True)
class TrackForm:
    """A straight track (two points) or an arc (start, middle, end)."""

    points_mm: tuple[tuple[float, float], ...]
    width_mm: float
    layer: str


@dataclass(frozen=True, slots=True)
class ViaForm:
    """A via; `ends` are the first and last layer it joins."""

    x_mm: float
    y_mm: float
    size_mm: float
    ends: tuple[str, str]


@dataclass(frozen=True, slots=True)
class FillForm:
    """One piece of a zone's copper, shape (n, 2); `spread_mm` is half the stroke where the outline is stroked."""

    points_mm: NDArray[np.float64]
    layer: str
    spread_mm: float


@dataclass(slots=True)
class NetForms:
    """The copper of one net."""

    tracks: list[TrackForm] = field(default_factory=list)
    vias: list[ViaForm] = field(default_factory=list)
    fills: list[FillForm] = field(default_factory=list)
    unfilled: bool = False


@dataclass(frozen=True, slots=True)
class CopperForms:
    """The copper of the nets asked for, and the forms of them that could not be read."""

    nets: Mapping[str, NetForms]
    troubles: tuple[InputError, ...]


def read_copper(board: BoardFile, nets: frozenset[str]) -> CopperForms:
    """Read the copper of some nets."""
    found: dict[str, NetForms] = defaultdict(NetForms)
    troubles: list[InputError] = []
    for net, span in _forms_of(board, nets):
        head = board.document.head_of(span.start)
        reader = _READERS.get(head)
        if reader is None:
            continue
        try:
            reader(_Copper(board, found[net]), span)
        except Malformed as bad:
            troubles.append(board.document.trouble(span, bad, _RESAVE))
    return CopperForms(found, tuple(troubles))


def _forms_of(board: BoardFile, nets: frozenset[str]) -> list[tuple[str, Span]]:
    """The top-level forms that name one of the nets, each once, in file order."""
    document, by_name = board.document, board.version >= NETS_BY_NAME or not board.nets
    wanted: dict[str, str] = {net: net for net in nets}
    if not by_name:
        wanted = {code: name for code, name in board.nets.items() if name in nets}
    at, names = [], []
    for match in _NET.finditer(document.data):
        raw = match.group(1) if match.group(1) is not None else match.group(2)
        word = raw.decode("utf-8", errors="replace")
        if "\\" in word:
            word = text(document.read(Span(match.start(), document.data.index(b")", match.end()) + 1, 2)))
        if word in wanted:
            at.append(match.start())
            names.append(wanted[word])
    return [(names[i], span) for i, span in document.enclosing(at)]


@dataclass(frozen=True, slots=True)
class _Copper:
    """Reads one form into the net it belongs to."""

    board: BoardFile
    into: NetForms

    def children(self, span: Span) -> dict[str, Node]:
        document = self.board.document
        found: dict[str, Node] = {}
        for child in document.children(span):
            head = document.head_of(child.start)
            if head in _READ:
                found.setdefault(head, document.read(child))
        return found

    def layer(self, name: str) -> str:
        return self.board.layers.get(name, name)

    def track(self, span: Span) -> None:
        usual = _TRACK.match(self.board.document.data, span.start, span.end)
        if usual is not None:
            x0, y0, x1, y1, width_mm = map(float, usual.groups()[:5])
            layer = self.layer((usual[6] or usual[7]).decode())
            self.into.tracks.append(
                TrackForm(((x0, y0), (x1, y1)), max(width_mm, 0.0), layer if layer.endswith(".Cu") else "")
            )
            return
        forms = self.children(span)
        corners = [forms[head] for head in ("start", "mid", "end") if head in forms]
        points = tuple((number(node), number(node, 2)) for node in corners)
        if len(points) < 2 or not ("layer" in forms or "layers" in forms):  # noqa: PLR2004 (start, end)
            raise Malformed(0, "a track needs a start, an end and a layer")
        layers = forms["layer" if "layer" in forms else "layers"].atoms()
        width_mm = number(forms["width"]) if "width" in forms else 0.0
        layer = next((self.layer(name) for name in layers if self.layer(name).endswith(".Cu")), "")
        self.into.tracks.append(TrackForm(points, max(width_mm, 0.0), layer))

    def via(self, span: Span) -> None:
        forms = self.children(span)
        if "at" not in forms:
            raise Malformed(0, "a via needs a place")
        x_mm, y_mm = numbers(forms["at"], 2)
        ends = [self.layer(name) for name in forms["layers"].atoms()] if "layers" in forms else []
        first, last = (ends[0], ends[-1]) if len(ends) > 1 else ("F.Cu", "B.Cu")
        size_mm = number(forms["size"]) if "size" in forms else 0.0
        self.into.vias.append(ViaForm(x_mm, y_mm, size_mm, (first, last)))

    def zone(self, span: Span) -> None:
        document = self.board.document
        forms = self.children(span)
        if "keepout" in forms:
            return
        pieces = [child for child in document.children(span) if document.head_of(child.start) == "filled_polygon"]
        filled = "fill" in forms and "yes" in forms["fill"].atoms()
        if not filled or not pieces:
            self.into.unfilled = True
            return
        spread_mm = number(forms["min_thickness"]) / 2 if self._stroked(forms) else 0.0
        own = forms["layer"].atoms() if "layer" in forms else forms["layers"].atoms() if "layers" in forms else []
        for piece in pieces:
            parts = {document.head_of(child.start): child for child in document.children(piece)}
            names = document.read(parts["layer"]).atoms() if "layer" in parts else own
            if "pts" in parts and names:
                self.into.fills.append(FillForm(self._points(parts["pts"]), self.layer(names[0]), spread_mm))

    def _stroked(self, forms: Mapping[str, Node]) -> bool:
        if "min_thickness" not in forms:
            return False
        said = forms.get("filled_areas_thickness")
        return flag(said) if said is not None else self.board.version < _UNSTROKED_FILLS

    def _points(self, span: Span) -> NDArray[np.float64]:
        """Corners of a fill. A list of thousands of points is no syntax worth a tree: numbers are picked out."""
        raw = self.board.document.data[span.start : span.end]
        pairs = _POINT.findall(raw)
        if len(pairs) > _MAX_POINTS:
            raise Malformed(0, f"a fill of more than {_MAX_POINTS} points")
        try:
            points = np.array(pairs, dtype="S20").astype(np.float64) if pairs else np.zeros((0, 2))
        except ValueError:
            raise Malformed(0, "a fill has a point that is no pair of numbers") from None
        if len(points) < 3 or np.abs(points).max() > 1e7:  # noqa: PLR2004 (a polygon; fields.py bounds alike)
            raise Malformed(0, "a fill has no outline")
        return points


_READERS = {"segment": _Copper.track, "arc": _Copper.track, "via": _Copper.via, "zone": _Copper.zone}
_READ = frozenset(
    {"start", "mid", "end", "width", "layer", "layers", "at", "size", "fill", "keepout"}
    | {"min_thickness", "filled_areas_thickness"}
)
