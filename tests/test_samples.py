"""The sample boards are what their maker says, and other people's readers find the same in them."""

from __future__ import annotations

import hashlib
import math
import re
import time
from collections import Counter
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pytest
import sexpdata
from shapely import LineString, Point, Polygon, box
from shapely.ops import unary_union

from tests.sample_maker.check import CopperFault, check
from tests.sample_maker.copper import Piece, arc_points, pad_shape, pieces, polygons
from tests.sample_maker.faults import BEAD_FAR, BEAD_MISSING, BEAD_ONE_EDGE, BEAD_UNDERRATED, RETURN_DETOUR
from tests.sample_maker.fill import CLEARANCE_MM, Fill, fill_zones, ring_shape, slit_ring
from tests.sample_maker.half_bridge import HALF_BRIDGE
from tests.sample_maker.routes import copper
from tests.sample_maker.samples import CIRCUITS, WITH_NETLIST, sample_files
from tests.sample_maker.sexpr_text import Word, board_text
from tests.sample_maker.three_phase import THREE_PHASE
from tests.sample_maker.tile import benchmark_board, tile_board
from tests.sample_maker.write_board import board

if TYPE_CHECKING:
    from tests.sample_maker.circuit import Circuit
    from tests.sample_maker.sexpr_text import Node

SAMPLES = Path(__file__).resolve().parent.parent / "sample_boards"
_FILL = re.compile(r"\t\t\(filled_polygon\n.*?\n\t\t\)\n", re.DOTALL)
_SEGMENT = re.compile(r"\(segment\n\t\t\(start (\S+) (\S+)\)\n\t\t\(end (\S+) (\S+)\)")
_XY = re.compile(r"\(xy (\S+) (\S+)\)")


@pytest.fixture(scope="module")
def made() -> dict[str, str]:
    return sample_files()


def _copper(circuit: Circuit) -> tuple[list[Piece], list[Fill]]:
    found = pieces(circuit, *copper(circuit))
    return found, fill_zones(circuit, found)


def _ring(fill: str) -> tuple[tuple[float, float], ...]:
    return tuple((float(x), float(y)) for x, y in _XY.findall(fill))


def _zone_areas(text: str) -> list[float]:
    zones = [block for block in re.split(r"\n(?=\t\()", text) if block.startswith("\t(zone")]
    return [sum(ring_shape(_ring(fill)).area for fill in _FILL.findall(zone)) for zone in zones]


def _refuses(circuit: Circuit, message: str) -> None:
    with pytest.raises(CopperFault, match=message):
        board(circuit)


# --- the committed files ------------------------------------------------------------------------------


def test_committed_files_are_what_the_maker_writes(made: dict[str, str]) -> None:
    stored = {
        path.relative_to(SAMPLES).as_posix(): path.read_bytes().decode()
        for path in SAMPLES.rglob("*")
        if path.suffix in {".kicad_pcb", ".net", ".kicad_sch", ".kicad_pro"}
    }
    for name, text in made.items():
        # the geometry library may round curves differently in another release: fills are compared by area
        assert _FILL.sub("", stored[name]) == _FILL.sub("", text), name
        assert _zone_areas(stored[name]) == pytest.approx(_zone_areas(text), rel=1e-3), name


@pytest.mark.parametrize("circuit", CIRCUITS, ids=lambda c: c.name)
def test_every_net_is_one_piece_and_keeps_its_distance(circuit: Circuit) -> None:
    found, fills = _copper(circuit)
    check(circuit, found, fills)
    for fill in fills:
        foreign = [p.shape for p in found if fill.zone.layer in p.layers and p.net != fill.zone.net]
        assert unary_union(foreign).distance(fill.shape) >= CLEARANCE_MM


@pytest.mark.parametrize(("ref", "gate", "least_mm", "most_mm"), [("FB1", "Q1", 1.5, 3.0), ("FB2", "Q2", 1.5, 3.0)])
def test_each_bead_stands_at_its_gate(ref: str, gate: str, least_mm: float, most_mm: float) -> None:
    # common practice for trench switches asks for a few millimetres; this is the healthy sample
    bead, switch = HALF_BRIDGE.part(ref), HALF_BRIDGE.part(gate)
    gap = pad_shape(bead, bead.footprint.pads[1]).distance(pad_shape(switch, switch.footprint.pads[0]))
    assert least_mm <= gap <= most_mm


