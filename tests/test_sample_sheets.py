"""The sample schematics show the boards' parts and nets, and another reader finds the same in them."""

from __future__ import annotations

import json
from collections import Counter
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

import pytest

from tests.sample_maker.draw_half_bridge import HALF_BRIDGE_SHEET
from tests.sample_maker.drawing import Drawing, DrawingFault
from tests.sample_maker.glyphs import STEP_MM
from tests.sample_maker.half_bridge import HALF_BRIDGE
from tests.sample_maker.schematics import SCHEMATICS, Schematic
from tests.sample_maker.write_schematic import schematic_files

if TYPE_CHECKING:
    from tests.sample_maker.circuit import Part

SAMPLES = Path(__file__).resolve().parent.parent / "sample_boards"
EACH = pytest.mark.parametrize("schematic", SCHEMATICS, ids=lambda s: s.circuit.name)
BY_NAME = {schematic.circuit.name: schematic for schematic in SCHEMATICS}


def _refuses(drawing: Drawing, message: str) -> None:
    with pytest.raises(DrawingFault, match=message):
        schematic_files(Schematic(HALF_BRIDGE, drawing, {}))


def _folder(schematic: Schematic) -> Path:
    return SAMPLES / schematic.circuit.name


@EACH
def test_the_maker_finds_the_circuit_in_its_sheets_and_writes_the_committed_files(schematic: Schematic) -> None:
    # the check of parts, attributes, pin sets and net names is part of the writing
    written = {name: text.encode() for name, text in schematic_files(schematic).items()}
    assert {name: (_folder(schematic) / name).read_bytes() for name in written} == written
    on_disk = {path.name for path in _folder(schematic).iterdir() if path.suffix in {".kicad_sch", ".kicad_pro"}}
    assert on_disk == set(written)


@EACH
def test_the_project_lists_the_sheets(schematic: Schematic) -> None:
    name = schematic.circuit.name
    project = json.loads((_folder(schematic) / f"{name}.kicad_pro").read_text())
    assert project["meta"]["filename"] == f"{name}.kicad_pro"
    assert [sheet[1] for sheet in project["sheets"]] == ["Root", *(sheet.name for sheet in schematic.circuit.sheets)]
    for variable in project["text_variables"]:
        assert f"${{{variable}}}" in (_folder(schematic) / f"{name}.kicad_sch").read_text()


# --- a second opinion ---------------------------------------------------------------------------------


def _as_drawn(part: Part) -> tuple[str, str, bool, dict[str, str]]:
    fields = {"Footprint": f"AlderWeir:{part.package}", "Datasheet": "", **dict(part.fields)}
    fields["Description"] = part.description or part.symbol.description
    return f"AlderWeir:{part.symbol.name}", part.value, part.fitted, fields


@EACH
def test_kiutils_reads_the_same_symbols(schematic: Schematic) -> None:
    # kiutils (a general reader, up to v9) shares no code with this repository
    from kiutils.schematic import Schematic as Read

    circuit = schematic.circuit
    found: dict[str, tuple[object, ...]] = {}
    for file in schematic.files:
        read = Read.from_file(str(_folder(schematic) / file.name))
        assert len({symbol.uuid for symbol in read.schematicSymbols}) == len(read.schematicSymbols)
        library = {symbol.libId: symbol for symbol in read.libSymbols}
        for symbol in read.schematicSymbols:
            if library[symbol.libId].isPower:
                continue
            fields = {field.key: field.value for field in symbol.properties}
            shown = fields.pop("Reference"), fields.pop("Value")
            [instance] = symbol.instances
            assert instance.name == circuit.name
            refs = [path.reference for path in instance.paths]
            assert refs[0] == shown[0]
            assert [path.sheetInstancePath for path in instance.paths] == [schematic.path(s) for s in file.shown]
            found |= dict.fromkeys(refs, (symbol.libId, shown[1], not symbol.dnp, fields))
    assert found == {part.ref: _as_drawn(part) for part in circuit.parts}


@EACH
def test_kiutils_finds_the_symbol_of_every_footprint(schematic: Schematic) -> None:
    # format notes: a footprint's path is the sheets' identifiers and the symbol's, without the root's
    from kiutils.board import Board
    from kiutils.schematic import Schematic as Read

    paths = {}
    for file in schematic.files:
        for symbol in Read.from_file(str(_folder(schematic) / file.name)).schematicSymbols:
            for instance in symbol.instances[0].paths:
                if instance.unit == 1:
                    below = instance.sheetInstancePath.removeprefix(f"/{schematic.root_identifier}")
                    paths[f"{below}/{symbol.uuid}"] = instance.reference
    board = Board.from_file(str(_folder(schematic) / f"{schematic.circuit.name}.kicad_pcb"))
    assert board.footprints
    for footprint in board.footprints:
        assert paths[footprint.path] == footprint.properties["Reference"]


