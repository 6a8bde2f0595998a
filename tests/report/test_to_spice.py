from __future__ import annotations

import dataclasses
import re
from typing import TYPE_CHECKING

import numpy as np
import pytest

from gatecheck.physics.bead import BeadLadder
from gatecheck.physics.gate_loop import edge_figures
from gatecheck.physics.hard_switching import HardSwitch, turn_on
from gatecheck.physics.miller import bump_v
from gatecheck.physics.nonlinear_loop import Saturation, charge_curve_from_capacitance, nonlinear_edge
from gatecheck.physics.switch_circuit import SharedLeads
from gatecheck.report.to_spice import (
    bump_deck,
    edge_deck,
    nonlinear_edge_deck,
    oscillation_deck,
    turn_on_deck,
)
from tests.physics.reference_cases import BEADS, loop, plain_loop
from tests.physics.test_hard_switching import SWITCH
from tests.physics.test_switch_circuit import SET_O2, SET_P, SHARED
from tests.report.spice_reference import growth_of, simulated

if TYPE_CHECKING:
    from pathlib import Path

VOLTAGE_V = np.linspace(0.0, 16.0, 81)
CURVE = charge_curve_from_capacitance(
    voltage_v=VOLTAGE_V, capacitance_f=2e-9 + 1e-9 * (1.0 + np.tanh((VOLTAGE_V - 4.0) / 1.5))
)
WITH_SERIES = BeadLadder(
    dc_resistance_ohm=np.array(0.05),
    section_resistance_ohm=np.array([10.0, 40.0]),
    section_inductance_h=np.array([0.8e-6, 0.1e-6]),
    series_inductance_h=np.array(3e-9),
    capacitance_f=np.array(0.4e-12),
)

DECKS = {
    "edge": edge_deck(loop("G2"), title="edge", start_v=0.0, final_v=12.0),
    "edge, bead": edge_deck(loop("G2", BEADS["B4"]), title="edge", start_v=12.0, final_v=0.0),
    "edge, series inductance": edge_deck(loop("G2", WITH_SERIES), title="edge", start_v=0.0, final_v=12.0),
    "charge curve": nonlinear_edge_deck(loop("G2"), title="charge", swing_v=(0.0, 12.0), charge=CURVE),
    "saturation": nonlinear_edge_deck(
        loop("G2", BEADS["B3"]), title="bead", swing_v=(0.0, 12.0), saturation=Saturation(half_current_a=0.5)
    ),
    "bump": bump_deck(loop("G2", BEADS["B2"]), title="bump", gate_drain_f=2e-11, slope_v_per_s=5e10, swing_v=400.0),
    "oscillation": oscillation_deck([SET_P], SharedLeads(), title="one", duration_s=1e-6),
    "kelvin": oscillation_deck(
        [dataclasses.replace(SET_O2, kelvin_inductance_h=5e-9, output_siemens=0.01, bead=BEADS["B2"])],
        SharedLeads(),
        title="kelvin",
        duration_s=5e-8,
    ),
    "parallel": oscillation_deck([SET_O2, SET_O2], SHARED, title="two", kicks_v=(1e-3, -1e-3), duration_s=5e-8),
    "turn-on": turn_on_deck(loop("G2", BEADS["B2"]), SWITCH, title="turn-on", swing_v=(0.0, 12.0), duration_s=3e-7),
}


@pytest.mark.parametrize("name", DECKS)
def test_decks_are_well_formed(name: str) -> None:
    lines = DECKS[name].splitlines()
    assert lines[0].startswith("* ")
    assert lines[-1] == ".end"
    elements = [line.split() for line in lines if line[0] not in "*."]
    names = [words[0].lower() for words in elements]
    assert len(names) == len(set(names))
    assert all(len(words) >= 4 for words in elements)
    assert "nan" not in DECKS[name].lower().replace("nanocoulombs", "")


@pytest.mark.parametrize("name", DECKS)
def test_no_node_hangs(name: str) -> None:
    # Two terminals at least on every node, or the simulator stops: R, C, L, V, I, B, F take the first two
    # words as nodes, G the first four.
    counts: dict[str, int] = {}
    for line in DECKS[name].splitlines():
        if line[0] in "*.":
            continue
        words = line.split()
        for node in words[1 : 5 if words[0][0].upper() == "G" else 3]:
            counts[node] = counts.get(node, 0) + 1
    assert counts.pop("0") > 0
    assert [node for node, count in counts.items() if count < 2] == []


