"""Repeats a version 20241229 board in a grid: several channels on one board, or a large file to time.

Works on the text, block by block, because a benchmark wants megabytes within seconds. Every copy has its
own references (Q1 becomes Q101, Q201, ...), identifiers and nets; only GND is shared.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass, replace
from functools import cached_property
from itertools import pairwise
from typing import TYPE_CHECKING

from .fill import EDGE_CLEARANCE_MM
from .half_bridge import HALF_BRIDGE
from .sexpr_text import number_text, packed_lines
from .write_board import board

if TYPE_CHECKING:
    from .footprints import Point

_SHARED_NET = "GND"
_GAP_MM = 4.0
# What a copy's share of a large board file looks like; the remaining bytes are head, nets and texts.
FOOTPRINT_SHARE, TRACK_SHARE, FILL_SHARE = 0.45, 0.25, 0.30

_NUMBER = r"-?[\d.]+"
_UUID = r"[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{12}"
_NET = rf'\((?P<net>net|net_name) (?:(?P<code>\d+)\b ?)?(?P<name>"[^"]*")?\)|(?P<uuid>{_UUID})'
_ITEM = re.compile(rf"{_NET}|\((?P<key>start|mid|end|at|xy) (?P<x>{_NUMBER}) (?P<y>{_NUMBER})")
# Inside a footprint only its own place, two tabs deep, is in board coordinates.
_FOOTPRINT = re.compile(
    rf"{_NET}|(?<=\n\t\t)\((?P<key>at) (?P<x>{_NUMBER}) (?P<y>{_NUMBER})"
    r'|(?P<ref>"Reference" "[A-Z]+)(?P<no>\d+)"'
)
_SEGMENT = re.compile(rf"\(start ({_NUMBER}) ({_NUMBER})\)\n\t\t\(end ({_NUMBER}) ({_NUMBER})\)")
_FILL_POINTS = re.compile(r"(\(filled_polygon\n.*?\n\t\t\t\(pts\n)(.*?)(\n\t\t\t\)\n)", re.DOTALL)
_XY = re.compile(rf"\(xy ({_NUMBER}) ({_NUMBER})\)")
_NETS = re.compile(r'^\t\(net (\d+) "([^"]*)"\)$', re.MULTILINE)


@dataclass(frozen=True)
class _Blocks:
    """The lists of a board at the outermost level, sorted by what is done to them."""

    head: list[str]
    footprints: list[str]
    tracks: list[str]
    zones: list[str]
    texts: list[str]
    outline: list[str]
    nets: list[str]

    @cached_property
    def corners_mm(self) -> tuple[float, float, float, float]:
        """Left, top, right, bottom of the outline."""
        places = [(float(m["x"]), float(m["y"])) for block in self.outline for m in _places(block)]
        xs, ys = zip(*places, strict=True)
        return min(xs), min(ys), max(xs), max(ys)


@dataclass(frozen=True)
class _Copy:
    """One repetition: its number from 1 on, its shift, and how many nets each copy has of its own."""

    number: int
    dx_mm: float
    dy_mm: float
    base_nets: list[str]

    def text(self, block: str) -> str:
        """The block as it appears in this copy."""
        pattern = _FOOTPRINT if block.startswith("\t(footprint") else _ITEM
        return pattern.sub(self._replaced, block)

    def own_net(self, name: str) -> str:
        """The name of this copy's net."""
        if name in {"", _SHARED_NET}:
            return name
        if "(" in name:
            return re.sub(r"\(([A-Z]+)(\d+)-", lambda m: f"({m[1]}{self._designator(m[2])}-", name)
        if name.startswith("/"):
            return f"/Channel {self.number}{name}"
        return f"{name}_{self.number}"

    @cached_property
    def codes(self) -> dict[int, int]:
        """Net code of the single board -> net code here; 1 is the shared net."""
        own = [code for code, name in enumerate(self.base_nets) if name not in {"", _SHARED_NET}]
        first = 2 + (self.number - 1) * len(own)
        codes = {code: first + i for i, code in enumerate(own)}
        return codes | {self.base_nets.index(_SHARED_NET): 1}

    def _designator(self, digits: str) -> int:
        return 100 * self.number + int(digits)

    def _replaced(self, match: re.Match[str]) -> str:
        kind = match.lastgroup
        if kind == "uuid":
            return _shifted_uuid(match["uuid"], self.number)
        if kind == "y":
            x, y = float(match["x"]) + self.dx_mm, float(match["y"]) + self.dy_mm
            return f"({match['key']} {number_text(x)} {number_text(y)}"
        if kind == "no":
            return f'{match["ref"]}{self._designator(match["no"])}"'
        atoms = [match["net"]]
        if match["code"]:
            atoms.append(str(self.codes[int(match["code"])]))
        if match["name"]:
            atoms.append(f'"{self.own_net(match["name"][1:-1])}"')
        return f"({' '.join(atoms)})"


