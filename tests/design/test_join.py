"""A board joined with its schematic: who says what, and what is found to differ."""

from __future__ import annotations

from dataclasses import replace

from gatecheck.design.join import MovedPin, OutOfStep, join_designs
from gatecheck.design.model import Design, Part, Pin, Place, joined


def part(reference: str, *nets: str, path: str = "", value: str = "", fitted: bool = True, name: str = "") -> Part:
    name = name or reference
    pins = tuple(Pin(name, str(i), "", "", net) for i, net in enumerate(nets, start=1))
    return Part(name, reference, value, "", "", "", "", {}, fitted, path, (), (), pins, Place("f", 0))


def design(*parts: Part) -> Design:
    return joined("f", "board", {one.id: one for one in parts})


def step(board: Design, schematic: Design) -> OutOfStep:
    paths = {one.symbol_path: key for key, one in schematic.parts.items() if one.symbol_path}
    return join_designs(board, schematic, paths)[1]


R1, Q1 = part("R1", "A", "G", path="/1", value="10R"), part("Q1", "G", "D", "S", path="/2")


def test_alike_though_every_net_is_called_otherwise() -> None:
    other = design(part("R1", "x", "y", path="/1"), part("Q1", "y", "z", "w", path="/2"))
    assert not step(design(R1, Q1), other)


def test_the_schematic_says_what_a_part_is_and_the_board_what_it_is_connected_to() -> None:
    drawn = design(replace(R1, value="22R", fitted=False, fields={"MPN": "none"}), Q1)
    found, _ = join_designs(design(R1, part("Q1", "G", "D", "X", path="/2")), drawn, {"/1": "R1", "/2": "Q1"})
    assert (found.parts["R1"].value, found.parts["R1"].fitted, found.parts["R1"].fields) == (
        "22R",
        False,
        {"MPN": "none"},
    )
    assert [pin.net for pin in found.parts["Q1"].pins] == ["G", "D", "X"]


def test_a_moved_pin_is_named_and_not_all_of_its_net() -> None:
    nets = [part(f"C{i}", "GND", "VCC", path=f"/c{i}") for i in range(5)]
    board = design(*nets, part("U1", "GND", "VCC", path="/u"))
    drawn = design(*nets, part("U1", "VCC", "VCC", path="/u"))
    assert step(board, drawn).moved == (MovedPin("U1", "1", "GND", "VCC"),)


def test_symbols_tell_parts_apart_before_references_do() -> None:
    board = design(part("J2", "A", path="/1"), part("J4", "B", path="/2"))
    swapped = design(part("J4", "A", path="/1"), part("J2", "B", path="/2"))
    assert not step(board, swapped)


def test_parts_on_one_side_only() -> None:
    board, drawn = design(R1, part("R9", "A", "B", path="/9"), part("LOGO", path="")), design(R1, Q1)
    assert step(board, drawn) == OutOfStep(("Q1",), ("R9",), ())


def test_a_panel_repeats_its_symbols() -> None:
    copies = design(R1, replace(R1, id="R1~2", pins=tuple(replace(p, part="R1~2", net=p.net + "2") for p in R1.pins)))
    assert step(copies, design(R1)).not_in_schematic == ()


def test_an_unconnected_pin_agrees_with_no_net_and_not_with_a_wire() -> None:
    drawn = design(part("U1", "unconnected-(U1-A-Pad1)", "X", path="/u"), part("R1", "X", path="/r"))
    assert not step(design(part("U1", "", "X", path="/u"), part("R1", "X", path="/r")), drawn)
    off = step(design(part("U1", "", "", path="/u"), part("R1", "X", path="/r")), drawn)
    assert [(pin.part, pin.number) for pin in off.moved] == [("U1", "2")]
