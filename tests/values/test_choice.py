from __future__ import annotations

import pytest

from gatecheck.values import Amount, Kind, parse_value


def amount(text: str, kind: Kind = Kind.RESISTOR) -> Amount:
    found = parse_value(text, kind=kind).amount
    assert found is not None
    return found


def bounds(text: str, kind: Kind = Kind.RESISTOR) -> tuple[float, float]:
    found = amount(text, kind)
    return (found.low, found.high)


@pytest.mark.parametrize(
    ("text", "ohm"),
    [  # series and parallel connection: Kirchhoff's laws
        ("22R||22R||22R", 22 / 3),
        ("10R+10R", 20.0),
        ("10R // 30R", 7.5),
        ("10+20", 30.0),
        ("0R||10R", 0.0),
    ],
)
def test_resistors_written_together(text: str, ohm: float) -> None:
    assert bounds(text) == pytest.approx((ohm, ohm))


def test_capacitors_in_parallel_add() -> None:
    assert bounds("10u||1u", Kind.CAPACITOR) == pytest.approx((11e-6, 11e-6))
    assert bounds("10u+100n", Kind.CAPACITOR) == pytest.approx((10.1e-6, 10.1e-6))


def test_several_capacitors() -> None:
    assert bounds("2x10u", Kind.CAPACITOR) == pytest.approx((5e-6, 20e-6))
    assert bounds("2x10u parallel", Kind.CAPACITOR) == pytest.approx((20e-6, 20e-6))
    assert bounds("2x10u series", Kind.CAPACITOR) == pytest.approx((5e-6, 5e-6))


def test_an_array_holds_its_value_several_times() -> None:
    assert bounds("4x10k array") == (10e3, 10e3)


@pytest.mark.parametrize(
    ("text", "low", "high"),
    [
        ("10 to 22R", 10.0, 22.0),
        ("10k-4k7", 4700.0, 10e3),
        ("0-10k", 0.0, 10e3),
        ("1-10k", 1.0, 10e3),  # 1 ohm or 1 kiloohm
    ],
)
def test_ranges_of_resistors(text: str, low: float, high: float) -> None:
    assert bounds(text) == (low, high)
    assert "range" in parse_value(text, kind=Kind.RESISTOR).flags


def test_a_prefix_counts_for_both_ends_of_a_range_of_capacitors() -> None:
    assert bounds("100-220n", Kind.CAPACITOR) == pytest.approx((100e-9, 220e-9))
    assert parse_value("100-220n", kind=Kind.CAPACITOR).flags == {"range"}


def test_a_second_value_makes_the_first_ambiguous() -> None:
    value = parse_value("10R 22R", kind=Kind.RESISTOR)
    assert value.amount == Amount(10.0, 10.0, 22.0)
    assert value.flags == {"ambiguous"}


def test_the_same_value_twice_is_not_ambiguous() -> None:
    assert parse_value("10R (10 ohm)", kind=Kind.RESISTOR).flags == frozenset()


def test_a_unit_beats_a_bare_number() -> None:
    assert amount("SMD 3 10R") == Amount.exactly(10.0)


@pytest.mark.parametrize("text", ["470uF/16V ESR 30m", "470uF +20 -20%"])
def test_farads_beat_a_prefix_alone(text: str) -> None:
    assert amount(text, Kind.CAPACITOR) == Amount.exactly(470e-6)
