"""First-order propagation of uncertainty: sensitivities and covariances in, standard uncertainties out."""

from collections.abc import Mapping, Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

from thermfix.errors import InputError, OutOfRange

Array = NDArray[np.float64]

_ROUNDING = 1e-9


def combine(sensitivities: ArrayLike, u: ArrayLike, correlation: ArrayLike | None = None) -> Array:
    r"""Return the combined standard uncertainty of one output.

    Parameters
    ----------
    sensitivities : array_like, shape (..., n)
        Partial derivatives of the output with respect to its n inputs. [output unit / input unit].
    u : array_like, shape (n,) or (..., n)
        Standard uncertainties of the inputs. [input units], ≥ 0.
    correlation : array_like, shape (n, n), optional
        Correlation coefficients of the inputs; independent if left out.

    Returns
    -------
    ndarray, shape (...)
        Standard uncertainty. [output unit]; NaN where a sensitivity is NaN.

    Raises
    ------
    InputError
        If the shapes do not fit or ``correlation`` is no correlation matrix.
    OutOfRange
        If any u is negative or not finite.

    Notes
    -----
    .. math:: u_c^2 = \sum_i \sum_j c_i u_i\, r_{ij}\, c_j u_j

    All inputs are those of *one* output. The mean of many pixels is another matter: its inputs are
    shared, and `thermfix.uncertainty.shared` treats it.

    References
    ----------
    .. [1] JCGM 100:2008, "Guide to the expression of uncertainty in measurement", eqs. (10) and (16).

    Examples
    --------
    >>> combine([3.0, 4.0], [1.0, 1.0]).item()
    5.0
    >>> combine([3.0, 4.0], [1.0, 1.0], [[1, 1], [1, 1]]).item()
    7.0
    """
    c = np.asarray(sensitivities, dtype=np.float64)
    spread = checked_u(u)
    if c.ndim == 0 or spread.ndim == 0 or c.shape[-1] != spread.shape[-1]:
        raise InputError(f"Sensitivities of shape {c.shape} do not fit uncertainties of shape {spread.shape}.")
    parts = c * spread
    if correlation is None:
        return _root(np.square(parts).sum(axis=-1))
    r = checked_correlation(correlation, spread.shape[-1])
    # Contributions that cancel exactly may leave a rounding residue just below zero.
    return _root(np.maximum(np.einsum("...i,ij,...j->...", parts, r, parts), 0.0))


def covariance_of_outputs(jacobian: ArrayLike, covariance: ArrayLike) -> Array:
    r"""Return the covariance matrix of several outputs of the same inputs.

    Parameters
    ----------
    jacobian : array_like, shape (m, n)
        Partial derivatives of m outputs with respect to n inputs.
    covariance : array_like, shape (n, n)
        Covariance matrix of the inputs.

    Returns
    -------
    ndarray, shape (m, m)
        :math:`J\,V\,J^T`.

    Raises
    ------
    InputError
        If the shapes do not fit.

    References
    ----------
    .. [1] JCGM 102:2011, "Extension to any number of output quantities", 6.2; JCGM 100:2008, H.2.3.

    Examples
    --------
    >>> covariance_of_outputs([[1, 1], [1, -1]], [[4, 0], [0, 1]]).tolist()
    [[5.0, 3.0], [3.0, 5.0]]
    """
    j = np.asarray(jacobian, dtype=np.float64)
    v = np.asarray(covariance, dtype=np.float64)
    if j.ndim != 2 or v.shape != (j.shape[1], j.shape[1]):
        raise InputError(f"A Jacobian of shape {j.shape} does not fit a covariance of shape {v.shape}.")
    result: Array = j @ v @ j.T
    return result


def covariance_of_inputs(u: ArrayLike, correlation: ArrayLike | None = None) -> Array:
    """Return the covariance matrix, shape (n, n), of inputs with standard uncertainties u, shape (n,).

    Raises
    ------
    InputError
        If u is not one-dimensional or ``correlation`` is no correlation matrix.
    OutOfRange
        If any u is negative or not finite.
    """
    spread = checked_u(u)
    if spread.ndim != 1:
        raise InputError(f"Uncertainties must be one row of numbers, not of shape {spread.shape}.")
    r = np.eye(spread.size) if correlation is None else checked_correlation(correlation, spread.size)
    return np.outer(spread, spread) * r


