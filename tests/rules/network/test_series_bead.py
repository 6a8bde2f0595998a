from __future__ import annotations

from gatecheck.finding import Level, Origin, Verdict
from tests.circuits import BRIDGE, findings_of

WITH_BEADS = BRIDGE + "R1 10 ho a\nFB1 60R@100MHz a g1\nR2 10 lo b\nFB2 60R@100MHz b g2\n"
BARE = BRIDGE + "R1 10 ho g1\nR2 10 lo g2\n"
# Four like low sides make it plain that the one without a bead is the odd one.
ODD = BRIDGE + "R1 10 ho a\nFB1 60R@100MHz a g1\nR2 10 lo g2\n"


def test_quiet_where_every_gate_has_its_bead() -> None:
    (finding,) = findings_of(WITH_BEADS, "series-bead")
    assert (finding.verdict, finding.level) == (Verdict.PASS, Level.NONE)
    assert {finding.subject, *finding.also} == {"Q1", "Q2"}


def test_fires_where_like_gates_have_one() -> None:
    like = ODD.replace("D=sw S=GND", "D=sw S=shunt")  # both sources off the rails: like gates
    fail = next(f for f in findings_of(like, "series-bead") if f.verdict is Verdict.FAIL)
    assert (fail.subject, fail.level, fail.rests_on) == ("Q2", Level.WARNING, Origin.VALUE)
    assert [place.part for place in fail.places] == ["R2", "Q2"]
    assert fail.advice


def test_undecided_where_no_gate_has_one_said_once() -> None:
    findings = findings_of(BARE, "series-bead")
    assert {f.verdict for f in findings} == {Verdict.UNDECIDED}
    assert {ask.datum for f in findings for ask in f.ask} == {"input_capacitance"}
    parallel = BARE + "Q3 NMOS footprint=TO-263-2 G=g3 D=VBUS S=sw\nR3 10 ho g3\n"
    subjects = [s for f in findings_of(parallel, "series-bead") for s in (f.subject, *f.also)]
    assert sorted(subjects) == ["Q1", "Q2", "Q3"], "every gate has its verdict"


def test_at_the_limit_a_bead_on_one_edge_only_fails_for_the_other() -> None:
    one_edge = BRIDGE + "R1 10 ho a\nFB1 60R a g1\nD1 SS14 K=ho A=g1\nR2 10 lo b\nFB2 60R b g2\n"
    fail = next(f for f in findings_of(one_edge, "series-bead") if f.verdict is Verdict.FAIL)
    assert (fail.subject, fail.edge, fail.level) == ("Q1", "off", Level.WARNING)


def test_a_shared_bead_is_in_nobodys_own_branch() -> None:
    shared = (
        BRIDGE
        + "R2 10 lo b\nFB2 60R b g2\nFB1 60R ho j\nR1 10 j g1\nR3 10 j g3\nQ3 NMOS footprint=TO-263-2 G=g3 D=VBUS S=sw\n"
    )
    verdicts = {f.subject: f.verdict for f in findings_of(shared, "series-bead")}
    assert verdicts["Q1"] is not Verdict.PASS


def test_a_likely_switch_yields_only_likely_findings() -> None:
    thin = """
        Q1 NMOS footprint=TO-252-2 G=g D=d S=GND
        U1 chip XX=o YY=y
        R1 10 o a
        FB1 60R a g
        D1 SS14 K=o A=g
        J1 plug 1=d 2=VBUS"""
    (fail,) = findings_of(thin, "series-bead")
    assert (fail.rests_on, fail.level) == (Origin.ASSUMED, Level.WARNING)
    assert fail.message.startswith("likely: ")
