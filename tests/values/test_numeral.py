from __future__ import annotations

from itertools import pairwise

import pytest

from gatecheck.values.numeral import (
    E12,
    E24,
    E24_AND_E96,
    EXPONENTS,
    TOLERANCES,
    decimal_readings,
    digit_code,
    is_preferred,
    scaled,
    significant_digits,
)

# IEC 60063, series E96, written down from memory and not by formula.
# fmt: off
E96 = [
    100, 102, 105, 107, 110, 113, 115, 118, 121, 124, 127, 130, 133, 137, 140, 143,
    147, 150, 154, 158, 162, 165, 169, 174, 178, 182, 187, 191, 196, 200, 205, 210,
    215, 221, 226, 232, 237, 243, 249, 255, 261, 267, 274, 280, 287, 294, 301, 309,
    316, 324, 332, 340, 348, 357, 365, 374, 383, 392, 402, 412, 422, 432, 442, 453,
    464, 475, 487, 499, 511, 523, 536, 549, 562, 576, 590, 604, 619, 634, 649, 665,
    681, 698, 715, 732, 750, 768, 787, 806, 825, 845, 866, 887, 909, 931, 953, 976,
]
# fmt: on


def test_series_have_the_numbers_of_iec_60063() -> None:
    assert len(E12) == 12
    assert len(E24) == 24
    assert len(E96) == 96
    expected = E24 | {significant_digits(str(number)) for number in E96}
    assert expected == E24_AND_E96


def test_neighbours_in_e24_differ_by_about_a_tenth() -> None:
    # IEC 60063: the ratio is the 24th root of ten, 1.10; the table is rounded to two digits.
    numbers = [*sorted(int(number) for number in E24), 100]
    ratios = [high / low for low, high in pairwise(numbers)]
    assert min(ratios) > 1.06
    assert max(ratios) < 1.16


@pytest.mark.parametrize("number", ["4.7", "47", "0.047", "470000", "1", "0.1", "10.0"])
def test_preferred_numbers_are_so_in_any_decade(number: str) -> None:
    assert is_preferred(number, series=E12)


@pytest.mark.parametrize("number", ["103", "48", "0.7", "1.01", "0"])
def test_other_numbers_are_not_preferred(number: str) -> None:
    assert not is_preferred(number, series=E24_AND_E96)


@pytest.mark.parametrize(
    ("digits", "number"),
    [  # IEC 60062, examples from memory
        ("103", 10e3),
        ("472", 4700.0),
        ("100", 10.0),
        ("4701", 4700.0),
        ("479", 4.7),
        ("478", 0.47),
    ],
)
def test_digit_code(digits: str, number: float) -> None:
    assert digit_code(digits) == number


@pytest.mark.parametrize("text", ["", "1", "22", "047", "10.3", "12345", "10k", "\u0661\u0660\u0663x"])
def test_what_is_no_digit_code(text: str) -> None:
    assert digit_code(text) is None


def test_digit_code_counts_in_its_unit() -> None:
    assert digit_code("104", exponent=EXPONENTS["p"]) == 100e-9


def test_tolerance_letters() -> None:
    # IEC 60062 (from memory), percent.
    percent = {"B": 0.1, "C": 0.25, "D": 0.5, "F": 1, "G": 2, "J": 5, "K": 10, "M": 20, "N": 30, "Z": 80}
    assert {letter: 100 * fraction for letter, fraction in TOLERANCES.items()} == pytest.approx(percent)


@pytest.mark.parametrize(
    ("written", "readings"),
    [
        ("4.7", ("4.7",)),
        ("4,7", ("4.7",)),
        ("0,100", ("0.100",)),
        ("1,000", ("1.000", "1000")),
        ("1,0000", ("1.0000",)),
        ("1,000,000", ("1000000",)),
        ("1,000.5", ("1000.5",)),
        ("1.000,5", ("1000.5",)),
        ("10 000", ("10000",)),
    ],
)
def test_points_and_commas(written: str, readings: tuple[str, ...]) -> None:
    assert decimal_readings(written) == readings


@pytest.mark.parametrize("prefix", EXPONENTS)
def test_scaling_rounds_once(prefix: str) -> None:
    assert scaled("4.7", exponent=EXPONENTS[prefix]) == float(f"4.7e{EXPONENTS[prefix]}")
