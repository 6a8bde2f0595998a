"""The mill's controller board: transistors that switch, but none that is driven hard."""

from __future__ import annotations

from typing import TYPE_CHECKING

from . import symbols
from .circuit import Circuit, Part, Zone
from .stock import capacitor, mounting_holes, resistor

if TYPE_CHECKING:
    from .footprints import Point
    from .symbols import Symbol

_SMALL_N = "N-channel MOSFET, 60V Vds, 0.3A Id, 2Ohm Rds(on), logic level, SOT-23"
_SMALL_P = "P-channel MOSFET, -60V Vds, -0.5A Id, 0.8Ohm Rds(on), SOT-23"
_GUARD_P = "P-channel MOSFET, -60V Vds, -12A Id, 60mOhm Rds(on), reverse polarity protection, TO-252"


def _diode(ref: str, symbol: Symbol, value: str, at: Point, nets: tuple[str, str]) -> Part:
    package = "SOD-123" if symbol is symbols.ZENER else "SMA"
    return Part(ref, symbol, value, package, nets, at, 270)


def _bead(ref: str, at: Point, angle: float, nets: tuple[str, str]) -> Part:
    fields = (("Rating", "1A"),)
    text = "Ferrite bead, 600R at 100MHz, 1A, for supplies"
    return Part(ref, symbols.BEAD, "600R@100MHz 1A", "L_0805", nets, at, angle, fields, text)


def _shifter(switch: str, up: tuple[str, str], line: str, y: float) -> list[Part]:
    """One line of the level shifter with its two pull-ups."""
    low, high = f"/{line}", f"/{line}_5V"
    return [
        Part(
            switch,
            symbols.MOSFET_N_GSD,
            "MOSFET N 60V 0.3A",
            "SOT-23",
            ("+3V3", low, high),
            (171, y),
            description=_SMALL_N,
        ),
        resistor(up[0], "4k7", (167.4, y, 270), ("+3V3", low)),
        resistor(up[1], "4k7", (174.6, y - 1.4, 270), ("+5V", high)),
    ]


_MCU_NETS = (
    *("/PWR_EN", "/LEVEL", "/PWM_H", "/PWM_L", "/EN", None, "GND", "+3V3"),
    *("/RST", "/DIO", "/CLK", None, None, "/LAMP", "*boot", None),
    *("/RELAY", None, None, None, None, None, "/SCL", "/SDA"),
    *("GND", "+3V3", None, None, None, None, "GND", "*vdda"),
)

