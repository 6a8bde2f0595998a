"""All that a rule may import: the Rule itself, the gates it looks at, and how to word a verdict.

A rule decides and does not compute. It is given the gates of one design, asks them for facts, and yields
verdicts; what a fail may weigh follows from what it rests on, and is settled here, not in the rule.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from typing import TYPE_CHECKING

from gatecheck.finding import (
    WEAK_ORIGINS,
    Ask,
    Finding,
    Level,
    Limit,
    Origin,
    Quantity,
    Spot,
    Verdict,
    fingerprint,
    least_trusted,
)
from gatecheck.networks.model import EdgePaths

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable, Iterator, Sequence

    from gatecheck.copper.chain import Chains
    from gatecheck.design.join import OutOfStep
    from gatecheck.design.model import Part
    from gatecheck.networks.find import Networks
    from gatecheck.networks.model import GateNetwork, Switch
    from gatecheck.quantities import Quantities
    from gatecheck.settings import Settings

__all__ = [
    "Ask",
    "Bound",
    "Design",
    "EdgePaths",
    "Finding",
    "Gate",
    "Level",
    "Limit",
    "Origin",
    "Quantity",
    "Rule",
    "Say",
    "Verdict",
    "least_trusted",
]

EDGES = ("on", "off")


@dataclass(frozen=True, slots=True)
class Bound:
    """A limit of a quantity with the level of a fail that breaks it; at most `maximum` or at least `minimum`."""

    level: Level
    origin: Origin
    source: str
    maximum: float | None = None
    minimum: float | None = None

    def broken_by(self, value: Quantity) -> bool:
        """Does the whole interval lie outside?"""
        if self.maximum is not None:
            return value.low > self.maximum
        return self.minimum is not None and value.high < self.minimum

    def kept_by(self, value: Quantity) -> bool:
        """Does the whole interval lie inside?"""
        if self.maximum is not None:
            return value.high <= self.maximum
        return self.minimum is None or value.low >= self.minimum

    def limit(self, unit: str) -> Limit:
        """The bound as a finding shows it."""
        return Limit(unit, self.source, minimum=self.minimum, maximum=self.maximum)


def judged(value: Quantity, bounds: Sequence[Bound]) -> tuple[Verdict, Bound]:
    """The verdict of an interval against bounds from gravest to mildest, and the bound that decided.

    Broken whole: fail. Kept whole by the mildest: pass. Else undecided.
    """
    for bound in bounds:
        if bound.broken_by(value):
            return Verdict.FAIL, bound
    mildest = bounds[-1]
    if mildest.kept_by(value):
        return Verdict.PASS, mildest
    return Verdict.UNDECIDED, next(bound for bound in bounds if not bound.kept_by(value))


def remembered(note: float, warning: float) -> tuple[Bound, Bound]:
    """Upper limits of common practice: a fail beyond the first is a note, beyond the second a warning."""
    source = "common practice"
    return (
        Bound(Level.WARNING, Origin.CATALOGUE, source, maximum=warning),
        Bound(Level.NOTE, Origin.CATALOGUE, source, maximum=note),
    )


@dataclass(frozen=True, slots=True)
class Say:
    """A rule's verdict on one gate, or on the whole design where `gate` is None.

    Its level is capped and its places are filled in later. `message` names no part of this channel, so that
    repeated channels are said once; `parts` are the parts it is about, in the order a reader should look at them.
    """

    gate: Gate | None
    verdict: Verdict
    message: str
    level: Level = Level.NONE
    rests_on: Origin = Origin.GEOMETRY
    parts: tuple[str, ...] = ()
    edge: str | None = None
    quantity: str | None = None
    value: Quantity | None = None
    limit: Limit | None = None
    ask: tuple[Ask, ...] = ()
    advice: str = ""


@dataclass(frozen=True, slots=True)
class Rule:
    """One check: what it asks, why, of which quantity, against which limits, and from which sources."""

    id: str
    title: str
    reason: str
    quantity: str
    limits: tuple[str, ...]
    sources: tuple[str, ...]
    check: Callable[[Design], Iterator[Say]]


class Gate:
    """One switching gate as rules see it."""

    def __init__(self, design: Design, network: GateNetwork, switch: Switch, quantities: Quantities) -> None:
        self._design, self.network, self.switch, self.quantities = design, network, switch, quantities

    @property
    def name(self) -> str:
        """Reference, and unit of a package with several transistors."""
        transistor = self.network.transistor
        reference = self._design.part(transistor.part).reference or transistor.part
        return reference if transistor.unit is None else f"{reference} {transistor.unit}"

    @property
    def part(self) -> str:
        """The transistor's part."""
        return self.network.transistor.part

    @property
    def likely(self) -> bool:
        """Is its role only likely?"""
        return self.switch.likely

    @property
    def beads(self) -> tuple[str, ...]:
        """Beads in series with the gate, from driver to gate."""
        return self.network.beads

    @property
    def gate_resistors(self) -> tuple[str, ...]:
        """Resistors in series with the gate, from driver to gate."""
        return self.network.gate_resistors

    @property
    def open_parts(self) -> tuple[str, ...]:
        """Series parts that are not fitted, where an edge has no other way."""
        return self.network.open_parts

    @property
    def own_branch(self) -> frozenset[str]:
        """Series parts that carry this gate's current alone."""
        return self.network.own_branch

    def edge(self, name: str) -> EdgePaths:
        """The ways of one edge, `on` or `off`."""
        return self.network.edge(name)

    @property
    def place_mm(self) -> tuple[float, float]:
        """Where the gate pad is on the board; zero without a board."""
        pad = next((pad for pin in self.network.transistor.gate for pad in pin.pads), None)
        return (round(pad.x_m * 1e3, 1), round(pad.y_m * 1e3, 1)) if pad is not None else (0.0, 0.0)

    def reference_of(self, part: str) -> str:
        """What a part of this gate is called in the design."""
        return self._design.part(part).reference or part

    @property
    def technology(self) -> str:
        """si, sic, gan or igbt; plain silicon where nothing tells."""
        return self.switch.technology or "si"

    def quantity(self, name: str) -> Quantity | None:
        """A quantity by its published name; None where it cannot be had."""
        return self.quantities.get(name)

    @cached_property
    def kin(self) -> tuple[object, ...]:
        """What like gates share: transistor, package, place in a bridge or not, side of it, and sort of driver."""
        part = self._design.part(self.part)
        drivers = tuple(sorted({self._design.part(drive.part).value for drive in self.network.drives}))
        bridge = any(entry.name == "half_bridge" for entry in self.switch.evidence)
        side = self._design.is_rail(self.network.transistor.source_net)
        return part.value, part.footprint, bridge, side, drivers


