"""The half bridge as a drawing: the leg that every pump stage has, and what the single one has besides."""

from __future__ import annotations

from .drawing import Drawing

_OFF_H = "R2.1 62, ,28"
_BEAD_L = ("R4.2 62, FB2.1", "FB2.2 TP2.1 74, Q2.1")

LEG = Drawing(
    paper="A4",
    symbols=(
        "U1 40,28",
        *("D1 42,11 180", "R7 48,11 90", "C1 50,22"),
        *("R10 20,20", "R8 26,18 90", "R11 20,29", "R9 26,27 90", "R12 20,38", "R13 32,36"),
        *("R1 56,28 90", "D2 53,31", "R2 59,31 270", "FB1 66,28 90", "TP1 69,27", "R3 74,31", "Q1 78,28"),
        *("R4 56,42 90", "D3 53,45", "R5 59,45 270", "FB2 66,42 90", "TP2 69,41", "R6 74,45", "Q2 78,42"),
        *("R14 94,39", "C9 94,45", "C10 102,45"),
        *("C5 80,18", "C6 88,18", "C7 96,18", "C8 104,18", "C2 12,62", "C3 21,62"),
    ),
    wires=(
        # supplies of the driver
        *("U1.9 33, ,18", "38,11 D1.2", "D1.1 R7.1", "R7.2 ,20", "U1.14 50,", "U1.12 50, 53,"),
        *("U1.5 ,38", "U1.8 48,", "C2.1 C3.1", "C2.2 C3.2", "C2.1 ,58", "C2.2 ,66"),
        # logic
        *("16,18 R10.1 R8.1", "R8.2 30, ,24 U1.1", "16,27 R11.1 R9.1", "R9.2 U1.2"),
        *("16,36 R12.1 30, ,30 U1.3", "U1.4 32, R13.1"),
        # high side
        *("U1.13 50, R1.1", "50,28 ,31 D2.1", "D2.2 R2.2", "R1.2 62, FB1.1", _OFF_H),
        *("FB1.2 TP1.1 74, Q1.1", "74,28 R3.1", "R3.2 79,", "Q1.2 ,24", "Q1.3 79,33 79,36"),
        # low side
        *("U1.10 49, ,42 R4.1", "50,42 ,45 D3.1", "D3.2 R5.2", *_BEAD_L, "R5.1 62, ,42"),
        *("74,42 R6.1", "R6.2 79,", "79,36 Q2.2", "Q2.3 79,47 79,48"),
        # power path
        *("79,36 94, 97,", "94,36 R14.1", "R14.2 C9.1", "94,42 102, C10.1"),
        *("C5.1 C6.1 C7.1 C8.1", "C5.2 C6.2 C7.2 C8.2", "C5.1 ,14", "C6.2 ,22"),
    ),
    labels=("GATE_H 70,28", "GATE_L 70,42"),
    power=(
        *("+12V 33,18", "+12V 38,11", "+12V 12,58", "+48V 79,24", "+48V 80,14"),
        *("GND R10.2", "GND R11.2", "GND R12.2", "GND R13.2", "GND 34,38", "GND 48,37", "GND 79,48"),
        *("GND C9.2", "GND C10.2", "GND 88,22", "GND 12,66"),
    ),
    ports=(
        *("PWM_H input 16,18 180", "PWM_L input 16,27 180", "EN input 16,36 180"),
        *("PHASE output 53,24 0", "PHASE output 97,36 0"),
    ),
    notes=(
        ("bootstrap supply", "38,8"),
        ("logic inputs", "14,14"),
        ("gate drive, high side", "53,34"),
        ("gate drive, low side", "53,48"),
        ("capacitors of the DC bus", "84,13"),
        ("snubber", "104,41"),
        ("driver supply", "14,57"),
    ),
)

_OWN = Drawing(
    paper="A4",
    symbols=(
        *("J3 10,46 0 y", "J1 92,58", "C4 81,60", "J2 104,36"),
        *("H1 36,62", "H2 41,62", "H3 46,62", "H4 51,62"),
    ),
    wires=(
        *("J3.1 17,", "J3.2 17,", "J3.3 17,", "J3.4 17,", "J3.5 16, ,51", "J3.6 16,", "16,51 ,53"),
        *("J1.1 86, C4.1", "86,58 ,56", "J1.2 88, ,62", "97,36 J2.1", "J2.2 100, ,39"),
        *("60,60 ,63", "66,60 ,63", "72,60 ,63"),
    ),
    labels=("PWM_H 13,46", "PWM_L 13,47", "EN 13,48"),
    power=(
        *("+12V 17,49 270", "GND 16,53", "+48V 86,56", "GND 88,62", "GND C4.2", "GND 100,39"),
        *("+48V 60,60", "PWR_FLAG 60,63 180", "+12V 66,60", "PWR_FLAG 66,63 180", "PWR_FLAG 72,60", "GND 72,63"),
    ),
    notes=(
        ("control", "8,42"),
        ("supply", "80,54"),
        ("phase to the pump", "98,33"),
        ("mounting holes", "36,58"),
        ("supplied from outside", "60,57"),
    ),
)

HALF_BRIDGE_SHEET = LEG.plus(_OWN)
# The turn-off branch lands on the gate's side of the bead.
BEAD_ONE_EDGE_SHEET = HALF_BRIDGE_SHEET.rewired(away=(_OFF_H,), instead=("R2.1 73, ,28",))
# The joint of the lower gate's resistors leads on to the gate.
BARE_LEG = LEG.without("FB2").rewired(away=_BEAD_L, instead=("R4.2 62, TP2.1 74, Q2.1",))
