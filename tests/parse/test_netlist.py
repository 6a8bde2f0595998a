"""Netlists of both versions, and those that the suite itself exported, held against an independent reader."""

from __future__ import annotations

import subprocess
import sys
import tarfile
import warnings
from typing import TYPE_CHECKING

import pytest

from gatecheck.design.build import from_netlist, pins_by_net
from gatecheck.load import load_design
from gatecheck.parse.document import open_document
from gatecheck.parse.netlist import NetlistFile, read_netlist

if TYPE_CHECKING:
    from pathlib import Path

VERSION_D = """(export (version D)
  (design (source x.sch) (tool "Eeschema 5.1.9"))
  (components
    (comp (ref R12) (value 4R7) (footprint Resistor_SMD:R_0805) (fields (field (name MPN) ABC-1) (field (name Empty)))
      (libsource (lib Device) (part R) (description Resistor)) (sheetpath (names /) (tstamps /)) (tstamp 464AD280))
    (comp (ref Q1) (value ~) (libsource (lib Own) (part NFET)) (sheetpath (names /A/) (tstamps /5A/)) (tstamp 464AD281)))
  (libparts
    (libpart (lib Own) (part MOSFET) (aliases (alias NFET))
      (pins (pin (num 1) (name G) (type input)) (pin (num 2) (name D) (type BiDi)) (pin (num 3) (name ~) (type openCol)))))
  (nets (net (code 1) (name "/HS GATE") (node (ref Q1) (pin 1)) (node (ref R12) (pin 2)))
        (net (code 2) (name GND) (node (ref Q1) (pin 2)))))"""
VERSION_E = """(export (version "E")
  (components (comp (ref "Q1") (value "X") (property (name "dnp")) (property (name "ki_keywords") (value "NMOS"))
      (libsource (lib "Own") (part "F") (description "N MOSFET")) (sheetpath (names "/") (tstamps "/")) (tstamps "uuid")
      (units (unit (name "A") (pins (pin (num "1")) (pin (num "2")))))))
  (nets (net (code "1") (name "/GATE") (class "Default") (node (ref "Q1") (pin "1") (pinfunction "G_1") (pintype "input")))
        (net (code "2") (name "S") (node (ref "Q1") (pin "2") (pinfunction "~{S}") (pintype "passive+no_connect")))
        (net (code "3") (name "T") (node (ref "GHOST") (pin "7")))))"""


def read(text: str) -> NetlistFile:
    return read_netlist(open_document("n.net", text.encode()))


def test_version_d_with_bare_words_aliases_and_old_pin_types() -> None:
    design = from_netlist(read(VERSION_D))
    resistor, transistor = design.parts["R12"], design.parts["Q1"]
    assert (resistor.value, resistor.fields, resistor.description) == ("4R7", {"MPN": "ABC-1", "Empty": ""}, "Resistor")
    assert (resistor.symbol_path, transistor.symbol_path) == ("/464AD280", "/5A/464AD281")
    assert (transistor.value, transistor.library) == ("", "Own:NFET")
    pins = [(pin.number, pin.function, pin.electrical, pin.net) for pin in transistor.pins]
    assert pins == [
        ("1", "G", "input", "/HS GATE"),
        ("2", "D", "bidirectional", "GND"),
        ("3", "", "open_collector", ""),
    ]


def test_version_e_flags_units_and_functions_with_the_pin_number() -> None:
    design = from_netlist(read(VERSION_E))
    part = design.parts["Q1"]
    assert not part.fitted
    assert part.units == (("A", ("1", "2")),)
    assert part.keywords == "NMOS"
    assert [(pin.function, pin.electrical) for pin in part.pins] == [("G", "input"), ("~{S}", "passive+no_connect")]


def test_a_node_of_an_unlisted_part_is_kept() -> None:
    design = from_netlist(read(VERSION_E))
    assert [(pin.part, pin.number) for pin in design.nets["T"]] == [("GHOST", "7")]


def test_a_node_without_a_reference_is_a_trouble_and_the_rest_is_read() -> None:
    netlist = read(VERSION_E.replace('(node (ref "GHOST") (pin "7"))', '(node (pin "7"))'))
    assert ["has no (ref)" in trouble.message for trouble in netlist.troubles] == [True]
    assert "/GATE" in netlist.nets


@pytest.fixture(scope="session")
def exported(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The netlists that travel in a reader's source archive, made by the suite's own exporter (v5 to v9)."""
    folder = tmp_path_factory.mktemp("exported")
    fetch = [sys.executable, "-m", "pip", "download", "-q", "--no-deps", "--no-binary", ":all:", "kinparse==1.2.4"]
    subprocess.run([*fetch, "-d", str(folder)], check=True, capture_output=True, timeout=300)
    (archive,) = folder.glob("kinparse-*.tar.gz")
    with tarfile.open(archive) as packed:
        packed.extractall(folder, filter="data")
    (data,) = folder.glob("kinparse-*/tests/data")
    return data


NETLISTS = [
    "control_board",
    "gaillard",
    "gardenlight",
    "kicad5_test",
    "kicad6_test",
    "kicad8_test",
    "kicad9_test",
    "ref2by2",
    "test",
]


@pytest.mark.parametrize("name", NETLISTS)
def test_exported_netlists_part_for_part_and_pin_for_pin(exported: Path, name: str) -> None:
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # the other reader uses names its own library has since renamed
        import kinparse

        path = exported / f"{name}.net"
        want = kinparse.parse_netlist(path.read_text(encoding="utf-8", errors="replace"))
    netlist = read_netlist(open_document(path.name, path.read_bytes()))
    assert netlist.troubles == ()
    assert sorted(c.reference for c in netlist.components) == sorted(part.ref for part in want.parts)
    blank = {"~": ""}
    assert {c.reference: c.value for c in netlist.components} == {
        p.ref: blank.get(p.value, p.value) for p in want.parts
    }
    assert {(net.name, pin.ref, pin.num) for net in want.nets for pin in net.pins} == {
        (name, node.reference, node.pin) for name, nodes in netlist.nets.items() for node in nodes
    }
    assert len(netlist.nets) > 0


@pytest.mark.parametrize("release", [6, 8, 9])
def test_drawing_of_an_exported_netlist_has_every_pin_in_the_same_company(exported: Path, release: int) -> None:
    def company(suffix: str) -> set[frozenset[tuple[str, str]]]:
        nets = pins_by_net(load_design(exported / f"kicad{release}_test{suffix}").design)
        return {frozenset(pins) for pins in nets.values()}

    assert company(".kicad_sch") == company(".net")
