from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.physics.gate_loop import GateLoop
from gatecheck.physics.miller import (
    bump_from_curve_v,
    bump_v,
    bump_without_inductance_v,
    charge_divider_v,
    common_source_v,
    lowest_reaching,
)
from gatecheck.physics.ringing import damping_ratio
from tests.physics.reference_cases import BEADS, plain_loop

if TYPE_CHECKING:
    from collections.abc import Callable

# V/ns, C_gd pF, R, L nH, C_iss nF, bus V: peak V; closed form evaluated apart and ngspice-39 to 1e-5.
BUMPS = [
    pytest.param((50, 20, 3.0, 10, 1.5, 400, 3.40825), id="M2"),
    pytest.param((50, 20, 1.0, 10, 1.5, 400, 2.82219), id="M3"),
    pytest.param((10, 60, 6.0, 15, 3.0, 48, 0.90723), id="M4"),
    pytest.param((80, 10, 4.5, 8, 1.2, 800, 3.47151), id="M5"),
    pytest.param((100, 1.5, 2.0, 3, 0.2, 400, 0.65604), id="M6"),
]


def constant(drain_f: float, bus_v: float) -> dict[str, Any]:
    return {"drain_v": np.array([0.0, bus_v]), "gate_drain_f": np.full(2, drain_f)}


def test_bump_without_inductance() -> None:
    # M1: 2.49296 V between the limits k R C_gd = 3.0 V and V C_gd / C_iss = 5.333 V.
    found = bump_without_inductance_v(
        resistance_ohm=3.0, input_capacitance_f=1.5e-9, gate_drain_f=20e-12, slope_v_per_s=50e9, swing_v=400.0
    )
    assert float(found) == pytest.approx(2.49296, rel=1e-5)
    assert float(charge_divider_v(gate_drain_charge_c=400.0 * 20e-12, input_capacitance_f=1.5e-9)) == pytest.approx(
        5.333, rel=1e-4
    )


@pytest.mark.parametrize("row", BUMPS)
def test_bump_with_inductance(row: tuple[float, ...]) -> None:
    slope, drain_pf, resistance, loop_nh, input_nf, bus_v, peak_v = row
    network = plain_loop(resistance, loop_nh * 1e-9, input_nf * 1e-9)
    closed = bump_v(network, gate_drain_f=drain_pf * 1e-12, slope_v_per_s=slope * 1e9, swing_v=bus_v)
    stepped = bump_from_curve_v(network, slope_v_per_s=slope * 1e9, **constant(drain_pf * 1e-12, bus_v))
    assert float(closed) == pytest.approx(peak_v, rel=1e-5)
    assert float(stepped) == pytest.approx(peak_v, rel=1e-5)


def test_inductance_can_triple_the_bump() -> None:
    # M3: k R C_gd alone is 1.0 V.
    closed = bump_v(plain_loop(1.0, 10e-9, 1.5e-9), gate_drain_f=20e-12, slope_v_per_s=50e9, swing_v=400.0)
    assert float(closed) > 2.8


@given(
    resistance=st.floats(0.1, 50.0),
    inductance=st.floats(1e-10, 1e-7),
    capacitance=st.floats(1e-10, 1e-8),
    slope=st.floats(1e8, 1e11),
)
@settings(max_examples=60, deadline=None)
def test_closed_form_equals_the_exact_response(
    resistance: float, inductance: float, capacitance: float, slope: float
) -> None:
    network = plain_loop(resistance, inductance, capacitance)
    closed = bump_v(network, gate_drain_f=20e-12, slope_v_per_s=slope, swing_v=400.0)
    stepped = bump_from_curve_v(network, slope_v_per_s=slope, **constant(20e-12, 400.0))
    assert float(closed) == pytest.approx(float(stepped), rel=2e-4)


@given(resistance=st.floats(0.5, 50.0), capacitance=st.floats(1e-10, 1e-8), slope=st.floats(1e8, 1e11))
@settings(deadline=None)
def test_without_inductance_both_forms_meet(resistance: float, capacitance: float, slope: float) -> None:
    inductance = 1e-6 * resistance**2 * capacitance
    with_little = bump_v(
        plain_loop(resistance, inductance, capacitance),
        gate_drain_f=20e-12,
        slope_v_per_s=slope,
        swing_v=400.0,
    )
    without = bump_without_inductance_v(
        resistance_ohm=resistance,
        input_capacitance_f=capacitance,
        gate_drain_f=20e-12,
        slope_v_per_s=slope,
        swing_v=400.0,
    )
    assert float(with_little) == pytest.approx(float(without), rel=2e-3)


