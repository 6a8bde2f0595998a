"""Turn-on by dv/dt: how far a rising drain lifts the gate of a switch that is held off.

The drain pushes a current k C_gd through the gate-drain capacitance; the gate loop takes it in its
resistance, its inductance keeps it out at first, and the input capacitance holds against it. A bead adds
inductance here and raises the bump.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from gatecheck.physics.gate_loop import GateLoop, loop_states
from gatecheck.physics.trajectory import maximum
from gatecheck.physics.transient import final_state_au, linear_response, observed

if TYPE_CHECKING:
    from collections.abc import Callable

    from gatecheck.physics.arrays import ComplexArray, Real, RealArray

_GATE = 1  # place of the gate voltage in the loop's state
_SERIES_BELOW = 1e-4  # of |beta t|: below it the quotient of the closed form is a series, exact to 1e-17
_SCAN_POINTS = 97  # 16 per decade over six decades; our choice
_SCAN_DECADES = 6.0
_BISECTIONS = 45  # to 1e-14 of a scan step; our choice


def bump_without_inductance_v(
    *, resistance_ohm: Real, input_capacitance_f: Real, gate_drain_f: Real, slope_v_per_s: Real, swing_v: Real
) -> RealArray:
    """Height of the bump with resistance alone, k R C_gd (1 - exp(-T / (R C_iss))), T = V / k.

    Limits: k R C_gd for a slow edge, the divider V C_gd / C_iss for a fast one.

    Source: response of R parallel C to a current pulse; same form in EPC WP008, eq. (1).
    Valid: constant capacitances; no inductance, which adds to it.

    Args:
        resistance_ohm: R, internal, external and driver.
        input_capacitance_f: C_iss.
        gate_drain_f: C_gd.
        slope_v_per_s: k.
        swing_v: V, swing of the drain.

    Returns:
        Volts above the off voltage.
    """
    slow = np.asarray(slope_v_per_s) * resistance_ohm * gate_drain_f
    duration = np.divide(swing_v, slope_v_per_s)
    return np.asarray(-slow * np.expm1(-duration / np.multiply(resistance_ohm, input_capacitance_f)))


def bump_v(loop: GateLoop, *, gate_drain_f: Real, slope_v_per_s: Real, swing_v: Real) -> RealArray:
    """Height of the bump with the loop's inductance and without bead, in closed form.

    v(t) = k C_gd [R - exp(-alpha t) (R cos w t + (R alpha - L w0^2) / w sin w t)], its first maximum, or
    its value at the end of the drain's edge if that comes earlier.

    Source: own derivation (R and L in series, parallel to C, at a current step), checked by simulation.
    Valid: constant capacitances; any damping; the loop's bead is ignored.

    Args:
        loop: resistance, inductance and capacitance of the off path, corners (...).
        gate_drain_f: C_gd.
        slope_v_per_s: k.
        swing_v: V, swing of the drain.

    Returns:
        Volts above the off voltage, corners (...).
    """
    alpha = np.asarray(loop.resistance_ohm) / (2.0 * np.asarray(loop.inductance_h))
    natural_squared = 1.0 / (np.asarray(loop.inductance_h) * loop.capacitance_f)
    beta = np.sqrt(alpha**2 - natural_squared + 0j)
    time_s = np.minimum(np.divide(swing_v, slope_v_per_s), _first_maximum_s(alpha, natural_squared))
    even, odd = _damped_pair(alpha, beta, time_s)
    lag = loop.resistance_ohm * alpha - loop.inductance_h * natural_squared
    shape = loop.resistance_ohm * (1.0 - even) - lag * odd
    return np.asarray(np.multiply(slope_v_per_s, gate_drain_f) * shape)


def bump_from_curve_v(loop: GateLoop, *, slope_v_per_s: Real, drain_v: RealArray, gate_drain_f: RealArray) -> RealArray:
    """Height of the bump with the bead in the loop and C_gd falling along the drain's rise.

    Source: exact linear response to a current that is straight between the curve's points.
    Valid: linear bead (take it at the bias of the pushed current), constant C_iss.

    Args:
        loop: off path, corners (...).
        slope_v_per_s: k.
        drain_v: drain voltages from the start to the end of the edge, shape (m,), two for a constant C_gd.
        gate_drain_f: C_gd there, shape (..., m).

    Returns:
        Volts above the off voltage, corners (...).
    """
    states = loop_states(loop)
    root = states.root_storage_au
    slope = np.asarray(slope_v_per_s, dtype=np.float64)
    shape = np.broadcast_shapes(root.shape[:-1], slope.shape, gate_drain_f.shape[:-1])
    pick = np.zeros((*shape, root.shape[-1]))
    pick[..., _GATE] = 1.0 / root[..., _GATE]
    state, highest = np.zeros(pick.shape), np.zeros(shape)
    for place in range(drain_v.shape[-1] - 1):
        duration = np.broadcast_to((drain_v[place + 1] - drain_v[place]) / slope, shape)
        current = np.broadcast_to(slope * gate_drain_f[..., place], shape)
        change = slope * (gate_drain_f[..., place + 1] - gate_drain_f[..., place]) / duration
        response = linear_response(
            state_matrix_per_s=states.state_matrix_per_s,
            start_au=state,
            source_au_per_s=pick * current[..., None],
            source_slope_au_per_s2=pick * change[..., None],
            duration_s=duration,
        )
        state = final_state_au(response)
        highest = np.maximum(highest, maximum(observed(response, weights_au=pick))[0])
    return highest


def charge_divider_v(*, gate_drain_charge_c: Real, input_capacitance_f: Real) -> RealArray:
    """Bump of an infinitely fast edge, Q_gd / C_iss: below threshold the switch is immune for any resistance.

    Source: charge balance.
    Valid: no inductance in the gate loop, which can overshoot this.

    Args:
        gate_drain_charge_c: Q_gd up to the bus voltage.
        input_capacitance_f: C_iss.

    Returns:
        Volts above the off voltage.
    """
    return np.asarray(np.divide(gate_drain_charge_c, input_capacitance_f))


def common_source_v(*, source_inductance_h: Real, current_slope_a_per_s: Real) -> RealArray:
    """Voltage that the commutating current puts into the gate loop over a common source inductance.

    Source: v = L di/dt.
    Valid: adds to the bump with either sign.

    Args:
        source_inductance_h: L_s shared by gate and power loop.
        current_slope_a_per_s: di/dt.

    Returns:
        Volts.
    """
    return np.asarray(np.multiply(source_inductance_h, current_slope_a_per_s))


def lowest_reaching(bump_at: Callable[[RealArray], RealArray], *, margin_v: Real, largest_au: Real) -> RealArray:
    """Smallest slope, resistance or other quantity at which the bump reaches the margin to threshold.

    Source: scan over six decades, 16 points each, then bisection of the first crossing.
    Valid: nan where the margin is not reached up to the largest value; 0 where the margin is not above zero.

    Args:
        bump_at: bump in volts (m, ...) for values of shape (m, ...).
        margin_v: threshold less off voltage, with an axis for each corner axis.
        largest_au: largest value worth considering, in the unit of the quantity, same axes.

    Returns:
        The value in the unit of the quantity, corners (...).
    """
    margin, largest = np.broadcast_arrays(
        np.asarray(margin_v, dtype=np.float64), np.asarray(largest_au, dtype=np.float64)
    )
    factors = np.logspace(-_SCAN_DECADES, 0.0, _SCAN_POINTS)
    reaches = bump_at(factors.reshape(-1, *(1 for _ in largest.shape)) * largest) >= margin
    first = np.argmax(reaches, axis=0)
    low = np.where(first > 0, factors[np.maximum(first - 1, 0)], 0.0) * largest
    high = factors[first] * largest
    for _ in range(_BISECTIONS):
        middle = 0.5 * (low + high)
        over = bump_at(middle[None])[0] >= margin
        low, high = np.where(over, low, middle), np.where(over, middle, high)
    value = np.where(reaches.any(axis=0), high, np.nan)
    return np.where(margin > 0.0, value, 0.0)


def _first_maximum_s(alpha: RealArray, natural_squared: RealArray) -> RealArray:
    """(pi - acos zeta) / w of the underdamped loop, infinite where the bump only rises."""
    zeta = alpha / np.sqrt(natural_squared)
    rings = zeta < 1.0
    ring = np.sqrt(np.where(rings, natural_squared - alpha**2, 1.0))
    return np.where(rings, (math.pi - np.arccos(np.minimum(zeta, 1.0))) / ring, np.inf)


def _damped_pair(alpha: RealArray, beta: ComplexArray, time_s: RealArray) -> tuple[RealArray, RealArray]:
    """exp(-alpha t) cosh(beta t) and exp(-alpha t) sinh(beta t) / beta, for real or imaginary beta."""
    rising, falling = np.exp((beta - alpha) * time_s), np.exp((-beta - alpha) * time_s)
    small = np.abs(beta * time_s) < _SERIES_BELOW
    series = time_s * np.exp(-alpha * time_s) * (1.0 + (beta * time_s) ** 2 / 6.0)
    quotient = (rising - falling) / (2.0 * np.where(small, 1.0, beta))
    return (0.5 * (rising + falling)).real, np.where(small, series, quotient).real
