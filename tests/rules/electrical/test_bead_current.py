from __future__ import annotations

import pytest

from gatecheck.finding import Level, Origin, Verdict
from tests.circuits import BRIDGE, findings_of

# 12 V over 10 ohm: at most 1.2 A; at least 0.546 * 12 V / 20 ohm = 0.328 A (peak of a series circuit at a damping of 0.5).
GATES = BRIDGE + "R1 10 ho a\nR2 10 lo b\nFB1 60R@100MHz{} a g1\nFB2 60R@100MHz{} b g2\n"


def said(rating: str, settings: str = "") -> tuple[Verdict, Level, Origin]:
    (finding,) = findings_of(GATES.replace("{}", rating), "bead-current", settings)
    return finding.verdict, finding.level, finding.rests_on


def test_quiet_above_the_most_the_driver_can_push() -> None:
    assert said("/3A") == (Verdict.PASS, Level.NONE, Origin.CATALOGUE)


def test_fires_below_the_least_a_damped_loop_draws_as_a_warning() -> None:
    assert said("/300mA") == (Verdict.FAIL, Level.WARNING, Origin.ASSUMED)


def test_undecided_between_and_asks_for_the_current() -> None:
    (finding,) = findings_of(GATES.replace("{}", "/1A"), "bead-current")
    assert finding.verdict is Verdict.UNDECIDED
    assert {ask.datum for ask in finding.ask} == {"peak_gate_current"}
    assert finding.value is not None
    assert (finding.value.low, finding.value.high) == pytest.approx((1 / 1.2, 1 / 0.3278), rel=1e-3)


def test_undecided_without_a_rating_and_asks_for_it() -> None:
    (finding,) = findings_of(GATES.replace("{}", ""), "bead-current")
    assert finding.verdict is Verdict.UNDECIDED
    assert {ask.datum for ask in finding.ask} == {"rated_current"}


def test_at_the_limit_the_stated_current_equals_the_rating() -> None:
    assert said("/1A", "drive: {peak_current: 1 A}")[0] is Verdict.PASS
    assert said("/1A", "drive: {peak_current: 1.01 A}")[:2] == (Verdict.FAIL, Level.WARNING)


def test_fires_as_an_error_where_the_project_states_the_margin() -> None:
    own = "drive: {peak_current: 1 A}\nlimits: {bead_current_margin: 1.5}"
    assert said("/1A", own) == (Verdict.FAIL, Level.ERROR, Origin.VALUE)
    assert said("/2A", own)[0] is Verdict.PASS


def test_the_projects_rating_beats_the_value() -> None:
    own = "beads: {FB1 FB2: {rated_current: 3 A}}"
    assert said("/300mA", own)[0] is Verdict.PASS


def test_the_stated_voltage_counts() -> None:
    assert said("/3A", "drive: {voltage: 50 V}")[0] is Verdict.UNDECIDED
