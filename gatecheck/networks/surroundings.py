"""What the evidence for one transistor may look at: the circuit, its neighbours, and how each is driven."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from gatecheck.catalogue.load import word_in
from gatecheck.networks.ports import CONNECTOR

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

    from gatecheck.design.model import Part
    from gatecheck.networks.circuit import Circuit
    from gatecheck.networks.terminals import Transistor
    from gatecheck.networks.walk import Walk

_Key = tuple[str, "str | None"]
# A feature of the catalogue, and what fills the braces of its text.
Found = tuple[str, dict[str, str]]


@dataclass(frozen=True)
class Surroundings:
    """All that the evidence for one transistor may look at."""

    circuit: Circuit
    transistors: Sequence[Transistor]
    walks: Mapping[_Key, Walk]
    alternates: Mapping[_Key, tuple[_Key, ...]]

    def driven(self, transistor: Transistor) -> bool:
        """Is the gate driven actively, and not only fed through a large resistor?"""
        walked = self.walks[transistor.key]
        return walked.rank >= CONNECTOR and not walked.feed_only

    @cached_property
    def by_drain(self) -> Mapping[str, list[Transistor]]:
        """The transistors by the net of their drain."""
        return _grouped(self.transistors, lambda transistor: transistor.drain_net)

    @cached_property
    def by_source(self) -> Mapping[str, list[Transistor]]:
        """The transistors by the net of their source."""
        return _grouped(self.transistors, lambda transistor: transistor.source_net)

    def partners(self, transistor: Transistor) -> list[tuple[Transistor, str]]:
        """The driven transistors that form a half bridge with this one, and the net in the middle.

        Source on drain, or drain on drain for a P-channel over an N-channel one.
        """
        known = self._partners.get(transistor.key)
        if known is None:
            found = [
                *self._at(transistor.source_net, self.by_drain),
                *self._at(transistor.drain_net, self.by_source),
                *(
                    (other, net)
                    for other, net in self._at(transistor.drain_net, self.by_drain)
                    if self.p_channel(other) != self.p_channel(transistor)
                ),
            ]
            known = self._partners[transistor.key] = [
                (other, net) for other, net in found if other.key != transistor.key and self.driven(other)
            ]
        return known

    def p_channel(self, transistor: Transistor) -> bool:
        """Does its text say that it is a P-channel device?"""
        return is_p_channel(self.circuit.design.parts[transistor.part])

    def _at(self, middle: str, others: Mapping[str, list[Transistor]]) -> list[tuple[Transistor, str]]:
        """The transistors with a terminal on this net or one tied to it, unless it is a rail."""
        if not middle or self.circuit.is_rail(middle):
            return []
        return [(other, middle) for net in sorted(self.circuit.tied(middle)) for other in others.get(net, ())]

    @cached_property
    def _partners(self) -> dict[_Key, list[tuple[Transistor, str]]]:
        return {}


def is_p_channel(part: Part) -> bool:
    """Does its text say that it is a P-channel device?"""
    return bool(word_in("p_channel", f"{part.description} {part.value} {part.library}".replace("_", " ")))


def _grouped(transistors: Sequence[Transistor], net_of: Callable[[Transistor], str]) -> Mapping[str, list[Transistor]]:
    groups: dict[str, list[Transistor]] = {}
    for transistor in transistors:
        groups.setdefault(net_of(transistor), []).append(transistor)
    return groups


def name_of(key: _Key) -> str:
    """Reference and unit of a transistor as reports show it: `Q1`, `Q1 B`."""
    return key[0] if key[1] is None else f"{key[0]} {key[1]}"


def amount(circuit: Circuit, part: str) -> float | None:
    """The nominal value of a part in SI units; None if its text has none."""
    value = circuit.kinds[part].value
    return value.amount.nominal if value is not None and value.amount is not None else None
