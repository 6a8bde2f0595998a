from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.physics.ringing import (
    bead_inductance_limit_h,
    capacitance_from_added_f,
    characteristic_impedance_ohm,
    damping_from_decrement_ratio,
    damping_ratio,
    decrement_from_damping_neper,
    inductance_from_ring_h,
    natural_frequency_hz,
    overshoot_ratio,
    peak_current_a,
    peak_current_time_s,
    resistance_for_damping_ohm,
)
from tests.physics.reference_cases import LOOPS

# name: peak A, its time ns, overshoot %; closed form evaluated apart and ngspice-39.
PEAKS = [
    ("G1", 3.57021, 9.104, 30.709),
    ("G2", 1.73282, 6.426, 0.0),
    ("G3", 3.84081, 7.579, 19.436),
    ("G4", 0.88287, 1.0363, 39.432),
]


@pytest.mark.parametrize(("name", "peak_a", "time_ns", "overshoot_percent"), PEAKS)
def test_plain_loops(name: str, peak_a: float, time_ns: float, overshoot_percent: float) -> None:
    start, final, resistance, inductance, capacitance = LOOPS[name]
    zeta = damping_ratio(resistance_ohm=resistance, inductance_h=inductance, capacitance_f=capacitance)
    impedance = characteristic_impedance_ohm(inductance_h=inductance, capacitance_f=capacitance)
    natural = natural_frequency_hz(inductance_h=inductance, capacitance_f=capacitance)
    peak = peak_current_a(step_v=final - start, loop_damping_ratio=zeta, characteristic_ohm=impedance)
    assert float(peak) == pytest.approx(peak_a, rel=1e-5)
    time_s = peak_current_time_s(loop_damping_ratio=zeta, natural_hz=natural)
    assert float(time_s) == pytest.approx(time_ns * 1e-9, rel=1e-4)
    assert 100.0 * float(overshoot_ratio(loop_damping_ratio=zeta)) == pytest.approx(
        overshoot_percent, rel=2e-5, abs=1e-9
    )


def test_damping_ratios() -> None:
    # Closed form evaluated apart.
    found = [
        float(damping_ratio(resistance_ohm=r, inductance_h=x, capacitance_f=c)) for _, _, r, x, c in LOOPS.values()
    ]
    assert found == pytest.approx([0.35178, 1.28986, 0.46233, 0.28402], rel=2e-5)


def test_voltage_over_resistance_is_too_much() -> None:
    # Step / R is 26 % above the true peak at zeta 1.29 and 124 % at 0.35 (closed form evaluated apart).
    zeta = np.array([1.28986, 0.35178])
    peak = peak_current_a(step_v=1.0, loop_damping_ratio=zeta, characteristic_ohm=1.0)
    assert 1.0 / (2.0 * zeta) / peak == pytest.approx([1.26, 2.24], rel=5e-3)


@pytest.mark.parametrize(("zeta", "percent"), [(0.5, 16.3), (0.7, 4.6), (1.0, 0.0), (2.0, 0.0)])
def test_overshoot_of_textbook_dampings(zeta: float, percent: float) -> None:
    # Textbook second-order step response.
    assert 100.0 * float(overshoot_ratio(loop_damping_ratio=zeta)) == pytest.approx(percent, abs=0.05)


def test_peak_is_smooth_through_critical_damping() -> None:
    # At zeta 1 the peak is V / Z0 / e, reached at 1 / w0 (limit of both branches).
    zeta = 1.0 + np.array([-1e-3, -1e-7, -1e-9, 0.0, 1e-9, 1e-7, 1e-3])
    peak = peak_current_a(step_v=1.0, loop_damping_ratio=zeta, characteristic_ohm=1.0)
    time = peak_current_time_s(loop_damping_ratio=zeta, natural_hz=1.0 / (2.0 * np.pi))
    assert peak == pytest.approx(np.exp(-1.0) * (1.0 - 2.0 / 3.0 * (zeta - 1.0)), rel=1e-6)
    assert time == pytest.approx(1.0 - (zeta - 1.0) / 3.0, rel=1e-6)


@given(resistance=st.floats(0.1, 50.0), inductance=st.floats(1e-10, 1e-6), capacitance=st.floats(1e-11, 1e-7))
@settings(deadline=None)
def test_needed_resistance_gives_the_damping(resistance: float, inductance: float, capacitance: float) -> None:
    zeta = damping_ratio(resistance_ohm=resistance, inductance_h=inductance, capacitance_f=capacitance)
    needed = resistance_for_damping_ohm(minimum_damping_ratio=zeta, inductance_h=inductance, capacitance_f=capacitance)
    assert float(needed) == pytest.approx(resistance)


