"""Closed forms of switching times and loss against gate resistance, without inductance.

They price a fix in nanoseconds and microjoules. With a bead they hold while L_bead / R stays below half of
the voltage fall time; beyond, `hard_switching` integrates.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from gatecheck.physics.arrays import Real, RealArray


def plateau_v(*, threshold_v: Real, load_a: Real, transconductance_siemens: Real) -> RealArray:
    """Gate voltage at which the channel carries the load current, V_th + I / g_m.

    Source: straight transfer characteristic above threshold (textbook).
    Valid: currents for which g_m is the mean slope.

    Args:
        threshold_v: V_th.
        load_a: I.
        transconductance_siemens: g_m.

    Returns:
        Volts.
    """
    return np.asarray(threshold_v + np.divide(load_a, transconductance_siemens))


def plateau_current_a(*, driver_v: Real, plateau_v: Real, resistance_ohm: Real) -> RealArray:
    """Gate current while the drain moves, |V_drive - V_pl| / R.

    Source: Ohm's law at a constant gate voltage.
    Valid: both edges, with that edge's resistance; driver not current-limited.

    Args:
        driver_v: driver voltage during the edge.
        plateau_v: plateau voltage.
        resistance_ohm: whole path of the edge.

    Returns:
        Amperes.
    """
    return np.asarray(np.abs(np.subtract(driver_v, plateau_v)) / resistance_ohm)


def charging_time_s(*, time_constant_s: Real, driver_v: Real, from_v: Real, to_v: Real) -> RealArray:
    """Time in which the gate charges from one voltage to another through a resistance.

    R C ln((V_drive - V_from) / (V_drive - V_to)): with the start and threshold the turn-on delay, with
    threshold and plateau the current rise.

    Source: charging of a capacitor (textbook).
    Valid: no inductance; both voltages on the same side of the driver's, else nan.

    Args:
        time_constant_s: R C_iss.
        driver_v: driver voltage during the edge.
        from_v: gate voltage at the start.
        to_v: gate voltage at the end.

    Returns:
        Seconds.
    """
    left = np.subtract(driver_v, to_v)
    ratio = np.subtract(driver_v, from_v) / np.where(left == 0.0, np.nan, left)
    sound = ratio > 0.0
    return np.where(sound, time_constant_s * np.log(np.where(sound, ratio, 1.0)), np.nan)


def voltage_time_s(*, gate_drain_charge_c: Real, plateau_current_a: Real) -> RealArray:
    """Time in which the drain moves, Q_gd / I_g.

    Source: charge balance at the plateau.
    Valid: load current much larger than the drain's capacitive current.

    Args:
        gate_drain_charge_c: Q_gd over the bus voltage.
        plateau_current_a: I_g.

    Returns:
        Seconds.
    """
    return np.asarray(np.divide(gate_drain_charge_c, plateau_current_a))


def drain_slope_v_per_s(*, plateau_current_a: Real, gate_drain_f: Real) -> RealArray:
    """Slope of the drain voltage, I_g / C_gd.

    Source: current through C_gd at the plateau.
    Valid: load current much larger than the drain's capacitive current; C_gd at that voltage.

    Args:
        plateau_current_a: I_g.
        gate_drain_f: C_gd.

    Returns:
        Volts per second.
    """
    return np.asarray(np.divide(plateau_current_a, gate_drain_f))


def crossing_loss_j(*, bus_v: Real, load_a: Real, crossing_time_s: Real) -> RealArray:
    """Loss of one edge while voltage and current cross, V I t / 2; grows in proportion to R.

    Source: triangle of straight edges (common practice).
    Valid: estimate, 6 to 12 % low against integration; recovery and output charge come on top.

    Args:
        bus_v: V.
        load_a: I.
        crossing_time_s: current rise and voltage fall together.

    Returns:
        Joules.
    """
    return np.asarray(0.5 * np.multiply(bus_v, load_a) * crossing_time_s)


def source_inductance_delay_s(*, source_inductance_h: Real, load_a: Real, drive_left_v: Real) -> RealArray:
    """Time that a common source inductance adds to the current rise, L_s I / (V_drive - V_pl).

    Source: v = L di/dt taken from the gate drive.
    Valid: rough, for drops small against the drive that is left.

    Args:
        source_inductance_h: L_s.
        load_a: I.
        drive_left_v: driver less plateau voltage.

    Returns:
        Seconds.
    """
    return np.asarray(np.multiply(source_inductance_h, load_a) / drive_left_v)
