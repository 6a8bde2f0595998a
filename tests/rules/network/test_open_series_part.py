from __future__ import annotations

from gatecheck.finding import Level, Verdict
from tests.circuits import BRIDGE, findings_of

LOW = "R2 10 lo g2\n"


def test_fires_with_an_error_and_names_the_part() -> None:
    (fail,) = [
        f
        for f in findings_of(BRIDGE + LOW + "R1 10 ho a\nFB1 60R dnp a g1", "open-series-part")
        if f.verdict is Verdict.FAIL
    ]
    assert (fail.subject, fail.level, fail.edge) == ("Q1", Level.ERROR, None)
    assert fail.places[0].part == "FB1"


def test_quiet_when_all_is_fitted_or_a_way_is_left() -> None:
    for parts in ("R1 10 ho g1", "R1 10 ho g1\nR3 2R2 dnp ho g1"):
        assert {f.verdict for f in findings_of(BRIDGE + LOW + parts, "open-series-part")} == {Verdict.PASS}


def test_at_the_limit_one_edge_left_open_is_named() -> None:
    # The only way off is a diode branch that is not fitted; the on edge has its own diode.
    parts = "D1 SS14 A=ho K=a\nR1 10 a g1\nD2 SS14 dnp A=g1 K=ho"
    (fail,) = [f for f in findings_of(BRIDGE + LOW + parts, "open-series-part") if f.verdict is Verdict.FAIL]
    assert fail.edge == "off"


def test_nothing_is_said_without_a_driver() -> None:
    undriven = "Q1 NMOS footprint=TO-247-3 G=g D=VBUS S=sw\nQ2 NMOS footprint=TO-247-3 G=g2 D=sw S=GND\nL1 10u sw out"
    assert findings_of(undriven, "open-series-part") == []


def test_a_likely_switch_is_never_an_error() -> None:
    thin = """
        Q1 NMOS footprint=TO-252-2 G=g D=d S=GND
        U1 chip XX=o YY=y
        R1 10 dnp o g
        J1 plug 1=d 2=VBUS"""
    (fail,) = findings_of(thin, "open-series-part")
    assert (fail.verdict, fail.level) == (Verdict.FAIL, Level.WARNING)
    assert fail.message.startswith("likely: ")
