from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.physics.intervals import INNER_POINTS_COUNT, Interval, propagate, rank_inputs
from gatecheck.physics.ringing import damping_ratio

if TYPE_CHECKING:
    from collections.abc import Mapping

SIGNS = {"external": 1, "internal": 1, "driver": 1, "loop": -1, "input": 1}


def inputs(external: float) -> dict[str, Interval]:
    """A switch of which only class and on resistance are known: gate charge 35.1 to 136 nC."""
    return {
        "external": Interval(0.99 * external, external, 1.01 * external),
        "internal": Interval(0.5, 1.0, 3.0),
        "driver": Interval(0.5, 1.0, 3.0),
        "loop": Interval(6e-9, 11e-9, 20e-9),
        "input": Interval(1.76e-9, 4.38e-9, 10.9e-9),
    }


def zeta(values: Mapping[str, Any]) -> Any:
    return damping_ratio(
        resistance_ohm=values["external"] + values["internal"] + values["driver"],
        inductance_h=values["loop"],
        capacitance_f=values["input"],
    )


@pytest.mark.parametrize(
    ("external", "low", "high"),
    [(0.0, 0.148, 4.04), (1.0, 0.295, 4.72), (2.2, 0.471, 5.54), (4.7, 0.838, 7.24), (10.0, 1.617, 10.85)],
)
def test_damping_of_a_hardly_known_switch(external: float, low: float, high: float) -> None:
    # Corners evaluated apart.
    spread = propagate(zeta, inputs(external), signs=SIGNS)
    assert spread.interval.low_au == pytest.approx(low, rel=3e-3)
    assert spread.interval.high_au == pytest.approx(high, rel=3e-3)
    assert not spread.sampled


def test_best_question_at_one_ohm() -> None:
    # Widths in nepers, evaluated apart: 2.77 as it stands; 1.86 with C_iss known, 2.17 with any of the next
    # three.
    assert propagate(zeta, inputs(1.0), signs=SIGNS).interval.width_neper() == pytest.approx(2.77, abs=0.01)
    ranked = rank_inputs(zeta, inputs(1.0), signs=SIGNS)
    assert ranked[0].name == "input"
    assert ranked[0].fixed_au == pytest.approx(4.38e-9, rel=1e-3)
    assert ranked[0].interval.low_au == pytest.approx(0.466, rel=2e-3)
    assert ranked[0].interval.high_au == pytest.approx(3.00, rel=3e-3)
    assert [gain.interval.width_neper() for gain in ranked[:4]] == pytest.approx([1.86, 2.17, 2.17, 2.17], abs=0.01)
    assert ranked[-1].name == "external"


def test_either_answer_settles_it() -> None:
    # At 2.2 ohm: C_iss leaves 1.55 nepers from 0.744, the loop 1.86 from 0.637, both above a limit of 0.5.
    ranked = rank_inputs(zeta, inputs(2.2), signs=SIGNS)
    assert [gain.name for gain in ranked[:2]] == ["input", "loop"]
    assert [gain.interval.width_neper() for gain in ranked[:2]] == pytest.approx([1.55, 1.86], abs=0.01)
    assert [gain.interval.low_au for gain in ranked[:2]] == pytest.approx([0.744, 0.637], rel=3e-3)


def test_known_inputs_are_no_question() -> None:
    names = {gain.name for gain in rank_inputs(zeta, inputs(0.0), signs=SIGNS)}
    assert names == {"internal", "driver", "loop", "input"}


def test_corners_are_named() -> None:
    spread = propagate(zeta, inputs(1.0), signs=SIGNS)
    assert spread.at_low == {
        "external": 0.99,
        "internal": 0.5,
        "driver": 0.5,
        "loop": 20e-9,
        "input": 1.76e-9,
    }
    assert spread.at_high["loop"] == 6e-9
    assert spread.interval.nominal_au == pytest.approx(float(zeta({k: v.nominal_au for k, v in inputs(1.0).items()})))


@given(external=st.floats(0.0, 20.0))
@settings(deadline=None)
def test_sampling_finds_the_corners_of_a_monotone_function(external: float) -> None:
    by_signs = propagate(zeta, inputs(external), signs=SIGNS).interval
    sampled = propagate(zeta, inputs(external))
    assert sampled.sampled
    assert sampled.interval.low_au == pytest.approx(by_signs.low_au)
    assert sampled.interval.high_au == pytest.approx(by_signs.high_au)


