"""The sample files: where each one goes below sample_boards/, and its text."""

from __future__ import annotations

from .faults import FAULTS
from .half_bridge import HALF_BRIDGE
from .logic import LOGIC
from .schematics import SCHEMATICS
from .three_phase import THREE_PHASE
from .write_board import board
from .write_footprint import V10
from .write_netlist import netlist
from .write_schematic import schematic_files

WITH_NETLIST = (HALF_BRIDGE, LOGIC, THREE_PHASE)
CIRCUITS = (*WITH_NETLIST, *FAULTS)


def sample_files() -> dict[str, str]:
    """Path below sample_boards/ -> text.

    Raises:
        CopperFault: a board does not pass the maker's own check.
        DrawingFault: a schematic does not.
    """
    files = {f"{circuit.name}/{circuit.name}.kicad_pcb": board(circuit) for circuit in CIRCUITS}
    files |= {f"{circuit.name}/{circuit.name}.net": netlist(circuit) for circuit in WITH_NETLIST}
    for schematic in SCHEMATICS:
        files |= {f"{schematic.circuit.name}/{name}": text for name, text in schematic_files(schematic).items()}
    files["half_bridge_v10/half_bridge.kicad_pcb"] = board(HALF_BRIDGE, V10)
    return files
