"""The root sheet of the three-phase stage: three boxes for the legs, and what they share."""

from __future__ import annotations

from .drawing import Drawing

_LETTERS = "ABC"
_TOP = 12
_PITCH = 14
_PINS = "PWM_H:input:left:2 PWM_L:input:left:4 EN:input:left:6 PHASE:output:right:4"


def _leg_wires() -> tuple[str, ...]:
    return tuple(
        wire
        for i, letter in enumerate(_LETTERS)
        for wire in (
            *(f"Leg_{letter}.{pin} 40," for pin in ("PWM_H", "PWM_L", "EN")),
            f"Leg_{letter}.PHASE J{3 + i}.1",
            f"J{3 + i}.2 82, ,{_TOP + 7 + i * _PITCH}",
        )
    )


def _leg_labels() -> tuple[str, ...]:
    return tuple(
        label
        for i, letter in enumerate(_LETTERS)
        for label in (
            *(f"PWM_{letter}{side} 40,{_TOP + 2 + 2 * j + i * _PITCH}" for j, side in enumerate("HL")),
            f"EN 40,{_TOP + 6 + i * _PITCH}",
            f"PHASE_{letter} 70,{_TOP + 4 + i * _PITCH}",
        )
    )


THREE_PHASE_SHEET = Drawing(
    paper="A4",
    symbols=(
        "J2 12,20 0 y",
        *(f"J{3 + i} 86,{_TOP + 4 + i * _PITCH}" for i in range(3)),
        *("J1 12,60 0 y", "C1 22,62", "C2 30,62", "C3 38,62"),
        *("H1 92,62", "H2 97,62", "H3 102,62", "H4 107,62"),
    ),
    wires=(
        *(f"J2.{i} 22," for i in range(1, 9)),
        *("J2.9 20, ,29", "J2.10 20,", "20,29 ,31"),
        *("J1.1 18, C1.1 C2.1 C3.1", "18,60 ,57", "J1.2 16, ,64", "C1.2 C2.2 C3.2", "C1.2 ,66"),
        *("56,60 ,63", "62,60 ,63", "68,60 ,63"),
        *_leg_wires(),
    ),
    labels=(
        *(
            f"PWM_{letter}{side} 16,{20 + 2 * i + j}"
            for i, letter in enumerate(_LETTERS)
            for j, side in enumerate("HL")
        ),
        "EN 16,26",
        *_leg_labels(),
    ),
    power=(
        *("+12V 22,27 270", "GND 20,31", "+48V 18,57", "GND 16,64", "GND 22,66"),
        *("+48V 56,60", "PWR_FLAG 56,63 180", "+12V 62,60", "PWR_FLAG 62,63 180", "PWR_FLAG 68,60", "GND 68,63"),
        *(f"GND 82,{_TOP + 7 + i * _PITCH}" for i in range(3)),
    ),
    sheets=tuple(f"Leg_{letter} 48,{_TOP + i * _PITCH} 18,9 {_PINS}" for i, letter in enumerate(_LETTERS)),
    notes=(
        ("control", "10,17"),
        ("three legs, one sheet", "48,9"),
        ("phases to the pump", "84,13"),
        ("supply and bulk capacitors", "10,54"),
        ("supplied from outside", "56,57"),
        ("mounting holes", "92,58"),
    ),
)
