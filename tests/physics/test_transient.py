from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.physics.trajectory import value_at
from gatecheck.physics.transient import (
    LinearResponse,
    final_state_au,
    linear_response,
    observed,
    record_length_s,
)

if TYPE_CHECKING:
    from numpy.typing import NDArray


def passive(seed: int, size: int) -> NDArray[np.float64]:
    rng = np.random.default_rng(seed)
    skew = rng.normal(size=(size, size)) * 1e8
    return np.asarray(skew - skew.T - np.diag(10.0 ** rng.uniform(6.0, 9.0, size)))


def response(seed: int, size: int) -> tuple[NDArray[np.float64], LinearResponse]:
    rng = np.random.default_rng(seed + 1)
    matrix = passive(seed, size)
    return matrix, linear_response(
        state_matrix_per_s=matrix,
        start_au=rng.normal(size=size),
        source_au_per_s=1e8 * rng.normal(size=size),
        source_slope_au_per_s2=1e15 * rng.normal(size=size),
        duration_s=np.array(1e-7),
    )


@given(seed=st.integers(0, 1000), size=st.integers(1, 6))
@settings(max_examples=20, deadline=None)
def test_equals_a_numerical_integration(seed: int, size: int) -> None:
    # Second opinion: scipy's Radau on the same equation.
    from scipy.integrate import solve_ivp

    rng = np.random.default_rng(seed + 1)
    start, source, slope = rng.normal(size=size), 1e8 * rng.normal(size=size), 1e15 * rng.normal(size=size)
    matrix, found = response(seed, size)
    solved = solve_ivp(
        lambda t, x: matrix @ x + source + slope * t,
        (0.0, 1e-7),
        start,
        method="Radau",
        jac=lambda _t, _x: matrix,
        rtol=1e-9,
        atol=1e-11,
    )
    end = solved.y[:, -1]
    assert final_state_au(found) == pytest.approx(end, rel=1e-5, abs=1e-6 * max(1.0, np.abs(end).max()))


def test_samples_are_exact_everywhere() -> None:
    from scipy.linalg import expm

    matrix, found = response(5, 4)
    for place in (0, 1, 15, 16, 33, 100, 271, 272):
        state = found.decay_au[:, place]
        expected = expm(matrix * float(found.time_s[place])) @ found.decay_au[:, 0]
        assert state == pytest.approx(expected, rel=1e-8, abs=1e-11)


def test_times_rise_from_zero_to_the_duration() -> None:
    _, found = response(2, 3)
    assert float(found.time_s[0]) == 0.0
    assert float(found.time_s[-1]) == pytest.approx(1e-7, rel=1e-12)
    assert np.all(np.diff(found.time_s) > 0.0)


def test_observed_slope_and_curvature_are_derivatives() -> None:
    _, found = response(3, 4)
    watched = observed(found, weights_au=np.array([1.0, -2.0, 0.5, 0.0]))
    assert watched.curvature_au_per_s2 is not None
    # Central differences of the polynomial between dense samples.
    step_s = 1e-13
    for place in (40, 120, 200):
        time_s = float(watched.time_s[place])
        late, early = (float(value_at(watched, time_s=time_s + sign * step_s)) for sign in (1.0, -1.0))
        now = float(watched.value_au[place])
        size = float(np.abs(watched.slope_au_per_s).max())
        assert (late - early) / (2.0 * step_s) == pytest.approx(
            float(watched.slope_au_per_s[place]), rel=1e-3, abs=1e-3 * size
        )
        assert now == pytest.approx(0.5 * (late + early), rel=1e-4, abs=1e-4)


def test_pieces_can_be_chained() -> None:
    matrix, whole = response(7, 4)
    rng = np.random.default_rng(8)
    start, source, slope = rng.normal(size=4), 1e8 * rng.normal(size=4), 1e15 * rng.normal(size=4)
    first = linear_response(
        state_matrix_per_s=matrix,
        start_au=start,
        source_au_per_s=source,
        source_slope_au_per_s2=slope,
        duration_s=np.array(4e-8),
    )
    second = linear_response(
        state_matrix_per_s=matrix,
        start_au=final_state_au(first),
        source_au_per_s=source + slope * 4e-8,
        source_slope_au_per_s2=slope,
        duration_s=np.array(6e-8),
    )
    assert final_state_au(second) == pytest.approx(final_state_au(whole), rel=1e-9)


def test_record_length_follows_the_slowest_mode() -> None:
    # Ten time constants of a decay, four periods of a ring that lasts longer.
    ring = np.array([[-1e6, -1e9], [1e9, -1e6]])
    matrices = np.stack([np.diag([-1e7, -1e9]), ring])
    found = record_length_s(state_matrix_per_s=matrices)
    assert found == pytest.approx([1e-6, 4.0 * 2.0 * np.pi / 1e9])


def test_record_of_a_lossless_mode_is_finite() -> None:
    matrix = np.array([[0.0, -1e9], [1e9, 0.0]])
    assert float(record_length_s(state_matrix_per_s=matrix)) == pytest.approx(8.0 * np.pi / 1e9)


def test_singular_equation_is_refused() -> None:
    with pytest.raises(np.linalg.LinAlgError):
        linear_response(
            state_matrix_per_s=np.zeros((2, 2)),
            start_au=np.ones(2),
            source_au_per_s=np.ones(2),
            source_slope_au_per_s2=np.zeros(2),
            duration_s=np.array(1.0),
        )
