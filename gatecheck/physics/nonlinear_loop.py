"""The drive loop with a gate charge curve or a saturating bead, stepped in time.

The linear answers of `gate_loop` are exact and fast; this is for a gate whose charge curve is known and
for beads near their saturation. The bead's own capacitance is left out: it rings at gigahertz, where the
gate capacitance lets nothing through.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from gatecheck.physics.bead import BeadLadder
from gatecheck.physics.gate_loop import GateLoop, StepResponse, loop_states
from gatecheck.physics.stiff import integrate, state_trajectory
from gatecheck.physics.trajectory import Trajectory
from gatecheck.physics.transient import record_length_s

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from gatecheck.physics.arrays import Real, RealArray

_CURRENT, _CHARGE, _SECTIONS = 0, 1, 2  # places in the state
_LEAST_ELASTANCE = 1e-300  # keeps a start on a plateau from dividing by zero; it starts at its foot
_NO_BEAD = BeadLadder(
    dc_resistance_ohm=np.zeros(()),
    section_resistance_ohm=np.zeros(0),
    section_inductance_h=np.zeros(0),
    series_inductance_h=np.zeros(()),
    capacitance_f=np.zeros(()),
)


@dataclass(frozen=True, slots=True, kw_only=True)
class ChargeCurve:
    """Gate voltage as a function of gate charge, straight between points and beyond the ends.

    Both arrays have shape (m,) and rise; a plateau of equal voltages is allowed. `charge_ratio` scales the
    charge of each corner, shape (...).
    """

    charge_c: RealArray
    voltage_v: RealArray
    charge_ratio: Real = 1.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Saturation:
    """How the bead's sections lose inductance with their own current (see `bead_bias`), shapes (...)."""

    half_current_a: Real
    residual_ratio: Real = 0.05


def charge_curve_from_capacitance(*, voltage_v: RealArray, capacitance_f: RealArray) -> ChargeCurve:
    """Charge curve by integrating a capacitance over voltage.

    Source: Q = integral of C dV, by the trapezoidal rule.
    Valid: rising voltages close enough together for straight pieces of C.

    Args:
        voltage_v: voltages, shape (m,).
        capacitance_f: differential capacitance there, shape (m,).

    Returns:
        The curve, with zero charge at the first voltage.
    """
    pieces = 0.5 * (capacitance_f[1:] + capacitance_f[:-1]) * np.diff(voltage_v)
    return ChargeCurve(charge_c=np.concatenate([[0.0], np.cumsum(pieces)]), voltage_v=np.asarray(voltage_v))


def nonlinear_edge(
    loop: GateLoop,
    *,
    start_v: float,
    final_v: float,
    charge: ChargeCurve | None = None,
    saturation: Saturation | None = None,
) -> StepResponse:
    """Response of gate voltage and current to a driver step, in the units of `gate_loop.step_response`.

    Source: Kirchhoff's voltage law; v(q) from the curve, L(i) = L_0 (r + (1 - r) / (1 + (i / I_0)^2)) per
        section of the bead; integrated by `stiff`.
    Valid: parallel resistances of the bead constant, its own capacitance left out. The response is per volt
        of this very step and must not be scaled to another.

    Args:
        loop: the loop, corners (...); its capacitance counts where no curve is given and sets the time scale.
        start_v: driver voltage before the step.
        final_v: driver voltage after it.
        charge: gate charge curve, or None for the loop's capacitance.
        saturation: bead saturation, or None.

    Returns:
        Trajectories of corners (...).
    """
    system = _NonlinearLoop(loop, final_v=final_v, charge=charge, saturation=saturation)
    step_v = final_v - start_v
    solution = integrate(
        system,
        start_au=system.start(start_v),
        duration_s=record_length_s(state_matrix_per_s=loop_states(loop).state_matrix_per_s),
        scale_au=system.scale(abs(step_v)),
    )
    moved = state_trajectory(solution, state_index=_CHARGE)
    elastance = system.elastance(moved.value_au) / step_v
    gate = Trajectory(
        time_s=moved.time_s,
        value_au=(system.voltage(moved.value_au) - start_v) / step_v,
        slope_au_per_s=elastance * moved.slope_au_per_s,
    )
    return StepResponse(
        gate=gate, current=state_trajectory(solution, state_index=_CURRENT).scaled(factor_ratio=1.0 / step_v)
    )


