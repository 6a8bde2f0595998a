from __future__ import annotations

import numpy as np
import pytest

from gatecheck.physics.trajectory import Trajectory, first_crossing_s, first_maxima, maximum, value_at


def ring(frequency_hz: float, decay_per_s: float, *, points: int = 61, with_curvature: bool = True) -> Trajectory:
    """exp(-a t) sin(w t) over five periods with its exact derivatives."""
    time_s = np.linspace(0.0, 5.0 / frequency_hz, points)
    rate = complex(-decay_per_s, 2.0 * np.pi * frequency_hz)
    wave = np.exp(rate * time_s)
    return Trajectory(
        time_s=time_s,
        value_au=wave.imag,
        slope_au_per_s=(rate * wave).imag,
        curvature_au_per_s2=(rate**2 * wave).imag if with_curvature else None,
    )


def test_maximum_of_a_ring() -> None:
    # tan(w t) = w / a at the first peak; the polynomial is within 3e-5 from 6 samples per period on.
    frequency, decay = 1e7, 5e6
    omega = 2.0 * np.pi * frequency
    peak_s = np.arctan2(omega, decay) / omega
    exact = np.exp(-decay * peak_s) * np.sin(omega * peak_s)
    for points, tolerance in ((31, 3e-5), (61, 1e-6), (301, 1e-10)):
        value, time_s = maximum(ring(frequency, decay, points=points))
        assert float(value) == pytest.approx(exact, rel=tolerance)
        assert float(time_s) == pytest.approx(peak_s, rel=1e3 * tolerance, abs=1e-12)


def test_without_curvature_the_polynomial_is_cubic() -> None:
    # Error of cubic Hermite interpolation: at most h^4 / 384 of the fourth derivative.
    frequency = 1e7
    value, _ = maximum(ring(frequency, 0.0, points=61, with_curvature=False))
    bound = (2.0 * np.pi * 5.0 / 60.0) ** 4 / 384.0
    assert abs(float(value) - 1.0) <= bound


def test_maximum_at_the_ends() -> None:
    time_s = np.linspace(0.0, 1.0, 5)
    rising = Trajectory(time_s=time_s, value_au=time_s, slope_au_per_s=np.ones(5), curvature_au_per_s2=np.zeros(5))
    assert [float(part) for part in maximum(rising)] == [1.0, 1.0]
    assert [float(part) for part in maximum(rising.scaled(factor_ratio=-1.0))] == [0.0, 0.0]


def test_maxima_in_order() -> None:
    frequency, decay = 1e7, 5e6
    values, times = first_maxima(ring(frequency, decay), maxima_count=3, above_au=0.0)
    assert np.diff(times) == pytest.approx(np.full(2, 1.0 / frequency), rel=1e-6)
    assert values[1:] / values[:-1] == pytest.approx(np.full(2, np.exp(-decay / frequency)), rel=1e-6)


def test_maxima_that_are_missing_are_nan() -> None:
    # Peaks fall by exp(-1/2) from 0.88: three are above 0.3.
    values, times = first_maxima(ring(1e7, 5e6), maxima_count=7, above_au=np.array(0.3))
    assert np.isnan(values).tolist() == np.isnan(times).tolist() == [False] * 3 + [True] * 4


def test_crossings_from_both_sides() -> None:
    frequency = 1e7
    trajectory = ring(frequency, 0.0)
    up = first_crossing_s(trajectory, level_au=0.5)
    down = first_crossing_s(trajectory.scaled(factor_ratio=-1.0), level_au=-0.5)
    assert float(up) == pytest.approx(1.0 / 12.0 / frequency, rel=1e-6)  # sin(30 degrees) = 1/2
    assert float(down) == pytest.approx(float(up), rel=1e-12)
    assert np.isnan(first_crossing_s(trajectory, level_au=2.0))


def test_corners_keep_their_own_times() -> None:
    frequencies = [1e6, 1e7, 1e9]
    rings = [ring(frequency, 0.0) for frequency in frequencies]
    stacked = Trajectory(
        time_s=np.stack([one.time_s for one in rings]),
        value_au=np.stack([one.value_au for one in rings]),
        slope_au_per_s=np.stack([one.slope_au_per_s for one in rings]),
    )
    crossings = first_crossing_s(stacked, level_au=0.5)
    assert crossings == pytest.approx(1.0 / 12.0 / np.array(frequencies), rel=1e-4)
    assert maximum(stacked)[1] == pytest.approx(0.25 / np.array(frequencies), rel=1e-2)


def test_value_between_samples_and_beyond_the_ends() -> None:
    trajectory = ring(1e7, 5e6)
    asked = 1.234e-7
    exact = float(np.exp(-5e6 * asked) * np.sin(2e7 * np.pi * asked))
    assert float(value_at(trajectory, time_s=asked)) == pytest.approx(exact, rel=1e-6)
    assert float(value_at(trajectory, time_s=1.0)) == pytest.approx(float(trajectory.value_au[-1]), abs=1e-12)
    assert float(value_at(trajectory, time_s=-1.0)) == pytest.approx(0.0, abs=1e-12)


@pytest.mark.parametrize("with_curvature", [True, False])
def test_joined_pieces_follow_each_other(*, with_curvature: bool) -> None:
    one = ring(1e7, 5e6, with_curvature=with_curvature)
    both = one.joined(one)
    assert both.time_s.size == 2 * one.time_s.size
    assert float(both.time_s[-1]) == pytest.approx(2.0 * float(one.time_s[-1]))
    assert (both.curvature_au_per_s2 is not None) == with_curvature


def test_equal_neighbours_do_no_harm() -> None:
    # A stiff solution repeats a corner's last step where another corner needed more.
    one = ring(1e7, 5e6)
    order = np.sort(np.concatenate([np.arange(61), [5, 5, 20, 60]]))
    doubled = Trajectory(
        time_s=one.time_s[order], value_au=one.value_au[order], slope_au_per_s=one.slope_au_per_s[order]
    )
    plain = Trajectory(time_s=one.time_s, value_au=one.value_au, slope_au_per_s=one.slope_au_per_s)
    assert [float(part) for part in maximum(doubled)] == pytest.approx([float(part) for part in maximum(plain)])
    assert float(first_crossing_s(doubled, level_au=0.5)) == pytest.approx(float(first_crossing_s(plain, level_au=0.5)))
