"""The notations that engineers use, each with what it must be read as.

The rows are common practice, collected from public design files and from habit; letter codes and tolerance
letters follow IEC 60062, preferred numbers IEC 60063. Every field of the result is compared: what a row does
not name must be None, fitted, unflagged. Part numbers are invented.
"""

from __future__ import annotations

from dataclasses import asdict
from typing import Any

import pytest

from gatecheck.values import Amount, Kind, parse_value

R, FB, L, C, D = Kind.RESISTOR, Kind.BEAD, Kind.INDUCTOR, Kind.CAPACITOR, Kind.DIODE
Q, TH, CMC = Kind.TRANSISTOR, Kind.THERMISTOR, Kind.CHOKE
AT_100_MHZ: dict[str, Any] = {"frequency_hz": 100e6}
SILENT = {
    "frequency_hz": None,
    "current_a": None,
    "peak_current_a": None,
    "dc_resistance_ohm": None,
    "voltage_v": None,
    "power_w": None,
    "tolerance": None,
    "package": None,
    "fitted": True,
    "part_number": None,
}


def row(
    kind: Kind,
    texts: list[str],
    amount: float | tuple[float, float, float] | None,
    flags: str = "",
    described: Kind | None = None,
    **rest: Any,
) -> list[Any]:
    """One notation, spelled in several ways; a triple is low, nominal, high; flags stand in one string."""
    bounds = amount if isinstance(amount, tuple) else (amount, amount, amount)
    expected = SILENT | rest | {"kind": described or kind, "flags": frozenset(flags.split())}
    return [
        pytest.param(text, kind, bounds if amount is not None else None, expected, id=f"{kind}:{text}")
        for text in texts
    ]


