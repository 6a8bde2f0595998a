from __future__ import annotations

import numpy as np
import pytest

from gatecheck.physics.bead import impedance_ohm, low_frequency_inductance_h
from gatecheck.physics.bead_interval import RATED_HZ, models_from_rated_impedance
from tests.physics.reference_cases import BEADS, CASES, case_bead, synthetic_ferrite

READ_HZ = np.array([10e6, 30e6, 100e6, 300e6])
KNOWN = {
    **{
        name: (float(low_frequency_inductance_h(bead)), impedance_ohm(bead, frequency_hz=READ_HZ))
        for name, bead in {**BEADS, **{f"case {name}": case_bead(name) for name in CASES}}.items()
    },
    "synthetic ferrite": (301 * 5e-9, synthetic_ferrite(READ_HZ)),
}


@pytest.mark.parametrize("name", KNOWN)
def test_every_known_bead_lies_within_the_models_of_its_rating(name: str) -> None:
    inductance, impedance = KNOWN[name]
    models = models_from_rated_impedance(rated_impedance_ohm=abs(impedance[2]))
    inductances = low_frequency_inductance_h(models)
    assert inductances.min() <= inductance <= inductances.max()
    for frequency_hz, true in zip(READ_HZ, impedance.real, strict=True):
        resistance = impedance_ohm(models, frequency_hz=frequency_hz).real
        assert resistance.min() <= true <= resistance.max()


def test_every_model_has_the_rated_impedance() -> None:
    rated = np.array([10.0, 60.0, 600.0])
    models = models_from_rated_impedance(rated_impedance_ohm=rated)
    sizes = np.abs(impedance_ohm(models, frequency_hz=RATED_HZ))
    assert sizes.shape == (18, 3)
    assert sizes == pytest.approx(np.broadcast_to(rated, (18, 3)), rel=1e-12)


def test_a_known_crossover_narrows_the_models() -> None:
    wide = low_frequency_inductance_h(models_from_rated_impedance(rated_impedance_ohm=60.0))
    narrow = low_frequency_inductance_h(
        models_from_rated_impedance(rated_impedance_ohm=60.0, crossover_hz=(40e6, 60e6))
    )
    assert wide.min() < narrow.min() < narrow.max() < wide.max()
