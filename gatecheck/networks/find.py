"""From a Design to its switches and gate networks: the entry of this package."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from typing import TYPE_CHECKING

from gatecheck.networks.circuit import Circuit
from gatecheck.networks.kinds import Sort
from gatecheck.networks.model import GateNetwork, Switch
from gatecheck.networks.roles import judge_roles
from gatecheck.networks.shunts import find_shunts
from gatecheck.networks.surroundings import Surroundings
from gatecheck.networks.terminals import Transistor, find_transistors
from gatecheck.networks.walk import Walk, walk

if TYPE_CHECKING:
    from collections.abc import Mapping

    from gatecheck.design.model import Design, Part

_Key = tuple[str, str | None]
# Our choice: more than any power stage parallels; bounds the report on hostile input.
_MOST_PARALLEL = 64


@dataclass(frozen=True, slots=True)
class Networks:
    """All switches of a design, and the gate networks of those that switch."""

    design: Design
    circuit: Circuit
    switches: tuple[Switch, ...]
    gates: tuple[GateNetwork, ...]


def find_networks(design: Design) -> Networks:
    """Find every transistor with a gate, its role, and the gate network of every switching one."""
    circuit = Circuit(design)
    transistors = find_transistors(design, circuit.kinds)
    middles = {t.drain_net for t in transistors} & {t.source_net for t in transistors}
    circuit.not_rails({t.gate_net for t in transistors} | middles)
    gate_nets = frozenset(t.gate_net for t in transistors if t.gate_net)
    walks = {t.key: walk(circuit, t, gate_nets) for t in transistors}
    alternates = _alternates(design, transistors)
    surroundings = Surroundings(circuit, transistors, walks, alternates)
    switches = tuple(judge_roles(surroundings))
    switching = [s.transistor for s in switches if s.role == "switching"]
    parallel = _parallel(switching, walks, alternates)
    gates = tuple(_network(circuit, t, walks, parallel, alternates) for t in switching)
    return Networks(design, circuit, switches, gates)


def _network(
    circuit: Circuit,
    transistor: Transistor,
    walks: Mapping[_Key, Walk],
    parallel: Mapping[_Key, tuple[_Key, ...]],
    alternates: Mapping[_Key, tuple[_Key, ...]],
) -> GateNetwork:
    walked = walks[transistor.key]
    shunts = find_shunts(circuit, transistor, walked)
    series = tuple(dict.fromkeys((*walked.on.parts, *walked.off.parts)))
    shared = {
        part for other in parallel.get(transistor.key, ()) for part in (*walks[other].on.parts, *walks[other].off.parts)
    }
    return GateNetwork(
        transistor=transistor,
        drives=walked.drives,
        on=walked.on,
        off=walked.off,
        beads=tuple(part for part in series if circuit.kinds[part].sort is Sort.BEAD),
        gate_resistors=tuple(part for part in series if circuit.kinds[part].sort is Sort.RESISTOR),
        pulldowns=shunts.pulldowns,
        gate_capacitors=shunts.gate_capacitors,
        clamps=shunts.clamps,
        open_parts=walked.open_parts,
        return_net=shunts.return_net,
        own_branch=frozenset(series) - shared,
        parallel_with=parallel.get(transistor.key, ()),
        alternates=alternates.get(transistor.key, ()),
    )


def _parallel(
    switching: list[Transistor], walks: Mapping[_Key, Walk], alternates: Mapping[_Key, tuple[_Key, ...]]
) -> dict[_Key, tuple[_Key, ...]]:
    """Switches between the same nets whose gates the same pins drive; footprints of one place are one switch."""
    groups: dict[object, list[Transistor]] = defaultdict(list)
    for transistor in switching:
        pins = frozenset((d.part, pin.number) for d in walks[transistor.key].drives for pin in d.pins)
        if pins and transistor.drain_net and transistor.source_net:
            groups[transistor.drain_net, transistor.source_net, pins].append(transistor)
    found: dict[_Key, tuple[_Key, ...]] = {}
    for group in groups.values():
        for one in group:
            others = [t.key for t in group[:_MOST_PARALLEL] if t is not one]
            found[one.key] = tuple(key for key in others if key not in alternates.get(one.key, ()))
    return found


def _alternates(design: Design, transistors: list[Transistor]) -> dict[_Key, tuple[_Key, ...]]:
    """Transistors on the same nets whose footprints lie on each other: one of them is fitted."""
    groups: dict[object, list[Transistor]] = defaultdict(list)
    for transistor in transistors:
        groups[transistor.gate_net, transistor.drain_net, transistor.source_net].append(transistor)
    found: dict[_Key, tuple[_Key, ...]] = {}
    for group in groups.values():
        for one in group:
            others = (
                t.key for t in group if t.part != one.part and _overlap(design.parts[one.part], design.parts[t.part])
            )
            found[one.key] = tuple(others)
    return {key: others for key, others in found.items() if others}


def _overlap(one: Part, two: Part) -> bool:
    """Do the boxes around the pads of two parts on one side cover more than a third of the smaller one?

    Our choice: neighbours never do, and alternates are placed with their pads on each other.
    """
    a, b = _box(one), _box(two)
    if a is None or b is None or one.side != two.side:
        return False
    width = min(a[2], b[2]) - max(a[0], b[0])
    height = min(a[3], b[3]) - max(a[1], b[1])
    smaller = min((box[2] - box[0]) * (box[3] - box[1]) for box in (a, b))
    return width > 0 and height > 0 and width * height > smaller / 3


def _box(part: Part) -> tuple[float, float, float, float] | None:
    pads = [pad for pin in part.pins for pad in pin.pads]
    if not pads:
        return None
    half = [max(pad.width_m, pad.height_m) / 2 for pad in pads]
    return (
        min(pad.x_m - h for pad, h in zip(pads, half, strict=True)),
        min(pad.y_m - h for pad, h in zip(pads, half, strict=True)),
        max(pad.x_m + h for pad, h in zip(pads, half, strict=True)),
        max(pad.y_m + h for pad, h in zip(pads, half, strict=True)),
    )
