"""What the evidence for one transistor may look at: the circuit, its neighbours, and how each is driven."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from gatecheck.networks.ports import CONNECTOR

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

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
        """The driven transistors that form a half bridge with this one, and the net in the middle."""
        known = self._partners.get(transistor.key)
        if known is None:
            known = self._partners[transistor.key] = [
                (other, middle)
                for middle, others in ((transistor.source_net, self.by_drain), (transistor.drain_net, self.by_source))
                if middle and not self.circuit.is_rail(middle)
                for net in sorted(self.circuit.tied(middle))
                for other in others.get(net, ())
                if other.key != transistor.key and self.driven(other)
            ]
        return known

    @cached_property
    def _partners(self) -> dict[_Key, list[tuple[Transistor, str]]]:
        return {}


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
