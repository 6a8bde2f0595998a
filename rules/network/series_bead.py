"""A ferrite bead stands in series with the gate resistor where one is needed.

A bead is a small resistance at the frequency of an edge and a large one where the gate rings with the stray
inductance around it. Whether a gate needs one is a matter of its loop and its transistor, so a missing bead
alone is no fault: it is one where the like gates of the same design have it. A bead that only one edge's
current passes damps only that edge.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from gatecheck.rulekit import EDGES, Ask, Design, Gate, Level, Origin, Rule, Say, Verdict

if TYPE_CHECKING:
    from collections.abc import Iterator

    from gatecheck.rulekit import EdgePaths

_FITTED = "a bead in its own branch, on both edges"
_NONE = "no bead in series; whether one is needed depends on the gate's capacitance and loop"
_SHARED = "its bead is shared with other gates or bypassed; whether it needs its own depends on capacitance and loop"


def _check(design: Design) -> Iterator[Say]:
    policy = design.settings.bead_policy
    with_bead = {gate.kin for gate in design.gates if _covered(gate) == list(EDGES)}
    for gate in design.gates:
        covered = _covered(gate)
        if policy == "never":
            yield _banned(gate) if gate.beads else Say(gate, Verdict.PASS, "no bead, as the project asks")
        elif covered == list(EDGES):
            yield Say(gate, Verdict.PASS, _FITTED, rests_on=Origin.VALUE, parts=gate.beads)
        elif any(gate.edge(edge).truncated for edge in EDGES):
            yield _open(gate, "more ways lead to this gate than can be followed")
        elif covered:
            yield _one_edge(gate, next(edge for edge in EDGES if edge not in covered), asked=policy == "always")
        elif policy == "always":
            yield _lacking(gate, "no bead in its own branch, which the project asks of every gate", Origin.PROJECT)
        elif gate.kin in with_bead:
            yield _lacking(gate, "no bead in its own branch, while like gates here have one", Origin.VALUE)
        else:
            yield _open(gate, _SHARED if gate.beads else _NONE)


def _covered(gate: Gate) -> list[str]:
    """The edges on which every conducting way passes a bead that belongs to this gate alone."""
    own = set(gate.beads) & gate.own_branch
    return [edge for edge in EDGES if own and _passes(gate.edge(edge), own)]


def _passes(paths: EdgePaths, beads: set[str]) -> bool:
    return paths.conducts and not paths.truncated and all(beads & set(way) for way in paths.ways)


def _one_edge(gate: Gate, bare: str, *, asked: bool) -> Say:
    return Say(
        gate,
        Verdict.FAIL,
        f"the bead is bypassed on the turn-{bare} edge",
        level=Level.ERROR if asked else Level.WARNING,
        rests_on=Origin.PROJECT if asked else Origin.VALUE,
        parts=gate.beads,
        edge=bare,
        advice="move the bead behind the joint of the two branches, next to the gate",
    )


def _lacking(gate: Gate, message: str, origin: Origin) -> Say:
    return Say(
        gate,
        Verdict.FAIL,
        message,
        level=Level.ERROR if origin is Origin.PROJECT else Level.WARNING,
        rests_on=origin,
        parts=gate.gate_resistors,
        advice="fit a bead between gate resistor and gate, as at the like gates"
        if origin is Origin.VALUE
        else "fit a bead between gate resistor and gate",
    )


def _banned(gate: Gate) -> Say:
    return Say(
        gate,
        Verdict.FAIL,
        "a bead in series, which the project does not want",
        level=Level.ERROR,
        rests_on=Origin.PROJECT,
        parts=gate.beads,
        advice="replace the bead by a link of 0 ohm",
    )


def _open(gate: Gate, message: str) -> Say:
    return Say(
        gate,
        Verdict.UNDECIDED,
        message,
        rests_on=Origin.VALUE,
        parts=(*gate.gate_resistors, *gate.beads),
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
    limits=(
        "bead_policy when-needed: a gate without a bead fails only where like gates have one; our choice",
        "gatecheck.yaml: bead_policy always or never; breaking it is an error",
    ),
    sources=("common practice",),
    check=_check,
)
