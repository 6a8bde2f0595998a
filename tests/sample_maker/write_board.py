"""A circuit as a board file, for format versions 20241229 (v9) and 20260206 (v10)."""

from __future__ import annotations

from typing import TYPE_CHECKING

from .check import check
from .copper import pieces
from .fill import (
    CLEARANCE_MM,
    ISLAND_AREA_MM2,
    MIN_THICKNESS_MM,
    SPOKE_MM,
    THERMAL_GAP_MM,
    Fill,
    fill_zones,
)
from .routes import copper
from .sexpr_text import NO, YES, Node, Word, board_text
from .write_footprint import V9, Dialect, footprint_node, net_node, stroke, text_effects

if TYPE_CHECKING:
    from collections.abc import Iterator

    from .circuit import Circuit, Track, Via, Zone
    from .footprints import Point

GENERATOR = "alder_weir_sample_maker"
DATE = "2025-03-14"
COMPANY = "Alder Weir water mill (invented)"

# Number, name, type and shown name, in file order; the numbers are those of format versions from v9 on.
_LAYERS = (
    (0, "F.Cu", "signal", ""),
    (2, "B.Cu", "signal", ""),
    (13, "F.Paste", "user", ""),
    (15, "B.Paste", "user", ""),
    (5, "F.SilkS", "user", "F.Silkscreen"),
    (7, "B.SilkS", "user", "B.Silkscreen"),
    (1, "F.Mask", "user", ""),
    (3, "B.Mask", "user", ""),
    (19, "Cmts.User", "user", "User.Comments"),
    (25, "Edge.Cuts", "user", ""),
    (27, "Margin", "user", ""),
    (31, "F.CrtYd", "user", "F.Courtyard"),
    (29, "B.CrtYd", "user", "B.Courtyard"),
    (35, "F.Fab", "user", ""),
    (33, "B.Fab", "user", ""),
)
_CORNER_MM = 2.0


def board(circuit: Circuit, dialect: Dialect = V9) -> str:
    """The text of the board file, checked before it is written.

    Raises:
        CopperFault: the copper is not what the nets ask for.
    """
    tracks, vias = copper(circuit)
    found = pieces(circuit, tracks, vias)
    fills = fill_zones(circuit, found)
    check(circuit, found, fills)
    return board_text(
        (
            "kicad_pcb",
            *_head(circuit, dialect),
            *_net_table(circuit, dialect),
            *(footprint_node(circuit, part, dialect) for part in circuit.parts),
            *_outline(circuit),
            *_notes(circuit),
            *(_track(circuit, i, track, dialect) for i, track in enumerate(tracks)),
            *(_via(circuit, i, via, dialect) for i, via in enumerate(vias)),
            *(_zone(circuit, zone, fills, dialect) for zone in circuit.zones),
            ("embedded_fonts", NO),
        )
    )


def _head(circuit: Circuit, dialect: Dialect) -> Iterator[Node]:
    yield ("version", dialect.version)
    yield ("generator", GENERATOR)
    yield ("generator_version", dialect.release)
    yield ("general", ("thickness", 1.6), ("legacy_teardrops", NO))
    yield ("paper", "A4")
    yield (
        "title_block",
        ("title", circuit.title),
        ("date", DATE),
        ("rev", "A"),
        ("company", COMPANY),
        ("comment", 1, "Sample for software tests, not for manufacture"),
    )
    shown: Iterator[Node] = ((n, name, Word(kind), *([alias] if alias else [])) for n, name, kind, alias in _LAYERS)
    yield ("layers", *shown)
    yield _setup(dialect)


def _setup(dialect: Dialect) -> Node:
    sides: Node = ("tenting", Word("front"), Word("back"))
    if not dialect.nets_by_number:
        sides = ("tenting", ("front", YES), ("back", YES))
    core: Node = (
        "layer",
        "dielectric 1",
        ("type", "core"),
        ("thickness", 1.51),
        ("material", "FR4"),
        ("epsilon_r", 4.5),
        ("loss_tangent", 0.02),
    )
    return (
        "setup",
        (
            "stackup",
            ("layer", "F.SilkS", ("type", "Top Silk Screen")),
            ("layer", "F.Paste", ("type", "Top Solder Paste")),
            ("layer", "F.Mask", ("type", "Top Solder Mask"), ("thickness", 0.01)),
            ("layer", "F.Cu", ("type", "copper"), ("thickness", 0.035)),
            core,
            ("layer", "B.Cu", ("type", "copper"), ("thickness", 0.035)),
            ("layer", "B.Mask", ("type", "Bottom Solder Mask"), ("thickness", 0.01)),
            ("layer", "B.Paste", ("type", "Bottom Solder Paste")),
            ("layer", "B.SilkS", ("type", "Bottom Silk Screen")),
            ("copper_finish", "HAL lead-free"),
            ("dielectric_constraints", NO),
        ),
        ("pad_to_mask_clearance", 0),
        ("allow_soldermask_bridges_in_footprints", NO),
        sides,
    )


