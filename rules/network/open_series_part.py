"""No part that is marked as not fitted interrupts the only way between driver and gate.

A gate resistor or bead that the bill of materials leaves out is an open circuit: the gate floats, and a
floating gate turns its switch on by itself.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from gatecheck.rulekit import EDGES, Design, Gate, Level, Origin, Rule, Say, Verdict

if TYPE_CHECKING:
    from collections.abc import Iterator


def _check(design: Design) -> Iterator[Say]:
    for gate in design.gates:
        blocked = [edge for edge in EDGES if not gate.edge(edge).conducts]
        if gate.open_parts:
            yield _open(gate, blocked)
        elif not blocked and gate.network.drives:
            yield Say(gate, Verdict.PASS, "both edges have a way of fitted parts")


def _open(gate: Gate, blocked: list[str]) -> Say:
    edge = blocked[0] if len(blocked) == 1 else None
    what = f"the {edge} edge" if edge else "the gate"
    return Say(
        gate,
        Verdict.FAIL,
        f"a series part is marked as not fitted, so nothing drives {what}",
        level=Level.ERROR,
        rests_on=Origin.GEOMETRY,
        parts=gate.open_parts,
        edge=edge,
        advice="fit the part, or replace it by a link of 0 ohm",
    )


RULE = Rule(
    id="open-series-part",
    title="no unfitted part interrupts the way between driver and gate",
    reason=(
        "A series part that is not fitted is an open circuit. The gate is then held by nothing but its pull-down, "
        "if it has one, and the switch neither turns on nor stays reliably off."
    ),
    quantity="conducting ways of each edge",
    limits=("at least one way of fitted parts for each edge",),
    sources=("common practice",),
    check=_check,
)
