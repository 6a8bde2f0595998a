"""Scattering parameters from impedance, admittance and hybrid parameters, for real references."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from gatecheck.physics.arrays import ComplexArray, RealArray


def scattering_from_impedance_ratio(*, matrix_ohm: ComplexArray, reference_ohm: RealArray) -> ComplexArray:
    """S from Z, (z - 1)(z + 1)^-1 with z normalised by the roots of the references.

    Source: circuit theory.
    Valid: references above zero.

    Args:
        matrix_ohm: Z, shape (..., p, p).
        reference_ohm: Z0 of each port, shape (p,).

    Returns:
        S, shape (..., p, p).
    """
    root = np.sqrt(reference_ohm)
    normal = matrix_ohm / (root[:, None] * root[None, :])
    identity = np.eye(root.size)
    return np.asarray((normal - identity) @ np.linalg.inv(normal + identity))


def scattering_from_admittance_ratio(*, matrix_siemens: ComplexArray, reference_ohm: RealArray) -> ComplexArray:
    """S from Y, (1 - y)(1 + y)^-1 with y normalised by the roots of the references.

    Source: circuit theory.
    Valid: references above zero.

    Args:
        matrix_siemens: Y, shape (..., p, p).
        reference_ohm: Z0 of each port, shape (p,).

    Returns:
        S, shape (..., p, p).
    """
    root = np.sqrt(reference_ohm)
    normal = matrix_siemens * (root[:, None] * root[None, :])
    identity = np.eye(root.size)
    return np.asarray((identity - normal) @ np.linalg.inv(identity + normal))


def scattering_from_hybrid_ratio(*, matrix_au: ComplexArray, reference_ohm: RealArray) -> ComplexArray:
    """S from H (v1, i2 as functions of i1, v2).

    With unit incident waves a_k: v_k = (a_k + b_k) root(Z_k), i_k = (a_k - b_k) / root(Z_k), solved for b.

    Source: definition of power waves for real references (circuit theory).
    Valid: two ports, references above zero.

    Args:
        matrix_au: h11 in ohms, h12 and h21 plain, h22 in siemens, shape (..., 2, 2).
        reference_ohm: Z0 of each port, shape (2,).

    Returns:
        S, shape (..., 2, 2).
    """
    return _from_mixed(matrix_au, np.sqrt(reference_ohm), first_is_current=True)


def scattering_from_inverse_hybrid_ratio(*, matrix_au: ComplexArray, reference_ohm: RealArray) -> ComplexArray:
    """S from G (i1, v2 as functions of v1, i2).

    Source: definition of power waves for real references (circuit theory).
    Valid: two ports, references above zero.

    Args:
        matrix_au: g11 in siemens, g12 and g21 plain, g22 in ohms, shape (..., 2, 2).
        reference_ohm: Z0 of each port, shape (2,).

    Returns:
        S, shape (..., 2, 2).
    """
    return _from_mixed(matrix_au, np.sqrt(reference_ohm), first_is_current=False)


def _from_mixed(matrix: ComplexArray, root: RealArray, *, first_is_current: bool) -> ComplexArray:
    """From y = M x, where x holds a current of one port and a voltage of the other, and y the rest.

    A voltage is root (a + b), a current (a - b) / root: x = P a + Q b and y = P' a - Q' b, each diagonal.
    """
    current_like = np.array([first_is_current, not first_is_current])
    given = np.where(current_like, 1.0 / root, root)
    given_sign = np.where(current_like, -1.0, 1.0)
    answer = np.where(current_like, root, 1.0 / root)
    # answer (a - given_sign b) = M given (a + given_sign b)
    inside = matrix * given[None, :]
    left = answer[:, None] * np.eye(2) * given_sign[None, :] + inside * given_sign[None, :]
    right = answer[:, None] * np.eye(2) - inside
    return np.asarray(np.linalg.solve(left, right))
