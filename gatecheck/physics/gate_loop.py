"""The drive loop of one edge with its bead: modes, response to the driver's step, heat per edge.

Driver, resistances, loop inductance, bead and input capacitance in series. States are kept in energy
coordinates (see `matrix_exponential`). Responses are given for a step of one volt and scaled by the
caller, because both edges of a driver and every supply voltage share them.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from gatecheck.physics.bead import BeadLadder, impedance_slope_h
from gatecheck.physics.bead_states import bead_states
from gatecheck.physics.matrix_exponential import quadratic_integral
from gatecheck.physics.trajectory import Trajectory, first_crossing_s, maximum
from gatecheck.physics.transient import final_state_au, linear_response, observed, record_length_s

if TYPE_CHECKING:
    from gatecheck.physics.arrays import ComplexArray, Real, RealArray

# A mode that moves the gate by less than this part of the step does not count as ringing; our choice. It
# leaves out the gigahertz mode of a bead's own capacitance.
_LEAST_WEIGHT = 0.01
_CURRENT, _GATE = 0, 1  # places in the state


@dataclass(frozen=True, slots=True, kw_only=True)
class GateLoop:
    """One edge's loop, corners (...).

    Attributes:
        resistance_ohm: all resistance except the bead's, above zero.
        inductance_h: whole loop without the bead, above zero.
        capacitance_f: input capacitance, above zero.
        bead: the bead in the loop, or None.
    """

    resistance_ohm: Real
    inductance_h: Real
    capacitance_f: Real
    bead: BeadLadder | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class LoopStates:
    """State equation de/dt = A e + source, e = root of storage times (i, v_gate, bead states)."""

    state_matrix_per_s: RealArray
    root_storage_au: RealArray


@dataclass(frozen=True, slots=True, kw_only=True)
class RingMode:
    """The least damped mode that the gate voltage shows; damping 1 and frequencies nan if none rings."""

    damping_ratio: RealArray
    natural_hz: RealArray
    ring_hz: RealArray
    decay_per_s: RealArray


@dataclass(frozen=True, slots=True, kw_only=True)
class StepResponse:
    """Answer to a driver step of one volt: gate voltage in V per V, gate current in A per V."""

    gate: Trajectory
    current: Trajectory


@dataclass(frozen=True, slots=True, kw_only=True)
class EdgeFigures:
    """What one edge does, each of shape (...); times count from the start of the driver's edge."""

    peak_current_a: RealArray
    peak_current_time_s: RealArray
    extreme_v: RealArray
    overshoot_ratio: RealArray
    half_time_s: RealArray
    rise_time_s: RealArray


@dataclass(frozen=True, slots=True, kw_only=True)
class EdgeHeat:
    """Energy left in each place by one edge, and the integral of the squared current, shape (...)."""

    resistance_j: RealArray
    bead_dc_j: RealArray
    bead_ferrite_j: RealArray
    current_squared_a2_s: RealArray


def loop_states(loop: GateLoop) -> LoopStates:
    """State equation of the loop.

    Source: Kirchhoff's voltage law around the loop, the bead as in `bead_states`.
    Valid: resistances, inductance and capacitance above zero.

    Args:
        loop: the loop, corners (...).

    Returns:
        The equation, corners (...).
    """
    storage, coupling = _descriptor(loop)
    root = np.sqrt(storage)
    return LoopStates(state_matrix_per_s=coupling / (root[..., :, None] * root[..., None, :]), root_storage_au=root)


def loop_poles_per_s(loop: GateLoop) -> ComplexArray:
    """All natural frequencies of the loop.

    Source: eigenvalues of the state matrix.
    Valid: as `loop_states`.

    Args:
        loop: the loop, corners (...).

    Returns:
        Poles in rad/s (real part: growth in nepers per second), shape (..., n), in no order.
    """
    return np.linalg.eigvals(loop_states(loop).state_matrix_per_s).astype(np.complex128)


