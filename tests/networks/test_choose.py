"""Which pin drives, on which edge. Expectations: common practice."""

from __future__ import annotations

from tests.circuits import BRIDGE, gate_of, networks_of

LOW = "R9 10 lo g2\n"


def drives(circuit: str) -> list[tuple[str, str, str]]:
    return [(d.part, d.pins[0].function, d.edge) for d in gate_of(circuit).drives]


def test_a_local_pnp_drives_the_off_edge_and_the_bead_covers_both() -> None:
    circuit = BRIDGE + LOW + "R1 10 ho a\nD1 SS14 A=a K=e\nR2 100 ho b\nQ5 PNP E=e B=b C=sw\nFB1 60R e g1\n"
    gate = gate_of(circuit)
    assert sorted((d.part, d.edge) for d in gate.drives) == [("Q5", "off"), ("U1", "on")]
    assert (gate.on.parts, gate.off.parts) == (("R1", "D1", "FB1"), ("FB1",))
    assert "FB1" in gate.on.covering & gate.off.covering


def test_a_floating_push_pull_pair_is_told_by_its_types() -> None:
    circuit = BRIDGE + LOW + "Q5 NPN C=boot B=ho E=e\nQ6 PNP C=sw B=ho E=e\nR1 4R7 e g1\n"
    assert sorted(drives(circuit)) == [("Q5", "E", "on"), ("Q6", "E", "off")]


def test_a_clamp_pin_drives_nothing_even_if_its_symbol_calls_it_an_output() -> None:
    circuit = BRIDGE.replace("VS=sw", "VS=sw CLAMP=j") + LOW + "R1 10 ho j\nFB1 60R j g1\n"
    assert drives(circuit) == [("U1", "HO", "both")]


def test_a_processor_pin_that_reads_back_hides_no_driver() -> None:
    circuit = BRIDGE + LOW + "R1 10 ho m\nFB1 60R m g1\nU9 processor PA3=m PA4=x\n"
    assert drives(circuit) == [("U1", "HO", "both")]
    assert gate_of(circuit).on.parts == ("R1", "FB1")


def test_supply_like_names_of_switch_nodes_and_outputs_change_nothing() -> None:
    for name in ("VOUT_A", "VMOT_U", "VMID", "VDRV_H"):
        networks = networks_of((BRIDGE + LOW + "R1 10 ho g1\n").replace("sw", name))
        assert len(networks.gates) == 2, name
    assert (
        len(networks_of((BRIDGE + LOW + "R1 10 ho g1\n").replace(" ho", " VDRV_H").replace("=ho", "=VDRV_H")).gates)
        == 2
    )


def test_p_over_n_is_a_half_bridge() -> None:
    circuit = """
        Q1 PMOS description=P-channel~MOSFET footprint=TO-252-2 G=gp S=+12V D=sw
        Q2 NMOS footprint=TO-252-2 G=gn S=GND D=sw
        U1 driver description=gate~driver PDRV=p NDRV=n
        R1 4R7 p gp
        R2 4R7 n gn
        L1 10u sw out"""
    assert [g.transistor.part for g in networks_of(circuit).gates] == ["Q1", "Q2"]


def test_an_array_is_several_resistors() -> None:
    circuit = BRIDGE + "RN1 10R R1.1=ho R2.1=lo R2.2=g2 R1.2=g1\n"
    assert gate_of(circuit).on.parts == ("RN1",)
    facing = BRIDGE + "RN1 10R ho lo g2 g1\n"
    assert gate_of(facing).on.parts == gate_of(facing, "Q2").on.parts == ("RN1",)


def test_an_open_jumper_opens_the_way_and_a_bridged_one_is_a_part() -> None:
    opened = gate_of(BRIDGE + LOW + "JP1 x lib=SolderJumper_2_Open ho a\nR1 10 a g1\n")
    assert (opened.on.conducts, opened.open_parts) == (False, ("JP1",))
    bridged = gate_of(BRIDGE + LOW + "JP1 x lib=SolderJumper_2_Bridged ho a\nR1 10 a g1\n")
    assert bridged.on.parts == ("JP1", "R1")


def test_unfitted_transistors_and_unfitted_options_are_not_judged() -> None:
    option = BRIDGE + LOW + "R1 10 ho g1\nQ3 NMOS dnp footprint=TO-263-2 G=g3 D=VBUS S=sw\nR3 10 dnp ho g3\n"
    networks = networks_of(option)
    assert [g.transistor.part for g in networks.gates] == ["Q1", "Q2"]
    assert networks.gates[0].parallel_with == ()
    other = BRIDGE + LOW + "R1 10 dnp ho g1\nU2 driver description=gate~driver OUT=o VDD=v\nR5 10 o g1\n"
    assert drives(other) == [("U2", "OUT", "both")]


def test_a_second_gate_pad_on_no_net_is_no_second_die() -> None:
    circuit = BRIDGE.replace("G=g1 D=VBUS S=sw", "G=g1 D=VBUS S=sw G=unconnected-(Q1-G-Pad4)")
    assert [t.transistor.unit for t in networks_of(circuit + LOW + "R1 10 ho g1\n").switches] == [None, None]


def test_a_bypass_longer_than_is_searched_covers_nothing() -> None:
    links = "".join(f"R{i} 0R n{i} n{i + 1}\n" for i in range(20, 40))
    gate = gate_of(BRIDGE + LOW + "R1 10 ho a\nFB1 60R a g1\n" + links.replace("n20 ", "a ").replace(" n40", " g1"))
    assert gate.on.truncated or "FB1" not in gate.on.covering