def tile_board(text: str, copies: int) -> str:
    """The board repeated `copies` times within one outline."""
    return _assembled(_split(text), copies)


def benchmark_board(size_bytes: int) -> str:
    """About `size_bytes` of board: half bridges with tracks and fills cut up until the shares are met."""
    blocks = _split(board(HALF_BRIDGE))
    middle = _grid(blocks, 50)[25]  # a typical copy: later ones have longer numbers
    footprints, tracks, zones = (
        sum(len(middle.text(block)) for block in part) for part in (blocks.footprints, blocks.tracks, blocks.zones)
    )
    copies = max(1, round(FOOTPRINT_SHARE * size_bytes / footprints))
    wanted_tracks = TRACK_SHARE * size_bytes / copies - tracks
    wanted_fills = FILL_SHARE * size_bytes / copies - zones
    padded = replace(
        blocks,
        tracks=_more_tracks(blocks.tracks, wanted_tracks, middle),
        zones=_more_points(blocks.zones, wanted_fills, middle),
    )
    return _assembled(padded, copies)


def _split(text: str) -> _Blocks:
    start, *blocks = re.split(r"\n(?=\t\()", text.removesuffix("\n)\n"))
    found = _Blocks([start], [], [], [], [], [], [name for _, name in _NETS.findall(text)])
    for block in blocks:
        kind = block[2:].split(maxsplit=1)[0]
        if kind == "footprint":
            found.footprints.append(block)
        elif kind in {"segment", "arc", "via"}:
            found.tracks.append(block)
        elif kind == "zone":
            found.zones.append(block)
        elif '"Edge.Cuts"' in block and kind != "layers":
            found.outline.append(block)
        elif kind == "gr_text":
            found.texts.append(block)
        elif kind not in {"net", "embedded_fonts"}:
            found.head.append(block)
    return found


