from __future__ import annotations

import numpy as np
import pytest

from gatecheck.physics.bead import crossover_hz, impedance_ohm
from gatecheck.physics.bead_bias import (
    bias_constants,
    biased_bead,
    flux_vs,
    impedance_left_ratio,
    saturation_current_a,
)
from tests.physics.reference_cases import B3


@pytest.mark.parametrize(
    ("exponent", "expected"), [(1.0, [0.8, 2.0 / 3.0, 0.5, 1.0 / 3.0]), (2.0, [16.0 / 17.0, 0.8, 0.5, 0.2])]
)
def test_shape(exponent: float, expected: list[float]) -> None:
    # 1 / (1 + x^n) at x = 1/4, 1/2, 1, 2; exact fractions.
    left = impedance_left_ratio(current_a=np.array([0.25, 0.5, 1.0, 2.0]), half_current_a=1.0, exponent_1=exponent)
    assert left == pytest.approx(np.array(expected), rel=1e-12)


def test_residual_stays() -> None:
    left = impedance_left_ratio(current_a=np.array([0.0, -1.0, 1e6]), half_current_a=1.0, residual_ratio=0.05)
    assert left == pytest.approx(np.array([1.0, 0.525, 0.05]), rel=1e-9)


# |Z| of B3 at 1, 10, 100 MHz with I_L 0.5 A, I_R 1.5 A; closed form evaluated apart.
BIASED = [
    (0.0, 2.8283, 27.612, 115.993),
    (0.25, 2.2631, 22.2626, 108.8492),
    (0.5, 1.4151, 14.0393, 89.5894),
    (1.0, 0.5680, 5.6473, 47.9609),
    (2.0, 0.1738, 1.6647, 15.6900),
]


@pytest.mark.parametrize(("current", "at_1", "at_10", "at_100"), BIASED)
def test_biased_bead(current: float, at_1: float, at_10: float, at_100: float) -> None:
    bead = biased_bead(B3, current_a=current, inductance_half_current_a=0.5, resistance_half_current_a=1.5)
    sizes = np.abs(impedance_ohm(bead, frequency_hz=np.array([1e6, 1e7, 1e8])))
    assert sizes == pytest.approx(np.array([at_1, at_10, at_100]), rel=1e-4, abs=6e-5)


def test_bias_moves_the_crossover_up_first() -> None:
    # The inductance goes at half the current at which the resistance does (own reasoning from Snoek's limit).
    currents = np.array([0.0, 0.25, 0.5, 1.0])
    bead = biased_bead(B3, current_a=currents, inductance_half_current_a=0.5, resistance_half_current_a=1.5)
    assert np.all(np.diff(crossover_hz(bead)) > 0.0)


@pytest.mark.parametrize(("half", "exponent"), [(0.5, 2.0), (1.3, 1.4), (0.2, 3.0)])
def test_constants_return_from_two_points(half: float, exponent: float) -> None:
    first, second = (
        impedance_left_ratio(current_a=current, half_current_a=half, exponent_1=exponent) for current in (0.3, 0.9)
    )
    found = bias_constants(first_current_a=0.3, first_left_ratio=first, second_current_a=0.9, second_left_ratio=second)
    assert [float(part) for part in found] == pytest.approx([half, exponent], rel=1e-9)


@pytest.mark.parametrize(
    ("first", "second", "current"), [(1.0, 0.5, 1.0), (0.5, 0.0, 1.0), (0.5, 0.5, 1.0), (0.8, 0.4, 0.3)]
)
def test_constants_refuse_what_fits_nothing(first: float, second: float, current: float) -> None:
    half, exponent = bias_constants(
        first_current_a=0.3, first_left_ratio=first, second_current_a=current, second_left_ratio=second
    )
    assert np.isnan(half)
    assert np.isnan(exponent)


@pytest.mark.parametrize(("turns", "expected_a"), [(5, 0.2), (1, 1.1)])
def test_order_of_the_saturation_current(turns: int, expected_a: float) -> None:
    # 0.35 T, mu_i 500, path 2 mm: 560 A/m, hence 0.2 A with five turns and 1.1 A with one (evaluated apart).
    found = saturation_current_a(
        saturation_t=0.35, initial_permeability_ratio=500.0, path_length_m=2e-3, turns_count=turns
    )
    assert float(found) == pytest.approx(expected_a, rel=0.12)
    assert float(found) * turns / 2e-3 == pytest.approx(557.0, rel=1e-3)


def test_flux_is_the_integral_of_the_inductance() -> None:
    # Second opinion: trapezoidal integral of L_s + (L_0 - L_s) / (1 + (i / I_0)^2).
    current = np.linspace(0.0, 3.0, 20001)
    left = impedance_left_ratio(current_a=current, half_current_a=0.5, residual_ratio=0.05)
    integral = float(np.sum(0.5 * (left[1:] + left[:-1]) * np.diff(current))) * 0.45e-6
    flux = flux_vs(current_a=3.0, inductance_h=0.45e-6, half_current_a=0.5, residual_ratio=0.05)
    assert float(flux) == pytest.approx(integral, rel=1e-7)
