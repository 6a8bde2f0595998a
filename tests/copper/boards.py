"""Tiny boards as text: pads, tracks, vias and fills at round coordinates, so that lengths are seen at once."""

from __future__ import annotations

from gatecheck.copper.path import Copper
from gatecheck.copper.source import CopperSource
from gatecheck.design.build import from_board
from gatecheck.parse.board import read_board
from gatecheck.parse.document import open_document

STACK = """(setup (stackup (layer "F.Cu" (type "copper") (thickness 0.035)) (layer "d1" (type "core") (thickness 1.5))
  (layer "B.Cu" (type "copper") (thickness 0.035))))"""


def board_text(*items: str, version: int = 20241229, setup: str = STACK) -> str:
    return (
        f"(kicad_pcb (version {version}) (general (thickness 1.6)) {setup} "
        '(layers (0 "F.Cu" signal) (2 "B.Cu" signal)) (net 0 "") (net 1 "A") (net 2 "B") (net 3 "GND")\n'
        + "\n".join(items)
        + ")"
    )


def pad(reference: str, at: str, net: str = '(net 1 "A")', *, layers: str = '"F.Cu"', size: str = "1 1") -> str:
    """A part of one pad of 1 mm, centred at a place."""
    return (
        f'(footprint "X" (layer "F.Cu") (at {at}) (property "Reference" "{reference}")'
        f' (pad "1" smd rect (at 0 0) (size {size}) (layers {layers}) {net}))'
    )


def track(start: str, end: str, net: int = 1, *, layer: str = "F.Cu", width: float = 0.3) -> str:
    return f'(segment (start {start}) (end {end}) (width {width}) (layer "{layer}") (net {net}))'


def via(at: str, net: int = 1) -> str:
    return f'(via (at {at}) (size 0.6) (drill 0.3) (layers "F.Cu" "B.Cu") (net {net}))'


def fill(net: int, layer: str, *corners: str, rest: str = "") -> str:
    points = " ".join(f"(xy {corner})" for corner in corners)
    return (
        f'(zone (net {net}) (net_name "x") (layer "{layer}") (min_thickness 0.2) {rest} (fill yes)'
        f' (polygon (pts {points})) (filled_polygon (layer "{layer}") (pts {points})))'
    )


def copper(*items: str, version: int = 20241229, setup: str = STACK) -> Copper:
    board = read_board(open_document("b.kicad_pcb", board_text(*items, version=version, setup=setup).encode()))
    return Copper(from_board(board), CopperSource(board))