_PARTS = (
    # 24 V in, reverse polarity
    Part(
        "J1",
        symbols.connector(2, screw=True),
        "24V in",
        "TerminalBlock_1x02_P5.08mm",
        ("/24V_IN", "GND"),
        (105, 71),
    ),
    _diode("D2", symbols.ZENER, "TVS 33V 200W", (111.3, 78.4), ("/24V_IN", "GND")),
    Part(
        "Q1",
        symbols.MOSFET_P_GDS,
        "MOSFET P 60V 12A",
        "TO-252-2",
        ("*guard", "/24V_IN", "+24V"),
        (117, 71),
        180,
        description=_GUARD_P,
    ),
    _diode("D1", symbols.ZENER, "Zener 12V", (124.2, 71), ("+24V", "*guard")),
    resistor("R1", "100k", (121.2, 76.2, 270), ("*guard", "GND")),
    Part(
        "C1",
        symbols.POLARIZED,
        "100uF 35V",
        "CP_Radial_D8.0mm_P3.5mm",
        ("+24V", "GND"),
        (128.5, 66.8),
        fields=(("Rating", "35V"),),
    ),
    # supplies, each behind its bead
    _bead("FB1", (136.6, 69.35), 0, ("+24V", "*vin")),
    capacitor("C2", "2.2uF 50V X7R", "C_1206", (138.1, 72.8, 270), ("*vin", "GND")),
    Part("U2", symbols.REGULATOR, "Regulator 5V 0.5A", "SOT-223", ("GND", "+5V", "*vin"), (143, 72.5), 270),
    capacitor("C3", "10uF 16V X7R", "C_1206", (148, 77.2, 270), ("+5V", "GND")),
    Part("U3", symbols.REGULATOR, "Regulator 3V3 0.5A", "SOT-223", ("GND", "+3V3", "+5V"), (154, 72.5), 270),
    capacitor("C4", "10uF 10V X7R", "C_1206", (159, 77.2, 270), ("+3V3", "GND")),
    # controller
    Part("U1", symbols.MICROCONTROLLER, "Microcontroller", "LQFP-32_7x7mm_P0.8mm", _MCU_NETS, (138, 98)),
    capacitor("C5", "100nF 16V X7R", "C_0603", (142.4, 91.2, 270), ("+3V3", "GND")),
    capacitor("C6", "100nF 16V X7R", "C_0603", (131.4, 101.2, 90), ("+3V3", "GND")),
    _bead("FB2", (137.3, 90.8), 180, ("+3V3", "*vdda")),
    capacitor("C7", "1uF 16V X7R", "C_0603", (133.6, 91.2, 270), ("*vdda", "GND")),
    capacitor("C8", "100nF 16V X7R", "C_0603", (133.9, 107.6, 0), ("/RST", "GND")),
    resistor("R2", "10k", (130.9, 113.6, 0), ("+3V3", "/RST")),
    resistor("R3", "10k", (142.6, 104.4, 0), ("*boot", "GND")),
    resistor("R4", "1k", (139.2, 106, 270), ("/LAMP", "*lamp")),
    Part("D3", symbols.LED, "LED green", "LED_0805", ("GND", "*lamp"), (139.2, 110.2), 90),
    Part(
        "J2",
        symbols.connector(5),
        "Programming",
        "PinHeader_1x05_P2.54mm",
        ("+3V3", "/RST", "/DIO", "/CLK", "GND"),
        (130, 118),
        90,
    ),
    # level shifter and its bus
    *_shifter("Q4", ("R10", "R12"), "SDA", 80),
    *_shifter("Q5", ("R11", "R13"), "SCL", 87),
    Part(
        "J3",
        symbols.connector(4),
        "Bus 5V",
        "PinHeader_1x04_P2.54mm",
        ("GND", "+5V", "/SDA_5V", "/SCL_5V"),
        (182, 76),
    ),
    # switched 24 V for the pond level probe
    Part(
        "Q2",
        symbols.MOSFET_P_GSD,
        "MOSFET P 60V 0.5A",
        "SOT-23",
        ("*load", "+24V", "/24V_PROBE"),
        (114, 86),
        180,
        description=_SMALL_P,
    ),
    resistor("R5", "100k", (117.4, 86, 270), ("+24V", "*load")),
    resistor("R6", "10k", (117.4, 89.6, 270), ("*load", "*pull")),
    Part("Q3", symbols.NPN_BEC, "NPN 45V 0.1A", "SOT-23", ("*base", "GND", "*pull"), (117.4, 93.4), 90),
    resistor("R7", "10k", (116.45, 97, 90), ("/PWR_EN", "*base")),
    resistor("R8", "47k", (113.8, 95.2, 270), ("*base", "GND")),
    Part(
        "J4",
        symbols.connector(3, screw=True),
        "Level probe",
        "TerminalBlock_1x03_P5.08mm",
        ("/24V_PROBE", "*probe", "GND"),
        (105, 88),
    ),
    resistor("R9", "1k", (124.4, 96.4, 0), ("*probe", "/LEVEL")),
    capacitor("C9", "100nF 16V X7R", "C_0603", (126.65, 98.2, 270), ("/LEVEL", "GND")),
    # to the pump stage
    Part(
        "J6",
        symbols.connector(4),
        "Pump stage",
        "PinHeader_1x04_P2.54mm",
        ("/PWM_H", "/PWM_L", "/EN", "GND"),
        (104, 104),
    ),
    # sluice relay
    resistor("R16", "100R", (147.2, 100.8, 0), ("/RELAY", "*relay")),
    resistor("R17", "10k", (148.4, 104.6, 270), ("*relay", "GND")),
    Part(
        "Q6",
        symbols.MOSFET_N_GSD,
        "MOSFET N 60V 0.3A",
        "SOT-23",
        ("*relay", "GND", "/COIL"),
        (151.5, 104.5),
        description=_SMALL_N,
    ),
    _diode("D4", symbols.DIODE, "Diode 100V 1A", (154.2, 112), ("+24V", "/COIL")),
    Part(
        "K1",
        symbols.RELAY,
        "Relay 24V, 5A contact",
        "Relay_SPDT_5pin",
        ("+24V", "/COIL", "/SLUICE_COM", "/SLUICE_NC", "/SLUICE_NO"),
        (158, 104),
    ),
    Part(
        "J5",
        symbols.connector(3, screw=True),
        "Sluice motor",
        "TerminalBlock_1x03_P5.08mm",
        ("/SLUICE_NC", "/SLUICE_COM", "/SLUICE_NO"),
        (181, 101),
    ),
    *mounting_holes((104, 64), (182, 64), (104, 120), (182, 120)),
)

