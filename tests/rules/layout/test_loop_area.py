from __future__ import annotations

from gatecheck.finding import Level, Origin, Verdict
from tests.copper.stage import findings_on_board


def test_fires_by_how_wide_the_loop_is() -> None:
    # 20 mm of gate trace, its return so many millimetres beside it.
    for beside_mm, level in ((3, Level.NOTE), (6, Level.WARNING)):
        (fail,) = findings_on_board("loop-area", bead_mm=2, return_mm=beside_mm)
        assert (fail.verdict, fail.level, fail.rests_on) == (Verdict.FAIL, level, Origin.CATALOGUE)


def test_quiet_where_the_return_is_close() -> None:
    (finding,) = findings_on_board("loop-area", bead_mm=2, return_mm=1)
    assert finding.verdict is Verdict.PASS


def test_at_the_limit_of_the_project() -> None:
    (finding,) = findings_on_board("loop-area", bead_mm=2, return_mm=1)
    assert finding.value is not None
    area = finding.value.high
    (kept,) = findings_on_board("loop-area", f"limits: {{loop_area: {area} mm2}}", bead_mm=2, return_mm=1)
    (broken,) = findings_on_board("loop-area", f"limits: {{loop_area: {area - 0.01} mm2}}", bead_mm=2, return_mm=1)
    assert (kept.verdict, broken.verdict, broken.level) == (Verdict.PASS, Verdict.FAIL, Level.ERROR)


def test_undecided_without_return_copper_and_never_a_fail() -> None:
    (finding,) = findings_on_board("loop-area", bead_mm=2, return_mm=None)
    assert finding.verdict in (Verdict.UNDECIDED, Verdict.PASS)
    (asked,) = findings_on_board("loop-area", "limits: {loop_area: 10 mm2}", bead_mm=2, return_mm=None)
    assert (asked.verdict, asked.level) == (Verdict.UNDECIDED, Level.NONE)
    assert asked.ask