def _net_table(circuit: Circuit, dialect: Dialect) -> list[Node]:
    if not dialect.nets_by_number:
        return []
    return [("net", i, name) for i, name in enumerate(["", *circuit.nets])]


def _outline(circuit: Circuit) -> Iterator[Node]:
    """A rectangle with rounded corners."""
    (x, y), (w, h), r = circuit.origin_mm, circuit.size_mm, _CORNER_MM
    k = round(r * (1 - 0.5**0.5), 6)
    sides = (
        ((x + r, y), (x + w - r, y)),
        ((x + w, y + r), (x + w, y + h - r)),
        ((x + w - r, y + h), (x + r, y + h)),
        ((x, y + h - r), (x, y + r)),
    )
    for i, (start, end) in enumerate(sides):
        yield _edge(circuit, "gr_line", i, {"start": start, "end": end})
    corners = (
        ((x, y + r), (x + k, y + k), (x + r, y)),
        ((x + w - r, y), (x + w - k, y + k), (x + w, y + r)),
        ((x + w, y + h - r), (x + w - k, y + h - k), (x + w - r, y + h)),
        ((x + r, y + h), (x + k, y + h - k), (x, y + h - r)),
    )
    for i, (start, mid, end) in enumerate(corners):
        yield _edge(circuit, "gr_arc", i, {"start": start, "mid": mid, "end": end})


def _edge(circuit: Circuit, kind: str, index: int, places: dict[str, Point]) -> Node:
    return (
        kind,
        *((name, *place) for name, place in places.items()),
        stroke(0.1),
        ("layer", "Edge.Cuts"),
        ("uuid", circuit.identifier("edge", kind, index)),
    )


def _notes(circuit: Circuit) -> Iterator[Node]:
    for i, (text, place) in enumerate(circuit.notes):
        yield (
            "gr_text",
            text,
            ("at", *place, 0),
            ("layer", "F.SilkS"),
            ("uuid", circuit.identifier("note", i)),
            text_effects(1.2, thickness_mm=0.18),
        )


def _track(circuit: Circuit, index: int, track: Track, dialect: Dialect) -> Node:
    middle = [("mid", *track.middle_mm)] if track.middle_mm else []
    return (
        "arc" if middle else "segment",
        ("start", *track.start_mm),
        *middle,
        ("end", *track.end_mm),
        ("width", track.width_mm),
        ("layer", track.layer),
        net_node(circuit, dialect, track.net),
        ("uuid", circuit.identifier("track", index)),
    )


def _via(circuit: Circuit, index: int, via: Via, dialect: Dialect) -> Node:
    return (
        "via",
        ("at", *via.at_mm),
        ("size", via.size_mm),
        ("drill", via.drill_mm),
        ("layers", "F.Cu", "B.Cu"),
        net_node(circuit, dialect, via.net),
        ("uuid", circuit.identifier("via", index)),
    )


def _zone(circuit: Circuit, zone: Zone, fills: list[Fill], dialect: Dialect) -> Node:
    names: list[Node] = [net_node(circuit, dialect, zone.net)]
    edge_is_copper: list[Node] = []
    if dialect.nets_by_number:
        names.append(("net_name", zone.net))
        edge_is_copper.append(("filled_areas_thickness", NO))
    return (
        "zone",
        *names,
        ("layer", zone.layer),
        ("uuid", circuit.identifier("zone", zone.name)),
        ("name", zone.name),
        ("hatch", Word("edge"), 0.5),
        *([("priority", zone.priority)] if zone.priority else []),
        ("connect_pads", *([] if zone.thermal else [YES]), ("clearance", CLEARANCE_MM)),
        ("min_thickness", MIN_THICKNESS_MM),
        *edge_is_copper,
        (
            "fill",
            YES,
            ("thermal_gap", THERMAL_GAP_MM),
            ("thermal_bridge_width", SPOKE_MM),
            *([("island_removal_mode", 2), ("island_area_min", ISLAND_AREA_MM2)] if zone.keeps_islands else []),
        ),
        ("polygon", _points(zone.outline_mm)),
        *(_filled(fill, dialect) for fill in fills if fill.zone is zone),
    )


def _filled(fill: Fill, dialect: Dialect) -> Node:
    mark: list[Node] = []
    if fill.island:
        mark.append(("island",) if dialect.nets_by_number else ("island", YES))
    return ("filled_polygon", ("layer", fill.zone.layer), *mark, _points(fill.ring_mm))


def _points(places: tuple[Point, ...]) -> Node:
    return ("pts", *(("xy", *place) for place in places))
