"""Frequency and damping of a ring in a sampled waveform, with standard errors.

Model: y = A exp(-alpha t) cos(omega t + phi) + c, white noise. The matrix pencil on a decimated record gives
start values without a guess; least squares on the whole record then reaches the least scatter that any
unbiased method can have. Peak picking is biased by several percent and is not used.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from gatecheck.physics.arrays import Real, RealArray

_SAMPLES_PER_PERIOD = 12.0  # of the decimated record; our choice
_LEAST_SAMPLES = 24  # of the decimated record, to hold the pencil; our choice
_PENCIL_SHARE = 0.4  # pencil length in parts of the record, near the optimum of 1/3 to 1/2 (Hua and Sarkar)
_RING_ORDER, _TAIL_ORDER = 3, 5  # a pair and an offset; two more real modes for a settling tail
_ROUNDS = 60  # of the least squares; our choice
_FIRST_DAMPING, _RELAX, _TIGHTEN = 1e-3, 0.3, 10.0  # Levenberg-Marquardt control; our choice
_MOST_DECAY = 300.0  # nepers over the record; its square still fits a double
_LEAST_COLUMN = 1e-150  # of the Jacobian, where a parameter has lost all effect
_MOST_CONDITION = 1e6  # of the scaled Jacobian, beyond which its square is rounding; our choice
_DONE = 1e-14  # relative gain of a round that ends the search; our choice


@dataclass(frozen=True, slots=True, kw_only=True)
class Ring:
    """A fitted ring; standard errors follow their parameters.

    They assume independent noise: of an oversampled record, count only samples as far apart as half the
    reciprocal noise bandwidth.
    """

    amplitude_au: float
    decay_per_s: float
    ring_hz: float
    phase_rad: float
    offset_au: float
    damping_ratio: float
    ring_error_hz: float
    decay_error_per_s: float
    damping_error_ratio: float
    noise_au: float


class NoRingError(ArithmeticError):
    """The record holds no decaying oscillation that could be fitted."""


def fit_ring(*, sample_au: RealArray, step_s: float, has_tail: bool = False) -> Ring:
    """Fit one decaying oscillation to a record that starts after the edge, best a period later.

    Source: matrix pencil of Hua and Sarkar, IEEE Trans. ASSP 38(5) (1990) p. 814 (from memory), then
        Levenberg-Marquardt with analytic derivatives; errors from the inverse of J^T J / sigma^2.
    Valid: one dominant ring, two periods or more in the record, sampled at least six times per period. Probe
        loading, bandwidth and slow modes shift the answer by more than the standard errors.

    Args:
        sample_au: equidistant samples, shape (n,).
        step_s: sampling interval.
        has_tail: a settling tail is visible; two more modes then take it up in the start values.

    Returns:
        The ring, its phase at the first sample.

    Raises:
        NoRingError: no oscillation found, or the fit left the record.
    """
    values = np.asarray(sample_au, dtype=np.float64)
    centre = float(values.mean())
    scale = float(np.abs(values - centre).max())
    if values.size < _LEAST_SAMPLES or not scale > 0.0:
        raise NoRingError("too few samples, or all alike")
    normal = (values - centre) / scale
    order = _TAIL_ORDER if has_tail else _RING_ORDER
    factor = _decimation(normal)
    pole = _pencil_pole(_boxcar(normal, factor), order) / factor
    parameters = _started(normal, pole)
    ring = _ring(*_refined(normal, parameters), step_s=step_s)
    return replace(
        ring,
        amplitude_au=ring.amplitude_au * scale,
        offset_au=ring.offset_au * scale + centre,
        noise_au=ring.noise_au * scale,
    )


def decay_error_bound_per_s(*, noise_ratio: Real, decay_per_s: Real, step_s: Real) -> RealArray:
    """Least standard error of decay rate and angular frequency, 4 (sigma / A) alpha^1.5 sqrt(dt).

    Source: Cramer-Rao bound for white noise, own closed form, checked against the numeric Fisher matrix.
    Valid: record of three decay times or more, frequency well above the decay rate; 0 to 2.5 % low.

    Args:
        noise_ratio: sigma / A, noise per sample in parts of the amplitude at the start.
        decay_per_s: alpha.
        step_s: sampling interval.

    Returns:
        Nepers, or radians, per second.
    """
    rate = np.asarray(decay_per_s, dtype=np.float64)
    return np.asarray(4.0 * np.asarray(noise_ratio) * rate**1.5 * np.sqrt(step_s))


def _decimation(values: RealArray) -> int:
    """Samples to average so that the strongest line has about twelve left per period."""
    spectrum = np.abs(np.fft.rfft(values * np.hanning(values.size)))
    line = max(1, int(np.argmax(spectrum[1:])) + 1)
    factor = int(values.size / line / _SAMPLES_PER_PERIOD)
    return max(1, min(factor, values.size // _LEAST_SAMPLES))


def _boxcar(values: RealArray, factor: int) -> RealArray:
    whole = values.size // factor * factor
    return np.asarray(values[:whole].reshape(-1, factor).mean(axis=1))


def _pencil_pole(values: RealArray, order: int) -> complex:
    """Strongest oscillating mode as a logarithmic rate per sample (imaginary part positive)."""
    length = int(_PENCIL_SHARE * values.size)
    hankel = np.lib.stride_tricks.sliding_window_view(values, length + 1)
    _, _, right = np.linalg.svd(hankel, full_matrices=False)
    basis = right[:order].T
    modes = np.linalg.eigvals(np.linalg.lstsq(basis[:-1], basis[1:], rcond=None)[0])
    rates = np.log(modes[np.abs(modes) > 0.0].astype(np.complex128))
    rates = rates[np.abs(rates.real) * values.size < _MOST_DECAY]
    powers = np.exp(rates[None, :] * np.arange(values.size)[:, None])
    strength = np.abs(np.linalg.lstsq(powers, values.astype(np.complex128), rcond=None)[0])
    oscillating = (rates.imag > 0.0) & (rates.imag < math.pi)
    if not oscillating.any():
        raise NoRingError("no oscillation in the record")
    return complex(rates[np.argmax(np.where(oscillating, strength, -1.0))])


def _started(values: RealArray, pole: complex) -> RealArray:
    """Parameters (A, alpha, omega, phi, c) per sample from a pole, the linear ones by least squares."""
    place = np.arange(values.size)
    ring = np.exp(pole * place)
    columns = np.stack([ring.real, -ring.imag, np.ones(values.size)], axis=1)
    cosine, sine, offset = np.linalg.lstsq(columns, values, rcond=None)[0]
    return np.array([math.hypot(cosine, sine), -pole.real, pole.imag, math.atan2(sine, cosine), offset])


def _model(values: RealArray, parameters: RealArray) -> tuple[RealArray, RealArray]:
    """Residual and Jacobian of the model at the parameters."""
    amplitude, decay, omega, phase, offset = parameters
    place = np.arange(values.size)
    envelope = np.exp(-decay * place)
    cosine, sine = envelope * np.cos(omega * place + phase), envelope * np.sin(omega * place + phase)
    jacobian = np.stack(
        [
            cosine,
            -amplitude * place * cosine,
            -amplitude * place * sine,
            -amplitude * sine,
            np.ones(values.size),
        ],
        axis=1,
    )
    return values - amplitude * cosine - offset, jacobian


def _refined(values: RealArray, parameters: RealArray) -> tuple[RealArray, RealArray, RealArray]:
    residual, jacobian = _model(values, parameters)
    cost, damping = float(residual @ residual), _FIRST_DAMPING
    for _ in range(_ROUNDS):
        size = np.maximum(np.linalg.norm(jacobian, axis=0), _LEAST_COLUMN)
        scaled = jacobian / size
        normal = scaled.T @ scaled
        step = np.linalg.solve(normal + damping * np.eye(size.size), scaled.T @ residual) / size
        trial = parameters + step
        if abs(trial[1]) * values.size > _MOST_DECAY or not 0.0 < trial[2] < math.pi:
            damping *= _TIGHTEN
            continue
        trial_residual, trial_jacobian = _model(values, trial)
        trial_cost = float(trial_residual @ trial_residual)
        if trial_cost < cost:
            done = cost - trial_cost <= _DONE * cost
            parameters, residual, jacobian, cost = trial, trial_residual, trial_jacobian, trial_cost
            damping *= _RELAX
            if done:
                break
        elif damping > 1.0 / _DONE:
            break
        else:
            damping *= _TIGHTEN
    return parameters, residual, jacobian


def _inverse(jacobian: RealArray) -> RealArray:
    """Inverse of J^T J, refused where the record does not determine every parameter."""
    size = np.linalg.norm(jacobian, axis=0)
    if not np.all(size > 0.0) or np.linalg.cond(jacobian / size) > _MOST_CONDITION:
        raise NoRingError("the record does not determine the ring")
    inverse = np.linalg.inv((jacobian / size).T @ (jacobian / size))
    return np.asarray(inverse / (size[:, None] * size[None, :]))


def _ring(parameters: RealArray, residual: RealArray, jacobian: RealArray, *, step_s: float) -> Ring:
    amplitude, decay, omega, phase, offset = (float(value) for value in parameters)
    variance = float(residual @ residual) / max(residual.size - parameters.size, 1)
    covariance = variance * _inverse(jacobian)
    modulus = math.hypot(decay, omega)
    # d zeta / d alpha = omega^2 / |s|^3, d zeta / d omega = -alpha omega / |s|^3
    slope = np.array([omega**2, -decay * omega]) / modulus**3
    damping_variance = float(slope @ covariance[1:3, 1:3] @ slope)
    return Ring(
        amplitude_au=abs(amplitude),
        decay_per_s=decay / step_s,
        ring_hz=omega / (2.0 * math.pi * step_s),
        phase_rad=phase if amplitude >= 0.0 else phase - math.copysign(math.pi, phase),
        offset_au=offset,
        damping_ratio=decay / modulus,
        ring_error_hz=math.sqrt(covariance[2, 2]) / (2.0 * math.pi * step_s),
        decay_error_per_s=math.sqrt(covariance[1, 1]) / step_s,
        damping_error_ratio=math.sqrt(max(damping_variance, 0.0)),
        noise_au=math.sqrt(variance),
    )