_ROUTES = (
    # 24 V
    "0.5 F Q1.1 D1.2",
    "0.4 F R1.1 Q1.1",
    "0.8 F D1.1 126.4, ,80 R5.1",
    "0.8 F 162,65 ,71 @ ,98.4 @ ,100 K1.A1",
    "0.8 F D4.1 ,107.8 K1.A1",
    "0.8 F FB1.2 U2.3",
    "0.8 F C2.1 ,69.35",
    "0.8 F U2.2 143,75.65 C3.1 149.7, ,69.35 U3.3",
    "0.5 F U3.3 149.7, ,68.3 150.4,67.6 159.2, @ 164.8, @ 173.6, 174.6,68.6 R12.1",
    "0.5 F R12.1 J3.2",
    "0.5 F R12.1 177.2, @ ,83 @ ,84.775 R13.1",
    # 3.3 V
    "0.8 F U3.2 154,75.65 C4.1",
    "0.5 F C4.1 165, ,86.175 R11.1",
    "0.4 F R11.1 Q5.1",
    "0.4 F 165,79.175 R10.1 Q4.1",
    "0.4 F U1.26 ,88.6 148.6,80 151.2, 154,77.2 ,75.65",
    "0.4 F C5.1 140,",
    "0.4 F FB2.1 140,",
    "0.4 F U1.26 ,96.2 135.4,100.8 U1.8 C6.1",
    "0.4 F U1.8 135.4, 137.6,98.6 @ J2.1",
    "0.4 F R2.1 J2.1",
    "0.4 F U1.32 ,90.8 FB2.2",
    "0.4 F C7.1 134.825, 135.2,90.8",
    # controller
    "0.25 F U1.9 ,103.2 132.54,105.86 J2.2",
    "0.25 F C8.1 132.54,",
    "0.25 F R2.2 132.54,",
    "0.25 F U1.10 ,115 135.08,115.92 J2.3",
    "0.25 F U1.11 ,115 137.62,115.82 J2.4",
    "0.25 F U1.14 R4.1",
    "0.25 F R4.2 D3.2",
    "0.25 F U1.15 ,103 141.4,104.4 R3.1",
    "0.25 F U1.31 ,95.7 @",
    "0.25 F U1.25 ,92.4 C5.2 143.9, @",
    "0.25 F U1.7 134.8, 135.6,99.2 @",
    # bus
    "0.25 F U1.24 147, 160.95,81.25 163.4, @ 166.4, @ R10.2 Q4.2",
    "0.25 F U1.23 148.2, 156.375,87.825 R11.2 Q5.2",
    "0.25 F Q4.3 180.92, J3.3",
    "0.25 F R12.2 ,80",
    "0.25 F Q5.3 178.62, J3.4",
    "0.25 F R13.2 ,87",
    # probe
    "0.8 F Q2.3 J4.1",
    "0.5 F R5.1 Q2.2",
    "0.25 F R5.2 Q2.1",
    "0.25 F R6.1 R5.2",
    "0.25 F R6.2 Q3.3",
    "0.25 F Q3.1 R7.2",
    "0.25 F Q3.1 R8.1",
    "0.25 F U1.1 121.6, 120.3,96.5 117.775, R7.1",
    "0.25 F J4.2 108.6, ,98.6 109.6,99.6 120.375, R9.1",
    "0.25 F R9.2 125.625,96 U1.2",
    "0.25 F C9.1 ,96",
    # pump stage
    "0.25 F U1.3 127.6, ,100.6 124.2,104 J6.1",
    "0.25 F U1.4 128.4, ,103 124.86,106.54 J6.2",
    "0.25 F U1.5 129.2, ,105 125.12,109.08 J6.3",
    # relay
    "0.25 F U1.17 R16.1",
    "0.25 F R16.2 148.4,101.6 R17.1",
    "0.25 F R17.1 Q6.1",
    "0.8 F Q6.3 D4.2",
    "0.8 F D4.2 156, K1.A2",
    "2 F K1.12 J5.1",
    "2 F K1.11 J5.2",
    "2 F K1.14 J5.3",
)

