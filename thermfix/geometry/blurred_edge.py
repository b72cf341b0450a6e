"""Integrals of the Gaussian that spreads an edge: its cumulative, their integral, and the integral of that."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]

SHARP_PX = 1e-6
"""Below this standard deviation the optics count as perfect. [px]."""


def cumulative(u: ArrayLike, sigma: float) -> Array:
    """Return Φ(u/σ), the step after blurring; a sharp step (½ at 0) for a perfect lens."""
    values = np.asarray(u, dtype=np.float64)
    if sigma < SHARP_PX:
        return np.heaviside(values, 0.5)
    return _normal(values / sigma)


def ramp(u: ArrayLike, sigma: float) -> Array:
    """Return ∫ Φ(u/σ) du = u Φ(u/σ) + σ φ(u/σ); max(u, 0) for a perfect lens."""
    values = np.asarray(u, dtype=np.float64)
    if sigma < SHARP_PX:
        return np.maximum(values, 0.0)
    z = values / sigma
    return np.asarray(values * _normal(z) + sigma * _density(z))


def bowl(u: ArrayLike, sigma: float) -> Array:
    """Return ∫∫ Φ(u/σ) du du = ½ [(u² + σ²) Φ(u/σ) + u σ φ(u/σ)]; σ > 0."""
    values = np.asarray(u, dtype=np.float64)
    z = values / sigma
    return np.asarray(((values**2 + sigma**2) * _normal(z) + values * sigma * _density(z)) / 2)


def _normal(z: Array) -> Array:
    from scipy.special import ndtr  # costs start-up time; small targets and calibration only

    return np.asarray(ndtr(z))


def _density(z: Array) -> Array:
    return np.asarray(np.exp(-(z**2) / 2) / np.sqrt(2 * np.pi))
