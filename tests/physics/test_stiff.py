from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest
from numpy.typing import NDArray

from gatecheck.physics import stiff
from gatecheck.physics.stiff import NotIntegrableError, _step, integrate, state_trajectory
from gatecheck.physics.trajectory import value_at

Array = NDArray[np.float64]


@dataclass
class VanDerPol:
    stiffness: float

    def slope_au_per_s(self, state: Array) -> Array:
        x, v = state[..., 0], state[..., 1]
        return np.stack([v, self.stiffness * (1.0 - x**2) * v - x], axis=-1)

    def jacobian_per_s(self, state: Array) -> Array:
        x, v = state[..., 0], state[..., 1]
        matrix = np.zeros((*state.shape, 2))
        matrix[..., 0, 1] = 1.0
        matrix[..., 1, 0] = -2.0 * self.stiffness * x * v - 1.0
        matrix[..., 1, 1] = self.stiffness * (1.0 - x**2)
        return matrix


@dataclass
class Runaway:
    def slope_au_per_s(self, state: Array) -> Array:
        return np.where(np.abs(state) < 1e100, state**2, np.nan)

    def jacobian_per_s(self, state: Array) -> Array:
        return 2.0 * np.minimum(state, 1e100)[..., None]


@dataclass
class Decay:
    rate: float

    def slope_au_per_s(self, state: Array) -> Array:
        return -self.rate * state

    def jacobian_per_s(self, state: Array) -> Array:
        return np.full((*state.shape, 1), -self.rate)


def test_equals_scipy_on_a_stiff_oscillator() -> None:
    from scipy.integrate import solve_ivp

    system = VanDerPol(1000.0)
    solution = integrate(
        system,
        start_au=np.array([2.0, 0.0]),
        duration_s=2000.0,
        scale_au=np.array([1.0, 1000.0]),
        tolerance_ratio=1e-8,
    )
    expected = solve_ivp(
        lambda _t, x: system.slope_au_per_s(x),
        (0.0, 2000.0),
        [2.0, 0.0],
        method="Radau",
        jac=lambda _t, x: system.jacobian_per_s(x),
        rtol=1e-10,
        atol=1e-10,
    ).y[:, -1]
    assert float(solution.state_au[-1, 0]) == pytest.approx(expected[0], rel=1e-3)


def test_the_scheme_is_of_fourth_order() -> None:
    # Halving the step of a smooth problem divides the error of one record by sixteen.
    system = VanDerPol(0.5)
    exact = integrate(
        system, start_au=np.array([1.0, 0.5]), duration_s=1.0, scale_au=np.ones(2), tolerance_ratio=1e-13
    ).state_au[-1]
    errors = []
    for steps in (8, 16, 32):
        state = np.array([1.0, 0.5])
        for _ in range(steps):
            state, _, _ = _step(system, state, np.array(1.0 / steps), np.full(2, 1e-10))
        errors.append(float(np.abs(state - exact).max()))
    orders = np.log2(np.array(errors[:-1]) / np.array(errors[1:]))
    assert orders == pytest.approx([4.0, 4.0], abs=0.25)


def test_a_mode_faster_than_the_step_dies() -> None:
    # L-stability: the amplification of an infinitely fast decaying mode is zero.
    state, _, _ = _step(Decay(1e12), np.array([1.0]), np.array(1.0), np.array([1e-6]))
    assert abs(float(state[0])) < 1e-9


def test_corners_have_their_own_steps() -> None:
    starts = np.array([[2.0, 0.0], [0.1, 0.0], [1.0, 1.0]])
    together = integrate(VanDerPol(5.0), start_au=starts, duration_s=np.array([10.0, 3.0, 7.0]), scale_au=np.ones(2))
    assert together.time_s[:, -1] == pytest.approx([10.0, 3.0, 7.0])
    for place, (start, end) in enumerate(zip(starts, (10.0, 3.0, 7.0), strict=True)):
        alone = integrate(VanDerPol(5.0), start_au=start, duration_s=end, scale_au=np.ones(2))
        assert together.state_au[place, -1] == pytest.approx(alone.state_au[-1], abs=2e-4)


def test_trajectory_between_steps() -> None:
    solution = integrate(
        VanDerPol(0.0),
        start_au=np.array([1.0, 0.0]),
        duration_s=6.0,
        scale_au=np.ones(2),
        tolerance_ratio=1e-7,
    )
    position = state_trajectory(solution, state_index=0)  # without damping: cos t
    for time_s in (0.3, 1.7, 4.4):
        assert float(value_at(position, time_s=time_s)) == pytest.approx(np.cos(time_s), abs=1e-4)


def test_no_end_in_sight_is_an_error(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(stiff, "_MOST_ATTEMPTS", 5)
    with pytest.raises(NotIntegrableError, match="no end"):
        integrate(VanDerPol(1000.0), start_au=np.array([2.0, 0.0]), duration_s=2000.0, scale_au=np.ones(2))


def test_a_singularity_ends_in_an_error() -> None:
    with pytest.raises(NotIntegrableError):
        integrate(Runaway(), start_au=np.array([1.0]), duration_s=2.0, scale_au=np.full(1, 1e15))
