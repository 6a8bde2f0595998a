"""From scattering parameters to the impedance of a part, and whether it sits in series or in shunt.

References are real. For a two-port of one part the numbers that do not depend on what else lies at its
ends are -1 / Y21 (part in series, pad capacitance at each end) and Z21 (part in shunt, lead inductance).
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from gatecheck.physics.arrays import ComplexArray, Real, RealArray

_AGREES = 0.05  # an identity between S11 and S21 that fails by more does not hold; our choice
_LOWEST_SHARE = 0.1  # share of the points, from the lowest frequency, that decides the topology; our choice
_EVEN_SPLIT = 0.5  # |S21| of a part of twice the reference in series, or of half of it in shunt


class Topology(StrEnum):
    """How a part was measured."""

    ONE_PORT = "one-port"
    SERIES = "series-through"
    SHUNT = "shunt-through"


@dataclass(frozen=True, slots=True, kw_only=True)
class MeasuredImpedance:
    """Impedance of a part and how it was found.

    `topology` is None where the data fit neither circuit; then `impedance_ohm` is nan. `with_pads` says that
    something at the part's ends had to be taken off. `identity_error_ratio` is how far the identity of the
    topology fails at the lowest frequencies. `doubtful` where |S21| there speaks for the other topology.
    """

    topology: Topology | None
    impedance_ohm: ComplexArray
    identity_error_ratio: float
    with_pads: bool
    doubtful: bool


def reflection_impedance_ohm(*, reflection_ratio: ComplexArray, reference_ohm: Real) -> ComplexArray:
    """Impedance of a one-port, Z0 (1 + S11) / (1 - S11).

    Source: definition of the reflection coefficient.
    Valid: S11 other than 1; best near the reference.

    Args:
        reflection_ratio: S11.
        reference_ohm: Z0.

    Returns:
        Ohms.
    """
    return np.asarray(reference_ohm * (1.0 + reflection_ratio) / (1.0 - reflection_ratio))


def series_transmission_impedance_ohm(*, transmission_ratio: ComplexArray, reference_ohm: Real) -> ComplexArray:
    """Impedance of a part in series between two ports, 2 Z0 (1 - S21) / S21.

    Source: voltage divider between two references.
    Valid: nothing but the part between the ports (S11 = 1 - S21); useless below about 5 ohm in 50.

    Args:
        transmission_ratio: S21.
        reference_ohm: Z0 of both ports.

    Returns:
        Ohms.
    """
    return np.asarray(2.0 * np.asarray(reference_ohm) * (1.0 - transmission_ratio) / transmission_ratio)


def shunt_transmission_impedance_ohm(*, transmission_ratio: ComplexArray, reference_ohm: Real) -> ComplexArray:
    """Impedance of a part from the line between two ports to ground, (Z0 / 2) S21 / (1 - S21).

    Source: voltage divider between two references.
    Valid: nothing but the part between the ports (S11 = S21 - 1); useless above about 500 ohm in 50.

    Args:
        transmission_ratio: S21.
        reference_ohm: Z0 of both ports.

    Returns:
        Ohms.
    """
    return np.asarray(0.5 * np.asarray(reference_ohm) * transmission_ratio / (1.0 - transmission_ratio))


def series_element_ohm(*, scattering_ratio: ComplexArray, reference_ohm: RealArray) -> ComplexArray:
    """Impedance of the series element of a two-port, -1 / Y21, whatever hangs from its ends to ground.

    Source: S to Y conversion for real references (circuit theory).
    Valid: S21 other than 0.

    Args:
        scattering_ratio: S, shape (..., 2, 2).
        reference_ohm: Z0 of each port, shape (2,).

    Returns:
        Ohms, shape (...).
    """
    s11, s12, s21, s22 = _four(scattering_ratio)
    scale = np.sqrt(np.prod(reference_ohm, axis=-1))
    return np.asarray(scale * ((1.0 + s11) * (1.0 + s22) - s12 * s21) / (2.0 * s21))


def shunt_element_ohm(*, scattering_ratio: ComplexArray, reference_ohm: RealArray) -> ComplexArray:
    """Impedance of the shunt element of a two-port, Z21, whatever lies in series with its ports.

    Source: S to Z conversion for real references (circuit theory).
    Valid: a shunt element that exists.

    Args:
        scattering_ratio: S, shape (..., 2, 2).
        reference_ohm: Z0 of each port, shape (2,).

    Returns:
        Ohms, shape (...).
    """
    s11, s12, s21, s22 = _four(scattering_ratio)
    scale = np.sqrt(np.prod(reference_ohm, axis=-1))
    return np.asarray(scale * 2.0 * s21 / ((1.0 - s11) * (1.0 - s22) - s12 * s21))


def renormalised_ratio(
    *, scattering_ratio: ComplexArray, reference_ohm: RealArray, new_reference_ohm: Real
) -> ComplexArray:
    """Scattering parameters for another reference, the same at all ports.

    Source: definition of power waves for real references, a' = (v + Z' i) / (2 root(Z')), written in a and b.
    Valid: references above zero.

    Args:
        scattering_ratio: S, shape (..., p, p).
        reference_ohm: Z0 of each port, shape (p,).
        new_reference_ohm: the new one.

    Returns:
        S for the new reference, shape (..., p, p).
    """
    old, new = np.asarray(reference_ohm), np.asarray(new_reference_ohm)
    mismatch = (new - old) / (new + old)
    scale = np.sqrt(1.0 - mismatch**2)
    shift = mismatch * np.eye(old.shape[-1])
    moved = (scattering_ratio - shift) @ np.linalg.inv(np.eye(old.shape[-1]) - shift @ scattering_ratio)
    return np.asarray(moved / scale[:, None] * scale[None, :])


def measured_impedance(*, scattering_ratio: ComplexArray, reference_ohm: RealArray) -> MeasuredImpedance:
    """Impedance of a part from one-port or two-port data, with the topology decided from the data.

    In series S11 + S21 = 1 and |S21| goes to 1 at low frequency; in shunt S21 - S11 = 1 and |S21| goes to 0.

    Source: the two identities follow from Kirchhoff's laws with one part between equal references.
    Valid: a part that is a low impedance at the lowest frequencies, as a bead or an inductor.

    Args:
        scattering_ratio: S along rising frequency, shape (n, p, p) with p one or two.
        reference_ohm: Z0 of each port, shape (p,).

    Returns:
        The impedance, shape (n,), and how it was found.

    Raises:
        ValueError: more than two ports.
    """
    ports = scattering_ratio.shape[-1]
    if ports == 1:
        impedance = reflection_impedance_ohm(
            reflection_ratio=scattering_ratio[..., 0, 0], reference_ohm=reference_ohm[0]
        )
        return MeasuredImpedance(
            topology=Topology.ONE_PORT,
            impedance_ohm=impedance,
            identity_error_ratio=0.0,
            with_pads=False,
            doubtful=False,
        )
    if ports > 2:  # noqa: PLR2004
        raise ValueError(f"a part has one or two ports, these data have {ports}")
    return _two_port(scattering_ratio, reference_ohm)


def impedance_error_ratio(*, topology: Topology, impedance_ohm: Real, reference_ohm: Real) -> RealArray:
    """How much larger the relative error of Z is than the error of the reading.

    The error of S21 is counted in parts of S21 and gains 1 + 2 Z0 / Z in series, 1 + 2 Z / Z0 in shunt; that
    of S11 in parts of full reflection, and gains (Z + Z0)^2 / (2 Z Z0).

    Source: derivative of the conversion formulas.
    Valid: small errors, real impedances; a guide to the range each fixture is good for.

    Args:
        topology: how the part was measured.
        impedance_ohm: |Z|.
        reference_ohm: Z0.

    Returns:
        Ratio of relative errors.
    """
    size = np.divide(impedance_ohm, reference_ohm)
    if topology is Topology.SERIES:
        return np.asarray(1.0 + 2.0 / size)
    if topology is Topology.SHUNT:
        return np.asarray(1.0 + 2.0 * size)
    return np.asarray((size + 1.0) ** 2 / (2.0 * size))


def _four(scattering_ratio: ComplexArray) -> tuple[ComplexArray, ComplexArray, ComplexArray, ComplexArray]:
    s = np.asarray(scattering_ratio)
    return s[..., 0, 0], s[..., 0, 1], s[..., 1, 0], s[..., 1, 1]


def _two_port(scattering_ratio: ComplexArray, reference_ohm: RealArray) -> MeasuredImpedance:
    common = float(reference_ohm[0])
    even = renormalised_ratio(scattering_ratio=scattering_ratio, reference_ohm=reference_ohm, new_reference_ohm=common)
    s11, _, s21, _ = _four(even)
    errors = {Topology.SERIES: np.abs(s11 + s21 - 1.0), Topology.SHUNT: np.abs(s21 - s11 - 1.0)}
    lowest = max(1, round(_LOWEST_SHARE * s21.shape[-1]))
    at_low = {topology: float(np.median(error[:lowest])) for topology, error in errors.items()}
    holding = [candidate for candidate in errors if at_low[candidate] <= _AGREES]
    if not holding:
        return MeasuredImpedance(
            topology=None,
            impedance_ohm=np.full(s21.shape, complex(np.nan, np.nan)),
            identity_error_ratio=min(at_low.values()),
            with_pads=False,
            doubtful=True,
        )
    # A series part of little impedance, or a shunt part of much, satisfies both; then all points decide.
    topology = min(holding, key=lambda candidate: float(np.median(errors[candidate])))
    passes = float(np.median(np.abs(s21[:lowest]))) > _EVEN_SPLIT
    with_pads = bool(errors[topology].max() > _AGREES)
    return MeasuredImpedance(
        topology=topology,
        impedance_ohm=_element(topology, even, common, with_pads=with_pads),
        identity_error_ratio=at_low[topology],
        with_pads=with_pads,
        doubtful=passes != (topology is Topology.SERIES),
    )


def _element(
    topology: Topology, scattering_ratio: ComplexArray, reference_ohm: float, *, with_pads: bool
) -> ComplexArray:
    references = np.full(2, reference_ohm)
    transmission = scattering_ratio[..., 1, 0]
    if topology is Topology.SERIES:
        if with_pads:
            return series_element_ohm(scattering_ratio=scattering_ratio, reference_ohm=references)
        return series_transmission_impedance_ohm(transmission_ratio=transmission, reference_ohm=reference_ohm)
    if with_pads:
        return shunt_element_ohm(scattering_ratio=scattering_ratio, reference_ohm=references)
    return shunt_transmission_impedance_ohm(transmission_ratio=transmission, reference_ohm=reference_ohm)
