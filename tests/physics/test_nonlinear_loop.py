from __future__ import annotations

import dataclasses
from typing import TYPE_CHECKING

import numpy as np
import pytest

from gatecheck.physics.bead_bias import flux_vs
from gatecheck.physics.gate_loop import edge_figures, ring_mode, step_response
from gatecheck.physics.nonlinear_loop import (
    ChargeCurve,
    Saturation,
    charge_curve_from_capacitance,
    nonlinear_edge,
)
from gatecheck.physics.trajectory import first_maxima
from tests.physics.reference_cases import BEADS, loop, plain_loop

if TYPE_CHECKING:
    from gatecheck.physics.bead import BeadLadder

VOLTAGE_V = np.linspace(-6.0, 20.0, 1301)
# C(v) rises from 2 to 4 nF around 4 V.
CURVE = charge_curve_from_capacitance(
    voltage_v=VOLTAGE_V, capacitance_f=2e-9 + 1e-9 * (1.0 + np.tanh((VOLTAGE_V - 4.0) / 1.5))
)


def without_capacitance(bead: BeadLadder) -> BeadLadder:
    return dataclasses.replace(bead, capacitance_f=np.array(0.0))


def test_charge_curve() -> None:
    # ngspice-39 and scipy: 2 ohm, 12 nH, 0 to 12 V on the curve above; charge 39.9928 nC.
    charge_c = np.interp([0.0, 12.0], CURVE.voltage_v, CURVE.charge_c)
    assert float(charge_c[1] - charge_c[0]) == pytest.approx(39.9928e-9, rel=1e-5)
    response = nonlinear_edge(plain_loop(2.0, 12e-9, 3.3e-9), start_v=0.0, final_v=12.0, charge=CURVE)
    figures = edge_figures(response, start_v=0.0, final_v=12.0)
    assert float(figures.peak_current_a) == pytest.approx(3.06459, rel=1e-4)
    assert float(figures.extreme_v) == pytest.approx(13.13231, rel=1e-4)
    assert float(figures.rise_time_s) == pytest.approx(12.2802e-9, rel=1e-3)
    assert float(figures.half_time_s) == pytest.approx(7.391e-9, rel=1e-3)
    values, times = first_maxima(response.gate, maxima_count=2, above_au=1.0)
    assert float(times[1] - times[0]) == pytest.approx(1e-6 / 18.757, rel=1e-3)
    over = values - 1.0
    assert float(np.log(over[0] / over[1])) == pytest.approx(4.4428, rel=2e-3)


def test_linear_capacitance_of_the_same_charge_is_off() -> None:
    # Q / V in the linear formula: 3.3686 A and 14.25 % (closed form evaluated apart).
    figures = edge_figures(step_response(plain_loop(2.0, 12e-9, 39.9928e-9 / 12.0)), start_v=0.0, final_v=12.0)
    assert float(figures.peak_current_a) == pytest.approx(3.3686, rel=1e-4)
    assert 100.0 * float(figures.overshoot_ratio) == pytest.approx(14.25, rel=1e-3)


# Loop, bead, I_0 A: peak A, overshoot %, 10-90 ns, 50 % ns; ngspice-39 and scipy agree to 1e-5.
SATURATING = [
    ("G2", "B2", 1.5, 1.05893, 16.747, 33.8334, 24.741),
    ("G2", "B3", 0.5, 0.90508, 32.882, 41.1089, 37.625),
    ("G2", "B1", 0.2, 0.83199, 43.929, 47.4710, 55.394),
    ("G1", "B3", 0.5, 1.43678, 65.025, 30.0459, 33.094),
    ("G1", "B1", 0.2, 1.24551, 72.647, 36.8662, 50.878),
]


@pytest.mark.parametrize("row", SATURATING, ids=lambda row: f"{row[0]}+{row[1]}")
def test_saturating_bead(row: tuple[str, str, float, float, float, float, float]) -> None:
    name, bead, half_a, peak_a, overshoot, rise_ns, half_ns = row
    response = nonlinear_edge(
        loop(name, without_capacitance(BEADS[bead])),
        start_v=0.0,
        final_v=12.0,
        saturation=Saturation(half_current_a=half_a, residual_ratio=0.05),
    )
    figures = edge_figures(response, start_v=0.0, final_v=12.0)
    assert float(figures.peak_current_a) == pytest.approx(peak_a, rel=1e-4)
    assert 100.0 * float(figures.overshoot_ratio) == pytest.approx(overshoot, rel=1e-4)
    assert float(figures.rise_time_s) == pytest.approx(rise_ns * 1e-9, rel=1e-4)
    assert float(figures.half_time_s) == pytest.approx(half_ns * 1e-9, rel=1e-4)


