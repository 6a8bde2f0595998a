"""Bounds of the peak gate current from what little is known early: voltage and series resistance."""

from __future__ import annotations


def peak_current_upper_a(*, voltage_v: float, resistance_ohm: float) -> float:
    """The most a step of `voltage_v` can drive through `resistance_ohm`: u / R.

    Source: Ohm's law; inductance, driver and transistor resistance only lower the peak of a series circuit
    that starts without current.
    Valid: any positive resistance; infinite for none.
    """
    return voltage_v / resistance_ohm if resistance_ohm > 0 else float("inf")


def peak_current_lower_a(*, voltage_v: float, resistance_ohm: float, further_ohm: float) -> float:
    """A cautious lower bound: u / (R + further) times 0.54.

    The peak of a series R-L-C circuit driven by a step is u / R times 2 z exp(-z/sqrt(1-z2) acos z), with z
    the damping ratio; at z = 0.5 that factor is 0.546, and it grows with z.
    Source: step response of the series circuit, any textbook on circuits; the factor at 0.5 computed.
    Valid: damping ratio of 0.5 or more. A loop that rings harder peaks lower than this bound says.
    """
    return _FACTOR_AT_HALF * voltage_v / (resistance_ohm + further_ohm)


# The factor above at a damping ratio of 0.5, rounded down.
_FACTOR_AT_HALF = 0.54
