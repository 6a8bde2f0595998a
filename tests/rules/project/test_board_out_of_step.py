from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

from gatecheck.finding import Level, Verdict
from gatecheck.review import review
from tests.sheets import file, label, symbol

if TYPE_CHECKING:
    from pathlib import Path

Parts = dict[str, tuple[str, str, dict[str, tuple[str, str]]]]

# A gate drive of a board and the same as a drawing: driver, resistor, transistor, and a lamp that is no gate's.
PARTS: Parts = {
    "Q1": ("IRF", "Package_TO_SOT_THT:TO-247-3", {"1": ("G", "/GATE"), "2": ("D", "/SW"), "3": ("S", "GND")}),
    "U1": ("half-bridge gate driver", "", {"1": ("HO", "/OUT"), "2": ("VSS", "GND"), "3": ("VDD", "+12V")}),
    "R1": ("10R", "", {"1": ("", "/OUT"), "2": ("", "/GATE")}),
    "L1": ("10u", "", {"1": ("", "VBUS"), "2": ("", "/SW")}),
    "R9": ("1k", "", {"1": ("", "+12V"), "2": ("", "/LED")}),
    "D9": ("LED", "", {"1": ("K", "GND"), "2": ("A", "/LED")}),
}


def board(parts: Parts) -> str:
    forms = []
    for i, (reference, (value, package, pins)) in enumerate(parts.items()):
        pads = "".join(
            f'(pad "{number}" smd rect (at {k} 0) (size 0.5 0.5) (layers "F.Cu") (net "{net}") (pinfunction "{function}"))'
            for k, (number, (function, net)) in enumerate(pins.items())
        )
        fields = f'(property "Reference" "{reference}") (property "Value" "{value}")'
        forms.append(
            f'(footprint "{package or "x:y"}" (layer "F.Cu") (at {10 * i} 0) (path "/{reference}") {fields} {pads})'
        )
    return f'(kicad_pcb (version 20260206) (layers (0 "F.Cu" signal) (2 "B.Cu" signal)) {" ".join(forms)})'


def drawing(parts: Parts) -> str:
    library, items = "", []
    for i, (reference, (value, package, pins)) in enumerate(parts.items()):
        drawn = "".join(
            f'(pin passive line (at {10 * k} 0 0) (name "{function or "~"}") (number "{number}"))'
            for k, (number, (function, _)) in enumerate(pins.items())
        )
        library += f'(symbol "X{i}" (symbol "X{i}_1_1" {drawn}))'
        housed = f'(property "Footprint" "{package}")'
        items.append(symbol(f"X{i}", reference, f"0 {10 * i}", housed, value=value))
        items += [
            label(net.lstrip("/"), f"{10 * k} {10 * i}", "label" if net.startswith("/") else "global_label")
            for k, (_, net) in enumerate(pins.values())
        ]
    return file(*items).replace("(lib_symbols ", f"(lib_symbols {library} ")


def verdicts(folder: Path, drawn: Parts | None) -> list[tuple[Verdict, Level, str]]:
    (folder / "x.kicad_pcb").write_text(board(PARTS))
    if drawn is not None:
        (folder / "x.kicad_sch").write_text(drawing(drawn))
    found = review([folder / "x.kicad_pcb"])
    assert not found.unread
    assert sum(len(one.networks.gates) for one in found.designs) == 1
    mine = [f for f in found.findings if f.rule == "board-out-of-step"]
    assert all(f.subject == "x.kicad_pcb" for f in mine)
    return [(f.verdict, f.level, f.message) for f in mine]


def changed(reference: str, number: str, net: str) -> Parts:
    value, package, pins = PARTS[reference]
    return PARTS | {reference: (value, package, pins | {number: (pins[number][0], net)})}


def test_quiet_when_both_say_the_same(tmp_path: Path) -> None:
    ((verdict, level, _),) = verdicts(tmp_path, PARTS)
    assert (verdict, level) == (Verdict.PASS, Level.NONE)


def test_fires_with_an_error_at_a_gate(tmp_path: Path) -> None:
    ((verdict, level, message),) = verdicts(tmp_path, changed("R1", "2", "/ELSEWHERE"))
    assert (verdict, level) == (Verdict.FAIL, Level.ERROR)
    assert "R1.2 on another net" in message


def test_at_the_limit_of_a_gate_it_is_a_warning(tmp_path: Path) -> None:
    ((verdict, level, message),) = verdicts(tmp_path, changed("R9", "1", "VBUS"))
    assert (verdict, level) == (Verdict.FAIL, Level.WARNING)
    assert "R9.1 on another net" in message


def test_a_part_on_one_side_only_is_named(tmp_path: Path) -> None:
    ((_, level, message),) = verdicts(tmp_path, {k: v for k, v in PARTS.items() if k != "D9"})
    assert (level, "D9 not in the schematic" in message) == (Level.WARNING, True)


@pytest.mark.parametrize("reason", ["no schematic", "half a schematic"])
def test_nothing_is_said_of_what_was_not_read(tmp_path: Path, reason: str) -> None:
    if reason == "no schematic":
        assert verdicts(tmp_path, None) == []
        return
    (tmp_path / "x.kicad_pcb").write_text(board(PARTS))
    sheet = '(sheet (at 0 0) (size 1 1) (uuid "S") (property "Sheetname" "S") (property "Sheetfile" "gone.kicad_sch"))'
    (tmp_path / "x.kicad_sch").write_text(drawing(PARTS)[:-1] + sheet + ")")
    found = review([tmp_path / "x.kicad_pcb"])
    assert [entry.message for entry in found.unread] == ["there is no such file"]
    assert "board-out-of-step" not in {f.rule for f in found.findings}