RESISTORS = [
    row(
        R,
        ["4R7", "4.7", "4.7R", "4.7r", "4r7", "4.7\u03a9", "4.7\u2126", "4.7 ohm", "4.7 Ohm", "4.7OHM"],
        4.7,
    ),
    row(R, ["4.7 Ohms", "4R70", "4.70", "4,7"], 4.7),
    row(R, ["4E7"], 4.7, "ambiguous"),
    row(R, ["R47", "0R47", ".47", "0.47R", "0.47"], 0.47),
    row(R, ["0", "0R", "0E", "0 ohm", "0R0", "0\u03a9", "ZERO", "JUMPER"], 0.0, "jumper"),
    row(R, ["0R 0603"], 0.0, "jumper", package="0603"),
    row(R, ["10", "10R", "10R0", "10.0", "10 R", "10\u03a9", "10 Ohm"], 10.0),
    row(R, ["10R/0603/1%"], 10.0, package="0603", tolerance=0.01),
    row(
        R,
        ["10R 1% 0603 0.1W", "RES 10 OHM 1% 1/10W 0603", "RES SMD 10 OHM 1% 1/10W 0603"],
        10.0,
        package="0603",
        tolerance=0.01,
        power_w=0.1,
    ),
    row(R, ["10R_0805_1%", "10_0805_1%"], 10.0, package="0805", tolerance=0.01),
    row(R, ["10 1/4W", "10R 1/4W", "10R 0.25W", "10R 250mW"], 10.0, power_w=0.25),
    row(R, ["10R\u00b15%", "10R +/-5%", "10R 5%", "10RJ", "10R J"], 10.0, tolerance=0.05),
    row(R, ["4R7F", "4R7 F", "4R7 1%"], 4.7, tolerance=0.01),
    row(R, ["4k7", "4K7", "4.7k", "4.7K", "4.7k\u03a9", "4700", "4k70", "4.7 kohm", "4.7 k"], 4700.0),
    row(R, ["47R5"], 47.5),
    row(R, ["100R0F"], 100.0, tolerance=0.01),
    row(R, ["1M", "1M0", "1Meg", "1MEG", "1M\u03a9", "1 Mohm", "1000k"], 1e6),
    row(R, ["2m", "2mR", "2mOhm", "2 m\u03a9", "2mohm", "0R002", "R002", "0.002"], 0.002),
    row(R, ["2mOhm 1% 2512"], 0.002, package="2512", tolerance=0.01),
    row(R, ["300\u00b5", "300\u03bc", "300u"], 300e-6),
    row(R, ["0.5mOhm"], 0.5e-3),
    row(R, ["R_Shunt_1mR"], 0.001),
    row(R, ["R_5"], 5.0),
    row(R, ["R_100"], 100.0),
    row(R, ["R_4k7"], 4700.0),
    row(R, ["R_1k5"], 1500.0),
    row(R, ["R_82k"], 82e3),
    row(R, ["42.2k 1%"], 42.2e3, tolerance=0.01),
    row(R, ["52.3k 1%"], 52.3e3, tolerance=0.01),
    row(R, ["10k 1%"], 10e3, tolerance=0.01),
    row(R, ["10k NTC", "NTC 10k"], 10e3, "kind-mismatch", described=TH),
    row(R, ["47k NTC"], 47e3, "kind-mismatch", described=TH),
    row(R, ["PTC 100R"], 100.0, "kind-mismatch", described=TH),
    row(R, ["Thermistor_NTC"], None, "kind-mismatch placeholder", described=TH),
    row(R, ["R100"], (0.1, 0.1, 100.0), "ambiguous"),
    row(R, ["R10"], (0.1, 0.1, 10.0), "ambiguous"),
    row(R, ["103"], (103.0, 103.0, 10e3), "ambiguous"),
    row(R, ["330"], 330.0),
    row(R, ["100"], 100.0),
    row(R, ["220"], 220.0),
    row(R, ["1,000"], (1.0, 1000**0.5, 1000.0), "ambiguous"),
    row(R, ["1.000,0", "1e3", "1E3"], 1000.0),
    row(R, ["1.5e-2"], 0.015),
    row(R, ["10R||10R", "10R//10R"], 5.0),
    row(R, ["2x10R", "2\u00d710R"], (5.0, 10.0, 20.0), "ambiguous"),
    row(R, ["2x10R parallel"], 5.0),
    row(R, ["2x10R series"], 20.0),
    row(R, ["3.3-4.7R"], (3.3, (3.3 * 4.7) ** 0.5, 4.7), "range"),
    row(R, ["4R7\u202610R", "4.7..10R"], (4.7, 47**0.5, 10.0), "range"),
    row(R, ["${RG_ON}", "{RG}"], None, "unresolved"),
    row(R, ["10R DNP", "DNP 10R", "10R (DNP)", "10R/DNP", "10R NF"], 10.0, fitted=False),
    row(R, ["DNP", "DNF", "DNI", "DNS", "NI", "NP", "NM", "NF", "NC", "N.M.", "n.m."], None, fitted=False),
    row(R, ["no stuff", "NOSTUFF", "NOPOP", "not fitted", "do not place", "omit"], None, fitted=False),
    row(R, ["unpopulated", "XDNP", "-", "N/A"], None, fitted=False),
    row(R, ["(10R)", "10R*", "[10R]", "<10R>"], 10.0, "optional"),
    row(R, ["R", "R_Small", "R_US", "~", "", "?", "TBD", "tbd", "X", "xx"], None, "placeholder"),
    row(R, ["SHUNT", "Rgate"], None, "placeholder"),
    row(R, ["10R MELF0207", "10R 0207"], 10.0, package="0207"),
    row(R, ["10R 2512 1W"], 10.0, package="2512", power_w=1.0),
    row(R, ["10R 75V AEC-Q200"], 10.0, voltage_v=75.0),
    row(R, ["10R 100ppm"], 10.0),
    row(R, ["10\u00a0k\u03a9", "10\u33c0", "10 KOHM"], 10e3),
    row(R, ["600R@100MHz"], 600.0, "kind-mismatch", described=FB, **AT_100_MHZ),
]

