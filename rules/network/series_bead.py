"""A ferrite bead stands in series with the gate resistor where one is needed.

A bead is a small resistance at the frequency of an edge and a large one where the gate rings with the stray
inductance around it. Whether a gate needs one is a matter of its loop and its transistor, so a missing bead
alone is no fault: it is one where the like gates of the same design have it. A bead that only one edge's
current passes damps only that edge.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from gatecheck.rulekit import EDGES, Ask, Design, Gate, Level, Origin, Rule, Say, Verdict, by_network

if TYPE_CHECKING:
    from collections.abc import Iterator


def _check(design: Design) -> Iterator[Say]:
    with_bead = {gate.kin for gate in design.gates if _covered(gate) == list(EDGES)}
    for network in by_network(design.gates).values():
        for gate in network:
            covered = _covered(gate)
            if covered == list(EDGES):
                yield Say(
                    gate,
                    Verdict.PASS,
                    "a bead in its own branch, on both edges",
                    rests_on=Origin.VALUE,
                    parts=gate.beads,
                )
            elif covered:
                bare = next(edge for edge in EDGES if edge not in covered)
                yield _one_edge(gate, bare)
            elif gate.kin in with_bead:
                yield _odd_one(gate)
            elif gate is network[0]:
                yield _unknown(gate, len(network))


def _covered(gate: Gate) -> list[str]:
    """The edges whose whole current passes a bead that belongs to this gate alone."""
    own = set(gate.beads) & gate.own_branch
    return [edge for edge in EDGES if own & gate.edge(edge).covering]


def _one_edge(gate: Gate, bare: str) -> Say:
    return Say(
        gate,
        Verdict.FAIL,
        f"the bead is bypassed on the turn-{bare} edge",
        level=Level.WARNING,
        rests_on=Origin.VALUE,
        parts=gate.beads,
        edge=bare,
        advice="move the bead behind the joint of the two branches, next to the gate",
    )


def _odd_one(gate: Gate) -> Say:
    return Say(
        gate,
        Verdict.FAIL,
        "no bead in its own branch, while like gates of this design have one",
        level=Level.WARNING,
        rests_on=Origin.VALUE,
        parts=gate.gate_resistors,
        advice="fit the bead that the like gates have, between gate resistor and gate",
    )


def _unknown(gate: Gate, count: int) -> Say:
    others = f", {count} gates on one driver" if count > 1 else ""
    return Say(
        gate,
        Verdict.UNDECIDED,
        f"no bead in series; whether one is needed depends on the gate's capacitance and loop{others}",
        rests_on=Origin.VALUE,
        parts=gate.gate_resistors,
        ask=(Ask(gate.name, "input_capacitance", "nF"),),
    )


RULE = Rule(
    id="series-bead",
    title="a bead in series with the gate resistor where one is needed",
    reason=(
        "A gate and the inductance around it form a resonant circuit, and with the drain's another one of 50 to "
        "300 MHz. A resistor large enough to damp it there would slow every edge; a bead is resistive there and "
        "nearly absent at the edge's own frequencies. Paralleled gates also ring against each other, which only "
        "parts in each gate's own branch damp."
    ),
    quantity="parts that every conducting way of an edge passes",
    limits=("policy when-needed: a gate without a bead fails only where like gates have one; our choice",),
    sources=("common practice",),
    check=_check,
)
