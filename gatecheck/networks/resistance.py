"""The least resistance between driver and gate that the values of a network promise."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from gatecheck.networks.circuit import Circuit
    from gatecheck.networks.model import GateNetwork

# A part whose resistance is unknown counts as a link; this keeps the equations solvable. Our choice.
_LINK_OHM = 1e-6


def least_resistance_ohm(circuit: Circuit, network: GateNetwork, edge: str) -> float:
    """Resistance between the driver's net and the gate over all conducting ways of one edge.

    Diodes, beads and parts without a value count as nothing, so the true resistance is at least this. Zero
    where no value promises any.
    """
    paths = network.edge(edge)
    drive = next((d for d in network.drives if d.edge in (edge, "both")), None)
    if drive is None or not paths.conducts:
        return 0.0
    ends = drive.net, network.transistor.gate_net
    nets = {
        net: i for i, net in enumerate(dict.fromkeys((*ends, *(n for s in paths.elements for n in (s.near, s.far)))))
    }
    if ends[0] == ends[1]:
        return 0.0
    conductance = np.zeros((len(nets), len(nets)))
    for step in paths.elements:
        a, b = nets[step.near], nets[step.far]
        value = circuit.kinds[step.part].value
        known = value.amount.low if step.sort == "resistor" and value is not None and value.amount is not None else 0.0
        siemens = 1 / max(known, _LINK_OHM)
        conductance[a, a] += siemens
        conductance[b, b] += siemens
        conductance[a, b] -= siemens
        conductance[b, a] -= siemens
    # One ampere from the driver to the gate, which is the zero of voltage: the driver's voltage is the resistance.
    keep = [i for i in range(len(nets)) if i != nets[ends[1]]]
    current = np.zeros(len(nets))
    current[nets[ends[0]]] = 1.0
    try:
        volts = np.linalg.solve(conductance[np.ix_(keep, keep)], current[keep])
    except np.linalg.LinAlgError:
        return 0.0
    ohm = float(volts[keep.index(nets[ends[0]])])
    return ohm if ohm > 10 * _LINK_OHM * len(paths.elements) else 0.0
