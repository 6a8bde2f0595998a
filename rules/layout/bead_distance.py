"""The bead stands at the gate: copper between its pad and the gate pad is short.

What lies between bead and gate is undamped: that piece of copper, the package's lead and the gate's
capacitance ring by themselves. The length is taken along tracks, vias and fills, from pad edge to pad edge;
parts between bead and gate count from pad to pad.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from gatecheck.rulekit import Design, Gate, Quantity, Rule, Say, Verdict, judged, least_trusted, remembered

if TYPE_CHECKING:
    from collections.abc import Iterator

    from gatecheck.rulekit import Bound

# Note and warning in mm by technology. Origin: common practice, from memory.
_LIMITS_MM = {"si": (5.0, 12.0), "igbt": (10.0, 20.0), "sic": (4.0, 8.0), "gan": (2.0, 4.0)}


def _check(design: Design) -> Iterator[Say]:
    stated = design.settings.limits.bead_distance_m
    own = design.own_word(maximum=stated * 1e3) if stated is not None else ()
    for gate in design.gates:
        value = gate.quantity("bead_distance")
        if value is not None:
            yield _say(gate, value, own or remembered(*_LIMITS_MM[gate.technology]))


def _say(gate: Gate, value: Quantity, bounds: tuple[Bound, ...]) -> Say:
    verdict, bound = judged(value, bounds)
    bead = gate.beads[-1]
    return Say(
        gate,
        verdict,
        "the bead is near its gate" if verdict is Verdict.PASS else "the bead is far from its gate, along the copper",
        level=bound.level,
        rests_on=least_trusted(value.origin, bound.origin),
        parts=(bead,),
        quantity="bead_distance",
        value=value,
        limit=bound.limit(value.unit),
        advice=_advice(gate, bead, value, bounds) if verdict is Verdict.FAIL else "",
    )


def _advice(gate: Gate, bead: str, value: Quantity, bounds: tuple[Bound, ...]) -> str:
    aim = bounds[-1].maximum or 0.0
    x_mm, y_mm = gate.place_mm
    return f"move {gate.reference_of(bead)} {value.low - aim:.1f} mm or more towards the gate pad at {x_mm:g}, {y_mm:g}"


RULE = Rule(
    id="bead-distance",
    title="the bead stands at its gate",
    reason=(
        "Only what lies before the bead is damped by it. The copper between bead and gate forms a resonant circuit "
        "of its own with the package's inductance and the gate's capacitance, and picks up the switch node's edges."
    ),
    quantity="copper from bead pad to gate pad, edge to edge (mm)",
    limits=(
        *(f"{name}: note above {note:g} mm, warning above {warn:g} mm" for name, (note, warn) in _LIMITS_MM.items()),
        "gatecheck.yaml: limits.bead_distance replaces them, and breaking it is an error",
    ),
    sources=("common practice",),
    check=_check,
)
