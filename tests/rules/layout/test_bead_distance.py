from __future__ import annotations

import pytest

from gatecheck.finding import Level, Origin, Verdict
from tests.copper.stage import findings_on_board


@pytest.mark.parametrize(("distance_mm", "level"), [(12.2, Level.WARNING), (5.2, Level.NOTE)])
def test_fires_beyond_the_remembered_limits_as_likely(distance_mm: float, level: Level) -> None:
    (fail,) = findings_on_board("bead-distance", bead_mm=distance_mm)
    assert (fail.verdict, fail.level, fail.rests_on) == (Verdict.FAIL, level, Origin.CATALOGUE)
    assert fail.value is not None
    assert fail.value.low == pytest.approx(distance_mm, abs=0.01)
    assert fail.message.startswith("likely: ")
    assert f"{distance_mm - 5:.1f} mm or more" in fail.advice


def test_quiet_near_the_gate() -> None:
    (finding,) = findings_on_board("bead-distance", bead_mm=2)
    assert finding.verdict is Verdict.PASS


def test_exactly_at_the_limit_passes() -> None:
    (finding,) = findings_on_board("bead-distance", "limits: {bead_distance: 3 mm}", bead_mm=3)
    assert finding.verdict is Verdict.PASS


def test_fires_as_an_error_beyond_the_projects_own_limit() -> None:
    (finding,) = findings_on_board("bead-distance", "limits: {bead_distance: 3 mm}", bead_mm=3.05)
    assert (finding.verdict, finding.level, finding.rests_on) == (Verdict.FAIL, Level.ERROR, Origin.GEOMETRY)


def test_nothing_is_said_without_copper_and_undecided_is_left_to_not_judged() -> None:
    assert findings_on_board("bead-distance", bead_mm=2, routed=False) == []
