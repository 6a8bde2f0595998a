"""Evidence from what the transistor switches: bridge, load, shunt, package, names."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from gatecheck.networks.elements import is_shunt
from gatecheck.networks.kinds import Sort
from gatecheck.networks.surroundings import Found, Surroundings, amount, name_of

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

    from gatecheck.networks.circuit import Circuit
    from gatecheck.networks.terminals import Transistor

_POWER_INDUCTOR_H = 0.1e-6
# Chip sizes in inch codes: what is this small and has no value is a bead or a filter (common practice).
_CHIP_SIZE = re.compile(r"(?<!\d)(?:0201|0402|0603|0805|1206)(?!\d)")
_SNUBBER_OHM = 470.0
_LONGEST_NAME = 60
# What gate nets are called. Origin: common practice.
_GATE_NAME = re.compile(
    r"(?<![A-Z])(?:G[HL][ABCUVW\d]?|[HL]O\d?|[HL]G\d?|[UVWABC]G?[HL]|PWM[A-Z\d]*_[HL]O?|GATE[A-Z\d_]*|"
    r"[A-Z\d]*_GATE)(?![A-Z])",
    re.IGNORECASE,
)


def bridge(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    """Half bridges, paralleled switches, and pairs that only look like a bridge."""
    circuit = around.circuit
    partners = around.partners(transistor) if around.driven(transistor) else []
    if partners:
        other, middle = partners[0]
        yield "half_bridge", {"part": name_of(other.key), "net": middle}
        connectors = (part for part in _neighbours(circuit, middle) if circuit.kinds[part].sort is Sort.CONNECTOR)
        connector = next(connectors, None)
        if connector is not None:
            yield "phase_connector", {"part": connector, "net": middle}
        high, low = (transistor, other) if transistor.source_net == middle else (other, transistor)
        for element in circuit.between(high.drain_net, sorted(circuit.tied(low.source_net)), Sort.CAPACITOR)[:1]:
            yield "bus_capacitor", {"part": element.part}
    else:
        yield from _back_to_back(around, transistor)
    for other in around.by_drain.get(transistor.drain_net, ()):
        beside = other.key not in around.alternates.get(transistor.key, ())
        if other.part != transistor.part and other.source_net == transistor.source_net and beside:
            yield "paralleled", {"part": name_of(other.key)}
            return


def _back_to_back(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    """Two transistors with one main terminal in common, neither in a bridge: a switch for both directions.

    Not channels of one load that each have a shunt of their own: their other ends meet as well.
    """
    tied = around.circuit.tied
    for common, others in ((transistor.drain_net, around.by_drain), (transistor.source_net, around.by_source)):
        if not common or around.circuit.is_rail(common):
            continue
        for other in others.get(common, ()):
            drains = bool(tied(transistor.drain_net) & tied(other.drain_net))
            sources = bool(tied(transistor.source_net) & tied(other.source_net))
            alike = other.key != transistor.key and around.p_channel(other) == around.p_channel(transistor)
            if alike and drains != sources and not around.partners(other):
                yield "back_to_back", {"part": name_of(other.key), "net": common}
                return


def load(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    """What hangs on drain and source."""
    circuit = around.circuit
    ends = [net for net in (transistor.drain_net, transistor.source_net) if net and not circuit.is_rail(net)]
    power = [(part, net) for net in ends for part in _neighbours(circuit, net) if _carries_power(circuit, part)]
    for part, net in power:
        yield "power_load", {"part": part, "net": net}
    for net in ends:
        for snubber in _snubbers(circuit, net):
            yield "snubber", {"path": snubber, "net": net}
    yield from _shunts(circuit, transistor.source_net)
    for pin in circuit.pins(transistor.drain_net) if transistor.drain_net in ends else ():
        if circuit.kinds[pin.part].sort is Sort.CONNECTOR:
            yield "connector_load", {"part": pin.part}
    if not power and not (around.driven(transistor) and around.partners(transistor)):
        yield from _lone(circuit, transistor)


def _neighbours(circuit: Circuit, net: str) -> Iterable[str]:
    """The parts on a net and on those tied to it that are no rails."""
    nets = [near for near in sorted(circuit.tied(net)) if not circuit.is_rail(near)]
    return dict.fromkeys(pin.part for near in nets for pin in circuit.pins(near))


def _shunts(circuit: Circuit, source: str) -> Iterator[Found]:
    """A current shunt between source and ground."""
    if circuit.is_rail(source):
        return
    for element in circuit.elements(source):
        if (
            element.fitted
            and is_shunt(element)
            and element.sort is Sort.RESISTOR
            and "GND" in element.other(source).upper()
        ):
            yield "current_shunt", {"part": element.part}


def _lone(circuit: Circuit, transistor: Transistor) -> Iterator[Found]:
    """A switch without bridge, inductor or winding, and the loads such a switch has."""
    yield "single_low_side", {}
    for element in () if circuit.is_rail(transistor.drain_net) else circuit.elements(transistor.drain_net):
        if not element.fitted:
            continue
        if element.sort is Sort.LED:
            yield "led_load", {"part": element.part}
        if element.sort in (Sort.DIODE, Sort.ZENER) and element.one_way and element.a == transistor.drain_net:
            yield "coil_load", {"part": element.part, "net": transistor.drain_net}
    if circuit.is_rail(transistor.drain_net) and circuit.is_rail(transistor.source_net):
        yield "rail_to_rail", {}


def _carries_power(circuit: Circuit, part: str) -> bool:
    """A transformer, or an inductor of a size that stores energy; one without a value by its footprint."""
    sort = circuit.kinds[part].sort
    if sort is not Sort.INDUCTOR:
        return sort is Sort.WINDING
    henry = amount(circuit, part)
    if henry is None:
        return _CHIP_SIZE.search(circuit.design.parts[part].footprint) is None
    return henry >= _POWER_INDUCTOR_H


def _snubbers(circuit: Circuit, net: str) -> Iterator[str]:
    """A small resistor and a capacitor in series from this net to elsewhere, in either order."""
    for first in circuit.elements(net):
        middle = first.other(net)
        if not first.fitted or first.sort not in (Sort.RESISTOR, Sort.CAPACITOR) or len(circuit.pins(middle)) != 2:  # noqa: PLR2004
            continue
        for second in circuit.elements(middle):
            pair = {first.sort, second.sort}
            resistor = first if first.sort is Sort.RESISTOR else second
            small = resistor.ohm is None or 0 < resistor.ohm <= _SNUBBER_OHM
            if second.part != first.part and second.fitted and pair == {Sort.RESISTOR, Sort.CAPACITOR} and small:
                yield f"{first.part}-{second.part}"


def surface(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    """Package and net names."""
    package = transistor.package
    if package is not None and package.size == "power":
        yield "power_package", {"word": package.name}
    if package is not None and package.size == "small":
        yield "small_package", {"word": package.name}
    walked = around.walks[transistor.key]
    for net in sorted(walked.nets):
        if not net.startswith(("Net-(", "unconnected-")) and _GATE_NAME.search(net.rpartition("/")[2][:_LONGEST_NAME]):
            yield "gate_net_name", {"net": net}
