from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.parse.touchstone import read_touchstone
from gatecheck.physics.bead import BeadLadder, impedance_ohm
from gatecheck.physics.bead_fit import (
    BeadFit,
    ImpedancePart,
    fit_to_impedance,
    fit_to_points,
    fitted_impedance_ohm,
)
from gatecheck.physics.scattering import Topology, measured_impedance
from tests.physics.reference_cases import B1, B3, B4, synthetic_ferrite

FREQUENCY_HZ = np.geomspace(1e6, 1e9, 61)


def test_the_synthetic_ferrite_itself() -> None:
    # Closed form evaluated apart.
    impedance = synthetic_ferrite(np.array([1e6, 1e7, 3e7, 1e8, 3e8, 1e9]))
    expected = [
        0.502743 + 9.44104j,
        29.8411 + 81.9913j,
        125.464 + 135.794j,
        260.14 + 132.766j,
        414.424 + 44.4192j,
        212.569 - 277.595j,
    ]
    assert impedance == pytest.approx(np.array(expected), rel=5e-6)


@pytest.mark.parametrize(("sections", "worst"), [(4, 0.21), (7, 0.024), (10, 0.0004), (13, 0.0034)])
def test_error_falls_with_sections(sections: int, worst: float) -> None:
    # The same formulation with scipy's nnls and a bounded search gave 21, 2.4, 0.04 and 0.3 %.
    fit = fit_to_impedance(
        frequency_hz=FREQUENCY_HZ,
        measured_ohm=synthetic_ferrite(FREQUENCY_HZ),
        dc_resistance_ohm=0.15,
        sections_count=sections,
    )
    assert fit.worst_error_ratio == pytest.approx(worst, rel=0.15)
    assert fit.rms_error_ratio < fit.worst_error_ratio


def test_ten_sections_find_the_capacitance() -> None:
    fit = fit_to_impedance(
        frequency_hz=FREQUENCY_HZ,
        measured_ohm=synthetic_ferrite(FREQUENCY_HZ),
        dc_resistance_ohm=0.15,
    )
    assert fit.worst_error_ratio < 0.005
    assert float(fit.bead.capacitance_f) == pytest.approx(0.51e-12, rel=0.02)


def test_a_corner_between_the_grid() -> None:
    # The same formulation with scipy stays below 2.5 %.
    fit = fit_to_impedance(
        frequency_hz=FREQUENCY_HZ,
        measured_ohm=impedance_ohm(B1, frequency_hz=FREQUENCY_HZ),
        dc_resistance_ohm=0.2,
        sections_count=13,
    )
    assert fit.worst_error_ratio < 0.025


def test_reading_noise_is_averaged() -> None:
    # With 3 % reading noise and ten sections the error against the truth stays near 1 % rms (computed with
    # scipy: 0.8).
    rng = np.random.default_rng(11)
    truth = synthetic_ferrite(FREQUENCY_HZ)
    noise = (rng.normal(size=61) + 1j * rng.normal(size=61)) / np.sqrt(2.0)
    fit = fit_to_impedance(frequency_hz=FREQUENCY_HZ, measured_ohm=truth * (1.0 + 0.03 * noise), dc_resistance_ohm=0.15)
    error = np.abs(impedance_ohm(fit.bead, frequency_hz=FREQUENCY_HZ) / truth - 1.0)
    assert float(np.sqrt(np.mean(error**2))) < 0.013
    assert float(error.max()) < 0.03


def test_a_search_over_all_elements_finds_no_better_bead() -> None:
    # Second opinion: scipy's general minimiser over the same ladder, started at the fit.
    from scipy.optimize import least_squares

    truth = synthetic_ferrite(FREQUENCY_HZ)
    fit = fit_to_impedance(frequency_hz=FREQUENCY_HZ, measured_ohm=truth, dc_resistance_ohm=0.15, sections_count=7)
    corners = fit.bead.section_resistance_ohm / fit.bead.section_inductance_h

    def residual(logs: np.ndarray) -> np.ndarray:
        values = np.exp(logs)
        bead = BeadLadder(
            dc_resistance_ohm=np.array(0.15),
            section_resistance_ohm=values[2:],
            section_inductance_h=values[2:] / corners,
            series_inductance_h=np.array(values[1]),
            capacitance_f=np.array(values[0]),
        )
        error = impedance_ohm(bead, frequency_hz=FREQUENCY_HZ) / truth - 1.0
        return np.concatenate([error.real, error.imag])

    start = np.log(
        [float(fit.bead.capacitance_f), float(fit.bead.series_inductance_h), *fit.bead.section_resistance_ohm]
    )
    best = least_squares(residual, start, xtol=1e-12, ftol=1e-12)
    ours, theirs = np.linalg.norm(residual(start)), np.linalg.norm(best.fun)
    assert theirs <= ours <= 1.25 * theirs  # ours weighs the errors of Z' rather than of Z


