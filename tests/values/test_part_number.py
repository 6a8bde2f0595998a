from __future__ import annotations

import pytest

from gatecheck.values import Kind
from gatecheck.values.part_number import hint, part_number
from gatecheck.values.scanner import scanned

# All part numbers are invented; the patterns are common practice.


@pytest.mark.parametrize(
    ("text", "kind", "number"),
    [
        ("10R XRC0603FR-0710RL", Kind.RESISTOR, "XRC0603FR-0710RL"),
        ("987654321", Kind.BEAD, "987654321"),
        ("XS34", Kind.DIODE, "XS34"),
        ("2N9002", Kind.TRANSISTOR, "2N9002"),
        ("XS34", Kind.RESISTOR, None),
        ("X7R C0G", Kind.CAPACITOR, None),
        ("ZD16V", Kind.DIODE, None),
        ("Q_NMOS_GDS", Kind.TRANSISTOR, None),
    ],
)
def test_part_numbers(text: str, kind: Kind, number: str | None) -> None:
    assert part_number(scanned(text), kind=kind) == number


@pytest.mark.parametrize(
    ("number", "ohm", "package"),
    [
        ("XBM18PG330SN1", 33.0, "0603"),
        ("XBM15AX102", 1000.0, "0402"),
        ("XPZ1608S601A", 600.0, "0603"),
        ("XHZ1206P121R", 120.0, "1206"),
        ("XHZ9999P121R", 120.0, None),
    ],
)
def test_bead_patterns(number: str, ohm: float, package: str | None) -> None:
    guess = hint(number, kind=Kind.BEAD)
    assert guess is not None
    assert (guess.amount, guess.package) == (ohm, package)
    assert "hint" in guess.flags


@pytest.mark.parametrize("number", ["987654321", "XABC2029A", "XBM18PG337SN1", "XBM18PG030SN1"])
def test_bead_patterns_that_tell_nothing(number: str) -> None:
    assert hint(number, kind=Kind.BEAD) is None


@pytest.mark.parametrize(
    ("number", "volt", "flags"),
    [
        ("XMBJ24A", 24.0, {"hint", "standoff"}),
        ("XMBJ24CA", 24.0, {"hint", "standoff", "bidirectional"}),
        ("XMBJ6.5CA", 6.5, {"hint", "standoff", "bidirectional"}),
        ("XZX84C5V1", 5.1, {"hint"}),
        ("XZX84-B12", 12.0, {"hint"}),
    ],
)
def test_diode_patterns(number: str, volt: float, flags: set[str]) -> None:
    guess = hint(number, kind=Kind.DIODE)
    assert guess is not None
    assert guess.amount == volt
    assert guess.flags == flags


@pytest.mark.parametrize("kind", [Kind.RESISTOR, Kind.CAPACITOR, Kind.INDUCTOR, Kind.TRANSISTOR])
def test_other_kinds_have_no_hints(kind: Kind) -> None:
    assert hint("XBM18PG330SN1", kind=kind) is None


def test_a_plain_diode_number_tells_nothing() -> None:
    assert hint("1N9148", kind=Kind.DIODE) is None
