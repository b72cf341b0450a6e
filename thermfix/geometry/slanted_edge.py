"""The camera's blur from a straight hot edge in a frame (slanted edge, after the practice of ISO 12233)."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from thermfix.errors import PhysicsError
from thermfix.geometry.blurred_edge import bowl, ramp

Array = NDArray[np.float64]

_HINT = "Choose a patch of 12 × 12 pixels or more with one straight edge between two even areas, tilted by 3° or more."
_LEAST = 12


@dataclass(frozen=True, slots=True, kw_only=True)
class Edge:
    """Blur found from an edge: σ and its u [px], the edge's angle to the rows [deg], the step across it, rms misfit."""

    blur_px: float
    u_blur_px: float
    angle_deg: float
    contrast: float
    misfit: float


def blur_of_edge(patch: NDArray[np.floating]) -> Edge:
    r"""Return the point spread from a patch of radiance (or, for small steps, temperature) with one straight edge.

    Parameters
    ----------
    patch : ndarray, shape (rows, columns), both ≥ 12
        Values without NaN. Any unit: only the shape of the step counts.

    Raises
    ------
    PhysicsError
        If the patch is too small or holds no straight edge that stands out of the noise.

    Notes
    -----
    The edge's line is fitted to the centroids of the gradient, row by row (or column by column). The
    values against their distance from it make one oversampled step, to which the pixel's square
    convolved with a Gaussian is fitted:

    .. math:: E(d) = a + b\,\frac{Q(d+\frac{c+s}2) - Q(d+\frac{c-s}2) - Q(d-\frac{c-s}2) + Q(d-\frac{c+s}2)}{c\,s}

    .. math:: Q(u) = \tfrac12\left[(u^2 + \sigma^2)\,\Phi(u/\sigma) + u\,\sigma\,\varphi(u/\sigma)\right]

    with c and s the sides of the square across the edge (cosine and sine of its tilt). u comes from the
    residuals' scatter.
    """
    values = np.asarray(patch, dtype=np.float64)
    if values.ndim != 2 or min(values.shape) < _LEAST or not np.isfinite(values).all():
        raise PhysicsError(f"The patch for the blur must have {_LEAST} × {_LEAST} numbers or more.", hint=_HINT)
    across_x, across_y = (float(np.abs(np.diff(values, axis=axis).mean(axis=axis)).mean()) for axis in (1, 0))
    turned = across_y > across_x
    upright = values.T if turned else values
    slope, offset = _line(upright)
    rows, columns = np.indices(upright.shape) + 0.5
    distance = (columns - offset - slope * rows) / np.hypot(1, slope)
    sides = 1 / float(np.hypot(1, slope)), abs(slope) / float(np.hypot(1, slope))
    _level, step, sigma, u_sigma, misfit = _fitted(distance.ravel(), upright.ravel(), sides)
    if not (misfit < 0.1 * abs(step)) or not (u_sigma < 0.5) or sigma <= 0:
        raise PhysicsError("No straight edge stands out in the patch.", hint=_HINT)
    angle = float(np.degrees(np.arctan(slope)))
    return Edge(
        blur_px=sigma,
        u_blur_px=u_sigma,
        angle_deg=angle if turned else 90 - angle,
        contrast=abs(step),
        misfit=misfit,
    )


def _line(values: Array) -> tuple[float, float]:
    """Return slope and offset of the edge's column as a line in the row; the outliers of noise weigh less."""
    gradient = np.abs(np.diff(values, axis=1))
    gradient = np.where(gradient > 0.25 * gradient.max(axis=1, keepdims=True), gradient, 0.0)
    if not (gradient.sum(axis=1) > 0).all():
        raise PhysicsError("No straight edge stands out in the patch.", hint=_HINT)
    places = np.arange(1, values.shape[1], dtype=np.float64)
    centre = (gradient * places).sum(axis=1) / gradient.sum(axis=1)
    rows = np.arange(values.shape[0]) + 0.5
    keep = np.ones(rows.size, dtype=bool)
    for _ in range(3):
        slope, offset = np.polyfit(rows[keep], centre[keep], 1)
        away = np.abs(centre - offset - slope * rows)
        keep = away <= max(3 * float(np.median(away[keep])), 0.3)
        if keep.sum() < 6:
            raise PhysicsError("No straight edge stands out in the patch.", hint=_HINT)
    return float(slope), float(offset)


def _step(distance: Array, sigma: float, sides: tuple[float, float]) -> Array:
    """Return the unit step after the Gaussian and the pixel's square, whose sides lie c and s across the edge."""
    c, s = sides
    if s < 1e-3:
        return (ramp(distance + c / 2, sigma) - ramp(distance - c / 2, sigma)) / c
    outer = bowl(distance + (c + s) / 2, sigma) + bowl(distance - (c + s) / 2, sigma)
    inner = bowl(distance + (c - s) / 2, sigma) + bowl(distance - (c - s) / 2, sigma)
    return (outer - inner) / (c * s)


def _fitted(distance: Array, values: Array, sides: tuple[float, float]) -> tuple[float, float, float, float, float]:
    """Gauss–Newton for level, step, σ and a shift of the line. Returns level, step, σ, u(σ), rms misfit."""
    low, high = values[distance < np.quantile(distance, 0.2)], values[distance > np.quantile(distance, 0.8)]
    parameters = np.array([np.median(low), np.median(high) - np.median(low), 0.7, 0.0])
    for _ in range(80):
        jacobian, residual = _linearised(parameters, distance, values, sides)
        step = np.linalg.lstsq(jacobian, residual, rcond=None)[0]
        limit = np.array([np.inf, np.inf, 0.3, 0.5])
        parameters = parameters + np.clip(step, -limit, limit)
        parameters[2] = max(parameters[2], 0.02)
        if np.abs(step[2:]).max() < 1e-9:
            break
    jacobian, residual = _linearised(parameters, distance, values, sides)
    freedom = max(values.size - 4, 1)
    variance = float(residual @ residual) / freedom
    covariance = np.linalg.pinv(jacobian.T @ jacobian) * variance
    return (
        float(parameters[0]),
        float(parameters[1]),
        float(parameters[2]),
        float(np.sqrt(covariance[2, 2])),
        float(np.sqrt(variance)),
    )


def _linearised(parameters: Array, distance: Array, values: Array, sides: tuple[float, float]) -> tuple[Array, Array]:
    level, step, sigma, shift = parameters
    place = distance - shift
    shape = _step(place, sigma, sides)
    by_sigma = (_step(place, sigma + 1e-5, sides) - _step(place, sigma - 1e-5, sides)) / 2e-5
    by_shift = -(_step(place + 1e-5, sigma, sides) - _step(place - 1e-5, sigma, sides)) / 2e-5
    jacobian = np.stack([np.ones(place.shape), shape, step * by_sigma, step * by_shift], axis=1)
    return jacobian, values - level - step * shape