def test_critical_damping_is_no_hole() -> None:
    # R = 2 sqrt(L / C) exactly, and a hair beside it.
    inductance, capacitance = 10e-9, 1e-9
    critical = 2.0 * np.sqrt(inductance / capacitance)
    network = GateLoop(
        resistance_ohm=critical * (1.0 + np.array([-1e-5, -1e-12, 0.0, 1e-12, 1e-5])),
        inductance_h=np.array(inductance),
        capacitance_f=np.array(capacitance),
    )
    bumps = bump_v(network, gate_drain_f=20e-12, slope_v_per_s=50e9, swing_v=400.0)
    assert np.isfinite(bumps).all()
    assert bumps == pytest.approx(np.full(5, bumps[2]), rel=2e-5)
    zeta = damping_ratio(resistance_ohm=critical, inductance_h=inductance, capacitance_f=capacitance)
    assert float(zeta) == pytest.approx(1.0)


def test_a_falling_curve_lies_between_its_ends() -> None:
    # C_gd of 200 pF at low and 10 pF at high voltage.
    network = plain_loop(4.0, 10e-9, 3e-9, BEADS["B2"])
    voltages = np.array([0.0, 25.0, 50.0, 100.0, 400.0])
    curve = np.array([200e-12, 100e-12, 40e-12, 15e-12, 10e-12])
    between, most, least = (
        float(bump_from_curve_v(network, slope_v_per_s=20e9, drain_v=voltages, gate_drain_f=values))
        for values in (curve, np.full(5, 200e-12), np.full(5, 10e-12))
    )
    assert least < between < most


def test_pieces_of_a_constant_curve_do_not_matter() -> None:
    network = plain_loop(4.0, 10e-9, 3e-9, BEADS["B4"])
    one = bump_from_curve_v(network, slope_v_per_s=20e9, **constant(30e-12, 400.0))
    many = bump_from_curve_v(
        network,
        slope_v_per_s=20e9,
        drain_v=np.array([0.0, 1.0, 30.0, 222.0, 400.0]),
        gate_drain_f=np.full(5, 30e-12),
    )
    assert float(one) == pytest.approx(float(many), rel=1e-6)


def by_slope(resistance: float, drain_f: float, input_f: float, bus_v: float) -> Callable[[Any], Any]:
    return lambda slope: bump_without_inductance_v(
        resistance_ohm=resistance,
        input_capacitance_f=input_f,
        gate_drain_f=drain_f,
        slope_v_per_s=slope,
        swing_v=bus_v,
    )


def test_critical_slope_and_resistance() -> None:
    # Closed form solved apart: 50.2217 V/ns (simple bound 41.667), 3.01330 ohm, 5.48136 V/ns, and none.
    slope = lowest_reaching(by_slope(3.0, 20e-12, 1.5e-9, 400.0), margin_v=2.5, largest_au=1e12)
    assert float(slope) == pytest.approx(50.2217e9, rel=1e-5)
    assert pytest.approx(41.667e9, rel=1e-4) == 2.5 / (3.0 * 20e-12)
    other = lowest_reaching(by_slope(10.0, 60e-12, 3e-9, 400.0), margin_v=3.0, largest_au=1e12)
    assert float(other) == pytest.approx(5.48136e9, rel=1e-5)
    none = lowest_reaching(by_slope(3.0, 20e-12, 1.5e-9, 400.0), margin_v=6.0, largest_au=1e15)
    assert np.isnan(none)
    resistance = lowest_reaching(
        lambda ohm: bump_without_inductance_v(
            resistance_ohm=ohm,
            input_capacitance_f=1.5e-9,
            gate_drain_f=20e-12,
            slope_v_per_s=50e9,
            swing_v=400.0,
        ),
        margin_v=2.5,
        largest_au=1e3,
    )
    assert float(resistance) == pytest.approx(3.01330, rel=1e-5)


def test_no_margin_is_reached_at_once() -> None:
    found = lowest_reaching(by_slope(3.0, 20e-12, 1.5e-9, 400.0), margin_v=np.array([0.0, -1.0, 2.5]), largest_au=1e12)
    assert found == pytest.approx([0.0, 0.0, 50.2217e9], rel=1e-5)


def test_common_source_voltage() -> None:
    # 15 nH at 10 A/ns would be 150 V (a power module maker's article quotes the same numbers).
    assert float(common_source_v(source_inductance_h=15e-9, current_slope_a_per_s=10e9)) == pytest.approx(150.0)
