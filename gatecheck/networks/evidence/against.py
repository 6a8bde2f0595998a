"""Evidence against hard switching from parts between the terminals."""

from __future__ import annotations

from typing import TYPE_CHECKING

from gatecheck.networks.kinds import Sort
from gatecheck.networks.ports import WINDING
from gatecheck.networks.surroundings import Found, Surroundings, amount

if TYPE_CHECKING:
    from collections.abc import Iterator

    from gatecheck.networks.circuit import Circuit
    from gatecheck.networks.terminals import Transistor

_DRAIN_CAPACITOR_F = 1e-9


def against(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    """What slows the gate down, holds it, or pulls it one way only."""
    circuit = around.circuit
    for element in circuit.between(transistor.gate_net, [transistor.drain_net], Sort.CAPACITOR):
        farad = amount(circuit, element.part)
        if farad is not None and farad >= _DRAIN_CAPACITOR_F:
            yield "gate_drain_capacitor", {"part": element.part}
    yield from _follower(circuit, transistor)
    walked = around.walks[transistor.key]
    if walked.rank < WINDING and around.p_channel(transistor):
        for element in circuit.between(transistor.gate_net, [transistor.source_net], Sort.RESISTOR):
            yield "p_channel_pull_up", {"part": element.part}


def _follower(circuit: Circuit, transistor: Transistor) -> Iterator[Found]:
    """A Zener from gate to a ground that is not the source, and a resistor that feeds it: a regulator."""
    home = circuit.tied(transistor.source_net)
    for zener in circuit.elements(transistor.gate_net):
        end = zener.other(transistor.gate_net)
        held = zener.fitted and zener.sort in (Sort.ZENER, Sort.DIODE) and end not in home and "GND" in end.upper()
        if held and circuit.between(transistor.gate_net, [transistor.drain_net], Sort.RESISTOR):
            yield "follower", {"part": zener.part}