def _grid(blocks: _Blocks, copies: int) -> list[_Copy]:
    left, top, right, bottom = blocks.corners_mm
    columns = math.ceil(math.sqrt(copies))
    return [
        _Copy(
            i + 1,
            (i % columns) * (right - left + _GAP_MM),
            (i // columns) * (bottom - top + _GAP_MM),
            blocks.nets,
        )
        for i in range(copies)
    ]


def _assembled(blocks: _Blocks, copies: int) -> str:
    grid = _grid(blocks, copies)
    names = ["", _SHARED_NET]
    for copy in grid:
        names += [copy.own_net(name) for name in blocks.nets if name not in names[:2]]
    lines = [*blocks.head, *(f'\t(net {code} "{name}")' for code, name in enumerate(names))]
    lines += [copy.text(block) for copy in grid for block in blocks.footprints]
    lines += _outline(blocks, grid)
    for part in (blocks.texts, blocks.tracks, blocks.zones):
        lines += [copy.text(block) for copy in grid for block in part]
    lines += _bridges(blocks, grid)
    return "\n".join([*lines, "\t(embedded_fonts no)", ")\n"])


def _outline(blocks: _Blocks, grid: list[_Copy]) -> list[str]:
    """One outline around all copies: every piece moves with the side or corner it belongs to."""
    left, top, right, bottom = blocks.corners_mm
    far_x, far_y = max(copy.dx_mm for copy in grid), max(copy.dy_mm for copy in grid)

    def stretched(match: re.Match[str]) -> str:
        x, y = float(match["x"]), float(match["y"])
        x += far_x if x > (left + right) / 2 else 0.0
        y += far_y if y > (top + bottom) / 2 else 0.0
        return f"({match['key']} {number_text(x)} {number_text(y)}"

    return [_ITEM.sub(lambda m: stretched(m) if m["key"] else m[0], block) for block in blocks.outline]


def _bridges(blocks: _Blocks, grid: list[_Copy]) -> list[str]:
    """Ground tracks on the lower side between neighbours, from the middle of one edge to that of the next."""
    left, top, right, bottom = blocks.corners_mm
    x, y, inside = (left + right) / 2, (top + bottom) / 2, 2 * EDGE_CLEARANCE_MM
    ways = (
        ((right - left + _GAP_MM, 0.0), (right - inside, y), (right + _GAP_MM + inside, y)),
        ((0.0, bottom - top + _GAP_MM), (x, bottom - inside), (x, bottom + _GAP_MM + inside)),
    )
    places = {(copy.dx_mm, copy.dy_mm) for copy in grid}
    ground = blocks.nets.index(_SHARED_NET)
    return [
        copy.text(
            f"\t(segment\n\t\t(start {_place(start)})\n\t\t(end {_place(end)})\n\t\t(width 1)"
            f'\n\t\t(layer "B.Cu")\n\t\t(net {ground})\n\t\t(uuid "{HALF_BRIDGE.identifier("bridge", i)}")\n\t)'
        )
        for i, (step, start, end) in enumerate(ways)
        for copy in grid
        if (copy.dx_mm + step[0], copy.dy_mm + step[1]) in places
    ]


def _place(at_mm: Point) -> str:
    return f"{number_text(at_mm[0])} {number_text(at_mm[1])}"


def _places(block: str) -> list[re.Match[str]]:
    return [match for match in _ITEM.finditer(block) if match["key"]]


def _shifted_uuid(uuid: str, by: int) -> str:
    # The factor only spreads small numbers over the first eight digits.
    return f"{(int(uuid[:8], 16) + by * 0x9E3779B1) & 0xFFFFFFFF:08x}{uuid[8:]}"


def _spread(total: int, places: int) -> list[int]:
    """`total` handed out over places as evenly as whole numbers allow."""
    return [(i + 1) * total // places - i * total // places for i in range(places)]


def _more_tracks(tracks: list[str], wanted_bytes: float, typical: _Copy) -> list[str]:
    """Straight tracks cut into collinear ones until about the wanted bytes have been added."""
    straight = [block for block in tracks if _SEGMENT.search(block)]
    one = sum(len(typical.text(block)) + 1 for block in straight) / len(straight)
    extra = iter(_spread(max(0, round(wanted_bytes / one)), len(straight)))
    result: list[str] = []
    for block in tracks:
        match = _SEGMENT.search(block)
        result += _cut(block, match, next(extra) + 1) if match else [block]
    return result


def _cut(block: str, match: re.Match[str], pieces: int) -> list[str]:
    ends = [float(text) for text in match.groups()]
    points = [_between(ends, i / pieces) for i in range(pieces + 1)]
    return [
        _numbered(f"{block[: match.start()]}(start {start})\n\t\t(end {end}){block[match.end() :]}", i)
        for i, (start, end) in enumerate(pairwise(points))
    ]


def _numbered(block: str, number: int) -> str:
    """The block with another identifier for each number."""
    return re.sub(_UUID, lambda m: f"{m[0][:-4]}{(int(m[0][-4:], 16) + number) & 0xFFFF:04x}", block)


def _between(ends: list[float], share: float) -> str:
    x1, y1, x2, y2 = ends
    return f"{number_text(x1 + (x2 - x1) * share)} {number_text(y1 + (y2 - y1) * share)}"


def _more_points(zones: list[str], wanted_bytes: float, typical: _Copy) -> list[str]:
    """Edges of fills cut by points that lie on them until about the wanted bytes have been added."""
    fills = "".join(match[2] for block in zones for match in _FILL_POINTS.finditer(block))
    edges = len(_XY.findall(fills))
    one = len(typical.text(fills)) / edges
    extra = iter(_spread(max(0, round(wanted_bytes / one)), edges))

    def denser(match: re.Match[str]) -> str:
        points = [(float(x), float(y)) for x, y in _XY.findall(match[2])]
        texts = []
        for start, end in zip(points, [*points[1:], points[0]], strict=True):
            pieces = next(extra) + 1
            texts += [f"(xy {_between([*start, *end], i / pieces)})" for i in range(pieces)]
        return match[1] + "\n".join(packed_lines(texts, "\t\t\t\t")) + match[3]

    return [_FILL_POINTS.sub(denser, block) for block in zones]
