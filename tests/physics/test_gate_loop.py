from __future__ import annotations

import dataclasses

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from gatecheck.physics.bead import BeadLadder, impedance_ohm, parallel_bead
from gatecheck.physics.gate_loop import (
    EdgeFigures,
    GateLoop,
    StepResponse,
    edge_figures,
    edge_heat,
    loop_poles_per_s,
    ring_mode,
    step_response,
    time_to_level_s,
)
from gatecheck.physics.ringing import damping_ratio, overshoot_ratio, peak_current_a
from gatecheck.physics.trajectory import first_maxima, value_at
from tests.physics.reference_cases import BEADS, LOOPS, loop, plain_loop

# Loop, bead, driver ramp ns: peak A, its time ns, overshoot %, 10-90 ns, 50 % ns, ring MHz, decrement of the
# first two maxima (nan: none). ngspice-39, trapezoidal, 5 or 20 ps steps; G1 to G4 also closed form, beads
# also scipy.
NAN = float("nan")
EDGES = [
    ("G1", None, 0.0, 3.57021, 9.104, 30.709, 9.7900, 8.508, 21.1754, 2.36123),
    ("G1", None, 5.0, 3.49571, 11.707, 30.068, 10.1240, 10.994, 21.176, 2.36123),
    ("G2", None, 0.0, 1.73282, 6.426, 0.0, 33.9398, 13.919, NAN, NAN),
    ("G3", None, 0.0, 3.84081, 7.579, 19.436, 9.6637, 7.838, 22.8933, 3.27607),
    ("G4", None, 0.0, 0.88287, 1.0363, 39.432, 1.0078, 0.910, 197.007, 1.86119),
    ("G1", "B2", 0.0, 1.43372, 26.92, 55.270, 24.9947, 21.173, 7.2855, 1.21302),
    ("G2", "B2", 0.0, 1.00031, 23.95, 18.456, 35.0875, 25.518, 6.2432, 3.40613),
    ("G2", "B3", 0.0, 0.68911, 50.23, 41.217, 51.1157, 43.262, 3.8303, 1.78070),
    ("G2", "B1", 0.0, 0.44970, 99.58, 62.158, 81.7431, 76.414, 2.2151, 0.95188),
    ("G3", "B2", 0.0, 1.78763, 19.53, 43.723, 20.6305, 16.602, 9.1474, 1.69968),
    ("G3", "B3", 0.0, 1.11882, 39.82, 61.916, 34.4633, 30.226, 5.2062, 0.97271),
    ("G2", "B4", 0.0, 0.46942, 49.99, 29.246, 73.2973, 52.693, 2.2026, 3.696),
    ("G3", "B4", 0.0, 0.76372, 36.35, 36.947, 47.1642, 34.944, 3.5395, 3.155),
]


def edge(name: str, bead: str | None, ramp_ns: float = 0.0, *, off: bool = False) -> tuple[StepResponse, EdgeFigures]:
    low, high = LOOPS[name][:2]
    response = step_response(loop(name, BEADS[bead] if bead else None), rise_time_s=ramp_ns * 1e-9)
    start, final = (high, low) if off else (low, high)
    return response, edge_figures(response, start_v=start, final_v=final)


@pytest.mark.parametrize("row", EDGES, ids=lambda row: f"{row[0]}+{row[1]}+{row[2]:.0f}ns")
def test_edges(row: tuple[str, str | None, float, float, float, float, float, float, float, float]) -> None:
    name, bead, ramp_ns, peak_a, peak_ns, overshoot, rise_ns, half_ns, ring_mhz, decrement = row
    response, figures = edge(name, bead, ramp_ns)
    assert float(figures.peak_current_a) == pytest.approx(peak_a, rel=2e-4)
    assert float(figures.peak_current_time_s) == pytest.approx(peak_ns * 1e-9, rel=2e-3)
    assert 100.0 * float(figures.overshoot_ratio) == pytest.approx(overshoot, rel=2e-4, abs=1e-3)
    assert float(figures.rise_time_s) == pytest.approx(rise_ns * 1e-9, rel=2e-4)
    assert float(figures.half_time_s) == pytest.approx(half_ns * 1e-9, rel=1e-3)
    values, times = first_maxima(response.gate, maxima_count=2, above_au=1.0)
    if np.isnan(decrement):
        assert np.isnan(values).all()
        return
    over = values - 1.0
    assert float(np.log(over[0] / over[1])) == pytest.approx(decrement, rel=5e-3)
    assert float(times[1] - times[0]) == pytest.approx(1e-6 / ring_mhz, rel=1e-3)


