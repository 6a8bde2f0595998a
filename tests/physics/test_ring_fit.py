from __future__ import annotations

import dataclasses
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.physics.gate_loop import step_response
from gatecheck.physics.ring_fit import NoRingError, decay_error_bound_per_s, fit_ring
from gatecheck.physics.trajectory import value_at
from tests.physics.reference_cases import loop


@dataclasses.dataclass(frozen=True)
class Record:
    """A ring of amplitude 1, phase 0.3, offset 0.05; bounds from the numeric Fisher matrix, made apart."""

    ring_mhz: float
    decay: float  # nepers per microsecond
    rate_gs: float
    length_ns: float
    noise: float
    frequency_bound_khz: float
    decay_bound: float

    @property
    def step_s(self) -> float:
        return 1e-9 / self.rate_gs

    def samples(self) -> Any:
        time_us = np.arange(round(self.length_ns * self.rate_gs)) * self.step_s * 1e6
        return np.exp(-self.decay * time_us) * np.cos(2.0 * np.pi * self.ring_mhz * time_us + 0.3) + 0.05


RECORDS = {
    "slow": Record(29.9625, 9.4248, 1.0, 400.0, 0.02, 11.75, 0.07468),
    "damped": Record(29.3939, 37.6991, 1.0, 200.0, 0.02, 98.12, 0.58812),
    "fast": Record(99.6795, 50.2655, 2.5, 100.0, 0.03, 135.73, 0.85826),
    "noisy": Record(29.9625, 9.4248, 1.0, 400.0, 0.1, 58.76, 0.37341),
    "gate": Record(21.1754, 49.9998, 2.5, 200.0, 0.01, 56.48, 0.28986),
}


@pytest.mark.parametrize("name", RECORDS)
def test_noise_free_parameters(name: str) -> None:
    record = RECORDS[name]
    ring = fit_ring(sample_au=record.samples(), step_s=record.step_s)
    found = [ring.amplitude_au, ring.decay_per_s / 1e6, ring.ring_hz / 1e6, ring.phase_rad, ring.offset_au]
    assert found == pytest.approx([1.0, record.decay, record.ring_mhz, 0.3, 0.05], rel=1e-9)
    zeta = record.decay / np.hypot(record.decay, 2.0 * np.pi * record.ring_mhz)
    assert ring.damping_ratio == pytest.approx(zeta, rel=1e-9)


@pytest.mark.parametrize("name", RECORDS)
def test_scatter_reaches_the_bound(name: str) -> None:
    record = RECORDS[name]
    rng = np.random.default_rng(20)
    clean = record.samples()
    rings = [
        fit_ring(sample_au=clean + record.noise * rng.normal(size=clean.size), step_s=record.step_s) for _ in range(200)
    ]
    frequencies = np.array([ring.ring_hz for ring in rings]) / 1e6
    decays = np.array([ring.decay_per_s for ring in rings]) / 1e6
    assert frequencies.std() < 1.25e-3 * record.frequency_bound_khz
    assert decays.std() < 1.25 * record.decay_bound
    assert abs(frequencies.mean() - record.ring_mhz) < 0.3e-3 * record.frequency_bound_khz
    assert abs(decays.mean() - record.decay) < 0.3 * record.decay_bound
    # The standard errors that come with each fit are those of the bound.
    assert np.mean([ring.ring_error_hz for ring in rings]) == pytest.approx(1e3 * record.frequency_bound_khz, rel=0.03)
    assert np.mean([ring.decay_error_per_s for ring in rings]) == pytest.approx(1e6 * record.decay_bound, rel=0.03)
    damping = np.array([ring.damping_ratio for ring in rings])
    assert damping.std() == pytest.approx(np.mean([ring.damping_error_ratio for ring in rings]), rel=0.15)
    assert np.mean([ring.noise_au for ring in rings]) == pytest.approx(record.noise, rel=0.02)


@pytest.mark.parametrize(
    ("name", "closed"),
    [("slow", 0.07320), ("damped", 0.58558), ("fast", 0.85530), ("noisy", 0.36599), ("gate", 0.28284)],
)
def test_closed_bound(name: str, closed: float) -> None:
    # Own closed form, evaluated apart; 0 to 2.5 % below the Fisher matrix.
    record = RECORDS[name]
    bound = decay_error_bound_per_s(noise_ratio=record.noise, decay_per_s=record.decay * 1e6, step_s=record.step_s)
    assert float(bound) / 1e6 == pytest.approx(closed, rel=1e-4)
    assert 0.975 <= closed / record.decay_bound <= 1.0


def test_eight_bit_quantisation() -> None:
    # 2.5 V span: +3.1 kHz and +0.23 % of the decay (evaluated apart).
    record, step = RECORDS["slow"], 2.5 / 256
    ring = fit_ring(sample_au=np.round(record.samples() / step) * step, step_s=record.step_s)
    assert (ring.ring_hz - record.ring_mhz * 1e6) / 1e3 == pytest.approx(3.1, abs=0.2)
    assert ring.decay_per_s / (record.decay * 1e6) - 1.0 == pytest.approx(0.0023, abs=0.0005)


def test_ring_of_a_gate_loop() -> None:
    # The gate voltage of 1.5 ohm, 15 nH, 3.3 nF after a step: 21.1754 MHz, 50 nepers per microsecond.
    response = step_response(loop("G1"))
    times = np.arange(500) * 0.2e-9 + 10e-9
    samples = np.array([float(value_at(response.gate, time_s=time)) for time in times])
    ring = fit_ring(sample_au=samples, step_s=0.2e-9)
    assert ring.ring_hz == pytest.approx(21.1754e6, rel=1e-4)
    assert ring.decay_per_s == pytest.approx(50e6, rel=1e-3)
    assert ring.offset_au == pytest.approx(1.0, abs=1e-4)


def test_a_settling_tail_needs_more_modes() -> None:
    record = RECORDS["slow"]
    time_us = np.arange(record.samples().size) * record.step_s * 1e6
    ring = fit_ring(sample_au=record.samples() + 0.2 * np.exp(-2.0 * time_us), step_s=record.step_s, has_tail=True)
    assert ring.ring_hz == pytest.approx(record.ring_mhz * 1e6, rel=2e-3)


@pytest.mark.parametrize("samples", [np.ones(100), np.zeros(10), np.linspace(0.0, 1.0, 200) ** 0 * 3.0])
def test_a_flat_record_has_no_ring(samples: Any) -> None:
    with pytest.raises(NoRingError):
        fit_ring(sample_au=samples, step_s=1e-9)


@given(seed=st.integers(0, 10_000), samples=st.integers(24, 200))
@settings(deadline=None)
def test_noise_is_fitted_or_refused(seed: int, samples: int) -> None:
    values = np.random.default_rng(seed).normal(size=samples)
    try:
        ring = fit_ring(sample_au=values, step_s=1e-9)
    except NoRingError:
        return
    # Nothing better than noise: whatever is found explains little of it.
    assert ring.noise_au > 0.3
    assert 0.0 < ring.ring_hz < 0.5e9


def test_a_bare_decay_has_no_ring() -> None:
    with pytest.raises(NoRingError, match="no oscillation"):
        fit_ring(sample_au=np.exp(-np.arange(400) / 60.0), step_s=1e-9)