def test_the_board_has_what_readers_must_cope_with(made: dict[str, str]) -> None:
    text = made["half_bridge/half_bridge.kicad_pcb"]
    for feature in ("\t(arc\n", "(attr smd dnp)", "(island)", "np_thru_hole", '(pad "" smd', "unconnected-("):
        assert feature in text
    # the regulators' tab is a second pad with the number of their middle lead
    assert made["logic/logic.kicad_pcb"].count('(pad "2" smd roundrect\n\t\t\t(at -3.15 0 270)') == 2


def test_the_three_legs_are_one_sheet_shown_three_times(made: dict[str, str]) -> None:
    # format notes: a path is the sheet's identifier and the symbol's, in the netlist in two lists
    paths = re.findall(r'"Q[123]01".*?\(path "/(\S+)/(\S+)"\)', made["three_phase/three_phase.kicad_pcb"], re.DOTALL)
    assert [len(set(column)) for column in zip(*paths, strict=True)] == [3, 1]
    for letter, (sheet, symbol) in zip("ABC", paths, strict=True):
        lists = f'(names "/Leg {letter}/") (tstamps "/{sheet}/"))\n      (tstamps "{symbol}")'
        assert lists in made["three_phase/three_phase.net"]


# --- the planted faults -------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("healthy", "faulty", "touched"),
    [
        (THREE_PHASE, BEAD_MISSING, {"FB202", "R204", "R205"}),
        (HALF_BRIDGE, BEAD_FAR, {"R4", "D3", "R5", "FB2"}),
        (HALF_BRIDGE, RETURN_DETOUR, set()),
        (HALF_BRIDGE, BEAD_UNDERRATED, {"FB1", "FB2"}),
        (HALF_BRIDGE, BEAD_ONE_EDGE, {"R2"}),
    ],
    ids=lambda value: getattr(value, "name", ""),
)
def test_a_fault_touches_its_own_parts_only(healthy: Circuit, faulty: Circuit, touched: set[str]) -> None:
    assert {part.ref for part in {*healthy.parts} ^ {*faulty.parts}} == touched


def test_a_long_track_leads_from_the_far_bead_to_its_gate() -> None:
    pads = [piece.shape for piece in _copper(BEAD_FAR)[0] if piece.what in {"pad FB2.2", "pad Q2.1"}]
    way = [LineString([t.start_mm, t.end_mm]) for t in copper(BEAD_FAR)[0] if (t.net, t.width_mm) == ("/GATE_L", 0.8)]
    assert unary_union(way).difference(unary_union(pads)).length == pytest.approx(20, abs=1.5)


def test_the_detour_is_the_only_return_and_none_lies_below_the_gates_track() -> None:
    found, fills = _copper(RETURN_DETOUR)
    nets = {RETURN_DETOUR.net_names[pin] for pin in (("U1", "10"), ("R4", "2"), ("R5", "2"), ("Q2", "1"))}
    drive = [p.shape for p in found if p.net in nets]
    below = [fill.shape for fill in fills if (fill.zone.net, fill.zone.layer) == ("GND", "B.Cu")]
    assert unary_union(below).distance(unary_union(drive)) > 1.0
    at = {piece.what: piece.shape.centroid for piece in found}
    there, back = [at[f"pad {pad}"] for pad in ("U1.10", "Q2.1", "Q2.3")], [(137, 110.4), (115.475, 110.4)]
    assert Polygon([*there, *back, at["pad U1.8"]]).area > 300
    _refuses(RETURN_DETOUR.rerouted(away=("0.8 F U1.8 ,110.4 137,",), instead=()), "net GND is in pieces")


# --- second opinions ----------------------------------------------------------------------------------


def _expected_pads(circuit: Circuit) -> list[tuple[str, list[tuple[str, str | None]]]]:
    """Footprint by footprint, in file order: reference, and number with net of every pad."""
    return [
        (
            part.ref,
            [(pad.number, circuit.net_names.get((part.ref, pad.number))) for pad in part.footprint.pads],
        )
        for part in circuit.parts
    ]


