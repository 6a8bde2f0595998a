from __future__ import annotations

import time

import pytest

from gatecheck.values import Kind, parse_transistor_text, parse_value

TEXTS = [
    ("10R/0603/1%", Kind.RESISTOR),
    ("4k7", Kind.RESISTOR),
    ("RES SMD 10 OHM 1% 1/10W 0603", Kind.RESISTOR),
    ("600R@100MHz/3A/30m\u03a9", Kind.BEAD),
    ("Ferrite_Bead_Small", Kind.BEAD),
    ("L_10uH_1A", Kind.INDUCTOR),
    ("1u/25V/X7R/0603", Kind.CAPACITOR),
    ("100n", Kind.CAPACITOR),
    ("D_Zener_16V", Kind.DIODE),
    ("DNP", Kind.RESISTOR),
]
# Each repeats something that a careless pattern would try again from every place.
HOSTILE = [
    "9",
    "1,",
    "10R ",
    "{",
    "1/",
    "a-",
    "R1",
    "10R||",
    "1.",
    "2x",
    "DCR 1A ",
    "do not ",
    "@ ",
    "1 k ",
    "1,000 ",
]
WORST_S = 0.02  # for 400 characters; our choice, some ten times what is needed


@pytest.mark.alone
def test_more_than_twenty_thousand_values_in_a_second() -> None:
    rounds = 300
    best_s = min(timed(rounds) for _ in range(5))
    assert rounds * len(TEXTS) / best_s > 20_000


def timed(rounds: int) -> float:
    start = time.perf_counter()
    for _ in range(rounds):
        for text, kind in TEXTS:
            parse_value(text, kind=kind)
    return time.perf_counter() - start


@pytest.mark.alone
@pytest.mark.parametrize("piece", HOSTILE)
def test_no_text_takes_long(piece: str) -> None:
    text = piece * (100_000 // len(piece))
    for kind in Kind:
        start = time.perf_counter()
        parse_value(text, kind=kind)
        assert time.perf_counter() - start < WORST_S
    start = time.perf_counter()
    parse_transistor_text(text)
    assert time.perf_counter() - start < WORST_S
