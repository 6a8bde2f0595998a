from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.physics.nonnegative import nonnegative_least_squares

if TYPE_CHECKING:
    from numpy.typing import NDArray


def problem(seed: int, rows: int, columns: int) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    rng = np.random.default_rng(seed)
    matrix = rng.normal(size=(rows, columns))
    return (np.abs(matrix) if seed % 2 else matrix), rng.normal(size=rows)


@given(seed=st.integers(0, 10_000), rows=st.integers(2, 40), columns=st.integers(1, 14))
@settings(deadline=None)
def test_as_good_as_scipy(seed: int, rows: int, columns: int) -> None:
    from scipy.optimize import nnls

    matrix, target = problem(seed, rows, columns)
    solution = nonnegative_least_squares(columns_au=matrix, target_au=target)
    _, best = nnls(matrix, target)
    assert solution.min() >= 0.0
    assert np.linalg.norm(matrix @ solution - target) <= best + 1e-10 * np.linalg.norm(target)


@given(seed=st.integers(0, 10_000), rows=st.integers(2, 40), columns=st.integers(1, 14))
@settings(deadline=None)
def test_conditions_of_optimality(seed: int, rows: int, columns: int) -> None:
    # Karush-Kuhn-Tucker: no gradient at positive unknowns, none that would help at zero ones.
    matrix, target = problem(seed, rows, columns)
    solution = nonnegative_least_squares(columns_au=matrix, target_au=target)
    gradient = matrix.T @ (target - matrix @ solution)
    slack = 1e-9 * np.linalg.norm(matrix) * np.linalg.norm(target)
    assert gradient.max() <= slack
    assert np.abs(gradient[solution > 0.0]).max(initial=0.0) <= slack


def test_exact_positive_solution_is_found() -> None:
    matrix, _ = problem(3, 20, 5)
    wanted = np.array([1.0, 0.0, 2.5, 0.3, 4.0])
    found = nonnegative_least_squares(columns_au=matrix, target_au=matrix @ wanted)
    assert found == pytest.approx(wanted, abs=1e-12)


def test_nothing_helps() -> None:
    found = nonnegative_least_squares(columns_au=np.eye(3), target_au=np.array([-1.0, -2.0, 0.0]))
    assert found.tolist() == [0.0, 0.0, 0.0]
