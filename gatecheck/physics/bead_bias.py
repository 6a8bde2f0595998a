"""What current leaves of a bead: small-signal factors, flux, and constants from a bias table."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from gatecheck.physics.bead import BeadLadder, scaled_bead
from gatecheck.physics.inductance import MU_0_H_PER_M

if TYPE_CHECKING:
    from gatecheck.physics.arrays import Real, RealArray


def impedance_left_ratio(
    *, current_a: Real, half_current_a: Real, exponent_1: Real = 2.0, residual_ratio: Real = 0.0
) -> RealArray:
    """Part of an inductance or resistance that a bias current leaves, r + (1 - r) / (1 + (I / I_h)^n).

    Source: own description of suppliers' bias curves, n about 2 (from memory).
    Valid: a shape, not a law: take I_h from a bias curve, and an interval where there is none.

    Args:
        current_a: bias, either sign.
        half_current_a: I_h, current at which half of what can saturate is gone; above zero.
        exponent_1: n.
        residual_ratio: r, what stays at any current; 2 to 10 % for L (from memory).

    Returns:
        Ratio from r to 1.
    """
    share = 1.0 / (1.0 + np.abs(np.divide(current_a, half_current_a)) ** exponent_1)
    return np.asarray(residual_ratio + (1.0 - np.asarray(residual_ratio)) * share)


def biased_bead(
    bead: BeadLadder,
    *,
    current_a: Real,
    inductance_half_current_a: Real,
    resistance_half_current_a: Real,
    exponent_1: Real = 2.0,
) -> BeadLadder:
    """The bead for small signals on top of a bias current.

    Bias first moves the crossover up, since the inductance goes before the resistance.

    Source: `impedance_left_ratio` on L and R separately; I_R is 2 to 4 times I_L (from memory).
    Valid: as there.

    Args:
        bead: the bead without bias, corners (...).
        current_a: bias, broadcast against the corners.
        inductance_half_current_a: I_L.
        resistance_half_current_a: I_R.
        exponent_1: n of both.

    Returns:
        The bead under bias, corners of the broadcast.
    """
    return scaled_bead(
        bead,
        inductance_ratio=impedance_left_ratio(
            current_a=current_a, half_current_a=inductance_half_current_a, exponent_1=exponent_1
        ),
        resistance_ratio=impedance_left_ratio(
            current_a=current_a, half_current_a=resistance_half_current_a, exponent_1=exponent_1
        ),
    )


def bias_constants(
    *, first_current_a: Real, first_left_ratio: Real, second_current_a: Real, second_left_ratio: Real
) -> tuple[RealArray, RealArray]:
    """Half current and exponent from two points of a bias curve.

    With y = Z(I) / Z(0): n = ln[(1/y1 - 1) / (1/y2 - 1)] / ln(I1 / I2), I_h = I1 / (1/y1 - 1)^(1/n).

    Source: `impedance_left_ratio` without residual, solved for its constants.
    Valid: two different currents and ratios between 0 and 1; outside, nan.

    Args:
        first_current_a: I1.
        first_left_ratio: y1.
        second_current_a: I2.
        second_left_ratio: y2.

    Returns:
        Half current in amperes, exponent.
    """
    first, second = np.asarray(first_left_ratio), np.asarray(second_left_ratio)
    sound = (first > 0.0) & (first < 1.0) & (second > 0.0) & (second < 1.0)
    sound = sound & (np.asarray(first_current_a) != np.asarray(second_current_a)) & (first != second)
    lost_first = np.where(sound, 1.0 / np.where(sound, first, 0.5) - 1.0, 1.0)
    lost_second = np.where(sound, 1.0 / np.where(sound, second, 0.25) - 1.0, 3.0)
    ratio = np.where(sound, np.divide(first_current_a, second_current_a), 0.5)
    exponent = np.log(lost_first / lost_second) / np.log(ratio)
    half = np.asarray(first_current_a) / lost_first ** (1.0 / exponent)
    return np.where(sound, half, np.nan), np.where(sound, exponent, np.nan)


def saturation_current_a(
    *, saturation_t: Real, initial_permeability_ratio: Real, path_length_m: Real, turns_count: Real
) -> RealArray:
    """Order of magnitude of the current that saturates a bead, B_s l / (mu_0 mu_i N).

    Source: Ampere's law and the knee of the magnetisation curve at B_s / mu_i (textbook).
    Valid: a factor of two either way; use a bias curve where there is one.

    Args:
        saturation_t: B_s in tesla, about 0.35 for NiZn (from memory).
        initial_permeability_ratio: mu_i.
        path_length_m: l, magnetic path.
        turns_count: N.

    Returns:
        Amperes.
    """
    field_a_per_m = np.divide(saturation_t, MU_0_H_PER_M * np.asarray(initial_permeability_ratio))
    return np.asarray(field_a_per_m * path_length_m / turns_count)


def flux_vs(*, current_a: Real, inductance_h: Real, half_current_a: Real, residual_ratio: Real) -> RealArray:
    """Flux linkage of a saturating inductance, L_s i + (L_0 - L_s) I_0 atan(i / I_0).

    Source: integral of the differential inductance L_s + (L_0 - L_s) / (1 + (i / I_0)^2).
    Valid: slower than the ferrite's own relaxation (10 to 100 MHz for NiZn, from memory), so that L
        follows the current.

    Args:
        current_a: i, either sign.
        inductance_h: L_0, without bias.
        half_current_a: I_0.
        residual_ratio: L_s / L_0.

    Returns:
        Volt seconds.
    """
    saturating = np.asarray(inductance_h) * (1.0 - np.asarray(residual_ratio))
    knee = np.asarray(half_current_a) * np.arctan(np.divide(current_a, half_current_a))
    return np.asarray(np.asarray(inductance_h) * residual_ratio * current_a + saturating * knee)
