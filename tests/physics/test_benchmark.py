"""Time budgets on one core; run by themselves (marker `alone`)."""

from __future__ import annotations

import dataclasses
import time
from typing import TYPE_CHECKING

import numpy as np
import pytest

from gatecheck.physics.bead import scaled_bead
from gatecheck.physics.gate_loop import GateLoop, edge_figures, ring_mode, step_response
from gatecheck.physics.oscillation import sweep_transconductance
from gatecheck.physics.switch_circuit import odd_mode_poles_per_s, single_switch_poles_per_s
from tests.physics.reference_cases import by_gain, case_bead, case_switch

if TYPE_CHECKING:
    from collections.abc import Callable

pytestmark = pytest.mark.alone
RUNS = 7


def best_ms(job: Callable[[], object]) -> float:
    """Shortest of several runs: what the machine can do when nothing disturbs it."""
    spans = []
    for _ in range(RUNS):
        start = time.perf_counter()
        job()
        spans.append(time.perf_counter() - start)
    return 1e3 * min(spans)


def test_512_corners_of_both_edges() -> None:
    rng = np.random.default_rng(1)
    bead = scaled_bead(
        case_bead("B"),
        inductance_ratio=rng.uniform(0.5, 1.5, 512),
        resistance_ratio=rng.uniform(0.5, 1.5, 512),
    )
    edges = [
        GateLoop(
            resistance_ohm=rng.uniform(low, high, 512),
            inductance_h=rng.uniform(15e-9, 30e-9, 512),
            capacitance_f=rng.uniform(2e-9, 4e-9, 512),
            bead=bead,
        )
        for low, high in ((10.0, 14.0), (3.0, 5.0))
    ]
    device = dataclasses.replace(case_switch("B", "on", bead), gate_drain_f=rng.uniform(4e-12, 6e-12, 512))

    def job() -> None:
        for edge in edges:
            edge_figures(step_response(edge), start_v=0.0, final_v=12.0)
            ring_mode(edge)
            single_switch_poles_per_s(dataclasses.replace(device, gate_resistance_ohm=edge.resistance_ohm))

    assert best_ms(job) <= 100.0


def test_full_sweep_of_one_gate() -> None:
    # 24 transconductances, 3 bias points, 2 edges, with and without bead, own and odd mode.
    biased = scaled_bead(
        case_bead("B"),
        inductance_ratio=np.array([[0.888], [0.5434]]),
        resistance_ratio=np.array([[0.888], [0.5434]]),
    )
    plain = dataclasses.replace(
        case_switch("B", "on"),
        gate_resistance_ohm=np.array([[12.2], [4.0]]),
        gate_drain_f=np.array([5e-12, 12e-12, 40e-12]),
        drain_source_f=np.array([60e-12, 100e-12, 300e-12]),
    )

    def job() -> None:
        for device in (plain, dataclasses.replace(plain, bead=biased)):
            for poles in (single_switch_poles_per_s, odd_mode_poles_per_s):
                sweep_transconductance(
                    by_gain(poles, device),
                    maximum_siemens=np.full((1, 1), 30.0),
                )

    assert best_ms(job) <= 10.0
