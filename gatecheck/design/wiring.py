"""What is connected in a hierarchy of sheets: pins to nets, by the rules by which sheets are drawn.

A joint is a point of one use of a sheet, or a name: local names count on one use, global ones everywhere. A
hierarchical label meets the pin of the sheet symbol that made its path, and nothing else above.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import IntEnum
from typing import TYPE_CHECKING

from gatecheck.design.sheet_nets import Groups, sheet_nets
from gatecheck.parse.buses import bus_members
from gatecheck.parse.fields import unescaped

if TYPE_CHECKING:
    from collections.abc import Hashable, Mapping, Sequence
    from typing import TypeAlias

    from gatecheck.design.sheet_nets import Bus, SheetNets
    from gatecheck.parse.schematic import Label, Point, SymbolForm
    from gatecheck.parse.sheets import Hierarchy, SheetUse
    from gatecheck.parse.symbols import LibraryPin, LibrarySymbol

    _Members: TypeAlias = list[tuple[str, Hashable]]  # the members of a bus name, each with its joint

# From this version on a power symbol's value names its net; before, its pin's name does.
_VALUE_NAMES_POWER = 20230221


class Strength(IntEnum):
    """What names a net, the strongest first."""

    GLOBAL = 0
    POWER = 1
    LOCAL_POWER = 2
    LOCAL = 3
    HIERARCHICAL = 4
    SHEET_PIN = 5


@dataclass(frozen=True, slots=True)
class Naming:
    """One thing that could name a net. `loud` sheet pins (outputs) go before others."""

    strength: Strength
    text: str
    use: SheetUse
    loud: bool = True


@dataclass(frozen=True, slots=True)
class PlacedPin:
    """A pin of a symbol on one use of its sheet; `joint` is what it is connected to."""

    symbol: PlacedSymbol
    pin: LibraryPin
    name: str
    electrical: str
    joint: Hashable


@dataclass(slots=True)
class PlacedSymbol:
    """A symbol on one use of its sheet, with what it is called there."""

    use: SheetUse
    form: SymbolForm
    library: LibrarySymbol
    reference: str
    unit: int
    fields: Mapping[str, str]
    pins: list[PlacedPin] = field(default_factory=list)


@dataclass(slots=True)
class Wiring:
    """All symbols with their pins, joined, and what names the joints."""

    joints: Groups = field(default_factory=Groups)
    symbols: list[PlacedSymbol] = field(default_factory=list)
    namings: list[tuple[Hashable, Naming]] = field(default_factory=list)

    def name(self, joint: Hashable, naming: Naming) -> None:
        """Note what could name a joint."""
        self.namings.append((joint, naming))


def wire(hierarchy: Hierarchy, bus_aliases: Mapping[str, Sequence[str]]) -> Wiring:
    """Join everything that the drawing joins. Aliases of buses stand in the project file or in any sheet."""
    wiring = Wiring()
    aliases = dict(bus_aliases) | {
        name: members for file in hierarchy.files.values() for name, members in file.bus_aliases.items()
    }
    nets = {path: sheet_nets(file, aliases) for path, file in hierarchy.files.items()}
    below = {(use.parent.index, use.symbol.start): use for use in hierarchy.uses if use.parent and use.symbol}
    for use in hierarchy.uses:
        here = nets[use.file.document.path]
        _labels(wiring, use, here)
        _sheet_pins(wiring, use, here, below)
        for bus in here.buses:
            _bus(wiring, use, bus, aliases, below)
        for form in use.file.symbols:
            _symbol(wiring, hierarchy, use, form, here)
    return wiring


def _point(use: SheetUse, here: SheetNets, at: Point) -> Hashable:
    return "point", use.index, here.points.find(at)


def _local(use: SheetUse, text: str) -> Hashable:
    return "local", use.index, text


def _labels(wiring: Wiring, use: SheetUse, here: SheetNets) -> None:
    for label in here.labels:
        text, joint = unescaped(label.text), _point(use, here, label.at)
        wiring.joints.join(joint, _local(use, text))
        if label.kind == "global":
            wiring.joints.join(joint, ("global", text))
            wiring.name(joint, Naming(Strength.GLOBAL, text, use))
        elif label.kind == "hierarchical":
            wiring.joints.join(joint, ("up", use.index, text))
            wiring.name(joint, Naming(Strength.HIERARCHICAL, text, use))
        else:
            wiring.name(joint, Naming(Strength.LOCAL, text, use))


def _sheet_pins(wiring: Wiring, use: SheetUse, here: SheetNets, below: Mapping[tuple[int, int], SheetUse]) -> None:
    for number, pin in here.sheet_pins:
        joint, text = _point(use, here, pin.at), unescaped(pin.text)
        child = below.get((use.index, use.file.sheets[number].start))
        if child is not None:
            wiring.joints.join(joint, ("up", child.index, text))
        wiring.name(joint, Naming(Strength.SHEET_PIN, text, use, pin.shape == "output"))


def _bus(
    wiring: Wiring,
    use: SheetUse,
    bus: Bus,
    aliases: Mapping[str, Sequence[str]],
    below: Mapping[tuple[int, int], SheetUse],
) -> None:
    """Join the members of all names of one bus, and of the hierarchical labels behind its sheet pins."""
    names = [_bus_label(wiring.joints, use, label, aliases) for label in bus.labels]
    for number, pin in bus.sheet_pins:
        # Without a label, the pin's own text says what the members are called on this sheet.
        own: _Members = [
            (member, ("pin", use.index, number, pin.text, member) if bus.labels else _local(use, member))
            for member in _members(pin, aliases)
        ]
        names.append(own)
        child = below.get((use.index, use.file.sheets[number].start))
        if child is not None:
            _bus_pin(wiring.joints, child, pin, own)
    for other in names[1:]:
        _match(wiring.joints, names[0], other)


def _bus_label(joints: Groups, use: SheetUse, label: Label, aliases: Mapping[str, Sequence[str]]) -> _Members:
    own: _Members = [(member, _local(use, member)) for member in _members(label, aliases)]
    text = unescaped(label.text)
    for i, (member, joint) in enumerate(own):
        if label.kind == "global":
            joints.join(joint, ("global", member))
        elif label.kind == "hierarchical":
            # Behind a sheet pin, vectors meet by place and groups by name; which one, the pin will say.
            joints.join(joint, ("up", use.index, text, i))
            joints.join(joint, ("up member", use.index, text, _last(member)))
    return own


def _bus_pin(joints: Groups, child: SheetUse, pin: Label, own: _Members) -> None:
    text, vector = unescaped(pin.text), pin.text.rstrip("+-PN}").endswith("]")
    for i, (member, joint) in enumerate(own):
        joints.join(joint, ("up", child.index, text, i) if vector else ("up member", child.index, text, _last(member)))


def _match(joints: Groups, one: _Members, other: _Members) -> None:
    """Two names of one bus: members of the same last name are one, else those at the same place."""
    by_name = {_last(member): joint for member, joint in one}
    same = [(by_name[_last(member)], joint) for member, joint in other if _last(member) in by_name]
    pairs = same or [(first, second) for (_, first), (_, second) in zip(one, other, strict=False)]
    for first, second in pairs:
        joints.join(first, second)


def _members(label: Label, aliases: Mapping[str, Sequence[str]]) -> list[str]:
    return bus_members(unescaped(label.text), aliases) or []


def _last(member: str) -> str:
    return member.rpartition(".")[2]


def _symbol(wiring: Wiring, hierarchy: Hierarchy, use: SheetUse, form: SymbolForm, here: SheetNets) -> None:
    library = use.file.library.get(form.library_key)
    if library is None:
        return
    reference, unit, fields = called(hierarchy, use, form)
    placed = PlacedSymbol(use, form, library, reference, unit, fields)
    wiring.symbols.append(placed)
    for pin in library.active(unit, form.style):
        name, electrical = pin.name, pin.electrical
        for number in pin.numbers:
            if number in form.alternates:
                name = unescaped(form.alternates[number])
                electrical = pin.alternates.get(form.alternates[number], electrical)
        joint = _point(use, here, _at(form, pin))
        if electrical == "no_connect":
            joint = ("alone", use.index, form.start, pin.numbers)
        placed.pins.append(PlacedPin(placed, pin, name, electrical, joint))
        _power(wiring, placed, placed.pins[-1])
    _jumpers(wiring.joints, placed)


def _power(wiring: Wiring, symbol: PlacedSymbol, pin: PlacedPin) -> None:
    """The name that a power symbol, or a hidden supply pin, gives to what it touches."""
    if pin.electrical != "power_in":
        return
    use = symbol.use
    if symbol.library.power:
        text = unescaped(symbol.fields.get("Value", "")) if use.file.version >= _VALUE_NAMES_POWER else pin.name
        wiring.joints.join(pin.joint, _local(use, text))
        if symbol.library.power == "local":
            wiring.name(pin.joint, Naming(Strength.LOCAL_POWER, text, use))
            return
    elif pin.pin.hidden and pin.name:
        text = pin.name
    else:
        return
    wiring.joints.join(pin.joint, ("global", text))
    wiring.name(pin.joint, Naming(Strength.POWER, text, use))


def _jumpers(joints: Groups, symbol: PlacedSymbol) -> None:
    """Pins that a part joins inside, by its symbol's word."""
    of_number: dict[str, Hashable] = {}
    for pin in symbol.pins:
        for number in pin.pin.numbers:
            if symbol.library.same_numbers_joined and number in of_number:
                joints.join(of_number[number], pin.joint)
            of_number.setdefault(number, pin.joint)
    for group in symbol.library.jumpers:
        known = [of_number[number] for number in group if number in of_number]
        for joint in known[1:]:
            joints.join(known[0], joint)