@pytest.mark.parametrize("circuit", CIRCUITS, ids=lambda c: c.name)
def test_kiutils_reads_the_same_board(circuit: Circuit) -> None:
    # kiutils (a general reader, up to v9) shares no code with this repository
    from kiutils.board import Board

    read = Board.from_file(str(SAMPLES / circuit.name / f"{circuit.name}.kicad_pcb"))
    pads = [
        (f.properties["Reference"], [(p.number, p.net.name if p.net else None) for p in f.pads])
        for f in read.footprints
    ]
    assert pads == _expected_pads(circuit)
    assert [net.name for net in read.nets] == ["", *circuit.nets]
    places = [(f.position.X, f.position.Y, f.position.angle or 0) for f in read.footprints]
    assert places == [pytest.approx((*part.at_mm, part.angle_deg)) for part in circuit.parts]
    tracks, vias = copper(circuit)
    assert len(read.traceItems) == len(tracks) + len(vias)
    assert [zone.netName for zone in read.zones] == [zone.net for zone in circuit.zones]


@pytest.mark.filterwarnings("ignore::DeprecationWarning")  # kinparse calls its parser library by old names
@pytest.mark.parametrize("circuit", WITH_NETLIST, ids=lambda c: c.name)
def test_kinparse_reads_the_same_netlist(circuit: Circuit) -> None:
    # kinparse is an independent netlist reader
    from kinparse import parse_netlist

    read = parse_netlist((SAMPLES / circuit.name / f"{circuit.name}.net").read_text())
    assert {(p.ref, p.value, p.footprint) for p in read.parts} == {
        (part.ref, part.value, f"AlderWeir:{part.package}") for part in circuit.parts
    }
    nets = {(pin.ref, pin.num): net.name for net in read.nets for pin in net.pins}
    assert nets == circuit.net_names


def _lists(node: list[Any], head: str) -> list[list[Any]]:
    return [item for item in node if isinstance(item, list) and item and str(item[0]) == head]


def _value(node: list[Any], head: str) -> Any:
    return next((item[1] for item in _lists(node, head)), None)


def test_version_10_names_its_nets_and_numbers_its_pins() -> None:
    # format notes: nets by name and no table from 20251028 on; pin functions read NAME_NUMBER
    text = (SAMPLES / "half_bridge_v10" / "half_bridge.kicad_pcb").read_text()
    tree = sexpdata.loads(text)
    assert _lists(tree, "version")[0][1] == 20260206
    assert _lists(tree, "net") == []
    pads = []
    for footprint in _lists(tree, "footprint"):
        ref = next(p[2] for p in _lists(footprint, "property") if p[1] == "Reference")
        found = _lists(footprint, "pad")
        pads.append((ref, [(p[1], _value(p, "net")) for p in found]))
        functions = {p[1]: name for p in found if (name := _value(p, "pinfunction"))}
        assert functions == {
            pin.number: f"{pin.name}_{pin.number}" for pin in HALF_BRIDGE.part(ref).symbol.pins if pin.name
        }
    assert pads == _expected_pads(HALF_BRIDGE)
    items = [item for kind in ("segment", "arc", "via", "zone") for item in _lists(tree, kind)]
    assert {_value(item, "net") for item in items} <= set(HALF_BRIDGE.nets)
    assert "net_name" not in text
    assert "filled_areas_thickness" not in text
    assert "(island yes)" in text


# --- the maker's check can fail -----------------------------------------------------------------------


def test_a_part_pushed_against_another_is_refused() -> None:
    _refuses(HALF_BRIDGE.moved("R2", (0.6, 0.0)), "courtyard")


def test_a_bead_can_be_moved_with_its_tracks() -> None:
    moved = HALF_BRIDGE.moved("FB1", (-0.2, 0.0))
    assert board(moved) != board(HALF_BRIDGE)


def test_a_bead_can_be_taken_out() -> None:
    bare = HALF_BRIDGE.without("FB1").joined("/GATE_H", into="*jointH")
    text = board(bare.rerouted(away=(), instead=("0.8 F R2.1 Q1.1", "0.6 F R1.2 128.4, R2.1")))
    assert '"FB1"' not in text
    assert "/GATE_H" not in text


