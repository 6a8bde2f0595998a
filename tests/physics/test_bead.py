from __future__ import annotations

import numpy as np
import pytest

from gatecheck.physics.bead import (
    BeadLadder,
    capacitive_crossover_hz,
    complex_impedance_ohm,
    crossover_hz,
    impedance_ohm,
    impedance_slope_h,
    low_frequency_inductance_h,
    parallel_bead,
    resistance_share,
    scaled_bead,
    self_resonance_hz,
)
from tests.physics.reference_cases import B1, B2, B3, B4, BEADS

# Closed form evaluated apart, confirmed with scikit-rf (B1 to B3) and ngspice .ac (B4).
IMPEDANCES = [
    ("B1", 10e6, 14.7486, 92.2904),
    ("B1", 100e6, 513.701, 210.754),
    ("B1", 300e6, 493.010, -229.835),
    ("B2", 10e6, 1.60481, 7.18888),
    ("B2", 100e6, 28.6241, 12.4142),
    ("B3", 10e6, 6.14451, 26.9197),
    ("B3", 100e6, 107.598, 43.3233),
    ("B4", 1e6, 2.229305, 7.144481),
    ("B4", 10e6, 21.50969, 26.18312),
    ("B4", 100e6, 81.38669, 44.14494),
    ("B4", 1e9, 122.4379, -29.7092),
]


@pytest.mark.parametrize(("name", "frequency_hz", "resistance", "reactance"), IMPEDANCES)
def test_impedance(name: str, frequency_hz: float, resistance: float, reactance: float) -> None:
    impedance = complex(impedance_ohm(BEADS[name], frequency_hz=frequency_hz))
    assert impedance.real == pytest.approx(resistance, rel=1e-5)
    assert impedance.imag == pytest.approx(reactance, rel=1e-5)


@pytest.mark.parametrize(
    ("name", "crossing_mhz", "resonance_mhz"),
    [("B1", 56.4232, 167.764), ("B2", 44.7257, 513.670), ("B3", 43.4341, 335.528), ("B4", 15.7762, 503.178)],
)
def test_crossover_and_self_resonance(name: str, crossing_mhz: float, resonance_mhz: float) -> None:
    # Closed form and scikit-rf; R_dc included.
    assert float(crossover_hz(BEADS[name])) == pytest.approx(crossing_mhz * 1e6, rel=1e-5)
    assert float(self_resonance_hz(BEADS[name])) == pytest.approx(resonance_mhz * 1e6, rel=1e-5)


def test_capacitive_crossover() -> None:
    assert float(capacitive_crossover_hz(B1)) == pytest.approx(498.815e6, rel=1e-5)


@pytest.mark.parametrize("bead", [B1, B2, B3])
def test_crossover_equals_the_closed_form_without_series_resistance(bead: BeadLadder) -> None:
    # w_x = [-L/R + sqrt((L/R)^2 + 4 L C)] / (2 L C), textbook parallel circuit.
    resistance, inductance = float(bead.section_resistance_ohm[0]), float(bead.section_inductance_h[0])
    capacitance = float(bead.capacitance_f)
    bare = parallel_bead(
        dc_resistance_ohm=0.0,
        parallel_resistance_ohm=resistance,
        inductance_h=inductance,
        capacitance_f=capacitance,
    )
    ratio, product = inductance / resistance, inductance * capacitance
    omega = (-ratio + np.sqrt(ratio**2 + 4.0 * product)) / (2.0 * product)
    assert float(crossover_hz(bare)) == pytest.approx(omega / (2.0 * np.pi), rel=1e-9)


def test_a_bead_without_capacitance_has_no_resonance() -> None:
    bead = parallel_bead(dc_resistance_ohm=0.1, parallel_resistance_ohm=100.0, inductance_h=1e-7)
    assert np.isnan(self_resonance_hz(bead))
    assert np.isnan(capacitive_crossover_hz(bead))
    assert float(crossover_hz(bead)) > 0.0


def test_corners_give_the_same_as_one_by_one() -> None:
    parallel, inductance = np.array([34.0, 125.0, 600.0]), np.array([0.12e-6, 0.45e-6, 1.5e-6])
    together = parallel_bead(
        dc_resistance_ohm=0.05,
        parallel_resistance_ohm=parallel,
        inductance_h=inductance,
        capacitance_f=0.5e-12,
    )
    single = [
        parallel_bead(dc_resistance_ohm=0.05, parallel_resistance_ohm=r, inductance_h=x, capacitance_f=0.5e-12)
        for r, x in zip(parallel, inductance, strict=True)
    ]
    assert crossover_hz(together).tolist() == [float(crossover_hz(bead)) for bead in single]
    grid = impedance_ohm(together, frequency_hz=np.array([1e6, 1e8])[:, None])
    assert grid.shape == (2, 3)
    assert complex(grid[1, 2]) == pytest.approx(complex(impedance_ohm(single[2], frequency_hz=1e8)))


@pytest.mark.parametrize("bead", [B1, B4])
def test_slope_is_the_derivative(bead: BeadLadder) -> None:
    # Second opinion: central difference in the complex plane.
    s, step = complex(-3e7, 2e8), 1e2
    difference = (
        complex_impedance_ohm(bead, complex_frequency_rad_per_s=np.array(s + step))
        - complex_impedance_ohm(bead, complex_frequency_rad_per_s=np.array(s - step))
    ) / (2.0 * step)
    slope = impedance_slope_h(bead, complex_frequency_rad_per_s=np.array(s))
    assert complex(slope) == pytest.approx(complex(difference), rel=1e-6)


def test_low_frequency_inductance_is_what_the_reactance_shows() -> None:
    reactance = complex(impedance_ohm(B4, frequency_hz=1e3)).imag
    assert float(low_frequency_inductance_h(B4)) == pytest.approx(1.3e-6, rel=1e-12)
    assert reactance / (2.0 * np.pi * 1e3) == pytest.approx(1.3e-6, rel=1e-5)


def test_resistance_share() -> None:
    # 513.701 / 555.253, from the table above.
    assert float(resistance_share(B1, frequency_hz=100e6)) == pytest.approx(513.701 / 555.253, rel=1e-5)


def test_scaling_leaves_wire_and_capacitance() -> None:
    scaled = scaled_bead(B2, inductance_ratio=np.array([1.0, 0.5]), resistance_ratio=0.8)
    assert scaled.section_inductance_h[:, 0].tolist() == [0.12e-6, 0.06e-6]
    assert scaled.section_resistance_ohm[:, 0] == pytest.approx([27.2, 27.2])
    assert scaled.dc_resistance_ohm.tolist() == [0.01, 0.01]
    assert scaled.capacitance_f.tolist() == [0.8e-12, 0.8e-12]