@given(resistance=st.floats(0.1, 50.0), inductance=st.floats(1e-10, 1e-6), capacitance=st.floats(1e-11, 1e-7))
@settings(deadline=None)
def test_bead_limit_is_where_the_damping_falls_to_the_minimum(
    resistance: float, inductance: float, capacitance: float
) -> None:
    limit = float(
        bead_inductance_limit_h(
            minimum_damping_ratio=0.5,
            resistance_ohm=resistance,
            inductance_h=inductance,
            capacitance_f=capacitance,
        )
    )
    zeta = damping_ratio(resistance_ohm=resistance, inductance_h=inductance + limit, capacitance_f=capacitance)
    assert float(zeta) == pytest.approx(0.5)


def test_decrement() -> None:
    # 2.10 V to 1.05 V: ln 2, zeta 0.1097; 2.10 to 0.30 V over four periods: 0.4865, 0.0772 (evaluated apart).
    assert float(damping_from_decrement_ratio(log_decrement_neper=np.log(2.0))) == pytest.approx(0.1097, abs=5e-5)
    over_four = np.log(2.10 / 0.30) / 4.0
    assert float(over_four) == pytest.approx(0.4865, abs=5e-5)
    assert float(damping_from_decrement_ratio(log_decrement_neper=over_four)) == pytest.approx(0.0772, abs=5e-5)


@given(zeta=st.floats(1e-6, 0.999))
@settings(deadline=None)
def test_decrement_and_damping_are_inverse(zeta: float) -> None:
    decrement = decrement_from_damping_neper(loop_damping_ratio=zeta)
    assert float(damping_from_decrement_ratio(log_decrement_neper=decrement)) == pytest.approx(zeta)


def test_no_decrement_without_ring() -> None:
    assert np.isinf(decrement_from_damping_neper(loop_damping_ratio=1.0))


def test_two_capacitor_identification() -> None:
    # 42.0 MHz, 33.0 MHz with 1.0 nF added: 1.613 nF, 8.90 nH; 8.79 nH with the damping of 0.1097 (evaluated
    # apart).
    capacitance = capacitance_from_added_f(added_capacitance_f=1e-9, ring_hz=42e6, ring_with_added_hz=33e6)
    assert float(capacitance) == pytest.approx(1.613e-9, rel=5e-4)
    assert float(inductance_from_ring_h(capacitance_f=capacitance, ring_hz=42e6)) == pytest.approx(8.90e-9, rel=1e-3)
    damped = inductance_from_ring_h(capacitance_f=capacitance, ring_hz=42e6, loop_damping_ratio=0.1097)
    assert float(damped) == pytest.approx(8.79e-9, rel=1e-3)


def test_two_capacitor_identification_halves_at_three() -> None:
    # Snubber practice: the capacitance that halves the frequency is three times the loop's own.
    found = capacitance_from_added_f(added_capacitance_f=3e-9, ring_hz=2.0, ring_with_added_hz=1.0)
    assert float(found) == pytest.approx(1e-9)


@pytest.mark.parametrize(("reading_error", "low_nf", "high_nf"), [(0.01, 1.38, 1.89), (0.02, 1.26, 2.12)])
def test_identification_is_touchy(reading_error: float, low_nf: float, high_nf: float) -> None:
    # Interval from 1 or 2 % frequency reading and 5 % of the added capacitor (evaluated apart).
    signs = np.array([1.0, -1.0])
    corners = capacitance_from_added_f(
        added_capacitance_f=1e-9 * (1.0 - 0.05 * signs),
        ring_hz=42e6 * (1.0 + reading_error * signs),
        ring_with_added_hz=33e6 * (1.0 - reading_error * signs),
    )
    assert (corners * 1e9).tolist() == pytest.approx([low_nf, high_nf], abs=0.012)


@pytest.mark.parametrize(("input_pf", "shift"), [(3000.0, -0.0017), (240.0, -0.020), (200.0, -0.024), (65.0, -0.069)])
def test_a_probe_shifts_the_ring(input_pf: float, shift: float) -> None:
    # 10 pF of a passive probe beside the node's own capacitance (evaluated apart).
    with_probe, without = (
        natural_frequency_hz(inductance_h=10e-9, capacitance_f=(input_pf + probe_pf) * 1e-12)
        for probe_pf in (10.0, 0.0)
    )
    assert float(with_probe / without) - 1.0 == pytest.approx(shift, abs=7e-4)


@pytest.mark.parametrize(("lead_nh", "artefact_mhz"), [(150.0, 130.0), (20.0, 356.0), (6.0, 650.0)])
def test_a_probe_rings_by_itself(lead_nh: float, artefact_mhz: float) -> None:
    # 10 pF with its ground lead; the first row stands in a probe manual.
    found = natural_frequency_hz(inductance_h=lead_nh * 1e-9, capacitance_f=10e-12)
    assert float(found) == pytest.approx(artefact_mhz * 1e6, rel=2e-3)


def test_a_frequency_that_does_not_fall_identifies_nothing() -> None:
    assert np.isnan(capacitance_from_added_f(added_capacitance_f=1e-9, ring_hz=1e7, ring_with_added_hz=1e7))
