"""The nouns of gate networks: Switch with its evidence, GateNetwork with its paths."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from gatecheck.design.model import Pin
    from gatecheck.networks.terminals import Transistor

ON, OFF = "on", "off"


@dataclass(frozen=True, slots=True)
class Evidence:
    """One reason for a role; a negative weight speaks against hard switching. `name` is its catalogue key."""

    name: str
    text: str
    weight: float


@dataclass(frozen=True, slots=True)
class Switch:
    """One transistor in its role: switching, static, small-signal, linear, unclear."""

    transistor: Transistor
    role: str
    score: float
    likely: bool  # switching, but the evidence is thin
    technology: str  # si, sic, gan, igbt, or empty
    channel: str  # n, p
    evidence: tuple[Evidence, ...]


@dataclass(frozen=True, slots=True)
class Drive:
    """What drives the gate over one or more pins of one part on one net; `edge` is on, off or both."""

    part: str
    pins: tuple[Pin, ...]
    edge: str

    @property
    def net(self) -> str:
        """The net the pins drive."""
        return self.pins[0].net


@dataclass(frozen=True, slots=True)
class Step:
    """One part of a path; parts in parallel with it stand in the same stage."""

    part: str
    sort: str
    near: str  # net towards the driver
    far: str  # net towards the gate


@dataclass(frozen=True, slots=True)
class EdgePaths:
    """All conducting ways of one edge.

    `steps` runs from driver to gate, each part once, over the ways that carry most of the current: where a
    diode branch bypasses a resistor, the diode branch. `ways` are all of them, way by way. `covering` are the
    parts that every conducting way passes: a bead among them damps this edge whole. `elements` are the parts
    and net ties of all conducting ways, between their nets. `truncated` says that there were more ways than
    are searched: nothing covers then.
    """

    steps: tuple[Step, ...]
    elements: tuple[Step, ...]
    ways: tuple[tuple[str, ...], ...]
    covering: frozenset[str]
    conducts: bool
    truncated: bool = False

    @property
    def parts(self) -> tuple[str, ...]:
        """The parts from driver to gate."""
        return tuple(step.part for step in self.steps)


@dataclass(frozen=True, slots=True)
class GateNetwork:
    """Everything between the driver outputs and one gate."""

    transistor: Transistor
    drives: tuple[Drive, ...]
    on: EdgePaths
    off: EdgePaths
    beads: tuple[str, ...]
    gate_resistors: tuple[str, ...]
    pulldowns: tuple[str, ...]
    gate_capacitors: tuple[str, ...]
    clamps: tuple[str, ...]
    open_parts: tuple[str, ...]  # series parts marked as not fitted
    return_net: str
    own_branch: frozenset[str]  # parts that carry this gate's current alone
    parallel_with: tuple[tuple[str, str | None], ...]
    alternates: tuple[tuple[str, str | None], ...]

    def edge(self, name: str) -> EdgePaths:
        """The paths of one edge, on or off."""
        return self.on if name == ON else self.off
