from __future__ import annotations

import pytest

from gatecheck.values import Kind, parse_value


@pytest.mark.parametrize(
    ("text", "current_a", "peak_a"),
    [
        ("600R 6A 12Apk", 6.0, 12.0),
        ("600R Ipk 12A, 6A", 6.0, 12.0),
        ("600R 12A peak", None, 12.0),
        ("600R 500mA", 0.5, None),
        ("600R", None, None),
    ],
)
def test_currents(text: str, current_a: float | None, peak_a: float | None) -> None:
    value = parse_value(text, kind=Kind.BEAD)
    assert (value.current_a, value.peak_current_a) == (current_a, peak_a)


def test_a_saturation_current_is_no_rating() -> None:
    assert parse_value("10uH Isat 3A", kind=Kind.INDUCTOR).current_a is None


def test_a_condition_is_no_rating() -> None:
    assert parse_value("600R @3A", kind=Kind.BEAD).current_a is None


@pytest.mark.parametrize(
    ("text", "kind", "tolerance"),
    [  # letters: IEC 60062
        ("10F", Kind.RESISTOR, 0.01),
        ("10kF", Kind.RESISTOR, 0.01),
        ("4k7 J", Kind.RESISTOR, 0.05),
        ("10R K", Kind.RESISTOR, 0.1),
        ("104K", Kind.CAPACITOR, 0.1),
        ("104M", Kind.CAPACITOR, 0.2),
        ("104Z", Kind.CAPACITOR, 0.8),
        ("100n J", Kind.CAPACITOR, 0.05),
        ("4R7M", Kind.INDUCTOR, 0.2),
        ("100nF +80/-20%", Kind.CAPACITOR, 0.8),
        ("10uF", Kind.CAPACITOR, None),
        ("10k", Kind.RESISTOR, None),
        ("600Z", Kind.BEAD, None),
        ("10R 1% J", Kind.RESISTOR, 0.01),
    ],
)
def test_tolerances(text: str, kind: Kind, tolerance: float | None) -> None:
    assert parse_value(text, kind=kind).tolerance == tolerance
