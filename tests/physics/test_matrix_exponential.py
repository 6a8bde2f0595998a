from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.physics.matrix_exponential import matrix_exponential, quadratic_integral


@given(
    seed=st.integers(0, 10_000),
    size=st.integers(1, 9),
    scale=st.floats(1e-6, 30.0),
    spread=st.floats(0.0, 3.0),
)
@settings(deadline=None)
def test_equals_scipy(seed: int, size: int, scale: float, spread: float) -> None:
    from scipy.linalg import expm

    rng = np.random.default_rng(seed)
    matrix = rng.normal(size=(3, size, size)) * scale
    matrix *= 10.0 ** (spread * rng.random(size=(3, size, 1)))
    matrix -= np.abs(matrix).sum(axis=-1).max() * np.eye(size)  # decaying, as every passive network
    found = matrix_exponential(state_matrix_per_s=matrix, time_s=np.array([0.0, 0.3, 1.0]))
    for place, time_s in enumerate((0.0, 0.3, 1.0)):
        assert found[place] == pytest.approx(expm(matrix[place] * time_s), rel=1e-10, abs=1e-13)


def test_defective_matrix() -> None:
    # Critical damping has a double pole and no full set of eigenvectors: exp([[a,1],[0,a]] t) = e^at
    # [[1,t],[0,1]].
    found = matrix_exponential(state_matrix_per_s=np.array([[-2.0, 1.0], [0.0, -2.0]]), time_s=np.array(1.5))
    assert found == pytest.approx(np.exp(-3.0) * np.array([[1.0, 1.5], [0.0, 1.0]]), rel=1e-13)


def test_rotation_over_many_turns() -> None:
    # A lossless circuit: exp of a rotation generator is a rotation, after a thousand turns too.
    omega = 2.0 * np.pi * 1000.25
    found = matrix_exponential(state_matrix_per_s=np.array([[0.0, -omega], [omega, 0.0]]), time_s=np.array(1.0))
    assert found == pytest.approx(np.array([[0.0, -1.0], [1.0, 0.0]]), abs=1e-11)


def test_what_is_not_finite_stays_so_and_spoils_no_neighbour() -> None:
    matrix = np.array([[[np.nan]], [[-1.0]], [[-np.inf]]])
    found = matrix_exponential(state_matrix_per_s=matrix, time_s=np.ones(3))[:, 0, 0]
    assert np.isnan(found).tolist() == [True, False, True]
    assert float(found[1]) == pytest.approx(np.exp(-1.0))


@given(seed=st.integers(0, 10_000), size=st.integers(1, 7), spread=st.floats(0.0, 5.0))
@settings(deadline=None)
def test_quadratic_integral_equals_scipy(seed: int, size: int, spread: float) -> None:
    from scipy.linalg import solve_continuous_lyapunov

    rng = np.random.default_rng(seed)
    skew = rng.normal(size=(size, size))
    matrix = skew - skew.T - np.diag(10.0 ** (spread * rng.random(size)))
    start = rng.normal(size=size)
    found = quadratic_integral(state_matrix_per_s=matrix, start_au=start)
    expected = solve_continuous_lyapunov(matrix, -np.outer(start, start))
    assert found == pytest.approx(expected, rel=1e-7, abs=1e-11 * np.abs(expected).max())


def test_quadratic_integral_of_a_single_decay() -> None:
    # integral of exp(-2 a t) is 1 / (2 a).
    rates = np.array([1e-3, 1.0, 1e9])
    found = quadratic_integral(state_matrix_per_s=-rates[:, None, None], start_au=np.ones((3, 1)))
    assert found[:, 0, 0] == pytest.approx(1.0 / (2.0 * rates), rel=1e-12)


def test_quadratic_integral_of_what_grows_is_nan() -> None:
    matrix = np.array([[[1.0]], [[-1.0]]])
    found = quadratic_integral(state_matrix_per_s=matrix, start_au=np.ones((2, 1)))[:, 0, 0]
    assert np.isnan(found).tolist() == [True, False]