# Eigenvalues in nepers per microsecond and MHz; numpy on matrices written apart.
MODES = [
    ("G1", "B2", 8.837, 7.2855),
    ("G2", "B2", 21.265, 6.2432),
    ("G2", "B3", 6.821, 3.8303),
    ("G2", "B1", 2.108, 2.2151),
    ("G2", "B4", 8.1232, 2.2126),
    ("G3", "B4", 10.9087, 3.5787),
]


@pytest.mark.parametrize(("name", "bead", "decay", "ring_mhz"), MODES)
def test_ring_mode(name: str, bead: str, decay: float, ring_mhz: float) -> None:
    mode = ring_mode(loop(name, BEADS[bead]))
    assert float(mode.decay_per_s) == pytest.approx(decay * 1e6, rel=3e-4)
    assert float(mode.ring_hz) == pytest.approx(ring_mhz * 1e6, rel=3e-5)
    expected = decay / np.hypot(decay, 2.0 * np.pi * ring_mhz)
    assert float(mode.damping_ratio) == pytest.approx(expected, rel=3e-4)


def test_the_bead_capacitance_mode_is_no_ring() -> None:
    # Loop inductance and C_b of B1 ring at 1.7 GHz, less damped than the gate itself, but the gate does not
    # move.
    poles = loop_poles_per_s(loop("G2", BEADS["B1"]))
    fast = poles[np.argmax(np.abs(poles))]
    assert abs(fast.imag) > 2.0 * np.pi * 1e9
    assert -fast.real / abs(fast) < float(ring_mode(loop("G2", BEADS["B1"])).damping_ratio)
    assert float(ring_mode(loop("G2", BEADS["B1"])).ring_hz) < 3e6


def test_an_overdamped_loop_does_not_ring() -> None:
    mode = ring_mode(loop("G2"))
    assert float(mode.damping_ratio) == 1.0
    assert np.isnan([mode.natural_hz, mode.ring_hz, mode.decay_per_s]).all()


@pytest.mark.parametrize(
    ("bead", "added_ns", "slower_ns"),
    [("B2", 11.60, 1.15), ("B3", 29.34, 17.2), ("B1", 62.50, 47.8), ("B4", 38.77, 39.4)],
)
def test_delay_and_rise_time_that_a_bead_adds(bead: str, added_ns: float, slower_ns: float) -> None:
    # ngspice-39, against G2 without bead.
    _, without = edge("G2", None)
    _, with_bead = edge("G2", bead)
    assert float(with_bead.half_time_s - without.half_time_s) == pytest.approx(added_ns * 1e-9, rel=1e-3)
    assert float(with_bead.rise_time_s - without.rise_time_s) == pytest.approx(slower_ns * 1e-9, rel=3e-3)


@pytest.mark.parametrize(("bead", "estimate", "exact"), [("B2", 22.3, 18.5), ("B3", 47.0, 41.2), ("B1", 66.0, 62.2)])
def test_bead_as_inductance_is_a_cautious_estimate(bead: str, estimate: float, exact: float) -> None:
    # L + L_bead in the closed form, evaluated apart.
    _, _, resistance, inductance, capacitance = LOOPS["G2"]
    added = float(BEADS[bead].section_inductance_h.sum())
    zeta = damping_ratio(resistance_ohm=resistance, inductance_h=inductance + added, capacitance_f=capacitance)
    assert 100.0 * float(overshoot_ratio(loop_damping_ratio=zeta)) == pytest.approx(estimate, rel=1e-2)
    _, figures = edge("G2", bead)
    assert 100.0 * float(figures.overshoot_ratio) == pytest.approx(exact, rel=5e-3)


# Energy in nJ of one edge in R, R_dc and the bead's R_p, RMS current in A at 100 kHz; scipy ODE solver, 1e-4.
HEAT = [
    ("G2", "B2", 206.700, 0.3758, 30.524, 0.08670),
    ("G1", "B2", 148.424, 0.9895, 88.187, 0.14068),
    ("G2", "B3", 199.357, 1.8123, 36.430, 0.08514),
    ("G1", "B3", 137.869, 4.5956, 95.136, 0.13558),
    ("G2", "B1", 202.816, 7.3751, 27.409, 0.08588),
]


