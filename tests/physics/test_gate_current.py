from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.physics.gate_current import peak_current_lower_a, peak_current_upper_a
from gatecheck.physics.ringing import damping_ratio, peak_current_a


@given(resistance=st.floats(0.5, 30.0), inductance=st.floats(1e-9, 1e-7), capacitance=st.floats(1e-10, 3e-8))
@settings(deadline=None)
def test_the_true_peak_lies_between(resistance: float, inductance: float, capacitance: float) -> None:
    # Second opinion: the closed form of the whole loop; the lower bound is promised from a damping ratio of 0.5 on.
    zeta = damping_ratio(resistance_ohm=resistance, inductance_h=inductance, capacitance_f=capacitance)
    peak = float(
        peak_current_a(step_v=12.0, loop_damping_ratio=zeta, characteristic_ohm=(inductance / capacitance) ** 0.5)
    )
    assert peak <= peak_current_upper_a(voltage_v=12.0, resistance_ohm=resistance) * (1.0 + 1e-12)
    if float(zeta) >= 0.5:
        assert peak >= peak_current_lower_a(
            voltage_v=12.0, resistance_ohm=0.5 * resistance, further_ohm=0.5 * resistance
        )


def test_no_resistance_bounds_nothing() -> None:
    assert peak_current_upper_a(voltage_v=12.0, resistance_ohm=0.0) == float("inf")


def test_factor_at_half_damping() -> None:
    # 2 z exp(-z acos(z) / sqrt(1 - z^2)) is 0.546 at z = 0.5 (closed form evaluated apart).
    peak = peak_current_a(step_v=1.0, loop_damping_ratio=0.5, characteristic_ohm=1.0)
    assert float(peak) == pytest.approx(0.546, abs=5e-4)
    assert peak_current_lower_a(voltage_v=1.0, resistance_ohm=0.6, further_ohm=0.4) == pytest.approx(0.54)
