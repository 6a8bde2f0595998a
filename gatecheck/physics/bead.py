"""Ferrite bead as a passive ladder: impedance, crossover, self-resonance, state equations.

The ladder is a series resistance, then a string of sections (a resistance parallel to an inductance) with
one capacitance across the whole string:

    Z(s) = R_dc + 1 / (1 / (s L_0 + sum_k R_k s L_k / (R_k + s L_k)) + s C)

One section is the common R-L-C model of a bead; several follow the slow rise of a real ferrite.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from gatecheck.physics.arrays import ComplexArray, Real, RealArray

_SCAN_PER_DECADE = 40  # a root of X or of X - R is bracketed on this grid, then bisected; our choice
_BISECTIONS = 45  # to 1e-14 of a grid step; our choice
_SCAN_DECADES = (4.0, 11.0)  # 10 kHz to 100 GHz holds whatever a chip bead does; our choice


@dataclass(frozen=True, slots=True, kw_only=True)
class BeadLadder:
    """A bead for every corner; the leading axes (...) are corners, the last axis of a section field is k.

    Attributes:
        dc_resistance_ohm: R_dc, shape (...).
        section_resistance_ohm: R_k, shape (..., k), each above zero.
        section_inductance_h: L_k, shape (..., k), each above zero.
        series_inductance_h: L_0, without a resistance beside it, shape (...); zero for none.
        capacitance_f: C, shape (...); zero for none.
    """

    dc_resistance_ohm: RealArray
    section_resistance_ohm: RealArray
    section_inductance_h: RealArray
    series_inductance_h: RealArray
    capacitance_f: RealArray


def parallel_bead(
    *,
    dc_resistance_ohm: Real,
    parallel_resistance_ohm: Real,
    inductance_h: Real,
    capacitance_f: Real = 0.0,
) -> BeadLadder:
    """The one-section bead R_dc + (R_p || L || C).

    Source: common equivalent circuit of a chip bead, as in suppliers' simulation models (common practice).
    Valid: one decade around the crossover; a ferrite's slower rise below it needs several sections.

    Args:
        dc_resistance_ohm: R_dc.
        parallel_resistance_ohm: R_p.
        inductance_h: L.
        capacitance_f: C, zero for none.

    Returns:
        The bead, of the shape the parameters broadcast to.
    """
    dc, parallel, inductance, capacitance = np.broadcast_arrays(
        *(
            np.asarray(value, dtype=np.float64)
            for value in (dc_resistance_ohm, parallel_resistance_ohm, inductance_h, capacitance_f)
        )
    )
    return BeadLadder(
        dc_resistance_ohm=dc,
        section_resistance_ohm=parallel[..., None],
        section_inductance_h=inductance[..., None],
        series_inductance_h=np.zeros(dc.shape),
        capacitance_f=capacitance,
    )


def impedance_ohm(bead: BeadLadder, *, frequency_hz: Real) -> ComplexArray:
    """Complex impedance R + jX at the given frequencies.

    Source: series and parallel combination of the elements (circuit theory).
    Valid: any frequency above zero; whether the model holds there is the fit's business.

    Args:
        bead: the bead, corners (...).
        frequency_hz: frequencies, broadcast against the corners.

    Returns:
        Ohms, shape of the broadcast.
    """
    omega = 2.0 * math.pi * np.asarray(frequency_hz)
    return complex_impedance_ohm(bead, complex_frequency_rad_per_s=np.asarray(1j * omega))


def complex_impedance_ohm(bead: BeadLadder, *, complex_frequency_rad_per_s: ComplexArray) -> ComplexArray:
    """Impedance Z(s) at a complex frequency, as needed at the poles of a network.

    Source: series and parallel combination of the elements (circuit theory).
    Valid: away from the ladder's own poles.

    Args:
        bead: the bead, corners (...).
        complex_frequency_rad_per_s: s, broadcast against the corners.

    Returns:
        Ohms, shape of the broadcast.
    """
    string, _ = _string_ohm(bead, np.asarray(complex_frequency_rad_per_s))
    return np.asarray(
        bead.dc_resistance_ohm + string / (1.0 + complex_frequency_rad_per_s * bead.capacitance_f * string)
    )


def impedance_slope_h(bead: BeadLadder, *, complex_frequency_rad_per_s: ComplexArray) -> ComplexArray:
    """Derivative dZ/ds of the impedance, which decides how strongly a mode answers to a step.

    Source: derivative of the expression in this module's head.
    Valid: away from the ladder's own poles.

    Args:
        bead: the bead, corners (...).
        complex_frequency_rad_per_s: s, broadcast against the corners.

    Returns:
        Ohm seconds, which are henries, shape of the broadcast.
    """
    s = np.asarray(complex_frequency_rad_per_s)
    string, slope = _string_ohm(bead, s)
    return np.asarray((slope - bead.capacitance_f * string**2) / (1.0 + s * bead.capacitance_f * string) ** 2)


def _string_ohm(bead: BeadLadder, s: ComplexArray) -> tuple[ComplexArray, ComplexArray]:
    """Impedance of the string of sections without C and R_dc, and its derivative in s."""
    string = np.asarray(s * bead.series_inductance_h)
    slope = np.asarray(bead.series_inductance_h + 0.0 * s)
    for resistance, inductance in zip(
        np.moveaxis(bead.section_resistance_ohm, -1, 0),
        np.moveaxis(bead.section_inductance_h, -1, 0),
        strict=True,
    ):
        share = resistance / (resistance + s * inductance)
        string = string + s * inductance * share
        slope = slope + inductance * share**2
    return string, slope


def low_frequency_inductance_h(bead: BeadLadder) -> RealArray:
    """Inductance well below the crossover, L_0 plus the sum of the sections.

    Source: limit of the ladder for s to 0 (circuit theory).
    Valid: frequencies at which every section is still inductive.

    Args:
        bead: the bead, corners (...).

    Returns:
        Henries, shape (...).
    """
    return np.asarray(bead.series_inductance_h + bead.section_inductance_h.sum(axis=-1))


def crossover_hz(bead: BeadLadder) -> RealArray:
    """Frequency above which the bead is more resistance than inductance (first R = X with X falling behind).

    Source: definition, R(f) = X(f); root found on a grid of 40 points per decade and bisected.
    Valid: 10 kHz to 100 GHz; nan where R and X never meet there.

    Args:
        bead: the bead, corners (...).

    Returns:
        Hertz, shape (...).
    """
    return _first_turn_hz(bead, resistance_share=1.0)


def self_resonance_hz(bead: BeadLadder) -> RealArray:
    """Frequency at which the reactance passes through zero towards capacitive.

    Source: definition, X(f) = 0; root found on a grid of 40 points per decade and bisected.
    Valid: 10 kHz to 100 GHz; nan for a bead without capacitance.

    Args:
        bead: the bead, corners (...).

    Returns:
        Hertz, shape (...).
    """
    return _first_turn_hz(bead, resistance_share=0.0)


def capacitive_crossover_hz(bead: BeadLadder) -> RealArray:
    """Frequency above self-resonance from which the bead is more capacitance than resistance (X = -R).

    Source: definition, X(f) = -R(f); root found on a grid of 40 points per decade and bisected.
    Valid: 10 kHz to 100 GHz; nan for a bead without capacitance.

    Args:
        bead: the bead, corners (...).

    Returns:
        Hertz, shape (...).
    """
    return _first_turn_hz(bead, resistance_share=-1.0)


def resistance_share(bead: BeadLadder, *, frequency_hz: Real) -> RealArray:
    """Share R / |Z| of the impedance that damps.

    Source: definition.
    Valid: as `impedance_ohm`.

    Args:
        bead: the bead, corners (...).
        frequency_hz: frequencies, broadcast against the corners.

    Returns:
        Ratio from 0 to 1.
    """
    impedance = impedance_ohm(bead, frequency_hz=frequency_hz)
    return np.asarray(impedance.real / np.abs(impedance))


def scaled_bead(bead: BeadLadder, *, inductance_ratio: Real, resistance_ratio: Real) -> BeadLadder:
    """The bead with its inductances and its parallel resistances multiplied, as bias or spread does.

    Source: bias acts on the ferrite, not on the wire: R_dc and C stay.
    Valid: ratios above zero.

    Args:
        bead: the bead, corners (...).
        inductance_ratio: factor on every inductance, broadcast against the corners.
        resistance_ratio: factor on every parallel resistance.

    Returns:
        The changed bead, corners of the broadcast.
    """
    on_inductance = np.asarray(inductance_ratio, dtype=np.float64)
    on_resistance = np.asarray(resistance_ratio, dtype=np.float64)
    shape = np.broadcast_shapes(bead.dc_resistance_ohm.shape, on_inductance.shape, on_resistance.shape)
    return BeadLadder(
        dc_resistance_ohm=np.broadcast_to(bead.dc_resistance_ohm, shape),
        section_resistance_ohm=bead.section_resistance_ohm * np.broadcast_to(on_resistance, shape)[..., None],
        section_inductance_h=bead.section_inductance_h * np.broadcast_to(on_inductance, shape)[..., None],
        series_inductance_h=np.broadcast_to(bead.series_inductance_h * on_inductance, shape),
        capacitance_f=np.broadcast_to(bead.capacitance_f, shape),
    )


def _first_turn_hz(bead: BeadLadder, *, resistance_share: float) -> RealArray:
    """Lowest grid interval in which X - share * R turns negative, bisected in log frequency."""
    low, high = _SCAN_DECADES
    exponents = np.linspace(low, high, round((high - low) * _SCAN_PER_DECADE) + 1)

    def excess(exponent: RealArray) -> RealArray:
        impedance = impedance_ohm(bead, frequency_hz=10.0**exponent)
        return np.asarray(impedance.imag - resistance_share * impedance.real)

    corners = bead.dc_resistance_ohm.shape
    column = exponents.reshape(-1, *(1 for _ in corners))
    positive = np.broadcast_to(excess(column), (exponents.size, *corners)) > 0.0
    turns = positive[:-1] & ~positive[1:]
    place = np.argmax(turns, axis=0)
    left, right = exponents[place], exponents[place + 1]
    for _ in range(_BISECTIONS):
        middle = 0.5 * (left + right)
        inductive = excess(middle) > 0.0
        left, right = np.where(inductive, middle, left), np.where(inductive, right, middle)
    return np.where(turns.any(axis=0), 10.0**right, np.nan)
