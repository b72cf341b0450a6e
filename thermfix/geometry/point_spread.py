"""Regions a few pixels wide: how much of each pixel's signal is the region's, and what the region itself sends.

A pixel sums what falls on its square after the optics have spread it (Gaussian, σ in pixels). Its
share K of a shape is therefore the shape's area convolved with the square and the Gaussian.
"""

from collections.abc import Sequence
from math import erf, pi, sqrt

import numpy as np
from numpy.typing import NDArray

from thermfix.geometry.blurred_edge import SHARP_PX, cumulative, ramp
from thermfix.geometry.outlines import cut_runs, signed_runs

Array = NDArray[np.float64]
Index = NDArray[np.intp]

LOWEST_SHARE = 0.2
"""Below this share of its own signal a pixel gives no reading."""

_REACH = 6.0
_POINTS = 8
_BLOCK = 1024


def rectangle_share(x: Array, y: Array, corners: tuple[float, float, float, float], sigma_px: float) -> Array:
    r"""Return K of an axis-parallel rectangle for pixels with these lower corners (i, j), shape kept.

    Notes
    -----
    Separable; along one axis

    .. math:: k(i) = G(i + 1 - x_0) - G(i - x_0) - G(i + 1 - x_1) + G(i - x_1), \quad
        G(u) = u\,\Phi(u/\sigma) + \sigma\,\varphi(u/\sigma)
    """
    x0, y0, x1, y1 = corners
    return _edge_pair(x, x0, x1, sigma_px) * _edge_pair(y, y0, y1, sigma_px)


def polygon_share(box: tuple[int, int, int, int], corners: Sequence[tuple[float, float]], sigma_px: float) -> Array:
    r"""Return K of a polygon (even-odd) for the pixels of a box.

    Parameters
    ----------
    box : tuple
        First column, first row, columns and rows of the box. [px].
    corners : sequence of (x, y), 3 or more
        Corners. [px].
    sigma_px : float
        Standard deviation of the point spread. [px], ≥ 0.

    Returns
    -------
    ndarray, shape (rows, columns)
        Shares, 0 to 1; within 1e-6 of the exact convolution.

    Notes
    -----
    The area integral is one along the outline, taken by a Gauss rule on short runs of it:

    .. math:: K_{ij} = \oint B_j(y)\, R_i(x)\, dy

    .. math:: B_j(y) = \Phi\left(\frac{j+1-y}\sigma\right) - \Phi\left(\frac{j-y}\sigma\right), \quad
        R_i(x) = \int_{-\infty}^x B_i(u)\, du
    """
    left, top, columns, rows = box
    reach = _REACH * sigma_px + 1
    low, high = np.array([left, top]) - reach, np.array([left + columns, top + rows]) + reach
    start, end, sign = signed_runs(corners)
    start, end, sign = cut_runs(start, end, sign, *(_lines(low[axis], high[axis], sigma_px) for axis in (0, 1)))
    # Beyond the box a run counts only by whether it lies to the left, which its end of the box tells as well.
    middle = (start + end) / 2
    near = (middle[:, 1] > low[1]) & (middle[:, 1] < high[1]) & (middle[:, 0] < high[0])
    start, end, sign = start[near], end[near], sign[near]
    share = np.zeros((rows, columns))
    for i in range(0, len(start), _BLOCK):
        part = slice(i, i + _BLOCK)
        places, weights = _gauss(start[part], end[part], sign[part])
        across = np.maximum(places[:, 0], low[0])[:, None]
        beside, below = np.arange(left, left + columns), np.arange(top, top + rows)
        right_of = ramp(beside + 1 - across, sigma_px) - ramp(beside - across, sigma_px)
        height = places[:, 1, None]
        within = cumulative(below + 1 - height, sigma_px) - cumulative(below - height, sigma_px)
        share -= (within * weights[:, None]).T @ right_of
    return np.clip(share, 0.0, 1.0)


def ellipse_corners(cx: float, cy: float, rx: float, ry: float, count: int = 180) -> list[tuple[float, float]]:
    """Return a polygon of the same area as an ellipse."""
    # The inscribed polygon is smaller by sinc; scaled up, its area is that of the ellipse.
    grow = sqrt(2 * pi / count / np.sin(2 * pi / count))
    turn = 2 * pi * np.arange(count) / count
    return [(cx + grow * rx * float(np.cos(a)), cy + grow * ry * float(np.sin(a))) for a in turn]


