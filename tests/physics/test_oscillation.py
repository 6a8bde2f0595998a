from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from gatecheck.physics.oscillation import (
    curing_resistance_ohm,
    dominant_growth_per_s,
    fastest_mode,
    growth_neper,
    small_source_resistance_estimate_ohm,
    sweep_transconductance,
)
from gatecheck.physics.switch_circuit import SwitchBranch, odd_mode_poles_per_s, single_switch_poles_per_s
from tests.physics.reference_cases import by_gain
from tests.physics.test_switch_circuit import SET_O2, SET_P, SET_Q, N, P

THIRD = dataclasses.replace(
    SET_P,
    gate_inductance_h=10 * N,
    drain_inductance_h=8 * N,
    gate_source_f=1.5 * N,
    gate_drain_f=15 * P,
    drain_source_f=100 * P,
    transconductance_siemens=20.0,
)


def cure(device: SwitchBranch, largest_ohm: float = 50.0) -> float:
    return float(
        curing_resistance_ohm(
            lambda resistance: dominant_growth_per_s(
                poles_per_s=odd_mode_poles_per_s(dataclasses.replace(device, gate_resistance_ohm=resistance))
            ),
            maximum_resistance_ohm=largest_ohm,
        )
    )


@pytest.mark.parametrize(
    ("device", "expected"),
    [
        (SET_P, 0.74528),  # eigenvalues of a matrix written apart
        (dataclasses.replace(SET_P, drain_resistance_ohm=0.0), 0.76276),  # Routh equal to eigenvalues
        (dataclasses.replace(SET_P, source_inductance_h=1 * N), 0.0),
        (SET_O2, 3.95947),
        (dataclasses.replace(SET_O2, transconductance_siemens=100.0), 2.03009),
        (dataclasses.replace(SET_Q, source_inductance_h=0.3 * N), 0.0),
    ],
)
def test_smallest_resistance_that_cures(device: SwitchBranch, expected: float) -> None:
    assert cure(device) == pytest.approx(expected, rel=1e-5)


@pytest.mark.parametrize(("source_nh", "expected"), [(0.0, 0.339), (0.1, 0.0), (0.5, 0.0), (1.0, 0.950), (2.0, 3.959)])
def test_the_cure_is_not_monotone_in_source_inductance(source_nh: float, expected: float) -> None:
    # Eigenvalues of a matrix written apart.
    found = cure(dataclasses.replace(SET_Q, source_inductance_h=source_nh * N))
    assert found == pytest.approx(expected, rel=2e-3)


def test_no_cure_within_reach_is_nan() -> None:
    assert np.isnan(cure(SET_O2, largest_ohm=2.0))


def test_cure_of_many_corners_at_once() -> None:
    gains = np.array([[40.0, 100.0]])
    device = dataclasses.replace(SET_O2, transconductance_siemens=gains)
    found = curing_resistance_ohm(
        lambda resistance: dominant_growth_per_s(
            poles_per_s=odd_mode_poles_per_s(dataclasses.replace(device, gate_resistance_ohm=resistance))
        ),
        maximum_resistance_ohm=np.full((1, 2), 50.0),
    )
    assert found == pytest.approx(np.array([[3.95947, 2.03009]]), rel=1e-5)


@pytest.mark.parametrize(
    ("device", "estimate", "exact"), [(SET_Q, 0.351, 0.339), (SET_P, 1.025, 0.745), (THIRD, 1.046, 0.945)]
)
def test_estimate_is_cautious(device: SwitchBranch, estimate: float, exact: float) -> None:
    # 3 to 38 % above the exact value (eigenvalues of a matrix written apart).
    found = small_source_resistance_estimate_ohm(
        transconductance_siemens=device.transconductance_siemens,
        drain_inductance_h=device.drain_inductance_h,
        gate_drain_f=device.gate_drain_f,
        input_capacitance_f=device.gate_source_f + device.gate_drain_f,
    )
    assert float(found) == pytest.approx(estimate, rel=1e-3)
    assert cure(device) == pytest.approx(exact, rel=2e-3)


# Odd mode of two 1200 V SiC switches: C_gd pF, C_ds pF, own R, Kelvin R, k of the bead or None; growth 1e6/s,
# MHz, and the unstable g_m from (a 400 point sweep of eigenvalues written apart, grid 1.5 % wide).
SIC_ODD = [
    (12, 160, 0.0, 1.0, None, 278.4, 206.9, 0.4954, 35.0),
    (12, 160, 3.3, 1.0, None, 148.1, 205.6, 1.345, 35.0),
    (12, 160, 3.3, 0.0, None, 134.5, 204.8, 0.9878, 35.0),
    (25, 300, 0.0, 1.0, None, 168.5, 150.6, 0.5254, 35.0),
    (25, 300, 3.3, 1.0, None, 47.68, 137.7, 1.999, 35.0),
    (25, 300, 3.3, 0.0, None, 37.01, 135.9, 1.534, 35.0),
    (90, 600, 0.0, 1.0, None, 34.60, 85.10, 0.8405, 26.09),
]


