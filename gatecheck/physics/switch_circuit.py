"""Small-signal circuit of switches in their active region, one or several in parallel: its poles.

One device: gate branch (R_g, L_g, bead) to the gate; drain branch (R_d, L_d) to the quiet bus; source lead
(R_s, L_s) shared by both; C_gs, C_gd, C_ds; channel g_m v_gs + g_ds v_ds. A Kelvin lead (R_k, L_k), if there
is one, takes the gate current back, and the source lead carries the drain current less what circulates
between the two.

States are the currents (i_g, i_d, with a Kelvin lead the circulating one), v_gs, v_ds and the bead's.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from gatecheck.physics.bead import BeadLadder
from gatecheck.physics.bead_states import BeadStates, bead_states

if TYPE_CHECKING:
    from collections.abc import Sequence

    from gatecheck.physics.arrays import ComplexArray, Real, RealArray

_GATE, _DRAIN, _CIRCULATING = 0, 1, 2  # places of a device's currents in its state


@dataclass(frozen=True, slots=True, kw_only=True)
class SwitchBranch:
    """One switch with the leads that are its own, at one bias; corners (...).

    Attributes:
        gate_resistance_ohm: all resistance in its own gate branch, internal included, without the bead.
        gate_inductance_h: own gate branch, above zero.
        drain_inductance_h: own drain branch, above zero.
        gate_source_f: C_gs.
        gate_drain_f: C_gd at this bias.
        drain_source_f: C_ds at this bias.
        transconductance_siemens: g_m.
        drain_resistance_ohm: own drain branch at the ring frequency.
        source_resistance_ohm: source lead.
        source_inductance_h: source lead, common to gate and drain current unless there is a Kelvin lead.
        output_siemens: g_ds.
        kelvin_resistance_ohm: Kelvin lead.
        kelvin_inductance_h: Kelvin lead, above zero, or None where the package has none.
        bead: bead in its own gate branch, or None.
    """

    gate_resistance_ohm: Real
    gate_inductance_h: Real
    drain_inductance_h: Real
    gate_source_f: Real
    gate_drain_f: Real
    drain_source_f: Real
    transconductance_siemens: Real
    drain_resistance_ohm: Real = 0.0
    source_resistance_ohm: Real = 0.0
    source_inductance_h: Real = 0.0
    output_siemens: Real = 0.0
    kelvin_resistance_ohm: Real = 0.0
    kelvin_inductance_h: Real | None = None
    bead: BeadLadder | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class SharedLeads:
    """What parallel switches have in common, before the joint of their own branches."""

    gate_resistance_ohm: Real = 0.0
    gate_inductance_h: Real = 0.0
    drain_resistance_ohm: Real = 0.0
    drain_inductance_h: Real = 0.0


def single_switch_poles_per_s(device: SwitchBranch) -> ComplexArray:
    """Natural frequencies of one switch whose driver returns to its own source or Kelvin lead.

    Source: Kirchhoff's laws on the circuit in this module's head.
    Valid: small signals at one bias; the driver isolated from the power path but for the joint at the source.

    Args:
        device: the switch, corners (...).

    Returns:
        Poles in rad/s, shape (..., n): four, and one more per state of the bead.
    """
    storage, coupling = _device_equations(device)
    if device.kelvin_inductance_h is not None:  # nothing can circulate: what leaves the driver returns to it
        storage, coupling = (
            np.delete(np.delete(matrix, _CIRCULATING, axis=-1), _CIRCULATING, axis=-2) for matrix in (storage, coupling)
        )
    return _poles(storage, coupling)


def odd_mode_poles_per_s(device: SwitchBranch) -> ComplexArray:
    """Natural frequencies of equal parallel switches working against each other.

    By symmetry no current flows in a shared lead, so every joint is a ground: only the device's own
    branches count, and n devices have this spectrum n - 1 times.

    Source: symmetric networks split into common and differential modes (circuit theory); for MOSFETs
        Kassakian and Lau, IEEE Trans. Electron Devices 31(7) (1984) p. 959 (from memory).
    Valid: equal devices with equal branches; for unequal ones use `parallel_poles_per_s`.

    Args:
        device: one of them, with what lies in its own branch only, corners (...).

    Returns:
        Poles in rad/s, shape (..., n): four, one more with a Kelvin lead, and one per state of the bead.
    """
    return _poles(*_device_equations(device))


def parallel_poles_per_s(devices: Sequence[SwitchBranch], shared: SharedLeads) -> ComplexArray:
    """Natural frequencies of any number of switches, equal or not, with shared gate and drain leads.

    Source: Kirchhoff's laws on the circuit in this module's head, the shared leads carrying the sums.
    Valid: small signals at one bias; source leads joined at a quiet node; a driver that returns over
        Kelvin leads is isolated, so the currents circulating through those add to zero.

    Args:
        devices: the switches, all with or all without a Kelvin lead, corners (...).
        shared: what lies before the joint.

    Returns:
        Poles in rad/s, shape (..., n).

    Raises:
        ValueError: no switch, or a mixture of switches with and without a Kelvin lead.
    """
    if len({device.kelvin_inductance_h is None for device in devices}) != 1:
        raise ValueError("give at least one switch, all with or all without a Kelvin lead")
    blocks = [_device_equations(device) for device in devices]
    sizes = [storage.shape[-1] for storage, _ in blocks]
    starts = [sum(sizes[:place]) for place in range(len(sizes))]
    storage, coupling = _joined(blocks)
    for offset, resistance, inductance in (
        (_GATE, shared.gate_resistance_ohm, shared.gate_inductance_h),
        (_DRAIN, shared.drain_resistance_ohm, shared.drain_inductance_h),
    ):
        carries = np.zeros(sum(sizes))
        carries[[start + offset for start in starts]] = 1.0
        pattern = np.outer(carries, carries)
        storage = storage + np.asarray(inductance)[..., None, None] * pattern
        coupling = coupling - np.asarray(resistance)[..., None, None] * pattern
    if devices[0].kelvin_inductance_h is not None:
        basis = _without_net_circulation([start + _CIRCULATING for start in starts], sum(sizes))
        storage, coupling = basis.T @ storage @ basis, basis.T @ coupling @ basis
    return _poles(storage, coupling)


def _device_equations(device: SwitchBranch) -> tuple[RealArray, RealArray]:
    """E and F of E x' = F x for one device whose every far end is a ground."""
    bead = None if device.bead is None else bead_states(device.bead)
    currents = 2 if device.kelvin_inductance_h is None else 3
    states = 0 if bead is None else bead.storage_au.shape[-1]
    size = currents + 2 + states
    shape = _corner_shape(device, bead)
    storage, coupling = np.zeros((*shape, size, size)), np.zeros((*shape, size, size))
    for carries, resistance, inductance in _leads(device):
        pattern = np.outer(carries, carries)
        storage[..., :currents, :currents] += np.asarray(inductance)[..., None, None] * pattern
        coupling[..., :currents, :currents] -= np.asarray(resistance)[..., None, None] * pattern
    gate_v, drain_v = currents, currents + 1
    storage[..., gate_v, gate_v] = device.gate_source_f + np.asarray(device.gate_drain_f)
    storage[..., drain_v, drain_v] = device.drain_source_f + np.asarray(device.gate_drain_f)
    storage[..., gate_v, drain_v] = storage[..., drain_v, gate_v] = -np.asarray(device.gate_drain_f)
    coupling[..., _GATE, gate_v] = coupling[..., _DRAIN, drain_v] = -1.0
    coupling[..., gate_v, _GATE] = coupling[..., drain_v, _DRAIN] = 1.0
    coupling[..., drain_v, gate_v] = -np.asarray(device.transconductance_siemens)
    coupling[..., drain_v, drain_v] = -np.asarray(device.output_siemens)
    if bead is not None:
        own = slice(currents + 2, size)
        storage[..., own, own] = bead.storage_au[..., :, None] * np.eye(states)
        storage[..., _GATE, _GATE] += bead.inductance_h
        coupling[..., own, own] = bead.coupling_au
        coupling[..., own, _GATE] = bead.inflow_au
        coupling[..., _GATE, own] = bead.outflow_au
        coupling[..., _GATE, _GATE] -= bead.resistance_ohm
    return storage, coupling


