from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

from gatecheck.physics.bead import impedance_ohm
from gatecheck.physics.scattering import (
    Topology,
    impedance_error_ratio,
    measured_impedance,
    reflection_impedance_ohm,
    renormalised_ratio,
    series_element_ohm,
    series_transmission_impedance_ohm,
    shunt_element_ohm,
    shunt_transmission_impedance_ohm,
)
from tests.physics.reference_cases import B1, B2

if TYPE_CHECKING:
    from collections.abc import Callable

FREQUENCY_HZ = np.geomspace(1e6, 1e9, 61)
FIFTY = np.array([50.0, 50.0])

# B1 in 50 ohm, computed with scikit-rf 2.2.0 and converted back there to 2e-15.
TABLE = [
    (1e6, 0.98782186 - 0.09275754j, 0.13347331 + 0.32211974j, -0.91896142 + 0.35913958j),
    (100e6, 0.14575619 - 0.05005476j, 0.95975231 + 0.01574593j, 0.84435723 + 0.05819094j),
    (1e9, 0.21982485 + 0.24479872j, 0.95259617 - 0.08370297j, 0.79473184 - 0.30325489j),
]


@pytest.mark.parametrize(("frequency_hz", "series", "shunt", "reflection"), TABLE)
def test_conversions(frequency_hz: float, series: complex, shunt: complex, reflection: complex) -> None:
    bead = complex(impedance_ohm(B1, frequency_hz=frequency_hz))
    found = [
        series_transmission_impedance_ohm(transmission_ratio=np.array(series), reference_ohm=50.0),
        shunt_transmission_impedance_ohm(transmission_ratio=np.array(shunt), reference_ohm=50.0),
        reflection_impedance_ohm(reflection_ratio=np.array(reflection), reference_ohm=50.0),
    ]
    # The table's eight digits are magnified by the conversion, most in shunt.
    assert [complex(z) for z in found] == pytest.approx([bead] * 3, rel=1e-6)


def test_half_transmission() -> None:
    # 100 ohm in series and 25 ohm in shunt each halve the voltage in 50 ohm (voltage divider).
    half = np.array(0.5 + 0j)
    assert complex(series_transmission_impedance_ohm(transmission_ratio=half, reference_ohm=50.0)) == 100.0
    assert complex(shunt_transmission_impedance_ohm(transmission_ratio=half, reference_ohm=50.0)) == 25.0


@pytest.mark.parametrize(
    ("impedance", "series_percent", "shunt_percent"),
    [(1.0, 100.0, 1.0), (10.0, 11.0, 1.4), (100.0, 2.0, 5.2), (1000.0, 1.1, 68.0)],
)
def test_error_gain(impedance: float, series_percent: float, shunt_percent: float) -> None:
    # One percent more of S21 itself, carried through the exact conversion.
    in_series, in_shunt = 100.0 / (100.0 + impedance), 2.0 * impedance / (2.0 * impedance + 50.0)
    series = series_transmission_impedance_ohm(transmission_ratio=np.array(1.01 * in_series + 0j), reference_ohm=50.0)
    shunt = shunt_transmission_impedance_ohm(transmission_ratio=np.array(1.01 * in_shunt + 0j), reference_ohm=50.0)
    assert 100.0 * abs(complex(series) / impedance - 1.0) == pytest.approx(series_percent, rel=0.05)
    assert 100.0 * abs(complex(shunt) / impedance - 1.0) == pytest.approx(shunt_percent, rel=0.05)


@pytest.mark.parametrize("topology", Topology)
def test_error_gain_is_the_derivative(topology: Topology) -> None:
    impedance, step = 20.0, 1e-6
    readings: dict[Topology, tuple[float, Callable[[float], float], float]] = {
        Topology.SERIES: (100.0 / 120.0, lambda s: 100.0 * (1.0 - s) / s, 100.0 / 120.0),
        Topology.SHUNT: (40.0 / 90.0, lambda s: 25.0 * s / (1.0 - s), 40.0 / 90.0),
        Topology.ONE_PORT: (-30.0 / 70.0, lambda s: 50.0 * (1.0 + s) / (1.0 - s), 1.0),
    }
    reading, convert, scale = readings[topology]
    slope = abs(convert(reading + step) - convert(reading - step)) / (2.0 * step) * scale / impedance
    gain = impedance_error_ratio(topology=topology, impedance_ohm=impedance, reference_ohm=50.0)
    assert float(gain) == pytest.approx(slope, rel=1e-6)


def network(
    part_ohm: Any,
    *,
    series: bool,
    pads_f: float = 0.0,
    lead_h: float = 0.0,
    reference: tuple[float, float] = (50.0, 50.0),
) -> Any:
    """Scattering parameters made with scikit-rf from a chain matrix: leads and pads around the part."""
    from skrf import network as skrf

    ones, none = np.ones(part_ohm.size), np.zeros(part_ohm.size)
    part = np.array([[ones, part_ohm], [none, ones]] if series else [[ones, none], [1.0 / part_ohm, ones]])
    pad = np.array([[ones, none], [2j * np.pi * FREQUENCY_HZ * pads_f, ones]])
    lead = np.array([[ones, 2j * np.pi * FREQUENCY_HZ * lead_h], [none, ones]])
    chain = np.einsum("abn,bcn,cdn,den,efn->naf", lead, pad, part, pad, lead)
    return skrf.a2s(chain, np.array(reference))