def ring(mask: NDArray[np.bool_], sigma_px: float) -> NDArray[np.bool_]:
    """Return the pixels from 3σ + 1 to 3σ + 4 px outside the pixels of a shape; shape (rows, columns) as ``mask``."""
    from scipy.ndimage import distance_transform_edt  # costs start-up time; small targets only

    away = distance_transform_edt(~mask)
    inner = 3 * sigma_px + 1
    return np.asarray((away >= inner) & (away <= inner + 3))


def unmix(radiance: Array, share: Array, around: float) -> Array:
    r"""Return the region's own radiance in each pixel, NaN where its share K is below 0.2.

    Notes
    -----
    .. math:: L_{region} = \frac{L - (1 - K) L_{around}}{K}
    """
    known = np.where(share >= LOWEST_SHARE, share, np.nan)
    return np.asarray((radiance - (1 - known) * around) / known)


def subpixel_radiance(excess: float, fill: float, around: float) -> float:
    r"""Return the radiance of a target below one pixel.

    Parameters
    ----------
    excess : float
        Σ (L − L_around) over the pixels it reaches. [W m⁻² sr⁻¹].
    fill : float
        Share of one pixel that it covers, see `fill_of`. [1], > 0.
    around : float
        Radiance around it. [W m⁻² sr⁻¹].

    Notes
    -----
    .. math:: L_{region} = L_{around} + \frac{\sum (L - L_{around})}{fill}
    """
    return around + excess / fill


def fill_of(area_m2: float, range_m: float, angle_deg: float, pixel_sr: float) -> float:
    r"""Return how much of a pixel a flat target of known area fills, by solid angle (inverse-square law). [1].

    Notes
    -----
    .. math:: fill = \frac{A \cos\theta}{r^2\, \Omega_{pixel}}
    """
    return area_m2 * float(np.cos(np.radians(angle_deg))) / (range_m**2 * pixel_sr)


def slit_response(width_px: float, sigma_px: float, *, pixel: bool = True) -> float:
    r"""Return the share of signal from a slit centred on a pixel: its slit response.

    With ``pixel`` the square of the pixel counts; without, the optics alone:

    .. math:: \mathrm{erf}\left(\frac{w}{2\sqrt2\,\sigma}\right)
    """
    if not pixel:
        return erf(width_px / (2 * sqrt(2) * sigma_px))
    half = width_px / 2
    return float(_edge_pair(np.array([-0.5]), -half, half, sigma_px)[0])


def _edge_pair(lower: Array, start: float, end: float, sigma: float) -> Array:
    """Return the share of unit pixels [lower, lower + 1] that lies in [start, end] after blurring."""
    return np.asarray(
        ramp(lower + 1 - start, sigma)
        - ramp(lower - start, sigma)
        - ramp(lower + 1 - end, sigma)
        + ramp(lower - end, sigma)
    )


def _lines(low: float, high: float, sigma: float) -> Array:
    """Return where to cut the outline, so that a few points on each run carry the blurred edges of the pixels."""
    if sigma < SHARP_PX:
        offsets = [0.0]
    elif sigma < 1 / 16:
        offsets = [2 * sigma * step for step in range(-4, 5)]
    else:
        pieces = int(np.ceil(1 / (2 * sigma)))
        offsets = [step / pieces for step in range(pieces)]
    grid = np.arange(np.floor(low), np.ceil(high) + 1)
    return np.unique(np.concatenate([(grid[:, None] + offsets).ravel(), [low, high]]))


def _gauss(start: Array, end: Array, sign: Array) -> tuple[Array, Array]:
    """Return places (n, 2) on runs and their signed weights in dy."""
    nodes, weights = np.polynomial.legendre.leggauss(_POINTS)
    places = start[:, None] + (nodes[:, None] + 1) / 2 * (end - start)[:, None]
    rise = (sign * (end[:, 1] - start[:, 1]))[:, None] * weights / 2
    return places.reshape(-1, 2), rise.ravel()
