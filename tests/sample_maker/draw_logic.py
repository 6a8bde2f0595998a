"""The mill's controller as a drawing, group by group."""

from __future__ import annotations

from .drawing import Drawing

_SUPPLY = Drawing(
    paper="A3",
    symbols=(
        *("J1 8,14 0 y", "D2 16,17 270", "Q1 26,15 90", "D1 32,17 270", "R1 26,22", "C1 40,16"),
        *("FB1 56,14 90", "C2 60,17", "U2 72,14", "C3 79,17", "U3 92,14", "C4 99,17"),
    ),
    wires=(
        *("J1.1 16, Q1.2", "16,14 D2.1", "J1.2 12, ,17", "Q1.1 ,19", "26,19 D1.2", "26,19 R1.1"),
        *("Q1.3 32, C1.1 45, ,12", "32,14 D1.1", "52,12 ,14 FB1.1", "FB1.2 60, U2.3", "60,14 C2.1"),
        *("U2.2 79, U3.3", "79,14 C3.1", "83,14 ,12", "U3.2 99, 104, ,12", "99,14 C4.1"),
        *("112,12 ,15", "118,12 ,15"),
    ),
    labels=("24V_IN 17,14",),
    power=(
        *("GND 12,17", "GND D2.2", "GND R1.2", "GND C1.2", "+24V 45,12", "+24V 52,12"),
        *("GND C2.2", "GND U2.1", "GND C3.2", "GND U3.1", "GND C4.2", "+5V 83,12", "+3V3 104,12"),
        *("+24V 112,12", "PWR_FLAG 112,15 180", "PWR_FLAG 118,12", "GND 118,15"),
    ),
    notes=(
        ("24 V in, reverse polarity", "8,9"),
        ("5 V and 3.3 V", "52,9"),
        ("supplied from outside", "110,9"),
    ),
)

_CONTROLLER = Drawing(
    paper="A3",
    symbols=(
        "U1 66,56",
        *("C5 45,36", "C6 53,36", "FB2 70,34", "C7 75,38", "R3 44,49 270"),
        *("J2 8,42 0 y", "R2 30,40", "C8 30,46", "R4 32,60", "D3 32,66 90", "J6 8,62 0 y"),
    ),
    wires=(
        *("U1.8 U1.26", "U1.8 ,36", "FB2.2 U1.32", "FB2.2 C7.1", "U1.7 U1.25 U1.31", "U1.25 ,75"),
        *("U1.15 R3.1", "R3.2 40, ,50"),
        *(f"U1.{number} 54," for number in (9, 10, 11, 1, 2, 3, 4, 5, 14)),
        *(f"U1.{number} 80," for number in (17, 23, 24)),
        *("J2.1 14, ,40", "J2.2 18,", "J2.3 18,", "J2.4 18,", "J2.5 14, ,48", "R2.2 C8.1", "30,43 34,"),
        *("28,57 32, R4.1", "R4.2 D3.2", "J6.1 17,", "J6.2 17,", "J6.3 17,", "J6.4 14, ,67"),
    ),
    labels=(
        *("RST 54,43", "DIO 54,45", "CLK 54,47", "PWR_EN 54,51", "LEVEL 54,53", "PWM_H 54,55", "PWM_L 54,57"),
        *("EN 54,59", "LAMP 54,67", "RELAY 75,45", "SCL 75,57", "SDA 75,59"),
        *("RST 12,43", "DIO 12,44", "CLK 12,45", "RST 32,43", "LAMP 28,57", "PWM_H 12,62", "PWM_L 12,63", "EN 12,64"),
    ),
    power=(
        *("+3V3 62,36", "+3V3 C5.1", "+3V3 C6.1", "+3V3 FB2.1", "+3V3 R2.1", "+3V3 14,40"),
        *(
            "GND C5.2",
            "GND C6.2",
            "GND C7.2",
            "GND 66,75",
            "GND 40,50",
            "GND 14,48",
            "GND C8.2",
            "GND D3.1",
            "GND 14,67",
        ),
    ),
    notes=(
        ("controller", "56,32"),
        ("decoupling", "43,32"),
        ("programming", "6,38"),
        ("reset", "28,34"),
        ("lamp", "27,55"),
        ("to the pump stage", "6,58"),
    ),
)