class Design:
    """The gates of one design, and what rules may know of its parts."""

    def __init__(
        self,
        networks: Networks,
        spot: Callable[[str], Spot],
        settings: Settings,
        chains: Chains | None = None,
        out_of_step: OutOfStep | None = None,
    ) -> None:
        from gatecheck.quantities import Quantities  # noqa: PLC0415 (listing the rules needs no arithmetic)

        self._networks, self._spot, self.settings = networks, spot, settings
        self.out_of_step = out_of_step  # of board and schematic; None where there is only one of them
        switches = {switch.transistor.key: switch for switch in networks.switches}
        gates = []
        for network in networks.gates:
            switch = switches[network.transistor.key]
            quantities = Quantities(network, switch.technology, networks.circuit, chains, settings)
            gates.append(Gate(self, network, switch, quantities))
        self.gates = tuple(gates)

    def own_word(self, minimum: float | None = None, maximum: float | None = None) -> tuple[Bound, ...]:
        """A limit that the project file states; none where it states nothing."""
        if minimum is None and maximum is None:
            return ()
        return (Bound(Level.ERROR, Origin.PROJECT, self.settings.path, maximum=maximum, minimum=minimum),)

    def part(self, key: str) -> Part:
        """A part by its id."""
        return self._networks.design.parts[key]

    @property
    def name(self) -> str:
        """What the design is called: its main file, without the folder."""
        return self._networks.design.source.rpartition("/")[2]

    def at_a_gate(self, step: OutOfStep) -> bool:
        """Does a difference touch what stands between a driver and a gate?"""
        nets = {gate.network.transistor.gate_net for gate in self.gates}
        nets |= {net for gate in self.gates for edge in EDGES for s in gate.edge(edge).steps for net in (s.near, s.far)}
        parts = {step.part for gate in self.gates for edge in EDGES for step in gate.edge(edge).steps}
        parts |= {gate.part for gate in self.gates}
        signals = {net for net in nets if not self.is_rail(net)}
        return any(pin.board_net in signals or pin.part in parts for pin in step.moved) or not parts.isdisjoint(
            step.not_in_schematic
        )

    def is_rail(self, net: str) -> bool:
        """Is a net a supply or a ground?"""
        return self._networks.circuit.is_rail(net)

    def finding(self, rule: Rule, say: Say) -> Finding:
        """The finding of a verdict: level capped by what it rests on, places and fingerprint filled in."""
        gate = say.gate
        rests_on = least_trusted(say.rests_on, Origin.ASSUMED) if gate is not None and gate.likely else say.rests_on
        level, message = say.level if say.verdict is Verdict.FAIL else Level.NONE, say.message
        if level is Level.ERROR and rests_on in WEAK_ORIGINS:
            level = Level.WARNING
        if say.verdict is Verdict.FAIL and rests_on in WEAK_ORIGINS:
            message = f"likely: {message}"
        parts = say.parts if gate is None else (*say.parts, gate.part)
        return Finding(
            rule=rule.id,
            verdict=say.verdict,
            level=level,
            subject=gate.name if gate is not None else self.name,
            message=message,
            rests_on=rests_on,
            fingerprint=fingerprint(rule.id, *self._identity(gate), say.edge or ""),
            edge=say.edge,
            quantity=say.quantity,
            value=say.value,
            limit=say.limit,
            ask=say.ask,
            places=tuple(self._spot(key) for key in dict.fromkeys(parts)),
            advice=say.advice,
        )

    def _identity(self, gate: Gate | None) -> tuple[str, ...]:
        """What tells a subject from all others, whatever else changes."""
        if gate is None:
            return (self.name,)
        part = self.part(gate.part)
        # Panels repeat symbols; the part's id tells the copies apart where the symbol does not.
        identity = f"{part.symbol_path} {part.id}" if part.symbol_path else part.id
        return identity, gate.network.transistor.unit or ""


