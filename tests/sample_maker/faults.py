"""Boards with one planted fault each; everything that is not named here is as on the healthy board."""

from __future__ import annotations

from dataclasses import replace

from .circuit import Zone
from .half_bridge import HALF_BRIDGE
from .three_phase import THREE_PHASE

# The lower gate of the middle leg has no bead: the joint's track runs on to the gate.
BEAD_MISSING = (
    THREE_PHASE.variant("bead_missing")
    .without("FB202")
    .joined("*jointL 2", into="/Leg B/GATE_L")
    .rerouted(away=(), instead=("0.8 F R205.1 Q202.1", "0.6 F R204.2 128.4, ,128.46"))
)

# The lower gate's parts stand in a column at the driver, and a long track runs from the bead to the gate.
BEAD_FAR = (
    HALF_BRIDGE.variant("bead_far")
    .changed("R4", at_mm=(120.65, 87.0), angle_deg=270.0)
    .changed("D3", at_mm=(123.4, 86.8), angle_deg=270.0)
    .changed("R5", at_mm=(123.4, 90.9), angle_deg=90.0)
    .changed("FB2", at_mm=(120.65, 94.2), angle_deg=270.0)
    .rerouted(
        away=(
            "0.6 F U1.10 116.6,83.1 119.95, ~120.444975,83.305025 120.65,83.8 D3.1",
            "0.6 F R4.1 120.65,",
            "0.6 F R4.2 128.4, FB2.1",
            "0.8 F FB2.2 Q2.1",
        ),
        instead=(
            "0.6 F U1.10 116.6,83.1 119.95, ~120.444975,83.305025 120.65,83.8 R4.1",
            "0.6 F D3.1 122.9,84.7 120.65,",
            "0.6 F R4.2 FB2.1",
            "0.8 F FB2.2 129, 129.8,94.45 ,89.26 130.6,88.46 Q2.1",
        ),
    )
)

# Two grounds, joined at the board's lower edge only: the driver's COM reaches the lower source over one track
# around the edge, and nothing lies below the gate's track.
RETURN_DETOUR = replace(
    HALF_BRIDGE.variant("return_detour").rerouted(
        away=("0.5 F U1.8 C2.2 ,87.5 @", "0.5 F U1.8 ,87.3 @"),
        instead=("0.5 F U1.8 C2.2", "0.8 F U1.8 ,110.4 137,"),
    ),
    stitches={
        **HALF_BRIDGE.stitches,
        "GND": (*(at for at in HALF_BRIDGE.stitches["GND"] if at != (130.0, 107.0)), (115.475, 110.4)),
    },
    zones=(
        *(zone for zone in HALF_BRIDGE.zones if zone.name not in {"GND_POWER", "GND_PLANE"}),
        Zone(
            "GND_POWER",
            "GND",
            "F.Cu",
            (
                *((131.4, 91.2), (139.6, 91.2), (139.6, 99.4), (143.6, 103.6), (179, 103.6), (179, 111)),
                *((134.4, 111), (134.4, 99), (131.4, 97)),
            ),
            priority=1,
        ),
        Zone(
            "GND_PLANE_LOGIC",
            "GND",
            "B.Cu",
            ((100.5, 60.5), (113.4, 60.5), (113.4, 107.8), (117.4, 109), (117.4, 111.5), (100.5, 111.5)),
        ),
        Zone(
            "GND_PLANE_POWER",
            "GND",
            "B.Cu",
            ((141, 60.5), (179.5, 60.5), (179.5, 111.5), (131.4, 111.5), (131.4, 94.2), (141, 94.2)),
        ),
    ),
)

# Beads for signals in both gates: a fifteenth of the rating that the healthy board's have.
_SMALL_BEAD = {
    "value": "60R@100MHz 200mA",
    "fields": (("Rating", "200mA"), ("DCR", "200mOhm")),
    "description": "Ferrite bead, 60R at 100MHz, 200mA, 200mOhm",
}
BEAD_UNDERRATED = HALF_BRIDGE.variant("bead_underrated").changed("FB1", **_SMALL_BEAD).changed("FB2", **_SMALL_BEAD)

# The upper gate's turn-off branch lands behind the bead, which is left in series with the turn-on resistor alone.
BEAD_ONE_EDGE = (
    HALF_BRIDGE.variant("bead_one_edge")
    .changed("R2", nets=("/GATE_H", "*offH"))
    .rerouted(away=("0.6 F R2.1 FB1.1",), instead=("0.6 F R2.1 ,73.2 128.2,72.5 131, 132,73.5 ,74.46",))
)

FAULTS = (BEAD_MISSING, BEAD_FAR, RETURN_DETOUR, BEAD_UNDERRATED, BEAD_ONE_EDGE)
