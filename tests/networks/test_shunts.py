"""Pull-downs, gate capacitors, clamps and the return. Expectations: common practice."""

from __future__ import annotations

from tests.circuits import BRIDGE, gate_of

DRIVEN = BRIDGE + "R1 10 ho g1\nR2 10 lo g2\n"


def test_pull_down_at_the_gate_or_before_the_resistor() -> None:
    assert gate_of(DRIVEN + "R5 10k g1 sw").pulldowns == ("R5",)
    assert gate_of(DRIVEN + "R5 10k ho sw").pulldowns == ("R5",)


def test_pull_down_of_a_high_side_to_ground_is_none() -> None:
    assert gate_of(DRIVEN + "R5 10k g1 GND").pulldowns == ()


def test_pull_down_past_a_shunt_counts() -> None:
    shunted = DRIVEN.replace("D=sw S=GND", "D=sw S=isense") + "R7 1mR isense GND\nR5 10k g2 GND"
    assert gate_of(shunted, "Q2").pulldowns == ("R5",)


def test_a_resistor_on_the_drivers_logic_input_is_no_pull_down() -> None:
    assert gate_of(DRIVEN + "R5 10k in1 GND\nR6 10k in2 GND", "Q2").pulldowns == ()


def test_gate_capacitor_with_and_without_its_resistor() -> None:
    assert gate_of(DRIVEN + "C5 1n g1 sw").gate_capacitors == ("C5",)
    assert gate_of(DRIVEN + "R6 3R3 g1 m\nC5 1n m sw").gate_capacitors == ("C5",)


def test_clamps_single_and_back_to_back() -> None:
    assert gate_of(DRIVEN + "D5 15V lib=D_Zener K=g1 A=sw").clamps == ("D5",)
    assert gate_of(DRIVEN + "D5 15V lib=D_Zener K=g1 A=m\nD6 15V lib=D_Zener K=sw A=m").clamps == ("D5", "D6")


def test_clamp_to_a_foreign_ground_is_none() -> None:
    assert gate_of(DRIVEN + "D5 15V lib=D_Zener K=g1 A=GND").clamps == ()


def test_return_is_the_kelvin_source_where_there_is_one() -> None:
    four_pin = DRIVEN.replace(
        "Q1 NMOS footprint=TO-263-2 G=g1 D=VBUS S=sw", "Q1 SiC footprint=TO-247-4 D=VBUS S=mid KS=sw G=g1"
    )
    gate = gate_of(four_pin.replace("D=sw S=GND", "D=mid S=GND"))
    assert gate.return_net == "sw"
    assert gate.transistor.source_net == "mid"
    assert gate_of(DRIVEN).return_net == "sw"
