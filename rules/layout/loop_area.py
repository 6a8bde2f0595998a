"""The gate current comes back close to where it went: the loop from driver to gate and back is small.

A loop's inductance grows with its area, and every nanohenry lifts the resistance that damping needs. Over
return copper on the next layer the loop is a strip, length times dielectric; elsewhere it is the polygon
between the way there and the way back.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from gatecheck.rulekit import EDGES, Ask, Design, Gate, Quantity, Rule, Say, Verdict, judged, least_trusted, remembered

if TYPE_CHECKING:
    from collections.abc import Iterator

    from gatecheck.rulekit import Bound

# Note and warning in mm2 by technology. Origin: common practice, from memory.
_LIMITS_MM2 = {"si": (40.0, 100.0), "igbt": (100.0, 300.0), "sic": (20.0, 50.0), "gan": (6.0, 15.0)}


def _check(design: Design) -> Iterator[Say]:
    stated = design.settings.limits.loop_area_m2
    own = design.own_word(maximum=stated * 1e6) if stated is not None else ()
    for gate in design.gates:
        said = [
            _say(gate, edge, value, own or remembered(*_LIMITS_MM2[gate.technology]))
            for edge in EDGES
            if (value := gate.quantity(f"loop_area_{edge}")) is not None
        ]
        # Both edges of most gates run over the same parts: said once, for the larger one.
        alike = len(said) == len(EDGES) and said[0].verdict is said[1].verdict and said[0].level is said[1].level
        yield from [max(said, key=lambda say: say.value.high if say.value else 0.0)] if alike else said


def _say(gate: Gate, edge: str, value: Quantity, bounds: tuple[Bound, ...]) -> Say:
    verdict, bound = judged(value, bounds)
    message = {
        Verdict.PASS: "the gate loop is small",
        Verdict.FAIL: "the gate loop is wide: the return runs far from the gate trace",
    }.get(verdict, "the gate loop may be wide: it depends on where the return current flows")
    return Say(
        gate,
        verdict,
        message,
        level=bound.level,
        rests_on=least_trusted(value.origin, bound.origin),
        parts=gate.edge(edge).parts[-1:],
        edge=edge,
        quantity=f"loop_area_{edge}",
        value=value,
        limit=bound.limit(value.unit),
        ask=(Ask(gate.name, "return_copper_under_the_gate_trace", ""),) if verdict is Verdict.UNDECIDED else (),
        advice="put copper of the source's net under the gate trace, or run the return beside it"
        if verdict is Verdict.FAIL
        else "",
    )


RULE = Rule(
    id="loop-area",
    title="the gate loop encloses little area",
    reason=(
        "The loop from the driver's pin over the gate and back to the driver's reference is an inductance and an "
        "antenna. A wide one rings lower and harder, needs a larger resistor to be damped, and takes up the field "
        "of the power loop beside it."
    ),
    quantity="area between the way to the gate and the way back (mm2), per edge",
    limits=(
        *(f"{name}: note above {note:g} mm2, warning above {warn:g} mm2" for name, (note, warn) in _LIMITS_MM2.items()),
        "gatecheck.yaml: limits.loop_area replaces them, and breaking it is an error",
    ),
    sources=("common practice",),
    check=_check,
)
