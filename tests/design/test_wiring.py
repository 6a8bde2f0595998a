"""What a drawing connects and how its nets are called; switching off any rule breaks one of these.

The rules are facts of the file format; the wording of each is ours. Where a real board decided between two
readings, the figures are in the project's own measurements.
"""

from __future__ import annotations

import inspect
import textwrap
from dataclasses import dataclass
from typing import TYPE_CHECKING

import pytest

from gatecheck.design import from_sheets, net_names, sheet_nets, wiring
from tests.sheets import design, file, label, nets, sheet, symbol, wire

if TYPE_CHECKING:
    from types import ModuleType

P1, P2 = symbol("P", "P1", "0 0"), symbol("P", "P2", "20 0")
UP = {"a.kicad_sch": file(symbol("P", "P9", "0 0"), label("IN", "0 0", "hierarchical_label"))}
BUS_BELOW = file(
    symbol("P", "P8", "0 0"), label("A1", "0 0"), wire("50 0", "50 50", kind="bus"),
    label("A[0..3]", "50 10", "hierarchical_label"),
)  # fmt: skip
BUS_ABOVE = file(
    P1, label("D1", "0 0"), P2, label("D2", "20 0"), wire("50 0", "50 50", kind="bus"), label("D[0..3]", "50 10"),
    sheet("S", "b.kicad_sch", ("A[0..3]", "50 50")),
)  # fmt: skip
GROUP_ABOVE = file(
    P1, label("X.SCL", "0 0"), wire("50 0", "50 50", kind="bus"), label("X{SDA SCL}", "50 10"),
    sheet("S", "c.kicad_sch", ("Y{SCL,SDA}", "50 50")),
)  # fmt: skip
GROUP_BELOW = file(
    symbol("P", "P8", "0 0"), label("Y.SCL", "0 0"), wire("50 0", "50 50", kind="bus"),
    label("Y{SCL,SDA}", "50 10", "hierarchical_label"),
)  # fmt: skip