def ring_mode(loop: GateLoop) -> RingMode:
    """Least damped mode among those that carry at least one percent of the gate's step.

    The weight of a pole p in the step response is 1 / (p Q'(p)), where Q(s) = 1 + s C (R + s L + Z_b).

    Source: partial fractions of the step response 1 / (s Q(s)) (textbook linear systems).
    Valid: as `loop_states`; at exactly critical damping the double pole counts as not ringing.

    Args:
        loop: the loop, corners (...).

    Returns:
        The mode, corners (...).
    """
    poles = loop_poles_per_s(loop)
    with np.errstate(divide="ignore", invalid="ignore"):  # a double pole has unbounded weight and does not ring
        weight = np.abs(1.0 / (poles * _admittance_slope(loop, poles)))
    rings = (poles.imag > 0.0) & (2.0 * weight >= _LEAST_WEIGHT)
    damping = np.where(rings, -poles.real / np.abs(poles), np.inf)
    place = np.argmin(damping, axis=-1)[..., None]
    mode = np.take_along_axis(poles, place, axis=-1)[..., 0]
    any_rings = rings.any(axis=-1)
    return RingMode(
        damping_ratio=np.where(any_rings, -mode.real / np.abs(mode), 1.0),
        natural_hz=np.where(any_rings, np.abs(mode) / (2.0 * math.pi), np.nan),
        ring_hz=np.where(any_rings, mode.imag / (2.0 * math.pi), np.nan),
        decay_per_s=np.where(any_rings, -mode.real, np.nan),
    )


def step_response(loop: GateLoop, *, rise_time_s: Real = 0.0) -> StepResponse:
    """Exact response of gate voltage and current to a one-volt edge of the driver.

    Source: matrix exponential of the state equation, no time step error; sampling as in `transient`.
    Valid: linear capacitance and bead; a rise time of zero is an ideal step and holds for all corners.

    Args:
        loop: the loop, corners (...).
        rise_time_s: duration of the driver's straight edge, zero in all corners or above zero in all.

    Returns:
        Trajectories of corners (...).
    """
    states = loop_states(loop)
    matrix, root = states.state_matrix_per_s, states.root_storage_au
    unit = np.zeros(root.shape)
    unit[..., _CURRENT] = 1.0 / root[..., _CURRENT]
    none = np.zeros(root.shape)
    length_s = record_length_s(state_matrix_per_s=matrix)
    ramp_s = np.broadcast_to(np.asarray(rise_time_s, dtype=np.float64), length_s.shape)
    start, pieces = none, []
    if np.any(ramp_s > 0.0):
        ramp = linear_response(
            state_matrix_per_s=matrix,
            start_au=none,
            source_au_per_s=none,
            source_slope_au_per_s2=unit / ramp_s[..., None],
            duration_s=ramp_s,
        )
        start = final_state_au(ramp)
        pieces.append(ramp)
    pieces.append(
        linear_response(
            state_matrix_per_s=matrix,
            start_au=start,
            source_au_per_s=unit,
            source_slope_au_per_s2=none,
            duration_s=length_s,
        )
    )
    gate, current = (
        [observed(piece, weights_au=_pick(root, place)) for piece in pieces] for place in (_GATE, _CURRENT)
    )
    if len(pieces) == 1:
        return StepResponse(gate=gate[0], current=current[0])
    return StepResponse(gate=gate[0].joined(gate[1]), current=current[0].joined(current[1]))


def edge_figures(response: StepResponse, *, start_v: Real, final_v: Real) -> EdgeFigures:
    """Peak current, gate voltage extreme and times of one edge.

    Source: definitions; 10 to 90 % and 50 % of the step, counted from its first crossing.
    Valid: as the response; `extreme_v` is the final voltage where nothing overshoots.

    Args:
        response: response to one volt, corners (...).
        start_v: driver voltage before the edge.
        final_v: driver voltage after the edge.

    Returns:
        The figures, corners (...).
    """
    step_v = np.asarray(final_v, dtype=np.float64) - start_v
    peak, peak_time = maximum(response.current)
    extreme, _ = maximum(response.gate)
    overshoot = np.maximum(extreme - 1.0, 0.0)
    return EdgeFigures(
        peak_current_a=peak * np.abs(step_v),
        peak_current_time_s=peak_time,
        extreme_v=final_v + overshoot * step_v,
        overshoot_ratio=overshoot,
        half_time_s=first_crossing_s(response.gate, level_au=0.5),
        rise_time_s=first_crossing_s(response.gate, level_au=0.9) - first_crossing_s(response.gate, level_au=0.1),
    )


def time_to_level_s(response: StepResponse, *, start_v: Real, final_v: Real, level_v: Real) -> RealArray:
    """Time from the driver's edge until the gate first reaches a voltage, as the plateau.

    Source: definition.
    Valid: a level outside the swing and its overshoot gives nan.

    Args:
        response: response to one volt, corners (...).
        start_v: driver voltage before the edge.
        final_v: driver voltage after the edge.
        level_v: gate voltage waited for.

    Returns:
        Seconds, corners (...).
    """
    step_v = np.asarray(final_v, dtype=np.float64) - start_v
    return first_crossing_s(response.gate, level_au=(np.asarray(level_v) - start_v) / step_v)