def test_a_missing_track_is_refused() -> None:
    bare = HALF_BRIDGE.rerouted(away=("0.8 F FB1.2 Q1.1",), instead=())
    _refuses(bare, "net /GATE_H is in pieces")
    with pytest.raises(ValueError, match="no such routes"):
        bare.rerouted(away=("0.8 F FB1.2 Q1.1",), instead=())


def test_a_track_across_another_net_is_refused() -> None:
    _refuses(replace(HALF_BRIDGE, routes=(*HALF_BRIDGE.routes, "0.25 F J3.1 103,82")), "mm from")


def test_a_route_between_two_nets_is_refused() -> None:
    routes = (*HALF_BRIDGE.routes, "0.25 F J3.1 J3.2")
    with pytest.raises(ValueError, match="belongs to nets"):
        board(replace(HALF_BRIDGE, routes=routes))


@pytest.mark.parametrize(("place", "message"), [((100.2, 90.0), "edge"), ((104.0, 66.0), "hole")])
def test_copper_near_the_rim_is_refused(place: tuple[float, float], message: str) -> None:
    stitches = {**HALF_BRIDGE.stitches, "GND": (*HALF_BRIDGE.stitches["GND"], place)}
    _refuses(replace(HALF_BRIDGE, stitches=stitches), message)


# --- the maker's geometry -----------------------------------------------------------------------------


def test_a_turned_part_follows_the_file_formats_sense() -> None:
    # format notes: positive angles turn counter-clockwise on screen, so pad 1 on the left comes to lie below
    part = replace(HALF_BRIDGE.part("R8"), at_mm=(10.0, 20.0), angle_deg=90.0)
    assert part.place_mm((-0.8, 0.0)) == (10.0, 20.8)
    wide = pad_shape(part, part.footprint.pads[0]).bounds
    assert wide[2] - wide[0] == pytest.approx(0.95)


