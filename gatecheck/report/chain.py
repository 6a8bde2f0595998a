"""A gate network as one line an engineer reads from driver to gate, and which networks are alike."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from gatecheck.networks.kinds import Sort
from gatecheck.networks.surroundings import name_of
from gatecheck.report.wording import safe

if TYPE_CHECKING:
    from collections.abc import Iterable

    from gatecheck.networks.find import Networks
    from gatecheck.networks.model import EdgePaths, GateNetwork

# Our choice: as many names as a reader takes in at once.
_LISTED = 8
_DIODES = (Sort.DIODE, Sort.ZENER)
# What tells the channels of a driver or connector apart, at the end of a pin's name.
_CHANNEL = re.compile(r"(?<=[A-Z_])(?:_?[ABCUVW]|_?\d+)$")


def alike(networks: Networks) -> list[list[GateNetwork]]:
    """Gates whose networks have the same shape and values, in the order of their first member."""
    groups: dict[object, list[GateNetwork]] = {}
    for gate in networks.gates:
        groups.setdefault(_shape(networks, gate), []).append(gate)
    return list(groups.values())


def _shape(networks: Networks, gate: GateNetwork) -> object:
    transistor = networks.design.parts[gate.transistor.part]

    def said(parts: Iterable[str]) -> tuple[object, ...]:
        return tuple((networks.circuit.kinds[p].sort, networks.design.parts[p].value) for p in parts)

    drives = tuple(
        (
            networks.design.parts[d.part].value,
            len(d.pins),
            d.edge,
            _CHANNEL.sub("", d.pins[0].function.upper()),
        )
        for d in gate.drives
    )
    shunts = tuple(map(said, (gate.pulldowns, gate.gate_capacitors, gate.clamps)))
    parallel = (
        len(gate.parallel_with),
        len(gate.alternates),
        tuple(part in gate.own_branch for part in gate.on.parts),
    )
    return transistor.value, drives, said(gate.on.parts), said(gate.off.parts), shunts, parallel


def chain(networks: Networks, gate: GateNetwork) -> list[str]:
    """The network drawn: one line, or one per edge where they differ."""
    drive_on, drive_off = _drivers(networks, gate, "on"), _drivers(networks, gate, "off")
    ways = [(drive_on, _way(networks, gate.on, "-->")), (drive_off, _way(networks, gate.off, "<--"))]
    if drive_on == drive_off and gate.on.parts == gate.off.parts:
        return [f"{drive_on} {_way(networks, gate.on, '--')} gate"] if gate.drives else ["no driver found -- gate"]
    return [f"{edge:>3}: {drive} {way} gate" for edge, (drive, way) in zip(("on", "off"), ways, strict=True)]


def shunts(networks: Networks, gate: GateNetwork) -> str:
    """What hangs from the gate to its source."""
    said = [
        *(f"{_part(networks, part)} to source" for part in (*gate.pulldowns, *gate.gate_capacitors)),
        *(f"clamp {_part(networks, part)}" for part in gate.clamps),
    ]
    return ", ".join(said)


def _drivers(networks: Networks, gate: GateNetwork, edge: str) -> str:
    mine = [drive for drive in gate.drives if drive.edge in (edge, "both")]
    names = []
    for drive in mine:
        pins = "/".join(safe(pin.function or pin.number) for pin in drive.pins)
        names.append(f"{safe(networks.design.parts[drive.part].reference)}.{pins}")
    return " + ".join(names) or "nothing"


def _way(networks: Networks, paths: EdgePaths, arrow: str) -> str:
    """Parts from driver to gate; branches in parallel stand in brackets, `+` joins what is in series there."""
    common = [part for part in paths.parts if part in paths.covering]
    gaps: list[dict[tuple[str, ...], None]] = [{} for _ in range(len(common) + 1)]
    for way in paths.ways:
        pieces: list[list[str]] = [[]]
        for part in way:
            if part in paths.covering:
                pieces.append([])
            else:
                pieces[-1].append(part)
        for gap, piece in zip(gaps, pieces, strict=True):
            gap[tuple(piece)] = None
    shown = [_bracket(networks, gaps[0])]
    for part, gap in zip(common, gaps[1:], strict=True):
        shown += [_part(networks, part), _bracket(networks, gap)]
    end = "" if paths.conducts else " (open)"
    return f" {arrow} ".join(["", *filter(None, shown), ""]).strip() + end


def _bracket(networks: Networks, branches: Iterable[tuple[str, ...]]) -> str:
    said = [" + ".join(_part(networks, part) for part in branch) or "link" for branch in branches]
    if len(said) > 1:
        return f"[{' | '.join(said)}]"
    return said[0] if said and said[0] != "link" else ""


def _part(networks: Networks, key: str) -> str:
    part = networks.design.parts[key]
    sort = networks.circuit.kinds[key].sort
    value = "" if sort in _DIODES else safe(part.value)
    unfitted = "" if networks.circuit.kinds[key].fitted else " (not fitted)"
    return f"{safe(part.reference)} {value}".strip() + unfitted


def names(gates: Iterable[GateNetwork]) -> str:
    """References of some gates, in natural order of the design; of many, the first and how many more."""
    return listed([safe(name_of(gate.transistor.key)) for gate in gates])


def listed(found: list[str]) -> str:
    """Names in a row; of many, the first and how many more."""
    return (
        " ".join(found)
        if len(found) <= _LISTED
        else f"{' '.join(found[: _LISTED - 2])} and {len(found) - _LISTED + 2} more"
    )