def split_covariance(covariance: ArrayLike) -> tuple[Array, Array]:
    """Return standard uncertainties, shape (n,), and the correlation matrix, shape (n, n), of a covariance matrix.

    The correlation with a quantity of zero variance is 0.

    Raises
    ------
    InputError
        If the matrix is not square or a variance is negative.
    """
    v = np.asarray(covariance, dtype=np.float64)
    if v.ndim != 2 or v.shape[0] != v.shape[1] or not (np.diag(v) >= 0).all():
        raise InputError("A covariance matrix must be square, with no negative variance.")
    u = np.sqrt(np.diag(v))
    scale = np.outer(u, u)
    r = np.divide(v, scale, out=np.zeros_like(v), where=scale > 0)
    np.fill_diagonal(r, 1.0)
    return u, r


def correlation_matrix(names: Sequence[str], pairs: Mapping[tuple[str, str], float]) -> Array:
    """Return the correlation matrix, shape (n, n), of named inputs from the pairs that are correlated.

    Parameters
    ----------
    names : sequence of str, length n
        Names of the inputs, all different.
    pairs : mapping of (name, name) to float
        Correlation coefficients, −1 to 1; pairs that are not named are independent.

    Raises
    ------
    InputError
        If a name is unknown or repeated, a pair is named twice, or the coefficients contradict each other.
    OutOfRange
        If a coefficient is outside −1 to 1.
    """
    place = {name: index for index, name in enumerate(names)}
    if len(place) != len(names):
        raise InputError("Two inputs have the same name.", hint="Name each input once.")
    r = np.eye(len(names))
    seen: set[frozenset[str]] = set()
    for (first, second), value in pairs.items():
        if first not in place or second not in place or first == second:
            raise InputError(f"A correlation is given between {first} and {second}, which are not two of the inputs.")
        if frozenset((first, second)) in seen:
            raise InputError(f"The correlation between {first} and {second} is given twice.")
        seen.add(frozenset((first, second)))
        if not -1 <= value <= 1:
            raise OutOfRange.of(f"the correlation between {first} and {second}", value, -1, 1)
        r[place[first], place[second]] = r[place[second], place[first]] = value
    return checked_correlation(r, len(names))


def checked_correlation(correlation: ArrayLike, n: int) -> Array:
    """Return the matrix as float64, or raise ``InputError`` unless it is a correlation matrix of n quantities.

    That is: shape (n, n), symmetric, ones on the diagonal, no eigenvalue below zero (within rounding).
    """
    r = np.asarray(correlation, dtype=np.float64)
    if r.shape != (n, n):
        raise InputError(f"The correlation matrix has shape {r.shape}; {n} inputs need ({n}, {n}).")
    if (
        not np.isfinite(r).all()
        or not np.allclose(r, r.T, atol=_ROUNDING)
        or (np.abs(np.diag(r) - 1) > _ROUNDING).any()
    ):
        raise InputError("A correlation matrix must be finite and symmetric, with ones on its diagonal.")
    if (np.linalg.eigvalsh(r) < -_ROUNDING * n).any():
        raise InputError(
            "The correlation coefficients contradict each other (the matrix has a negative eigenvalue).",
            hint="Lower the largest coefficients, or give more digits of them.",
        )
    return r


def checked_u(u: ArrayLike) -> Array:
    """Return standard uncertainties as float64, or raise ``OutOfRange`` if one is negative or not finite."""
    values = np.asarray(u, dtype=np.float64)
    bad = ~(np.isfinite(values) & (values >= 0))
    if bad.any():
        raise OutOfRange.of("a standard uncertainty", float(values[bad].flat[0]), 0, float("inf"), "input unit")
    return values


def _root(variance: ArrayLike) -> Array:
    return np.asarray(np.sqrt(variance), dtype=np.float64)