def test_an_arc_runs_through_its_middle() -> None:
    # three points of the unit circle around (5, 5), from the right over the top to the left
    points = arc_points((6.0, 5.0), (5.0, 4.0), (4.0, 5.0))
    assert points[len(points) // 2] == pytest.approx((5.0, 4.0))
    assert all((x - 5) ** 2 + (y - 5) ** 2 == pytest.approx(1.0) for x, y in points)


def test_holes_are_reached_over_slits_without_changing_the_area() -> None:
    holes = [box(2, 2, 3, 3), box(5, 2, 6, 3), box(3.5, 5, 4.5, 8), Point(7.5, 7.5).buffer(1)]
    polygon = Polygon(box(0, 0, 10, 10).exterior, [hole.exterior for hole in holes])
    ring = slit_ring(polygon)
    assert ring_shape(ring).symmetric_difference(polygon).area < 1e-4
    corners = len(polygon.exterior.coords) + sum(len(hole.exterior.coords) for hole in holes)
    assert len(ring) == corners - 1 - len(holes) + 3 * len(holes)


def test_text_is_laid_out_like_a_board_file() -> None:
    node: Node = ("head", ("at", 1.5, -0.0, 90), ("name", 'a "b"'), ("flag", Word("yes")), ("empty",))
    assert board_text(node) == '(head\n\t(at 1.5 0 90)\n\t(name "a \\"b\\"")\n\t(flag yes)\n\t(empty)\n)\n'
    points: Node = ("pts", *(("xy", 100.123456, i) for i in range(9)))
    assert max(len(line) for line in board_text(points).splitlines()) <= 99


# --- repeated boards ----------------------------------------------------------------------------------


def _references(text: str) -> list[str]:
    return re.findall(r'\(property "Reference" "([^"]+)"', text)


def _unique(items: list[str]) -> bool:
    return len(items) == len(set(items))


def test_three_channels_on_one_board() -> None:
    text = tile_board(board(HALF_BRIDGE), 3)
    references = _references(text)
    assert _unique(references)
    assert {"Q101", "Q201", "Q302", "FB301"} <= set(references)
    assert len(references) == 3 * len(HALF_BRIDGE.parts)
    assert _unique(re.findall(r'\(uuid "([^"]+)"\)', text))
    table = re.findall(r'^\t\(net (\d+) "([^"]*)"\)$', text, re.MULTILINE)
    assert [int(code) for code, _ in table] == list(range(len(table)))
    assert len(table) == 2 + 3 * (len(HALF_BRIDGE.nets) - 1)
    assert {(code, name) for code, name in re.findall(r'\(net (\d+) "([^"]*)"\)', text)} == set(table)


def test_the_ground_of_all_channels_is_one_piece() -> None:
    text = tile_board(board(HALF_BRIDGE), 3)
    planes = [ring_shape(_ring(_FILL.findall(zone)[0])) for zone in text.split("\n\t(zone") if "GND_PLANE" in zone]
    assert len(planes) == 3
    ends = [block for block in text.split("\n\t(segment") if "(width 1)" in block and '"B.Cu"' in block]
    bridges = [LineString(_track_ends(f"(segment{block}")).buffer(0.5) for block in ends]
    assert len(polygons(unary_union(planes))) == 3
    assert len(polygons(unary_union([*planes, *bridges]))) == 1


def test_kiutils_finds_every_channel_like_the_first(tmp_path: Path) -> None:
    from kiutils.board import Board

    path = tmp_path / "three.kicad_pcb"
    path.write_text(tile_board(board(HALF_BRIDGE), 3))
    read = Board.from_file(str(path))
    count = len(HALF_BRIDGE.parts)
    names = {net.number: net.name for net in read.nets}
    for channel in range(3):
        copies = read.footprints[channel * count : (channel + 1) * count]
        shift = {
            (round(f.position.X - part.at_mm[0], 6), round(f.position.Y - part.at_mm[1], 6))
            for f, part in zip(copies, HALF_BRIDGE.parts, strict=True)
        }
        assert len(shift) == 1
        gate = next(f for f in copies if f.properties["Reference"] == f"Q{channel + 1}01").pads[0].net
        assert gate.name == f"/Channel {channel + 1}/GATE_H"
        assert names[gate.number] == gate.name
    assert {names[zone.net] for zone in read.zones} == {zone.netName for zone in read.zones}


@pytest.mark.alone
def test_the_benchmark_board_is_large_quick_and_always_the_same() -> None:
    start = time.perf_counter()
    text = benchmark_board(20_000_000)
    assert time.perf_counter() - start < 15
    assert len(text) == pytest.approx(20_000_000, rel=0.05)
    assert hashlib.sha256(text.encode()).digest() == hashlib.sha256(benchmark_board(20_000_000).encode()).digest()
    kinds: Counter[str] = Counter()
    for block in re.split(r"\n(?=\t\()", text):
        kinds[block[2:].split(maxsplit=1)[0]] += len(block)
    assert kinds["footprint"] / len(text) == pytest.approx(0.45, abs=0.02)
    assert (kinds["segment"] + kinds["arc"] + kinds["via"]) / len(text) == pytest.approx(0.25, abs=0.02)
    assert kinds["zone"] / len(text) == pytest.approx(0.30, abs=0.02)
    references = _references(text)
    assert _unique(references)
    assert sum(reference.startswith("Q") for reference in references) >= 48
    assert _unique(re.findall(r'\(uuid "([^"]+)"\)', text))


def test_cutting_tracks_and_fills_adds_no_copper() -> None:
    # the same area and the same length of track as the board itself, only in more pieces
    size = len(board(HALF_BRIDGE))
    text = benchmark_board(4 * size)
    copies = len(_references(text)) // len(HALF_BRIDGE.parts)
    once = _zone_areas(board(HALF_BRIDGE))
    assert _zone_areas(text) == pytest.approx(copies * once, rel=1e-3)
    assert len(_XY.findall(text)) >= 1.5 * copies * len(_XY.findall(board(HALF_BRIDGE)))
    # the ground tracks between copies are new: they span the gap and reach 1 mm into either copy
    bridges = text.count("(width 1)") * (4.0 + 2.0)
    assert _track_length(text) == pytest.approx(copies * _track_length(board(HALF_BRIDGE)) + bridges, rel=1e-6)


def _track_length(text: str) -> float:
    return sum(math.dist(*_track_ends(match[0])) for match in _SEGMENT.finditer(text))


def _track_ends(text: str) -> list[tuple[float, float]]:
    x1, y1, x2, y2 = (float(word) for word in _SEGMENT.findall(text)[0])
    return [(x1, y1), (x2, y2)]
