from __future__ import annotations

import pytest

from gatecheck.values import Kind
from gatecheck.values.reading import (
    capacitance,
    ends_in_tolerance_f,
    impedance,
    inductance,
    other_kind,
    resistance,
    voltage,
)
from gatecheck.values.scanner import Quantity, scanned


def quantity(text: str) -> Quantity:
    (only,) = scanned(text).quantities
    return only


@pytest.mark.parametrize(
    ("text", "readings", "favoured"),
    [  # E as decimal point: common practice; as exponent where that gives no preferred number (our rule)
        ("2E2", (2.2, 200.0), 2.2),
        ("1E5", (1.5, 1e5), 1.5),
        ("47E5", (47.5, 47e5), 47.5),
        ("4E7", (4.7,), 4.7),
        ("1E3", (1000.0,), 1000.0),
        ("10E3", (10e3,), 10e3),
        ("1E0", (1.0,), 1.0),
        ("4E70", (4.7,), 4.7),
        ("10e3", (10e3,), 10e3),
        ("1E-3", (1e-3,), 1e-3),
        ("10E", (10.0,), 10.0),
    ],
)
def test_the_letter_e(text: str, readings: tuple[float, ...], favoured: float) -> None:
    candidate = resistance(quantity(text))
    assert candidate is not None
    assert (candidate.readings, candidate.favoured) == (readings, favoured)


@pytest.mark.parametrize(
    ("text", "readings"),
    [
        ("R47", (0.47,)),
        ("R050", (0.05,)),
        ("R5", (0.5, 5.0)),
        ("R50", (0.5, 50.0)),
        ("R120", (0.12, 120.0)),
    ],
)
def test_a_leading_r_before_a_round_number_may_be_sloppy(text: str, readings: tuple[float, ...]) -> None:
    candidate = resistance(quantity(text))
    assert candidate is not None
    assert candidate.readings == readings


@pytest.mark.parametrize(
    ("text", "readings"),
    [
        ("102", (102.0,)),  # in E96
        ("4700", (4700.0,)),
        ("104", (104.0, 100e3)),
        ("1002", (1002.0, 10e3)),
        ("1081", (1081.0,)),
        ("981", (981.0,)),  # 98 is in no series, so neither reading is better
    ],
)
def test_bare_numbers_of_resistors(text: str, readings: tuple[float, ...]) -> None:
    candidate = resistance(quantity(text))
    assert candidate is not None
    assert candidate.readings == readings


@pytest.mark.parametrize("text", ["10V", "10uH", "10n", "100MHz", "@100", "5%"])
def test_what_is_no_resistance(text: str) -> None:
    assert resistance(quantity(text)) is None


@pytest.mark.parametrize(
    ("text", "farad"),
    [
        ("104K", 100e-9),
        ("104J", 100e-9),
        ("220M", 22e-12),
        ("479", 4.7e-12),
        ("225", 2.2e-6),
        ("0.1", 100e-9),
        ("4700", 4.7e-9),
        ("10MFD", 10e-6),
        ("1F", 1.0),
        ("10m", 10e-3),
        ("4n7F", 4.7e-9),
    ],
)
def test_capacitors(text: str, farad: float) -> None:
    candidate = capacitance(quantity(text))
    assert candidate is not None
    assert candidate.readings == pytest.approx((farad,), rel=1e-12)


@pytest.mark.parametrize("text", ["10k", "10R", "5V", "10kF", "1M"])
def test_what_is_no_capacitance(text: str) -> None:
    assert capacitance(quantity(text)) is None


@pytest.mark.parametrize(
    ("text", "henry"),
    [("101K", 100e-6), ("2R2N", 2.2e-6), ("4.7", 4.7e-6), ("1mH", 1e-3), ("4u7H", 4.7e-6), ("r10", 100e-9)],
)
def test_inductors(text: str, henry: float) -> None:
    candidate = inductance(quantity(text))
    assert candidate is not None
    assert candidate.readings == pytest.approx((henry,), rel=1e-12)


@pytest.mark.parametrize("text", ["600R", "10k", "1A", "@100"])
def test_what_is_no_inductance(text: str) -> None:
    assert inductance(quantity(text)) is None


@pytest.mark.parametrize(("text", "readings"), [("30m", (0.03,)), ("1k", (1e3,)), ("900", (900.0,)), ("125", (125.0,))])
def test_impedances(text: str, readings: tuple[float, ...]) -> None:
    candidate = impedance(quantity(text))
    assert candidate is not None
    assert candidate.readings == readings


def test_voltages() -> None:
    assert voltage(quantity("12V")) is not None
    assert voltage(quantity("@12V")) is None
    assert voltage(quantity("12")) is None


def test_the_letter_f_of_a_resistor_is_its_tolerance() -> None:
    assert ends_in_tolerance_f(quantity("10F"))
    assert ends_in_tolerance_f(quantity("10kF"))
    assert not ends_in_tolerance_f(quantity("10uF"))


@pytest.mark.parametrize(
    ("text", "drawn_as", "other"),
    [
        ("10R", Kind.CAPACITOR, Kind.RESISTOR),
        ("600R", Kind.INDUCTOR, Kind.BEAD),
        ("1k", Kind.INDUCTOR, Kind.BEAD),
        ("10uH", Kind.RESISTOR, Kind.INDUCTOR),
        ("10u", Kind.BEAD, Kind.INDUCTOR),
        ("100n", Kind.RESISTOR, Kind.CAPACITOR),
        ("100pF", Kind.BEAD, Kind.CAPACITOR),
        ("25V", Kind.RESISTOR, None),
        ("@10k", Kind.CAPACITOR, None),
        ("1F", Kind.DIODE, None),
    ],
)
def test_other_kinds(text: str, drawn_as: Kind, other: Kind | None) -> None:
    assert other_kind(quantity(text), kind=drawn_as) is other
