"""Terminals by pin function, pad name, symbol name and package. Expectations: common practice."""

from __future__ import annotations

import pytest

from gatecheck.catalogue.load import package_of
from gatecheck.networks.circuit import Circuit
from gatecheck.networks.terminals import find_transistors
from tests.circuits import design_of


def terminals(circuit: str) -> list[tuple[str, str | None, str, str, str, str]]:
    design = design_of(circuit)
    found = find_transistors(design, Circuit(design).kinds)
    return [(t.part, t.unit, t.gate_net, t.source_net, t.drain_net, t.kelvin_net) for t in found]


@pytest.mark.parametrize(
    ("line", "want"),
    [
        ("Q1 X G=g D=d S=s", ("Q1", None, "g", "s", "d", "")),
        ("U7 X GATE=g DRAIN=d SOURCE=s", ("U7", None, "g", "s", "d", "")),
        ("Q1 X G=g C=c E=e", ("Q1", None, "g", "e", "c", "")),
        ("Q1 X footprint=TO-247-4 D=d S=s DS=k G=g", ("Q1", None, "g", "s", "d", "k")),
        ("Q1 X footprint=TO-247-3 g d s", ("Q1", None, "g", "s", "d", "")),
        ("Q1 X footprint=SOT-23 g s d", ("Q1", None, "g", "s", "d", "")),
        ("Q1 X footprint=PDFN-8_5x6 s s s g d", ("Q1", None, "g", "s", "d", "")),
        ("Q1 Q_NMOS_DGS footprint=TO-247-3 d g s", ("Q1", None, "g", "s", "d", "")),
        ("Q1 Q_NIGBT_GCE g c e", ("Q1", None, "g", "e", "c", "")),
    ],
)
def test_terminals_of_one_die(line: str, want: tuple[str, ...]) -> None:
    assert terminals(line) == [want]


def test_dual_by_numbers_in_the_names() -> None:
    assert terminals("Q1 X S1=s1 G1=g1 S2=s2 G2=g2 D2=d2 D1=d1") == [
        ("Q1", "A", "g1", "s1", "d1", ""),
        ("Q1", "B", "g2", "s2", "d2", ""),
    ]


def test_dual_with_a_shared_middle_pin() -> None:
    assert terminals("Q1 X D1=bus G1=g1 S1/D2=sw G2=g2 S2=gnd") == [
        ("Q1", "A", "g1", "sw", "bus", ""),
        ("Q1", "B", "g2", "gnd", "sw", ""),
    ]


def test_dual_in_so8_without_numbers() -> None:
    # Pads 1..8 of a dual MOSFET in SO-8 are S1 G1 S2 G2 D2 D2 D1 D1 (common practice).
    assert terminals("Q1 X S=sa G=ga S=sb G=gb D=db D=db D=da D=da") == [
        ("Q1", "A", "ga", "sa", "da", ""),
        ("Q1", "B", "gb", "sb", "db", ""),
    ]


@pytest.mark.parametrize(
    "line", ["Q1 X B=b C=c E=e", "Q1 NPN footprint=SOT-23 b e c", "U1 chip G=g IN=a OUT=b EN=c VCC=d FB=e", "R1 10 a b"]
)
def test_what_has_no_gate(line: str) -> None:
    assert terminals(line) == []


def test_package_class_follows_the_name() -> None:
    sizes = {
        name: getattr(package_of(name, 3), "size", None) for name in ("TO-220-3", "Lib:SOT-23", "SOT-223-3", "R_0603")
    }
    assert sizes == {"TO-220-3": "power", "Lib:SOT-23": "small", "SOT-223-3": "medium", "R_0603": None}
