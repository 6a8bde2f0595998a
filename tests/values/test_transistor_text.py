"""Texts are built as public symbol libraries build theirs (common practice); numbers are invented or rounded."""

from __future__ import annotations

from typing import Any

import pytest

from gatecheck.values import TransistorText, parse_transistor_text

SILENT: dict[str, Any] = {
    "channel": None,
    "technology": None,
    "voltage_v": None,
    "current_a": None,
    "on_resistance_ohm": None,
    "gate_charge_c": None,
    "gate_charge_kind": None,
}


def says(text: str, **expected: Any) -> Any:
    return pytest.param(text, TransistorText(**(SILENT | expected)), id=text)


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        says(
            "60A Id, 100V Vds, N-Channel MOSFET, 4.1mOhm Ron, Qg (typ) 58.0nC, TO-220",
            channel="n",
            voltage_v=100.0,
            current_a=60.0,
            on_resistance_ohm=4.1e-3,
            gate_charge_c=58e-9,
            gate_charge_kind="typ",
        ),
        says(
            "30A Id, 1200V Vds, 75mOhm, N-Channel SiC MOSFET, TO-247-4",
            channel="n",
            technology="sic",
            voltage_v=1200.0,
            current_a=30.0,
            on_resistance_ohm=75e-3,
        ),
        says(
            "-13A Id, -60V Vds, 90mOhm Rds, P-Channel MOSFET",
            channel="p",
            voltage_v=60.0,
            current_a=13.0,
            on_resistance_ohm=90e-3,
        ),
        says(
            "35A Id, 80V Vds, 2.4mOhm Ron, 155nC Qgmax",
            voltage_v=80.0,
            current_a=35.0,
            on_resistance_ohm=2.4e-3,
            gate_charge_c=155e-9,
            gate_charge_kind="max",
        ),
        says(
            "70A Id, 40V Vds, 6.3mOhm Ron, 28.1nC Qqd",
            voltage_v=40.0,
            current_a=70.0,
            on_resistance_ohm=6.3e-3,
            gate_charge_c=28.1e-9,
            gate_charge_kind="unknown",
        ),
        says(
            "31A Id, 600V Vds, 70mOhm, N-Channel GaN MOSFET",
            channel="n",
            technology="gan",
            voltage_v=600.0,
            current_a=31.0,
            on_resistance_ohm=70e-3,
        ),
        says("Ideal diode controller, 9-80V operation"),
        says("Q_NMOS_GDS", channel="n"),
        says("Q_NMOS", channel="n"),
        says("NMOS", channel="n"),
        says("Q_PMOS_GSD", channel="p"),
        says(""),
    ],
)
def test_descriptions(text: str, expected: TransistorText) -> None:
    assert parse_transistor_text(text) == expected


@pytest.mark.parametrize(
    ("text", "technology"),
    [
        ("silicon carbide, 1200V", "sic"),
        ("eGaN FET 100V", "gan"),
        ("GaN HEMT 650V", "gan"),
        ("IGBT 600V 40A", "igbt"),
        ("IGBT 650V with SiC diode", "igbt"),
        ("super junction MOSFET", "si"),
        ("Silicon N-channel", "si"),
        ("MOSFET N-channel", None),
        ("IGBT or SiC MOSFET", None),
        ("basic organ", None),
    ],
)
def test_technologies(text: str, technology: str | None) -> None:
    assert parse_transistor_text(text).technology == technology


@pytest.mark.parametrize(
    ("text", "channel"),
    [
        ("N-CH 60V", "n"),
        ("p channel", "p"),
        ("PFET", "p"),
        ("Dual N-Channel", "n"),
        ("N- and P-Channel MOSFET", None),
        ("N-Channel, P-Channel", None),
        ("complementary NMOS", None),
        ("NPN", None),
        ("pin channel", None),
    ],
)
def test_channels(text: str, channel: str | None) -> None:
    assert parse_transistor_text(text).channel == channel


@pytest.mark.parametrize(
    ("text", "field", "number"),
    [
        ("20V Vgs, 100V Vds", "voltage_v", 100.0),
        ("\u00b120V Vgs, 100V", "voltage_v", 100.0),
        ("Vgs(th) 2V, 30V Vds", "voltage_v", 30.0),
        ("60A Id 100V Vds 20V Vgs", "voltage_v", 100.0),
        ("Vce(sat) 1.5V, Vces 1200V", "voltage_v", 1200.0),
        ("10V drive, 60V", "voltage_v", 60.0),
        ("10V, 100Vds, 20Vgs", "voltage_v", 100.0),
        ("30V Vds,20A Id,N-Channel", "current_a", 20.0),
        ("Idm 240A, Id 60A", "current_a", 60.0),
        ("240A pulsed", "current_a", None),
        ("Rg 1.5 ohm, Rds(on) 8mOhm@Vgs=10V", "on_resistance_ohm", 8e-3),
        ("Rds(on) 8mOhm@Vgs=10V, 60V", "voltage_v", 60.0),
        ("4,1mOhm Ron, 100V", "on_resistance_ohm", 4.1e-3),
        ("25C 58nC", "gate_charge_c", 58e-9),
        ("Qgd 10nC, Qg(max) 70nC", "gate_charge_c", 70e-9),
        ("Qgd 10nC", "gate_charge_c", None),
    ],
)
def test_labels_tell_what_is_meant(text: str, field: str, number: float | None) -> None:
    assert getattr(parse_transistor_text(text), field) == number


@pytest.mark.parametrize(
    ("text", "kind"),
    [
        ("Qg 58nC@10V", "typ"),
        ("Qg max 58nC", "max"),
        ("Qgtyp 58nC", "typ"),
        ("58nC", "unknown"),
        ("58nC Qsw", "unknown"),
    ],
)
def test_kinds_of_gate_charge(text: str, kind: str) -> None:
    assert parse_transistor_text(text).gate_charge_kind == kind
