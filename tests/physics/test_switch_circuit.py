from __future__ import annotations

import dataclasses
from typing import TYPE_CHECKING

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.physics.bead import BeadLadder
from gatecheck.physics.oscillation import dominant_growth_per_s
from gatecheck.physics.switch_circuit import (
    SharedLeads,
    SwitchBranch,
    odd_mode_poles_per_s,
    parallel_poles_per_s,
    single_switch_poles_per_s,
)
from tests.physics.reference_cases import BEADS

if TYPE_CHECKING:
    from numpy.typing import NDArray

N, P = 1e-9, 1e-12
SET_P = SwitchBranch(
    gate_resistance_ohm=0.5,
    gate_inductance_h=6 * N,
    drain_inductance_h=4 * N,
    gate_source_f=3 * N,
    gate_drain_f=60 * P,
    drain_source_f=300 * P,
    transconductance_siemens=40.0,
    drain_resistance_ohm=0.02,
)
SET_Q = dataclasses.replace(SET_P, gate_drain_f=20 * P, drain_source_f=150 * P)
SET_O2 = dataclasses.replace(SET_Q, gate_resistance_ohm=1.0, source_inductance_h=2 * N)
SHARED = SharedLeads(gate_resistance_ohm=5.0, gate_inductance_h=10 * N, drain_inductance_h=10 * N)


def spectrum(poles: NDArray[np.complex128]) -> list[complex]:
    """Upper half plane in nepers per microsecond and megahertz, sorted from the fastest growing."""
    upper = poles[poles.imag >= 0.0]
    values = [complex(pole.real / 1e6, pole.imag / (2e6 * np.pi)) for pole in upper]
    return sorted(values, key=lambda value: -value.real)


def test_single_switch_grows() -> None:
    # O1: eigenvalues of a matrix written apart; ngspice-39 .tran gives +15.4763 and 31.2635.
    expected = [15.4763 + 31.2635j, -560.118, -1744.961]
    assert spectrum(single_switch_poles_per_s(SET_P)) == pytest.approx(expected, rel=1e-5)


def test_common_source_inductance_damps_it() -> None:
    # O1b: as above; ngspice-39 .pz is identical.
    poles = single_switch_poles_per_s(dataclasses.replace(SET_P, source_inductance_h=1 * N))
    assert spectrum(poles) == pytest.approx([-24.4552, -51.769 + 113.687j, -2135.45], rel=1e-5)


def test_odd_mode_grows_in_spite_of_a_common_resistor() -> None:
    # O2: eigenvalues of a matrix written apart; ngspice-39 .tran of v_a - v_b gives +140.07 and 216.009.
    assert spectrum(odd_mode_poles_per_s(SET_O2)) == pytest.approx(
        [140.105 + 216.010j, -12.095, -1967.57], rel=1e-5, abs=5e-4
    )
    both = spectrum(parallel_poles_per_s([SET_O2, SET_O2], SHARED))
    assert both[0] == pytest.approx(140.105 + 216.010j, rel=1e-5)
    assert pytest.approx(both[1].real, rel=1e-4) == -9.043
    assert any(abs(pole - (-211.30 + 61.797j)) < 0.01 for pole in both)


def test_odd_mode_at_higher_gain() -> None:
    # O2 with g_m 100; ngspice-39 gives +62.0 and 233.747.
    poles = odd_mode_poles_per_s(dataclasses.replace(SET_O2, transconductance_siemens=100.0))
    assert spectrum(poles)[0] == pytest.approx(62.820 + 233.747j, rel=2e-5)


def test_own_resistance_damps_the_odd_mode() -> None:
    # O3, eigenvalues of a matrix written apart; decays in ngspice-39.
    poles = odd_mode_poles_per_s(dataclasses.replace(SET_O2, gate_resistance_ohm=5.1))
    assert spectrum(poles)[:2] == pytest.approx([-10.530, -51.237 + 222.72j], rel=1e-4)


def test_own_bead_damps_the_odd_mode() -> None:
    # O4, eigenvalues of a matrix written apart; decays in ngspice-39.
    poles = odd_mode_poles_per_s(dataclasses.replace(SET_O2, bead=BEADS["B2"]))
    assert spectrum(poles)[:3] == pytest.approx([-12.84, -131.5, -657.65 + 160.19j], rel=2e-4)


def test_three_devices_have_the_odd_mode_twice() -> None:
    # O5, eigenvalues of a matrix written apart.
    poles = spectrum(parallel_poles_per_s([SET_O2] * 3, SHARED))
    assert poles[:2] == pytest.approx([140.105 + 216.010j] * 2, rel=1e-5)
    assert any(abs(pole - -8.066) < 1e-3 for pole in poles)
    assert any(abs(pole - (-231.24 + 40.18j)) < 0.02 for pole in poles)


def test_unequal_devices_keep_it() -> None:
    # O6, eigenvalues of a matrix written apart.
    other = dataclasses.replace(SET_O2, transconductance_siemens=28.0, gate_source_f=3.6 * N)
    poles = spectrum(parallel_poles_per_s([SET_O2, other], SHARED))
    assert poles[0] == pytest.approx(145.345 + 208.752j, rel=1e-5)


