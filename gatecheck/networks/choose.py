"""Which of the pins in a gate's reach drives it, and on which edge."""

from __future__ import annotations

from typing import TYPE_CHECKING

from gatecheck.catalogue.load import pin_is
from gatecheck.networks.kinds import Sort, bipolar
from gatecheck.networks.model import OFF, ON, Drive
from gatecheck.networks.ports import CHIP_PIN, CONNECTOR, NO_DRIVE, OUTPUT, PUSH_PULL, SINGLE_PULL, Port, best_rank

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from gatecheck.networks.circuit import Circuit
    from gatecheck.networks.terminals import Transistor

_Found = list[tuple[str, Port]]


def choose(circuit: Circuit, transistor: Transistor, reached: Mapping[str, tuple[int, Sequence[Port]]]) -> list[Port]:
    """The ports that drive: all of the best rank, and both halves of a split output.

    `reached` are the nets in reach with their number of parts to the gate and the ports on them.
    """
    found = [(net, port) for net, (_, here) in reached.items() for port in here]
    top = best_rank(port for _, port in found)
    if top == NO_DRIVE:
        return []
    best = [(net, port) for net, port in found if port.rank == top]
    if top == CHIP_PIN:
        # Nothing names the pins. One that also touches the source is the likely driver.
        best = _holding_source(circuit, transistor, best) or best
    if top <= CHIP_PIN:
        # Of unnamed pins the one behind a resistor drives, rather than one straight on the gate, which will be
        # a clamp or a sense; and the nearest such, since signals lead on beyond it.
        behind = [(net, port) for net, port in best if net != transistor.gate_net] or best
        nearest = min(reached[net][0] for net, _ in behind)
        best = [(net, port) for net, port in behind if reached[net][0] == nearest]
    if top == CONNECTOR and len({port.pin.part for _, port in best}) > 1:
        best = _largest(circuit, best)
    return [port for _, port in best]


def _holding_source(circuit: Circuit, transistor: Transistor, best: _Found) -> _Found:
    near = circuit.tied(transistor.source_net) | circuit.tied(transistor.kelvin_net)
    return [
        (net, port)
        for net, port in best
        if any(pin.net in near and not circuit.is_rail(pin.net) for pin in circuit.design.parts[port.pin.part].pins)
    ]


def _largest(circuit: Circuit, best: _Found) -> _Found:
    """Of several connectors the one with most pins: test headers have one."""
    most = max(len(circuit.design.parts[port.pin.part].pins) for _, port in best)
    return [(net, port) for net, port in best if len(circuit.design.parts[port.pin.part].pins) == most]


def drives(circuit: Circuit, chosen: list[Port], home: frozenset[str]) -> tuple[Drive, ...]:
    """Ports of one part on one net are one drive. `home` are the nets of the gate's own source."""
    grouped: dict[tuple[str, str], list[Port]] = {}
    for port in chosen:
        grouped.setdefault((port.pin.part, port.pin.net), []).append(port)
    if len(grouped) == 1 and chosen and chosen[0].rank == PUSH_PULL:
        # Both transistors in one package.
        return tuple(Drive(port.pin.part, (port.pin,), pull_of(circuit, port, home)) for port in chosen)
    split = len(grouped) > 1
    return tuple(
        Drive(part, tuple(port.pin for port in here), _edge_of(circuit, here[0], home, split=split))
        for (part, _), here in grouped.items()
    )


def _edge_of(circuit: Circuit, port: Port, home: frozenset[str], *, split: bool) -> str:
    if port.rank in (PUSH_PULL, SINGLE_PULL):
        return pull_of(circuit, port, home)
    if not split or port.rank < OUTPUT:
        return "both"
    if pin_is("split_on", port.pin.function):
        return ON
    return OFF if pin_is("split_off", port.pin.function) else "both"


def pull_of(circuit: Circuit, port: Port, home: frozenset[str]) -> str:
    """The edge a single transistor drives: down to the source or a ground is off, up to a supply is on.

    For an N-channel or IGBT gate. An emitter says it by itself: a PNP's pulls down, an NPN's pulls up.
    """
    pin, part = port.pin, circuit.design.parts[port.pin.part]
    if pin_is("emitter", pin.function) and bipolar(part):
        text = f"{part.value} {part.description} {part.library}".replace("_", " ")
        kinds = [edge for word, edge in (("pnp", OFF), ("npn", ON)) if word in text.lower()]
        if len(kinds) == 1:
            return kinds[0]
    others = {p.net for p in part.pins if p.net and p.net != pin.net}
    grounds = {net for net in others if "GND" in net.upper() or net.upper().endswith(("VSS", "VEE", "COM"))}
    return OFF if others & home or grounds else ON


def local_turn_off(circuit: Circuit, nets: Sequence[str], home: frozenset[str]) -> list[Port]:
    """A bipolar transistor beside the gate that discharges it into its own source: emitter here, collector there."""
    found = []
    for net in nets:
        for pin in circuit.pins(net) if not circuit.is_rail(net) else ():
            part = circuit.design.parts[pin.part]
            if circuit.kinds[pin.part].sort is not Sort.TRANSISTOR or not bipolar(part):
                continue
            others = {p.net for p in part.pins if pin_is("collector", p.function)}
            if pin_is("emitter", pin.function) and others & home and "npn" not in part.value.lower():
                found.append(Port(pin, SINGLE_PULL))
    return found