@pytest.mark.parametrize("reference", [(50.0, 50.0), (25.0, 100.0), (75.0, 75.0)])
@pytest.mark.parametrize("series", [True, False])
def test_topology_and_impedance_from_clean_data(series: bool, reference: tuple[float, float]) -> None:
    part = impedance_ohm(B2, frequency_hz=FREQUENCY_HZ)
    found = measured_impedance(
        scattering_ratio=network(part, series=series, reference=reference), reference_ohm=np.array(reference)
    )
    assert found.topology is (Topology.SERIES if series else Topology.SHUNT)
    assert found.impedance_ohm == pytest.approx(part, rel=1e-9)
    assert not found.with_pads
    assert not found.doubtful


def test_pads_are_taken_off() -> None:
    part = impedance_ohm(B1, frequency_hz=FREQUENCY_HZ)
    found = measured_impedance(scattering_ratio=network(part, series=True, pads_f=1e-12), reference_ohm=FIFTY)
    assert found.with_pads
    assert found.topology is Topology.SERIES
    assert found.impedance_ohm == pytest.approx(part, rel=1e-9)


def test_leads_in_series_with_a_shunt_part_are_taken_off() -> None:
    # 5 nH at each port of a shunt-through fixture.
    part = impedance_ohm(B2, frequency_hz=FREQUENCY_HZ)
    found = measured_impedance(scattering_ratio=network(part, series=False, lead_h=5e-9), reference_ohm=FIFTY)
    assert found.with_pads
    assert found.topology is Topology.SHUNT
    assert found.impedance_ohm == pytest.approx(part, rel=1e-9)


def test_noise_does_not_turn_the_topology() -> None:
    # 0.2 % noise on a bead that is almost a short at the lowest frequencies.
    rng = np.random.default_rng(4)
    noise = 0.002 * (rng.normal(size=(61, 2, 2)) + 1j * rng.normal(size=(61, 2, 2)))
    part = impedance_ohm(B2, frequency_hz=FREQUENCY_HZ)
    for series, expected in ((True, Topology.SERIES), (False, Topology.SHUNT)):
        found = measured_impedance(scattering_ratio=network(part, series=series) + noise, reference_ohm=FIFTY)
        assert found.topology is expected
        assert not found.doubtful


def test_a_line_is_neither() -> None:
    # A matched line turns the phase: S11 = 0 and |S21| = 1, so neither identity holds.
    delayed = np.exp(-2j * np.pi * (FREQUENCY_HZ + 1e8) * 1e-9)
    scattering = np.zeros((61, 2, 2), dtype=np.complex128)
    scattering[:, 0, 1] = scattering[:, 1, 0] = delayed
    found = measured_impedance(scattering_ratio=scattering, reference_ohm=FIFTY)
    assert found.topology is None
    assert found.doubtful
    assert np.isnan(found.impedance_ohm).all()


def test_a_large_part_in_series_is_doubted() -> None:
    # |S21| falls towards low frequency: a capacitor, not a bead.
    part = 1.0 / (2j * np.pi * FREQUENCY_HZ * 10e-12)
    found = measured_impedance(scattering_ratio=network(part, series=True), reference_ohm=FIFTY)
    assert found.topology is Topology.SERIES
    assert found.doubtful


def test_one_port() -> None:
    part = impedance_ohm(B1, frequency_hz=FREQUENCY_HZ)
    reflection = ((part - 50.0) / (part + 50.0))[:, None, None]
    found = measured_impedance(scattering_ratio=reflection, reference_ohm=np.array([50.0]))
    assert found.topology is Topology.ONE_PORT
    assert found.impedance_ohm == pytest.approx(part, rel=1e-9)


def test_three_ports_are_refused() -> None:
    with pytest.raises(ValueError, match="3"):
        measured_impedance(scattering_ratio=np.zeros((1, 3, 3), dtype=complex), reference_ohm=np.ones(3))


def random_scattering(seed: int, ports: int) -> Any:
    rng = np.random.default_rng(seed)
    return 0.4 * (rng.normal(size=(5, ports, ports)) + 1j * rng.normal(size=(5, ports, ports))) / ports


@pytest.mark.parametrize("ports", [1, 2, 3])
def test_renormalisation_equals_scikit_rf(ports: int) -> None:
    from skrf import network as skrf

    scattering, old = random_scattering(ports, ports), np.array([50.0, 20.0, 130.0])[:ports]
    expected = skrf.renormalize_s(scattering, old, np.full(ports, 75.0))
    found = renormalised_ratio(scattering_ratio=scattering, reference_ohm=old, new_reference_ohm=75.0)
    assert found == pytest.approx(expected, rel=1e-10)


def test_elements_equal_scikit_rf() -> None:
    from skrf import network as skrf

    scattering, reference = random_scattering(7, 2), np.array([50.0, 20.0])
    admittance, impedance = skrf.s2y(scattering, reference), skrf.s2z(scattering, reference)
    series = series_element_ohm(scattering_ratio=scattering, reference_ohm=reference)
    shunt = shunt_element_ohm(scattering_ratio=scattering, reference_ohm=reference)
    assert series == pytest.approx(-1.0 / admittance[:, 1, 0], rel=1e-10)
    assert shunt == pytest.approx(impedance[:, 1, 0], rel=1e-10)