BEADS = [
    row(
        FB,
        [
            "600R@100MHz",
            "600R @ 100MHz",
            "600R @100 MHz",
            "600\u03a9@100MHz",
            "600 \u03a9 @ 100 MHz",
            "600ohm@100MHz",
            "600Ohm@100MHz",
            "600 Ohm @ 100MHz",
            "600R/100MHz",
            "600R/100M",
            "600@100",
            "600@100MHz",
            "600R 100MHz",
            "Z=600R@100MHz",
            "100MHz 600R",
            "600R(100MHz)",
            "600R_100MHz",
            "600R-100MHz",
            "600R @0.1GHz",
            "600R@100MHZ",
        ],
        600.0,
        **AT_100_MHZ,
    ),
    row(
        FB,
        ["600R", "600", "600\u03a9", "600 ohm", "FB 600R", "FB_600R", "BEAD 600"],
        600.0,
        "assumed-frequency",
        **AT_100_MHZ,
    ),
    row(FB, ["601"], 600.0, "assumed-frequency code", **AT_100_MHZ),
    row(FB, ["121"], 120.0, "assumed-frequency code", **AT_100_MHZ),
    row(FB, ["471"], 470.0, "assumed-frequency code", **AT_100_MHZ),
    row(FB, ["102"], 1000.0, "assumed-frequency code", **AT_100_MHZ),
    row(FB, ["330"], (33.0, 330.0, 330.0), "assumed-frequency ambiguous", **AT_100_MHZ),
    row(FB, ["300"], (30.0, 300.0, 300.0), "assumed-frequency ambiguous", **AT_100_MHZ),
    row(FB, ["220"], (22.0, 220.0, 220.0), "assumed-frequency ambiguous", **AT_100_MHZ),
    row(FB, ["1k@100MHz", "1K0@100MHz", "1kR@100MHz", "1k\u03a9 @100MHz"], 1000.0, **AT_100_MHZ),
    row(FB, ["1kR@1GHz", "1k@1GHz"], 1000.0, frequency_hz=1e9),
    row(
        FB,
        ["120R 3A", "120ohm 3A", "120R/3A", "FB 120R 3A", "120\u03a9 3A"],
        120.0,
        "assumed-frequency",
        current_a=3.0,
        **AT_100_MHZ,
    ),
    row(FB, ["120R, 3A, 0805"], 120.0, "assumed-frequency", current_a=3.0, package="0805", **AT_100_MHZ),
    row(
        FB,
        ["120R@100MHz/3A/30m\u03a9", "120R@100MHz 3A DCR 30m", "120R@100M, 3A, 0.03R"],
        120.0,
        current_a=3.0,
        dc_resistance_ohm=0.03,
        **AT_100_MHZ,
    ),
    row(
        FB,
        ["120R 3A DCR=0.03"],
        120.0,
        "assumed-frequency",
        current_a=3.0,
        dc_resistance_ohm=0.03,
        **AT_100_MHZ,
    ),
    row(FB, ["600R 500mA 0603"], 600.0, "assumed-frequency", current_a=0.5, package="0603", **AT_100_MHZ),
    row(FB, ["600R@100MHz,0.5A,0603"], 600.0, current_a=0.5, package="0603", **AT_100_MHZ),
    row(FB, ["600R/0.5A"], 600.0, "assumed-frequency", current_a=0.5, **AT_100_MHZ),
    row(
        FB,
        ["0.1OHM, 2A, 0805; 600ohm", "0.1OHM, 2A, 0805 + comment 600ohm"],
        600.0,
        "assumed-frequency",
        current_a=2.0,
        dc_resistance_ohm=0.1,
        package="0805",
        **AT_100_MHZ,
    ),
    row(FB, ["30R@100MHz \u00b125%"], 30.0, tolerance=0.25, **AT_100_MHZ),
    row(FB, ["30R 25%"], 30.0, "assumed-frequency", tolerance=0.25, **AT_100_MHZ),
    row(FB, ["30R@100MHz 6A(pk 12A)"], 30.0, current_a=6.0, peak_current_a=12.0, **AT_100_MHZ),
    row(FB, ["10uH"], 10e-6, "kind-mismatch", described=L),
    row(FB, ["0.47uH", "470nH"], 470e-9, "kind-mismatch", described=L),
    row(FB, ["FerriteBead", "Ferrite_Bead", "FerriteBead_Small", "Ferrite_Bead_Small"], None, "placeholder"),
    row(FB, ["Ferrite", "FERRITE", "Ferrite Bead", "BEAD", "FB", "L_Ferrite"], None, "placeholder"),
    row(FB, ["Ferrite_Bead_0603"], None, "placeholder", package="0603"),
    row(FB, ["0R", "0"], 0.0, "jumper"),
    row(FB, ["90R@100MHz (4 pins)"], 90.0, "kind-mismatch", described=CMC, **AT_100_MHZ),
    row(FB, ["CMC 90R"], 90.0, "kind-mismatch assumed-frequency", described=CMC, **AT_100_MHZ),
    row(FB, ["100R@100MHz CAN_CMC"], 100.0, "kind-mismatch", described=CMC, **AT_100_MHZ),
    row(
        FB,
        ["XBM18PG330SN1"],
        33.0,
        "hint assumed-frequency",
        package="0603",
        part_number="XBM18PG330SN1",
        **AT_100_MHZ,
    ),
    row(
        FB,
        ["XPZ2012S601A"],
        600.0,
        "hint assumed-frequency",
        package="0805",
        part_number="XPZ2012S601A",
        **AT_100_MHZ,
    ),
    row(
        FB,
        ["XHZ0603P121R"],
        120.0,
        "hint assumed-frequency",
        package="0603",
        part_number="XHZ0603P121R",
        **AT_100_MHZ,
    ),
    row(FB, ["123456789"], None, part_number="123456789"),
]