class _NonlinearLoop:
    """State equations; the state is (loop current, gate charge, section currents of the bead)."""

    def __init__(
        self, loop: GateLoop, *, final_v: float, charge: ChargeCurve | None, saturation: Saturation | None
    ) -> None:
        bead = loop.bead if loop.bead is not None else _NO_BEAD
        self._resistances, self._inductances = bead.section_resistance_ohm, bead.section_inductance_h
        self._loop_ohm = loop.resistance_ohm + bead.dc_resistance_ohm + self._resistances.sum(axis=-1)
        self._loop_h = np.asarray(loop.inductance_h + bead.series_inductance_h)
        self._final_v, self._saturation = final_v, saturation
        ratio = np.asarray(loop.capacitance_f if charge is None else charge.charge_ratio, dtype=np.float64)
        # Without a curve, charge is counted in parts of one farad-volt and the curve is the straight line.
        self._ratio = ratio
        self._charge_c = np.array([0.0, 1.0]) if charge is None else charge.charge_c
        self._voltage_v = np.array([0.0, 1.0]) if charge is None else charge.voltage_v
        self._pieces = np.diff(self._voltage_v) / np.diff(self._charge_c)
        self._shape = np.broadcast_shapes(self._loop_ohm.shape, self._loop_h.shape, ratio.shape)

    def start(self, start_v: float) -> RealArray:
        """State at rest at a gate voltage."""
        state = np.zeros((*self._shape, _SECTIONS + self._resistances.shape[-1]))
        piece = self._piece(self._voltage_v, start_v)
        beyond = (start_v - self._voltage_v[piece]) / np.maximum(self._pieces[piece], _LEAST_ELASTANCE)
        state[..., _CHARGE] = (self._charge_c[piece] + beyond) * self._ratio
        return state

    def scale(self, step_v: float) -> RealArray:
        """Typical size of each state."""
        scale = np.empty((*self._shape, _SECTIONS + self._resistances.shape[-1]))
        mean = (self._charge_c[-1] - self._charge_c[0]) / (self._voltage_v[-1] - self._voltage_v[0])
        capacitance = mean * self._ratio
        scale[...] = (step_v / np.maximum(np.sqrt(self._loop_h / capacitance), self._loop_ohm))[..., None]
        scale[..., _CHARGE] = step_v * capacitance
        return scale

    def voltage(self, charge_c: RealArray) -> RealArray:
        """Gate voltage at a charge, shape (...) or (..., m)."""
        unscaled = charge_c / self._ratio_like(charge_c)
        piece = self._piece(self._charge_c, unscaled)
        return self._voltage_v[piece] + self._pieces[piece] * (unscaled - self._charge_c[piece])

    def elastance(self, charge_c: RealArray) -> RealArray:
        """dv/dq at a charge, shape (...) or (..., m)."""
        ratio = self._ratio_like(charge_c)
        return self._pieces[self._piece(self._charge_c, charge_c / ratio)] / ratio

    def slope_au_per_s(self, state: RealArray) -> RealArray:
        current, sections = state[..., _CURRENT], state[..., _SECTIONS:]
        slope = np.empty_like(state)
        string = (self._resistances * sections).sum(axis=-1)
        drop = self._final_v - self.voltage(state[..., _CHARGE]) - self._loop_ohm * current + string
        slope[..., _CURRENT] = drop / self._loop_h
        slope[..., _CHARGE] = current
        across = self._resistances * (current[..., None] - sections)
        slope[..., _SECTIONS:] = across / (self._inductances * self._left(sections)[0])
        return slope

    def jacobian_per_s(self, state: RealArray) -> RealArray:
        current, sections = state[..., _CURRENT], state[..., _SECTIONS:]
        count = sections.shape[-1]
        jacobian = np.zeros((*state.shape, state.shape[-1]))
        jacobian[..., _CURRENT, _CURRENT] = -self._loop_ohm / self._loop_h
        jacobian[..., _CURRENT, _CHARGE] = -self.elastance(state[..., _CHARGE]) / self._loop_h
        jacobian[..., _CURRENT, _SECTIONS:] = self._resistances / self._loop_h[..., None]
        jacobian[..., _CHARGE, _CURRENT] = 1.0
        left, left_slope = self._left(sections)
        rate = self._resistances / (self._inductances * left)
        jacobian[..., _SECTIONS:, _CURRENT] = rate
        own = -rate * (1.0 + (current[..., None] - sections) * left_slope / left)
        jacobian[..., _SECTIONS:, _SECTIONS:] = own[..., :, None] * np.eye(count)
        return jacobian

    def _left(self, current_a: RealArray) -> tuple[RealArray, RealArray]:
        """Part of a section's inductance left at its current, and the derivative of that."""
        if self._saturation is None:
            return np.ones(current_a.shape), np.zeros(current_a.shape)
        residual = np.asarray(self._saturation.residual_ratio)[..., None]
        half = np.asarray(self._saturation.half_current_a)[..., None]
        share = 1.0 / (1.0 + (current_a / half) ** 2)
        return residual + (1.0 - residual) * share, -2.0 * (1.0 - residual) * current_a / half**2 * share**2

    def _ratio_like(self, charge_c: RealArray) -> RealArray:
        return self._ratio if charge_c.ndim <= len(self._shape) else self._ratio[..., None]

    @staticmethod
    def _piece(knots: RealArray, place: Real) -> NDArray[np.intp]:
        return np.clip(np.searchsorted(knots, place, side="right") - 1, 0, knots.size - 2)