# name: (root sheet, other sheets, nets)
DRAWINGS: dict[str, tuple[str, dict[str, str], dict[str, str]]] = {
    "wires join at their ends": (
        file(P1, P2, wire("0 0", "10 0"), wire("10 0", "20 0")),
        {},
        {"Net-(P1-Pad1)": "P1.1 P2.1"},
    ),
    "wires that cross do not": (
        file(P1, P2, symbol("P", "P3", "10 -10"), wire("0 0", "20 0"), wire("10 -10", "10 10")),
        {},
        {"Net-(P1-Pad1)": "P1.1 P2.1", "unconnected-(P3-Pad1)": "P3.1"},
    ),
    "but at a junction": (
        file(P1, P2, symbol("P", "P3", "10 -10"), wire("0 0", "20 0"), wire("10 -10", "10 10"), "(junction (at 10 0))"),
        {},
        {"Net-(P1-Pad1)": "P1.1 P2.1 P3.1"},
    ),
    "a pin on the middle of a wire is not on it": (
        file(P1, P2, symbol("P", "P3", "10 0"), wire("0 0", "20 0")),
        {},
        {"Net-(P1-Pad1)": "P1.1 P2.1", "unconnected-(P3-Pad1)": "P3.1"},
    ),
    "a label takes any place on a wire": (
        file(P1, P2, wire("0 0", "10 0"), label("A", "5 0"), wire("20 0", "30 0"), label("A", "22 0")),
        {},
        {"/A": "P1.1 P2.1"},
    ),
    "pins at one place are one net": (
        file(P1, symbol("P", "P2", "0 0")),
        {},
        {"Net-(P1-Pad1)": "P1.1 P2.1"},
    ),
    "turned first, then mirrored": (
        file(symbol("L", "L1", "100 100 90", "(mirror x)"), symbol("P", "P1", "100 105"), symbol("P", "P2", "90 100")),
        {},
        {"Net-(L1-A)": "L1.1 P1.1", "Net-(L1-B)": "L1.2 P2.1"},
    ),
    "turned, y of symbols points up": (
        file(symbol("L", "L1", "100 100 270"), symbol("P", "P1", "100 105"), symbol("P", "P2", "110 100")),
        {},
        {"Net-(L1-A)": "L1.1 P1.1", "Net-(L1-B)": "L1.2 P2.1"},
    ),
    "a hidden supply pin is on its net": (
        file(symbol("HIDDEN", "U1", "0 0"), P2, symbol("+5V", "#PWR1", "20 0", value="+5V")),
        {},
        {"+5V": "P2.1 U1.14", "unconnected-(U1-IN-Pad1)": "U1.1"},
    ),
    "a supply is called by its value": (
        file(P1, symbol("+5V", "#PWR1", "0 0", value="+5VA")),
        {},
        {"+5VA": "P1.1"},
    ),
    "in old files by its pin": (
        file(P1, symbol("+5V", "#PWR1", "0 0", value="+5VA"), version=20211123),
        {},
        {"+5V": "P1.1"},
    ),
    "a flag names nothing": (
        file(P1, P2, wire("0 0", "20 0"), symbol("FLAG", "#FLG1", "0 0", value="FLAG")),
        {},
        {"Net-(P1-Pad1)": "P1.1 P2.1"},
    ),
    "a local supply stays on its sheet": (
        file(P1, symbol("LOCAL", "#PWR1", "0 0", value="VX"), sheet("S", "d.kicad_sch")),
        {"d.kicad_sch": file(symbol("P", "P9", "0 0"), symbol("LOCAL", "#PWR2", "0 0", value="VX"))},
        {"/VX": "P1.1", "/S/VX": "P9.1"},
    ),
    "a local label meets the supply of its name": (
        file(P1, label("+5V", "0 0"), P2, symbol("+5V", "#PWR1", "20 0", value="+5V")),
        {},
        {"+5V": "P1.1 P2.1"},
    ),
    "a local label meets the global one of its name": (
        file(P1, label("X", "0 0"), P2, label("X", "20 0", "global_label")),
        {},
        {"X": "P1.1 P2.1"},
    ),
    "global labels join everywhere, local ones on their sheet": (
        file(P1, label("X", "0 0", "global_label"), P2, label("Y", "20 0"), sheet("S", "e.kicad_sch")),
        {
            "e.kicad_sch": file(
                symbol("P", "P8", "0 0"),
                label("X", "0 0", "global_label"),
                symbol("P", "P9", "20 0"),
                label("Y", "20 0"),
            )
        },
        {"X": "P1.1 P8.1", "/Y": "P2.1", "/S/Y": "P9.1"},
    ),
    "a pin that is made not to connect never does": (
        file(P1, symbol("NC", "U1", "20 0"), wire("0 0", "20 0")),
        {},
        {"unconnected-(P1-Pad1)": "P1.1", "unconnected-(U1-NC-Pad1)": "U1.1"},
    ),
    "a number drawn twice goes to the first net by name": (
        file(symbol("TWICE", "U1", "0 0"), label("Z", "0 0"), label("A", "10 0")),
        {},
        {"/A": "U1.1"},
    ),
    "a hierarchical label meets the pin of its sheet": (
        file(P1, wire("0 0", "10 0"), sheet("S", "a.kicad_sch", ("IN", "10 0")), sheet("T", "a.kicad_sch")),
        UP,
        {"/S/IN": "P1.1 P9.1", "/T/IN": "P9.1"},
    ),
    "buses map by place": (
        BUS_ABOVE,
        {"b.kicad_sch": BUS_BELOW},
        {"/D1": "P1.1 P8.1", "/D2": "P2.1"},
    ),
    "groups map by name": (
        GROUP_ABOVE,
        {"c.kicad_sch": GROUP_BELOW},
        {"/X.SCL": "P1.1 P8.1"},
    ),
    "stacked numbers are pads of one pin": (
        file(symbol("STACK", "Q1", "0 0"), label("D", "0 0")),
        {},
        {"/D": "Q1.1 Q1.2 Q1.3 Q1.7"},
    ),
    "a jumper joins inside": (
        file(symbol("JUMPER", "J1", "0 0"), P1, symbol("P", "P2", "10 0"), label("A", "0 0")),
        {},
        {"/A": "J1.1 J1.2 P1.1 P2.1"},
    ),
}


@pytest.mark.parametrize("name", DRAWINGS)
def test_drawing_connects(name: str) -> None:
    root, others, wanted = DRAWINGS[name]
    assert nets(root, others) == wanted


@dataclass(frozen=True)
class Mutant:
    """One rule switched off by a change of our own source."""

    module: ModuleType
    function: str
    old: str
    new: str


