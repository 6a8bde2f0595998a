"""What hangs on a gate network beside its series parts: pull-down, gate capacitor, clamp, and the return."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from gatecheck.catalogue.load import pin_is
from gatecheck.networks.elements import is_shunt
from gatecheck.networks.kinds import Sort

if TYPE_CHECKING:
    from collections.abc import Iterable

    from gatecheck.networks.circuit import Circuit
    from gatecheck.networks.terminals import Transistor
    from gatecheck.networks.walk import Walk


@dataclass(frozen=True, slots=True)
class Shunts:
    """The shunt parts of a gate network, and the net its current returns over."""

    pulldowns: tuple[str, ...]
    gate_capacitors: tuple[str, ...]
    clamps: tuple[str, ...]
    return_net: str


def find_shunts(circuit: Circuit, transistor: Transistor, walked: Walk) -> Shunts:
    """Find the shunt parts between the ways of a gate and its source, Kelvin source or driver's return."""
    home = circuit.tied(transistor.source_net) | circuit.tied(transistor.kelvin_net)
    references = _driver_references(circuit, walked)
    # Only a driver without a pin at the source has its return elsewhere: across a shunt nobody saw, or at a
    # negative rail. Otherwise its ground is another circuit's business (a high side's driver has one too).
    targets = home | (frozenset() if references & home else references)
    series = set(walked.on.parts) | set(walked.off.parts)
    nets = sorted(walked.nets - targets)
    return Shunts(
        pulldowns=_parts(
            e.part
            for net in nets
            for e in circuit.between(net, targets, Sort.RESISTOR)
            if e.fitted and e.part not in series and not is_shunt(e)
        ),
        gate_capacitors=_parts(_capacitors(circuit, nets, targets, walked)),
        clamps=_parts(_clamps(circuit, nets, targets)),
        return_net=_return_net(transistor, references & home),
    )


def _parts(found: Iterable[str]) -> tuple[str, ...]:
    return tuple(sorted(dict.fromkeys(found)))


def _driver_references(circuit: Circuit, walked: Walk) -> frozenset[str]:
    """The nets of the driver's reference pins, or all its nets but the outputs where pins have no names."""
    nets: set[str] = set()
    for drive in walked.drives:
        pins = circuit.design.parts[drive.part].pins
        nets |= {pin.net for pin in pins if pin.net and pin_is("reference", pin.function)}
        if circuit.kinds[drive.part].sort is not Sort.CONNECTOR and not any(pin.function for pin in pins):
            nets |= {pin.net for pin in pins if "GND" in pin.net.upper() and circuit.is_rail(pin.net)}
    return frozenset(nets)


def _capacitors(circuit: Circuit, nets: list[str], targets: frozenset[str], walked: Walk) -> Iterable[str]:
    """Capacitors to the source, straight or behind a resistor of their own; not those at the driver's output."""
    outputs = {drive.net for drive in walked.drives}
    for net in nets:
        if net in outputs and len(nets) > 1:
            continue
        yield from (e.part for e in circuit.between(net, targets, Sort.CAPACITOR) if e.fitted)
        for link in circuit.elements(net):
            middle = link.other(net)
            if link.sort is Sort.RESISTOR and middle not in walked.nets and not circuit.is_rail(middle):
                yield from (e.part for e in circuit.between(middle, targets, Sort.CAPACITOR) if e.fitted)


def _clamps(circuit: Circuit, nets: list[str], targets: frozenset[str]) -> Iterable[str]:
    """Diodes of any sort to the source, alone or two in series."""
    diodes = (Sort.ZENER, Sort.DIODE)
    for net in nets:
        yield from (e.part for e in circuit.between(net, targets, *diodes) if e.fitted)
        for first in circuit.elements(net):
            middle = first.other(net)
            if (
                first.sort not in diodes
                or not first.fitted
                or middle in targets
                or middle in nets
                or circuit.is_rail(middle)
            ):
                continue
            for second in circuit.between(middle, targets, *diodes):
                if second.fitted and Sort.ZENER in (first.sort, second.sort):
                    yield from (first.part, second.part)


def _return_net(transistor: Transistor, references: frozenset[str]) -> str:
    """The Kelvin source where there is one, else the driver's reference near the source, else the source."""
    if transistor.kelvin_net:
        return transistor.kelvin_net
    if transistor.source_net in references or not references:
        return transistor.source_net
    return min(references)
