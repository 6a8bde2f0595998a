"""Oscillation of switches in their active region: growth, unstable window, the resistance that cures it.

While the channel conducts and the drain still has voltage, the transistor amplifies. Gate branch, drain
branch and the capacitances between them then form an oscillator that grows if nothing damps it. In
parallel switches it can live between the devices, where nothing in a shared lead damps it. The circuits
and their poles are in `switch_circuit`.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Callable

    from gatecheck.physics.arrays import BoolArray, ComplexArray, IndexArray, Real, RealArray

_LOWEST_SIEMENS = 0.1  # below this a power switch amplifies nothing; our choice
_EDGE_BISECTIONS = 7  # an edge of the unstable window to 1/128 of a grid step; our choice
_CURE_POINTS = 48  # resistances tried before bisection, 16 per decade; our choice
_CURE_DECADES = 3.0  # from a thousandth of the largest resistance; our choice
_CURE_BISECTIONS = 40  # to 1e-13 of the bracket; our choice


@dataclass(frozen=True, slots=True, kw_only=True)
class OscillationSweep:
    """Worst case over transconductance, corners (...).

    `growth_per_s` (nepers per second, negative where every oscillation decays) with the frequency and the
    transconductance it happens at; `unstable_low_siemens` to `unstable_high_siemens` spans every unstable
    transconductance, nan where there is none.
    """

    growth_per_s: RealArray
    frequency_hz: RealArray
    transconductance_siemens: RealArray
    unstable_low_siemens: RealArray
    unstable_high_siemens: RealArray


def dominant_growth_per_s(*, poles_per_s: ComplexArray) -> RealArray:
    """Growth of the slowest-dying or fastest-growing natural frequency; above zero is unstable.

    Source: definition.
    Valid: any spectrum.

    Args:
        poles_per_s: poles, shape (..., n).

    Returns:
        Nepers per second, shape (...).
    """
    return np.asarray(poles_per_s.real.max(axis=-1))


def fastest_mode(*, poles_per_s: ComplexArray) -> tuple[RealArray, RealArray]:
    """Growth and frequency of the oscillation that grows fastest or dies slowest.

    Decaying real poles, the slow discharge of the gate, are left out; a growing real pole is a relaxation
    oscillation's start and counts, with frequency 0.

    Source: definition.
    Valid: any spectrum; without any such mode the growth is minus infinity and the frequency nan.

    Args:
        poles_per_s: poles, shape (..., n).

    Returns:
        Nepers per second and hertz, each of shape (...).
    """
    counts = (poles_per_s.imag > 0.0) | ((poles_per_s.imag == 0.0) & (poles_per_s.real > 0.0))
    growth = np.where(counts, poles_per_s.real, -np.inf)
    place = np.argmax(growth, axis=-1)[..., None]
    mode = np.take_along_axis(poles_per_s, place, axis=-1)[..., 0]
    found = counts.any(axis=-1)
    return growth.max(axis=-1), np.where(found, mode.imag / (2.0 * math.pi), np.nan)


def growth_neper(*, growth_per_s: Real, time_s: Real) -> RealArray:
    """Growth of an oscillation over the time the switch spends in the active region, 0 if it decays.

    Source: integral of a constant growth rate; an upper bound, as the rate is the worst one met.
    Valid: small signals.

    Args:
        growth_per_s: worst growth rate.
        time_s: time in the active region.

    Returns:
        Nepers; 2.3 of them are a factor of ten.
    """
    return np.asarray(np.maximum(growth_per_s, 0.0) * np.asarray(time_s))


def small_source_resistance_estimate_ohm(
    *, transconductance_siemens: Real, drain_inductance_h: Real, gate_drain_f: Real, input_capacitance_f: Real
) -> RealArray:
    """Quick estimate of the gate resistance that prevents oscillation, g_m L_d C_gd / C_iss^2.

    Source: own derivation from the Routh condition for small R, checked against eigenvalues.
    Valid: no common source inductance; 3 to 38 % high on the sets tried. With 1 nH or more in the source a
        second mode needs several ohms that this misses.

    Args:
        transconductance_siemens: g_m.
        drain_inductance_h: L_d.
        gate_drain_f: C_gd.
        input_capacitance_f: C_iss.

    Returns:
        Ohms in the device's own gate branch.
    """
    gain = np.multiply(transconductance_siemens, drain_inductance_h) * np.asarray(gate_drain_f)
    return np.asarray(gain / np.square(input_capacitance_f))


def sweep_transconductance(
    poles_at: Callable[[RealArray], ComplexArray], *, maximum_siemens: Real, points_count: int = 24
) -> OscillationSweep:
    """Worst growth and unstable window over g_m from 0.1 S to its largest value.

    Source: eigenvalues on a logarithmic grid; peak found by a parabola, window edges by bisection.
    Valid: windows wider than a grid step; a narrower one between two points is missed.

    Args:
        poles_at: gives the poles (m, ..., n) for transconductances of shape (m, ...).
        maximum_siemens: transconductance at the operating current, with an axis for each corner axis.
        points_count: points of the grid.

    Returns:
        The worst case, corners (...).
    """
    top = np.log(np.maximum(np.asarray(maximum_siemens, dtype=np.float64) / _LOWEST_SIEMENS, 1.0 + 1e-9))
    step = top / (points_count - 1)
    place = np.arange(points_count, dtype=np.float64).reshape(-1, *(1 for _ in top.shape))
    poles = poles_at(_LOWEST_SIEMENS * np.exp(place * step))
    growth, frequency = fastest_mode(poles_per_s=poles)
    step = np.broadcast_to(step, growth.shape[1:])
    best = np.argmax(growth, axis=0)
    summit = _LOWEST_SIEMENS * np.exp(_parabola_summit(growth, best) * step)
    summit_growth, summit_frequency = (part[0] for part in fastest_mode(poles_per_s=poles_at(summit[None])))
    grid_growth = growth.max(axis=0)
    better = summit_growth >= grid_growth
    low, high = _window(poles_at, dominant_growth_per_s(poles_per_s=poles) > 0.0, step)
    return OscillationSweep(
        growth_per_s=np.where(better, summit_growth, grid_growth),
        frequency_hz=np.where(better, summit_frequency, np.take_along_axis(frequency, best[None], axis=0)[0]),
        transconductance_siemens=np.where(better, summit, _LOWEST_SIEMENS * np.exp(best * step)),
        unstable_low_siemens=low,
        unstable_high_siemens=high,
    )


def curing_resistance_ohm(growth_at: Callable[[RealArray], RealArray], *, maximum_resistance_ohm: Real) -> RealArray:
    """Smallest resistance from which on, up to the largest one tried, nothing grows.

    Source: scan of 48 logarithmic steps and bisection of the last unstable one.
    Valid: 0 where nothing grows without resistance, nan where even the largest does not cure; stable
        islands below an unstable resistance do not count.

    Args:
        growth_at: worst growth in nepers per second (m, ...) for resistances of shape (m, ...).
        maximum_resistance_ohm: largest resistance worth considering, with an axis for each corner axis.

    Returns:
        Ohms, corners (...).
    """
    largest = np.asarray(maximum_resistance_ohm, dtype=np.float64)
    factors = np.concatenate([[0.0], np.logspace(-_CURE_DECADES, 0.0, _CURE_POINTS)])
    unstable = growth_at(factors.reshape(-1, *(1 for _ in largest.shape)) * largest) > 0.0
    last = factors.size - 1 - np.argmax(unstable[::-1], axis=0)
    low, high = factors[last] * largest, factors[np.minimum(last + 1, factors.size - 1)] * largest
    for _ in range(_CURE_BISECTIONS):
        middle = 0.5 * (low + high)
        grows = growth_at(middle[None])[0] > 0.0
        low, high = np.where(grows, middle, low), np.where(grows, high, middle)
    cure = np.where(unstable[-1], np.nan, high)
    return np.where(unstable.any(axis=0), cure, 0.0)


def _parabola_summit(growth: RealArray, best: IndexArray) -> RealArray:
    """Place on the grid of the summit of the parabola through the best point and its neighbours."""
    inner = np.clip(best, 1, growth.shape[0] - 2)
    window = [np.take_along_axis(growth, (inner + offset)[None], axis=0)[0] for offset in (-1, 0, 1)]
    known = np.isfinite(window).all(axis=0)
    left, middle, right = (np.where(known, value, 0.0) for value in window)
    bend = left - 2.0 * middle + right
    bent = bend < 0.0
    shift = np.where(bent, 0.5 * (left - right), 0.0) / np.where(bent, bend, 1.0)
    return np.where(bent, inner + np.clip(shift, -1.0, 1.0), best)


def _window(
    poles_at: Callable[[RealArray], ComplexArray], unstable: BoolArray, step: RealArray
) -> tuple[RealArray, RealArray]:
    count = unstable.shape[0]
    first = np.argmax(unstable, axis=0)
    last = count - 1 - np.argmax(unstable[::-1], axis=0)
    found = unstable.any(axis=0)
    edges = []
    for inside, outside in ((first, first - 1), (last, last + 1)):
        at_end = (outside < 0) | (outside >= count)
        stable_place = np.where(at_end, inside, outside).astype(np.float64)
        unstable_place = inside.astype(np.float64)
        for _ in range(_EDGE_BISECTIONS if bool((found & ~at_end).any()) else 0):
            middle = 0.5 * (stable_place + unstable_place)
            poles = poles_at(_LOWEST_SIEMENS * np.exp(middle * step)[None])[0]
            grows = dominant_growth_per_s(poles_per_s=poles) > 0.0
            unstable_place = np.where(grows, middle, unstable_place)
            stable_place = np.where(grows, stable_place, middle)
        edges.append(np.where(found, _LOWEST_SIEMENS * np.exp(unstable_place * step), np.nan))
    return edges[0], edges[1]
