"""Gate, source, drain and Kelvin source of every transistor with a gate, one entry per die.

Told by pin functions where the file has them; else by pads called G, S and D, by a symbol name that spells
the order (`..._GDS`), or by what the package usually is.
"""

from __future__ import annotations

import re
from collections import defaultdict
from dataclasses import dataclass
from typing import TYPE_CHECKING

from gatecheck.catalogue.load import Package, package_of, pin_is, plain_pin_name
from gatecheck.design.build import natural
from gatecheck.networks.kinds import Sort, bipolar, gated, terminal_name

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from gatecheck.design.model import Design, Part, Pin
    from gatecheck.networks.kinds import Kinded

_GATE, _SOURCE, _DRAIN, _KELVIN = "G", "S", "D", "K"
_GROUPS = (
    ("gate", _GATE),
    ("kelvin", _KELVIN),
    ("source", _SOURCE),
    ("emitter", _SOURCE),
    ("drain", _DRAIN),
    ("collector", _DRAIN),
)
# The last word of a generic symbol's name spells the order of pads 1, 2, 3: Q_NMOS_GDS, Q_NIGBT_GCE.
_SPELLED = re.compile(r"(?:MOS\w{0,8}|FET|IGBT|JFET)[_ -]([GDSCE]{3})\b", re.IGNORECASE)


@dataclass(frozen=True, slots=True)
class Transistor:
    """One die with a gate: its pins by terminal."""

    part: str
    unit: str | None
    gate: tuple[Pin, ...]
    source: tuple[Pin, ...]
    drain: tuple[Pin, ...]
    kelvin: tuple[Pin, ...]
    package: Package | None

    @property
    def key(self) -> tuple[str, str | None]:
        """Part and unit: what tells two dies apart."""
        return self.part, self.unit

    @property
    def gate_net(self) -> str:
        """The net of the gate; empty if it is on none."""
        return _net(self.gate)

    @property
    def source_net(self) -> str:
        """The net of the power source or emitter."""
        return _net(self.source)

    @property
    def drain_net(self) -> str:
        """The net of the drain or collector."""
        return _net(self.drain)

    @property
    def kelvin_net(self) -> str:
        """The net of the Kelvin source; empty if the package has none."""
        return _net(self.kelvin)


def _net(pins: tuple[Pin, ...]) -> str:
    return next((pin.net for pin in pins if pin.net), "")


def find_transistors(design: Design, kinds: Mapping[str, Kinded]) -> list[Transistor]:
    """All fitted transistors with a gate, in natural order of their references."""
    found: list[Transistor] = []
    for key in sorted(design.parts, key=natural):
        part = design.parts[key]
        if kinds[key].sort is Sort.TRANSISTOR and kinds[key].fitted and not bipolar(part):
            found += _transistors_of(part)
    return found


def _transistors_of(part: Part) -> list[Transistor]:
    package = package_of(part.footprint, len({pin.number for pin in part.pins}))
    if gated(part.pins):
        named = [(pin, _terminal(terminal_name(pin))) for pin in part.pins]
        return [_die(part, unit, pins, package) for unit, pins in _dies(part, named)]
    spelled = _SPELLED.search(part.value[:80]) or _SPELLED.search(part.library[:80])
    if spelled is not None:
        letters = spelled.group(1).upper().replace("C", _DRAIN).replace("E", _SOURCE)
        table = dict(zip("123", letters, strict=True))
    elif package is not None and package.pads and not any(pin.function for pin in part.pins):
        table = dict(package.pads)
    else:
        return []
    pins = [(pin, table.get(pin.number, "")) for pin in part.pins]
    die = _die(part, None, pins, package)
    return [die] if die.gate_net and die.source_net and die.drain_net else []


def _terminal(name: str) -> str:
    """The terminal a pin name stands for, empty if none."""
    for group, terminal in _GROUPS:
        if any(pin_is(group, piece) for piece in name.split("/")):
            return terminal
    return ""