MUTANTS = {
    "mirrored before it is turned": Mutant(wiring, "_at", "x, y = pin.x, pin.y\n",
        'x, y = (-pin.x if form.mirror == "y" else pin.x), (-pin.y if form.mirror == "x" else pin.y)\n    form = replace(form, mirror="")\n'),
    "labels at ends of wires only": Mutant(sheet_nets, "sheet_nets", "points.join(label.at, line[0])", "pass"),
    "hidden supply pins ignored": Mutant(wiring, "_power", "pin.pin.hidden and pin.name", "False"),
    "buses ignored": Mutant(wiring, "_bus", "names = [", "return\n    names = ["),
    "supplies always called by value": Mutant(wiring, "_power", "use.file.version >= _VALUE_NAMES_POWER", "True"),
    "doubled numbers in file order": Mutant(from_sheets, "_pins", "or net < known.net", ""),
    "local and global labels apart": Mutant(wiring, "_labels", "wiring.joints.join(joint, _local(use, text))",
        'label.kind == "global" or wiring.joints.join(joint, _local(use, text))'),
    "local labels and supplies apart": Mutant(wiring, "_power", "wiring.joints.join(pin.joint, _local(use, text))", "pass"),
    "no-connect pins conduct": Mutant(wiring, "_symbol", 'electrical == "no_connect"', "False"),
    "the middle of a wire connects": Mutant(sheet_nets, "sheet_nets", "    for junction in file.junctions:",
        "    for junction in [*file.junctions, *(symbol.at for symbol in file.symbols)]:"),
    "hierarchical labels meet nothing": Mutant(wiring, "_labels", '("up", use.index, text)', "joint"),
    "global supplies stay on their sheet": Mutant(wiring, "_power", 'symbol.library.power == "local"', "True"),
    "jumpers ignored": Mutant(wiring, "_jumpers", "joints.join(known[0], joint)", "pass"),
    "first name wins, not the strongest": Mutant(net_names, "net_name", "min(namings, key=_order)", "namings[0]"),
}  # fmt: skip


@pytest.mark.parametrize("name", MUTANTS)
def test_every_rule_is_needed(name: str, monkeypatch: pytest.MonkeyPatch) -> None:
    mutant = MUTANTS[name]
    source = textwrap.dedent(inspect.getsource(getattr(mutant.module, mutant.function)))
    assert source.count(mutant.old) == 1
    scope = mutant.module.__dict__ | {"replace": __import__("dataclasses").replace}
    exec(compile(source.replace(mutant.old, mutant.new), "mutant", "exec"), scope)  # noqa: S102 (our own source)
    for module in (wiring, from_sheets, net_names, sheet_nets):
        if getattr(module, mutant.function, None) is getattr(mutant.module, mutant.function):
            monkeypatch.setattr(module, mutant.function, scope[mutant.function])
    assert any(nets(root, others) != wanted for root, others, wanted in DRAWINGS.values())


def test_units_of_one_reference_are_one_part() -> None:
    one, two = (symbol("DUAL", "Q1", f"{x} 0", f"(unit {unit})", uuid=f"u{unit}") for x, unit in ((0, 1), (20, 2)))
    found = design(file(two, one))
    (part,) = found.parts.values()
    assert part.units == (("A", ("2",)), ("B", ("5",)))
    assert part.symbol_path == "/u1"
    assert set(found.nets) == {"unconnected-(Q1A-G-Pad2)", "unconnected-(Q1B-G-Pad5)"}


def test_each_path_has_its_own_references() -> None:
    paths = (
        '(instances (project "p" (path "/top/S" (reference "R1") (unit 1)) (path "/top/T" (reference "R2") (unit 1))))'
    )
    below = {"r.kicad_sch": file(symbol("P", "R?", "0 0", paths, uuid="sym"))}
    found = design(file(sheet("S", "r.kicad_sch"), sheet("T", "r.kicad_sch")), below)
    assert {part.reference: part.symbol_path for part in found.parts.values()} == {"R1": "/S/sym", "R2": "/T/sym"}


def test_version_6_keeps_references_in_the_root() -> None:
    listed = '(symbol_instances (path "/S/sym" (reference "R7") (unit 1) (value "4R7") (footprint "F")))'
    below = {"r.kicad_sch": file(symbol("P", "R?", "0 0", uuid="sym"))}
    (part,) = design(file(sheet("S", "r.kicad_sch"), listed, version=20211123), below).parts.values()
    assert (part.reference, part.value, part.footprint) == ("R7", "4R7", "F")


def test_what_is_on_no_board_is_no_part_but_conducts() -> None:
    bridge = symbol("JUMPER", "J1", "0 0", "(on_board no)")
    found = nets(file(bridge, P1, symbol("P", "P2", "10 0"), label("A", "0 0")))
    assert found == {"/A": "P1.1 P2.1"}


def test_not_fitted_is_kept() -> None:
    (part,) = design(file(symbol("P", "R1", "0 0", "(dnp yes)"))).parts.values()
    assert not part.fitted