@pytest.mark.parametrize("row", HEAT, ids=lambda row: f"{row[0]}+{row[1]}")
def test_heat_of_an_edge(row: tuple[str, str, float, float, float, float]) -> None:
    name, bead, resistor_nj, dc_nj, ferrite_nj, rms_a = row
    heat = edge_heat(loop(name, BEADS[bead]), step_v=12.0)
    assert float(heat.resistance_j) == pytest.approx(resistor_nj * 1e-9, rel=1e-4)
    assert float(heat.bead_dc_j) == pytest.approx(dc_nj * 1e-9, rel=2e-4)
    assert float(heat.bead_ferrite_j) == pytest.approx(ferrite_nj * 1e-9, rel=3e-4)
    assert np.sqrt(2.0 * 1e5 * float(heat.current_squared_a2_s)) == pytest.approx(rms_a, rel=1e-4)


@pytest.mark.parametrize(("name", "rms_a"), [("G1", 0.17799), ("G2", 0.09295)])
def test_rms_current_without_bead(name: str, rms_a: float) -> None:
    # sqrt(f C V^2 / R) at 100 kHz, exact for any inductance (evaluated apart).
    heat = edge_heat(loop(name), step_v=12.0)
    assert np.sqrt(2.0 * 1e5 * float(heat.current_squared_a2_s)) == pytest.approx(rms_a, rel=3e-5)


@pytest.mark.parametrize("bead", ["B1", "B2", "B3", "B4"])
def test_heat_in_the_frequency_domain(bead: str) -> None:
    # Parseval: bead heat = 2 * integral of |I(f)|^2 Re Z_b(f) df, with I = (V / s) / (R + sL + Z_b + 1/(sC)).
    network = loop("G2", BEADS[bead])
    frequency = np.geomspace(1e2, 1e12, 200_001)
    s = 2j * np.pi * frequency
    beads_ohm = impedance_ohm(BEADS[bead], frequency_hz=frequency)
    current = 12.0 / s / (5.5 + 15e-9 * s + beads_ohm + 1.0 / (3.3e-9 * s))
    integrand = 2.0 * np.abs(current) ** 2 * beads_ohm.real
    energy = float(np.sum(0.5 * (integrand[1:] + integrand[:-1]) * np.diff(frequency)))
    heat = edge_heat(network, step_v=12.0)
    assert float(heat.bead_dc_j + heat.bead_ferrite_j) == pytest.approx(energy, rel=1e-4)


BEAD = st.builds(
    lambda parallel, crossing, dc, capacitance: parallel_bead(
        dc_resistance_ohm=dc,
        parallel_resistance_ohm=parallel,
        inductance_h=parallel / (2.0 * np.pi * crossing),
        capacitance_f=capacitance,
    ),
    st.floats(5.0, 800.0),
    st.floats(5e6, 2e8),
    st.floats(0.0, 0.5),
    st.floats(1e-13, 2e-12),
)
NETWORK = st.builds(
    plain_loop,
    st.floats(0.5, 30.0),
    st.floats(1e-9, 1e-7),
    st.floats(1e-10, 3e-8),
    st.one_of(st.none(), BEAD),
)


@given(network=NETWORK, step_v=st.floats(1.0, 30.0))
@settings(max_examples=60, deadline=None)
def test_energy_balance_of_an_edge(network: GateLoop, step_v: float) -> None:
    # The driver gives C V^2, the gate keeps half, the loop turns half to heat.
    heat = edge_heat(network, step_v=step_v)
    total = float(heat.resistance_j + heat.bead_dc_j + heat.bead_ferrite_j)
    assert total == pytest.approx(0.5 * float(network.capacitance_f) * step_v**2, rel=1e-8)
    assert float(heat.bead_ferrite_j) >= 0.0


@given(network=NETWORK)
@settings(max_examples=20, deadline=None)
def test_heat_equals_the_sampled_current(network: GateLoop) -> None:
    # Second opinion: Simpson's integral of the squared current. Samples thin out, so the ring must die in a
    # few periods.
    assume(float(ring_mode(network).damping_ratio) > 0.15)
    response = step_response(network)
    grid = response.current.time_s
    middle = 0.5 * (grid[1:] + grid[:-1])
    ends = response.current.value_au**2
    between = np.array([float(value_at(response.current, time_s=time)) for time in middle]) ** 2
    integral = float(np.sum(np.diff(grid) / 6.0 * (ends[1:] + ends[:-1] + 4.0 * between)))
    assert integral == pytest.approx(float(edge_heat(network, step_v=1.0).current_squared_a2_s), rel=2e-2)