def edge_heat(loop: GateLoop, *, step_v: Real) -> EdgeHeat:
    """Where the energy of one edge goes, exactly; the sum is C V^2 / 2.

    Source: integral of the squared states over all time (see `quadratic_integral`).
    Valid: linear capacitance and bead; with saturation only the time domain holds.

    Args:
        loop: the loop, corners (...).
        step_v: size of the driver's step.

    Returns:
        Energies, corners (...).
    """
    states = loop_states(loop)
    start = np.zeros(states.root_storage_au.shape)
    start[..., _GATE] = -states.root_storage_au[..., _GATE]  # one volt away from the final state
    integral = quadratic_integral(state_matrix_per_s=states.state_matrix_per_s, start_au=start)
    integral = integral * np.square(step_v)[..., None, None]
    matrix = states.state_matrix_per_s
    lost = -0.5 * ((matrix + matrix.swapaxes(-1, -2)) * integral).sum(axis=(-2, -1))
    current = integral[..., _CURRENT, _CURRENT] / states.root_storage_au[..., _CURRENT] ** 2
    dc_ohm = np.zeros(current.shape) if loop.bead is None else loop.bead.dc_resistance_ohm
    in_resistance, in_dc = loop.resistance_ohm * current, dc_ohm * current
    ferrite = np.zeros(current.shape) if loop.bead is None else lost - in_resistance - in_dc
    return EdgeHeat(
        resistance_j=np.asarray(in_resistance),
        bead_dc_j=np.asarray(in_dc),
        bead_ferrite_j=ferrite,
        current_squared_a2_s=current,
    )


def _pick(root: RealArray, place: int) -> RealArray:
    weights = np.zeros(root.shape)
    weights[..., place] = 1.0 / root[..., place]
    return weights


def _admittance_slope(loop: GateLoop, poles: ComplexArray) -> ComplexArray:
    """Q'(p); at a pole C (R + p L + Z_b) = -1 / p, which saves one evaluation."""
    slope = np.asarray(loop.inductance_h, dtype=np.complex128)[..., None]
    if loop.bead is not None:
        slope = slope + impedance_slope_h(_with_pole_axis(loop.bead), complex_frequency_rad_per_s=poles)
    return np.asarray(poles * np.asarray(loop.capacitance_f)[..., None] * slope - 1.0 / poles)


def _with_pole_axis(bead: BeadLadder) -> BeadLadder:
    return BeadLadder(
        dc_resistance_ohm=bead.dc_resistance_ohm[..., None],
        section_resistance_ohm=bead.section_resistance_ohm[..., None, :],
        section_inductance_h=bead.section_inductance_h[..., None, :],
        series_inductance_h=bead.series_inductance_h[..., None],
        capacitance_f=bead.capacitance_f[..., None],
    )


def _descriptor(loop: GateLoop) -> tuple[RealArray, RealArray]:
    """Diagonal of E and matrix F of E x' = F x + source for x = (i, v_gate, bead states)."""
    if loop.bead is None:
        resistance, inductance, capacitance = np.broadcast_arrays(
            loop.resistance_ohm, loop.inductance_h, loop.capacitance_f
        )
        storage = np.stack([inductance, capacitance], axis=-1)
        coupling = np.zeros((*resistance.shape, 2, 2))
    else:
        states = bead_states(loop.bead)
        shape = np.broadcast_shapes(
            np.shape(loop.resistance_ohm),
            np.shape(loop.inductance_h),
            np.shape(loop.capacitance_f),
            states.resistance_ohm.shape,
        )
        count = states.storage_au.shape[-1]
        resistance = np.broadcast_to(loop.resistance_ohm + states.resistance_ohm, shape)
        storage = np.empty((*shape, count + 2))
        storage[..., _CURRENT] = loop.inductance_h + states.inductance_h
        storage[..., _GATE] = loop.capacitance_f
        storage[..., 2:] = states.storage_au
        coupling = np.zeros((*shape, count + 2, count + 2))
        coupling[..., 2:, 2:] = states.coupling_au
        coupling[..., 2:, _CURRENT] = states.inflow_au
        coupling[..., _CURRENT, 2:] = states.outflow_au
    coupling[..., _CURRENT, _CURRENT] = -resistance
    coupling[..., _CURRENT, _GATE] = -1.0
    coupling[..., _GATE, _CURRENT] = 1.0
    return storage, coupling
