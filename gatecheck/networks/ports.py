"""What a net near a gate could be driven by, ranked: named gate outputs first, connectors last."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from gatecheck.catalogue.load import pin_is
from gatecheck.networks.kinds import Sort, bipolar, terminal_name

if TYPE_CHECKING:
    from collections.abc import Iterable

    from gatecheck.design.model import Pin
    from gatecheck.networks.circuit import Circuit

# Ranks, our choice: only their order matters.
NAMED_OUTPUT = 5  # called like a gate-drive output
OUTPUT = 4  # an output by its electrical type
CHIP_PIN = 3  # a chip's pin of unknown or two-way type
PUSH_PULL = 2.5  # two transistors, one for each edge
WINDING = 2
CONNECTOR = 1.5
SINGLE_PULL = 1  # one transistor, one edge
NO_DRIVE = 0

_OUTPUT_NAMES = ("high_side", "low_side", "split_on", "split_off", "single")
_PASSIVE_NAMES = ("input", "supply", "reference")
# Called outputs by some symbols, yet they only hold or watch the gate.
_NEVER_DRIVES = ("clamp", "sense")
_OUTPUT_TYPES = ("output", "tri_state", "power_out")
_TWO_WAY_TYPES = ("", "bidirectional", "passive", "unspecified", "free", "open_collector", "open_emitter")


@dataclass(frozen=True, slots=True)
class Port:
    """A pin that might drive the net it is on."""

    pin: Pin
    rank: float


def ports(circuit: Circuit, net: str, own: str) -> list[Port]:
    """The pins on a net that might drive it, without those of the transistor's own part."""
    known = circuit.ports.get(net)
    if known is None:
        # A rail drives no gate, and has thousands of pins.
        pins = () if circuit.is_rail(net) else circuit.pins(net)
        known = circuit.ports[net] = [Port(pin, rank) for pin in pins if (rank := _rank(circuit, pin)) > NO_DRIVE]
    found = [port for port in known if port.pin.part != own or port.rank != SINGLE_PULL]
    pulls = [port for port in found if port.rank == SINGLE_PULL]
    if len({(port.pin.part, port.pin.number) for port in pulls}) == 2:  # noqa: PLR2004 (one for each edge)
        found = [port for port in found if port not in pulls] + [Port(port.pin, PUSH_PULL) for port in pulls]
    return found


def best_rank(found: Iterable[Port]) -> float:
    """The highest rank among ports."""
    return max((port.rank for port in found), default=NO_DRIVE)


def _rank(circuit: Circuit, pin: Pin) -> float:
    sort = circuit.kinds[pin.part].sort
    if sort is Sort.CHIP:
        return _chip_rank(pin)
    if sort is Sort.CONNECTOR:
        return CONNECTOR
    if sort is Sort.WINDING:
        return WINDING
    if sort is Sort.TRANSISTOR:
        return _transistor_rank(circuit, pin)
    return NO_DRIVE


def _chip_rank(pin: Pin) -> float:
    kind, _, marked = pin.electrical.partition("+")
    if marked == "no_connect" or kind == "no_connect":
        return NO_DRIVE
    if pin.function:
        if any(pin_is(group, pin.function) for group in _NEVER_DRIVES):
            return NO_DRIVE
        if kind != "input" and any(pin_is(group, pin.function) for group in _OUTPUT_NAMES):
            return NAMED_OUTPUT
        if kind not in _OUTPUT_TYPES and any(pin_is(group, pin.function) for group in _PASSIVE_NAMES):
            return NO_DRIVE
    if kind in _OUTPUT_TYPES:
        return OUTPUT
    return CHIP_PIN if kind in _TWO_WAY_TYPES else NO_DRIVE


def _transistor_rank(circuit: Circuit, pin: Pin) -> float:
    """A transistor drives with its collector, emitter or drain; its base and gate only listen."""
    name = terminal_name(pin)
    if any(pin_is(group, name) for group in ("gate", "base", "kelvin")):
        return NO_DRIVE
    if any(pin_is(group, name) for group in ("collector", "emitter", "drain", "source")):
        return SINGLE_PULL
    # Without names: pad 1 is the base or gate of nearly every three-lead part (common practice).
    return SINGLE_PULL if pin.number != "1" or bipolar(circuit.design.parts[pin.part]) else NO_DRIVE