@given(network=NETWORK, impedance=st.floats(0.1, 10.0), time=st.floats(0.1, 10.0))
@settings(max_examples=40, deadline=None)
def test_scaling(network: GateLoop, impedance: float, time: float) -> None:
    """R, L, 1/C times z scale currents by 1/z; L and C times t scale times by t. Shapes stay."""
    bead = network.bead
    scaled = dataclasses.replace(
        network,
        resistance_ohm=network.resistance_ohm * impedance,
        inductance_h=network.inductance_h * impedance * time,
        capacitance_f=network.capacitance_f / impedance * time,
        bead=None
        if bead is None
        else BeadLadder(
            dc_resistance_ohm=bead.dc_resistance_ohm * impedance,
            section_resistance_ohm=bead.section_resistance_ohm * impedance,
            section_inductance_h=bead.section_inductance_h * impedance * time,
            series_inductance_h=bead.series_inductance_h,
            capacitance_f=bead.capacitance_f / impedance * time,
        ),
    )
    before, after = (edge_figures(step_response(one), start_v=0.0, final_v=10.0) for one in (network, scaled))
    assert float(after.peak_current_a) * impedance == pytest.approx(float(before.peak_current_a), rel=1e-6)
    assert float(after.overshoot_ratio) == pytest.approx(float(before.overshoot_ratio), rel=1e-6, abs=1e-9)
    assert float(after.half_time_s) == pytest.approx(time * float(before.half_time_s), rel=1e-6)
    assert float(ring_mode(scaled).damping_ratio) == pytest.approx(float(ring_mode(network).damping_ratio), rel=1e-6)


@given(resistance=st.floats(0.2, 30.0), inductance=st.floats(1e-9, 1e-7), capacitance=st.floats(1e-10, 3e-8))
@settings(max_examples=60, deadline=None)
def test_equals_the_closed_form_without_bead(resistance: float, inductance: float, capacitance: float) -> None:
    figures = edge_figures(step_response(plain_loop(resistance, inductance, capacitance)), start_v=0.0, final_v=1.0)
    zeta = damping_ratio(resistance_ohm=resistance, inductance_h=inductance, capacitance_f=capacitance)
    peak = peak_current_a(step_v=1.0, loop_damping_ratio=zeta, characteristic_ohm=np.sqrt(inductance / capacitance))
    assert float(figures.peak_current_a) == pytest.approx(float(peak), rel=3e-5)
    assert float(figures.overshoot_ratio) == pytest.approx(float(overshoot_ratio(loop_damping_ratio=zeta)), abs=3e-5)


def test_off_edge_mirrors_the_on_edge() -> None:
    _, rising = edge("G3", "B2")
    _, falling = edge("G3", "B2", off=True)
    assert float(falling.peak_current_a) == pytest.approx(float(rising.peak_current_a))
    assert float(falling.extreme_v) == pytest.approx(-4.0 - (float(rising.extreme_v) - 18.0))


def test_a_ramp_as_short_as_nothing_is_a_step() -> None:
    _, step = edge("G1", "B3")
    _, ramp = edge("G1", "B3", 1e-4)
    assert float(ramp.peak_current_a) == pytest.approx(float(step.peak_current_a), rel=1e-6)
    assert float(ramp.half_time_s) == pytest.approx(float(step.half_time_s), rel=1e-4)


def test_corners_give_the_same_as_one_by_one() -> None:
    resistances = np.array([[1.5], [5.5]])
    capacitances = np.array([1e-9, 3.3e-9, 8e-9])
    together = GateLoop(
        resistance_ohm=resistances, inductance_h=np.array(15e-9), capacitance_f=capacitances, bead=BEADS["B2"]
    )
    figures = edge_figures(step_response(together), start_v=0.0, final_v=12.0)
    damping = ring_mode(together).damping_ratio
    for row, resistance in enumerate(resistances[:, 0]):
        for column, capacitance in enumerate(capacitances):
            alone = plain_loop(float(resistance), 15e-9, float(capacitance), BEADS["B2"])
            single = edge_figures(step_response(alone), start_v=0.0, final_v=12.0)
            for field in dataclasses.fields(EdgeFigures):
                value = getattr(figures, field.name)[row, column]
                assert float(value) == pytest.approx(float(getattr(single, field.name)), rel=1e-9)
            assert float(damping[row, column]) == pytest.approx(float(ring_mode(alone).damping_ratio), rel=1e-9)


def test_time_to_a_level() -> None:
    response, figures = edge("G2", "B2")
    half = time_to_level_s(response, start_v=0.0, final_v=12.0, level_v=6.0)
    falling = time_to_level_s(response, start_v=12.0, final_v=0.0, level_v=6.0)
    assert float(half) == float(falling) == pytest.approx(float(figures.half_time_s))
    assert np.isnan(time_to_level_s(response, start_v=0.0, final_v=12.0, level_v=20.0))
