"""A circuit's drawings as schematic files, version 20250114 (v9), and the project file beside them."""

from __future__ import annotations

import json
from typing import TYPE_CHECKING

from .check_schematic import check_schematic
from .drawing import power_symbol
from .glyphs import STEP_MM
from .sexpr_text import NO, YES, Node, Word, board_text
from .write_board import COMPANY, DATE, GENERATOR
from .write_symbol_instances import part_node, power_node
from .write_symbols import font, library_symbol

if TYPE_CHECKING:
    from collections.abc import Iterator

    from .drawing import Label, Layout, SheetBox
    from .glyphs import Grid
    from .schematics import Schematic, SheetFile

VERSION = 20250114
# Something for readers to put in: the sheets' second comment names it.
_TEXT_VARIABLES = {"MILL": "Alder Weir"}


def schematic_files(schematic: Schematic) -> dict[str, str]:
    """Name -> text of every sheet and of the project, checked before they are written.

    Raises:
        DrawingFault: a drawing cannot be what its data says, or gives other parts or nets than the circuit has.
    """
    trees = {file.name: _sheet_tree(schematic, file) for file in schematic.files}
    check_schematic(schematic.circuit, trees, schematic.root_file)
    texts = {name: board_text(tree) for name, tree in trees.items()}
    return {**texts, f"{schematic.circuit.name}.kicad_pro": _project(schematic)}


def _project(schematic: Schematic) -> str:
    circuit = schematic.circuit
    sheets = [[circuit.identifier("sheet", sheet.name), sheet.name] for sheet in circuit.sheets]
    data = {
        "meta": {"filename": f"{circuit.name}.kicad_pro", "version": 3},
        "sheets": [[schematic.root_identifier, "Root"], *sheets],
        "text_variables": _TEXT_VARIABLES,
    }
    return json.dumps(data, indent=2) + "\n"


def _sheet_tree(schematic: Schematic, file: SheetFile) -> Node:
    circuit, layout = schematic.circuit, schematic.layout(file)
    is_root = file.shown == (None,)
    own = schematic.root_identifier if is_root else circuit.identifier("schematic", file.name)
    pages: list[Node] = [("sheet_instances", ("path", "/", ("page", "1")))] if is_root else []
    return (
        "kicad_sch",
        ("version", VERSION),
        ("generator", GENERATOR),
        ("generator_version", "9.0"),
        ("uuid", own),
        ("paper", file.drawing.paper),
        _title_block(schematic, file),
        ("lib_symbols", *_library(schematic, file, layout)),
        *_texts(schematic, file),
        *_connections(schematic, file, layout),
        *_labels(schematic, file, layout),
        *(part_node(schematic, file, placed) for placed in layout.parts),
        *(power_node(schematic, file, i, placed) for i, placed in enumerate(layout.power, start=1)),
        *(_sheet_box(schematic, box) for box in layout.boxes),
        *pages,
        ("embedded_fonts", NO),
    )


def _title_block(schematic: Schematic, file: SheetFile) -> Node:
    what = "" if file.shown == (None,) else ", one leg"
    return (
        "title_block",
        ("title", schematic.circuit.title + what),
        ("date", DATE),
        ("rev", "A"),
        ("company", COMPANY),
        ("comment", 1, "Sample for software tests, not for manufacture"),
        ("comment", 2, "Drawn for ${MILL}"),
    )


def _library(schematic: Schematic, file: SheetFile, layout: Layout) -> Iterator[Node]:
    parts = schematic.parts(file.shown[0])
    used = {placed.symbol.name: (placed.symbol, parts[placed.name].ref.rstrip("0123456789")) for placed in layout.parts}
    for placed in layout.power:
        symbol = power_symbol(placed.name)
        used[symbol.name] = (symbol, "#FLG" if placed.name == "PWR_FLAG" else "#PWR")
    return (library_symbol(*used[name]) for name in sorted(used))


def _mm(point: Grid) -> tuple[float, float]:
    return point[0] * STEP_MM, point[1] * STEP_MM


