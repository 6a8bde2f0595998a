"""The basic gate networks of the trade: order, edges, what covers which edge. Expectations: common practice."""

from __future__ import annotations

import pytest

from tests.circuits import BRIDGE, gate_of

LOW = "R9 10 lo g2\n"


def high_side(parts: str, reference: str = "Q1") -> object:
    return gate_of(BRIDGE + LOW + parts, reference)


@pytest.mark.parametrize(
    ("parts", "on", "off", "covering_on", "covering_off"),
    [
        # plain resistor
        ("R1 10 ho g1", "R1", "R1", "R1", "R1"),
        # bead on either side of the resistor
        ("R1 10 ho a\nFB1 60R@100MHz a g1", "R1 FB1", "R1 FB1", "R1 FB1", "R1 FB1"),
        ("FB1 60R@100MHz ho a\nR1 10 a g1", "FB1 R1", "FB1 R1", "FB1 R1", "FB1 R1"),
        # antiparallel diode: fast turn-off past the resistor
        ("R1 10 ho g1\nD1 SS14 K=ho A=g1", "R1", "D1", "R1", ""),
        # split by a diode with its own resistor, bead behind the joint
        ("R1 10 ho j\nR2 2R2 ho d\nD1 SS14 K=d A=j\nFB1 60R j g1", "R1 FB1", "R2 D1 FB1", "R1 FB1", "FB1"),
        # the mirror: a diode for fast turn-on
        ("R1 10 ho j\nR2 2R2 ho d\nD1 SS14 A=d K=j\nFB1 60R j g1", "R2 D1 FB1", "R1 FB1", "FB1", "R1 FB1"),
        # bead inside the resistor's leg: it covers the on edge only
        ("R1 10 ho a\nFB1 60R a g1\nD1 SS14 K=ho A=g1", "R1 FB1", "D1", "R1 FB1", ""),
        # a link and a fitted jumper are parts like others
        ("R1 0R ho a\nR2 4R7 a g1", "R1 R2", "R1 R2", "R1 R2", "R1 R2"),
        # a net tie is copper, no part
        ("R1 10 ho a\nNT1 NetTie footprint=NetTie:NetTie-2 a g1", "R1", "R1", "R1", "R1"),
        # straight from the pin
        ("NT1 NetTie footprint=NetTie:NetTie-2 ho g1", "", "", "", ""),
    ],
)
def test_ways_of_both_edges(parts: str, on: str, off: str, covering_on: str, covering_off: str) -> None:
    gate = gate_of(BRIDGE + LOW + parts)
    assert [(d.part, [p.function for p in d.pins], d.edge) for d in gate.drives] == [("U1", ["HO"], "both")]
    assert " ".join(gate.on.parts) == on
    assert " ".join(gate.off.parts) == off
    assert gate.on.conducts
    assert gate.off.conducts
    resistors_and_beads = {"R1", "R2", "FB1"}
    assert gate.on.covering & resistors_and_beads == set(covering_on.split())
    assert gate.off.covering & resistors_and_beads == set(covering_off.split())


SPLIT = """
Q1 NMOS footprint=TO-247-3 G=g1 D=sw S=GND
Q2 NMOS footprint=TO-247-3 G=g2 D=VBUS S=sw
U1 driver description=isolated~gate~driver OUTH=oh OUTL=ol VDD2=+15V GND2=GND IN=in
U2 driver description=isolated~gate~driver OUTH=oh2 OUTL=ol2 VDD2=v2 GND2=sw IN=in
R1 10 oh j
R2 2R2 ol j
FB1 30R@100MHz j g1
R3 10 oh2 g2
R4 2R2 ol2 g2
"""


def test_split_outputs_drive_one_edge_each() -> None:
    gate = gate_of(SPLIT)
    assert [(d.pins[0].function, d.edge) for d in gate.drives] == [("OUTH", "on"), ("OUTL", "off")]
    assert gate.on.parts == ("R1", "FB1")
    assert gate.off.parts == ("R2", "FB1")


