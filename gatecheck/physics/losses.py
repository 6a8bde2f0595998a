"""Gate power and where it goes, currents, and the capacitors that must deliver the charge."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from gatecheck.physics.arrays import Real, RealArray


def gate_power_w(*, gate_charge_c: Real, step_v: Real, switching_hz: Real) -> RealArray:
    """Power drawn from the driver supply for one gate, Q_g V f.

    Source: energy balance of charge Q_g delivered at V once per period.
    Valid: any gate, any resistance.

    Args:
        gate_charge_c: Q_g over the whole swing.
        step_v: V, size of the swing.
        switching_hz: f.

    Returns:
        Watts.
    """
    return np.asarray(np.multiply(gate_charge_c, step_v) * switching_hz)


def resistor_power_w(*, gate_power_w: Real, share_ratio: Real) -> RealArray:
    """Average power in one resistor of one edge, half the gate power times its share of the path.

    Source: each edge dissipates Q V / 2 in its own path; in series, resistors share it as their resistance.
    Valid: linear gate capacitance for the half (only the sum over both edges is fixed); a bead takes a share.

    Args:
        gate_power_w: Q_g V f.
        share_ratio: resistance over that of the whole edge's path.

    Returns:
        Watts; add both edges where one resistor serves both.
    """
    return np.asarray(0.5 * np.multiply(gate_power_w, share_ratio))


def resistor_pulse_j(*, gate_charge_c: Real, step_v: Real, share_ratio: Real) -> RealArray:
    """Energy of one edge in one resistor, Q V / 2 times its share of the path.

    Source: as `resistor_power_w`.
    Valid: as `resistor_power_w`.

    Args:
        gate_charge_c: Q_g.
        step_v: V.
        share_ratio: resistance over that of the whole edge's path.

    Returns:
        Joules.
    """
    return np.asarray(0.5 * np.multiply(gate_charge_c, step_v) * share_ratio)


def resistor_peak_power_w(*, peak_current_a: Real, resistance_ohm: Real) -> RealArray:
    """Peak power in a resistor, I^2 R.

    Source: Joule's law.
    Valid: peak current of its edge; step / R of the path is an upper bound for it.

    Args:
        peak_current_a: I.
        resistance_ohm: R.

    Returns:
        Watts.
    """
    return np.asarray(np.square(peak_current_a) * resistance_ohm)


def gate_rms_current_a(
    *, on_current_squared_a2_s: Real, off_current_squared_a2_s: Real, switching_hz: Real
) -> RealArray:
    """RMS gate current over a period from the squared current of both edges.

    Source: definition; the integrals come from `gate_loop.edge_heat`, exact also with a bead.
    Valid: edges that end before the next one starts.

    Args:
        on_current_squared_a2_s: integral of the squared current of the on edge.
        off_current_squared_a2_s: the same of the off edge.
        switching_hz: f.

    Returns:
        Amperes.
    """
    return np.asarray(np.sqrt(np.add(on_current_squared_a2_s, off_current_squared_a2_s) * switching_hz))


def resistive_current_squared_a2_s(*, gate_charge_c: Real, step_v: Real, resistance_ohm: Real) -> RealArray:
    """Squared current of one edge integrated over time without a bead, Q V / (2 R), whatever the inductance.

    Source: the edge's heat Q V / 2 all in R.
    Valid: linear gate capacitance.

    Args:
        gate_charge_c: Q_g.
        step_v: V.
        resistance_ohm: R of the whole path.

    Returns:
        Ampere squared seconds.
    """
    return np.asarray(0.5 * np.multiply(gate_charge_c, step_v) / resistance_ohm)


def supply_capacitance_f(*, charge_c: Real, allowed_droop_v: Real) -> RealArray:
    """Effective capacitance that delivers a charge with an allowed droop, Q / dV.

    For a bootstrap capacitor the charge is that of `bootstrap_charge_c`.

    Source: definition of capacitance.
    Valid: capacitance left under bias and temperature, not the printed one.

    Args:
        charge_c: charge taken per edge or per period.
        allowed_droop_v: dV.

    Returns:
        Farads.
    """
    return np.asarray(np.divide(charge_c, allowed_droop_v))


def bootstrap_charge_c(
    *,
    gate_charge_c: Real,
    recovery_charge_c: Real = 0.0,
    bias_current_a: Real = 0.0,
    longest_on_s: Real = 0.0,
) -> RealArray:
    """Charge that a bootstrap capacitor loses in one period, Q_g + Q_rr + I_q t_on.

    Source: charge balance (common practice in driver application notes).
    Valid: add level shift and leakage charges to one of the terms where known.

    Args:
        gate_charge_c: Q_g.
        recovery_charge_c: recovery of the bootstrap diode.
        bias_current_a: quiescent and leakage current of the floating side.
        longest_on_s: longest on time.

    Returns:
        Coulombs.
    """
    return np.asarray(np.add(gate_charge_c, recovery_charge_c) + np.multiply(bias_current_a, longest_on_s))
