"""Distributions an input may have: standard uncertainty from half-width, distribution function and quantiles."""

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from types import MappingProxyType

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError
from thermfix.uncertainty.propagation import checked_u

Array = NDArray[np.float64]

_ROOT2, _ROOT3, _ROOT6 = math.sqrt(2.0), math.sqrt(3.0), math.sqrt(6.0)


@dataclass(frozen=True, slots=True)
class Shape:
    """A symmetric distribution of mean 0 and standard deviation 1.

    ``half_width`` is where it ends (infinite for the normal); ``share_below`` its distribution
    function and ``quantile`` the inverse of that, arrays in and out.
    """

    half_width: float
    share_below: Callable[[Array], Array]
    quantile: Callable[[Array], Array]


def standard_u(half_width: ArrayLike, distribution: str, *, k: float = 2.0) -> Array:
    r"""Return the standard uncertainty of a quantity known by limits ±half_width.

    Parameters
    ----------
    half_width : array_like, shape (...)
        Half of the distance between the limits. [any unit], ≥ 0.
    distribution : str
        ``rectangular``, ``triangular``, ``u-shaped`` or ``normal``.
    k : float
        Coverage factor that the limits of a normal distribution stand for, > 0. Others ignore it.

    Returns
    -------
    ndarray, shape (...)
        Half-width / √3, / √6, / √2 or / k. [same unit].

    Raises
    ------
    InputError
        If the distribution is unknown or k is not positive.
    OutOfRange
        If a half-width is negative or not finite.

    References
    ----------
    .. [1] JCGM 100:2008, eqs. (7) and (9b), 4.3.3; JCGM 101:2008, Table 1 (u-shaped: the arc sine distribution).

    Examples
    --------
    >>> standard_u(2.0, "rectangular").round(6).item()
    1.154701
    """
    limits = checked_u(half_width)
    divisor = shape_of(distribution).half_width
    if np.isinf(divisor):
        divisor = k
    if not 0 < divisor < np.inf:
        raise InputError(f"The coverage factor is {k:g}; it must be positive.")
    return limits / divisor


def shape_of(distribution: str) -> Shape:
    """Return the shape of that name, or raise ``InputError`` with the names there are."""
    if distribution not in SHAPES:
        raise InputError(f"The distribution is called {distribution!r}; it must be one of {', '.join(SHAPES)}.")
    return SHAPES[distribution]


def _normal_below(x: Array) -> Array:
    from scipy.special import ndtr  # late: scipy is slow to load and only bounded normals need it

    return np.asarray(ndtr(x), dtype=np.float64)


def _normal_quantile(p: Array) -> Array:
    from scipy.special import ndtri  # late, as above

    return np.asarray(ndtri(p), dtype=np.float64)


def _rectangular_below(x: Array) -> Array:
    return np.clip((x / _ROOT3 + 1) / 2, 0.0, 1.0)


def _rectangular_quantile(p: Array) -> Array:
    return _ROOT3 * (2 * p - 1)


def _triangular_below(x: Array) -> Array:
    inside = np.clip(x / _ROOT6, -1.0, 1.0)
    tail: Array = (1 - np.abs(inside)) ** 2 / 2
    return np.where(inside < 0, tail, 1 - tail)


def _triangular_quantile(p: Array) -> Array:
    tail = np.sqrt(2 * np.minimum(p, 1 - p))
    scaled: Array = _ROOT6 * np.where(p < 0.5, tail - 1, 1 - tail)
    return scaled


def _arcsine_below(x: Array) -> Array:
    return np.arccos(-np.clip(x / _ROOT2, -1.0, 1.0)) / np.pi


def _arcsine_quantile(p: Array) -> Array:
    return -_ROOT2 * np.cos(np.pi * p)


SHAPES: Mapping[str, Shape] = MappingProxyType(
    {
        "normal": Shape(float("inf"), _normal_below, _normal_quantile),
        "rectangular": Shape(_ROOT3, _rectangular_below, _rectangular_quantile),
        "triangular": Shape(_ROOT6, _triangular_below, _triangular_quantile),
        "u-shaped": Shape(_ROOT2, _arcsine_below, _arcsine_quantile),
    }
)
"""All distributions by name."""
