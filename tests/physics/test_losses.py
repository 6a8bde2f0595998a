from __future__ import annotations

import numpy as np
import pytest

from gatecheck.physics.gate_loop import edge_heat
from gatecheck.physics.losses import (
    bootstrap_charge_c,
    gate_power_w,
    gate_rms_current_a,
    resistive_current_squared_a2_s,
    resistor_peak_power_w,
    resistor_power_w,
    resistor_pulse_j,
    supply_capacitance_f,
)
from tests.physics.reference_cases import loop


def test_gate_power() -> None:
    # 95 nC, 12 V, 20 kHz: 22.8 mW (evaluated apart).
    assert float(gate_power_w(gate_charge_c=95e-9, step_v=12.0, switching_hz=20e3)) == pytest.approx(22.8e-3)


def test_resistor_gets_its_share() -> None:
    # 4.7 of 7.2 ohm: 7.442 mW and 0.3721 uJ (evaluated apart).
    share = 4.7 / 7.2
    assert float(resistor_power_w(gate_power_w=22.8e-3, share_ratio=share)) == pytest.approx(7.442e-3, rel=1e-4)
    assert float(resistor_pulse_j(gate_charge_c=95e-9, step_v=12.0, share_ratio=share)) == pytest.approx(
        0.3721e-6, rel=1e-4
    )


def test_resistor_peak_power() -> None:
    # (12 V / 7.2 ohm)^2 times 4.7 ohm: 13.06 W (evaluated apart).
    found = resistor_peak_power_w(peak_current_a=12.0 / 7.2, resistance_ohm=4.7)
    assert float(found) == pytest.approx(13.06, rel=1e-3)


@pytest.mark.parametrize(("name", "rms_a"), [("G1", 0.17799), ("G2", 0.09295)])
def test_rms_current(name: str, rms_a: float) -> None:
    # sqrt(f C V^2 / R) at 100 kHz, exact for any inductance (evaluated apart).
    network = loop(name)
    exact = edge_heat(network, step_v=12.0).current_squared_a2_s
    simple = resistive_current_squared_a2_s(
        gate_charge_c=3.3e-9 * 12.0, step_v=12.0, resistance_ohm=network.resistance_ohm
    )
    assert float(simple) == pytest.approx(float(exact), rel=1e-9)
    found = gate_rms_current_a(on_current_squared_a2_s=simple, off_current_squared_a2_s=exact, switching_hz=1e5)
    assert float(found) == pytest.approx(rms_a, rel=3e-5)


def test_decoupling() -> None:
    # 100 nC and 0.1 V: 1 uF effective (evaluated apart).
    assert float(supply_capacitance_f(charge_c=100e-9, allowed_droop_v=0.1)) == pytest.approx(1e-6)


def test_bootstrap() -> None:
    # (60 nC + 20 nC + 0.15 mA * 10 us) / 0.3 V = 0.2717 uF (evaluated apart).
    charge = bootstrap_charge_c(
        gate_charge_c=60e-9, recovery_charge_c=20e-9, bias_current_a=0.15e-3, longest_on_s=10e-6
    )
    assert float(supply_capacitance_f(charge_c=charge, allowed_droop_v=0.3)) == pytest.approx(0.2717e-6, rel=2e-4)


def test_arrays_broadcast() -> None:
    found = gate_power_w(gate_charge_c=np.array([[1e-9], [2e-9]]), step_v=np.array([5.0, 10.0]), switching_hz=1e6)
    assert found == pytest.approx(np.array([[5e-3, 10e-3], [10e-3, 20e-3]]))
