"""Partial inductance of straight conductors in free space, closed forms of the handbooks.

A partial inductance means something only as a term of a closed loop: self inductances plus, for each pair
of pieces, twice the mutual inductance with the sign of their directions.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from gatecheck.physics.arrays import Real, RealArray

MU_0_H_PER_M = 4e-7 * math.pi  # magnetic constant; the 2019 value differs by less than 1e-9
_PER_LENGTH = MU_0_H_PER_M / (2.0 * math.pi)
# Geometric mean distance of a filled rectangle from itself over width plus thickness, to 0.2 % for any shape:
# exp(-3/2) = 0.22313 for a thin strip, 0.22352 for a square (Rosa and Grover, from memory).
RECTANGLE_GMD_RATIO = 0.2235


def round_wire_h(*, length_m: Real, radius_m: Real) -> RealArray:
    """Self inductance of a straight round wire with evenly spread current.

    (mu0 / 2 pi) [l ln((l + sqrt(l^2 + r^2)) / r) - sqrt(l^2 + r^2) + l / 4 + r]

    Source: Rosa, Bulletin of the Bureau of Standards 4(2) (1908) p. 301 ff., eq. (8) to (9) (numbers from
        memory).
    Valid: low frequency; with the current in the skin use `round_wire_skin_h`.

    Args:
        length_m: l.
        radius_m: r.

    Returns:
        Henries.
    """
    return np.asarray(round_wire_skin_h(length_m=length_m, radius_m=radius_m) + _PER_LENGTH * 0.25 * length_m)


def round_wire_skin_h(*, length_m: Real, radius_m: Real) -> RealArray:
    """Self inductance of a straight round wire with the current on its surface; also of a via barrel.

    Source: as `round_wire_h` without the field inside, l / 4.
    Valid: skin depth much smaller than the radius, or a tube.

    Args:
        length_m: l.
        radius_m: r.

    Returns:
        Henries.
    """
    length, radius = np.asarray(length_m), np.asarray(radius_m)
    diagonal = np.hypot(length, radius)
    return np.asarray(_PER_LENGTH * (length * np.arcsinh(length / radius) - diagonal + radius))


def parallel_filaments_h(*, length_m: Real, distance_m: Real) -> RealArray:
    """Mutual inductance of two equal parallel filaments side by side.

    (mu0 / 2 pi) [l asinh(l / d) - sqrt(l^2 + d^2) + d]

    Source: Neumann's integral; Rosa 1908 (equation number not re-read).
    Valid: conductors thin against their distance, or d as their geometric mean distance.

    Args:
        length_m: l.
        distance_m: d.

    Returns:
        Henries.
    """
    return round_wire_skin_h(length_m=length_m, radius_m=distance_m)  # the same integral, at d instead of r


def offset_filaments_h(*, first_length_m: Real, second_length_m: Real, gap_m: Real, distance_m: Real) -> RealArray:
    """Mutual inductance of parallel filaments of any length and offset.

    (mu0 / 4 pi) [F(l + m + s) - F(l + s) - F(m + s) + F(s)], F(x) = x asinh(x / d) - sqrt(x^2 + d^2)

    Source: Neumann's integral; Grover, Inductance Calculations, chapter 6 (from memory).
    Valid: d above zero; the gap s between end and start may be negative for overlap.

    Args:
        first_length_m: l.
        second_length_m: m.
        gap_m: s along the axis from the end of the first to the start of the second.
        distance_m: d between the axes.

    Returns:
        Henries.
    """
    first, second, gap = (np.asarray(value) for value in (first_length_m, second_length_m, gap_m))

    def term(along: RealArray) -> RealArray:
        return np.asarray(along * np.arcsinh(along / distance_m) - np.hypot(along, distance_m))

    total = term(first + second + gap) - term(first + gap) - term(second + gap) + term(gap)
    return np.asarray(0.5 * _PER_LENGTH * total)


def meeting_filaments_h(*, first_length_m: Real, second_length_m: Real, angle_rad: Real) -> RealArray:
    """Mutual inductance of two filaments that start at one point and run off at an angle.

    (mu0 / 2 pi) cos(e) [l atanh(m / (l + R)) + m atanh(l / (m + R))], R the distance of the far ends

    Source: Grover, Inductance Calculations, chapter 7 (from memory).
    Valid: angle above zero; positive when both currents run away from the point.

    Args:
        first_length_m: l.
        second_length_m: m.
        angle_rad: e between the directions.

    Returns:
        Henries.
    """
    first, second, cosine = np.asarray(first_length_m), np.asarray(second_length_m), np.cos(angle_rad)
    far = np.sqrt(first**2 + second**2 - 2.0 * first * second * cosine)
    total = first * np.arctanh(second / (first + far)) + second * np.arctanh(first / (second + far))
    return np.asarray(_PER_LENGTH * cosine * total)


def rectangular_bar_h(*, length_m: Real, width_m: Real, thickness_m: Real) -> RealArray:
    """Self inductance of a straight rectangular bar with evenly spread current.

    (mu0 / 2 pi) [l (ln(2 l / (w + t)) + 1/2) + 0.2235 (w + t)]

    Source: Grover, Inductance Calculations, chapter 5 (from memory); geometric mean distance of the section.
    Valid: bars longer than ten times their width to 0.1 %, twice to 2 %; a square sheet comes out 5 % low.

    Args:
        length_m: l.
        width_m: w.
        thickness_m: t.

    Returns:
        Henries.
    """
    length, girth = np.asarray(length_m), np.asarray(width_m) + np.asarray(thickness_m)
    return np.asarray(_PER_LENGTH * (length * (np.log(2.0 * length / girth) + 0.5) + RECTANGLE_GMD_RATIO * girth))