def _at(form: SymbolForm, pin: LibraryPin) -> Point:
    """Turned counter-clockwise in the symbol's axes (y up), put on the sheet (y down), then mirrored there."""
    x, y = pin.x, pin.y
    for _ in range(form.angle // 90 % 4):
        x, y = -y, x
    y = -y
    if form.mirror == "x":
        y = -y
    elif form.mirror == "y":
        x = -x
    return form.at[0] + x, form.at[1] + y


def called(hierarchy: Hierarchy, use: SheetUse, form: SymbolForm) -> tuple[str, int, Mapping[str, str]]:
    """Reference, unit and fields of a symbol on one path."""
    for instance in form.instances:
        if instance.path == use.path:
            return instance.reference, instance.unit, form.fields
    below = use.path.split("/")[2:]
    for instance in form.instances:
        # Copied from another project, or the root was saved anew: the rest of the path still tells.
        if instance.path.split("/")[2:] == below:
            return instance.reference, instance.unit, form.fields
    listed = hierarchy.root.named_instances.get(f"{use.below_root}/{form.uuid}")
    if listed is not None:
        fields = dict(form.fields)
        for key, name in (("value", "Value"), ("footprint", "Footprint")):
            if listed.get(key):
                fields[name] = listed[key]
        unit = listed.get("unit", "1")
        return listed.get("reference", ""), int(unit) if unit.isdecimal() else 1, fields
    return form.fields.get("Reference", ""), form.unit, form.fields