@pytest.mark.parametrize("row", SIC_ODD)
def test_sweep_finds_growth_and_window(row: tuple[float, ...]) -> None:
    drain_pf, output_pf, own_ohm, kelvin_ohm, _, growth, ring_mhz, low, high = row
    device = SwitchBranch(
        gate_resistance_ohm=1.6 + own_ohm,
        gate_inductance_h=6 * N,
        drain_inductance_h=6 * N,
        gate_source_f=2.9 * N,
        gate_drain_f=drain_pf * P,
        drain_source_f=output_pf * P,
        transconductance_siemens=1.0,
        drain_resistance_ohm=0.03,
        source_inductance_h=5 * N,
        kelvin_inductance_h=5 * N,
        kelvin_resistance_ohm=kelvin_ohm,
    )
    found = sweep_transconductance(
        by_gain(odd_mode_poles_per_s, device),
        maximum_siemens=35.0,
    )
    assert float(found.growth_per_s) == pytest.approx(growth * 1e6, rel=1e-3)
    assert float(found.frequency_hz) == pytest.approx(ring_mhz * 1e6, rel=5e-3)
    assert float(found.unstable_low_siemens) == pytest.approx(low, rel=0.016)
    assert float(found.unstable_high_siemens) == pytest.approx(high, rel=0.016)


def test_sweep_of_a_stable_switch_has_no_window() -> None:
    device = dataclasses.replace(SET_Q, gate_resistance_ohm=10.0)
    found = sweep_transconductance(
        by_gain(single_switch_poles_per_s, device),
        maximum_siemens=40.0,
    )
    assert float(found.growth_per_s) < 0.0
    assert np.isnan([found.unstable_low_siemens, found.unstable_high_siemens]).all()


def test_sweep_of_many_corners_at_once() -> None:
    resistances = np.array([[1.0], [4.0]])
    drains = np.array([12 * P, 40 * P, 90 * P])
    device = dataclasses.replace(SET_Q, gate_resistance_ohm=resistances, gate_drain_f=drains, source_inductance_h=2 * N)
    found = sweep_transconductance(
        by_gain(odd_mode_poles_per_s, device),
        maximum_siemens=np.full((1, 1), 40.0),
    )
    assert found.growth_per_s.shape == (2, 3)
    alone = sweep_transconductance(
        lambda gain: odd_mode_poles_per_s(
            dataclasses.replace(device, gate_resistance_ohm=4.0, gate_drain_f=40 * P, transconductance_siemens=gain)
        ),
        maximum_siemens=40.0,
    )
    for field in dataclasses.fields(found):
        assert float(getattr(found, field.name)[1, 1]) == pytest.approx(
            float(getattr(alone, field.name)), rel=1e-9, nan_ok=True
        )


def test_sweep_equals_a_dense_one() -> None:
    # Second opinion: 4000 transconductances instead of 24.
    gains = np.geomspace(0.1, 200.0, 4000)
    dense = fastest_mode(poles_per_s=odd_mode_poles_per_s(dataclasses.replace(SET_O2, transconductance_siemens=gains)))[
        0
    ]
    found = sweep_transconductance(
        by_gain(odd_mode_poles_per_s, SET_O2),
        maximum_siemens=200.0,
    )
    assert float(found.growth_per_s) == pytest.approx(float(dense.max()), rel=3e-3)
    unstable = gains[dense > 0.0]
    assert float(found.unstable_low_siemens) == pytest.approx(float(unstable.min()), rel=5e-3)


def test_modes_that_count() -> None:
    poles = np.array(
        [
            [-1e6 + 0j, -5e6 + 3e7j, -5e6 - 3e7j],  # a slow discharge beside a ring: the ring counts
            [-1e6 + 0j, -2e6 + 0j, -3e6 + 0j],  # nothing rings
            [2e6 + 0j, -5e6 + 3e7j, -5e6 - 3e7j],  # runs away without ringing
        ]
    )
    growth, frequency = fastest_mode(poles_per_s=poles)
    assert growth.tolist() == [-5e6, -np.inf, 2e6]
    assert frequency == pytest.approx([3e7 / (2.0 * np.pi), np.nan, 0.0], nan_ok=True)
    assert dominant_growth_per_s(poles_per_s=poles).tolist() == [-1e6, -1e6, 2e6]


def test_growth_in_nepers() -> None:
    # 278.4e6 /s over 18.7 ns: 5.2 nepers (evaluated apart); what decays does not count.
    found = growth_neper(growth_per_s=np.array([278.4e6, -1e6]), time_s=18.7e-9)
    assert found == pytest.approx([5.2, 0.0], abs=0.01)