def test_some_inputs_signed_and_the_rest_sampled() -> None:
    # a - b + 1 - (x - 1)^2 rises with a, falls with b, has a hump in x: at most 3 - 1 + 1, least 1 - 2 + 0.
    spans = {"a": Interval(1.0, 2.0, 3.0), "x": Interval(0.0, 0.5, 2.0), "b": Interval(1.0, 1.5, 2.0)}
    spread = propagate(lambda v: v["a"] - v["b"] + 1.0 - (v["x"] - 1.0) ** 2, spans, signs={"a": 1, "b": -1})
    assert spread.sampled
    assert spread.interval.low_au == pytest.approx(-1.0)
    assert spread.interval.high_au == pytest.approx(3.0, abs=0.01)
    assert spread.interval.nominal_au == pytest.approx(1.25)
    assert (spread.at_high["a"], spread.at_high["b"]) == (3.0, 1.0)


def test_sampling_finds_a_hump_inside() -> None:
    # 1 - (x - 1/2)^2 - (y - 1/2)^2 peaks in the middle, away from every corner.
    hump = {"x": Interval(0.0, 0.2, 1.0), "y": Interval(0.0, 0.9, 1.0)}
    spread = propagate(lambda v: 1.0 - (v["x"] - 0.5) ** 2 - (v["y"] - 0.5) ** 2, hump)
    assert spread.interval.low_au == pytest.approx(0.5)
    assert spread.interval.high_au > 0.98


def test_many_inputs_do_not_explode() -> None:
    many = {f"x{place}": Interval(1.0, 1.5, 2.0 + place) for place in range(12)}
    sizes = []

    def total(values: Mapping[str, Any]) -> Any:
        sizes.append(values["x0"].size)
        return np.sum(list(values.values()), axis=0)

    spread = propagate(total, many)
    assert sizes == [1 + 64 + INNER_POINTS_COUNT]
    assert spread.interval.low_au < spread.interval.nominal_au < spread.interval.high_au


def test_the_same_points_every_time() -> None:
    seen: list[Any] = []

    def keep(values: Mapping[str, Any]) -> Any:
        seen.append(np.stack(list(values.values())))
        return values["loop"]

    propagate(keep, inputs(1.0))
    propagate(keep, inputs(1.0))
    assert np.array_equal(seen[0], seen[1])


def test_inner_points_are_spread_evenly() -> None:
    # In every input, any quarter of its logarithmic range holds a quarter of the inner points, give or take
    # four.
    def look(values: Mapping[str, Any]) -> Any:
        for name in ("internal", "loop", "input"):
            low, high = inputs(1.0)[name].low_au, inputs(1.0)[name].high_au
            place = np.log(values[name][-INNER_POINTS_COUNT:] / low) / np.log(high / low)
            counts = np.histogram(place, bins=4, range=(0.0, 1.0))[0]
            assert np.abs(counts - 16).max() <= 4
        return values["loop"]

    propagate(look, inputs(1.0))


def test_what_cannot_be_computed_is_left_out() -> None:
    interval = {"x": Interval(-1.0, 0.5, 2.0)}
    spread = propagate(lambda v: np.where(v["x"] > 0.0, v["x"], np.nan), interval)
    assert spread.interval.high_au == 2.0
    assert spread.interval.low_au > 0.0
    nothing = propagate(lambda v: np.full(v["x"].shape, np.nan), interval)
    assert np.isnan([nothing.interval.low_au, nothing.interval.high_au]).all()


def test_intervals_through_zero_are_compared_by_difference() -> None:
    spans = {"x": Interval(-1.0, 0.0, 1.0), "y": Interval(-0.1, 0.0, 0.1)}
    ranked = rank_inputs(lambda v: v["x"] + v["y"], spans, signs={"x": 1, "y": 1})
    assert [gain.name for gain in ranked] == ["x", "y"]
    assert [gain.left_ratio for gain in ranked] == pytest.approx([0.1 / 1.1, 1.0 / 1.1])


def test_widths() -> None:
    assert Interval(1.0, 2.0, np.e).width_neper() == pytest.approx(1.0)
    assert Interval(2.0, 2.0, 2.0).width_neper() == 0.0
    assert Interval(-1.0, 0.0, 1.0).width_neper() == np.inf
    assert Interval(4.0, 5.0, 9.0).centre_au() == pytest.approx(6.0)
    assert Interval(-1.0, 0.0, 3.0).centre_au() == 1.0
