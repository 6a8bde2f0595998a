from __future__ import annotations

import dataclasses

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.physics.bead import BeadLadder, impedance_ohm
from gatecheck.physics.bead_states import BeadStates, bead_states
from tests.physics.reference_cases import B1, B4


def ladder(sections: int, *, series_h: float, capacitance_f: float) -> BeadLadder:
    place = np.arange(sections, dtype=np.float64)
    return BeadLadder(
        dc_resistance_ohm=np.array(0.1),
        section_resistance_ohm=5.0 + 20.0 * place,
        section_inductance_h=1e-6 / (1.0 + place) ** 2,
        series_inductance_h=np.array(series_h),
        capacitance_f=np.array(capacitance_f),
    )


def impedance_of_states(states: BeadStates, frequency_hz: float) -> complex:
    s = 2j * np.pi * frequency_hz
    inside = np.linalg.solve(s * np.diag(states.storage_au) - states.coupling_au, states.inflow_au)
    through = s * states.inductance_h + states.resistance_ohm
    return complex(through - states.outflow_au @ inside)


VARIANTS = [
    pytest.param(B1, 2, id="one section"),
    pytest.param(B4, 4, id="three sections"),
    pytest.param(ladder(3, series_h=0.0, capacitance_f=0.0), 3, id="no capacitance"),
    pytest.param(ladder(3, series_h=5e-9, capacitance_f=0.0), 3, id="series inductance"),
    pytest.param(ladder(3, series_h=5e-9, capacitance_f=0.4e-12), 5, id="both"),
]


@pytest.mark.parametrize(("bead", "count"), VARIANTS)
@pytest.mark.parametrize("frequency_hz", [1e4, 1e6, 3e7, 1e9])
def test_states_have_the_ladder_impedance(bead: BeadLadder, count: int, frequency_hz: float) -> None:
    states = bead_states(bead)
    assert states.storage_au.shape == (count,)
    expected = complex(impedance_ohm(bead, frequency_hz=frequency_hz))
    assert impedance_of_states(states, frequency_hz) == pytest.approx(expected, rel=1e-9)


@given(
    sections=st.integers(1, 6),
    series_h=st.sampled_from([0.0, 3e-9]),
    capacitance_f=st.sampled_from([0.0, 0.5e-12]),
)
@settings(deadline=None)
def test_states_only_dissipate(sections: int, series_h: float, capacitance_f: float) -> None:
    # A passive network's dissipation matrix, the symmetric part with the port in front, is never positive.
    states = bead_states(ladder(sections, series_h=series_h, capacitance_f=capacitance_f))
    size = states.storage_au.size + 1
    whole = np.zeros((size, size))
    whole[0, 0], whole[0, 1:] = -states.resistance_ohm, states.outflow_au
    whole[1:, 0], whole[1:, 1:] = states.inflow_au, states.coupling_au
    assert np.linalg.eigvalsh(whole + whole.T).max() <= 1e-12 * np.abs(whole).max()


@pytest.mark.parametrize("field", ["capacitance_f", "series_inductance_h"])
def test_corners_must_be_built_alike(field: str) -> None:
    even = ladder(2, series_h=5e-9, capacitance_f=0.4e-12)
    value = np.array([float(getattr(even, field)), 0.0])
    uneven = dataclasses.replace(
        even,
        dc_resistance_ohm=np.full(2, 0.1),
        capacitance_f=np.full(2, 0.4e-12),
        series_inductance_h=np.full(2, 5e-9),
    )
    with pytest.raises(ValueError, match=field):
        bead_states(dataclasses.replace(uneven, **{field: value}))