def _leads(device: SwitchBranch) -> list[tuple[list[float], Real, Real]]:
    """Each lead as (share of every current it carries, resistance, inductance)."""
    if device.kelvin_inductance_h is None:
        return [
            ([1.0, 0.0], device.gate_resistance_ohm, device.gate_inductance_h),
            ([0.0, 1.0], device.drain_resistance_ohm, device.drain_inductance_h),
            ([1.0, 1.0], device.source_resistance_ohm, device.source_inductance_h),
        ]
    return [
        ([1.0, 0.0, 0.0], device.gate_resistance_ohm, device.gate_inductance_h),
        ([0.0, 1.0, 0.0], device.drain_resistance_ohm, device.drain_inductance_h),
        ([0.0, 1.0, -1.0], device.source_resistance_ohm, device.source_inductance_h),
        ([1.0, 0.0, 1.0], device.kelvin_resistance_ohm, device.kelvin_inductance_h),
    ]


def _corner_shape(device: SwitchBranch, bead: BeadStates | None) -> tuple[int, ...]:
    numbers = [
        value
        for value in (getattr(device, name) for name in SwitchBranch.__dataclass_fields__)
        if value is not None and not isinstance(value, BeadLadder)
    ]
    shapes = [np.shape(value) for value in numbers]
    return np.broadcast_shapes(*shapes, () if bead is None else bead.resistance_ohm.shape)


def _joined(blocks: list[tuple[RealArray, RealArray]]) -> tuple[RealArray, RealArray]:
    """Block-diagonal equations of devices that do not touch yet."""
    shape = np.broadcast_shapes(*(storage.shape[:-2] for storage, _ in blocks))
    total = sum(storage.shape[-1] for storage, _ in blocks)
    storage, coupling = np.zeros((*shape, total, total)), np.zeros((*shape, total, total))
    start = 0
    for block_storage, block_coupling in blocks:
        place = slice(start, start + block_storage.shape[-1])
        storage[..., place, place], coupling[..., place, place] = block_storage, block_coupling
        start = place.stop
    return storage, coupling


def _without_net_circulation(places: list[int], size: int) -> RealArray:
    """Basis of all states in which the circulating currents at the given places add to zero."""
    basis = np.eye(size)
    basis[places[-1], places[:-1]] = -1.0
    return np.delete(basis, places[-1], axis=1)


def _poles(storage: RealArray, coupling: RealArray) -> ComplexArray:
    return np.linalg.eigvals(np.linalg.solve(storage, coupling)).astype(np.complex128)
