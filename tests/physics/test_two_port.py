from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

from gatecheck.physics.two_port import (
    scattering_from_admittance_ratio,
    scattering_from_hybrid_ratio,
    scattering_from_impedance_ratio,
    scattering_from_inverse_hybrid_ratio,
)

if TYPE_CHECKING:
    from collections.abc import Callable


def passive_scattering(seed: int) -> Any:
    rng = np.random.default_rng(seed)
    return 0.3 * (rng.normal(size=(6, 2, 2)) + 1j * rng.normal(size=(6, 2, 2)))


@pytest.mark.parametrize("reference", [(50.0, 50.0), (50.0, 12.0)])
@pytest.mark.parametrize(
    ("letter", "argument", "convert"),
    [
        ("z", "matrix_ohm", scattering_from_impedance_ratio),
        ("y", "matrix_siemens", scattering_from_admittance_ratio),
        ("h", "matrix_au", scattering_from_hybrid_ratio),
        ("g", "matrix_au", scattering_from_inverse_hybrid_ratio),
    ],
)
def test_conversion_equals_scikit_rf(
    letter: str, argument: str, convert: Callable[..., Any], reference: tuple[float, float]
) -> None:
    from skrf import network as skrf

    scattering = passive_scattering(3)
    # scikit-rf keeps H and G as Z parameters of partly swapped ports; its own back conversion is the witness.
    forward = {"z": skrf.s2z, "y": skrf.s2y, "h": skrf.s2h, "g": skrf.s2g}[letter]
    parameters = forward(scattering, np.array(reference))
    found = convert(**{argument: parameters}, reference_ohm=np.array(reference))
    assert found == pytest.approx(scattering, rel=1e-9, abs=1e-12)


def test_hybrid_of_a_series_part_by_hand() -> None:
    # 30 ohm in series: v1 = 30 i1 + v2, i2 = -i1; S11 = Z / (Z + 2 Z0), S21 = 2 Z0 / (Z + 2 Z0).
    hybrid = np.array([[30.0, 1.0], [-1.0, 0.0]], dtype=np.complex128)
    found = scattering_from_hybrid_ratio(matrix_au=hybrid, reference_ohm=np.array([50.0, 50.0]))
    expected = np.array([[30.0, 100.0], [100.0, 30.0]]) / 130.0
    assert found == pytest.approx(expected, rel=1e-12)


def test_three_ports_of_impedance_and_admittance_agree() -> None:
    rng = np.random.default_rng(5)
    root = rng.normal(size=(3, 3))
    impedance = (root @ root.T + 5.0 * np.eye(3)).astype(np.complex128)
    reference = np.array([50.0, 75.0, 10.0])
    by_impedance = scattering_from_impedance_ratio(matrix_ohm=impedance, reference_ohm=reference)
    by_admittance = scattering_from_admittance_ratio(
        matrix_siemens=np.asarray(np.linalg.inv(impedance), dtype=np.complex128), reference_ohm=reference
    )
    assert by_impedance == pytest.approx(by_admittance, rel=1e-10, abs=1e-13)
