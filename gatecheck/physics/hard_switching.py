"""Turn-on of a switch that takes over an inductive load current: times and loss, integrated.

The gate loop with its bead drives the gate; the load current flows in a clamp diode to the bus until the
channel carries all of it, then the drain falls while C_gd holds the gate on its plateau. It answers what a
bead or a resistor costs; the closed forms are in `switching_time`.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from gatecheck.physics.bead_states import BeadStates, bead_states
from gatecheck.physics.stiff import integrate, state_trajectory
from gatecheck.physics.trajectory import first_crossing_s, value_at

if TYPE_CHECKING:
    from gatecheck.physics.arrays import Real, RealArray
    from gatecheck.physics.gate_loop import GateLoop

_CURRENT, _GATE, _DRAIN, _ENERGY, _BEAD = 0, 1, 2, 3, 4  # places in the state
_CLAMP_DROP = 1e-4  # the clamp takes the load current at this part of the bus voltage above it; our choice
_KNEE_V = 1.0  # drain voltage at which the channel's tanh law bends; our choice, small against any bus
_TOLERANCE = 1e-5  # per step, in parts of each state's size; our choice


@dataclass(frozen=True, slots=True, kw_only=True)
class HardSwitch:
    """The switch and what it commutates, corners (...).

    The channel law is i = g_m (v_gs - V_th) tanh(v_ds / 1 V) above threshold.
    """

    threshold_v: Real
    transconductance_siemens: Real
    gate_source_f: Real
    gate_drain_f: Real
    bus_v: Real
    load_a: Real


@dataclass(frozen=True, slots=True, kw_only=True)
class TurnOnFigures:
    """Times and loss of one turn-on, shape (...); times count from the driver's step.

    `energy_j` is the integral of v_ds i over the whole record, with the loss of the on state at its end.
    """

    current_start_s: RealArray
    current_rise_s: RealArray
    voltage_fall_s: RealArray
    plateau_current_a: RealArray
    energy_j: RealArray


def turn_on(loop: GateLoop, switch: HardSwitch, *, start_v: Real, final_v: Real, duration_s: Real) -> TurnOnFigures:
    """Simulate one turn-on under load.

    Source: Kirchhoff's laws with the channel law of `HardSwitch`, integrated by `stiff`.
    Valid: constant capacitances (take C_gd at the charge-equivalent value), no recovery charge, no drain or
        common source inductance; the loop's own capacitance is not used.

    Args:
        loop: gate loop, corners (...).
        switch: switch and load, corners (...).
        start_v: driver voltage before the step, below threshold.
        final_v: driver voltage after it.
        duration_s: length of the record, enough for the drain to fall; else times are nan.

    Returns:
        The figures, corners (...): 10 % of the load current; 10 to 90 % of current; 90 to 10 % of drain
        voltage; gate current at half the drain voltage.
    """
    system = _HardSwitching(loop, switch, final_v=final_v)
    solution = integrate(
        system,
        start_au=system.start(start_v),
        duration_s=duration_s,
        scale_au=system.scale(np.abs(np.asarray(final_v) - start_v)),
        tolerance_ratio=_TOLERANCE,
    )
    gate, drain, current = (state_trajectory(solution, state_index=place) for place in (_GATE, _DRAIN, _CURRENT))
    # While the load current moves over, the clamp holds the drain and the channel current follows the gate.
    overdrive_v = np.divide(switch.load_a, switch.transconductance_siemens)
    tenth_s, nine_tenths_s = (
        first_crossing_s(gate, level_au=switch.threshold_v + part * overdrive_v) for part in (0.1, 0.9)
    )
    bus_v = np.asarray(switch.bus_v)
    falls_s = [first_crossing_s(drain, level_au=part * bus_v) for part in (0.9, 0.5, 0.1)]
    return TurnOnFigures(
        current_start_s=tenth_s,
        current_rise_s=nine_tenths_s - tenth_s,
        voltage_fall_s=falls_s[2] - falls_s[0],
        plateau_current_a=value_at(current, time_s=np.nan_to_num(falls_s[1])),
        energy_j=solution.state_au[..., -1, _ENERGY],
    )


class _HardSwitching:
    """State equations; the state is (gate current, v_gs, v_ds, lost energy, bead states)."""

    def __init__(self, loop: GateLoop, switch: HardSwitch, *, final_v: Real) -> None:
        self._bead: BeadStates | None = None if loop.bead is None else bead_states(loop.bead)
        extra_ohm = 0.0 if self._bead is None else self._bead.resistance_ohm
        extra_h = 0.0 if self._bead is None else self._bead.inductance_h
        self._loop_ohm = np.asarray(loop.resistance_ohm + extra_ohm)
        self._loop_h = np.asarray(loop.inductance_h + extra_h)
        self._count = 0 if self._bead is None else self._bead.storage_au.shape[-1]
        self._final_v, self._switch = np.asarray(final_v), switch
        self._input_f = np.asarray(switch.gate_source_f) + np.asarray(switch.gate_drain_f)
        numbers = (getattr(switch, name) for name in HardSwitch.__dataclass_fields__)
        self._shape = np.broadcast_shapes(
            self._loop_ohm.shape, self._loop_h.shape, self._final_v.shape, *(np.shape(n) for n in numbers)
        )
        self._clamp_siemens = np.asarray(switch.load_a) / (_CLAMP_DROP * np.asarray(switch.bus_v))

    def start(self, start_v: Real) -> RealArray:
        """State at rest: gate off, load in the clamp."""
        state = np.zeros((*self._shape, _BEAD + self._count))
        state[..., _GATE] = start_v
        state[..., _DRAIN] = self._switch.bus_v * (1.0 + _CLAMP_DROP)
        return state

    def scale(self, step_v: RealArray) -> RealArray:
        """Typical size of each state."""
        scale = np.empty((*self._shape, _BEAD + self._count))
        current = step_v / np.maximum(np.sqrt(self._loop_h / self._input_f), self._loop_ohm)
        scale[...] = current[..., None]
        scale[..., _GATE] = step_v
        scale[..., _DRAIN] = self._switch.bus_v
        scale[..., _ENERGY] = self._input_f * step_v * np.asarray(self._switch.bus_v)
        if self._bead is not None:  # a bead's voltage state is of the size of the step, its currents of the loop's
            voltage_like = self._bead.outflow_au < 0.0
            scale[..., _BEAD:] = np.where(voltage_like, step_v[..., None], current[..., None])
        return scale

    def slope_au_per_s(self, state: RealArray) -> RealArray:
        slope = np.zeros(np.broadcast_shapes(state.shape, (*self._shape, 1)))
        channel, clamp = self._drain_currents(state)
        drop = self._final_v - self._loop_ohm * state[..., _CURRENT] - state[..., _GATE]
        if self._bead is not None:
            own = state[..., _BEAD:]
            drop = drop + (self._bead.outflow_au * own).sum(axis=-1)
            flow = (self._bead.coupling_au @ own[..., None])[..., 0]
            flow = flow + self._bead.inflow_au * state[..., _CURRENT, None]
            slope[..., _BEAD:] = flow / self._bead.storage_au
        slope[..., _CURRENT] = drop / self._loop_h
        into_drain = self._switch.load_a - channel - clamp
        slope[..., _GATE], slope[..., _DRAIN] = self._voltages(state[..., _CURRENT], into_drain)
        slope[..., _ENERGY] = state[..., _DRAIN] * channel
        return slope

    def jacobian_per_s(self, state: RealArray) -> RealArray:
        jacobian = np.zeros((*state.shape, state.shape[-1]))
        channel, _ = self._drain_currents(state)
        over_on = state[..., _GATE] > self._switch.threshold_v
        knee = np.tanh(state[..., _DRAIN] / _KNEE_V)
        by_gate = np.where(over_on, self._switch.transconductance_siemens * knee, 0.0)
        over = np.maximum(state[..., _GATE] - self._switch.threshold_v, 0.0)
        by_drain = self._switch.transconductance_siemens * over * (1.0 - knee**2) / _KNEE_V
        clamp = np.where(state[..., _DRAIN] > self._switch.bus_v, self._clamp_siemens, 0.0)
        jacobian[..., _CURRENT, _CURRENT] = -self._loop_ohm / self._loop_h
        jacobian[..., _CURRENT, _GATE] = -1.0 / self._loop_h
        for place, current, drain in (
            (_CURRENT, 1.0, 0.0),
            (_GATE, 0.0, -by_gate),
            (_DRAIN, 0.0, -by_drain - clamp),
        ):
            jacobian[..., _GATE, place], jacobian[..., _DRAIN, place] = self._voltages(current, drain)
        jacobian[..., _ENERGY, _GATE] = state[..., _DRAIN] * by_gate
        jacobian[..., _ENERGY, _DRAIN] = channel + state[..., _DRAIN] * by_drain
        if self._bead is not None:
            storage = self._bead.storage_au
            jacobian[..., _CURRENT, _BEAD:] = self._bead.outflow_au / self._loop_h[..., None]
            jacobian[..., _BEAD:, _CURRENT] = self._bead.inflow_au / storage
            jacobian[..., _BEAD:, _BEAD:] = self._bead.coupling_au / storage[..., :, None]
        return jacobian

    def _drain_currents(self, state: RealArray) -> tuple[RealArray, RealArray]:
        over = np.maximum(state[..., _GATE] - self._switch.threshold_v, 0.0)
        channel = self._switch.transconductance_siemens * over * np.tanh(state[..., _DRAIN] / _KNEE_V)
        clamp = self._clamp_siemens * np.maximum(state[..., _DRAIN] - self._switch.bus_v, 0.0)
        return np.asarray(channel), np.asarray(clamp)

    def _voltages(self, into_gate: Real, into_drain: Real) -> tuple[RealArray, RealArray]:
        """Slopes of v_gs and v_ds for currents into the two nodes, of which the drain has no C but C_gd."""
        gate = (np.asarray(into_gate) + into_drain) / self._switch.gate_source_f
        return gate, gate + np.asarray(into_drain) / self._switch.gate_drain_f