def test_small_source_inductance_is_stable() -> None:
    # Q with 0.3 nH and 1 ohm; ngspice-39 .pz is identical.
    poles = single_switch_poles_per_s(dataclasses.replace(SET_Q, gate_resistance_ohm=1.0, source_inductance_h=0.3 * N))
    assert spectrum(poles) == pytest.approx([-74.451, -301.992 + 145.591j, -1044.945], rel=1e-5)


@pytest.mark.parametrize(
    ("resistance", "growth"),
    [(0.0, 189.5), (1.0, 140.1), (2.0, 91.7), (3.0, 44.3), (4.0, -1.85), (5.0, -10.6), (12.0, -8.6)],
)
def test_growth_against_own_resistance(resistance: float, growth: float) -> None:
    # Nepers per microsecond, eigenvalues of a matrix written apart.
    device = dataclasses.replace(SET_O2, gate_resistance_ohm=resistance)
    found = float(dominant_growth_per_s(poles_per_s=odd_mode_poles_per_s(device)))
    assert found / 1e6 == pytest.approx(growth, rel=6e-3)


def characteristic_polynomial(device: SwitchBranch) -> list[float]:
    """Hand-derived polynomial of the circuit without source inductance, from the fourth power down."""
    rg, lg = float(device.gate_resistance_ohm), float(device.gate_inductance_h)
    rd, ld = float(device.drain_resistance_ohm), float(device.drain_inductance_h)
    cgs, cgd, cds = float(device.gate_source_f), float(device.gate_drain_f), float(device.drain_source_f)
    gm, gds = float(device.transconductance_siemens), float(device.output_siemens)
    both, inp, out = cgs * cds + cgs * cgd + cds * cgd, cgs + cgd, cds + cgd
    feed = gm * cgd + gds * inp
    return [
        lg * ld * both,
        (lg * rd + rg * ld) * both + lg * ld * feed,
        lg * inp + ld * out + rg * rd * both + (lg * rd + rg * ld) * feed,
        rg * inp + rd * out + rg * rd * feed + ld * gds,
        1.0 + rd * gds,
    ]


DEVICE = st.builds(
    SwitchBranch,
    gate_resistance_ohm=st.floats(0.1, 20.0),
    gate_inductance_h=st.floats(1e-9, 5e-8),
    drain_inductance_h=st.floats(1e-9, 5e-8),
    gate_source_f=st.floats(1e-10, 1e-8),
    gate_drain_f=st.floats(1e-12, 3e-10),
    drain_source_f=st.floats(1e-11, 2e-9),
    transconductance_siemens=st.floats(0.1, 200.0),
    drain_resistance_ohm=st.floats(0.001, 0.5),
    output_siemens=st.floats(0.0, 0.1),
)


@given(device=DEVICE)
@settings(deadline=None)
def test_poles_are_roots_of_the_polynomial(device: SwitchBranch) -> None:
    # Second opinion: every pole makes the polynomial small against its largest term.
    coefficients = np.array(characteristic_polynomial(device))
    for pole in single_switch_poles_per_s(device):
        terms = coefficients * pole ** np.arange(4, -1, -1)
        assert abs(terms.sum()) <= 1e-7 * np.abs(terms).max()


@given(device=DEVICE)
@settings(deadline=None)
def test_routh_agrees_on_stability(device: SwitchBranch) -> None:
    # Routh-Hurwitz of the polynomial: a1 a2 a3 > a0 a3^2 + a1^2 a4, all coefficients being positive.
    a4, a3, a2, a1, a0 = characteristic_polynomial(device)
    left, right = a1 * a2 * a3, a0 * a3**2 + a1**2 * a4
    growth = float(dominant_growth_per_s(poles_per_s=single_switch_poles_per_s(device)))
    if abs(left / right - 1.0) > 1e-6:
        assert (growth < 0.0) == (left > right)


@given(
    device=DEVICE,
    bead=st.sampled_from([None, "B2", "B4"]),
    source_h=st.sampled_from([0.0, 1e-9]),
    kelvin=st.booleans(),
    count=st.integers(2, 4),
)
@settings(max_examples=60, deadline=None)
def test_common_and_differential_spectra_compose_the_whole(
    *, device: SwitchBranch, bead: str | None, source_h: float, kelvin: bool, count: int
) -> None:
    """The common mode of n equal devices sees n times the shared leads, the n - 1 odd modes none."""
    device = dataclasses.replace(
        device,
        bead=BEADS[bead] if bead else None,
        source_inductance_h=source_h,
        kelvin_inductance_h=4e-9 if kelvin else None,
        kelvin_resistance_ohm=0.5 if kelvin else 0.0,
    )
    common = dataclasses.replace(
        device,
        gate_resistance_ohm=device.gate_resistance_ohm + count * SHARED.gate_resistance_ohm,
        gate_inductance_h=device.gate_inductance_h + count * SHARED.gate_inductance_h,
        drain_inductance_h=device.drain_inductance_h + count * SHARED.drain_inductance_h,
    )
    whole = np.sort_complex(parallel_poles_per_s([device] * count, SHARED))
    parts = np.sort_complex(
        np.concatenate([single_switch_poles_per_s(common), *[odd_mode_poles_per_s(device)] * (count - 1)])
    )
    assert whole.shape == parts.shape
    # Multiple poles split by the root of rounding, so compare what symmetric functions of them say.
    for power in (1, 2, 3):
        scale = np.abs(parts).max()
        assert np.sum((whole / scale) ** power) == pytest.approx(np.sum((parts / scale) ** power), rel=1e-7)
    distance = np.abs(whole[:, None] - parts[None, :]).min(axis=1)
    assert (distance / np.abs(whole)).max() < 1e-3


