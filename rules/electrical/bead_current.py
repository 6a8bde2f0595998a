"""The bead stands the peak gate current.

Voltage over the known series resistance is the most the driver can push through the bead. Below the bead's
rated current it passes; above, the loop and the driver decide, and as long as they are not known the verdict
is open, unless even a damped loop with a weak driver draws more than the bead is rated for.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from gatecheck.rulekit import (
    Ask,
    Bound,
    Design,
    Gate,
    Level,
    Origin,
    Quantity,
    Rule,
    Say,
    Verdict,
    judged,
    least_trusted,
)

if TYPE_CHECKING:
    from collections.abc import Iterator

# Rated current over peak current, at least. Origin: our choice; a rating is for steady current, and short
# peaks above it saturate the bead rather than burn it, so there is no margin on top.
_MARGIN = 1.0


def _check(design: Design) -> Iterator[Say]:
    stated = design.settings.limits.bead_current_margin
    own = design.own_word(minimum=stated)
    for gate in design.gates:
        if not gate.beads:
            continue
        value = gate.quantity("bead_current_margin")
        if value is None:
            yield _unknown(gate)
        else:
            bounds = own or (Bound(Level.WARNING, Origin.CATALOGUE, "our choice", minimum=_MARGIN),)
            yield _say(gate, value, bounds, stated=design.settings.peak_current_a is not None)


def _say(gate: Gate, value: Quantity, bounds: tuple[Bound, ...], *, stated: bool) -> Say:
    verdict, bound = judged(value, bounds)
    # The least current assumes a damped loop and a driver of common practice, unless the project states it.
    floor = Origin.PROJECT if stated else Origin.ASSUMED
    weakest = floor if verdict is Verdict.FAIL and bound.origin is not Origin.PROJECT else value.origin
    message = {
        Verdict.PASS: "the bead is rated above the most the driver can push through it",
        Verdict.FAIL: "the bead is rated below the peak gate current",
    }.get(verdict, "voltage over resistance exceeds the bead's rating; loop and driver decide")
    return Say(
        gate,
        verdict,
        message,
        level=bound.level,
        rests_on=least_trusted(weakest, bound.origin),
        parts=gate.beads,
        quantity="bead_current_margin",
        value=value,
        limit=bound.limit("1"),
        ask=(Ask(gate.name, "peak_gate_current", "A"),) if verdict is Verdict.UNDECIDED else (),
        advice="fit a bead rated for the peak gate current" if verdict is Verdict.FAIL else "",
    )


def _unknown(gate: Gate) -> Say:
    rated = gate.quantities.bead_rating() is not None
    datum, unit = ("peak_gate_current", "A") if rated else ("rated_current", "A")
    subject = gate.name if rated else " ".join(map(gate.reference_of, gate.beads))
    return Say(
        gate,
        Verdict.UNDECIDED,
        "the peak gate current has no known bound" if rated else "the bead's rated current is not known",
        rests_on=Origin.VALUE,
        parts=gate.beads,
        quantity="bead_current_margin",
        ask=(Ask(subject, datum, unit),),
    )


RULE = Rule(
    id="bead-current",
    title="the bead stands the peak gate current",
    reason=(
        "A bead's core saturates with current: at its rated current little of its impedance is left, and a gate "
        "current beyond it finds a piece of wire where damping was meant to be."
    ),
    quantity="rated current of the bead over peak gate current",
    limits=(
        f"at least {_MARGIN:g}; our choice",
        "gatecheck.yaml: limits.bead_current_margin replaces it, and breaking it is an error",
    ),
    sources=("common practice",),
    check=_check,
)
