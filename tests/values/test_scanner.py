from __future__ import annotations

import pytest

from gatecheck.values.scanner import MAX_LENGTH, Quantity, Scan, Word, normalised, scanned


def scan(text: str) -> Scan:
    return scanned(normalised(text))


def only(text: str) -> Quantity:
    (quantity,) = scan(text).quantities
    return quantity


@pytest.mark.parametrize(
    ("text", "number", "unit"),
    [
        ("100MHz", 100e6, "Hz"),
        ("100mHz", 100e6, "Hz"),  # nobody means millihertz
        ("250mW", 0.25, "W"),
        ("1/8W", 0.125, "W"),
        ("1kV", 1000.0, "V"),
        ("25Vdc", 25.0, "V"),
        ("5 Amps", 5.0, "A"),
        ("58.0nC", 58e-9, "C"),
        ("10 milliohm", 0.01, "ohm"),
        ("4\u03a97", 4.7, "ohm"),
        ("\uff11\uff10\u03a9", 10.0, "ohm"),
        ("5V1", 5.1, "V"),
        ("1A5", 1.5, "A"),
        ("30 %", 30.0, "%"),
    ],
)
def test_quantities(text: str, number: float, unit: str) -> None:
    assert only(text).number == pytest.approx(number, rel=1e-12)
    assert only(text).unit == unit


@pytest.mark.parametrize(
    ("text", "tolerance"), [("10RJ", 0.05), ("10R5%", 0.05), ("10K1%", 0.01), ("4k7F", 0.01), ("10R", None)]
)
def test_tolerance_glued_to_a_number(text: str, tolerance: float | None) -> None:
    assert only(text).tolerance == tolerance


@pytest.mark.parametrize(("text", "count"), [("2x10R", 2), ("4 x 10k", 4), ("10Rx2", 2), ("10R x3", 3), ("10R", 1)])
def test_counts(text: str, count: int) -> None:
    assert only(text).count == count


@pytest.mark.parametrize(
    "text",
    ["XBM18PG330SN1", "1N4148", "2N7002", "XRC0603FR-0710RL", "XSS84", "1.2.3", "6.3x5.4"],
)
def test_numbers_inside_a_run_of_letters_and_digits_are_none(text: str) -> None:
    assert scan(text).tokens == (Word(text),)


def test_many_digits_are_an_order_code_unless_they_are_round() -> None:
    assert scan("123456789").tokens == (Word("123456789"),)
    assert only("12340000").number == 1.234e7
    assert scan("12345000").tokens == (Word("12345000"),)


@pytest.mark.parametrize(
    ("text", "package"),
    [
        ("10R 0603", "0603"),
        ("R0603", "0603"),
        ("MELF0207", "0207"),
        ("SMD0805", "0805"),
        ("1608", "0603"),  # tenths of a millimetre
        ("2012/10R", "0805"),
        ("TO-247-4", "TO-247-4"),
        ("SOT23", "SOT23"),
        ("D2PAK", "D2PAK"),
        ("12060", None),
        ("1206 ohm", None),
    ],
)
def test_packages(text: str, package: str | None) -> None:
    assert scan(text).package == package


@pytest.mark.parametrize(
    "text",
    [
        "100ppm",
        "50 ppm/K",
        "AEC-Q200",
        "-40\u00b0C",
        "8x10mm",
        "6.3 x",
        "\u00b10.25pF",
        "+/-0.5R",
        "B3950",
        "B=3950K",
    ],
)
def test_asides_do_not_hide_the_value(text: str) -> None:
    resistances = [quantity.number for quantity in scan(f"47k {text}").quantities if quantity.prefix == "k"]
    assert resistances == [47e3]


def test_the_larger_side_of_an_asymmetric_tolerance_counts() -> None:
    assert only("+80/-20%").number == 80.0
    assert only("+20%-80%").number == 80.0


def test_variables() -> None:
    assert scan("${RG}").unresolved
    assert scan("{RG} 1%").unresolved
    assert not scan("~{DNP}").unresolved  # an overbar
    assert not scan("10R{slash}0603").unresolved  # an escaped stroke


def test_a_quantity_knows_its_place() -> None:
    text = "22R || 4k7"
    assert [text[quantity.start : quantity.end] for quantity in scan(text).quantities] == ["22R", "4k7"]


def test_what_stands_behind_an_at_sign_is_marked() -> None:
    assert [quantity.at for quantity in scan("600R @ 100MHz").quantities] == [False, True]


def test_normalising_bounds_the_length() -> None:
    # U+FDFA grows to 18 characters under compatibility normalisation.
    assert len(normalised("\ufdfa" * MAX_LENGTH)) == MAX_LENGTH


def test_fractions_and_minus_signs() -> None:
    assert normalised("10\u03a9\u00bdW \u2212 5\u00b5") == "10\u03a9 1/2W - 5u"
