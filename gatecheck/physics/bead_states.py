"""State equations of a bead, ready to be set into the circuit it is part of.

With i the current through the bead and v its voltage, E dx/dt = F x + g i and v = -h x + D i + L_x di/dt.
E is diagonal. The dissipative part of F is symmetric and the rest antisymmetric, so any circuit built of
it stays passive to the last digit.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from gatecheck.physics.arrays import RealArray
    from gatecheck.physics.bead import BeadLadder


@dataclass(frozen=True, slots=True, kw_only=True)
class BeadStates:
    """A bead's own state equations, corners (...), n states.

    Attributes:
        storage_au: diagonal of E (capacitance or inductance of each state), shape (..., n).
        coupling_au: F, shape (..., n, n).
        inflow_au: g, shape (..., n).
        outflow_au: h, shape (..., n).
        resistance_ohm: D, shape (...).
        inductance_h: L_x, shape (...).
    """

    storage_au: RealArray
    coupling_au: RealArray
    inflow_au: RealArray
    outflow_au: RealArray
    resistance_ohm: RealArray
    inductance_h: RealArray


def bead_states(bead: BeadLadder) -> BeadStates:
    """State equations of a ladder: one state per section, one for C, one for L_0 when C lies across it.

    Source: Kirchhoff's laws on the ladder of `BeadLadder`.
    Valid: all corners with or all without capacitance, the same for L_0; a mixture raises ValueError.

    Args:
        bead: the bead, corners (...).

    Returns:
        The equations, corners (...).

    Raises:
        ValueError: some corners have an element that others lack.
    """
    if not _present(bead.capacitance_f, "capacitance_f"):
        return _without_capacitance(bead)
    if _present(bead.series_inductance_h, "series_inductance_h"):
        return _with_series_inductance(bead)
    return _with_capacitance(bead)


def _present(values: RealArray, name: str) -> bool:
    present = values > 0.0
    if present.any() and not present.all():
        raise ValueError(f"{name} must be zero in all corners or above zero in all of them")
    return bool(present.all())


def _without_capacitance(bead: BeadLadder) -> BeadStates:
    resistance = bead.section_resistance_ohm
    return BeadStates(
        storage_au=bead.section_inductance_h,
        coupling_au=_diagonal(-resistance),
        inflow_au=resistance,
        outflow_au=resistance,
        resistance_ohm=bead.dc_resistance_ohm + resistance.sum(axis=-1),
        inductance_h=bead.series_inductance_h,
    )


def _with_capacitance(bead: BeadLadder) -> BeadStates:
    """States: voltage over C, then the section currents; the string carries (v + sum R_k i_k) / sum R_k."""
    resistance = bead.section_resistance_ohm
    total = resistance.sum(axis=-1)[..., None]
    share = resistance / total
    count = resistance.shape[-1]
    coupling = np.zeros((*resistance.shape[:-1], count + 1, count + 1))
    coupling[..., 0, 0] = -1.0 / total[..., 0]
    coupling[..., 0, 1:] = -share
    coupling[..., 1:, 0] = share
    coupling[..., 1:, 1:] = resistance[..., :, None] * share[..., None, :] - _diagonal(resistance)
    return _across_capacitance(
        bead, np.concatenate([bead.capacitance_f[..., None], bead.section_inductance_h], axis=-1), coupling
    )


def _with_series_inductance(bead: BeadLadder) -> BeadStates:
    """States: voltage over C, current of the string, then the section currents."""
    resistance = bead.section_resistance_ohm
    count = resistance.shape[-1]
    coupling = np.zeros((*resistance.shape[:-1], count + 2, count + 2))
    coupling[..., 0, 1] = -1.0
    coupling[..., 1, 0] = 1.0
    coupling[..., 1, 1] = -resistance.sum(axis=-1)
    coupling[..., 1, 2:] = resistance
    coupling[..., 2:, 1] = resistance
    coupling[..., 2:, 2:] = -_diagonal(resistance)
    storage = [bead.capacitance_f[..., None], bead.series_inductance_h[..., None], bead.section_inductance_h]
    return _across_capacitance(bead, np.concatenate(storage, axis=-1), coupling)


def _across_capacitance(bead: BeadLadder, storage: RealArray, coupling: RealArray) -> BeadStates:
    first = np.zeros(storage.shape)
    first[..., 0] = 1.0
    return BeadStates(
        storage_au=storage,
        coupling_au=coupling,
        inflow_au=first,
        outflow_au=-first,
        resistance_ohm=bead.dc_resistance_ohm,
        inductance_h=np.zeros(bead.dc_resistance_ohm.shape),
    )


def _diagonal(values: RealArray) -> RealArray:
    return values[..., :, None] * np.eye(values.shape[-1])