@pytest.mark.parametrize("bead", [None, "B2", "B4"])
@pytest.mark.parametrize(("start_v", "final_v"), [(0.0, 12.0), (18.0, -4.0)])
def test_small_signals_equal_the_linear_loop(bead: str | None, start_v: float, final_v: float) -> None:
    network = loop("G2", without_capacitance(BEADS[bead]) if bead else None)
    linear, stepped = (
        edge_figures(response, start_v=start_v, final_v=final_v)
        for response in (
            step_response(network),
            nonlinear_edge(network, start_v=start_v, final_v=final_v, saturation=Saturation(half_current_a=1e6)),
        )
    )
    for field in dataclasses.fields(linear):
        # Times of a maximum are flat, so they carry a larger error than the rest.
        tolerance = 3e-3 if field.name == "peak_current_time_s" else 2e-4
        expected = float(getattr(linear, field.name))
        assert float(getattr(stepped, field.name)) == pytest.approx(expected, rel=tolerance, abs=1e-12)


def test_a_straight_curve_is_a_capacitance() -> None:
    straight = ChargeCurve(charge_c=np.array([0.0, 33e-9]), voltage_v=np.array([0.0, 10.0]))
    by_curve, by_capacitance = (
        edge_figures(nonlinear_edge(loop("G1"), start_v=-5.0, final_v=15.0, charge=curve), start_v=-5.0, final_v=15.0)
        for curve in (straight, None)
    )
    assert float(by_curve.peak_current_a) == pytest.approx(float(by_capacitance.peak_current_a), rel=1e-6)
    assert float(by_curve.extreme_v) == pytest.approx(float(by_capacitance.extreme_v), rel=1e-6)


def test_a_plateau_holds_the_gate() -> None:
    # 20 nC at a constant 5 V through 10 ohm from 12 V: 20 nC / 0.7 A, and the current stands still there (Q =
    # I t).
    plateau = ChargeCurve(charge_c=np.array([0.0, 10e-9, 30e-9, 45e-9]), voltage_v=np.array([0.0, 5.0, 5.0, 12.0]))
    response = nonlinear_edge(plain_loop(10.0, 1e-9, 2.5e-9), start_v=0.0, final_v=12.0, charge=plateau)
    on_plateau = np.abs(12.0 * response.gate.value_au - 5.0) < 1e-6
    duration = np.ptp(response.gate.time_s[on_plateau])
    assert duration == pytest.approx(20e-9 / 0.7, rel=0.03)
    assert 12.0 * response.current.value_au[on_plateau][2:-1] == pytest.approx(0.7, rel=1e-2)


def test_corners_give_the_same_as_one_by_one() -> None:
    resistances, halves = np.array([2.0, 5.5, 9.0]), np.array([0.3, 0.5, 2.0])
    together = edge_figures(
        nonlinear_edge(
            dataclasses.replace(loop("G2", without_capacitance(BEADS["B3"])), resistance_ohm=resistances),
            start_v=0.0,
            final_v=12.0,
            charge=dataclasses.replace(CURVE, charge_ratio=np.array([0.5, 1.0, 2.0])),
            saturation=Saturation(half_current_a=halves),
        ),
        start_v=0.0,
        final_v=12.0,
    )
    for place, ratio in enumerate((0.5, 1.0, 2.0)):
        alone = edge_figures(
            nonlinear_edge(
                dataclasses.replace(loop("G2", without_capacitance(BEADS["B3"])), resistance_ohm=resistances[place]),
                start_v=0.0,
                final_v=12.0,
                charge=dataclasses.replace(CURVE, charge_ratio=ratio),
                saturation=Saturation(half_current_a=float(halves[place])),
            ),
            start_v=0.0,
            final_v=12.0,
        )
        assert float(together.peak_current_a[place]) == pytest.approx(float(alone.peak_current_a), rel=1e-4)
        assert float(together.extreme_v[place]) == pytest.approx(float(alone.extreme_v), rel=1e-4)


def test_charge_balance_with_saturation() -> None:
    """All the charge the driver gives ends on the gate, and the bead's flux returns to zero."""
    network = loop("G2", without_capacitance(BEADS["B3"]))
    response = nonlinear_edge(network, start_v=0.0, final_v=12.0, saturation=Saturation(half_current_a=0.5))
    time_s, current = response.current.time_s, 12.0 * response.current.value_au
    charge = float(np.sum(0.5 * (current[1:] + current[:-1]) * np.diff(time_s)))
    # Six periods of a ring of this damping leave less than a thousandth of it.
    assert float(ring_mode(network).damping_ratio) > 0.2
    assert charge == pytest.approx(12.0 * 3.3e-9, rel=2e-3)
    flux = flux_vs(current_a=current[-1], inductance_h=0.45e-6, half_current_a=0.5, residual_ratio=0.05)
    assert abs(float(flux)) < 1e-3 * 12.0 * 50e-9