@given(device=DEVICE, impedance=st.floats(0.1, 10.0), time=st.floats(0.1, 10.0))
@settings(deadline=None)
def test_scaling(device: SwitchBranch, impedance: float, time: float) -> None:
    """Impedances times z and times times t: every pole is divided by t."""
    resistances = ("gate_resistance_ohm", "drain_resistance_ohm")
    inductances = ("gate_inductance_h", "drain_inductance_h")
    capacitances = ("gate_source_f", "gate_drain_f", "drain_source_f")
    admittances = ("transconductance_siemens", "output_siemens")
    scaled = dataclasses.replace(
        device,
        **{name: getattr(device, name) * impedance for name in resistances},
        **{name: getattr(device, name) * impedance * time for name in inductances},
        **{name: getattr(device, name) / impedance * time for name in capacitances},
        **{name: getattr(device, name) / impedance for name in admittances},
    )
    before = dominant_growth_per_s(poles_per_s=single_switch_poles_per_s(device))
    after = dominant_growth_per_s(poles_per_s=single_switch_poles_per_s(scaled))
    size = float(np.abs(single_switch_poles_per_s(device)).max())
    assert float(after) * time == pytest.approx(float(before), rel=1e-6, abs=1e-9 * size)


def test_a_kelvin_lead_takes_the_source_inductance_out_of_the_gate_loop() -> None:
    # One isolated driver: gate loop L_g + L_k, drain loop L_d + L_s, nothing shared.
    kelvin = dataclasses.replace(SET_O2, kelvin_inductance_h=5 * N, kelvin_resistance_ohm=0.3)
    separate = dataclasses.replace(
        SET_O2,
        gate_inductance_h=11 * N,
        gate_resistance_ohm=1.3,
        drain_inductance_h=6 * N,
        source_inductance_h=0.0,
    )
    found, expected = (np.sort_complex(single_switch_poles_per_s(device)) for device in (kelvin, separate))
    assert found == pytest.approx(expected, rel=1e-9)


@pytest.mark.parametrize("devices", [[], [SET_O2, dataclasses.replace(SET_O2, kelvin_inductance_h=5 * N)]])
def test_devices_must_be_of_one_kind(devices: list[SwitchBranch]) -> None:
    with pytest.raises(ValueError, match="Kelvin"):
        parallel_poles_per_s(devices, SHARED)


@pytest.mark.parametrize("kelvin_h", [None, 5 * N])
def test_a_single_switch_is_the_smallest_parallel_network(kelvin_h: float | None) -> None:
    device = dataclasses.replace(SET_O2, bead=BEADS["B4"], kelvin_inductance_h=kelvin_h)
    alone, network = single_switch_poles_per_s(device), parallel_poles_per_s([device], SharedLeads())
    assert np.sort_complex(alone) == pytest.approx(np.sort_complex(network), rel=1e-9)


def test_corners_give_the_same_as_one_by_one() -> None:
    gains, resistances = np.array([[1.0], [40.0]]), np.array([0.5, 2.0, 5.0])
    bead = BEADS["B2"]
    together = odd_mode_poles_per_s(
        dataclasses.replace(SET_O2, transconductance_siemens=gains, gate_resistance_ohm=resistances, bead=bead)
    )
    assert together.shape == (2, 3, 6)
    alone = odd_mode_poles_per_s(
        dataclasses.replace(SET_O2, transconductance_siemens=40.0, gate_resistance_ohm=2.0, bead=bead)
    )
    assert np.sort_complex(together[1, 1]) == pytest.approx(np.sort_complex(alone), rel=1e-9)


def test_bead_with_series_inductance_and_without_capacitance() -> None:
    bare = BeadLadder(
        dc_resistance_ohm=np.array(0.2),
        section_resistance_ohm=np.array([30.0]),
        section_inductance_h=np.array([1e-12]),  # a short: only R_dc and L_0 are left
        series_inductance_h=np.array(5 * N),
        capacitance_f=np.array(0.0),
    )
    with_bead = dominant_growth_per_s(poles_per_s=single_switch_poles_per_s(dataclasses.replace(SET_P, bead=bare)))
    with_lead = dominant_growth_per_s(
        poles_per_s=single_switch_poles_per_s(
            dataclasses.replace(SET_P, gate_resistance_ohm=0.7, gate_inductance_h=11 * N)
        )
    )
    assert float(with_bead) == pytest.approx(float(with_lead), rel=1e-3)