INDUCTORS = [
    row(L, ["4u7", "4.7u", "4.7uH", "4.7\u00b5H", "4.7\u03bcH", "4U7", "4.7 uH"], 4.7e-6),
    row(L, ["2R2"], 2.2e-6, "code"),
    row(L, ["4R7"], 4.7e-6, "code"),
    row(L, ["R47"], 0.47e-6, "code"),
    row(L, ["1R0"], 1e-6, "code"),
    row(L, ["53\u00b5H"], 53e-6),
    row(L, ["22u"], 22e-6),
    row(L, ["L_10uH_1A", "10uH/1A"], 10e-6, current_a=1.0),
    row(L, ["10uH 1A 30%"], 10e-6, current_a=1.0, tolerance=0.3),
    row(L, ["100n", "100nH"], 100e-9),
    row(L, ["R10"], 100e-9, "code"),
    row(L, ["101"], (100e-6, 100e-6, 101e-6), "code ambiguous"),
    row(L, ["100"], (10e-6, 10e-6, 100e-6), "code ambiguous"),
]

CAPACITORS = [
    row(C, ["100n", "100nF", "0.1u", "0.1uF", ".1uF", "0u1", "u1", "0.1\u00b5F", "100000p", "100 nF"], 100e-9),
    row(C, ["104"], 100e-9, "code"),
    row(C, ["4n7", "4.7n", "4700p", "0.0047u"], 4.7e-9),
    row(C, ["472"], 4.7e-9, "code"),
    row(C, ["n47", "470p", "470pF"], 470e-12),
    row(C, ["471"], 470e-12, "code"),
    row(C, ["1u/25V/X7R/0603"], 1e-6, voltage_v=25.0, package="0603"),
    row(C, ["1uF 25V", "C_1uF_25V", "1uF/25V X7R"], 1e-6, voltage_v=25.0),
    row(C, ["1u 25V 0603 10%"], 1e-6, voltage_v=25.0, package="0603", tolerance=0.1),
    row(C, ["10u,50V"], 10e-6, voltage_v=50.0),
    row(C, ["15u, 100v"], 15e-6, voltage_v=100.0),
    row(C, ["0.1uF 100V", "C_0.1uF_100V"], 100e-9, voltage_v=100.0),
    row(C, ["47nF 100V"], 47e-9, voltage_v=100.0),
    row(C, ["CP_470uF+"], 470e-6),
    row(C, ["470u/63V"], 470e-6, voltage_v=63.0),
    row(C, ["1200u"], 1.2e-3),
    row(C, ["100"], (10e-12, 100e-12, 100e-12), "assumed-unit ambiguous"),
    row(C, ["22"], 22e-12, "assumed-unit"),
    row(C, ["10mF"], 10e-3),
    row(C, ["10MF"], (10e-6, 1e-7**0.5, 10e-3), "ambiguous"),
    row(C, ["2.2nF C0G 1kV", "2n2 NP0 1000V"], 2.2e-9, voltage_v=1000.0),
    row(C, ["1.5n"], 1.5e-9),
]

DIODES = [
    row(D, ["12V"], 12.0),
    row(D, ["16V", "D_Zener_16V", "Z16", "ZD16V"], 16.0),
    row(D, ["5V1", "5.1V"], 5.1),
    row(D, ["3V3", "D_Zener_3v3"], 3.3),
    row(D, ["18V bidirectional"], 18.0, "bidirectional"),
    row(D, ["TVS 15V CA"], 15.0, "bidirectional standoff"),
    row(D, ["XMBJ24A"], 24.0, "hint standoff", part_number="XMBJ24A"),
    row(D, ["XMBJ24CA"], 24.0, "hint standoff bidirectional", part_number="XMBJ24CA"),
    row(D, ["D", "D_Schottky", "D_Zener", "D_TVS", "DIODESCH", "LED"], None, "placeholder"),
]

NOTATIONS = [case for rows in RESISTORS + BEADS + INDUCTORS + CAPACITORS + DIODES for case in rows]


@pytest.mark.parametrize(("text", "kind", "bounds", "expected"), NOTATIONS)
def test_notation(text: str, kind: Kind, bounds: tuple[float, float, float] | None, expected: dict[str, Any]) -> None:
    value = parse_value(text, kind=kind)
    fields = asdict(value)
    assert fields.pop("raw") == text
    amount = fields.pop("amount")
    assert fields == expected | {name: pytest.approx(expected[name]) for name in numbers(expected)}
    if bounds is None:
        assert amount is None
    else:
        assert (amount["low"], amount["nominal"], amount["high"]) == pytest.approx(bounds, rel=1e-12)


def numbers(expected: dict[str, Any]) -> list[str]:
    return [name for name, datum in expected.items() if isinstance(datum, float)]


def test_an_exact_value_has_equal_bounds() -> None:
    assert parse_value("4u7", kind=L).amount == Amount(4.7e-6, 4.7e-6, 4.7e-6)


def test_long_text_is_cut_and_says_so() -> None:
    text = "10R " + "x" * 1000 + " 22R"
    value = parse_value(text, kind=R)
    assert value.amount == Amount.exactly(10.0)
    assert value.flags == {"cut"}
    assert value.raw == text
