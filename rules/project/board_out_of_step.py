"""The board has the parts and connections of its schematic.

A review of a board speaks of what will be built, one of a schematic of what is meant. Where the two differ, one
of them is wrong, and at a gate that is a floating gate or a missing bead.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from gatecheck.rulekit import Design, Level, Origin, Rule, Say, Verdict

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

_SHOWN = 6  # names spelled out in the message


def _check(design: Design) -> Iterator[Say]:
    step = design.out_of_step
    if step is None:
        return
    if not step:
        yield Say(None, Verdict.PASS, "the board has the parts and connections of its schematic")
        return
    pieces = [
        ("not on the board", step.not_on_board),
        ("not in the schematic", [design.part(part).reference or part for part in step.not_in_schematic]),
        ("on another net", [f"{design.part(pin.part).reference}.{pin.number}" for pin in step.moved]),
    ]
    said = "; ".join(f"{_some(names)} {what}" for what, names in pieces if names)
    moved = [pin.part for pin in step.moved]
    yield Say(
        None,
        Verdict.FAIL,
        f"the board is out of step with its schematic: {said}",
        level=Level.ERROR if design.at_a_gate(step) else Level.WARNING,
        rests_on=Origin.GEOMETRY,
        parts=tuple(dict.fromkeys((*moved, *step.not_in_schematic)))[:_SHOWN],
        advice="update the board from the schematic, or the schematic from the board",
    )


def _some(names: Sequence[str]) -> str:
    more = len(names) - _SHOWN
    return " ".join(names[:_SHOWN]) + (f" and {more} more" if more > 0 else "")


RULE = Rule(
    id="board-out-of-step",
    title="the board has the parts and connections of its schematic",
    reason=(
        "Distances and loops are measured on the board, values and intent come from the schematic. Where they differ, "
        "verdicts speak of a circuit that is not the one meant. At a gate that is an error, elsewhere a warning."
    ),
    quantity="parts and pins that differ",
    limits=("none",),
    sources=("common practice",),
    check=_check,
)
