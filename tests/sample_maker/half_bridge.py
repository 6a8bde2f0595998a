"""The pump's half bridge: one healthy leg with split gate resistors and a bead at each gate."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from . import symbols
from .circuit import Circuit, Part, Zone
from .stock import capacitor, mounting_holes, resistor

if TYPE_CHECKING:
    from .footprints import Point

_SWITCH = "MOSFET N 100V 4mOhm 60nC"
_SWITCH_TEXT = "N-channel MOSFET, 100V Vds, 110A Id, 4mOhm Rds(on), 60nC Qg, 20V Vgs max, TO-263"
_BEAD_FIELDS = (("Rating", "3A"), ("DCR", "25mOhm"))


def _gate(channel: int, side: str, source: str, y: float, below: int) -> list[Part]:
    """Everything between a driver output and one gate whose pad lies at height `y`.

    `channel` is 0 or 1 and numbers the parts; `below` is +1 if the driver is further down, -1 if further up.
    """
    on, off, leak = (f"R{3 * channel + i}" for i in (1, 2, 3))
    drive, joint, gate, middle = f"*drive{side}", f"*joint{side}", f"/GATE_{side}", f"*off{side}"
    return [
        resistor(on, "10R", (124.6, y + 2.6 * below, 0), (drive, joint), "0.25W"),
        resistor(off, "2R2", (126.6, y, 180), (joint, middle), "0.25W"),
        Part(
            f"D{channel + 2}",
            symbols.SCHOTTKY,
            "Schottky 40V 1A",
            "SOD-123",
            (drive, middle),
            (122.3, y),
            fields=(("Rating", "40V 1A"),),
        ),
        Part(
            f"FB{channel + 1}",
            symbols.BEAD,
            "60R@100MHz 3A",
            "L_0805",
            (joint, gate),
            (130.5, y),
            fields=_BEAD_FIELDS,
            description="Ferrite bead, 60R at 100MHz, 3A, 25mOhm",
        ),
        resistor(leak, "10k", (133.2, y + 2.7, 270), (gate, source)),
    ]


_HEADER_NETS = ("/PWM_H", "/PWM_L", "/EN", "+12V", "GND", "GND")
_DRIVER_NETS = (
    *("*hin", "*lin", "/EN", "*dt", "GND", None, None),
    *("GND", "+12V", "*driveL", None, "/PHASE", "*driveH", "*vb"),
)

_PARTS = (
    Part("U1", symbols.HALF_BRIDGE_DRIVER, "Gate driver, half bridge", "SOIC-14", _DRIVER_NETS, (113, 82)),
    *(
        Part(
            ref,
            symbols.MOSFET_N_GDS,
            _SWITCH,
            "TO-263-2",
            nets,
            (143, y),
            description=_SWITCH_TEXT,
            fields=(("Rating", "100V"),),
        )
        for ref, nets, y in (
            ("Q1", ("/GATE_H", "+48V", "/PHASE"), 77),
            ("Q2", ("/GATE_L", "/PHASE", "GND"), 91),
        )
    ),
    *_gate(0, "H", "/PHASE", 74.46, 1),
    *_gate(1, "L", "GND", 88.46, -1),
    Part("TP1", symbols.TEST_POINT, "GATE_H", "TestPoint_Pad_D1.5mm", ("/GATE_H",), (132.9, 72.2)),
    Part("TP2", symbols.TEST_POINT, "GATE_L", "TestPoint_Pad_D1.5mm", ("/GATE_L",), (132.9, 86.2)),
    # driver supplies
    Part(
        "D1",
        symbols.DIODE,
        "Fast diode 200V 1A",
        "SOD-123",
        ("*boot", "+12V"),
        (112.6, 74.6),
        180,
        fields=(("Rating", "200V 1A"),),
    ),
    resistor("R7", "2R2", (117.2, 74.6, 0), ("*boot", "*vb"), "0.25W"),
    capacitor("C1", "1uF 50V X7R", "C_1206", (118.6, 79.46, 270), ("*vb", "/PHASE")),
    capacitor("C2", "2.2uF 25V X7R", "C_0805", (118.6, 85.2, 270), ("+12V", "GND")),
    capacitor("C3", "10uF 25V X7R", "C_1206", (110.2, 93.4, 270), ("+12V", "GND")),
    # logic inputs
    Part("J3", symbols.connector(6), "Control", "PinHeader_1x06_P2.54mm", _HEADER_NETS, (103, 76)),
    resistor("R8", "100R", (107, 76.2, 0), ("/PWM_H", "*hin")),
    resistor("R9", "100R", (107, 78.2, 0), ("/PWM_L", "*lin")),
    resistor("R10", "10k", (107, 73.6, 0), ("/PWM_H", "GND")),
    resistor("R11", "10k", (107, 80, 0), ("/PWM_L", "GND")),
    resistor("R12", "10k", (107, 83, 0), ("/EN", "GND")),
    resistor("R13", "47k", (108.6, 88.2, 270), ("*dt", "GND")),
    # power path
    Part(
        "J1",
        symbols.connector(2, screw=True),
        "48V in",
        "TerminalBlock_1x02_P5.08mm",
        ("+48V", "GND"),
        (174, 70.3),
    ),
    Part(
        "J2",
        symbols.connector(2, screw=True),
        "Phase out",
        "TerminalBlock_1x02_P5.08mm",
        ("/PHASE", "GND"),
        (174, 91),
    ),
    Part(
        "C4",
        symbols.POLARIZED,
        "470uF 63V",
        "CP_Radial_D12.5mm_P5.0mm",
        ("+48V", "GND"),
        (158.5, 68.4),
        fields=(("Rating", "63V"),),
    ),
    *(capacitor(f"C{5 + i}", "4.7uF 100V X7R", "C_1210", (154.5 + 4 * i, 79, 270), ("+48V", "GND")) for i in range(4)),
    resistor("R14", "4R7", (146, 100, 270), ("/PHASE", "*snub"), "0.5W"),
    capacitor("C9", "1nF 200V C0G", "C_0805", (146, 104.2, 270), ("*snub", "GND")),
    replace(capacitor("C10", "1nF 200V C0G", "C_0805", (149.4, 104.2, 270), ("*snub", "GND")), fitted=False),
    *mounting_holes((104, 64), (176, 64), (104, 108), (176, 108)),
)

_ROUTES = (
    # high-side drive: on through R1, off through R2 and D2 as well, then the bead
    "0.6 F U1.13 119.95, 120.65,78.76 D2.1",
    "0.6 F R1.1 120.65,",
    "0.6 F D2.2 R2.2",
    "0.6 F R1.2 128.4, FB1.1",
    "0.6 F R2.1 FB1.1",
    "0.8 F FB1.2 Q1.1",
    "0.4 F TP1.1 ,74.46",
    "0.4 F R3.1 ,74.46",
    # low-side drive
    "0.6 F U1.10 116.6,83.1 119.95, ~120.444975,83.305025 120.65,83.8 D3.1",
    "0.6 F R4.1 120.65,",
    "0.6 F D3.2 R5.2",
    "0.6 F R4.2 128.4, FB2.1",
    "0.6 F R5.1 FB2.1",
    "0.8 F FB2.2 Q2.1",
    "0.4 F TP2.1 ,88.46",
    "0.4 F R6.1 ,88.46",
    # returns and supplies of the driver
    "0.6 F U1.12 C1.2 134,",
    "0.6 F U1.14 C1.1",
    "0.6 F R7.2 118.6,75.6 C1.1",
    "0.6 F D1.1 R7.1",
    "0.5 F U1.9 C2.1",
    "0.5 F U1.8 C2.2 ,87.5 @",
    "0.5 F U1.8 ,87.3 @",
    "0.5 F U1.9 113.3, ,90.2 106.6, 105,88.6 ,83.62 J3.4",
    "0.5 F C3.1 ,90.2",
    "0.5 F 113.3,84.54 ,76.4 D1.2",
    "0.4 F U1.5 112.1, @",
    "0.5 F C3.2 ,96.4 @",
    # logic
    "0.25 F J3.1 R8.1",
    "0.25 F R10.1 R8.1",
    "0.25 F R8.2 U1.1",
    "0.25 F J3.2 R9.1",
    "0.25 F R11.1 R9.1",
    "0.25 F R9.2 108.1, 109.36,79.46 U1.2",
    "0.25 F J3.3 105.2, 105.52,81.4 108.3, 108.97,80.73 U1.3",
    "0.25 F R12.1 ,81.4",
    "0.25 F U1.4 109.2, 108.6,82.6 R13.1",
    "0.4 F R10.2 109, @",
    "0.4 F R11.2 108.5, @",
    "0.4 F R12.2 ,84.3 @",
    "0.4 F R13.2 107.3, @",
    # snubber
    "0.8 F R14.2 C9.1 C10.1",
)

_STITCHES: dict[str, tuple[Point, ...]] = {
    "/PHASE": (
        *((x, 81.3) for x in (134.6, 135.8, 137.0, 138.2)),
        *((132.6, y) for y in (79.2, 80.4)),
        *((x, 80.935) for x in (122.0, 123.4)),
    ),
    "GND": (
        *((133.0 + 1.2 * i, y) for y in (95.2, 96.6) for i in range(5)),
        *((153.5 + 1.6 * i, 82.6) for i in range(10)),
        *((x, 107.0) for x in (130.0, 138.0, 145.0, 147.7, 150.4, 160.0, 168.0)),
    ),
}

_ZONES = (
    Zone(
        "BUS",
        "+48V",
        "F.Cu",
        ((140.8, 71.2), (146, 61), (179, 61), (179, 78.4), (151.6, 78.4), (151.6, 82.9), (140.8, 82.9)),
        priority=2,
    ),
    Zone(
        "PHASE",
        "/PHASE",
        "F.Cu",
        (
            *((131.8, 77.2), (139.8, 77.2), (139.8, 83.6), (151.4, 83.6), (153.2, 85.4), (178.4, 85.4)),
            *((178.4, 99.2), (140.2, 99.2), (140.2, 88), (137.6, 85.6), (134, 85.6), (131.8, 83.4)),
        ),
        priority=2,
    ),
    Zone("GND_BUS", "GND", "F.Cu", ((152.4, 78.9), (179, 78.9), (179, 84.8), (152.4, 84.8)), priority=1),
    Zone(
        "GND_POWER",
        "GND",
        "F.Cu",
        (
            *((131.4, 91.2), (139.6, 91.2), (139.6, 99.4), (143.6, 103.6), (179, 103.6), (179, 111)),
            *((124, 111), (124, 103), (131.4, 97)),
        ),
        priority=1,
    ),
    Zone(
        "GND_LOGIC",
        "GND",
        "F.Cu",
        ((101, 69), (109.3, 69), (109.3, 98), (101, 98)),
        priority=1,
        thermal=True,
        keeps_islands=True,
    ),
    # the high-side drive runs above its own return, not above ground
    Zone(
        "PHASE_RETURN",
        "/PHASE",
        "B.Cu",
        ((114.2, 71.4), (139.6, 71.4), (139.6, 82.2), (114.2, 82.2)),
        priority=1,
    ),
    Zone("GND_PLANE", "GND", "B.Cu", ((100.5, 60.5), (179.5, 60.5), (179.5, 111.5), (100.5, 111.5))),
)

HALF_BRIDGE = Circuit(
    name="half_bridge",
    title="Alder Weir pump stage, half bridge",
    origin_mm=(100, 60),
    size_mm=(80, 52),
    parts=_PARTS,
    routes=_ROUTES,
    stitches=_STITCHES,
    zones=_ZONES,
    notes=(
        ("ALDER WEIR PUMP STAGE", (122, 64.5)),
        ("HALF BRIDGE, REV A", (122, 67)),
        ("INVENTED SAMPLE", (118, 105)),
    ),
)
