"""Gate loops on boards whose areas are seen at once.

The board: driver U1 at the left, gate of Q1 30 mm to the right on the same line, the return net below or
beside. Areas by hand: a strip is length times dielectric, a rectangle length times distance.
"""

from __future__ import annotations

import pytest

from gatecheck.copper.chain import Chains
from gatecheck.copper.loop import GateLoop, gate_loop
from gatecheck.copper.path import Copper, NoWay
from gatecheck.copper.source import CopperSource
from gatecheck.design.build import from_board
from gatecheck.networks.find import find_networks
from gatecheck.parse.board import read_board
from gatecheck.parse.document import open_document
from tests.copper.boards import STACK, board_text, fill, track

HEIGHT_MM = 1.5  # the core of STACK; copper itself does not count


def part(reference: str, value: str, *pads: tuple[str, str, str, str]) -> str:
    """A part at the origin; pads as (number, function, place, net)."""
    forms = "".join(
        f'(pad "{number}" smd rect (at {place}) (size 0.4 0.4) (layers "F.Cu") {net} (pinfunction "{function}"))'
        for number, function, place, net in pads
    )
    return f'(footprint "TO-263-2" (layer "F.Cu") (at 0 0) (property "Reference" "{reference}") (property "Value" "{value}") {forms})'


A, B, GND = '(net 1 "A")', '(net 2 "B")', '(net 3 "GND")'
PARTS = [
    part(
        "U1",
        "gate driver",
        ("1", "LO", "0 0", A),
        ("2", "COM", "0 2", GND),
        ("3", "VB", "-2 0", ""),
        ("4", "VS", "-2 2", B),
    ),
    part("Q1", "NMOS", ("1", "G", "30 0", A), ("2", "D", "33 0", B), ("3", "S", "30 2", GND)),
    part("Q2", "NMOS", ("1", "G", "30 9", ""), ("2", "D", "33 9", ""), ("3", "S", "30 11", B)),
    part("L1", "10u", ("1", "1", "40 0", B), ("2", "2", "45 0", "")),
]
GATE_TRACK = track("0 0", "30 0")


def loop(*items: str, setup: str = STACK) -> GateLoop | NoWay:
    text = board_text(*PARTS, *items, setup=setup)
    board = read_board(open_document("b.kicad_pcb", text.encode()))
    design = from_board(board)
    networks = find_networks(design)
    (gate,) = [gate for gate in networks.gates if gate.transistor.part == "Q1"]
    return gate_loop(Chains(Copper(design, CopperSource(board)), networks.circuit), gate, "on")


def area_mm2(*items: str, setup: str = STACK) -> tuple[float, float, float]:
    found = loop(*items, setup=setup)
    assert isinstance(found, GateLoop), found
    low, nominal, high = (area * 1e6 for area in found.area_m2)
    return low, nominal, high


PLANE = fill(3, "B.Cu", "-5 -5", "40 -5", "40 5", "-5 5")
VIAS = [
    *(f'(via (at {x} 2) (size 0.3) (drill 0.2) (layers "F.Cu" "B.Cu") (net 3))' for x in (0, 30)),
]


def test_over_a_plane_the_loop_is_a_strip() -> None:
    low, nominal, high = area_mm2(GATE_TRACK, PLANE, *VIAS)
    # The corners between the pins and their vias to the plane add at most one triangle of a step by 2 mm each.
    assert nominal == pytest.approx(30 * HEIGHT_MM, abs=0.6)
    assert low == nominal == high


def test_beside_its_return_track_the_loop_is_the_rectangle_between() -> None:
    low, nominal, high = area_mm2(GATE_TRACK, track("0 2", "30 2", 3))
    assert nominal == pytest.approx(60)
    assert low <= nominal == high


def test_a_return_the_long_way_round_counts_whole() -> None:
    detour = [track("0 2", "0 20", 3), track("0 20", "30 20", 3), track("30 20", "30 2", 3)]
    _, nominal, _ = area_mm2(GATE_TRACK, *detour)
    assert nominal == pytest.approx(600)


def test_over_a_plane_with_a_gap_the_gap_closes_through_the_plane_on_its_far_side() -> None:
    gap = fill(3, "B.Cu", "-5 -5", "10 -5", "10 4", "20 4", "20 -5", "40 -5", "40 6", "-5 6")
    found = loop(GATE_TRACK, gap, *VIAS)
    assert isinstance(found, GateLoop)
    assert found.coverage == pytest.approx(2 / 3, abs=0.02)


def test_two_pieces_of_plane_joined_far_away_do_not_close_the_loop_short() -> None:
    left, right = fill(3, "B.Cu", "-5 -5", "14 -5", "14 5", "-5 5"), fill(3, "B.Cu", "16 -5", "40 -5", "40 5", "16 5")
    near = [track("13 0", "17 0", 3, layer="B.Cu")]
    far = [
        track("13 -4", "13 -40", 3, layer="B.Cu"),
        track("13 -40", "17 -40", 3, layer="B.Cu"),
        track("17 -40", "17 -4", 3, layer="B.Cu"),
    ]
    assert area_mm2(GATE_TRACK, left, right, *near, *VIAS)[1] < 60
    assert area_mm2(GATE_TRACK, left, right, *far, *VIAS)[1] > 120


def test_without_return_copper_the_area_is_an_interval() -> None:
    low, nominal, high = area_mm2(GATE_TRACK)
    assert low < nominal < high
    assert high == pytest.approx(60)


def test_an_unrouted_gate_has_no_loop() -> None:
    found = loop()
    assert isinstance(found, NoWay)
    assert "not routed" in found.reason


def test_without_a_stack_up_the_usual_thickness_is_taken() -> None:
    _, nominal, _ = area_mm2(GATE_TRACK, PLANE, *VIAS, setup="")
    assert nominal == pytest.approx(30 * 1.6, abs=0.6)
