from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from gatecheck.physics.gate_loop import GateLoop
from gatecheck.physics.hard_switching import HardSwitch, turn_on
from tests.physics.reference_cases import BEADS, plain_loop

SWITCH = HardSwitch(
    threshold_v=4.0,
    transconductance_siemens=20.0,
    gate_source_f=2.97e-9,
    gate_drain_f=30e-12,
    bus_v=400.0,
    load_a=20.0,
)
NEAR_NOTHING_H = 1e-12  # the loop must have an inductance; this one delays by less than a picosecond

# R, L, bead: loss uJ, current 10-90 ns, voltage 90-10 ns, gate current at half the voltage A, time to 10 % of
# the current ns. ngspice-39 on the same device law with an ideal clamp diode, 0 to 12 V, record of 600 ns.
ROWS = [
    (5.0, NEAR_NOTHING_H, None, 47.96, 1.602, 6.92, 1.386, 6.271),
    (10.0, NEAR_NOTHING_H, None, 90.50, 3.204, 13.78, 0.6965, 12.541),
    (10.0, 15e-9, None, 88.97, 3.035, 13.74, 0.6966, 13.508),
    (10.0, 15e-9, "B2", 89.87, 3.336, 13.64, 0.704, 21.333),
    (10.0, 15e-9, "B3", 113.46, 4.516, 16.90, 0.569, 34.522),
    (5.0, 15e-9, "B2", 63.32, 2.435, 9.04, 1.065, 17.735),
]


@pytest.mark.parametrize("row", ROWS, ids=["S1", "S2", "S3", "S4", "S5", "S6"])
def test_turn_on_under_load(
    row: tuple[float, float, str | None, float, float, float, float, float],
) -> None:
    resistance, inductance, bead, loss_uj, rise_ns, fall_ns, plateau_a, start_ns = row
    network = plain_loop(resistance, inductance, 3e-9, BEADS[bead] if bead else None)
    found = turn_on(network, SWITCH, start_v=0.0, final_v=12.0, duration_s=600e-9)
    assert float(found.energy_j) == pytest.approx(loss_uj * 1e-6, rel=1e-3)
    assert float(found.current_rise_s) == pytest.approx(rise_ns * 1e-9, rel=2e-3)
    assert float(found.voltage_fall_s) == pytest.approx(fall_ns * 1e-9, rel=2e-3)
    assert float(found.plateau_current_a) == pytest.approx(plateau_a, rel=2e-3)
    assert float(found.current_start_s) == pytest.approx(start_ns * 1e-9, rel=1e-3)


def test_corners_give_the_same_as_one_by_one() -> None:
    resistances, loads = np.array([5.0, 10.0]), np.array([20.0, 10.0])
    together = turn_on(
        GateLoop(
            resistance_ohm=resistances,
            inductance_h=np.array(15e-9),
            capacitance_f=np.array(3e-9),
            bead=BEADS["B2"],
        ),
        dataclasses.replace(SWITCH, load_a=loads),
        start_v=0.0,
        final_v=12.0,
        duration_s=300e-9,
    )
    for place in range(2):
        alone = turn_on(
            plain_loop(float(resistances[place]), 15e-9, 3e-9, BEADS["B2"]),
            dataclasses.replace(SWITCH, load_a=float(loads[place])),
            start_v=0.0,
            final_v=12.0,
            duration_s=300e-9,
        )
        for field in dataclasses.fields(together):
            value = float(getattr(together, field.name)[place])
            assert value == pytest.approx(float(getattr(alone, field.name)), rel=1e-3)


def test_a_record_too_short_says_so() -> None:
    found = turn_on(plain_loop(10.0, 15e-9, 3e-9), SWITCH, start_v=0.0, final_v=12.0, duration_s=20e-9)
    assert np.isnan(found.voltage_fall_s)
    assert float(found.current_start_s) == pytest.approx(13.508e-9, rel=1e-3)
