"""Bead models from the one number on the schematic, |Z| at 100 MHz: not a model but a set of them.

Two beads of the same |Z| differ by an order of magnitude in inductance. What is unknown, crossover and
self-resonance, is spread over the range met in practice; every model of the set has exactly the given |Z|
at 100 MHz. Run each and take the extremes.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from gatecheck.physics.bead import BeadLadder, parallel_bead

if TYPE_CHECKING:
    from gatecheck.physics.arrays import Real

RATED_HZ = 100e6  # where data sheets and schematics state |Z| of a bead (common practice)
# General purpose beads cross at 8 to 30 MHz, small and "high speed" ones at 40 to 150 MHz (from memory).
CROSSOVER_HZ = (8e6, 150e6)
RESONANCE_HZ = (150e6, 1000e6)  # self-resonance of chip beads (from memory)
TOLERANCE_RATIO = 0.25  # usual spread of |Z| at 100 MHz (from memory)
_LEAST_RESONANCE_RATIO = 2.0  # self-resonance lies at least this far above the crossover; our choice
_CROSSOVERS_COUNT, _RESONANCES_COUNT = 6, 3  # 18 models: extremes and what lies between; our choice


def models_from_rated_impedance(
    *,
    rated_impedance_ohm: Real,
    dc_resistance_ohm: Real = 0.0,
    crossover_hz: tuple[float, float] = CROSSOVER_HZ,
    resonance_hz: tuple[float, float] = RESONANCE_HZ,
) -> BeadLadder:
    """A set of one-section beads that spans what a rated impedance leaves open.

    With R_p L C parallel, crossover f_x and resonance f_r fix L and C for each R_p; R_p follows from |Z|.

    Source: common equivalent circuit; ranges of crossover and resonance from memory, common practice.
    Valid: NiZn chip beads; a wire-wound inductor or a core round a wire lies outside. R_dc is neglected in
        |Z|.

    Args:
        rated_impedance_ohm: |Z| at 100 MHz, shape (...).
        dc_resistance_ohm: R_dc, shape (...).
        crossover_hz: lowest and highest f_x.
        resonance_hz: lowest and highest f_r.

    Returns:
        The models along a new first axis, corners (m, ...).
    """
    rated = np.asarray(rated_impedance_ohm, dtype=np.float64)
    along = (-1, *(1 for _ in rated.shape))
    crossovers = np.geomspace(*crossover_hz, _CROSSOVERS_COUNT)
    lowest = np.maximum(resonance_hz[0], _LEAST_RESONANCE_RATIO * crossovers)
    highest = np.maximum(resonance_hz[1], lowest)
    resonances = np.geomspace(lowest, highest, _RESONANCES_COUNT).reshape(along)
    crossing = np.tile(crossovers, _RESONANCES_COUNT).reshape(along)
    # Reactance over resistance of the parallel circuit at the rated frequency, 1 at the crossover.
    at_crossover, at_rated = 1.0 - (crossing / resonances) ** 2, 1.0 - (RATED_HZ / resonances) ** 2
    turn = crossing / RATED_HZ * at_rated / at_crossover
    parallel = rated * np.sqrt(1.0 + turn**2)
    inductance = parallel * at_crossover / (2.0 * math.pi * crossing)
    return parallel_bead(
        dc_resistance_ohm=dc_resistance_ohm,
        parallel_resistance_ohm=parallel,
        inductance_h=inductance,
        capacitance_f=1.0 / ((2.0 * math.pi * resonances) ** 2 * inductance),
    )
