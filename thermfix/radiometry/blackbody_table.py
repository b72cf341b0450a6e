"""Counts to in-band radiance through a table of blackbody shots, by a monotone cubic."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError

Array = NDArray[np.float64]


def radiance_from_counts(counts: ArrayLike, table_counts: ArrayLike, table_radiance: ArrayLike) -> Array:
    r"""Return the in-band radiance that belongs to counts.

    Parameters
    ----------
    counts : array_like, shape (...)
        Counts to convert.
    table_counts, table_radiance : array_like, shape (n,), n ≥ 2
        Counts and in-band radiance of the shots, in any order. Radiance must rise with counts.

    Returns
    -------
    ndarray, shape (...)
        Radiance, in the table's unit; NaN outside the table's counts. It never leaves the range of
        the two shots around it.

    Raises
    ------
    InputError
        If the table has fewer than 2 shots, columns of unequal length, a value that is not finite,
        a repeated count, or a radiance that does not rise with the counts.

    Notes
    -----
    Piecewise cubic Hermite. Inner slopes are the weighted harmonic mean of the secants, which keeps
    the curve monotone; end slopes are the three-point ones, limited. Two shots give a straight line.

    References
    ----------
    .. [1] F. N. Fritsch and J. Butland, "A method for constructing local monotone piecewise cubic interpolants",
       SIAM J. Sci. Stat. Comput. 5, 300 (1984).

    Examples
    --------
    >>> radiance_from_counts([1500, 2000, 2500], [1000, 2000, 4000], [10.0, 20.0, 50.0]).round(3)
    array([14.574, 20.   , 26.27 ])
    """
    x, y = _checked(table_counts, table_radiance)
    slopes = _slopes(x, y)
    at = np.asarray(counts, dtype=np.float64)
    left = np.clip(np.searchsorted(x, at, side="right") - 1, 0, x.size - 2)
    width = np.diff(x)
    secant = np.diff(y) / width
    # Coefficients per piece first: the frame then costs three multiplications a pixel.
    third = (slopes[:-1] + slopes[1:] - 2 * secant) / width**2
    second = (3 * secant - 2 * slopes[:-1] - slopes[1:]) / width
    step = at - x[left]
    value = y[left] + step * (slopes[left] + step * (second[left] + step * third[left]))
    return np.where((at >= x[0]) & (at <= x[-1]), value, np.nan)


def _checked(table_counts: ArrayLike, table_radiance: ArrayLike) -> tuple[Array, Array]:
    x, y = np.asarray(table_counts, dtype=np.float64), np.asarray(table_radiance, dtype=np.float64)
    if x.ndim != 1 or x.shape != y.shape or x.size < 2:
        raise InputError(
            f"A blackbody table has {x.size} counts and {y.size} radiances; it needs as many of both, at least 2.",
            hint="Add shots of a blackbody at other temperatures.",
        )
    if not (np.isfinite(x).all() and np.isfinite(y).all()):
        raise InputError("A blackbody table holds a value that is not a finite number.", hint="Remove that shot.")
    order = np.argsort(x)
    x, y = x[order], y[order]
    wrong = np.flatnonzero((np.diff(x) <= 0) | (np.diff(y) <= 0))
    if wrong.size:
        i = int(wrong[0])
        raise InputError(
            f"A blackbody table does not rise between {x[i]:g} and {x[i + 1]:g} counts: "
            "each hotter shot must have more counts.",
            hint="Remove the shot that is out of order, or average repeated shots.",
        )
    return x, y


def _slopes(x: Array, y: Array) -> Array:
    width = np.diff(x)
    secant = np.diff(y) / width
    if x.size == 2:
        return np.repeat(secant, 2)
    before, after = width[1:] + 2 * width[:-1], 2 * width[1:] + width[:-1]
    inner = (before + after) / (after / secant[:-1] + before / secant[1:])
    return np.concatenate(
        ([_end(width[0], width[1], secant[0], secant[1])], inner, [_end(width[-1], width[-2], secant[-1], secant[-2])])
    )


def _end(width: float, next_width: float, secant: float, next_secant: float) -> float:
    """Return the three-point slope at an end, kept within what stays monotone (all secants rise)."""
    slope = ((2 * width + next_width) * secant - width * next_secant) / (width + next_width)
    return max(slope, 0.0)
