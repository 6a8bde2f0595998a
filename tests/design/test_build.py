"""Pads in board axes, terminals, identities. Geometry: measured on real boards by those who noted the format."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

from gatecheck.design.build import from_board, natural, pins_by_net
from gatecheck.parse.board import read_board
from gatecheck.parse.document import open_document

if TYPE_CHECKING:
    from gatecheck.design.model import Design

HEAD = '(kicad_pcb (version 20241229) (layers (0 "F.Cu" signal) (2 "B.Cu" signal)) (net 0 "") (net 1 "A") (net 2 "B")'


def design(*footprints: str) -> Design:
    return from_board(read_board(open_document("b.kicad_pcb", (HEAD + "".join(footprints) + ")").encode())))


def footprint(pads: str, *, at: str = "10 20", layer: str = "F.Cu", reference: str = "R1") -> str:
    return f'(footprint "X" (layer "{layer}") (at {at}) (property "Reference" "{reference}") {pads})'


def pad(number: str, at: str, net: str = '(net 1 "A")', rest: str = "") -> str:
    return f'(pad "{number}" smd rect (at {at}) (size 1 2) (layers "F.Cu") {net} {rest})'


@pytest.mark.parametrize(
    ("angle", "x", "y"),
    # y points down and positive angles turn counter-clockwise on screen: a pad to the right goes up at 90.
    [("0", 13, 20), ("90", 10, 17), ("180", 7, 20), ("270", 10, 23), ("-90", 10, 23), ("450", 10, 17)],
)
@pytest.mark.parametrize("layer", ["F.Cu", "B.Cu"])
def test_pads_turn_with_their_footprint_on_either_side(angle: str, x: float, y: float, layer: str) -> None:
    (part,) = design(footprint(pad("1", f"3 0 {angle}"), at=f"10 20 {angle}", layer=layer)).parts.values()
    (placed,) = part.pins[0].pads
    assert (placed.x_m, placed.y_m) == pytest.approx((x * 1e-3, y * 1e-3))
    assert placed.angle_deg == float(angle)
    assert (placed.width_m, placed.height_m) == pytest.approx((1e-3, 2e-3))
    assert part.side == ("top" if layer == "F.Cu" else "bottom")


def test_copper_offset_is_turned_by_the_pads_own_angle() -> None:
    (part,) = design(footprint(pad("1", "0 0 90", rest="(drill 0.5 (offset 1 0))"))).parts.values()
    (placed,) = part.pins[0].pads
    assert (placed.x_m, placed.y_m) == pytest.approx((10e-3, 19e-3))


def test_pads_of_one_number_are_one_terminal_and_paste_or_holes_are_none() -> None:
    (part,) = design(
        footprint(
            pad("1", "0 0")
            + pad("1", "1 0")
            + pad("2", "2 0", '(net 2 "B")')
            + pad("", "3 0")
            + '(pad "9" smd rect (at 0 0) (size 1 1) (layers "F.Paste"))'
            + '(pad "8" np_thru_hole circle (at 0 0) (size 1 1) (layers "*.Cu"))'
        )
    ).parts.values()
    assert [(pin.number, pin.net, len(pin.pads)) for pin in part.pins] == [("1", "A", 2), ("2", "B", 1)]


def test_one_number_on_two_nets_stays_two_terminals() -> None:
    (part,) = design(footprint(pad("1", "0 0") + pad("1", "1 0", '(net 2 "B")'))).parts.values()
    assert [(pin.number, pin.net) for pin in part.pins] == [("1", "A"), ("1", "B")]


def test_repeated_and_missing_references_are_told_apart() -> None:
    parts = design(*(footprint(pad("1", "0 0"), reference=name) for name in ("R1", "R1", "", "", "R2"))).parts
    assert list(parts) == ["R1", "R1~2", "~1", "~2", "R2"]


def test_the_graph_joins_nets_and_parts_by_pins() -> None:
    board = design(
        footprint(pad("1", "0 0") + pad("2", "1 0", '(net 2 "B")')), footprint(pad("1", "0 0"), reference="C1")
    )
    assert sorted(board.graph.nodes) == [("net", "A"), ("net", "B"), ("part", "C1"), ("part", "R1")]
    assert [pin.part for pin in board.nets["A"]] == ["R1", "C1"]
    assert board.graph.number_of_edges() == 3
    assert pins_by_net(board) == {"A": [("C1", "1"), ("R1", "1")], "B": [("R1", "2")]}


def test_natural_order() -> None:
    assert sorted(["R10", "R9", "R1A", "C2", "R", "", "9", "10"], key=natural) == [
        "",
        "9",
        "10",
        "C2",
        "R",
        "R1A",
        "R9",
        "R10",
    ]
    assert natural("R" + "9" * 100_000)
