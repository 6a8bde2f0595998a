from __future__ import annotations

import pytest

from gatecheck.values import Amount, Kind, parse_value


@pytest.mark.parametrize(
    ("text", "drawn_as", "described"),
    [
        ("600R@100", Kind.RESISTOR, Kind.BEAD),
        ("BEAD 600", Kind.RESISTOR, Kind.BEAD),
        ("600R@100MHz", Kind.INDUCTOR, Kind.BEAD),
        ("600R", Kind.INDUCTOR, Kind.BEAD),
        ("10uH @100kHz", Kind.INDUCTOR, Kind.INDUCTOR),
        ("L_Core_Ferrite", Kind.INDUCTOR, Kind.INDUCTOR),
        ("10k@25C", Kind.RESISTOR, Kind.RESISTOR),
        ("10R 50Hz", Kind.RESISTOR, Kind.RESISTOR),
        ("R_FB 10k", Kind.RESISTOR, Kind.RESISTOR),
        ("100nF", Kind.RESISTOR, Kind.CAPACITOR),
        ("10R", Kind.CAPACITOR, Kind.RESISTOR),
        ("common mode choke 10mH", Kind.INDUCTOR, Kind.CHOKE),
        ("100nF", Kind.BEAD, Kind.CAPACITOR),
        ("60V 10A", Kind.TRANSISTOR, Kind.TRANSISTOR),
    ],
)
def test_the_text_tells_the_kind(text: str, drawn_as: Kind, described: Kind) -> None:
    value = parse_value(text, kind=drawn_as)
    assert value.kind is described
    assert ("kind-mismatch" in value.flags) == (described is not drawn_as)


@pytest.mark.parametrize("kind", [Kind.RESISTOR, Kind.BEAD, Kind.INDUCTOR, Kind.CHOKE, Kind.THERMISTOR])
def test_a_jumper_keeps_the_kind_it_is_drawn_as(kind: Kind) -> None:
    value = parse_value("0R", kind=kind)
    assert (value.kind, value.amount) == (kind, Amount.exactly(0.0))
    assert value.flags == {"jumper"}


@pytest.mark.parametrize("kind", [Kind.CAPACITOR, Kind.DIODE])
def test_a_jumper_in_place_of_a_part_that_blocks_is_a_resistor(kind: Kind) -> None:
    value = parse_value("0R", kind=kind)
    assert (value.kind, value.amount) == (Kind.RESISTOR, Amount.exactly(0.0))
    assert value.flags == {"jumper", "kind-mismatch"}


@pytest.mark.parametrize("text", ["0.1OHM, 2A", "30m", "1R", "0.47"])
def test_a_bead_with_one_tiny_ohm_value_has_no_impedance(text: str) -> None:
    value = parse_value(text, kind=Kind.BEAD)
    assert value.amount is None
    assert value.dc_resistance_ohm is not None
    assert value.flags == {"ambiguous"}


def test_ohm_values_of_a_bead_that_lie_close_are_ambiguous() -> None:
    value = parse_value("100R 120R", kind=Kind.BEAD)
    assert value.amount == Amount(100.0, 100.0, 120.0)
    assert value.dc_resistance_ohm is None


@pytest.mark.parametrize("text", ["10uH 30m\u03a9", "10uH DCR 0.03", "10uH/5A/30m", "30mOhm max DCR 10uH"])
def test_the_winding_of_an_inductor(text: str) -> None:
    value = parse_value(text, kind=Kind.INDUCTOR)
    assert value.amount == Amount.exactly(10e-6)
    assert value.dc_resistance_ohm == 0.03


def test_a_choke_has_ohm_at_a_frequency_or_henry() -> None:
    impedance = parse_value("90R@100MHz", kind=Kind.CHOKE)
    inductance = parse_value("10mH 2A", kind=Kind.CHOKE)
    assert (impedance.amount, impedance.frequency_hz) == (Amount.exactly(90.0), 100e6)
    assert (inductance.amount, inductance.frequency_hz) == (Amount.exactly(10e-3), None)


@pytest.mark.parametrize("text", ["Schottky 40V 1A", "40V 1A", "LED 40V"])
def test_the_voltage_of_a_rectifier_is_a_rating(text: str) -> None:
    value = parse_value(text, kind=Kind.DIODE)
    assert (value.amount, value.voltage_v) == (None, 40.0)


def test_the_voltage_of_a_clamp_is_its_value() -> None:
    value = parse_value("TVS 15V 600W SMB", kind=Kind.DIODE)
    assert (value.amount, value.voltage_v, value.power_w) == (Amount.exactly(15.0), None, 600.0)
    assert value.package == "SMB"


def test_a_size_alone_is_a_value_where_it_is_a_preferred_number() -> None:
    # IEC 60063: 1210 is in E96, 2512 is not.
    assert parse_value("1210", kind=Kind.RESISTOR).amount == Amount.exactly(1210.0)
    assert parse_value("2512", kind=Kind.RESISTOR).amount is None


@pytest.mark.parametrize(
    ("text", "kind"),
    [("10M", Kind.INDUCTOR), ("1M", Kind.BEAD), ("4F7", Kind.CAPACITOR), ("X7R", Kind.CAPACITOR)],
)
def test_numbers_that_mean_nothing_are_flagged(text: str, kind: Kind) -> None:
    value = parse_value(text, kind=kind)
    assert value.amount is None
    assert value.flags == {"unread"}
