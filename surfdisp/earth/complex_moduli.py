"""Velocities and moduli of a lossy earth: complex, causal, of constant Q."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..core import InputError, LayeredEarth
from ..core.checks import FloatArray, all_positive, float_array, positive

ComplexArray = NDArray[np.complex128]


class Loss(NamedTuple):
    """Inverse quality factors of shear and compression, (n_layers,), at a reference frequency [rad/s]."""

    shear: FloatArray
    compression: FloatArray
    reference: float


class ComplexModuli(NamedTuple):
    """Squared velocities [(m/s)^2] and shear moduli [Pa], each (n_omega, n_layers)."""

    vp2: ComplexArray
    vs2: ComplexArray
    mu: ComplexArray


def loss_of(
    earth: LayeredEarth, qs: float | ArrayLike, qp: float | ArrayLike, reference_frequency: float
) -> Loss:
    """Return the checked loss of `earth`; a quality factor is one number, or one per layer.

    Raises
    ------
    InputError
        If a quality factor is not positive (infinite: no loss), or there are not as many as layers.
    """
    reference = 2.0 * np.pi * positive(reference_frequency, "reference_frequency")
    return Loss(_inverse(qs, "qs", len(earth.vs)), _inverse(qp, "qp", len(earth.vs)), reference)


def complex_moduli(earth: LayeredEarth, loss: Loss, omega: ComplexArray) -> ComplexModuli:
    """Return rho v^2 (1 + i/Q) (omega/reference)^(2 atan(1/Q)/pi) at each angular frequency.

    Q is the same at all frequencies, and no wave outruns its front (Kjartansson 1979); at the reference
    frequency the modulus is rho v^2 (1 + i/Q).
    """
    vs2 = earth.vs**2 * _factor(loss.shear, omega, loss.reference)
    vp2 = earth.vp**2 * _factor(loss.compression, omega, loss.reference)
    return ComplexModuli(vp2, vs2, earth.density * vs2)


def _inverse(quality: float | ArrayLike, name: str, layers: int) -> FloatArray:
    per_layer = float_array(np.full(layers, quality) if np.ndim(quality) == 0 else quality, name)
    all_positive(per_layer, name)
    if len(per_layer) != layers:
        raise InputError(f"{name} must be one number or one per layer ({layers}); got {len(per_layer)}")
    return np.asarray(1.0 / per_layer)


def _factor(inverse_quality: FloatArray, omega: ComplexArray, reference: float) -> ComplexArray:
    power = 2.0 / np.pi * np.arctan(inverse_quality)
    return np.asarray((1.0 + 1j * inverse_quality) * (omega[:, np.newaxis] / reference) ** power)
