from __future__ import annotations

import numpy as np
import pytest

from gatecheck.physics.switching_time import (
    charging_time_s,
    crossing_loss_j,
    drain_slope_v_per_s,
    plateau_current_a,
    plateau_v,
    source_inductance_delay_s,
    voltage_time_s,
)

# 400 V, 20 A, g_m 20 S, V_th 4 V, C_gs 2.97 nF, C_gd 30 pF, 0 to 12 V. Resistance, loss uJ, current 10-90 ns,
# voltage 90-10 ns, plateau current A, time to 10 % of the current ns: closed forms evaluated apart.
ROWS = [(5.0, 42.30, 1.6015, 6.857, 1.400, 6.271), (10.0, 84.60, 3.203, 13.714, 0.700, 12.541)]


@pytest.mark.parametrize("row", ROWS)
def test_times_and_loss(row: tuple[float, ...]) -> None:
    resistance, loss_uj, rise_ns, fall_ns, current_a, start_ns = row
    constant = resistance * 3e-9
    level = float(plateau_v(threshold_v=4.0, load_a=20.0, transconductance_siemens=20.0))
    assert level == 5.0
    current = plateau_current_a(driver_v=12.0, plateau_v=level, resistance_ohm=resistance)
    assert float(current) == pytest.approx(current_a)
    fall = voltage_time_s(gate_drain_charge_c=30e-12 * 400.0, plateau_current_a=current)
    assert 0.8 * float(fall) == pytest.approx(fall_ns * 1e-9, rel=1e-4)  # 90 to 10 % of a straight edge
    start, rise, whole_rise = (
        charging_time_s(time_constant_s=constant, driver_v=12.0, from_v=low, to_v=high)
        for low, high in ((0.0, 4.1), (4.1, 4.9), (4.0, 5.0))
    )
    assert float(start) == pytest.approx(start_ns * 1e-9, rel=1e-4)
    assert float(rise) == pytest.approx(rise_ns * 1e-9, rel=1e-4)
    loss = crossing_loss_j(bus_v=400.0, load_a=20.0, crossing_time_s=float(whole_rise) + float(fall))
    assert float(loss) == pytest.approx(loss_uj * 1e-6, rel=1e-3)


def test_loss_grows_with_resistance() -> None:
    # The loss of the two rows above is in proportion to R: dE/dR = E / R.
    assert ROWS[1][1] / ROWS[0][1] == pytest.approx(ROWS[1][0] / ROWS[0][0], rel=1e-3)


def test_off_edge_current_counts_from_the_other_rail() -> None:
    assert float(plateau_current_a(driver_v=-4.0, plateau_v=8.0, resistance_ohm=5.5)) == pytest.approx(12.0 / 5.5)


def test_a_level_beyond_the_driver_is_never_reached() -> None:
    found = charging_time_s(time_constant_s=1e-9, driver_v=12.0, from_v=0.0, to_v=np.array([11.9, 12.0, 13.0]))
    assert np.isnan(found).tolist() == [False, True, True]


def test_drain_slope() -> None:
    # 1.4 A into 30 pF is 46.7 V/ns (I = C dV/dt).
    assert float(drain_slope_v_per_s(plateau_current_a=1.4, gate_drain_f=30e-12)) == pytest.approx(46.67e9, rel=1e-3)


def test_source_inductance_delay() -> None:
    # 5 nH taking over 20 A with 7 V of drive: 14.3 ns (v = L di/dt).
    found = source_inductance_delay_s(source_inductance_h=5e-9, load_a=20.0, drive_left_v=7.0)
    assert float(found) == pytest.approx(14.286e-9, rel=1e-4)