def test_two_pads_of_one_output_are_one_drive() -> None:
    gate = gate_of(
        """
        Q1 Q_NIGBT_GCE footprint=TO-247-3 G=g C=VBUS E=sw
        Q2 Q_NIGBT_GCE footprint=TO-247-3 G=g2 C=sw E=GND
        U1 opto description=opto~gate~driver A=x K=y VEE=sw VO=o VO=o VCC=v
        U2 opto description=opto~gate~driver A=x2 K=y2 VEE=GND VO=o2 VO=o2 VCC=+15V
        R1 22 o g
        R2 22 o2 g2
        """
    )
    assert [[pin.number for pin in drive.pins] for drive in gate.drives] == [["4", "5"]]


def test_a_push_pull_pair_is_one_drive_per_edge() -> None:
    gate = gate_of(
        """
        Q1 NMOS footprint=TO-263-2 G=g1 D=sw S=GND
        Q4 NMOS footprint=TO-263-2 G=g4 D=VBUS S=sw
        U1 driver description=gate~driver HO=g4 VS=sw VB=b
        Q2 NPN B=b C=+12V E=e
        Q3 PNP B=b C=GND E=e
        R1 4R7 e g1
        """
    )
    assert sorted((d.part, d.edge) for d in gate.drives) == [("Q2", "on"), ("Q3", "off")]
    assert gate.on.parts == gate.off.parts == ("R1",)


def test_a_test_header_beside_the_driver_drives_nothing() -> None:
    gate = gate_of(BRIDGE + LOW + "R1 10 ho g1\nJ9 header g1\nTP1 testpoint g1")
    assert [drive.part for drive in gate.drives] == ["U1"]


def test_a_connector_is_the_driver_when_nothing_else_is() -> None:
    gate = gate_of(
        """
        Q1 NMOS footprint=TO-263-2 G=g1 D=VBUS S=sw
        Q2 NMOS footprint=TO-263-2 G=g2 D=sw S=GND
        J1 plug 1=p1 2=sw 3=p2 4=GND
        R1 10 p1 g1
        D1 SS14 K=p1 A=g1
        R2 10 p2 g2
        D2 SS14 K=p2 A=g2
        """
    )
    assert [(d.part, d.pins[0].number) for d in gate.drives] == [("J1", "1")]


def test_unfitted_series_part_opens_both_edges_and_is_named() -> None:
    gate = gate_of(BRIDGE + LOW + "R1 10 ho a\nFB1 60R dnp a g1")
    assert not gate.on.conducts
    assert not gate.off.conducts
    assert gate.open_parts == ("FB1",)
    assert gate.beads == ("FB1",)


def test_unfitted_part_beside_a_fitted_way_changes_nothing() -> None:
    gate = gate_of(BRIDGE + LOW + "R1 10 ho g1\nR2 2R2 dnp ho g1")
    assert gate.on.parts == ("R1",)
    assert gate.open_parts == ()


def test_cross_link_to_the_neighbours_gate_is_no_way() -> None:
    # Both off-resistors meet at one diode: the way over the other gate is none.
    gate = gate_of(
        BRIDGE
        + LOW
        + """
        Q3 NMOS footprint=TO-263-2 G=g3 D=VBUS S=sw
        R1 10 ho g1
        R3 10 ho g3
        R4 2R2 m g1
        R5 2R2 m g3
        D1 SS14 K=ho A=m
        """
    )
    assert gate.on.parts == ("R1",)
    assert gate.off.parts == ("D1", "R4")
    assert gate.parallel_with == (("Q3", None),)


def test_hostile_mesh_is_bounded() -> None:
    mesh = "\n".join(f"R{i}{j} 1 n{i} n{j}" for i in range(10, 30) for j in range(i + 1, 30))
    gate = gate_of(BRIDGE + LOW + "R1 10 ho n10\nR2 10 n29 g1\n" + mesh)
    assert gate.drives
