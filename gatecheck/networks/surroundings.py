"""What the evidence for one transistor may look at: the circuit, its neighbours, and how each is driven."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from gatecheck.networks.ports import CONNECTOR

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from gatecheck.networks.circuit import Circuit
    from gatecheck.networks.terminals import Transistor
    from gatecheck.networks.walk import Walk

_Key = tuple[str, "str | None"]
# A feature of the catalogue, and what fills the braces of its text.
Found = tuple[str, dict[str, str]]


@dataclass(frozen=True, slots=True)
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

    def partners(self, transistor: Transistor) -> list[tuple[Transistor, str]]:
        """The transistors that form a half bridge with this one, and the net in the middle."""
        found = []
        for other in self.transistors:
            if other.part == transistor.part and other.unit == transistor.unit:
                continue
            for middle, end in (
                (transistor.source_net, other.drain_net),
                (transistor.drain_net, other.source_net),
            ):
                if middle and end and end in self.circuit.tied(middle) and not self.circuit.is_rail(middle):
                    found.append((other, middle))
        return [(other, net) for other, net in found if self.driven(other)]


def name_of(key: _Key) -> str:
    """Reference and unit of a transistor as reports show it: `Q1`, `Q1 B`."""
    return key[0] if key[1] is None else f"{key[0]} {key[1]}"


def amount(circuit: Circuit, part: str) -> float | None:
    """The nominal value of a part in SI units; None if its text has none."""
    value = circuit.kinds[part].value
    return value.amount.nominal if value is not None and value.amount is not None else None