@given(
    relaxation_hz=st.floats(3e6, 1e8),
    permeability=st.floats(50.0, 800.0),
    steepness=st.floats(0.5, 1.0),
    sections=st.integers(3, 12),
)
@settings(max_examples=30, deadline=None)
def test_every_fit_is_passive(relaxation_hz: float, permeability: float, steepness: float, sections: int) -> None:
    s = 2j * np.pi * FREQUENCY_HZ
    core = 1.0 + permeability / (1.0 + 1j * FREQUENCY_HZ / relaxation_hz) ** steepness
    measured = 0.1 + 1.0 / (1.0 / (s * 4e-9 * core) + s * 0.4e-12)
    fit = fit_to_impedance(
        frequency_hz=FREQUENCY_HZ,
        measured_ohm=np.asarray(measured, dtype=np.complex128),
        dc_resistance_ohm=0.1,
        sections_count=sections,
    )
    assert fit.bead.section_resistance_ohm.min() > 0.0
    assert fit.bead.section_inductance_h.min() > 0.0
    assert float(fit.bead.capacitance_f) > 0.0
    assert impedance_ohm(fit.bead, frequency_hz=np.geomspace(1e3, 1e12, 400)).real.min() > 0.0


def points(bead: BeadLadder, frequencies: list[float], parts: list[ImpedancePart]) -> BeadFit:
    impedance = impedance_ohm(bead, frequency_hz=np.array(frequencies))
    read = {
        ImpedancePart.RESISTANCE: impedance.real,
        ImpedancePart.REACTANCE: impedance.imag,
        ImpedancePart.MAGNITUDE: np.abs(impedance),
    }
    return fit_to_points(
        frequency_hz=np.tile(frequencies, len(parts)),
        value_ohm=np.concatenate([read[part] for part in parts]),
        parts=tuple(part for part in parts for _ in frequencies),
        dc_resistance_ohm=float(bead.dc_resistance_ohm),
    )


@pytest.mark.parametrize("bead", [B1, B3, B4])
def test_four_points_of_resistance_and_reactance(bead: BeadLadder) -> None:
    frequencies = [1e7, 3e7, 1e8, 3e8]
    fit = points(bead, frequencies, [ImpedancePart.RESISTANCE, ImpedancePart.REACTANCE])
    between = np.geomspace(1e7, 3e8, 30)
    error = impedance_ohm(fit.bead, frequency_hz=between) / impedance_ohm(bead, frequency_hz=between) - 1.0
    assert np.abs(error).max() < 0.04


@pytest.mark.parametrize(("bead", "lowest_hz"), [(B1, 1e7), (B3, 1e7), (B4, 1e6)])
def test_magnitude_alone_gives_the_parts_too(bead: BeadLadder, lowest_hz: float) -> None:
    # A passive bead's R and X follow from |Z| at all frequencies (Bode), so the ends of the points are open.
    frequencies = np.geomspace(lowest_hz, 1e9, 7).tolist()
    fit = points(bead, frequencies, [ImpedancePart.MAGNITUDE])
    between = np.geomspace(2.0 * lowest_hz, 0.5e9, 30)
    error = impedance_ohm(fit.bead, frequency_hz=between) / impedance_ohm(bead, frequency_hz=between) - 1.0
    assert np.abs(error).max() < 0.08
    assert fit.worst_error_ratio < 0.03


def test_points_stay_passive_and_close_even_if_few() -> None:
    fit = points(B3, [1e7, 1e8, 3e8], [ImpedancePart.MAGNITUDE])
    assert fit.worst_error_ratio < 1e-4
    assert impedance_ohm(fit.bead, frequency_hz=np.geomspace(1e3, 1e12, 400)).real.min() > 0.0


def test_no_word_beyond_a_factor_of_two() -> None:
    fit = points(B3, [1e7, 3e7, 1e8, 3e8], [ImpedancePart.MAGNITUDE])
    asked = fitted_impedance_ohm(fit, frequency_hz=np.array([4.9e6, 5.1e6, 5.9e8, 6.1e8]))
    assert np.isnan(asked).tolist() == [True, False, False, True]
    assert (fit.lowest_hz, fit.highest_hz) == (5e6, 6e8)


def test_from_file_to_bead() -> None:
    """A series-through measurement with pads, read from text, becomes a bead that a simulation can use."""
    truth = synthetic_ferrite(FREQUENCY_HZ)
    pad = 2j * np.pi * FREQUENCY_HZ * 0.3e-12
    # Chain matrix of pad, part, pad; then S in 50 ohm: S11 = (A + B/Z - C Z - D) / sum, S21 = 2 / sum.
    a = 1.0 + truth * pad
    c = 2.0 * pad + truth * pad**2
    total = 2.0 * a + truth / 50.0 + c * 50.0
    s11, s21 = (truth / 50.0 - c * 50.0) / total, 2.0 / total
    rows = [
        " ".join(f"{value:.9g}" for value in (f, *(part for z in (x, y, y, x) for part in (z.real, z.imag))))
        for f, x, y in zip(FREQUENCY_HZ, s11, s21, strict=True)
    ]
    data = read_touchstone("\n".join(["# Hz S RI R 50", *rows]), path="bead.s2p")
    measured = measured_impedance(scattering_ratio=data.values, reference_ohm=data.reference_ohm)
    assert measured.topology is Topology.SERIES
    fit = fit_to_impedance(frequency_hz=data.frequency_hz, measured_ohm=measured.impedance_ohm, dc_resistance_ohm=0.15)
    found = fitted_impedance_ohm(fit, frequency_hz=FREQUENCY_HZ)
    assert np.abs(found / truth - 1.0).max() < 0.01
