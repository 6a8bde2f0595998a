"""What must hold for any text: no exception, one answer, ordered and finite bounds, documented flags."""

from __future__ import annotations

import math
from dataclasses import astuple

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.values import FLAGS, Kind, TransistorText, Value, parse_transistor_text, parse_value

KINDS = st.sampled_from(list(Kind))
# Pieces of value texts, so that the search meets the grammar more often than with characters alone.
SPACES_AND_CONTROLS = [" ", "  ", "\n", "\u00a0", "\x00", "\ud800"]
NUMBERS = ["0", "1", "4", "7", "10", "47", "100", "103", "000", "0603", "e-9", "e99", "E5"]
MARKS = [*".,@/-+*x%()_~{}$", "//", "||", "..", "${", "\u00b1", "\u2026", "\u00bd"]
UNITS = [*"RrEKkMmGunpFHVAWC", "Hz", "ohm", "\u03a9", "\u00b5", "\u33c0"]
WORDS = ["DNP", "DCR", "pk", "TVS", "CA", "NTC", "FB", "Qg", "Vds", "typ", "max"]
PIECES = st.sampled_from([*SPACES_AND_CONTROLS, *NUMBERS, *MARKS, *UNITS, *WORDS])
TEXTS = st.text(max_size=60) | st.lists(PIECES, max_size=30).map("".join) | st.text(min_size=390, max_size=500)


def check(value: Value, text: str) -> None:
    assert value.raw == text
    assert value.flags <= FLAGS.keys()
    if value.amount is not None:
        assert 0.0 <= value.amount.low <= value.amount.nominal <= value.amount.high < math.inf
        assert "placeholder" not in value.flags
    if value.amount is not None and value.amount.low < value.amount.high:
        assert value.flags & {"ambiguous", "range"}
    for number in astuple(value):
        assert not isinstance(number, float) or 0.0 <= number < math.inf


@settings(max_examples=1500, deadline=None)
@given(text=TEXTS, kind=KINDS)
def test_any_text_has_one_sound_answer(text: str, kind: Kind) -> None:
    value = parse_value(text, kind=kind)
    check(value, text)
    assert parse_value(text, kind=kind) == value


@settings(max_examples=800, deadline=None)
@given(text=TEXTS)
def test_any_transistor_text_has_one_sound_answer(text: str) -> None:
    found = parse_transistor_text(text)
    assert isinstance(found, TransistorText)
    assert parse_transistor_text(text) == found
    assert (found.gate_charge_c is None) == (found.gate_charge_kind is None)
    for number in astuple(found):
        assert not isinstance(number, float) or 0.0 <= number < math.inf


@settings(max_examples=300, deadline=None)
@given(
    mantissa=st.integers(min_value=100, max_value=999),
    prefix=st.sampled_from([("", 1.0), ("k", 1e3), ("M", 1e6), ("m", 1e-3)]),
    unit=st.sampled_from(["ohm", "\u03a9", "R", " Ohm"]),
    tail=st.sampled_from(["", " 1%", "/0603", " 0805 1/8W", "_5%", ", 50V"]),
)
def test_a_resistance_is_read_back_however_it_is_written(
    mantissa: int, prefix: tuple[str, float], unit: str, tail: str
) -> None:
    letter, factor = prefix
    ohm = mantissa / 100 * factor
    coded = f"{mantissa // 100}{letter or 'R'}{mantissa % 100:02}"  # IEC 60062
    for text in (f"{mantissa / 100:.2f}{letter}{unit}{tail}", f"{coded}{tail}"):
        amount = parse_value(text, kind=Kind.RESISTOR).amount
        assert amount is not None
        assert [amount.low, amount.nominal, amount.high] == pytest.approx([ohm] * 3, rel=1e-12)
