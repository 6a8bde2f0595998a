from __future__ import annotations

import pytest

from gatecheck.values import Kind, parse_value


@pytest.mark.parametrize(
    "text",
    [
        "DNP10R",
        "10 NF",
        "(DNP)",
        "~{DNP}",
        "do not populate",
        "Do-Not-Fit",
        "UNFITTED",
        "not mounted",
        "n/p",
        "10R nc",
    ],
)
def test_words_that_keep_a_resistor_off_the_board(text: str) -> None:
    value = parse_value(text, kind=Kind.RESISTOR)
    assert not value.fitted
    assert value.flags == frozenset()


@pytest.mark.parametrize("text", ["10R", "NPN", "DNA", "10R none", "nominal 10R", "10R omitted2", "P/N 10R"])
def test_words_that_do_not(text: str) -> None:
    assert parse_value(text, kind=Kind.RESISTOR).fitted


@pytest.mark.parametrize("text", ["100 NF", "100 nf", "100nF", "10u 25V NP", "1n NP0", "NP 1u"])
def test_farads_and_polarity_of_capacitors_do_not(text: str) -> None:
    value = parse_value(text, kind=Kind.CAPACITOR)
    assert value.fitted
    assert value.amount is not None


@pytest.mark.parametrize("text", ["NP", "100n NF", "100n DNP", "NC"])
def test_words_that_keep_a_capacitor_off_the_board(text: str) -> None:
    assert not parse_value(text, kind=Kind.CAPACITOR).fitted


def test_a_bracket_around_not_fitted_does_not_make_it_optional() -> None:
    assert "optional" not in parse_value("(10R DNP)", kind=Kind.RESISTOR).flags