def _shifter(switch: str, up: tuple[str, str], line: str, y: int) -> Drawing:
    """One line of the bus, its switch turned so that the gate lies above."""
    return Drawing(
        paper="A3",
        symbols=(f"{switch} 118,{y - 1} 270", f"{up[0]} 112,{y - 2}", f"{up[1]} 124,{y - 2}"),
        wires=(f"{switch}.2 {up[0]}.2 106,", f"{switch}.3 {up[1]}.2 131,", f"{switch}.1 ,{y - 5}"),
        labels=(f"{line} 106,{y}", f"{line}_5V 126,{y}"),
        power=(f"+3V3 118,{y - 5}", f"+3V3 {up[0]}.1", f"+5V {up[1]}.1"),
    )


_BUS = Drawing(
    paper="A3",
    symbols=("J3 144,30",),
    wires=("J3.1 140, ,28", "J3.2 138,", "J3.3 136,", "J3.4 136,"),
    labels=("global:+5V 138,31 180", "SDA_5V 136,32", "SCL_5V 136,33"),
    power=("GND 140,28 180",),
    notes=(("level shifter of the bus", "106,20"), ("bus, 5 V", "142,26")),
)

_PROBE = Drawing(
    paper="A3",
    symbols=(
        *("Q2 116,58 0 x", "R5 110,54", "R6 110,61", "Q3 109,68", "R7 100,68 90", "R8 104,71", "J4 134,62"),
        *("R9 126,69", "C9 126,76"),
    ),
    wires=(
        *("Q2.2 117,52 110,", "110,50 R5.1", "R5.2 ,58 Q2.1", "110,58 R6.1", "R6.2 Q3.3", "R7.2 104, Q3.1"),
        *("104,68 R8.1", "R7.1 93,", "Q2.3 ,62 J4.1", "J4.2 126, R9.1", "J4.3 130, ,66", "R9.2 C9.1", "126,73 118,"),
    ),
    labels=("PWR_EN 93,68", "24V_PROBE 119,62", "LEVEL 118,73"),
    power=("+24V 110,50", "GND Q3.2", "GND R8.2", "GND 130,66", "GND C9.2"),
    notes=(("switched 24 V for the level probe", "98,47"), ("filtered level", "129,74")),
)

_RELAY = Drawing(
    paper="A3",
    symbols=(
        *("R16 40,96 90", "R17 45,99", "Q6 50,96", "K1:1 51,88", "D4 43,88 270", "K1:2 68,90", "J5 88,95"),
        *("H1 96,107", "H2 101,107", "H3 106,107", "H4 111,107"),
    ),
    wires=(
        *("34,96 R16.1", "R16.2 45, Q6.1", "45,96 R17.1", "Q6.3 K1.A2", "D4.2 ,92 51,", "36,86 D4.1 K1.A1"),
        *("K1.11 58,", "K1.12 78,", "K1.14 78,", "J5.1 79,", "J5.2 79,", "J5.3 79,"),
    ),
    labels=(
        *("RELAY 34,96", "COIL 45,92", "global:+24V 36,86 180"),
        *(
            "SLUICE_COM 58,90",
            "SLUICE_NC 74,89",
            "SLUICE_NO 74,91",
            "SLUICE_NC 79,95",
            "SLUICE_COM 79,96",
            "SLUICE_NO 79,97",
        ),
    ),
    power=("GND R17.2", "GND Q6.2"),
    notes=(("sluice relay", "34,82"), ("sluice motor", "86,92"), ("mounting holes", "96,103")),
)

LOGIC_SHEET = (
    _SUPPLY.plus(_CONTROLLER)
    .plus(_shifter("Q4", ("R10", "R12"), "SDA", 30))
    .plus(_shifter("Q5", ("R11", "R13"), "SCL", 42))
    .plus(_BUS)
    .plus(_PROBE)
    .plus(_RELAY)
)