def _identifier(schematic: Schematic, file: SheetFile, *path: object) -> Node:
    return ("uuid", schematic.circuit.identifier("drawing", "" if file.shown == (None,) else file.name, *path))


def _texts(schematic: Schematic, file: SheetFile) -> Iterator[Node]:
    for text, at in file.drawing.notes:
        x, y = (int(word) for word in at.split(","))
        yield (
            "text",
            text,
            ("exclude_from_sim", NO),
            ("at", *_mm((x, y)), 0),
            font(("justify", Word("left"), Word("bottom")), size_mm=2.0),
            _identifier(schematic, file, "text", text),
        )


def _connections(schematic: Schematic, file: SheetFile, layout: Layout) -> Iterator[Node]:
    for point in layout.junctions:
        own = _identifier(schematic, file, "junction", point)
        yield ("junction", ("at", *_mm(point)), ("diameter", 0), ("color", 0, 0, 0, 0), own)
    for placed in layout.parts:
        part = schematic.parts(file.shown[0])[placed.name]
        for pin, net in zip(part.symbol.pins, part.nets, strict=True):
            if net is None and pin.number in placed.pins:
                own = _identifier(schematic, file, "no_connect", placed.name, pin.number)
                yield ("no_connect", ("at", *_mm(placed.pins[pin.number])), own)
    for wire in layout.wires:
        yield (
            "wire",
            ("pts", *(("xy", *_mm(end)) for end in wire)),
            ("stroke", ("width", 0), ("type", Word("default"))),
            _identifier(schematic, file, "wire", wire),
        )


def _labels(schematic: Schematic, file: SheetFile, layout: Layout) -> Iterator[Node]:
    for label in layout.labels:
        own = _identifier(schematic, file, label.kind, label.text, label.at)
        yield (label.kind, label.text, *_shape(label), ("at", *_mm(label.at), label.angle_deg), _label_font(label), own)


def _shape(label: Label) -> list[Node]:
    return [("shape", Word(label.shape))] if label.shape else []


def _label_font(label: Label) -> Node:
    side = Word("right" if label.angle_deg in {180, 270} else "left")
    return font(("justify", side, Word("bottom")) if label.kind == "label" else ("justify", side))


def _sheet_box(schematic: Schematic, box: SheetBox) -> Node:
    circuit = schematic.circuit
    sheet = next(sheet for sheet in circuit.sheets if sheet.name == box.title)
    (x, y), (width, height) = _mm(box.at), _mm(box.size)
    names = (
        ("Sheetname", sheet.name, y - 0.7, "bottom"),
        ("Sheetfile", schematic.below[sheet.name][0], y + height + 0.6, "top"),
    )
    instance: Node = ("path", schematic.path(None), ("page", str(schematic.page(sheet))))
    return (
        "sheet",
        ("at", x, y),
        ("size", width, height),
        *(("exclude_from_sim", NO), ("in_bom", YES), ("on_board", YES), ("dnp", NO)),
        ("stroke", ("width", 0.1524), ("type", Word("solid"))),
        ("fill", ("color", 0, 0, 0, 0)),
        ("uuid", circuit.identifier("sheet", sheet.name)),
        *(
            ("property", name, text, ("at", x, height_mm, 0), font(("justify", Word("left"), Word(side))))
            for name, text, height_mm, side in names
        ),
        *(_sheet_pin(schematic, box, i) for i in range(len(box.pins))),
        ("instances", ("project", circuit.name, instance)),
    )


def _sheet_pin(schematic: Schematic, box: SheetBox, index: int) -> Node:
    name, shape, at = box.pins[index]
    is_left = at[0] == box.at[0]
    return (
        "pin",
        name,
        Word(shape),
        ("at", *_mm(at), 180 if is_left else 0),
        ("uuid", schematic.circuit.identifier("sheet", box.title, "pin", name)),
        font(("justify", Word("left" if is_left else "right"))),
    )