def test_an_edge_deck_by_sight() -> None:
    assert DECKS["edge"] == (
        "* edge\n"
        "Vd n1 0 PWL(0 0 1e-12 12)\n"
        "R1 n1 n2 5.5\n"
        "L1 n2 n3 1.5e-08 ic=0\n"
        "Rb n3 g 1e-06\n"
        "Cg g 0 3.3e-09 ic=0\n"
        ".options reltol=1e-5 abstol=1e-10 vntol=1e-8 method=trap\n"
        ".tran 3.70174566e-11 1.48069826e-07 0 3.70174566e-11 uic\n"
        ".meas tran ipk MAX i(L1)\n"
        ".meas tran vmax MAX v(g)\n"
        ".meas tran vmin MIN v(g)\n"
        ".end\n"
    )


def test_the_same_deck_every_time() -> None:
    again = edge_deck(loop("G2", BEADS["B4"]), title="edge", start_v=12.0, final_v=0.0)
    assert again == DECKS["edge, bead"]


def said(tmp_path: Path, deck: str) -> tuple[str, dict[str, float]]:
    path = tmp_path / "deck.cir"
    path.write_text(deck, encoding="utf-8")
    output = simulated(path)
    found = re.findall(r"^(\w+)\s*=\s*([-+\d.eE]+)", output, re.MULTILINE)
    return output, {name: float(value) for name, value in found}


@pytest.mark.live
@pytest.mark.parametrize("name", ["charge curve", "saturation"])
def test_nonlinear_edges_live(name: str, tmp_path: Path) -> None:
    _, answer = said(tmp_path, DECKS[name])
    response = (
        nonlinear_edge(loop("G2"), start_v=0.0, final_v=12.0, charge=CURVE)
        if name == "charge curve"
        else nonlinear_edge(
            loop("G2", BEADS["B3"]), start_v=0.0, final_v=12.0, saturation=Saturation(half_current_a=0.5)
        )
    )
    figures = edge_figures(response, start_v=0.0, final_v=12.0)
    assert float(figures.peak_current_a) == pytest.approx(answer["ipk"], rel=5e-3)
    assert float(figures.extreme_v) == pytest.approx(max(answer["vmax"], 12.0), abs=0.06)


@pytest.mark.live
def test_bump_live(tmp_path: Path) -> None:
    deck = bump_deck(loop("G1"), title="bump", gate_drain_f=2e-11, slope_v_per_s=5e10, swing_v=400.0)
    _, answer = said(tmp_path, deck)
    found = bump_v(loop("G1"), gate_drain_f=2e-11, slope_v_per_s=5e10, swing_v=400.0)
    assert float(found) == pytest.approx(answer["vmax"], rel=5e-3)


@pytest.mark.live
def test_turn_on_live(tmp_path: Path) -> None:
    network = plain_loop(10.0, 15e-9, 3e-9, BEADS["B2"])
    switch: HardSwitch = SWITCH
    deck = turn_on_deck(network, switch, title="turn-on", swing_v=(0.0, 12.0), duration_s=600e-9)
    _, answer = said(tmp_path, deck)
    found = turn_on(network, switch, start_v=0.0, final_v=12.0, duration_s=600e-9)
    assert float(found.energy_j) == pytest.approx(1e-6 * answer["energy"], rel=5e-3)
    assert float(found.current_start_s) == pytest.approx(answer["t_i10"], rel=5e-3)
    assert float(found.current_rise_s) == pytest.approx(answer["t_i90"] - answer["t_i10"], rel=1e-2)
    assert float(found.voltage_fall_s) == pytest.approx(answer["t_v10"] - answer["t_v90"], rel=1e-2)


@pytest.mark.live
@pytest.mark.parametrize(
    ("name", "growth", "ring_hz"), [("oscillation", 15.4763e6, 31.2635e6), ("parallel", 140.105e6, 216.010e6)]
)
def test_oscillation_live(name: str, growth: float, ring_hz: float, tmp_path: Path) -> None:
    output, _ = said(tmp_path, DECKS[name])
    found = growth_of(output)
    assert found["growth_per_s"] == pytest.approx(growth, rel=0.02)
    assert found["frequency_hz"] == pytest.approx(ring_hz, rel=0.01)
