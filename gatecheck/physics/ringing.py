"""Closed forms of the plain gate loop: a resistance, an inductance and the input capacitance in series.

They hold for a linear capacitance and without a bead; with a bead see `gate_loop`. The letters in the
comments are those of every textbook: zeta = R / 2 * sqrt(C / L), omega_0 = 1 / sqrt(L C), Z_0 = sqrt(L / C).
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from gatecheck.physics.arrays import Real, RealArray

# Nearer to critical damping than this the two closed forms lose digits; their common limit is exact to 1e-8.
_CRITICAL_BAND = 1e-8


def natural_frequency_hz(*, inductance_h: Real, capacitance_f: Real) -> RealArray:
    """Undamped resonance 1 / (2 pi sqrt(L C)).

    Source: textbook series resonance.
    Valid: L and C above zero.

    Args:
        inductance_h: L.
        capacitance_f: C.

    Returns:
        Hertz.
    """
    return np.asarray(1.0 / (2.0 * math.pi * np.sqrt(np.multiply(inductance_h, capacitance_f))))


def characteristic_impedance_ohm(*, inductance_h: Real, capacitance_f: Real) -> RealArray:
    """Characteristic impedance sqrt(L / C).

    Source: textbook series resonance.
    Valid: L and C above zero.

    Args:
        inductance_h: L.
        capacitance_f: C.

    Returns:
        Ohms.
    """
    return np.asarray(np.sqrt(np.divide(inductance_h, capacitance_f)))


def damping_ratio(*, resistance_ohm: Real, inductance_h: Real, capacitance_f: Real) -> RealArray:
    """Damping ratio R / 2 * sqrt(C / L); 1 is critical.

    Source: textbook series resonance.
    Valid: L and C above zero.

    Args:
        resistance_ohm: R, everything in the loop.
        inductance_h: L.
        capacitance_f: C.

    Returns:
        Ratio.
    """
    return np.asarray(0.5 * resistance_ohm * np.sqrt(np.divide(capacitance_f, inductance_h)))


def resistance_for_damping_ohm(*, minimum_damping_ratio: Real, inductance_h: Real, capacitance_f: Real) -> RealArray:
    """Loop resistance that gives a wanted damping ratio, 2 zeta sqrt(L / C).

    Source: `damping_ratio` solved for R.
    Valid: L and C above zero.

    Args:
        minimum_damping_ratio: zeta.
        inductance_h: L.
        capacitance_f: C.

    Returns:
        Ohms, the whole loop's; subtract driver and internal gate resistance for the external part.
    """
    return np.asarray(2.0 * minimum_damping_ratio * np.sqrt(np.divide(inductance_h, capacitance_f)))


def bead_inductance_limit_h(
    *, minimum_damping_ratio: Real, resistance_ohm: Real, inductance_h: Real, capacitance_f: Real
) -> RealArray:
    """Largest bead inductance that keeps the drive loop at a damping ratio, (R / 2 zeta)^2 C - L.

    Well below its crossover a bead is an inductance in the loop, whatever it does at 100 MHz.

    Source: `damping_ratio` with L + L_bead solved for L_bead.
    Valid: loop ring well below the bead's crossover; near it the bead's resistance helps and this is
        cautious. A negative answer means that the loop misses the damping already without a bead.

    Args:
        minimum_damping_ratio: zeta.
        resistance_ohm: R of the edge.
        inductance_h: L of the loop without bead.
        capacitance_f: C.

    Returns:
        Henries.
    """
    allowed = np.square(np.divide(resistance_ohm, 2.0 * np.asarray(minimum_damping_ratio)))
    return np.asarray(allowed * capacitance_f - inductance_h)


def overshoot_ratio(*, loop_damping_ratio: Real) -> RealArray:
    """Overshoot of the gate voltage in parts of the step, exp(-pi zeta / sqrt(1 - zeta^2)).

    Source: textbook second-order step response.
    Valid: zeta from 0; from 1 on there is none and the answer is 0.

    Args:
        loop_damping_ratio: zeta.

    Returns:
        Ratio from 0 to 1.
    """
    zeta = np.asarray(loop_damping_ratio, dtype=np.float64)
    rings = zeta < 1.0
    safe = np.where(rings, zeta, 0.0)
    return np.where(rings, np.exp(-math.pi * safe / np.sqrt(1.0 - safe**2)), 0.0)


def peak_current_a(*, step_v: Real, loop_damping_ratio: Real, characteristic_ohm: Real) -> RealArray:
    """Peak gate current after a voltage step, with the inductance that keeps it below step / R.

    Underdamped, critical and overdamped: (V / Z_0) exp(-zeta phi), with phi = acos(zeta) / sqrt(1 - zeta^2)
    or its hyperbolic continuation acosh(zeta) / sqrt(zeta^2 - 1).

    Source: textbook second-order step response; both branches are one analytic function of zeta.
    Valid: zeta from 0.

    Args:
        step_v: V, size of the step.
        loop_damping_ratio: zeta.
        characteristic_ohm: Z_0.

    Returns:
        Amperes.
    """
    phase = _peak_phase(np.asarray(loop_damping_ratio, dtype=np.float64))
    return np.asarray(np.divide(step_v, characteristic_ohm) * np.exp(-loop_damping_ratio * phase))


def peak_current_time_s(*, loop_damping_ratio: Real, natural_hz: Real) -> RealArray:
    """Time from the step to the peak of the gate current, phi / omega_0.

    Source: as `peak_current_a`.
    Valid: zeta from 0.

    Args:
        loop_damping_ratio: zeta.
        natural_hz: undamped resonance.

    Returns:
        Seconds.
    """
    phase = _peak_phase(np.asarray(loop_damping_ratio, dtype=np.float64))
    return np.asarray(phase / (2.0 * math.pi * np.asarray(natural_hz)))


def damping_from_decrement_ratio(*, log_decrement_neper: Real) -> RealArray:
    """Damping ratio from the logarithmic decrement of successive peaks, delta / sqrt(4 pi^2 + delta^2).

    Source: textbook second-order system.
    Valid: decrement above zero, taken over whole periods.

    Args:
        log_decrement_neper: delta, the log of the ratio of peaks one period apart.

    Returns:
        Ratio from 0 to 1.
    """
    return np.asarray(log_decrement_neper / np.sqrt(4.0 * math.pi**2 + np.square(log_decrement_neper)))


def decrement_from_damping_neper(*, loop_damping_ratio: Real) -> RealArray:
    """Logarithmic decrement per period, 2 pi zeta / sqrt(1 - zeta^2).

    Source: textbook second-order system.
    Valid: zeta from 0 and below 1; from 1 on nothing rings and the answer is infinite.

    Args:
        loop_damping_ratio: zeta.

    Returns:
        Nepers per period.
    """
    zeta = np.asarray(loop_damping_ratio, dtype=np.float64)
    rings = zeta < 1.0
    safe = np.where(rings, zeta, 0.0)
    return np.where(rings, 2.0 * math.pi * safe / np.sqrt(1.0 - safe**2), np.inf)


def capacitance_from_added_f(*, added_capacitance_f: Real, ring_hz: Real, ring_with_added_hz: Real) -> RealArray:
    """Capacitance of a ringing loop from two frequencies, without and with a known capacitance added.

    Source: f is proportional to 1 / sqrt(C) at one L; C = C_a / ((f_1 / f_2)^2 - 1) (snubber practice).
    Valid: f_1 above f_2, best below 0.7 of it apart; damping changes neither by more than (1 - zeta^2)^0.5.
        Frequencies that do not fall give nan.

    Args:
        added_capacitance_f: C_a, across gate and source.
        ring_hz: f_1.
        ring_with_added_hz: f_2.

    Returns:
        Farads.
    """
    excess = np.square(np.divide(ring_hz, ring_with_added_hz)) - 1.0
    falls = excess > 0.0
    return np.where(falls, added_capacitance_f / np.where(falls, excess, 1.0), np.nan)


def inductance_from_ring_h(*, capacitance_f: Real, ring_hz: Real, loop_damping_ratio: Real = 0.0) -> RealArray:
    """Inductance of a ringing loop of known capacitance, 1 / (C omega_0^2), omega_0 from the damped ring.

    Source: textbook second-order system, omega_0 = omega_d / sqrt(1 - zeta^2).
    Valid: zeta from 0 and below 1.

    Args:
        capacitance_f: C.
        ring_hz: frequency of the damped ring.
        loop_damping_ratio: zeta.

    Returns:
        Henries.
    """
    natural = 2.0 * math.pi * np.asarray(ring_hz) / np.sqrt(1.0 - np.square(loop_damping_ratio))
    return np.asarray(1.0 / (capacitance_f * natural**2))


def _peak_phase(zeta: RealArray) -> RealArray:
    """acos(z) / sqrt(1 - z^2) below one, acosh(z) / sqrt(z^2 - 1) above, 1 - (z - 1) / 3 where they meet."""
    distance = np.abs(1.0 - zeta**2)
    near = distance < _CRITICAL_BAND
    root = np.sqrt(np.where(near, 1.0, distance))
    below = np.arccos(np.minimum(zeta, 1.0)) / root
    above = np.arccosh(np.maximum(zeta, 1.0)) / root
    return np.where(near, 1.0 - (zeta - 1.0) / 3.0, np.where(zeta < 1.0, below, above))