def _dies(part: Part, named: list[tuple[Pin, str]]) -> list[tuple[str | None, list[tuple[Pin, str]]]]:
    """The pins of each die of a package.

    By the file's own units where it has them, else by the numbers in pin names (G1, S1), else by order.
    """
    gates = [pin for pin, terminal in named if terminal == _GATE and pin.net and not pin.net.startswith("unconnected-")]
    if len({pin.net for pin in gates}) < 2 or len({pin.number for pin in gates}) < 2:  # noqa: PLR2004 (two gates)
        return [(None, named)]
    members = {name: frozenset(pins) for name, pins in part.units}
    units = [(name, [entry for entry in named if entry[0].number in pins]) for name, pins in members.items()]
    units = [(name, pins) for name, pins in units if any(terminal == _GATE for _, terminal in pins)]
    if len(units) == len(gates):
        return list(units)
    numbered = _by_number(named)
    return numbered if len(numbered) == len(gates) else _by_order(named)


def _by_number(named: list[tuple[Pin, str]]) -> list[tuple[str | None, list[tuple[Pin, str]]]]:
    """Dies by the digit in the pin name. `S1/D2` belongs to both, as the terminal it names for each."""
    dies: dict[str, list[tuple[Pin, str]]] = defaultdict(list)
    for pin, _ in named:
        for piece in terminal_name(pin).split("/"):
            match = re.fullmatch(r"\D*(\d)\D*", plain_pin_name(piece))
            if match:
                dies[match.group(1)].append((pin, _terminal(piece)))
    dies = {key: pins for key, pins in dies.items() if any(terminal == _GATE for _, terminal in pins)}
    return [(_unit_name(i), dies[key]) for i, key in enumerate(sorted(dies))]


def _unit_name(i: int) -> str:
    """A, B, ... Z, then numbers."""
    return chr(ord("A") + i) if i < 26 else str(i + 1)  # noqa: PLR2004 (letters)


def _by_order(named: list[tuple[Pin, str]]) -> list[tuple[str | None, list[tuple[Pin, str]]]]:
    """Unnumbered names (S, G, S, G, D, D, D, D): sources and gates pair in pad order.

    Drains of the usual eight-pad package run the other way round: the first die has the last pads (common
    practice for dual MOSFETs in SO-8 and alike).
    """
    ordered = sorted(named, key=lambda entry: natural(entry[0].number))
    groups = {terminal: [pin for pin, what in ordered if what == terminal] for terminal in (_GATE, _SOURCE, _DRAIN)}
    count = len(groups[_GATE])
    dies: list[tuple[str | None, list[tuple[Pin, str]]]] = []
    for i in range(count):
        mine = [(groups[_GATE][i], _GATE)]
        mine += [(pin, _SOURCE) for pin in _share(groups[_SOURCE], i, count)]
        mine += [(pin, _DRAIN) for pin in _share(groups[_DRAIN][::-1], i, count)]
        dies.append((_unit_name(i), mine))
    return dies


def _share(pins: list[Pin], i: int, count: int) -> list[Pin]:
    """The i-th of `count` equal shares; all of them if they are too few to share."""
    size = len(pins) // count
    return pins[i * size : (i + 1) * size] if size else pins


def _die(part: Part, unit: str | None, pins: Iterable[tuple[Pin, str]], package: Package | None) -> Transistor:
    by_terminal: dict[str, list[Pin]] = defaultdict(list)
    for pin, terminal in pins:
        by_terminal[terminal].append(pin)
    sources = by_terminal[_SOURCE]
    kelvin = by_terminal[_KELVIN]
    if not sources:
        # `SS` or `E2` alone is the only source there is, no Kelvin contact.
        sources, kelvin = kelvin, []
    return Transistor(
        part=part.id,
        unit=unit,
        gate=tuple(by_terminal[_GATE]),
        source=tuple(sources),
        drain=tuple(by_terminal[_DRAIN]),
        kelvin=tuple(kelvin),
        package=package,
    )