_STITCHES: dict[str, tuple[Point, ...]] = {
    "GND": (
        *((102.0, y) for y in (82.0, 102.0, 115.0)),
        *((x, 122.5) for x in (112.0, 122.0, 145.0, 154.0)),
        *((112.0, 112.0), (120.0, 114.0), (124.0, 92.0), (123.0, 101.5), (130.0, 87.0), (121.2, 79.0)),
        *((138.1, 76.2), (145.9, 78.7), (159.0, 81.0), (145.3, 66.9), (156.3, 71.6), (157.5, 93.0)),
        *((150.0, 97.8), (144.8, 105.6), (146.8, 108.5), (150.0, 107.2), (131.2, 99.3), (142.5, 112.0)),
        *((170.0, 93.0), (180.0, 93.0), (178.5, 71.0), (170.5, 72.0), (169.0, 83.5), (111.3, 82.5)),
        *((119.8, 94.3), (111.8, 96.8), (133.9, 110.2), (150.0, 116.0)),
    ),
}

_ZONES = (
    Zone(
        "INPUT",
        "/24V_IN",
        "F.Cu",
        (
            *((102.5, 67), (118.4, 67), (118.4, 74.8), (113.2, 74.8), (113.2, 78), (109.4, 78)),
            *((109.4, 73.9), (102.5, 73.9)),
        ),
        priority=2,
    ),
    Zone(
        "SUPPLY",
        "+24V",
        "F.Cu",
        ((119.6, 62), (163.2, 62), (163.2, 66.2), (136.3, 66.2), (136.3, 70.6), (119.6, 70.6)),
        priority=2,
    ),
    # ground ends where the relay's contacts begin
    Zone(
        "GND_TOP",
        "GND",
        "F.Cu",
        ((100.5, 60.5), (185.5, 60.5), (185.5, 96.5), (156.4, 96.5), (156.4, 123.5), (100.5, 123.5)),
        thermal=True,
    ),
    Zone(
        "GND_PLANE",
        "GND",
        "B.Cu",
        (
            (100.5, 60.5),
            (185.5, 60.5),
            (185.5, 96.5),
            (159, 96.5),
            (156.4, 99),
            (156.4, 123.5),
            (100.5, 123.5),
        ),
        thermal=True,
    ),
)

LOGIC = Circuit(
    name="logic",
    title="Alder Weir mill controller",
    origin_mm=(100, 60),
    size_mm=(86, 64),
    parts=_PARTS,
    routes=_ROUTES,
    stitches=_STITCHES,
    zones=_ZONES,
    notes=(
        ("ALDER WEIR CONTROLLER, REV A", (128, 84)),
        ("INVENTED SAMPLE", (116, 118)),
    ),
)
