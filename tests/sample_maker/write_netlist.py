"""A circuit as a netlist file, version E."""

from __future__ import annotations

from typing import TYPE_CHECKING

from .circuit import human_path
from .sexpr_text import Node, atom_text, head_text, inline_text
from .symbols import LIBRARY
from .write_board import COMPANY, DATE, GENERATOR
from .write_footprint import pin_type

if TYPE_CHECKING:
    from collections.abc import Iterator

    from .circuit import Circuit, Part, Sheet
    from .symbols import Pin

# Lists that netlist files keep on one line.
_ONE_LINE = frozenset({"node", "field", "pin", "property", "libsource", "sheetpath", "comment"})
# Lists whose first entries stand on the opening line, with how many of them.
_ON_OPENING_LINE = {"export": 1, "comp": 1, "libpart": 2, "net": 3, "sheet": 3, "library": 1}


def netlist(circuit: Circuit) -> str:
    """The text of the netlist file."""
    parts = sorted(circuit.parts, key=_reference_order)
    return (
        "\n".join(
            _lines(
                (
                    "export",
                    ("version", "E"),
                    _design(circuit),
                    ("components", *(_component(circuit, part) for part in parts)),
                    ("libparts", *_library_parts(circuit)),
                    ("libraries", ("library", ("logical", LIBRARY), ("uri", f"{LIBRARY}.kicad_sym"))),
                    ("nets", *_nets(circuit, parts)),
                ),
                "",
            )
        )
        + "\n"
    )


def _reference_order(part: Part) -> tuple[str, int]:
    prefix = part.ref.rstrip("0123456789")
    return prefix, int(part.ref.removeprefix(prefix))


def _lines(node: Node, indent: str) -> list[str]:
    """Two spaces per level; closing brackets follow the last entry."""
    head, *rest = node
    if head in _ONE_LINE or not any(isinstance(item, tuple) for item in rest):
        return [indent + inline_text(node)]
    opening = f"{indent}({head_text(head)}"
    kept = _ON_OPENING_LINE.get(head_text(head), 0)
    while rest and (kept or not isinstance(rest[0], tuple)):
        item = rest.pop(0)
        kept -= isinstance(item, tuple)
        opening += f" {inline_text(item) if isinstance(item, tuple) else atom_text(item)}"
    lines = [opening]
    for item in rest:
        lines += _lines(item, indent + "  ") if isinstance(item, tuple) else [atom_text(item)]
    lines[-1] += ")"
    return lines


def _design(circuit: Circuit) -> Node:
    shown = (_sheet(circuit, number, sheet) for number, sheet in enumerate([None, *circuit.sheets], start=1))
    return ("design", ("source", circuit.root_file), ("date", DATE), ("tool", GENERATOR), *shown)


def _sheet(circuit: Circuit, number: int, sheet: Sheet | None) -> Node:
    """One sheet with its title block; None is the root."""
    return (
        "sheet",
        ("number", str(number)),
        ("name", human_path(sheet)),
        ("tstamps", circuit.sheet_path(sheet)),
        (
            "title_block",
            ("title", circuit.title),
            ("company", COMPANY),
            ("rev", "A"),
            ("date", DATE),
            ("source", sheet.file if sheet else circuit.root_file),
            ("comment", ("number", "1"), ("value", "Sample for software tests, not for manufacture")),
        ),
    )


def _component(circuit: Circuit, part: Part) -> Node:
    description = part.description or part.symbol.description
    package = f"{LIBRARY}:{part.package}"
    fields = [("Footprint", package), ("Datasheet", ""), ("Description", description), *part.fields]
    flags: list[Node] = [("property", ("name", "dnp"))] if not part.fitted else []
    return (
        "comp",
        ("ref", part.ref),
        ("value", part.value),
        ("footprint", package),
        ("description", description),
        ("fields", *(_field(name, text) for name, text in fields)),
        ("libsource", ("lib", LIBRARY), ("part", part.symbol.name), ("description", part.symbol.description)),
        *(("property", ("name", name), ("value", text)) for name, text in part.fields),
        ("property", ("name", "Sheetname"), ("value", part.sheet.name if part.sheet else "Root")),
        ("property", ("name", "Sheetfile"), ("value", part.sheet.file if part.sheet else circuit.root_file)),
        *flags,
        ("sheetpath", ("names", human_path(part.sheet)), ("tstamps", circuit.sheet_path(part.sheet))),
        ("tstamps", circuit.symbol_identifier(part)),
    )


def _field(name: str, text: str) -> Node:
    return ("field", ("name", name), text) if text else ("field", ("name", name))


def _library_parts(circuit: Circuit) -> Iterator[Node]:
    users: dict[str, Part] = {part.symbol.name: part for part in circuit.parts}
    for name in sorted(users):
        symbol = users[name].symbol
        prefix = users[name].ref.rstrip("0123456789")
        pins: list[Node] = [("pin", ("num", pin.number), ("name", pin.name), ("type", pin.kind)) for pin in symbol.pins]
        pin_lists: list[Node] = [("pins", *pins)] if pins else []
        yield (
            "libpart",
            ("lib", LIBRARY),
            ("part", name),
            ("description", symbol.description),
            ("fields", _field("Reference", prefix), _field("Value", name)),
            *pin_lists,
        )


def _nets(circuit: Circuit, parts: list[Part]) -> Iterator[Node]:
    members: dict[str, list[tuple[Part, Pin]]] = {}
    for part in parts:
        for pin in part.symbol.pins:
            members.setdefault(circuit.net_of(part, pin), []).append((part, pin))
    for code, name in enumerate(circuit.nets, start=1):
        nodes = (_node(circuit, part, pin) for part, pin in members[name])
        yield ("net", ("code", str(code)), ("name", name), ("class", "Default"), *nodes)


def _node(circuit: Circuit, part: Part, pin: Pin) -> Node:
    function = [("pinfunction", pin.name)] if pin.name else []
    kind = ("pintype", pin_type(circuit, part, pin.number))
    return ("node", ("ref", part.ref), ("pin", pin.number), *function, kind)
