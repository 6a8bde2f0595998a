"""Invented beads, gate loops and parts whose numbers were computed once by other means.

Origin of the expected values, unless a test says otherwise: a separate calculation made for this project with
mpmath, scipy (ODE solver, matrix exponential), numpy eigenvalues, scikit-rf 2.2.0 and ngspice-39, on the
element values below. None of it used the code under test.
"""

from __future__ import annotations

import dataclasses
import json
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from gatecheck.physics.bead import BeadLadder, parallel_bead
from gatecheck.physics.gate_loop import GateLoop
from gatecheck.physics.switch_circuit import SwitchBranch

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

REFERENCE = Path(__file__).parent.parent / "reference"

B1 = parallel_bead(dc_resistance_ohm=0.20, parallel_resistance_ohm=600.0, inductance_h=1.5e-6, capacitance_f=0.6e-12)
B2 = parallel_bead(dc_resistance_ohm=0.010, parallel_resistance_ohm=34.0, inductance_h=0.12e-6, capacitance_f=0.8e-12)
B3 = parallel_bead(dc_resistance_ohm=0.05, parallel_resistance_ohm=125.0, inductance_h=0.45e-6, capacitance_f=0.5e-12)
B4 = BeadLadder(
    dc_resistance_ohm=np.array(0.05),
    section_resistance_ohm=np.array([10.0, 40.0, 80.0]),
    section_inductance_h=np.array([0.8e-6, 0.4e-6, 0.1e-6]),
    series_inductance_h=np.array(0.0),
    capacitance_f=np.array(0.4e-12),
)
BEADS = {"B1": B1, "B2": B2, "B3": B3, "B4": B4}

# name: (start V, final V, ohm, henry, farad)
LOOPS = {
    "G1": (0.0, 12.0, 1.5, 15e-9, 3.3e-9),
    "G2": (0.0, 12.0, 5.5, 15e-9, 3.3e-9),
    "G3": (-4.0, 18.0, 3.0, 20e-9, 1.9e-9),
    "G4": (0.0, 5.0, 2.2, 3e-9, 0.2e-9),
}


def loop(name: str, bead: BeadLadder | None = None) -> GateLoop:
    _, _, resistance, inductance, capacitance = LOOPS[name]
    return plain_loop(resistance, inductance, capacitance, bead)


def plain_loop(resistance: float, inductance: float, capacitance: float, bead: BeadLadder | None = None) -> GateLoop:
    return GateLoop(
        resistance_ohm=np.array(resistance),
        inductance_h=np.array(inductance),
        capacitance_f=np.array(capacitance),
        bead=bead,
    )


def synthetic_ferrite(frequency_hz: Any) -> Any:
    """A bead no ladder can be exactly: permeability 1 + 300 / (1 + jf / 20 MHz)^0.75 on 5 nH, and 0.5 pF."""
    s = 2j * np.pi * np.asarray(frequency_hz)
    permeability = 1.0 + 300.0 / (1.0 + 1j * np.asarray(frequency_hz) / 20e6) ** 0.75
    return 0.15 + 1.0 / (1.0 / (s * 5e-9 * permeability) + s * 0.5e-12)