def grouped(findings: Iterable[Finding]) -> list[Finding]:
    """Findings that say the same of several subjects, said once, with the others in `also`."""
    groups: dict[object, list[Finding]] = {}
    for finding in findings:
        kind = (finding.rule, finding.verdict, finding.level, finding.message, finding.edge, finding.rests_on)
        groups.setdefault((kind, finding.quantity, finding.limit), []).append(finding)
    return [_merged(group) for group in groups.values()]


# Of channels that each need another move, so many are spelled out. Our choice.
_ADVICES = 3


def _merged(group: list[Finding]) -> Finding:
    """One finding for all: the value is the interval over them, what to do is spelled out for the first few."""
    first, *others = group
    if not others:
        return first
    advices = list(dict.fromkeys(finding.advice for finding in group if finding.advice))
    more = len(advices) - _ADVICES
    advice = "; ".join(advices[:_ADVICES]) + (f"; {more} more alike" if more > 0 else "")
    values = [finding.value for finding in group if finding.value is not None]
    value = first.value
    if value is not None:
        low, high = min(v.low for v in values), max(v.high for v in values)
        origin = least_trusted(*(v.origin for v in values))
        value = Quantity(low, max(v.nominal for v in values), high, value.unit, origin)
    return replace(
        first,
        also=tuple(finding.subject for finding in others),
        places=tuple(dict.fromkeys(place for finding in group for place in finding.places)),
        ask=tuple(dict.fromkeys(ask for finding in group for ask in finding.ask)),
        value=value,
        advice=advice,
    )
