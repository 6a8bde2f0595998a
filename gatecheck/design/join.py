"""A board and its schematic as one Design, and where the two disagree.

The schematic says what a part is: value, fields, fitted or not, functions of its pins. The board says where it is
and, since it is what will be built, what it is connected to.
"""

from __future__ import annotations

from collections import Counter, defaultdict
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from gatecheck.design.build import natural
from gatecheck.design.model import joined

if TYPE_CHECKING:
    from collections.abc import Mapping

    from gatecheck.design.model import Design, Part

_UNCONNECTED = "unconnected-("


@dataclass(frozen=True, slots=True)
class MovedPin:
    """A pin that the board has on another net than the schematic; `part` is its id on the board."""

    part: str
    number: str
    board_net: str
    schematic_net: str


@dataclass(frozen=True, slots=True)
class OutOfStep:
    """What differs: parts by what they are called, those of the board by their id."""

    not_on_board: tuple[str, ...]
    not_in_schematic: tuple[str, ...]
    moved: tuple[MovedPin, ...]

    def __bool__(self) -> bool:
        return bool(self.not_on_board or self.not_in_schematic or self.moved)


def join_designs(board: Design, schematic: Design, paths: Mapping[str, str]) -> tuple[Design, OutOfStep]:
    """The board's design with the schematic's facts, and the differences.

    Args:
        board: the board alone.
        schematic: the schematic alone.
        paths: identifier paths of all symbols -> the schematic's part they belong to.
    """
    twins = _twins(board, schematic, paths)
    parts = {
        key: _with_facts(part, schematic.parts[twins[key]]) if key in twins else part
        for key, part in board.parts.items()
    }
    drawn = set(twins.values())
    missing = [part for key, part in schematic.parts.items() if key not in drawn and part.pins]
    extra = [key for key, part in board.parts.items() if key not in twins and part.symbol_path and part.nets()]
    step = OutOfStep(
        tuple(sorted((part.reference for part in missing), key=natural)),
        tuple(sorted(extra, key=natural)),
        _moved(board, schematic, twins),
    )
    return joined(board.source, board.kind, parts), step


def _twins(board: Design, schematic: Design, paths: Mapping[str, str]) -> dict[str, str]:
    """Board part -> schematic part: by symbol first, since references are renumbered, then by reference."""
    twins = {key: paths[part.symbol_path] for key, part in board.parts.items() if part.symbol_path in paths}
    taken = set(twins.values())
    free = {part.reference: key for key, part in schematic.parts.items() if key not in taken}
    for key, part in board.parts.items():
        if key not in twins and part.reference in free:
            twins[key] = free[part.reference]
    return twins


def _with_facts(part: Part, drawn: Part) -> Part:
    pins = {pin.number: pin for pin in drawn.pins}
    return replace(
        part,
        value=drawn.value or part.value,
        description=drawn.description or part.description,
        keywords=" ".join(filter(None, (drawn.keywords, part.keywords))),
        library=drawn.library or part.library,
        fields={**part.fields, **drawn.fields},
        fitted=drawn.fitted,
        units=drawn.units or part.units,
        pins=tuple(
            replace(
                pin,
                function=pins[pin.number].function or pin.function,
                electrical=pins[pin.number].electrical or pin.electrical,
            )
            if pin.number in pins
            else pin
            for pin in part.pins
        ),
    )


def _moved(board: Design, schematic: Design, twins: Mapping[str, str]) -> tuple[MovedPin, ...]:
    """Pins outside the pairs of nets that have most pins in common. Names are not compared: they go stale."""
    shared: list[MovedPin] = []
    for key, twin in twins.items():
        nets = {pin.number: pin.net for pin in schematic.parts[twin].pins}
        shared += [MovedPin(key, p.number, p.net, nets[p.number]) for p in board.parts[key].pins if p.number in nets]
    overlap = Counter((pin.board_net, pin.schematic_net) for pin in shared if pin.board_net)
    partner: dict[str, str] = {}
    taken: set[str] = set()
    for (net, drawn), _ in sorted(overlap.items(), key=lambda item: (-item[1], item[0][0] != item[0][1], item[0])):
        if net not in partner and drawn not in taken:
            partner[net] = drawn
            taken.add(drawn)
    company: dict[str, int] = defaultdict(int)
    for pin in shared:
        company[pin.schematic_net] += 1

    def agrees(pin: MovedPin) -> bool:
        if not pin.board_net or pin.board_net.startswith(_UNCONNECTED):
            return company[pin.schematic_net] == 1
        return partner.get(pin.board_net) == pin.schematic_net

    moved = [pin for pin in shared if not agrees(pin)]
    return tuple(sorted(moved, key=lambda pin: (natural(pin.part), natural(pin.number))))
