"""A passive bead ladder fitted to measured or read-off impedance.

The corner frequencies of the sections are fixed, log-spaced over the data, so that for a given parallel
capacitance the section resistances enter linearly; keeping them at or above zero makes the ladder passive
and causal by construction. The capacitance is found by a one-dimensional search around that.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import StrEnum
from typing import TYPE_CHECKING

import numpy as np

from gatecheck.physics.bead import BeadLadder, impedance_ohm
from gatecheck.physics.nonnegative import nonnegative_least_squares

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from gatecheck.physics.arrays import ComplexArray, Real, RealArray

SECTIONS_COUNT = 10  # three per decade over 1 MHz to 1 GHz reach 0.1 % on a smooth ferrite; our choice
_CAPACITANCE_F = (1e-14, 1e-11)  # 0.01 to 10 pF holds every chip bead (common practice)
_SCAN_POINTS = 13  # four per decade, then golden section; our choice
_GOLDEN_STEPS = 18  # to 2e-4 of a scan step; our choice
_REACH = 2.0  # a fit says nothing beyond a factor of two outside its data; our choice
_BELOW = 4.0  # lowest section of a fit to few points, below the lowest point; our choice
_LEAST_SHARE = 1e-9  # sections below this part of the whole are dropped; our choice
_SPREAD = 1e-3  # pull towards small even sections where few points leave them open; our choice
_NEWTON_ROUNDS = 60  # Gauss-Newton steps for read-off points; our choice
_HALVINGS = 8
_DONE = 1e-10  # relative gain of a round that ends the search; our choice


class ImpedancePart(StrEnum):
    """Which number of Z was read off."""

    RESISTANCE = "resistance"
    REACTANCE = "reactance"
    MAGNITUDE = "magnitude"


@dataclass(frozen=True, slots=True, kw_only=True)
class BeadFit:
    """A fitted bead and how far to trust it.

    `error_ratio` is the relative error at each point of `frequency_hz`; `lowest_hz` to `highest_hz` is
    where the fit may be used.
    """

    bead: BeadLadder
    frequency_hz: RealArray
    error_ratio: RealArray
    lowest_hz: float
    highest_hz: float

    @property
    def worst_error_ratio(self) -> float:
        """Largest relative error over the points."""
        return float(self.error_ratio.max())

    @property
    def rms_error_ratio(self) -> float:
        """Root mean square of the relative errors."""
        return float(np.sqrt(np.mean(self.error_ratio**2)))


def fitted_impedance_ohm(fit: BeadFit, *, frequency_hz: Real) -> ComplexArray:
    """Impedance of a fitted bead where the fit may be used.

    Source: `bead.impedance_ohm`.
    Valid: up to a factor of two beyond the points on either side; outside, nan.

    Args:
        fit: the fit, of a bead without corner axes.
        frequency_hz: frequencies, any shape.

    Returns:
        Ohms.
    """
    frequency = np.asarray(frequency_hz, dtype=np.float64)
    inside = (frequency >= fit.lowest_hz) & (frequency <= fit.highest_hz)
    return np.where(inside, impedance_ohm(fit.bead, frequency_hz=frequency), complex(np.nan, np.nan))


def fit_to_impedance(
    *,
    frequency_hz: RealArray,
    measured_ohm: ComplexArray,
    dc_resistance_ohm: float,
    sections_count: int = SECTIONS_COUNT,
) -> BeadFit:
    """Ladder fitted to complex impedance, as from network analyser data.

    Source: Foster form with fixed corners by non-negative least squares, rows weighted by 1 / |Z'|, where
        Z' is the impedance with R_dc and C taken off (own formulation).
    Valid: at least as many points as sections, spread over their span.

    Args:
        frequency_hz: points, shape (n,), rising.
        measured_ohm: impedance there, shape (n,).
        dc_resistance_ohm: R_dc.
        sections_count: corner frequencies over the span.

    Returns:
        The fit; its error is relative to |Z|.
    """
    basis, corners = _basis(frequency_hz, sections_count, lowest_hz=float(frequency_hz.min()))
    susceptance_per_f: ComplexArray = 2j * math.pi * frequency_hz.astype(np.complex128)

    def solve(capacitance_f: float) -> tuple[float, RealArray]:
        string = 1.0 / (1.0 / (measured_ohm - dc_resistance_ohm) - susceptance_per_f * capacitance_f)
        weight = 1.0 / np.abs(string)
        rows = basis * weight[:, None]
        coefficients = nonnegative_least_squares(
            columns_au=np.concatenate([rows.real, rows.imag]),
            target_au=np.concatenate([(string * weight).real, (string * weight).imag]),
        )
        model = _impedance(basis @ coefficients, susceptance_per_f * capacitance_f, dc_resistance_ohm)
        return float(np.sum(np.abs(model / measured_ohm - 1.0) ** 2)), coefficients

    capacitance_f, coefficients = _best_capacitance(solve)
    bead = _ladder(coefficients, corners, capacitance_f, dc_resistance_ohm)
    error = np.abs(impedance_ohm(bead, frequency_hz=frequency_hz) / measured_ohm - 1.0)
    return _fit(bead, frequency_hz, error)


def fit_to_points(
    *,
    frequency_hz: RealArray,
    value_ohm: RealArray,
    parts: tuple[ImpedancePart, ...],
    dc_resistance_ohm: float,
) -> BeadFit:
    """Ladder fitted to a few points of R, X or |Z| read off a data sheet's curves.

    Source: Gauss-Newton over non-negative section resistances, errors relative to each value.
    Valid: three points or more; |Z| alone fixes R and X only as far as a passive ladder must follow it.

    Args:
        frequency_hz: points, shape (n,), in any order, a frequency may come several times.
        value_ohm: what was read there, shape (n,).
        parts: which number it is, n of them.
        dc_resistance_ohm: R_dc.

    Returns:
        The fit; its error is relative to the value read.
    """
    kinds = np.array(parts)
    # Few points start high on the curve, so sections below them may have to carry part of the resistance.
    # From |Z| alone that cannot be told from inductance, and the bead is taken as inductive there.
    below = 1.0 if np.all(kinds == ImpedancePart.MAGNITUDE) else _BELOW
    basis, corners = _basis(frequency_hz, SECTIONS_COUNT, lowest_hz=float(frequency_hz.min()) / below)
    susceptance_per_f: ComplexArray = 2j * math.pi * frequency_hz.astype(np.complex128)
    peak = float(np.abs(value_ohm).max())

    def solve(capacitance_f: float) -> tuple[float, RealArray]:
        model = _PointModel(basis, susceptance_per_f * capacitance_f, dc_resistance_ohm, kinds, value_ohm)
        return model.fitted(np.full(basis.shape[1], peak / basis.shape[1]), _SPREAD / peak)

    capacitance_f, coefficients = _best_capacitance(solve)
    bead = _ladder(coefficients, corners, capacitance_f, dc_resistance_ohm)
    read = _read(impedance_ohm(bead, frequency_hz=frequency_hz), kinds)
    return _fit(bead, frequency_hz, np.abs(read / value_ohm - 1.0))


class _PointModel:
    """Predicted readings at one capacitance, linearised again and again."""

    def __init__(
        self,
        basis: ComplexArray,
        susceptance: ComplexArray,
        dc_resistance_ohm: float,
        kinds: NDArray[np.str_],
        value_ohm: RealArray,
    ) -> None:
        self._basis, self._susceptance, self._dc_ohm = basis, susceptance, dc_resistance_ohm
        self._kinds, self._value_ohm = kinds, value_ohm

    def fitted(self, coefficients: RealArray, spread: float) -> tuple[float, RealArray]:
        """Cost and section resistances of the best non-negative fit."""
        cost = self._cost(coefficients, spread)
        for _ in range(_NEWTON_ROUNDS):
            rows, predicted = self._linearised(coefficients)
            target = (self._value_ohm - predicted) / self._value_ohm + rows @ coefficients
            wanted = nonnegative_least_squares(
                columns_au=np.concatenate([rows, spread * np.eye(coefficients.size)]),
                target_au=np.concatenate([target, np.zeros(coefficients.size)]),
            )
            step = 1.0
            for _ in range(_HALVINGS):
                trial = coefficients + step * (wanted - coefficients)
                trial_cost = self._cost(trial, spread)
                if trial_cost < cost:
                    break
                step *= 0.5
            if trial_cost >= cost * (1.0 - _DONE):
                break
            coefficients, cost = trial, trial_cost
        return cost, coefficients

    def _linearised(self, coefficients: RealArray) -> tuple[RealArray, RealArray]:
        string = self._basis @ coefficients
        impedance = _impedance(string, self._susceptance, self._dc_ohm)
        change = self._basis / (1.0 + self._susceptance * string)[:, None] ** 2
        along = impedance.conj() / np.abs(impedance)
        rows = np.where(
            (self._kinds == ImpedancePart.RESISTANCE)[:, None],
            change.real,
            np.where((self._kinds == ImpedancePart.REACTANCE)[:, None], change.imag, (along[:, None] * change).real),
        )
        return rows / self._value_ohm[:, None], _read(impedance, self._kinds)

    def _cost(self, coefficients: RealArray, spread: float) -> float:
        impedance = _impedance(self._basis @ coefficients, self._susceptance, self._dc_ohm)
        errors = _read(impedance, self._kinds) / self._value_ohm - 1.0
        return float(errors @ errors + (spread * coefficients) @ (spread * coefficients))


def _basis(frequency_hz: RealArray, sections_count: int, *, lowest_hz: float) -> tuple[ComplexArray, RealArray]:
    """Impedance of each section of one ohm, with a pure inductance as the last; and their corners."""
    corners = np.geomspace(lowest_hz, frequency_hz.max(), sections_count)
    turned = 1j * frequency_hz[:, None] / corners
    inductance = 1j * frequency_hz[:, None] / corners[-1]
    return np.concatenate([turned / (1.0 + turned), inductance], axis=1), corners


def _impedance(string: ComplexArray, susceptance: ComplexArray, dc_resistance_ohm: float) -> ComplexArray:
    return np.asarray(dc_resistance_ohm + string / (1.0 + susceptance * string))


def _read(impedance: ComplexArray, kinds: NDArray[np.str_]) -> RealArray:
    return np.where(
        kinds == ImpedancePart.RESISTANCE,
        impedance.real,
        np.where(kinds == ImpedancePart.REACTANCE, impedance.imag, np.abs(impedance)),
    )


def _best_capacitance(solve: Callable[[float], tuple[float, RealArray]]) -> tuple[float, RealArray]:
    """Scan, then golden section in log C; returns the best capacitance met and its coefficients."""
    low, high = (math.log(bound) for bound in _CAPACITANCE_F)
    grid = np.linspace(low, high, _SCAN_POINTS)
    met = {place: solve(math.exp(place)) for place in grid.tolist()}
    middle = min(met, key=lambda place: met[place][0])
    left, right = max(low, middle - (grid[1] - grid[0])), min(high, middle + (grid[1] - grid[0]))
    share = (math.sqrt(5.0) - 1.0) / 2.0
    inner, outer = right - share * (right - left), left + share * (right - left)
    for place in (inner, outer):
        met[place] = solve(math.exp(place))
    for _ in range(_GOLDEN_STEPS):
        if met[inner][0] <= met[outer][0]:
            right, outer, inner = outer, inner, outer - share * (outer - left)
            met[inner] = solve(math.exp(inner))
        else:
            left, inner, outer = inner, outer, inner + share * (right - inner)
            met[outer] = solve(math.exp(outer))
    best = min(met, key=lambda place: met[place][0])
    return math.exp(best), met[best][1]


def _ladder(coefficients: RealArray, corners: RealArray, capacitance_f: float, dc_resistance_ohm: float) -> BeadLadder:
    sections, inductive = coefficients[:-1], float(coefficients[-1])
    kept = sections > _LEAST_SHARE * coefficients.sum()
    omega = 2.0 * math.pi * corners
    return BeadLadder(
        dc_resistance_ohm=np.asarray(dc_resistance_ohm),
        section_resistance_ohm=sections[kept],
        section_inductance_h=(sections / omega)[kept],
        series_inductance_h=np.asarray(inductive / omega[-1]),
        capacitance_f=np.asarray(capacitance_f),
    )


def _fit(bead: BeadLadder, frequency_hz: RealArray, error_ratio: RealArray) -> BeadFit:
    return BeadFit(
        bead=bead,
        frequency_hz=frequency_hz,
        error_ratio=error_ratio,
        lowest_hz=float(frequency_hz.min()) / _REACH,
        highest_hz=float(frequency_hz.max()) * _REACH,
    )
