"""A hierarchy of sheets to Design: symbols of one reference are one part, its pins on named nets."""

from __future__ import annotations

from collections import Counter, defaultdict
from typing import TYPE_CHECKING

from gatecheck.design.build import identities, natural
from gatecheck.design.model import Part, Pin, Place, joined
from gatecheck.design.net_names import NetPin, net_name, told_apart, unit_letter
from gatecheck.design.wiring import wire
from gatecheck.parse.project_file import ProjectFile, resolved

if TYPE_CHECKING:
    from collections.abc import Hashable, Mapping, Sequence

    from gatecheck.design.model import Design
    from gatecheck.design.wiring import Naming, PlacedSymbol, Wiring
    from gatecheck.parse.sheets import Hierarchy


def from_sheets(hierarchy: Hierarchy, project: ProjectFile | None = None) -> tuple[Design, Mapping[str, str]]:
    """The Design of a schematic alone, and the part that each symbol's identifier path belongs to."""
    project = project or ProjectFile()
    wiring = wire(hierarchy, project.bus_aliases)
    groups = _parts(wiring)
    nets = _nets(wiring, groups, hierarchy.root.version)
    names = identities(symbols[0].reference for symbols in groups)
    parts = {name: _part(name, symbols, wiring, nets, project) for name, symbols in zip(names, groups, strict=True)}
    paths = {_path(symbol): name for name, symbols in zip(names, groups, strict=True) for symbol in symbols}
    return joined(hierarchy.root.document.path, "schematic", parts), paths


def _path(symbol: PlacedSymbol) -> str:
    return f"{symbol.use.below_root}/{symbol.form.uuid}"


def _parts(wiring: Wiring) -> list[list[PlacedSymbol]]:
    """The units of each part. Symbols that are on no board, and power symbols, are none.

    The same unit of one reference drawn twice is two parts that were given the same name.
    """
    found: dict[object, list[PlacedSymbol]] = {}
    taken: Counter[tuple[str, int]] = Counter()
    for i, symbol in enumerate(wiring.symbols):
        if symbol.reference.startswith("#") or symbol.library.power or not symbol.form.on_board:
            continue
        named = bool(symbol.reference) and not symbol.reference.endswith("?")
        unit = symbol.reference, symbol.unit
        found.setdefault((symbol.reference, taken[unit]) if named else i, []).append(symbol)
        taken[unit] += 1
    return sorted(found.values(), key=lambda symbols: natural(symbols[0].reference))


def _nets(wiring: Wiring, groups: Sequence[Sequence[PlacedSymbol]], version: int) -> Mapping[Hashable, str]:
    """The name of every net that has a part's pin on it, by the joint that stands for it."""
    find = wiring.joints.find
    namings: dict[Hashable, list[Naming]] = defaultdict(list)
    for joint, naming in wiring.namings:
        namings[find(joint)].append(naming)
    pins: dict[Hashable, list[NetPin]] = defaultdict(list)
    for symbols in groups:
        for symbol in symbols:
            alike = Counter(pin.name for pin in symbol.pins)
            for pin in symbol.pins:
                pins[find(pin.joint)] += [NetPin(pin, number, alike[pin.name] == 1) for number in pin.pin.numbers]
    names = [net_name(namings.get(joint, ()), mine, version=version) for joint, mine in pins.items()]
    return dict(zip(pins, told_apart(names), strict=True))


def _part(
    name: str,
    symbols: Sequence[PlacedSymbol],
    wiring: Wiring,
    nets: Mapping[Hashable, str],
    project: ProjectFile,
) -> Part:
    first = min(symbols, key=lambda symbol: (symbol.unit, symbol.use.index, symbol.form.start))
    own = {key.upper(): value for key, value in first.fields.items()} | dict(first.fields)
    fields = {key: resolved(value, own, project.variables) for key, value in first.fields.items()}
    library = first.library.fields
    return Part(
        id=name,
        reference=first.reference,
        value=fields.get("Value", ""),
        footprint=fields.get("Footprint", ""),
        library=first.form.library_key,
        description=fields.get("Description", "")
        or library.get("Description", "")
        or library.get("ki_description", ""),
        keywords=library.get("ki_keywords", ""),
        fields=fields,
        fitted=all(symbol.form.fitted for symbol in symbols),
        symbol_path=_path(first),
        units=_units(symbols) if first.library.units > 1 else (),
        net_ties=(),
        pins=_pins(name, symbols, wiring, nets),
        place=Place(first.use.file.document.path, first.form.start),
    )


def _pins(name: str, symbols: Sequence[PlacedSymbol], wiring: Wiring, nets: Mapping[Hashable, str]) -> tuple[Pin, ...]:
    """Pins by number. A number drawn twice is on the net whose name comes first by letters."""
    found: dict[str, Pin] = {}
    for symbol in symbols:
        for placed in symbol.pins:
            net = nets[wiring.joints.find(placed.joint)]
            for number in filter(None, placed.pin.numbers):
                known = found.get(number)
                if known is None or net < known.net:
                    found[number] = Pin(name, number, placed.name, placed.electrical, net)
    return tuple(found[number] for number in sorted(found, key=natural))


def _units(symbols: Sequence[PlacedSymbol]) -> tuple[tuple[str, tuple[str, ...]], ...]:
    ordered = sorted(symbols, key=lambda symbol: symbol.unit)
    return tuple(
        (unit_letter(symbol.unit), tuple(number for pin in symbol.pins for number in pin.pin.numbers if number))
        for symbol in ordered
    )