@EACH
def test_kiutils_finds_the_sheets_and_their_ports(schematic: Schematic) -> None:
    from kiutils.schematic import Schematic as Read

    root = Read.from_file(str(_folder(schematic) / schematic.root_file))
    assert [sheet.sheetName.value for sheet in root.sheets] == [sheet.name for sheet in schematic.circuit.sheets]
    for sheet in root.sheets:
        below = Read.from_file(str(_folder(schematic) / sheet.fileName.value))
        assert {pin.name for pin in sheet.pins} == {label.text for label in below.hierarchicalLabels}


def test_the_sheets_have_what_readers_must_cope_with() -> None:
    text = (SAMPLES / "logic" / "logic.kicad_sch").read_text()
    for feature in ("(mirror x)", "(mirror y)", "(unit 2)", "(global_label ", "(no_connect", '"#FLG'):
        assert feature in text
    angles = {part.angle_deg for schematic in SCHEMATICS for part in schematic.layout(schematic.files[0]).parts}
    assert angles == {0, 90, 180, 270}


def test_the_pages_hold_everything() -> None:
    # sizes of the paper are those of ISO 216, lying; the frame keeps 10 mm
    papers_mm = {"A4": (297, 210), "A3": (420, 297)}
    for schematic in SCHEMATICS:
        for file in schematic.files:
            layout = schematic.layout(file)
            points = [*layout.pin_points, *(end for wire in layout.wires for end in wire)]
            right, bottom = papers_mm[file.drawing.paper]
            assert all(10 < x * STEP_MM < right - 10 and 10 < y * STEP_MM < bottom - 10 for x, y in points)


# --- the maker's check can fail -----------------------------------------------------------------------


def test_a_missing_wire_is_refused() -> None:
    _refuses(HALF_BRIDGE_SHEET.rewired(away=("D2.2 R2.2",), instead=()), r"nets of the schematic: \('R2', '2'\)")


def test_a_part_joined_to_another_net_is_refused() -> None:
    _refuses(HALF_BRIDGE_SHEET.rewired(away=(), instead=("R8.1 ,16 30, ,18",)), "nets of the schematic")


def test_another_label_is_refused() -> None:
    labels = tuple(label.replace("GATE_H", "GATE_X") for label in HALF_BRIDGE_SHEET.labels)
    _refuses(replace(HALF_BRIDGE_SHEET, labels=labels), "/GATE_X instead of /GATE_H")


def test_a_label_in_the_air_is_refused() -> None:
    _refuses(replace(HALF_BRIDGE_SHEET, labels=(*HALF_BRIDGE_SHEET.labels, "EN 60,55")), "hangs in the air")


def test_a_switch_turned_over_is_refused() -> None:
    # mirrored about the horizontal, drain and source change places
    turned = tuple(text.replace("Q1 78,28", "Q1 78,28 0 x") for text in HALF_BRIDGE_SHEET.symbols)
    drawing = replace(HALF_BRIDGE_SHEET, symbols=turned).rewired(
        away=("Q1.2 ,24", "Q1.3 79,33 79,36"), instead=("Q1.3 ,24", "Q1.2 79,33 79,36")
    )
    _refuses(drawing, r"nets of the schematic: \('Q1', '3'\): \+48V")


@pytest.mark.parametrize("ref", ["R8", "H1"])
def test_a_part_that_is_not_drawn_is_refused(ref: str) -> None:
    _refuses(HALF_BRIDGE_SHEET.without(ref), rf"not both: \['{ref}'\]")


def test_a_wire_through_a_part_and_a_slanting_one_are_refused() -> None:
    _refuses(HALF_BRIDGE_SHEET.rewired(away=(), instead=("38,5 ,50",)), "runs into")
    _refuses(HALF_BRIDGE_SHEET.rewired(away=(), instead=("38,5 40,7",)), "not straight ahead")
    _refuses(HALF_BRIDGE_SHEET.rewired(away=(), instead=("D2.2 R2.2",)), "lie on each other")


def test_a_wire_over_a_pin_is_refused() -> None:
    # format notes: a pin on the middle of a wire does not connect, though it looks as if it did
    _refuses(HALF_BRIDGE_SHEET.rewired(away=(), instead=("32,41 48,",)), "passes over")


def test_wires_meet_where_another_one_ends_and_only_there() -> None:
    layout = BY_NAME["bead_one_edge"].layout(BY_NAME["bead_one_edge"].files[0])
    ends = Counter(end for wire in layout.wires for end in wire)
    # the turn-off branch of the upper gate meets the gate's wire beside the label, which splits nothing
    assert (73, 28) in layout.junctions
    assert ends[73, 28] == 3
    assert ends[70, 28] == 0