# Worked cases: 80 V trench FET; 650 V superjunction; 1200 V SiC; 650 V GaN; 1200 V IGBT module. All invented.
# SI.
CASES: dict[str, dict[str, Any]] = {
    "A": {
        "off_v": 0.0, "on_v": 12.0, "cgs": 5.6e-9, "cgd": 60e-12, "cds": 1.0e-9, "qg": 95e-9, "qgd": 16e-9,
        "plateau_v": 4.8, "gm": 120.0, "r_int": 1.5, "r_up": 1.0, "r_down": 0.8, "r_on": 4.7, "r_off": 4.7,
        "lg": 14e-9, "ls": 1e-9, "ld": 8e-9, "rd": 0.05, "f": 20e3, "slope": 5e9, "bus_v": 48.0,
        "bead": (0.010, 47.0, 60e-9, 1.0e-12), "half_a": 1.5,
    },
    "B": {
        "off_v": 0.0, "on_v": 12.0, "cgs": 3.0e-9, "cgd": 5e-12, "cds": 60e-12, "qg": 70e-9, "qgd": 24e-9,
        "plateau_v": 5.5, "gm": 30.0, "r_int": 1.0, "r_up": 1.2, "r_down": 0.8, "r_on": 10.0, "r_off": 2.2,
        "lg": 18e-9, "ls": 4e-9, "ld": 25e-9, "rd": 0.1, "f": 100e3, "slope": 30e9, "bus_v": 400.0,
        "bead": (0.012, 60.0, 110e-9, 1.0e-12), "half_a": 1.5,
    },
    "C": {
        "off_v": -4.0, "on_v": 18.0, "cgs": 2.9e-9, "cgd": 12e-12, "cds": 160e-12, "qg": 120e-9, "qgd": 34e-9,
        "plateau_v": 8.0, "gm": 35.0, "r_int": 1.6, "r_up": 0.6, "r_down": 0.6, "r_on": 3.3, "r_off": 3.3,
        "lg": 12e-9, "ls": 0.5e-9, "ld": 18e-9, "rd": 0.1, "f": 60e3, "slope": 50e9, "bus_v": 800.0,
        "bead": (0.004, 33.0, 45e-9, 0.8e-12), "half_a": 2.5,
    },
    "D": {
        "off_v": 0.0, "on_v": 6.0, "cgs": 240e-12, "cgd": 2e-12, "cds": 65e-12, "qg": 6e-9, "qgd": 2e-9,
        "plateau_v": 3.0, "gm": 40.0, "r_int": 1.1, "r_up": 1.2, "r_down": 0.6, "r_on": 10.0, "r_off": 2.0,
        "lg": 3e-9, "ls": 0.1e-9, "ld": 3e-9, "rd": 0.05, "f": 500e3, "slope": 80e9, "bus_v": 400.0,
        "bead": (0.02, 14.0, 25e-9, 0.5e-12), "half_a": 1.0,
    },
    "E": {
        "off_v": -8.0, "on_v": 15.0, "cgs": 28e-9, "cgd": 0.25e-9, "cds": 2.0e-9, "qg": 3.3e-6, "qgd": 0.9e-6,
        "plateau_v": 9.0, "gm": 200.0, "r_int": 1.7, "r_up": 0.35, "r_down": 0.35, "r_on": 1.8, "r_off": 1.8,
        "lg": 110e-9, "ls": 3e-9, "ld": 35e-9, "rd": 0.05, "f": 8e3, "slope": 5e9, "bus_v": 600.0,
        "bead": (0.02, 130.0, 260e-9, 1.2e-12), "half_a": 1.2,
    },
}  # fmt: skip


def expected_cases() -> dict[str, Any]:
    loaded: dict[str, Any] = json.loads((REFERENCE / "worked_cases.json").read_text(encoding="utf-8"))
    return loaded


def case_bead(name: str) -> BeadLadder:
    dc, parallel, inductance, capacitance = CASES[name]["bead"]
    return parallel_bead(
        dc_resistance_ohm=dc,
        parallel_resistance_ohm=parallel,
        inductance_h=inductance,
        capacitance_f=capacitance,
    )


def case_loop(name: str, edge: str, bead: BeadLadder | None = None) -> GateLoop:
    case = CASES[name]
    driver = case["r_up"] + case["r_on"] if edge == "on" else case["r_down"] + case["r_off"]
    return plain_loop(driver + case["r_int"], case["lg"] + case["ls"], case["cgs"] + case["cgd"], bead)


def case_swing(name: str, edge: str) -> tuple[float, float]:
    off_v, on_v = CASES[name]["off_v"], CASES[name]["on_v"]
    return (off_v, on_v) if edge == "on" else (on_v, off_v)


def by_gain(
    poles: Callable[[SwitchBranch], NDArray[np.complex128]], device: SwitchBranch
) -> Callable[[NDArray[np.float64]], NDArray[np.complex128]]:
    return lambda gain: poles(dataclasses.replace(device, transconductance_siemens=gain))


def case_switch(name: str, edge: str, bead: BeadLadder | None = None) -> SwitchBranch:
    case = CASES[name]
    return SwitchBranch(
        gate_resistance_ohm=float(case_loop(name, edge).resistance_ohm),
        gate_inductance_h=case["lg"],
        drain_inductance_h=case["ld"],
        gate_source_f=case["cgs"],
        gate_drain_f=case["cgd"],
        drain_source_f=case["cds"],
        transconductance_siemens=case["gm"],
        drain_resistance_ohm=case["rd"],
        source_inductance_h=case["ls"],
        bead=bead,
    )
